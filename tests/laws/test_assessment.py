"""Laws of the whole assessment on random joints: what must not change, what must not get better, what must stay in order."""

from __future__ import annotations

from collections.abc import Callable
from copy import deepcopy
from dataclasses import replace
from random import Random
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from slip import read_text
from slip.assess import Assessment, assess
from slip.base.errors import Problems
from slip.friction.march.limit import limit
from slip.report.machine import result
from slip.verdict.stage import verdict

POUND, INCH = 4.4482216152605, 25.4
Record = dict[str, Any]
PROVEN = 1e-8  # of the gross-slip load, relative
few = settings(max_examples=30, deadline=None)


# --- random joints ---------------------------------------------------------------------------------------------------


def between(low: float, high: float) -> st.SearchStrategy[float]:
    """A thousand steps: values that differ from each other and from zero by what a person would type."""
    return st.integers(0, 1000).map(lambda step: float(f"{low + (high - low) * step / 1000:.6g}"))


class Draw(Random):
    """Draws of one seed: hypothesis chooses the seed, which costs a thousandth of drawing each number by itself."""

    def value(self, low: float, high: float) -> float:
        return float(f"{low + (high - low) * self.randrange(1001) / 1000:.6g}")

    def vector(self, size: float, count: int) -> tuple[float, ...]:
        return tuple(self.choice((0.0, self.value(-size, size), self.value(-size, size))) for _ in range(count))

    def pattern(self) -> list[tuple[float, float]]:
        """Three to six bolts that do not stand in a line."""
        while True:
            points = {(10.0 * self.randint(-20, 20), 10.0 * self.randint(-20, 20)) for _ in range(self.randint(3, 6))}
            arms = np.array(sorted(points)) - np.mean(sorted(points), axis=0)
            second = np.linalg.eigvalsh(arms.T @ arms)
            if len(points) > 2 and second[0] > 1e-2 * second[1]:
                return sorted(points, key=lambda _: self.random())

    def load(self) -> Record:
        case: Record = {"each": self.random() < 0.4, "shear": self.vector(2e4, 2)}
        case["axial"] = self.choice((0.0, self.value(-6e4, 6e4), self.value(-2e4, 2e4)))
        if not case["each"]:
            case["moment"] = tuple(m * k for m, k in zip(self.vector(1.0, 3), (2e6, 2e6, 1e6), strict=True))
            case["at"] = self.choice((None, self.vector(150.0, 3)))
        case["ratio"] = self.choice((None, -1.0, 0.0, self.value(-1, 1)))
        return case

    def joint(self, most_cases: int) -> Record:
        positions = self.pattern()
        return {
            "positions": positions,
            "preload": [self.value(5e3, 8e4) for _ in positions],
            "friction": self.value(0.05, 0.5),
            "faces": self.randint(1, 3),
            "embedding": self.value(0, 4e3),
            "relaxation": self.value(0, 0.1),
            "thermal": self.value(0, 2e3),
            "share": sorted((self.value(0, 0.4), self.value(0, 0.4))),
            "credit": self.random() < 0.5,
            "cases": [self.load() for _ in range(self.randint(1, most_cases))],
        }


def joints(most_cases: int = 6) -> st.SearchStrategy[Record]:
    return st.integers(0, 2**32).map(lambda seed: Draw(seed).joint(most_cases))


def numbers(values: Any) -> str:
    return "[" + ", ".join(repr(float(v)) for v in values) + "]"


