"""The two load states of the bracket as a table of bolt forces: the right numbers come out, and none of those that a wrong reading gives.

All numbers here are worked out by hand from the joint's data; R is what friction holds at a bolt.
"""

from __future__ import annotations

from math import hypot
from pathlib import Path

import polars as pl
import pytest

from slip.cases.run import check_table

PRELOAD, HIGH, EMBEDDING, THERMAL, SHARE, MU = 78000.0, 125000.0, 4500.0, 3000.0, 0.15, 0.18
JOINT = f"""\
format = 1
units = "N mm"
[bolt]
hole_diameter = 17.5
[tightening]
preload = [{PRELOAD}, {HIGH}]
[losses]
embedding = "{EMBEDDING} N"
relaxation = 0
thermal = "{THERMAL} N"
[interface]
friction = [{MU}, 0.25]
[pattern]
positions = [[-80, -60], [0, -60], [80, -60], [-80, 60], [0, 60], [80, 60]]
[axial]
meaning = "external"
bolt_share = {SHARE}
"""
PLACES = {"B1": (-80, -60), "B2": (0, -60), "B3": (80, -60), "B4": (-80, 60), "B5": (0, 60), "B6": (80, 60)}
JAM, AXIAL = (4200.0, -3100.0), 12500.0  # on B2; the other bolts carry a tenth of it
V, M = 24000.0, 2.0e6  # along y through the centroid, and about the normal
KEPT = PRELOAD - EMBEDDING - THERMAL  # 70 500 N
CLAMP = KEPT - (1 - SHARE) * AXIAL  # 59 875 N
SHEAR = hypot(*JAM)


def reel() -> dict[str, tuple[float, float, float]]:
    """Elastic shares of the second state: V/n and M r / sum r^2."""
    polar = sum(x * x + y * y for x, y in PLACES.values())
    return {name: (-M * y / polar, V / 6 + M * x / polar, 0.0) for name, (x, y) in PLACES.items()}


def jam() -> dict[str, tuple[float, float, float]]:
    part = {name: 1.0 if name == "B2" else 0.1 for name in PLACES}
    return {name: (p * JAM[0], p * JAM[1], p * AXIAL) for name, p in part.items()}


def worked(
    folder: Path, lines: list[str], header: str = "case,bolt,Fx[N],Fy[N],Fax[N],kind", joint: str = JOINT
) -> pl.DataFrame:
    (folder / "joint.toml").write_text(joint, encoding="utf-8")
    (folder / "cases.csv").write_text("\n".join([header, *lines]) + "\n", encoding="utf-8")
    found = check_table(folder / "joint.toml", folder / "cases.csv", folder / "out.csv")
    assert found.summary.refused == 0
    return pl.read_csv(folder / "out.csv")


def rows(case: str, forces: dict[str, tuple[float, float, float]], kind: str = "static") -> list[str]:
    return [f"{case},{bolt},{fx!r},{fy!r},{fax!r},{kind}" for bolt, (fx, fy, fax) in forces.items()]


def value(frame: pl.DataFrame, case: str, bolt: str, column: str) -> float:
    (found,) = frame.filter((pl.col("case") == case) & (pl.col("bolt") == bolt))[column].to_list()
    return float(found)


@pytest.fixture
def table(tmp_path: Path) -> pl.DataFrame:
    return worked(tmp_path, rows("jam", jam()) + rows("reel", reel()))


def test_the_right_numbers(table: pl.DataFrame) -> None:
    """The digits of the worked example: 59 875 N, 2.06 and 1.779; 1.6238 on B3 and B6, group 2.1300, force only 3.1725."""
    assert value(table, "jam", "B2", "clamp_low[N]") == pytest.approx(59875.0)
    assert value(table, "jam", "B2", "safety") == pytest.approx(2.06, abs=0.005)
    assert value(table, "jam", "B2", "load_factor") == pytest.approx(1.779, abs=0.0005)
    for bolt in ("B3", "B6"):
        assert value(table, "reel", bolt, "shear[N]") == pytest.approx(7814.9, abs=0.05)
        assert value(table, "reel", bolt, "load_factor") == pytest.approx(1.6238, abs=0.00005)
    assert value(table, "reel", "B1", "shear[N]") == pytest.approx(2614.6, abs=0.05)
    assert value(table, "reel", "group", "load_factor") == pytest.approx(2.1300, abs=0.00005)
    assert value(table, "reel", "force only", "load_factor") == pytest.approx(3.1725, abs=0.00005)


