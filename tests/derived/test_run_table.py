"""The contact of a run: tables made by small models of their own, with splits, energies and stiffnesses known by hand."""

from __future__ import annotations

import itertools
import json
import re
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import polars as pl
import pytest

from slip.base.errors import Problems
from slip.base.trace import Trace
from slip.base.units import SI, US
from slip.friction.faces import FaceStiffness
from slip.report.figures import svg
from slip.report.run_figure import pressure_figure, run_figure, run_picture
from slip.report.run_lines import bins_entry, bins_text, examined_entry, examined_text
from slip.stiffness.examined import examine
from slip.stiffness.run_found import OPEN, SLIPS, STICK, Examined
from slip.stiffness.run_points import bins_table, over_pressure, per_point, write_points, write_refused
from slip.stiffness.run_table import RunTable, read_run

K, MU, AREA = 8000.0, 0.2, 25.0  # N/mm^3, friction, mm^2 of a point
P = np.array([10.0, 20.0, 30.0, 40.0, 50.0, 60.0])  # MPa: a rigid block on six points
UM = 1e-3
SOURCE, BASIS = "rigid block on springs with Coulomb's law", "derived"
HEAD = "id,step,x[mm],y[mm],area[mm^2],p[MPa],tx[MPa],ty[MPa],gx[um],gy[um]"


class Block:
    """A rigid block on points that spring with k and slip at mu p: the traction is brought back to its bound, the rest is slip."""

    def __init__(self, p: np.ndarray = P, k: np.ndarray | float = K, way: tuple[float, float] = (1.0, 0.0)) -> None:
        self.p, self.k, self.way = p, k, np.array(way)
        self.slip = np.zeros(len(p))
        self.path = np.zeros(len(p))
        self.rows: list[str] = []

    def to(self, motion: float, step: str, kind: str = "total", p: np.ndarray | None = None) -> None:
        """Move the block [mm] and write a step."""
        p = self.p if p is None else p
        t = np.clip(self.k * (motion - self.slip), -MU * p, MU * p)
        fresh = motion - t / self.k
        self.path += np.abs(fresh - self.slip)
        self.slip = fresh
        shown = {"total": np.full(len(p), motion), "slip": self.slip, "path": self.path}[kind]
        self.write(step, p, t, shown)

    def write(self, step: str, p: np.ndarray, t: np.ndarray, g: np.ndarray) -> None:
        for i in range(len(p)):
            (tx, ty), (gx, gy) = self.way * t[i], (np.abs(self.way) if g is self.path else self.way) * g[i] / UM
            self.rows.append(f"{i + 1},{step},{10 * i},0,{AREA},{p[i]:.10g},{tx:.12g},{ty:.12g},{gx:.12g},{gy:.12g}")


def table(tmp_path: Path, rows: list[str], head: str = HEAD, **options: Any) -> RunTable:
    path = tmp_path / "run.csv"
    path.write_text("\n".join([head, *rows]) + "\n", encoding="utf-8")
    return read_run(path, **options)


def look(found: RunTable, motion: str | None = "total", k_t: float | None = K, **options: Any) -> Examined:
    force = float(P.sum() * AREA)
    return examine(found, clamp=options.pop("clamp", (force, force)), friction=MU, k_t=k_t, motion=motion, **options)


def codes(found: Examined) -> list[str]:
    return [note.code for note in found.notes]


# --- one step: split, elastic and true slip -----------------------------------------------------------------------------


def test_stick_and_slip_are_told_apart_by_hand(tmp_path, validate):
    block = Block()
    block.to(0.9 * UM, "")  # k times motion is 7.2 MPa: mu p is 2, 4, 6 below it and 8, 10, 12 above
    found = look(table(tmp_path, [row.replace(",,", ",", 1) for row in block.rows], HEAD.replace("step,", "")))
    assert found.state.tolist() == [[SLIPS] * 3 + [STICK] * 3]
    validate(
        "run-share", "part of the clamp that slips, six points", SOURCE, BASIS, 60 / 210, found.steps.share[0], 1e-12
    )
    assert found.steps.face == ("partial slip",) and found.notes == ()
    by_hand = 0.9 - np.array([2.0, 4.0, 6.0]) / K * 1e3  # um: 0.65, 0.4, 0.15
    assert found.slips.vector[0, 0, :3] / UM == pytest.approx(by_hand, rel=1e-9)
    assert np.abs(found.slips.vector[0, 0, 3:]).max() < 1e-12
    largest = found.slips.largest
    assert largest.value == pytest.approx(0.65 * UM) and found.table.ids[largest.point] == "1"
    assert found.slips.parts == pytest.approx([0.0, 0.65 * UM, 0.65 * UM], abs=1e-12)
    assert found.slips.amplitude is None and found.energy is None
    assert found.own.k == pytest.approx(K) and found.own.low == pytest.approx(K) and found.own.slope is None


