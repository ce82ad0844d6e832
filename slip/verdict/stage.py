"""The verdict stage: every check of every case and end, the governing one, and whether the joint holds."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.records import record
from slip.clamp.stage import Clamp
from slip.friction.partial import NO_SHEAR, Partial
from slip.friction.stage import Slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure
from slip.verdict.by_standard import Entry, judge_standard
from slip.verdict.checks import Check, first_least
from slip.verdict.gross_slip import End, judge_end

HOLDS, FAILS, NOT_SOLVED = 0, 1, 3  # exit codes of the contract


@record(eq=False)
class Verdict:
    """All checks in file order, the ends they belong to, the standards' entries by (case, end), the governing check."""

    checks: tuple[Check, ...]
    ends: tuple[End, ...]
    standards: dict[tuple[int, str], tuple[Entry, ...]]
    governing: Check
    holds: bool
    exit_code: int


def verdict(joint: Joint, clamp: Clamp, pressure: Pressure, slip: Slip, partial: Partial) -> Verdict:
    """The verdict stage of a joint."""
    ends: list[End] = []
    standards: dict[tuple[int, str], tuple[Entry, ...]] = {}
    checks: list[Check] = []
    for i, case in enumerate(joint.cases):
        for end, _ in case.ends:
            judged = judge_end(joint, clamp, slip, i, end)
            rows = np.flatnonzero((clamp.states.case == i) & (np.array(clamp.states.end) == end))
            entries = tuple(
                judge_standard(joint, clamp, slip, pressure, standard, i, end, rows) for standard in joint.standards
            )
            ends.append(judged)
            standards[i, end] = entries
            checks += [*judged.checks, *(entry.check for entry in entries)]
            if joint.required.true_slip is not None:
                checks.append(true_slip(joint, partial, joint.required.true_slip, i, end))
    return conclude([*checks, *not_solved(joint)], tuple(ends), standards)


def conclude(
    checks: Sequence[Check], ends: tuple[End, ...], standards: dict[tuple[int, str], tuple[Entry, ...]]
) -> Verdict:
    """What all checks add up to: whether those that decide hold, which one governs, the exit code."""
    holds = all(check.holds for check in checks if check.decides)
    failed = any(check.solved and not check.holds for check in checks if check.decides)
    code = HOLDS if holds else FAILS if failed else NOT_SOLVED
    return Verdict(tuple(checks), ends, standards, _governing(checks), holds, code)


def _governing(checks: Sequence[Check]) -> Check:
    """The deciding check with the smallest reserve factor; among equal ones a failed one first, then file order."""
    deciding = [check for check in checks if check.decides]
    solved = [check for check in deciding if check.reserve_factor is not None]
    failed = [check for check in solved if not check.holds]
    candidates = failed or solved or deciding
    reserves = np.array([np.inf if c.reserve_factor is None else c.reserve_factor for c in candidates])
    return candidates[first_least(reserves)]


def true_slip(joint: Joint, partial: Partial, most: float, case: int, end: str) -> Check:
    """The largest true slip of the three readings of the face's stiffness against the file's own limit [mm]."""
    name, found = joint.cases[case].name, partial.of(case, end)
    reason = partial.reason if found is None else "" if found.reason == NO_SHEAR else found.reason
    if found is not None and found.wholly:  # there is no end to its slip
        return Check("true_slip", name, end, "", None, None, None, 0.0, False, True, reason)
    if found is None or reason:
        return Check(
            "true_slip", name, end, "", None, None, None, None, False, True, f"not solved: {reason}", solved=False
        )
    slip = max((reading.true_slip for reading in found.readings), default=0.0)
    reserve = most / slip if slip > 0 else float("inf")
    said = against(slip, most)
    return Check("true_slip", name, end, "", None, None, None, reserve, bool(slip <= most), True, said)


def against(slip: float, most: float) -> str:
    """A true slip and its limit [mm] in micrometres."""
    return f"{1e3 * slip:.3g} um against {1e3 * most:.3g} um"


def not_solved(joint: Joint) -> list[Check]:
    """Limits that the file sets and no answer can judge yet: they decide, and nobody may take them for held."""
    reasons = {
        "loosening": "the limit of loosening is not judged yet" if joint.loosening_limit else "",
    }
    return [
        Check(name, "", "", "", None, None, None, None, False, True, reason, solved=False)
        for name, reason in reasons.items()
        if reason
    ]