def text(j: Record, force: float = 1.0, length: float = 1.0) -> str:
    """The joint file; force and length are the size of the file's units."""
    preload = ", ".join(f"B{i + 1} = {numbers((F / force, 1.5 * F / force))}" for i, F in enumerate(j["preload"]))
    lines = [
        f'format = 1\nunits = "{"N mm" if force == 1 else "lbf in"}"',
        f"[tightening]\npreload = {{ {preload} }}",
        f'[losses]\nembedding = "{j["embedding"]!r} N"\nrelaxation = {j["relaxation"]!r}\nthermal = {j["thermal"] / force!r}',
        f"[interface]\nfriction = {numbers((j['friction'], 1.5))}\nparallel_faces = {j['faces']}",
        f"[pattern]\npositions = [{', '.join(numbers(np.array(p) / length) for p in j['positions'])}]",
        f'[axial]\nmeaning = "external"\nbolt_share = {numbers(j["share"])}\ncredit_compression = {str(j["credit"]).lower()}',
        *j.get("tables", ()),
    ]
    for i, case in enumerate(j["cases"]):
        lines.append(
            f'[[case]]\nname = "{case.get("name", i)}"\nacts_on = "{"each bolt" if case["each"] else "joint"}"'
        )
        lines.append(f"shear = {numbers(np.array(case['shear']) / force)}\naxial = {case['axial'] / force!r}")
        if not case["each"]:
            lines.append(f"moment = {numbers(np.array(case['moment']) / force / length)}")
        if case.get("at") is not None:
            lines.append(f"at = {numbers(np.array(case['at']) / length)}")
        lines.append('kind = "static"' if case["ratio"] is None else f"ratio = {case['ratio']!r}")
    return "\n".join(lines)


def run(j: Record, **units: float) -> Assessment:
    return assess(read_text(text(j, **units)))


def changed(j: Record, change: Callable[[Record], None]) -> Record:
    other = deepcopy(j)
    change(other)
    return other


def scaled(case: Record, factor: float, moments: float = 1.0) -> None:
    """Multiply all components of a case; moments by a further factor."""
    case["shear"] = tuple(factor * v for v in case["shear"])
    case["axial"] *= factor
    if not case["each"]:
        case["moment"] = tuple(factor * moments * m for m in case["moment"])


def factors(a: Assessment) -> list[np.ndarray]:
    """The six factors over states, per bolt over bolts as well: held and growing of bolts, group, force only."""
    s = a.slip
    per_bolt = [s.bolt_safety, s.bolt_load_factor]
    return [*per_bolt, s.group.factor, s.group_load_factor, s.force_safety, s.force_load_factor]


def near(left: Any, right: Any, rel: float, size: float = 0.0) -> bool:
    """Whether arrays are alike within a relative tolerance, infinite where the other is; size: of what rounds away."""
    left, right = np.asarray(left, dtype=float), np.asarray(right, dtype=float)
    both = np.isinf(left) & np.isinf(right)
    return bool((both | np.isclose(left, right, rtol=rel, atol=rel * size)).all())


def same(left: Assessment, right: Assessment, rel: float = PROVEN) -> None:
    """Same ledger, factors and verdicts, but for rounding."""
    size = float(left.clamp.assembly.high.max())
    for name in ("clamp_low", "clamp_high", "relief", "bolt_force_high"):
        assert near(getattr(left.clamp.ledger, name), getattr(right.clamp.ledger, name), rel, size), name
    if (left.clamp.ledger.open != right.clamp.ledger.open).any():  # on the very edge of opening
        return
    for ours, theirs in zip(factors(left), factors(right), strict=True):
        assert near(
            np.minimum(ours, 1e6), np.minimum(theirs, 1e6), 1e-6 if (left.clamp.ledger.clamp_low < 1).any() else rel
        )
    for ours, theirs in zip(left.verdict.checks, right.verdict.checks, strict=True):
        assert (ours.check, ours.case, ours.end) == (theirs.check, theirs.case, theirs.end)
        assert (ours.reason == "no shear") == (theirs.reason == "no shear")


# --- never better ----------------------------------------------------------------------------------------------------


def never_lower(before: Assessment, after: Assessment) -> None:
    for left, right in zip(factors(before), factors(after), strict=True):
        assert (right >= left * (1 - PROVEN)).all()