def test_regimes_of_the_face(tmp_path):
    block = Block()
    for motion, step in ((0.0, "0"), (0.1 * UM, "1"), (0.9 * UM, "2"), (2.0 * UM, "3")):
        block.to(motion, step)
    block.write("4", np.zeros(6), np.zeros(6), np.full(6, 5 * UM))
    found = look(table(tmp_path, block.rows))
    assert found.steps.face == ("stick", "stick", "partial slip", "gross slip", "open")
    assert found.state[4].tolist() == [OPEN] * 6 and found.overall.tolist() == [SLIPS] * 6
    assert found.worst == 3 and "run-gross-slip" in codes(found)
    assert "run-force" not in codes(found)  # a step in which nothing presses is no wrong clamp
    assert found.slips.largest.value == pytest.approx((2.0 - 0.25) * UM)  # the motion of an open point is no slip


@pytest.mark.parametrize("motion", [0.2, 0.9])
def test_the_runs_own_stiffness(tmp_path, motion):
    block = Block(k=2000.0)
    block.to(motion * UM, "1")
    found = look(table(tmp_path, block.rows))
    assert found.own.k == pytest.approx(2000.0) and found.own.sure
    warned = next(note.text for note in found.notes if note.code == "run-own-stiffness")
    assert "2000" in warned and "8000" in warned and "0.25 times" in warned
    alone = look(table(tmp_path, block.rows), k_t=None)
    assert alone.used == "of the run" and np.abs(alone.slips.vector[0][alone.state == STICK]).max() < 1e-12


def test_a_stiffness_that_follows_the_pressure(tmp_path):
    block = Block(k=150.0 * P)
    block.to(0.5 * UM, "1")  # limit of each point at mu/150 = 1.33 um: all stick
    found = look(table(tmp_path, block.rows), k_t=None)
    assert found.own.slope == pytest.approx((150.0, 150.0, 150.0))
    assert found.steps.face == ("stick",) and found.slips.largest.value < 1e-12


def test_old_slip_does_not_bend_the_stiffness(tmp_path):
    block = Block()
    for step, motion in enumerate((0.9, 0.6, 0.5)):  # after the turn every point sticks, three with slip left
        block.to(motion * UM, str(step))
    found = look(table(tmp_path, block.rows))
    assert found.own.k == pytest.approx(K) and found.state[2].tolist() == [STICK] * 6
    assert found.moved[2].tolist() == [True] * 3 + [False] * 3
    assert "with true slip: they slipped before, or creep" in " ".join(" ".join(examined_text(found, SI)).split())


def test_the_spread_of_the_stiffness_by_hand(tmp_path):
    """Nine points under one traction, 1000 to 9000 N/mm^3: the fifth is the middle, the first and last stand at 10 and 90 %."""

    def own(areas: np.ndarray) -> Any:
        rows = [f"{i},0,{i},0,{areas[i - 1]},60,3,0,{3e3 / (1000 * i):.12g},0" for i in range(1, 10)]
        return look(table(tmp_path, rows), k_t=None).own

    even = own(np.ones(9))
    assert (even.low, even.k, even.high) == pytest.approx((1000, 5000, 9000)) and not even.sure
    assert own(np.array([1, 1, 20, 1, 1, 1, 1, 1, 1])).k == pytest.approx(3000)  # most of the area says so


def test_values_at_the_limit_of_the_spring(tmp_path):
    block = Block()
    block.to(MU * P[0] / K, "1")  # the first point stands exactly at mu p, and has not slipped
    found = look(table(tmp_path, block.rows))
    assert found.at_spring[0].tolist() == [True] + [False] * 5
    assert "no motion but the elastic slip" in " ".join(" ".join(examined_text(found, SI)).split())


