"""The tables of the page: rows of cells ready to show, of many rows the first in the open and the others to fold."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import field
from typing import Any

import numpy as np

from slip.assess import Assessment
from slip.base.records import record
from slip.base.units import System
from slip.report import inputs, machine
from slip.report.words import check_name, factor, plain
from slip.verdict.by_standard import Entry
from slip.verdict.checks import Check
from slip.verdict.gross_slip import End

SHOWN = 12  # rows of a table that stand open
NAME, TEXT = 60, 600  # columns of a name and of a sentence that hold what the file gives
MINUS = "\N{MINUS SIGN}"
STATES = ("fails", "not solved", "holds")  # in the order of urgency
LEDGERS = (
    "What is left to hold the joint: the lowest clamp",
    "What the bolt and its seat may see: the highest clamp",
)


@record
class Row:
    """Cells of a table's row, the first names it; `state` is a verdict or '', `governs` marks what the verdict speaks of."""

    cells: Sequence[str]
    state: str = ""
    governs: bool = False


@record
class Table:
    """Heads, some with a unit; `numbers` are the columns that hold numbers, `verdict` the one that shows the row's state.
    `rest` folds away below the open rows."""

    caption: str
    heads: Sequence[str]
    rows: Sequence[Row]
    rest: Sequence[Row] = field(default=())
    numbers: range = range(1, 99)
    verdict: int = -1


# the cases


def state(checks: Sequence[Check]) -> str:
    """Verdict over checks: only those that decide count."""
    bad = [c for c in checks if c.decides and not c.holds]
    return "holds" if not bad else "fails" if any(c.solved for c in bad) else "not solved"


def case_table(assessment: Assessment) -> Table:
    """A row for each end of each case; of many the ones with the least reserve stand open, the others fold in file order."""
    groups: dict[tuple[str, str], list[Check]] = {}
    for check in assessment.verdict.checks:
        groups.setdefault((check.case, check.end), []).append(check)
    groups = {place: checks for place, checks in groups.items() if place[0]}
    g, kinds = (
        assessment.verdict.governing,
        {c.name: "alternating" if c.alternating else "static" for c in assessment.joint.cases},
    )
    rows = {place: _case_row(checks, kinds[place[0]], place == (g.case, g.end)) for place, checks in groups.items()}
    if len(rows) <= SHOWN:
        return Table("Factors of every case and end", (), list(rows.values()))
    worst = dict.fromkeys(sorted(groups, key=lambda place: urgency(groups[place]))[:SHOWN])
    caption = f"The {SHOWN} of {len(rows)} cases and ends with the least reserve"
    return Table(
        caption, (), [rows[place] for place in worst], [row for place, row in rows.items() if place not in worst]
    )


def urgency(checks: Sequence[Check]) -> tuple[int, float]:
    """Order of the checks of one place: failed first, then not solved, then by the least reserve of what decides."""
    reserves = [c.reserve_factor for c in checks if c.decides and c.reserve_factor is not None]
    return STATES.index(state(checks)), min(reserves, default=math.inf)


def _case_row(checks: Sequence[Check], kind: str, governs: bool) -> Row:
    """Case, end, kind, required; bolt and two factors per bolt, two of the group, two of the force; separation and its bolt;
    what is not met; a remark on the factors per bolt."""
    named = {check.check: check for check in checks}
    slipping = [named[f"gross_slip.{name}"] for name in ("per_bolt", "group", "force_only")]
    cells = [plain(checks[0].case, NAME), checks[0].end, kind, f"{slipping[0].required:g}"]
    for check in slipping:
        still = check.reason == "no shear"
        cells += ["no shear"] * 2 if still else [factor(x, check.required) for x in (check.safety, check.load_factor)]
    cells.insert(4, plain(slipping[0].bolt, 20))
    apart = named.get("separation")
    cells += [factor(apart.load_factor, apart.required), plain(apart.bolt, 20)] if apart else ["-", ""]
    cells.append(", ".join(check_name(c.check) for c in checks if c.decides and not c.holds))
    cells.append(plain("" if slipping[0].reason == "no shear" else slipping[0].reason, TEXT))
    return Row(cells, state(checks), governs)


# the clamp


def ledger_tables(assessment: Assessment, end: End, system: System) -> list[Table]:
    """The lowest clamp and the highest, a row for each bolt."""
    rows = machine.ledger(assessment, end.bolt_states, system)
    return [
        _ledger_table(caption, columns, rows, assessment, end)
        for caption, columns in zip(LEDGERS, ledger_columns(system), strict=True)
    ]