@few
@given(joints(), st.integers(0, 5), between(1, 2))
def test_more_preload_never_lowers_a_factor(j: Record, bolt: int, more: float) -> None:
    """Of all bolts, and of a single one."""
    before = run(j)
    never_lower(before, run({**j, "preload": [F * more for F in j["preload"]]}))
    one = [F * (more if i == bolt % len(j["preload"]) else 1) for i, F in enumerate(j["preload"])]
    never_lower(before, run({**j, "preload": one}))


@few
@given(joints(), between(1, 2))
def test_more_friction_never_lowers_a_factor(j: Record, more: float) -> None:
    never_lower(run(j), run({**j, "friction": j["friction"] * more}))


@few
@given(joints(), between(0.05, 1))
def test_less_of_the_whole_case_never_lowers_a_factor(j: Record, less: float) -> None:
    """And the load factor grows by just what the load has shrunk, where no bolt was open."""

    def shrink(j: Record) -> None:
        for case in j["cases"]:
            scaled(case, less)

    before, after = run(j), run(changed(j, shrink))
    never_lower(before, after)
    closed = ~before.clamp.ledger.open
    grown = np.where(closed, after.slip.bolt_load_factor * less, 0)
    assert near(np.minimum(grown, 1e9), np.minimum(np.where(closed, before.slip.bolt_load_factor, 0), 1e9), 1e-9)
    all_closed = closed.all(axis=1)
    group = after.slip.group_load_factor * less
    assert near(group[all_closed], before.slip.group_load_factor[all_closed], PROVEN)


@few
@given(joints(), between(0, 3e4))
def test_more_loss_and_more_tension_never_raise_a_factor(j: Record, more: float) -> None:
    before = run(j)
    never_lower(run({**j, "thermal": j["thermal"] + more}), before)

    def pull(j: Record) -> None:
        for case in j["cases"]:
            case["axial"] += more

    static = changed(j, lambda j: [case.update(ratio=None) for case in j["cases"]])  # type: ignore[arg-type, return-value]
    if not any(case.get("at") for case in j["cases"]):  # at the centroid, where it pulls on every bolt
        never_lower(run(changed(static, pull)), run(static))


# --- in order --------------------------------------------------------------------------------------------------------


@settings(max_examples=60, deadline=None)
@given(joints())
def test_per_bolt_group_force_only(j: Record) -> None:
    """In every state with shear, and in every check as reported; equal preloads or not, bolts open or not."""
    a = run(j)
    bolts_held, bolts_growing, *others = (array[a.slip.sliding] for array in factors(a))
    for bolts, group, force in ((bolts_held, *others[0::2]), (bolts_growing, *others[1::2])):
        assert (bolts.min(axis=1, initial=np.inf) <= group * (1 + PROVEN)).all()
        assert (group <= force * (1 + PROVEN)).all()
    for end in a.verdict.ends:
        checks = {check.check: check for check in end.checks}
        per_bolt, group, force = (checks[f"gross_slip.{name}"] for name in ("per_bolt", "group", "force_only"))
        for one, two in ((per_bolt, group), (group, force)):
            assert one.safety <= two.safety * (1 + PROVEN) and one.load_factor <= two.load_factor * (1 + PROVEN)


@few
@given(joints())
def test_all_loads_growing_is_never_better_than_a_held_clamp_that_tension_relieved(j: Record) -> None:
    """Above 1 the held factor keeps the clamp of the given load, below 1 it has lost it already: both meet at 1."""
    j = {**j, "credit": False}
    a = run(j)
    for held, growing in (
        (a.slip.bolt_safety, a.slip.bolt_load_factor),
        (a.slip.group.factor, a.slip.group_load_factor),
    ):
        assert (growing[held >= 1] <= held[held >= 1] * (1 + PROVEN)).all()
        assert (growing[held >= 1] >= 1 - PROVEN).all()
        assert (growing[held < 1 - PROVEN] <= 1).all()