def test_tractions_that_hold_back_are_turned(tmp_path):
    block, back = Block(), Block()
    for step, motion in enumerate((0.9, -0.9, 0.9)):
        block.to(motion * UM, str(step))
        back.to(motion * UM, str(step))
    back.rows = [re.sub(r"^((?:[^,]*,){6})([^,]*)", lambda m: f"{m[1]}{-float(m[2])}", row) for row in back.rows]
    found, turned = look(table(tmp_path, block.rows)), look(table(tmp_path, back.rows))
    assert turned.turned and not found.turned and codes(turned)[0] == "run-turned"
    assert turned.slips.vector == pytest.approx(found.slips.vector)


# --- a strip with a closed form -----------------------------------------------------------------------------------------


def strip(load: float, n: int, length: float, EA: float, p: float, width: float) -> tuple[np.ndarray, np.ndarray]:
    """Motion and traction of a bar on a rigid base, pulled at its end: a chain of springs, its slipping points found one by one."""
    h = length / n
    stiff = EA / h
    A = np.diag(np.r_[stiff, np.full(n - 2, 2 * stiff), stiff]) - stiff * (np.eye(n, k=1) + np.eye(n, k=-1))
    force, slipping = np.zeros(n), np.zeros(n, dtype=bool)
    force[-1] = load
    while True:
        B = A + np.diag(np.where(slipping, 0.0, K * h * width))
        u = np.linalg.solve(B, force - np.where(slipping, MU * p * h * width, 0.0))
        more = ~slipping & (K * u > MU * p)
        if not more.any():
            return u, np.where(slipping, MU * p, K * u)
        slipping[np.flatnonzero(more)[-1]] = True


def test_the_slip_length_of_a_strip(tmp_path, validate):
    length, EA, p, width, n = 100.0, 210e3 * 10 * 20.0, 30.0, 20.0, 400
    q, beta = MU * p * width, np.sqrt(K * width / EA)
    a = 30.0  # mm that slip: the load that makes them do so, by the closed form
    load = q * a + q / beta * np.tanh(beta * (length - a))
    u, t = strip(load, n, length, EA, p, width)
    h = length / n
    rows = [f"{i},0,{(i + 0.5) * h},0,{h * width},{p},{t[i]:.12g},0,{u[i] / UM:.12g},0" for i in range(n)]
    found = examine(table(tmp_path, rows), clamp=(6e4, 6e4), friction=MU, k_t=K, motion="total")
    assert found.steps.face == ("partial slip",)
    share = float(found.steps.share[0])
    validate(
        "run-strip",
        "part of a strip that slips, closed form 30 of 100 mm",
        "shear lag",
        BASIS,
        a / length,
        share,
        0.006,
    )
    end = q / K / width + q * a / EA / beta * np.tanh(beta * (length - a)) + q * a**2 / 2 / EA
    true = end - q / K / width
    assert found.slips.largest.value == pytest.approx(
        true, rel=0.02
    )  # the last point stands half a cell inside the end
    assert found.own.k == pytest.approx(K, rel=1e-9) and found.steps.shear[0] == pytest.approx(load)


# --- steps: energy, meaning of the motion, creep, walking, shakedown -------------------------------------------------------


def cycle(block: Block, kind: str, turns: int, motion: float, parts: int = 40) -> None:
    """To +motion, then cycles between both ends, in many steps."""
    way = [motion * i / parts for i in range(parts + 1)]
    for _ in range(turns):
        way += [motion - 2 * motion * i / parts for i in range(1, parts + 1)]
        way += [-motion + 2 * motion * i / parts for i in range(1, parts + 1)]
    for step, value in enumerate(way):
        block.to(value, str(step), kind)


def test_energy_of_a_cycle_by_hand(tmp_path, validate):
    block, motion = Block(), 1.0 * UM
    cycle(block, "total", 2, motion)
    found = look(table(tmp_path, block.rows))
    limit = MU * P
    by_hand = float((4 * limit * AREA * np.maximum(motion - limit / K, 0)).sum())
    (first, second), cycles = found.cycles.energy, found.cycles
    validate("run-energy", "energy per cycle of six points, mJ", SOURCE, BASIS, by_hand, second, 0.02 * by_hand)
    assert first == pytest.approx(second) and cycles.verdict == "comes back" and len(cycles.turns) == 3
    points = (limit * AREA * 4 * np.maximum(motion - limit / K, 0))[:3]
    assert found.energy[cycles.turns[1] :].sum(axis=0)[:3] == pytest.approx(points, rel=0.04)
    assert cycles.energy_at_limit == pytest.approx((by_hand, by_hand), rel=1e-9)
    slip = float(motion - limit[0] / K)
    assert found.slips.amplitude.value == pytest.approx(slip, rel=1e-9)
    assert found.slips.path.value == pytest.approx(4 * slip, rel=1e-9)
    assert found.slips.span == cycles.turns[-2:]


