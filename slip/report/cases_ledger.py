"""The ledger of the worst bolt of each of some cases of a table, by the full assessment of each."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from slip.assess import Assessment
from slip.base.errors import NotConverged, Problems
from slip.base.units import System
from slip.cases.run import TableResult
from slip.cases.single import assess_cases
from slip.cases.summary import Worst
from slip.report import machine
from slip.report.rows import LEDGERS, NAME, Row, Table, ledger_cell, ledger_columns
from slip.report.words import plain


def worst_bolts(found: TableResult, table: str, near: Sequence[Worst], system: System) -> list[Table]:
    """The ledger of the worst bolt of each case, a row for each; a case that can no longer be judged is left out."""
    assessments = _assessments(found, table, [w.case for w in near])
    rows = [(w, _ledger_row(assessments[w.case], w, system)) for w in near if w.case in assessments]
    return [
        _ledger(caption, columns, rows, found)
        for caption, columns in zip(LEDGERS, ledger_columns(system), strict=True)
        if rows
    ]


def _assessments(found: TableResult, table: str, names: Sequence[str]) -> dict[str, Assessment]:
    """Full assessments by case; where they do not all succeed together, those that do alone."""
    if not names:
        return {}
    try:
        return assess_cases(found.joint, table, names)
    except (Problems, NotConverged):
        if len(names) == 1:
            return {}
    return {name: one for case in names for name, one in _assessments(found, table, [case]).items()}


def _ledger_row(assessment: Assessment, w: Worst, system: System) -> dict[str, Any]:
    """The ledger's entry of the bolt that governs a case, or of its weakest where the case as a whole governs."""
    ends = [end for end in assessment.verdict.ends if end.end == w.end] or list(assessment.verdict.ends)
    entries = machine.ledger(assessment, ends[0].bolt_states, system)
    named = [entry for entry in entries if entry["bolt"] == w.bolt]
    return (named or [entries[ends[0].bolt]])[0]


def _ledger(
    caption: str, columns: dict[str, str], rows: Sequence[tuple[Worst, dict[str, Any]]], found: TableResult
) -> Table:
    used = [key for key in columns if any(key in row for _, row in rows)]
    made = []
    for w, row in rows:
        cells = [plain(w.case, NAME), w.end, plain(row["bolt"], NAME), *(ledger_cell(row, key) for key in used)]
        made.append(Row(cells, "open" if row["open"] else "", w is found.summary.worst[0]))
    return Table(caption, ["case", "end", "bolt", *(columns[key] for key in used)], made, (), range(3, 99))