@few
@given(joints())
def test_open_bolts(j: Record) -> None:
    """Factor 0 per bolt, no friction in the group and the force alone, and a separation that fails."""

    def pull(j: Record) -> None:
        for case in j["cases"]:
            case["axial"] = abs(case["axial"]) + 0.6 * len(j["preload"]) ** (not case["each"]) * min(j["preload"])

    a = run(changed(j, pull))
    ledger = a.clamp.ledger
    assume(ledger.open.any())
    assert (a.slip.bolt_safety[ledger.open] == 0).all() and (a.slip.bolt_load_factor[ledger.open] == 0).all()
    mu = j["friction"] * j["faces"]
    for state in range(len(ledger.open)):
        load, closed = a.clamp.states.load[state], ~ledger.open[state]
        if not load.any():
            continue
        if closed.any():
            alone = limit(mu * ledger.clamp_low[state][closed], a.joint.pattern.arms[closed], load).factor
            assert near(np.minimum(a.slip.group.factor[state], 1e9), np.minimum(alone, 1e9), PROVEN)
        else:
            assert a.slip.group.factor[state] == a.slip.group_load_factor[state] == 0
        force = np.hypot(*load[:2])
        if force > 0:
            assert near(a.slip.force_safety[state], mu * ledger.clamp_low[state][closed].sum() / force, 1e-12)
    for end in a.verdict.ends:
        rows = (a.clamp.states.case == end.case) & (np.array(a.clamp.states.end) == end.end)
        if ledger.open[rows].any():
            separation = [c for c in end.checks if c.check == "separation"]
            assert separation and not separation[0].holds
            assert not a.holds and a.verdict.exit_code == 1


# --- the same --------------------------------------------------------------------------------------------------------


@few
@given(joints(), between(0.01, 100))
def test_forces_all_scaled(j: Record, k: float) -> None:
    """(P, Q) -> (kP, kQ): the same factors."""

    def grow(j: Record) -> None:
        j["preload"] = [k * F for F in j["preload"]]
        j["embedding"], j["thermal"] = k * j["embedding"], k * j["thermal"]
        for case in j["cases"]:
            scaled(case, k)

    for left, right in zip(factors(run(j)), factors(run(changed(j, grow))), strict=True):
        assert near(np.minimum(left, 1e6), np.minimum(right, 1e6), 1e-6)


@few
@given(joints(), between(0.1, 10))
def test_lengths_all_scaled(j: Record, k: float) -> None:
    def grow(j: Record) -> None:
        j["positions"] = [(k * x, k * y) for x, y in j["positions"]]
        for case in j["cases"]:
            scaled(case, 1.0, moments=k)
            if case.get("at") is not None:
                case["at"] = tuple(k * x for x in case["at"])

    same(run(j), run(changed(j, grow)))


def turned(j: Record, matrix: np.ndarray) -> None:
    """Pattern and load under an orthogonal matrix; moments are turned by it and change sign when it mirrors."""
    sign = round(float(np.linalg.det(matrix)))
    j["positions"] = [tuple(matrix @ p) for p in j["positions"]]
    for case in j["cases"]:
        case["shear"] = tuple(matrix @ case["shear"])
        if not case["each"]:
            mx, my, mz = case["moment"]
            case["moment"] = (*(sign * (matrix @ (mx, my))), sign * mz)
        if case.get("at") is not None:
            x, y, z = case["at"]
            case["at"] = (*(matrix @ (x, y)), z)


@few
@given(joints(), between(-180, 180), st.booleans())
def test_pattern_and_load_turned_or_mirrored(j: Record, degrees: float, mirrored: bool) -> None:
    c, s = np.cos(np.radians(degrees)), np.sin(np.radians(degrees))
    matrix = np.array([[c, -s], [s, c]]) @ np.diag([-1.0 if mirrored else 1.0, 1.0])
    same(run(j), run(changed(j, lambda j: turned(j, matrix))))