def test_coarse_steps_are_said(tmp_path):
    block = Block()
    for step, motion in enumerate((1.0, -1.0, 1.0)):
        block.to(motion * UM, str(step))
    found = look(table(tmp_path, block.rows))
    limit = MU * P
    by_hand = float((4 * limit * AREA * np.maximum(UM - limit / K, 0)).sum())
    assert found.energy_at_limit.sum() == pytest.approx(by_hand)
    assert found.energy.sum() == pytest.approx(0.0, abs=1e-9) and "run-steps-coarse" in codes(found)


def test_total_slip_and_path_are_one_true_slip(tmp_path):
    found = {}
    for kind in ("total", "slip", "path"):
        block = Block(way=(0.6, -0.8))
        cycle(block, kind, 1, 1.0 * UM)
        found[kind] = look(table(tmp_path, block.rows), motion=kind)
    for kind in ("slip", "path"):
        assert found[kind].slips.vector == pytest.approx(found["total"].slips.vector, abs=1e-10)
        assert found[kind].cycles.energy == pytest.approx(found["total"].cycles.energy, rel=1e-6)
    assert "run-path-direction" in codes(found["path"]) and codes(found["total"]) == codes(found["slip"]) == []


def test_slip_that_is_total_is_said(tmp_path):
    block = Block()
    block.to(0.5 * UM, "1")
    said = codes(look(table(tmp_path, block.rows), motion="slip"))
    assert said == ["run-motion-elastic"]


def test_creep_is_said(tmp_path):
    block = Block()
    for step in range(3):  # half of gross slip, held: the motion goes on while traction is unchanged
        block.write(str(step), P, 0.5 * MU * P, 0.5 * MU * P / K + step * 0.3 * UM)
    found = look(table(tmp_path, block.rows))
    (hold,) = found.holds
    assert hold.creeps and hold.motion == pytest.approx(0.6 * UM) and hold.traction == 0
    assert "run-creep" in codes(found) and found.cycles is None
    assert any(line.startswith("load held") and "creep" in line for line in examined_text(found, SI))


def test_a_held_load_that_finds_new_tractions_is_no_creep(tmp_path):
    block = Block()
    shift = np.array([1.0, -1.0, 0.0, 0.0, -1.0, 1.0])  # no force and no moment: the load stays
    for step in range(2):
        block.write(str(step), P, 0.4 * MU * P + step * 0.5 * shift, 0.4 * MU * P / K + step * 0.3 * UM)
    (hold,) = look(table(tmp_path, block.rows)).holds
    assert not hold.creeps and hold.traction == pytest.approx(0.5) and hold.motion == pytest.approx(0.3 * UM)


def test_an_open_point_does_not_slip(tmp_path):
    rows = [*GOOD, "1,1,0,0,25,-1e-12,0,0,9,0", *(row.replace(",0,", ",1,", 1) for row in GOOD[1:])]
    found = look(table(tmp_path, rows), clamp=(3000.0, 4500.0))
    assert found.table.p.min() == 0 and found.state[1].tolist() == [OPEN, STICK, STICK]
    assert found.slips.amplitude.value < 1e-12 and found.slips.path.value < 1e-12


def test_a_held_load_at_rest(tmp_path):
    block = Block()
    for step in "012":
        block.to(0.9 * UM, step)
    found = look(table(tmp_path, block.rows))
    assert [hold.creeps for hold in found.holds] == [False] and "run-creep" not in codes(found)


def rocking(Q_over: float, cycles: int) -> tuple[list[str], float]:
    """A rigid block on two contacts whose forces change in turn, N0 (1 + - e sin), under a shear that stays.

    By hand: it walks 2 (Q - 2 mu N0 (1 - e))/k a cycle where Q is above 2 mu N0 (1 - e).
    """
    N0, e, stiff = 100.0 * AREA, 0.4, K * AREA
    Q = Q_over * 2 * MU * N0 * (1 - e)
    slip, rows = np.zeros(2), []
    for step, s in enumerate([0.0, *itertools.chain.from_iterable([1.0, 0.0, -1.0, 0.0] for _ in range(cycles))]):
        N = N0 * (1 + e * s * np.array([1, -1]))
        before = slip
        u = (Q / stiff + before.sum()) / 2  # where both stick
        for _ in range(5):
            t = np.clip(stiff * (u - before), -MU * N, MU * N)
            stuck = np.abs(stiff * (u - before)) <= MU * N + 1e-12
            u += (Q - t.sum()) / (stiff * max(int(stuck.sum()), 1))
        t = np.clip(stiff * (u - before), -MU * N, MU * N)
        slip = u - t / stiff
        for i in range(2):
            rows.append(f"c{i},{step},{40 * i},0,{AREA},{N[i] / AREA:.12g},{t[i] / AREA:.12g},0,{u / UM:.12g},0")
    return rows, max(2 * (Q - 2 * MU * N0 * (1 - e)) / stiff, 0.0)


