"""A table of load cases gives what a joint file with the same cases gives: ledger and bolts bit for bit, the group within 1e-10."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import polars as pl
import pytest

from slip import read_text
from slip.assess import Assessment, assess
from slip.cases.run import TableResult, check_table
from slip.cases.single import assess_cases
from slip.read.build import read
from slip.verdict.stage import HOLDS

SIX = "[[-80, -60], [0, -60], [80, -60], [-80, 60], [0, 60], [80, 60]]"
ONE = "[[0, 0]]"


def joint_file(positions: str = SIX, axial: str = "bolt_share = 0.15", more: str = "") -> str:
    return f"""\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
[tightening]
preload = [78000, 95000]
[losses]
embedding = "4500 N"
relaxation = "5 %"
thermal = "3000 N"
[interface]
friction = [0.18, 0.25]
roughness = ["Ra 1.6 um", "Ra 1.6 um"]
[[plate]]
material = "steel"
thickness = 20
outline = [-200, -150, 200, 150]
[[plate]]
material = "grey iron"
thickness = 30
outline = [-200, -150, 200, 150]
[pattern]
positions = {positions}
[axial]
meaning = "external"
{axial}
{more}
"""


def table(path: Path, columns: dict[str, Any]) -> Path:
    pl.DataFrame(columns).write_csv(path)
    return path


def worked(tmp_path: Path, file: str, columns: dict[str, Any], **options: Any) -> tuple[TableResult, pl.DataFrame]:
    (tmp_path / "joint.toml").write_text(file, encoding="utf-8")
    source = table(tmp_path / "cases.csv", columns)
    found = check_table(tmp_path / "joint.toml", source, tmp_path / "out.csv", **options)
    return found, pl.read_csv(tmp_path / "out.csv")


def case_text(i: int, v: np.ndarray, kind: str, ratio: float | None, each: bool = False) -> str:
    """A [[case]] with the digits that the table has."""
    numbers = [repr(float(x)) for x in v]
    moment = "" if each else f"moment = [{numbers[3]}, {numbers[4]}, {numbers[5]}]\n"
    end = "" if ratio is None else f"ratio = {ratio!r}\n"
    return (
        f'[[case]]\nname = "c{i}"\nacts_on = "{"each bolt" if each else "joint"}"\nshear = [{numbers[0]}, {numbers[1]}]\n'
        f'axial = {numbers[2]}\n{moment}kind = "{kind}"\n{end}'
    )


def assert_same(found: pl.DataFrame, single: Assessment, summary: TableResult) -> None:
    """Every row of the result is the one of the full assessment."""
    ledger, slip, verdict, names = single.clamp.ledger, single.slip, single.verdict, single.joint.pattern.names
    for i, case in enumerate(single.joint.cases):
        rows = found.filter(pl.col("case") == case.name)
        assert rows["bolt"].to_list() == [*names, "group", "force only"]
        ends = {end.end: end for end in verdict.ends if end.case == i}
        for b, name in enumerate(names):
            row = rows.filter(pl.col("bolt") == name).row(0, named=True)
            s = ends[row["end"]].bolt_states[b]
            sliding = slip.sliding[s]
            assert row["clamp_low[N]"] == ledger.clamp_low[s, b]
            assert row["clamp_high[N]"] == ledger.clamp_high[s, b]
            assert row["shear[N]"] == slip.shear[s, b]
            assert row["safety"] == (slip.bolt_safety[s, b] if sliding else np.inf)
            assert row["load_factor"] == (slip.bolt_load_factor[s, b] if sliding else np.inf)
            assert row["open"] == ledger.open[s, b]
        for name, held, grown in (
            ("group", slip.group.factor, slip.group_load_factor),
            ("force only", slip.force_safety, slip.force_load_factor),
        ):
            row = rows.filter(pl.col("bolt") == name).row(0, named=True)
            s = ends[row["end"]].group_state
            sliding = slip.sliding[s]
            assert row["safety"] == pytest.approx(held[s] if sliding else np.inf, rel=1e-10)
            assert row["load_factor"] == pytest.approx(grown[s] if sliding else np.inf, rel=1e-10)
            checks = [c for c in verdict.checks if c.case == case.name and c.check.endswith(name.replace(" ", "_"))]
            assert row["reserve_factor"] == pytest.approx(min(c.reserve_factor for c in checks), rel=1e-10)
            assert row["required"] == checks[0].required
        decided = [c for c in verdict.checks if c.decides and c.case == case.name]
        assert rows["case_holds"].unique().to_list() == [all(c.holds for c in decided)]
    worst, governing = summary.summary.worst[0], verdict.governing
    assert (worst.case, worst.check, worst.end, worst.bolt) == (
        governing.case,
        governing.check,
        governing.end,
        governing.bolt,
    )
    assert worst.reserve == pytest.approx(governing.reserve_factor, rel=1e-10)
    assert summary.exit_code == verdict.exit_code


STANDARD = '[[standard]]\nname = "VDI 2230"\nto_standard_level = 1.0\n'
FILES = {
    "plain": joint_file(),
    "compression credited": joint_file(axial="bolt_share = [0.1, 0.2]\ncredit_compression = true"),
    "group decides, shear grows": joint_file(
        more='[required]\ndecides = "group"\ndecides_reason = "ductile"\ngrows = "shear"'
    ),
    "a standard": joint_file(more=STANDARD),
    "one bolt, some cases turn it": joint_file(positions=ONE),
}


@pytest.mark.parametrize("file", FILES.values(), ids=FILES)
def test_loads_of_the_joint(file: str, tmp_path: Path) -> None:
    draw, count = np.random.default_rng(7), 40
    single = "[[0, 0]]" in file
    size = np.array([6000, 6000, 20000, 0, 0, 60000.0] if single else [8000, 8000, 60000, 2e6, 2e6, 2e6])
    loads = draw.normal(size=(count, 6)) * size * draw.choice([0, 1, 1, 1], size=(count, 6))
    kinds = draw.choice(["static", "alternating"], size=count)
    ratios = [round(float(draw.uniform(-1, 1)), 3) if kind == "alternating" else None for kind in kinds]
    columns = dict(zip(["Fx[N]", "Fy[N]", "Fz[N]", "Mx[N mm]", "My[N mm]", "Mz[N mm]"], loads.T, strict=True))
    columns = {"case": [f"c{i}" for i in range(count)]} | columns | {"kind": kinds, "ratio": ratios}
    found, rows = worked(tmp_path, file, columns)
    text = file + "".join(case_text(i, v, k, r) for i, (v, k, r) in enumerate(zip(loads, kinds, ratios, strict=True)))
    single_run = assess(read_text(text))
    assert isinstance(single_run, Assessment)
    turns = [i for i, v in enumerate(loads) if v[5]]
    if single and 0 < len(turns) < count:  # each case as a file of its own: a torque elsewhere changes nothing for it
        for i in (turns[0], next(i for i in range(count) if i not in turns)):
            alone = assess(read_text(file + case_text(i, loads[i], kinds[i], ratios[i])))
            row = rows.filter((pl.col("case") == f"c{i}") & (pl.col("bolt") == "B1")).row(0, named=True)
            end = next(e for e in alone.verdict.ends if e.end == row["end"])
            wanted = alone.slip.bolt_load_factor[end.state, 0]  # by the limit of its patch, where it turns
            assert row["load_factor"] == pytest.approx(wanted, rel=1e-10)
        return
    assert_same(rows, single_run, found)


def test_the_same_force_on_each_bolt(tmp_path: Path) -> None:
    draw, count = np.random.default_rng(8), 12
    loads = draw.normal(size=(count, 3)) * [1500, 1500, 9000]
    names = [f"B{i}" for i in range(1, 7)]
    columns = {
        "case": np.repeat([f"c{i}" for i in range(count)], 6),
        "bolt": np.tile(names, count),
        "Fx[N]": np.repeat(loads[:, 0], 6),
        "Fy[N]": np.repeat(loads[:, 1], 6),
        "Fax[N]": np.repeat(loads[:, 2], 6),
    }
    found, rows = worked(tmp_path, joint_file(), columns)
    cases = (case_text(i, v, "alternating", -1.0, each=True) for i, v in enumerate(loads))
    single = assess(read_text(joint_file() + "".join(cases)))
    assert isinstance(single, Assessment)
    assert_same(rows, single, found)


OWN = {
    "bolt forces alone": {},
    "both ends": {"end": True},
    "own preload and thermal loss": {"preload_low": True, "thermal": True},
    "contact force": {"Fclamp": True},
    "contact force at both ends by ratio": {"Fclamp": True, "ratio": True},
    "own preload, ratio": {"preload_low": True, "thermal": True, "ratio": True},
    "contact force, credited": {"Fclamp": True, "credited": True},
    "true slip has a limit": {"true_slip": True},
    "a standard": {"standard": True},
}


@pytest.mark.parametrize("asked", OWN.values(), ids=OWN)
def test_forces_of_their_own_on_each_bolt(asked: dict[str, bool], tmp_path: Path) -> None:
    """Each case alone by the full assessment, which keeps the record of the calculation, against all of them at once."""
    draw, count, names = np.random.default_rng(9), 6, [f"B{i}" for i in range(1, 7)]
    ends = ["given", "other"] if asked.get("end") else ["given"]
    rows = count * len(ends) * 6
    columns: dict[str, Any] = {
        "case": np.repeat([f"c{i}" for i in range(count)], 6 * len(ends)),
        "bolt": np.tile(names, count * len(ends)),
        "Fx[N]": draw.normal(size=rows) * 2000,
        "Fy[N]": draw.normal(size=rows) * 2000,
        "Fax[N]": draw.normal(size=rows) * 20000,
    }
    if asked.get("end"):
        columns["end"] = np.tile(np.repeat(ends, 6), count)
    if asked.get("preload_low"):
        columns["preload_low[N]"] = [None if i % 4 == 0 else 60000.0 + 10 * i for i in range(rows)]
        columns["thermal[N]"] = [None if i % 3 == 0 else 7.0 * i for i in range(rows)]
    if asked.get("ratio"):
        columns["ratio"] = np.full(rows, 0.25)
    axial = "bolt_share = 0.15"
    if asked.get("Fclamp"):
        columns["Fclamp[N]"] = draw.uniform(30000, 99000, size=rows)
        axial += "\nmodel_preload = 90000"
    axial += "\ncredit_compression = true" if asked.get("credited") else ""
    more = '[required]\ntrue_slip = "1 um"' if asked.get("true_slip") else STANDARD if asked.get("standard") else ""
    found, result = worked(tmp_path, joint_file(axial=axial, more=more), columns)
    joint = read(tmp_path / "joint.toml", cases_in_table=True)
    reserves = {}
    for name, single in assess_cases(joint, tmp_path / "cases.csv", [f"c{i}" for i in range(count)]).items():
        one = check_table(joint, tmp_path / "cases.csv")
        assert one.summary.cases == count
        own = result.filter(pl.col("case") == name)
        reserves[name] = single.verdict.governing.reserve_factor
        ends_of = {end.end: end for end in single.verdict.ends}
        for b, bolt in enumerate(names):
            row = own.row(b, named=True)
            s = ends_of[row["end"]].bolt_states[b]
            assert (row["bolt"], row["clamp_low[N]"]) == (bolt, single.clamp.ledger.clamp_low[s, b])
            assert row["load_factor"] == single.slip.bolt_load_factor[s, b]
            assert row["clamp_high[N]"] == single.clamp.ledger.clamp_high[s, b]
        group = min(single.slip.group_load_factor)
        assert own.row(6, named=True)["load_factor"] == pytest.approx(group, rel=1e-10)
        assert own["case_holds"][0] == (single.verdict.exit_code == HOLDS)
    worst = found.summary.worst[0]
    assert worst.reserve == pytest.approx(min(reserves.values()), rel=1e-10)