@few
@given(joints(), st.tuples(between(-500, 500), between(-500, 500)))
def test_pattern_and_load_moved(j: Record, by: tuple[float, float]) -> None:
    def move(j: Record) -> None:
        j["positions"] = [tuple(np.add(p, by)) for p in j["positions"]]
        for case in j["cases"]:
            if case.get("at") is not None:
                case["at"] = (*np.add(case["at"][:2], by), case["at"][2])

    same(run(j), run(changed(j, move)))


@few
@given(joints(), st.randoms(use_true_random=False))
def test_bolts_in_another_order(j: Record, random: Any) -> None:
    """Rows of the ledger follow their bolts."""
    order = list(range(len(j["positions"])))
    random.shuffle(order)
    other = {**j, "positions": [j["positions"][i] for i in order], "preload": [j["preload"][i] for i in order]}
    left, right = run(j), run(other)
    size = float(left.clamp.assembly.high.max())
    for name in ("clamp_low", "relief", "clamp_high"):
        rows = getattr(left.clamp.ledger, name)
        assert near(rows[:, order], getattr(right.clamp.ledger, name), 1e-9, size)
    assert near(left.slip.shear[:, order], right.slip.shear, 1e-9, size)
    if (left.clamp.ledger.open[:, order] == right.clamp.ledger.open).all():
        for ours, theirs in zip(factors(left)[2:], factors(right)[2:], strict=True):
            assert near(np.minimum(ours, 1e6), np.minimum(theirs, 1e6), 1e-6)


@few
@given(joints(most_cases=6))
def test_many_cases_are_each_case_alone(j: Record) -> None:
    """Bit for bit in ledger and per bolt; the group within 1e-10."""
    together, row = run(j), 0
    for i, case in enumerate(j["cases"]):
        alone = run({**j, "cases": [{**case, "name": i}]})
        rows = slice(row, row := row + len(alone.clamp.states.case))
        for name in (
            "clamp_low",
            "clamp_high",
            "relief",
            "clamp_without_axial",
            "bolt_force_high",
            "separation_factor",
        ):
            assert np.array_equal(getattr(together.clamp.ledger, name)[rows], getattr(alone.clamp.ledger, name)), name
        assert np.array_equal(together.slip.shear[rows], alone.slip.shear)
        bolts, others = factors(together), factors(alone)
        for ours, theirs in zip(bolts[:2], others[:2], strict=True):
            assert np.array_equal(ours[rows], theirs)
        for ours, theirs in zip(bolts[2:], others[2:], strict=True):
            assert near(ours[rows], theirs, 1e-10)
    assert row == len(together.clamp.states.case)


@few
@given(joints())
def test_units_in_units_out(j: Record) -> None:
    """The same joint typed in lbf and in: the same factors, and the numbers of its ledger in its units."""
    metric, inches = run(j), run(j, force=POUND, length=INCH)
    same(metric, inches)
    ours, theirs = (result(a) for a in (metric, inches))
    assert (theirs["units"]["force"], theirs["units"]["length"]) == ("lbf", "in")
    for one, two in zip(ours["cases"], theirs["cases"], strict=True):
        for left, right in zip(one["ends"], two["ends"], strict=True):
            for a, b in zip(left["ledger"], right["ledger"], strict=True):
                for key in ("assembly_low", "axial_relief", "clamp_low", "bolt_force_high", "shear"):
                    assert near(a[key], b[key] * POUND, 1e-9, a["assembly_high"]), key
            centre, other = (end["gross_slip"]["group"].get("centre") for end in (left, right))
            if centre and other and np.hypot(*centre) < 1e4 and left["gross_slip"]["group"].get("safety", 0) > 0:
                moved = [limit_at(metric, one["name"], left["end"], c) for c in (centre, np.multiply(other, INCH))]
                assert near(*moved, 1e-6)