def test_walking_by_hand(tmp_path, validate):
    rows, by_hand = rocking(1.3, 4)
    found = look(table(tmp_path, rows), clamp=(5000.0, 5000.0))
    assert found.cycles.verdict == "walks" and "run-walks" in codes(found)
    net = found.cycles.net[-1]
    validate(
        "run-walk", "walk of a rocking block a cycle, mm", "rigid block on two contacts", BASIS, by_hand, net, 1e-9
    )


def test_shakedown(tmp_path):
    rows, by_hand = rocking(0.9, 4)
    found = look(table(tmp_path, rows), clamp=(5000.0, 5000.0))
    assert by_hand == 0 and found.cycles.verdict == "shakedown" and "run-walks" not in codes(found)


def test_slip_that_fades_settles(tmp_path):
    block = Block()
    slip = 0.0
    for step, (sign, more) in enumerate(((1, 1.0), (-1, 0.0), (1, 0.5), (-1, 0.0), (1, 0.25))):
        slip += more * UM
        block.write(str(step), P, sign * 0.5 * MU * P, np.full(6, slip))
    found = look(table(tmp_path, block.rows), motion="slip")
    assert found.cycles.verdict == "settles" and found.cycles.net == pytest.approx((0.5 * UM, 0.25 * UM))


def test_one_cycle_tells_no_more(tmp_path):
    block = Block()
    cycle(block, "total", 1, 1.0 * UM)
    assert look(table(tmp_path, block.rows)).cycles.verdict == "one cycle"


def test_a_cycle_through_zero_is_whole(tmp_path):
    block = Block()
    for step, motion in enumerate((0.0, 0.2, 0.0, -0.2, 0.0)):
        block.to(motion * UM, str(step))
    found = look(table(tmp_path, block.rows))
    assert found.cycles.turns == (0, 4) and found.cycles.verdict == "shakedown"


# --- how tables are written ---------------------------------------------------------------------------------------------


def test_inches_and_pounds_tell_the_same(tmp_path):
    block = Block()
    cycle(block, "total", 1, 1.0 * UM, parts=8)
    metric = table(tmp_path, block.rows)
    inch, psi = 25.4, 4.4482216152605 / 25.4**2
    rows = []
    for row in block.rows:
        name, step, *cells = row.split(",")
        x, y, area, p, tx, ty, gx, gy = map(float, cells)
        gx, gy = UM * gx, UM * gy
        stresses = ",".join(repr(v / psi) for v in (p, tx, ty))
        rows.append(
            f"{name},{step},{x / inch!r},{y / inch!r},{area / inch**2!r},{stresses},{gx / inch!r},{gy / inch!r}"
        )
    head = "id,step,x[in],y[in],area[in^2],p[psi],tx[psi],ty[psi],gx[in],gy[in]"
    american = table(tmp_path, rows, head)
    for name in ("x", "y", "area", "p", "t", "g"):
        assert getattr(american, name) == pytest.approx(getattr(metric, name), rel=1e-9, abs=1e-15), name
    bare = re.sub(r"\[[^]]*\]", "", head)
    declared = table(tmp_path, rows, bare, units=US)
    assert declared.p == pytest.approx(metric.p, rel=1e-9) and declared.g == pytest.approx(
        metric.g, rel=1e-9, abs=1e-15
    )
    found = look(metric, system=US)
    text = examined_text(found, US)
    assert any("uin" in line for line in text) and any("lbf" in line for line in text)
    assert not any(" mm" in line or "MPa" in line for line in text)


