"""The tables of the page of a face of known pressure: cases, partial slip, and the closed form beside the step."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from slip.assess import FaceAssessment
from slip.base.units import System
from slip.friction.known_pressure import FaceSlip
from slip.friction.partial import NO_SHEAR, TYPICAL
from slip.report.face import CLOSED, closed_values
from slip.report.partial import KINDS, banded, short
from slip.report.rows import NAME, SHOWN, TEXT, Row, Table, state, urgency
from slip.report.words import check_name, factor, plain
from slip.verdict.checks import Check

TOLD = {
    "first_slip_load": "first slip",
    "stiffness": "stiffness before slip",
    "elastic_slip": "elastic slip",
    "true_slip": "true slip",
    "slip_length": "length that slips",
    "energy_per_cycle": "energy of a cycle",
}
MEASURED = (
    "first_slip_load",
    "stiffness",
    "elastic_slip",
    "true_slip",
    "slip_share",
    "slip_length",
    "energy_per_cycle",
)
UNBROKEN, SHORT = "\N{NO-BREAK SPACE}", 24  # columns that a cell may take on one line
SMALL = 1e-4  # difference of the routes that is not told


def check_said(check: str) -> str:
    """A face has no bolts that could be a group."""
    return "gross slip" if check == "gross_slip.group" else check_name(check)


def case_table(assessment: FaceAssessment, system: System) -> Table:
    """A row for each end of each case; of many those with the least reserve stand open."""
    groups: dict[tuple[str, str], list[Check]] = {}
    for check in assessment.verdict.checks:
        groups.setdefault((check.case, check.end), []).append(check)
    cases, g = assessment.joint.cases, assessment.verdict.governing
    places = {(cases[i].name, end): found for (i, end), found in assessment.slips.items()}
    kinds = {c.name: "alternating" if c.alternating else "static" for c in cases}
    rows = {
        place: _case_row(checks, kinds[place[0]], places[place], place == (g.case, g.end), system)
        for place, checks in groups.items()
    }
    worst = set(sorted(groups, key=lambda place: urgency(groups[place]))[:SHOWN])
    shown, rest = ([row for place, row in rows.items() if (place in worst) == open_] for open_ in (True, False))
    caption = "Factors of every case and end" if not rest else f"The {SHOWN} of {len(rows)} ends with the least reserve"
    heads = (
        "case",
        "end",
        "verdict",
        f"shear [{system.force}]",
        f"moment at the middle [{system.unit('moment')}]",
        "factor",
        "force alone, never decides",
        "required",
        "kind",
        "true slip",
        "not met",
    )
    return _filled(Table(caption, heads, shown, rest, range(3, 8), 2), (4, 6, 9, 10))


def _filled(table: Table, columns: Sequence[int]) -> Table:
    """The table without those of the columns that say nothing in any row."""
    rows = (*table.rows, *table.rest)
    empty = {i for i in columns if all(row.cells[i] in ("", "-") for row in rows)}

    def kept(cells: Sequence[str]) -> list[str]:
        return [cell for i, cell in enumerate(cells) if i not in empty]

    shown, rest = ([Row(kept(r.cells), r.state, r.governs) for r in part] for part in (table.rows, table.rest))
    numbers = range(table.numbers.start, table.numbers.stop - len(empty.intersection(table.numbers)))
    return Table(table.caption, kept(table.heads), shown, rest, numbers, table.verdict)


def _case_row(checks: Sequence[Check], kind: str, found: FaceSlip, governs: bool, system: System) -> Row:
    named = {check.check: check for check in checks}
    held, alone, limit = named["gross_slip.group"], named["gross_slip.force_only"], named.get("true_slip")
    shear, moment = float(np.hypot(found.load[0], found.load[1])), float(found.load[2])
    turned = f"{system.out(moment, 'moment'):.6g}" if moment else "-"
    both = factor(alone.safety, alone.required) if moment else "-"
    whole = factor(held.safety, held.required) if found.sliding else NO_SHEAR
    loads = [f"{system.out(shear, 'force'):.6g}", turned, whole, both]
    missed = ", ".join(check_said(c.check) for c in checks if c.decides and not c.holds)
    cells = [plain(held.case, NAME), held.end, state(checks), *loads, f"{held.required:g}", kind]
    return Row([*cells, _unbroken(limit.reason) if limit else "", missed], state(checks), governs)


def _unbroken(text: str) -> str:
    """A sentence of the file's limit, on one line where it is short."""
    return plain(text, TEXT).replace(" ", UNBROKEN) if len(text) <= SHORT else plain(text, TEXT)


