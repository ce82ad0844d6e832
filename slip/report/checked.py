"""The checks as rows for a terminal: a row for each case, a line for separation and for each standard and limit."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

import numpy as np

from slip.assess import Assessment
from slip.report.words import at_most, check_name, columns, cut, factor, plain, wrapped
from slip.verdict.by_standard import Entry
from slip.verdict.checks import Check, first_least
from slip.verdict.gross_slip import End

WIDTH = 80
NO_SHEAR = "no shear"
COUNTED = {"FAILS": "fail", "unsolved": "not solved", "holds": "hold"}


def entries(assessment: Assessment) -> dict[tuple[str, str, str], Entry]:
    """The standards' entries by check, case and end."""
    entries = (entry for several in assessment.verdict.standards.values() for entry in several)
    return {(entry.check.check, entry.check.case, entry.check.end): entry for entry in entries}


# the cases


def _reserve(checks: Iterable[Check]) -> float:
    """Smallest reserve of the checks that decide; a failed or unsolved one without a number counts as none."""
    deciding = [c for c in checks if c.decides]
    return min((c.reserve_factor if c.reserve_factor is not None else 0.0 for c in deciding), default=float("inf"))


def _state(checks: Iterable[Check]) -> str:
    bad = [c for c in checks if c.decides and not c.holds]
    return "holds" if not bad else "FAILS" if any(c.solved for c in bad) else "unsolved"


def case_lines(assessment: Assessment, most: int) -> Iterator[str]:
    """A row for each case, its worse end: the three factors held / growing, requirement, verdict. Of many cases the worst."""
    by_case: dict[str, list[Check]] = {case.name: [] for case in assessment.joint.cases}
    for check in assessment.verdict.checks:
        if check.case:
            by_case[check.case].append(check)
    ends: dict[int, list[End]] = {}
    for end in assessment.verdict.ends:
        ends.setdefault(end.case, []).append(end)
    worst = [several[first_least(np.array([_reserve(end.checks) for end in several]))] for several in ends.values()]
    names = [case.name for case in assessment.joint.cases]
    order = list(range(len(worst)))
    if len(worst) > most:  # failed ones first, then by reserve, then file order
        order.sort(key=lambda i: (_state(by_case[names[i]]) != "FAILS", _reserve(by_case[names[i]])))
    shown, hidden = order[:most], order[most:]
    rows = [_row(assessment, worst[i], by_case[names[i]]) for i in shown]
    heads = ["case, worse end", "per bolt", "group", "force only", "needs", ""]
    widths = [max(len(row[i]) for row in (heads, *rows)) for i in range(1, 6)]
    first = max(WIDTH - sum(widths) - 2 * len(widths), 8)
    yield "Factors on the load until slip, clamp held / all loads growing:"
    for row in (heads, *rows):
        name = cut(row[0], first)
        cells = [
            name + " " * (first - columns(name)),
            *(cell.ljust(w) for cell, w in zip(row[1:], widths, strict=True)),
        ]
        yield "  ".join(cells)
    if hidden:
        states = [_state(by_case[names[i]]) for i in hidden]
        counts = ", ".join(f"{states.count(state)} {word}" for state, word in COUNTED.items() if state in states)
        yield f"and {len(hidden)} more cases: {counts}; --json has them all"
    if any("*" in row[3] for row in rows):
        yield "* the force alone, without the moment about the normal: it never decides"


def _row(assessment: Assessment, end: End, checks: Sequence[Check]) -> list[str]:
    case = assessment.joint.cases[end.case]
    per_bolt, group, force = end.checks[:3]
    name = plain(case.name, WIDTH)
    if len(case.ends) > 1:
        name = f"{plain(case.name, 18)}, {end.end}"
    alone = _pair(force) + ("*" if "moment" in force.reason else "")
    return [name, _pair(per_bolt), _pair(group), alone, f"{per_bolt.required:g}", _state(checks)]


def _pair(check: Check) -> str:
    """Both factors of a check with its bolt."""
    if check.reason == NO_SHEAR:
        return NO_SHEAR
    both = f"{factor(check.safety, check.required)}/{factor(check.load_factor, check.required)}"
    return f"{both} {plain(check.bolt, 8)}" if check.bolt else both


# separation, standards, limits


def other_lines(assessment: Assessment, most: int, reason: int) -> Iterator[str]:
    """Separation, standards and limits that were not judged, the worst of each: what fails first."""
    grouped: dict[str, list[Check]] = {}
    for check in assessment.verdict.checks:
        if not check.check.startswith("gross_slip"):
            grouped.setdefault(check.check, []).append(check)
    ranks = {"FAILS": 0, "unsolved": 1, "holds": 2}
    worst = [min(checks, key=lambda c: (ranks[_state([c])], _reserve([c]))) for checks in grouped.values()]
    worst.sort(key=lambda c: ranks[_state([c])])
    known = entries(assessment)
    for check in worst[:most]:
        yield from at_most(wrapped(_other(check, known), WIDTH), reason, WIDTH)
    if hidden := worst[most:]:
        states = [_state([check]) for check in hidden]
        counts = ", ".join(f"{states.count(state)} {word}" for state, word in COUNTED.items() if state in states)
        yield f"and {len(hidden)} more checks: {counts}; --json has them all"


def _other(check: Check, known: dict[tuple[str, str, str], Entry]) -> str:
    said = check_name(check.check)
    if check.check == "separation":
        said += f" {factor(check.load_factor, check.required)}, required {check.required:g}"
    elif check.reserve_factor is not None and np.isfinite(check.reserve_factor):
        said += f" reserve {factor(check.reserve_factor, 1.0)}"
    said += f": {_state([check])}"
    place = ", ".join(part for part in (plain(check.case, 30), plain(check.bolt, 14)) if part)
    said += f" ({place})" if place else ""
    entry = known.get((check.check, check.case, check.end))
    said += f", basis {entry.judgement.basis}" if entry and entry.judgement else ""
    return f"{said}; {plain(check.reason, 300)}" if check.reason else said