def test_decimal_commas_parquet_and_other_columns(tmp_path):
    block = Block()
    cycle(block, "total", 1, 1.0 * UM, parts=8)
    plain = table(tmp_path, block.rows)
    comma = table(tmp_path, [row.replace(",", ";").replace(".", ",") for row in block.rows], HEAD.replace(",", ";"))
    assert comma.comma and comma.separator == ";" and "decimal comma" in comma.said
    frame = pl.read_csv(tmp_path / "run.csv", separator=";", decimal_comma=True)
    frame.with_columns(remark=pl.lit("a")).write_parquet(tmp_path / "run.parquet")
    parquet = read_run(tmp_path / "run.parquet")
    assert "not used: remark" in parquet.said
    for other in (comma, parquet):
        assert other.steps == plain.steps and other.ids == plain.ids
        assert np.array_equal(other.t, plain.t) and np.array_equal(other.g, plain.g)


def test_steps_go_by_number_else_as_they_come(tmp_path):
    rows = [f"{i},{step},{i},0,1,10,0,0,0,0" for i in range(3) for step in ("10", "9", "2.5")]
    assert table(tmp_path, rows).steps == ("2.5", "9", "10")
    named = [row.replace(",9,", ",hold,") for row in rows]
    assert table(tmp_path, named).steps == ("10", "hold", "2.5")


# --- wrong input ----------------------------------------------------------------------------------------------------------

GOOD = ["1,0,0,0,25,60,2,0,0.25,0", "2,0,10,0,25,60,2,0,0.25,0", "3,0,20,0,25,60,2,0,0.25,0"]


def refused(tmp_path: Path, rows: list[str], head: str = HEAD, **options: Any) -> str:
    with pytest.raises(Problems) as caught:
        table(tmp_path, rows, head, **options)
    assert len(caught.value.errors) == 1
    return str(caught.value)


WRONG: list[tuple[str, Callable[[str], str], tuple[str, ...]]] = [
    ("column missing", lambda h: h.replace("p[MPa],", "press[MPa],"), ("add p", "line 1")),
    ("column misspelt", lambda h: h.replace("area", "aera"), ("add area", "name aera as area")),
    ("unit of another kind", lambda h: h.replace("p[MPa]", "p[mm]"), ("p[mm]", "unit of a pressure", "p[MPa]")),
    ("area as a length", lambda h: h.replace("mm^2", "mm"), ("area[mm]", "unit of an area", "area[mm^2]")),
    ("unit missing", lambda h: h.replace("gx[um]", "gx"), ("unit of a length", "gx[um]")),
    ("unit unknown", lambda h: h.replace("gx[um]", "gx[furlong]"), ("gx[furlong]", "a known unit")),
    ("column twice", lambda h: h.replace("ty[MPa]", "tx[MPa]"), ("two columns tx",)),
    ("two dimensions", lambda h: h.replace("gy[um]", "other"), ("add gy", "writes 0 across")),
]


@pytest.mark.parametrize(("what", "change", "said"), WRONG, ids=[row[0] for row in WRONG])
def test_a_wrong_header_is_one_sentence(tmp_path, what, change, said):
    with pytest.raises(Problems) as caught:
        table(tmp_path, GOOD, change(HEAD))
    text = str(caught.value.errors[0])
    assert all(word in text for word in said), text
    assert text.endswith(".") and "\n" not in text


CELLS = [
    ("text", "2,0,10,0,25,sixty,2,0,0.25,0", 'p is no number: "sixty"'),
    ("empty cell", "2,0,10,0,25,,2,0,0.25,0", "p is empty, which is not zero"),
    ("not a number", "2,0,10,0,25,60,nan,0,0.25,0", "tx is no finite number"),
    ("negative pressure", "2,0,10,0,25,-60,2,0,0.25,0", "p is negative"),
    ("no area", "2,0,10,0,0,60,2,0,0.25,0", "area is not above 0"),
    ("no id", ",0,10,0,25,60,2,0,0.25,0", "no id"),
    ("short row", "2,0,10,0,25", "p is empty"),
    ("long row", "2,0,10,0,25,60,2,0,0.25,0,7", "more cells"),
    ("second row", "1,0,10,0,25,60,2,0,0.25,0", "a second row of this id"),
]


@pytest.mark.parametrize(("what", "row", "reason"), CELLS, ids=[row[0] for row in CELLS])
def test_a_wrong_row_is_set_aside_with_its_line(tmp_path, what, row, reason):
    found = table(tmp_path, [GOOD[0], row, GOOD[2]])
    assert found.ids == ("1", "3") and found.count == 3
    (line,) = found.refused.iter_rows(named=True)
    assert line["line"] == 3 and line["reason"].startswith(reason)
    warned = look(found, clamp=(3000.0, 3000.0)).notes[0]
    assert warned.code == "run-rows-refused" and f"line 3: {reason}" in warned.text and "1 of 3 rows" in warned.text
    assert write_refused(tmp_path / "bad.csv", found) and reason in (tmp_path / "bad.csv").read_text(
        encoding="utf-8"
    ).replace('""', '"')