def limit_at(a: Assessment, case: str, end: str, centre: Any) -> float:
    """Upper bound of the group's factor when the joint turns about a point: the centre is not unique, its bound is."""
    row = [
        a.joint.cases[i].name == case and e == end for i, e in zip(a.clamp.states.case, a.clamp.states.end, strict=True)
    ]
    state = row.index(True)
    arms = a.joint.pattern.positions - np.asarray(centre)
    (vx, vy, mz), (x, y) = a.clamp.states.load[state], a.joint.pattern.centroid - np.asarray(centre)
    held = a.joint.interface.friction_low * a.joint.interface.parallel_faces * a.clamp.ledger.clamp_low[state]
    return float((held * np.hypot(*arms.T)).sum() / abs(mz + x * vy - y * vx))


@few
@given(joints(), st.integers(0, 4))
def test_an_unloaded_case_changes_nothing(j: Record, where: int) -> None:
    idle: Record = {"each": True, "shear": (0.0, 0.0), "axial": 0.0, "ratio": None, "name": "idle"}
    cases = [{**case, "name": i} for i, case in enumerate(j["cases"])]
    before = run({**j, "cases": cases})
    after = run({**j, "cases": [*cases[:where], idle, *cases[where:]]})
    kept = [end for end in after.verdict.ends if after.joint.cases[end.case].name != "idle"]
    for left, right in zip(before.verdict.ends, kept, strict=True):
        for ours, theirs in zip(left.checks, right.checks, strict=True):
            assert (ours.check, ours.case, ours.end) == (theirs.check, theirs.case, theirs.end)
            assert (ours.bolt, ours.holds, ours.reason) == (theirs.bolt, theirs.holds, theirs.reason)
            assert near(ours.load_factor, theirs.load_factor, 1e-10)
    no_clamp = (before.clamp.assembly.low - before.clamp.assembly.embedding - before.clamp.assembly.relaxation) <= j[
        "thermal"
    ]
    if not no_clamp.any():  # a bolt that is open without any load fails in the idle case as well
        assert (before.holds, before.verdict.exit_code) == (after.holds, after.verdict.exit_code)
        assert before.verdict.governing.check == after.verdict.governing.check


@few
@given(joints())
def test_each_bolt_is_the_joint_load_that_gives_these_shears(j: Record) -> None:
    """Equal forces on all bolts are n times the force at the centroid."""
    n = len(j["positions"])

    def whole(j: Record) -> None:
        for case in j["cases"]:
            scaled(case, n)
            case |= {"each": False, "moment": (0.0, 0.0, 0.0)}

    each = changed(j, lambda j: [case.update(each=True, at=None) for case in j["cases"]])  # type: ignore[arg-type, return-value]
    same(run(each), run(changed(each, whole)))


# --- with springs: plates, washers, outlines ---------------------------------------------------------------------------

MATERIALS = ("steel", "S355", "aluminium", "grey iron", "titanium")


def sprung_joint(seed: int) -> Record:
    """A joint with thread, plates and washers, whose embedding, warming and bolt share come from its springs."""
    d = Draw(seed)

    def plate() -> Record:
        margin = d.choice((None, d.value(12, 80)))
        return {
            "material": d.choice(MATERIALS),
            "thickness": d.value(3, 40),
            "margin": margin,
            "rise": d.value(-40, 60),
        }

    return {
        "positions": [(4 * x, 4 * y) for x, y in d.pattern()],
        "plates": [plate() for _ in range(d.randint(2, 4))],
        "washers": (d.choice((0.0, 2.5, 3.0)), d.choice((0.0, 2.5, 3.0))),
        "rise": d.value(-40, 60),
        "introduction": d.choice((None, d.value(0.1, 1))),
        "shear": d.vector(2e4, 2),
        "axial": d.value(-4e4, 4e4),
        "tilt": d.vector(1e6, 2),
        "tapped": d.random() < 0.5,
    }


def sprung() -> st.SearchStrategy[Record]:
    return st.integers(0, 2**32).map(sprung_joint)