# partial slip


def partial_table(assessment: FaceAssessment, system: System) -> Table | None:
    """A row for each end, the typical value with those at low and high stiffness; None where the file does not describe it."""
    rows = []
    for (i, end), found in assessment.slips.items():
        if found.partial is not None:
            gross = found.partial.gross_slip_load
            cells = [banded(found.partial, name, system) for name in MEASURED]
            cells.insert(1, "-" if gross is None else short(system.out(gross, "force")))
            rows.append(Row([plain(assessment.joint.cases[i].name, NAME), end, *cells]))
    if not rows:
        return None
    heads = (
        "case",
        "end",
        f"first slip [{system.force}]",
        f"gross slip [{system.force}]",
        f"stiffness [{system.unit('stiffness')}]",
        f"elastic slip [{system.length}]",
        f"true slip [{system.length}]",
        "share that slips",
        f"length that slips [{system.length}]",
        f"energy a cycle [{system.unit('energy')}]",
    )
    caption = "Partial slip of every case and end, typical stiffness of the face (low .. high)"
    return _filled(Table(caption, heads, rows[:SHOWN], rows[SHOWN:], range(2, 99)), (8, 9))


# both routes of a lap


def _both(found: FaceSlip, system: System) -> dict[str, tuple[float, float]]:
    """The closed form and the step at the typical stiffness, of every number that both tell."""
    if found.closed is None or found.partial is None:
        return {}
    closed, step = closed_values(found.closed, system), found.partial.readings[TYPICAL]
    told = {name: getattr(step, name) for name in CLOSED if name in closed}
    return {name: (closed[name], system.out(value, KINDS[name])) for name, value in told.items() if value is not None}


def beside(found: FaceSlip, system: System) -> Table | None:
    """Both routes side by side at one end, a row for each number; None where there is no closed form."""
    rows = [
        Row([_named(name, system), short(closed), short(step), apart(closed, step)])
        for name, (closed, step) in _both(found, system).items()
    ]
    heads = ("what", "closed form", "step", "step against closed form")
    return Table("Both routes at the governing end, typical stiffness of the face", heads, rows) if rows else None


def _named(name: str, system: System) -> str:
    return f"{TOLD[name]} [{system.unit(KINDS[name])}]"


def apart(closed: float, step: float) -> str:
    """By how much the step differs, in per cent."""
    if closed == step:
        return f"below {100 * SMALL:g} %"
    off = (step - closed) / closed if closed else float("inf")
    return (
        "-" if abs(off) == float("inf") else f"{100 * off:+.3g} %" if abs(off) >= SMALL else f"below {100 * SMALL:g} %"
    )


def route_table(assessment: FaceAssessment, system: System) -> Table | None:
    """A row for each route of each end with a closed form; None where no more than one end, or one pair of alike ends, has one."""
    found: dict[tuple[int, str], dict[str, Any]] = {}
    for (i, end), one in assessment.slips.items():
        both = _both(one, system)
        if not both:
            continue
        if (i, "given") in found and found[i, "given"] == both:
            found[i, "both"] = found.pop((i, "given"))
        else:
            found[i, end] = both
    if len(found) < 2:
        return None
    used = [name for name in TOLD if any(name in both for both in found.values())]
    rows = []
    for (i, end), both in found.items():
        for which, route in enumerate(("closed form", "step")):
            cells = [short(both[name][which]) if name in both else "-" for name in used]
            rows.append(Row([plain(assessment.joint.cases[i].name, NAME), end, route, *cells]))
    heads = ["case", "end", "route", *(_named(name, system) for name in used)]
    caption = "Both routes at every end of a lap, typical stiffness of the face"
    return Table(caption, heads, rows[:SHOWN], rows[SHOWN:], range(3, 99))