def test_a_point_without_a_step_is_left_out(tmp_path):
    rows = [*GOOD, *(row.replace(",0,", ",1,", 1) for row in GOOD[:2])]
    found = table(tmp_path, rows)
    assert found.ids == ("1", "2") and found.steps == ("0", "1")
    assert found.refused["line"].to_list() == [4] and found.refused["reason"][0].startswith(
        "this id has no row that can be used at another step"
    )


def test_a_table_without_a_good_row(tmp_path):
    said = refused(tmp_path, [row.replace(",60,", ",-60,") for row in GOOD])
    assert "no row that can be used (line 2: p is negative" in said
    assert "a header and no rows" in refused(tmp_path, [])
    assert "a header and no rows" in refused(tmp_path, ["", ",,,"])


def test_files_that_are_no_table(tmp_path):
    (tmp_path / "empty.csv").write_bytes(b"")
    (tmp_path / "sixteen.csv").write_bytes(HEAD.encode("utf-16"))
    (tmp_path / "broken.parquet").write_bytes(b"PAR1 and no more")
    for name in ("empty.csv", "sixteen.csv", "broken.parquet", "none.csv", "."):
        with pytest.raises(Problems) as caught:
            read_run(tmp_path / name)
        assert len(str(caught.value).splitlines()) == 1
    assert "tabs" in refused(tmp_path, [row.replace(",", "\t") for row in GOOD], HEAD.replace(",", "\t"))


def test_the_motion_must_be_declared(tmp_path):
    found = table(tmp_path, GOOD)
    for motion in (None, "relative"):
        with pytest.raises(Problems, match="expected total, slip or path; declare the motion"):
            look(found, motion=motion)


def test_no_pressure_anywhere(tmp_path):
    found = table(tmp_path, [row.replace(",60,2,", ",0,0,") for row in GOOD])
    with pytest.raises(Problems, match="p is 0 in all rows") as caught:
        look(found)
    assert caught.value.errors[0].code == "no-clamp"


@pytest.mark.parametrize(
    ("value", "warns"), [(1.07, True), (1.055, True), (1.045, False), (0.93, True), (0.955, False)]
)
def test_contact_force_off_the_clamp(tmp_path, value, warns):
    found = table(tmp_path, GOOD)  # 4500 N
    noted = look(found, clamp=(4500 / value, 4500 / value))
    assert ("run-force" in codes(noted)) == warns
    if warns:
        text = next(n.text for n in noted.notes if n.code == "run-force")
        assert "4500 N" in text and f"{4500 / value:.6g} N" in text and f"{abs(value - 1):.1%}" in text
    assert "run-force" not in codes(look(found, clamp=(3000.0, 6000.0)))


def test_friction_of_the_model_that_is_another(tmp_path):
    found = table(tmp_path, [row.replace(",60,2,", ",60,18,") for row in GOOD])
    assert "run-above-limit" in codes(look(found, clamp=(4500.0, 4500.0)))  # 18 MPa on 12


def test_a_path_only_grows(tmp_path):
    block = Block()
    cycle(block, "slip", 1, 1.0 * UM)
    with pytest.raises(Problems, match="a path, which only grows"):
        look(table(tmp_path, block.rows), motion="path")


def test_friction_and_stiffness_above_zero(tmp_path):
    found = table(tmp_path, GOOD)
    with pytest.raises(Problems, match="above 0"):
        look(found, k_t=0.0)


def test_no_stiffness_leaves_true_slip_open(tmp_path):
    rows = [row.replace(",60,2,", ",60,12,") for row in GOOD]  # all at the limit: nothing sticks to tell it
    found = look(table(tmp_path, rows), k_t=None, clamp=(4500.0, 4500.0))
    assert found.slips is None and "run-no-stiffness" in codes(found)
    entry = examined_entry(found, SI)
    assert "true_slip" not in entry and "energy" not in entry and json.dumps(entry, allow_nan=False)
    assert any("not told apart" in line for line in examined_text(found, SI))


# --- stiffness of each point, over pressure, and what is shown ----------------------------------------------------------