def ledger_columns(system: System) -> tuple[dict[str, str], dict[str, str]]:
    """Keys of the ledger with their heads, on the way to the lowest clamp and to the highest."""
    force = f"[{system.force}]"
    low = {
        "assembly_low": f"lowest preload {force}",
        "embedding": f"{MINUS} embedding {force}",
        "relaxation": f"{MINUS} relaxation {force}",
        "thermal_loss": f"{MINUS} thermal loss {force}",
        "axial_relief": f"{MINUS} axial relief {force}",
        "clamp_low": f"= lowest clamp {force}",
        "shear": f"shear on the bolt {force}",
        "separation_factor": "separation factor",
    }
    high = {
        "assembly_high": f"highest preload {force}",
        "thermal_gain": f"+ thermal gain {force}",
        "clamp_high": f"= highest clamp {force}",
        "bolt_force_high": f"highest bolt force {force}",
        "yield_use": "use of yield [%]",
        "bearing_pressure_high": f"pressure under the head [{system.pressure}]",
    }
    return low, high


def _ledger_table(
    caption: str, columns: dict[str, str], rows: list[dict[str, Any]], assessment: Assessment, end: End
) -> Table:
    used = [key for key in columns if any(key in row for row in rows)]
    bolt = assessment.verdict.governing.bolt or assessment.joint.pattern.names[end.bolt]
    made = []
    for row in rows:
        cells = [plain(row["bolt"], NAME), *(ledger_cell(row, key) for key in used)]
        made.append(Row(cells, "open" if row["open"] else "", row["bolt"] == bolt))
    heads = ["bolt", *(columns[key] for key in used)]
    return Table(caption, heads, made[:SHOWN], made[SHOWN:])


def ledger_cell(row: dict[str, Any], key: str) -> str:
    """A value of the ledger as its table shows it."""
    value = row.get(key)
    if value is None:
        return "-"
    if key == "separation_factor":
        return factor(value)
    return f"{100 * value if key == 'yield_use' else value:.6g}"


# the standards


def standard_table(assessment: Assessment, entries: Sequence[Entry], system: System) -> Table:
    """The entries of one standard, a row for each case and end."""
    force, governing = f"[{system.force}]", assessment.verdict.governing
    rows = [_standard_row(entry, system, entry.check is governing) for entry in entries]
    heads = (
        "case",
        "end",
        "bolt",
        f"demand {force}",
        f"resistance {force}",
        "utilisation",
        "reserve",
        "verdict",
        "not met",
    )
    first = set(sorted(range(len(rows)), key=lambda i: urgency([entries[i].check]))[:SHOWN])
    shown, rest = [r for i, r in enumerate(rows) if i in first], [r for i, r in enumerate(rows) if i not in first]
    label = entries[0].standard.label
    return Table(f"{label}, worst bolt of every case and end", heads, shown, rest, range(3, 7), 7)


def _standard_row(entry: Entry, system: System, governs: bool) -> Row:
    """Case, end, bolt, demand, resistance, utilisation, reserve, verdict, and what is not met or why it is not compared."""
    check, j = entry.check, entry.judgement
    numbers = ["-"] * 4
    if j is not None:
        amounts = (float(np.ravel(values)[j.governing]) for values in (j.demand, j.resistance))
        numbers = [f"{system.out(x, j.resistance_unit):.6g}" for x in amounts]
        numbers += [
            factor(j.worst, 1.0) if math.isfinite(j.worst) else "no resistance",
            factor(check.reserve_factor, 1.0),
        ]
    said, word = plain(check.reason, TEXT), state([check])
    return Row(
        [plain(check.case, NAME), check.end, plain(check.bolt, 20) or "all", *numbers, word, said], word, governs
    )


# the inputs


def input_tables(assessment: Assessment, system: System) -> list[Table]:
    """Plates, places of the bolts and load cases."""
    joint, length = assessment.joint, f"[{system.length}]"
    plates = [Row(inputs.plate_row(plate, system)) for plate in joint.plates]
    plate_heads = ("plate", "material", "modulus", "thickness", "outline")
    bolts = []
    for name, place in zip(joint.pattern.names, joint.pattern.positions, strict=True):
        bolts.append(Row([plain(name, NAME), *(f"{system.out(float(x), 'length') + 0.0:.6g}" for x in place)]))
    bolt_heads = ("bolt", f"x {length}", f"y {length}")
    loads = [Row(row) for case in joint.cases for row in inputs.load_rows(case, system)]
    tables = [
        Table("Plates, from the bolt head down", plate_heads, plates, (), range(2, 4)),
        Table("Places of the bolts", bolt_heads, bolts[:SHOWN], bolts[SHOWN:]),
        Table("Load cases", inputs.load_heads(system), loads[:SHOWN], loads[SHOWN:], range(5, 12)),
    ]
    return [table for table in tables if table.rows]