def sprung_text(j: Record) -> str:
    washers = (j["washers"][0], 0.0 if j["tapped"] else j["washers"][1])
    lines = [
        'format = 1\nunits = "N mm"\n[bolt]\nthread = "M12"\ngrade = "10.9"',
        f'washer_thickness = {numbers(washers)}\nfar_end = "{"tapped" if j["tapped"] else "nut"}"',
        "[tightening]\npreload = [50e3, 60e3]",
        f"[losses]\nrelaxation = 0.05\nthermal = {{ bolt = {j['rise']!r}, plates = {numbers(p['rise'] for p in j['plates'])} }}",
        '[interface]\nfriction = [0.2, 0.3]\nroughness = ["Ra 1.6 um", "Rz 12 um"]',
        f"[pattern]\npositions = [{', '.join(numbers(p) for p in j['positions'])}]",
        '[axial]\nmeaning = "external"',
    ]
    if j["introduction"] is not None:
        lines.append(f"load_introduction = {j['introduction']!r}")
    x, y = np.array(j["positions"]).T
    for plate in j["plates"]:
        lines.append(f'[[plate]]\nmaterial = "{plate["material"]}"\nthickness = {plate["thickness"]!r}')
        if plate["margin"] is not None:
            m = plate["margin"]
            lines.append(f"outline = {numbers((x.min() - m, y.min() - m, x.max() + m, y.max() + m))}")
    lines.append('[[case]]\nkind = "static"\nacts_on = "joint"')
    lines.append(f"shear = {numbers(j['shear'])}\naxial = {j['axial']!r}\nmoment = {numbers((*j['tilt'], 3e5))}")
    return "\n".join(lines)


def run_sprung(j: Record) -> Assessment:
    return assess(read_text(sprung_text(j)))


@few
@given(sprung())
def test_plates_of_a_nut_joint_swapped(j: Record) -> None:
    """Plates, rises and washers upside down: nothing changes but the names; the load still acts on the upper plate."""
    j = {**j, "tapped": False}
    left, right = (run_sprung(x) for x in (j, {**j, "plates": j["plates"][::-1], "washers": j["washers"][::-1]}))
    same(left, right)
    for name in ("embedding", "thermal_loss", "thermal_gain", "share_low", "share_high"):
        assert near(getattr(left.clamp.assembly, name), getattr(right.clamp.assembly, name), 1e-9, 1e-6), name
    assert near(left.clamp.ledger.yield_use, right.clamp.ledger.yield_use, 1e-9)
    assert [note.code for note in left.warnings] == [note.code for note in right.warnings]


@few
@given(sprung(), st.integers(1, 3))
def test_quarter_turns_with_outlines(j: Record, quarters: int) -> None:
    matrix = np.rint(np.linalg.matrix_power(np.array([[0, -1], [1, 0]]), quarters))
    other = {**j, "positions": [tuple(matrix @ p) for p in j["positions"]]}
    other |= {"shear": tuple(matrix @ j["shear"]), "tilt": tuple(matrix @ j["tilt"])}
    left, right = run_sprung(j), run_sprung(other)
    assert left.clamp.assembly.springs is not None and right.clamp.assembly.springs is not None
    assert near(left.clamp.assembly.springs.plates, right.clamp.assembly.springs.plates, 1e-12)
    same(left, right)


# --- verdicts --------------------------------------------------------------------------------------------------------

EN = '[[standard]]\nname = "EN 1993-1-8"\ncategory = "C"\nslip_class = "B"'
VDI = '[[standard]]\nname = "VDI 2230"\nto_standard_level = 1'
LIMIT = '[required]\ntrue_slip = "1 um"'
GROUP = '[required]\ndecides = "group"\ndecides_reason = "a trial"'
SHEAR = '[required]\ngrows = "shear"'