LAW = FaceStiffness((100.0, 200.0, 400.0), None, "here", "derived", Trace())


def test_stiffness_of_each_point(tmp_path):
    block = Block()
    block.to(0.9 * UM, "1")
    run = table(tmp_path, [row.replace(",", ";").replace(".", ",") for row in block.rows], HEAD.replace(",", ";"))
    points = per_point(run, LAW, SI)
    assert points.columns == [
        "id",
        "x[mm]",
        "y[mm]",
        "p[MPa]",
        *(f"k_t_{n}[N/mm^3]" for n in ("low", "typical", "high")),
    ]
    assert points["k_t_typical[N/mm^3]"].to_numpy() == pytest.approx(200 * P)
    assert points["k_t_high[N/mm^3]"][2] == pytest.approx(400 * 30)
    write_points(tmp_path / "points.csv", points, run)
    assert (tmp_path / "points.csv").read_text().startswith("id;x[mm];")
    again = pl.read_csv(tmp_path / "points.csv", separator=";", decimal_comma=True, schema_overrides={"id": pl.String})
    assert again["p[MPa]"].cast(float).to_list() == points["p[MPa]"].to_list()
    write_points(tmp_path / "points.parquet", points, run)
    assert pl.read_parquet(tmp_path / "points.parquet").equals(points)
    american = per_point(run, LAW, US)
    lbf, inch = 4.4482216152605, 25.4
    assert american["k_t_low[lbf/in^3]"][0] == pytest.approx(1000 * inch**3 / lbf)
    assert american["x[in]"][1] == pytest.approx(10 / inch)
    for out in ("points.txt", "run.csv"):
        with pytest.raises(Problems):
            write_points(tmp_path / out, points, run)


def test_stiffness_over_pressure(tmp_path):
    block = Block(k=150.0 * P)
    block.to(0.5 * UM, "1")
    found = look(table(tmp_path, block.rows), k_t=None)
    bins = over_pressure(found, LAW, bins=3)  # 0 to 20, 20 to 40, 40 to 60 MPa: two points each
    assert [b.points for b in bins] == [2, 2, 2] and sum(b.share for b in bins) == pytest.approx(1.0)
    assert [b.p for b in bins] == pytest.approx([500 / 30, 2500 / 70, 6100 / 110])
    assert bins[0].law == pytest.approx((100 * 500 / 30, 200 * 500 / 30, 400 * 500 / 30))
    assert (
        bins[2].own[0] == pytest.approx(150 * 50) and bins[2].own[2] == pytest.approx(150 * 60) and bins[2].pairs == 2
    )
    rows = bins_table(bins, SI)
    assert rows.height == 3 and rows["k_t_run_high[N/mm^3]"][2] == pytest.approx(9000)
    assert all(len(line) <= 80 for line in bins_text(bins, SI)) and json.dumps(bins_entry(bins, SI), allow_nan=False)
    assert over_pressure(found, None, bins=3)[0].law is None


def test_what_is_shown(tmp_path):
    block = Block()
    cycle(block, "total", 2, 1.0 * UM)
    found = look(table(tmp_path, block.rows), clamp=(4000.0, 4200.0))
    for system in (SI, US):
        text = examined_text(found, system)
        assert max(map(len, text)) <= 80 and not any("nan" in line for line in text)
        assert json.loads(json.dumps(examined_entry(found, system), allow_nan=False))["regime"] == "partial slip"
    assert any(line.startswith("! ") for line in text)
    entry = examined_entry(found, SI)
    assert entry["true_slip"]["value"] == pytest.approx(0.75 * UM) and entry["cycles"]["verdict"] == "comes back"
    assert len(entry["steps"]) == 201 and entry["slipping_share"] == pytest.approx(
        100 / 210
    )  # the fourth stands at mu p


def test_the_map_is_the_same_bytes(tmp_path):
    block = Block()
    block.to(0.9 * UM, "load")
    found = look(table(tmp_path, block.rows))
    first, second = (svg(run_figure(found, SI)) for _ in range(2))
    assert first == second and b"28.6% of the clamp slips" in first and b"true slip in um" in first
    assert b"x in mm" in first and b"<dc:date>" not in first
    picture = run_picture(found, SI)
    assert picture["light"] != picture["dark"] and "3 stick, 3 slips, 0 open" in picture["alt"]
    bins = over_pressure(found, LAW)
    assert b"pressure in psi" in svg(pressure_figure(bins, US))