SAFETIES = {
    "components apart": MU * CLAMP / abs(JAM[0]),
    "components added": MU * CLAMP / (abs(JAM[0]) + abs(JAM[1])),
    "the axial force in the shear": MU * CLAMP / hypot(SHEAR, AXIAL),
    "axial force not counted": MU * KEPT / SHEAR,
    "all of the axial force off the clamp": MU * (KEPT - AXIAL) / SHEAR,
    "the bolt's share off the clamp": MU * (KEPT - SHARE * AXIAL) / SHEAR,
    "pressed and not pulled": MU * (KEPT + (1 - SHARE) * AXIAL) / SHEAR,
    "a change of bolt force": MU * (KEPT - (1 - SHARE) * AXIAL / SHARE) / SHEAR,
    "no losses": MU * (PRELOAD - (1 - SHARE) * AXIAL) / SHEAR,
    "highest preload": MU * (HIGH - EMBEDDING - THERMAL - (1 - SHARE) * AXIAL) / SHEAR,
    "mean preload": MU * ((PRELOAD + HIGH) / 2 - EMBEDDING - THERMAL - (1 - SHARE) * AXIAL) / SHEAR,
    "highest friction": 0.25 * CLAMP / SHEAR,
    "two faces": 2 * MU * CLAMP / SHEAR,
    "largest of each component over both states": MU * CLAMP / hypot(JAM[0], max(fy for _, fy, _ in reel().values())),
}


@pytest.mark.parametrize("wrong", SAFETIES.values(), ids=SAFETIES)
def test_safety_of_the_pulled_bolt(table: pl.DataFrame, wrong: float) -> None:
    found = value(table, "jam", "B2", "safety")
    assert found == pytest.approx(MU * CLAMP / SHEAR, rel=1e-12)
    assert abs(found - wrong) > 0.005 * found


GROUPS = {
    "moment left out": 6 * MU * KEPT / V,
    "the worst bolt": MU * KEPT / 7814.9,
    "even shares of the force": MU * KEPT / (V / 6),
    "capacities over the sum of the shears": 6 * MU * KEPT / sum(hypot(fx, fy) for fx, fy, _ in reel().values()),
    "square root of force and moment apart": 1 / hypot(V / (6 * MU * KEPT), M / (MU * KEPT * (4 * 100 + 2 * 60))),
}


@pytest.mark.parametrize("wrong", GROUPS.values(), ids=GROUPS)
def test_group_of_the_turned_bracket(table: pl.DataFrame, wrong: float) -> None:
    found = value(table, "reel", "group", "safety")
    assert found == pytest.approx(2.1300, abs=0.00005) and abs(found - wrong) > 0.005 * found


def test_the_whole_load_grows_with_its_axial_part(table: pl.DataFrame) -> None:
    found = value(table, "jam", "B2", "reserve_factor")
    right = MU * KEPT / (SHEAR + MU * (1 - SHARE) * AXIAL) / 1.2
    assert found == pytest.approx(right, rel=1e-12) and abs(found - MU * CLAMP / SHEAR / 1.2) > 0.1


def test_rows_belong_to_bolts_by_name(tmp_path: Path, table: pl.DataFrame) -> None:
    """Not by their order: bolts listed backwards, cases in each other."""
    lines = [line for pair in zip(rows("jam", jam())[::-1], rows("reel", reel()), strict=True) for line in pair]
    assert worked(tmp_path, lines).sort("case", maintain_order=True).equals(table.sort("case", maintain_order=True))


def test_units_stand_in_the_header(tmp_path: Path, table: pl.DataFrame) -> None:
    """Kilonewtons and pounds-force are the same forces; a bare number is never guessed."""
    for unit, newtons in (("kN", 1e3), ("lbf", 4.4482216152605)):
        scaled = [
            f"{case},{bolt},{fx / newtons!r},{fy / newtons!r},{fax / newtons!r},static"
            for case, forces in (("jam", jam()), ("reel", reel()))
            for bolt, (fx, fy, fax) in forces.items()
        ]
        found = worked(tmp_path, scaled, f"case,bolt,Fx[{unit}],Fy [{unit}],Fax ({unit}),kind")
        assert found["load_factor"].to_list() == pytest.approx(table["load_factor"].to_list(), rel=1e-12)