@few
@given(joints(), st.sets(st.sampled_from([EN, VDI])), st.sampled_from(["", LIMIT, GROUP, SHEAR]))
def test_the_verdict_follows_from_its_checks(j: Record, standards: set[str], required: str) -> None:
    """holds, exit code and governing check worked out again from the checks of the JSON result."""
    bolt = '[bolt]\nthread = "M16"\ngrade = "10.9"'
    a = run({**j, "tables": [bolt, *([required] if required else []), *sorted(standards)]})
    found = result(a)
    deciding = [c for c in found["checks"] if c["decides"]]
    named = "group" if required == GROUP else "per_bolt"
    for check in found["checks"]:
        kind = check["check"].partition(".")[2] if check["check"].startswith("gross_slip") else named
        assert check["decides"] == (kind == named)
        if "required" in check:
            names = ["safety" if required == SHEAR and check["check"] != "separation" else "load_factor"]
            if a.joint.axial.credit_compression and check["check"] != "separation":
                names = ["safety", "load_factor"]  # the smaller of both, see docs/verdict.md
            factor = min(check.get(name, np.inf) for name in names)
            assert check["holds"] == (factor >= check["required"])
    assert found["holds"] == a.holds == all(c["holds"] for c in deciding)
    unsolved = [c for c in deciding if not c["holds"] and "required" not in c and "reserve_factor" not in c]
    failed = [c for c in deciding if not c["holds"] and c not in unsolved]
    assert a.verdict.exit_code == (1 if failed else 3 if unsolved else 0)
    assert bool(unsolved) == (EN in standards or required == LIMIT)
    reserves = [c.get("reserve_factor", np.inf) for c in failed or deciding]
    assert found["governing"].get("reserve_factor", np.inf) == pytest.approx(min(reserves), rel=1e-8)


@few
@given(
    joints(),
    st.sampled_from(["bolt_safety", "bolt_load_factor", "group_load_factor", "force_load_factor"]),
    st.booleans(),
)
def test_nan_never_passes(j: Record, spoiled: str, group: bool) -> None:
    """A factor that is not a number fails where it decides, whatever stands beside it."""
    tables = [GROUP if group else SHEAR if spoiled == "bolt_safety" else "[required]\nstatic = 1"]
    a = run({**j, "tables": tables})
    array = getattr(a.slip, spoiled).copy()
    array[-1] = np.nan
    judged = verdict(a.joint, a.clamp, a.pressure, replace(a.slip, **{spoiled: array}), a.partial)
    decides = {"bolt_safety": "per_bolt", "bolt_load_factor": "per_bolt", "group_load_factor": "group"}.get(spoiled)
    checks = [c for c in judged.checks if c.check.startswith("gross_slip") and c.reason != "no shear"]
    last = [c for c in checks if c.case == a.joint.cases[-1].name and c.end == a.clamp.states.end[-1]]
    if last and decides == ("group" if group else "per_bolt"):
        assert not judged.holds and judged.exit_code == 1
        assert not [c for c in last if c.check == f"gross_slip.{decides}"][0].holds
    for check in last:
        if check.load_factor is not None and np.isnan(check.load_factor) and spoiled != "bolt_safety":
            assert not check.holds


@given(st.sampled_from(["nan", "inf", "-inf"]), st.data())
@settings(max_examples=60, deadline=None)
def test_a_file_may_not_hold_what_is_no_number(word: str, data: st.DataObject) -> None:
    """Any number of the file replaced by nan or inf is refused."""
    j = data.draw(joints(most_cases=1))
    lines = text(j).splitlines()
    targets = [
        i for i, line in enumerate(lines) if line.startswith(("friction", "shear", "axial", "moment", "at", "thermal"))
    ]
    i = data.draw(st.sampled_from(targets))
    key, _, value = lines[i].partition(" = ")
    parts = value.strip("[]").split(", ")
    parts[data.draw(st.integers(0, len(parts) - 1))] = word
    lines[i] = f"{key} = " + (f"[{', '.join(parts)}]" if "[" in value else parts[0])
    with pytest.raises(Problems):
        read_text("\n".join(lines))