def test_axes_of_the_model(tmp_path: Path, table: pl.DataFrame) -> None:
    """The model's Y is the bolts' axis: x = X, y = -Z. Taking X and Y as they come leaves out a component."""
    lines = [
        f"{case},{bolt},{fx!r},{1e5},{-fy!r},{fax!r},static"
        for case, forces in (("jam", jam()), ("reel", reel()))
        for bolt, (fx, fy, fax) in forces.items()
    ]
    keys = '[table]\naxes = { x = "X", y = "-Z", normal = "Y" }\n'
    found = worked(tmp_path, lines, "case,bolt,Fx[N],Fy[N],Fz[N],Fax[N],kind", JOINT + keys)
    assert found["load_factor"].to_list() == table["load_factor"].to_list()


def test_what_the_axial_force_is(tmp_path: Path) -> None:
    """The same loads told as a change of the bolt's force, as a bolt force that holds the preload, as contact forces."""
    model = "model_bolt_share = 0.2\nmodel_preload = 90000\n"
    ends = [
        (bolt, fx, fy, fax, end, sign)
        for bolt, (fx, fy, fax) in jam().items()
        for end, sign in (("given", 1), ("other", 0))
    ]
    wanted = MU * CLAMP / SHEAR
    change = [f"jam,{bolt},{fx!r},{fy!r},{0.2 * fax!r},static" for bolt, (fx, fy, fax) in jam().items()]
    joint = JOINT.replace('"external"', '"bolt force change"') + model
    assert value(worked(tmp_path, change, joint=joint), "jam", "B2", "safety") == pytest.approx(wanted)
    held = [
        f"jam,{b},{sign * fx!r},{sign * fy!r},{90000 + 0.2 * sign * fax!r},{end}" for b, fx, fy, fax, end, sign in ends
    ]
    held_joint = JOINT.replace('"external"', '"bolt force"') + model
    found = worked(tmp_path, held, "case,bolt,Fx[N],Fy[N],Fax[N],end", held_joint)
    assert value(found, "jam", "B2", "safety") == pytest.approx(wanted)
    contact = [
        f"jam,{bolt},{fx!r},{fy!r},{90000 - (1 - SHARE) * fax!r},static" for bolt, (fx, fy, fax) in jam().items()
    ]
    found = worked(tmp_path, contact, "case,bolt,Fx[N],Fy[N],Fclamp[N],kind", JOINT + model)
    assert value(found, "jam", "B2", "safety") == pytest.approx(wanted)
    assert value(found, "jam", "B2", "load_factor") == pytest.approx(MU * KEPT / (SHEAR + MU * (1 - SHARE) * AXIAL))


def test_both_ends_count(tmp_path: Path) -> None:
    """Alternating with the axial force of the other sign: the end that pulls is the worse one, whichever is given."""
    pushed = {bolt: (-fx, -fy, -fax) for bolt, (fx, fy, fax) in jam().items()}
    found = worked(tmp_path, rows("a", jam(), "alternating") + rows("b", pushed, "alternating"))
    for case, end in (("a", "given"), ("b", "other")):
        row = found.filter((pl.col("case") == case) & (pl.col("bolt") == "B2")).row(0, named=True)
        assert (row["end"], row["clamp_low[N]"], row["required"]) == (end, pytest.approx(CLAMP), 1.8)


def test_an_open_bolt_is_zero_and_helps_nobody(tmp_path: Path) -> None:
    """Pulled beyond its clamp: its own factor is 0, the group counts five bolts, separation fails the case."""
    torn = jam() | {"B2": (100.0, 0.0, KEPT / (1 - SHARE) * 1.01)}
    found = worked(tmp_path, rows("torn", torn))
    row = found.filter(pl.col("bolt") == "B2").row(0, named=True)
    assert (row["clamp_low[N]"], row["safety"], row["load_factor"], row["open"], row["holds"]) == (0, 0, 0, True, False)
    assert row["separation_factor"] == pytest.approx(1 / 1.01) and not row["case_holds"]
    five = sum(MU * (KEPT - (1 - SHARE) * 0.1 * AXIAL) for _ in range(5))
    force = hypot(*(sum(f[axis] for f in torn.values()) for axis in (0, 1)))
    assert value(found, "torn", "force only", "safety") == pytest.approx(five / force)
