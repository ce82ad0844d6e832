"""The verdict stage: every check of every case and end, the governing one, and whether the joint holds."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.records import record
from slip.clamp.stage import Clamp
from slip.friction.partial import NO_SHEAR, Partial, PartialSlip, in_um
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
    """The true slip of an end of a case against the file's own limit [mm]."""
    return judge_true_slip(joint.cases[case].name, end, most, partial.of(case, end), partial.reason)


def judge_true_slip(case: str, end: str, most: float, found: PartialSlip | None, silent: str) -> Check:
    """The largest true slip of the three readings of the face's stiffness against a limit [mm]; silent: why none was found.

    It fails where the model's slip alone is more. It holds where the slip with all the stretch that the model leaves out is not, and
    the model is inside its range; else it is not solved.
    """

    def judged(reserve: float | None, holds: bool, reason: str, solved: bool = True) -> Check:
        return Check("true_slip", case, end, "", None, None, None, reserve, holds, True, reason, solved)

    reason = silent if found is None else "" if found.reason == NO_SHEAR else found.reason
    if found is not None and found.wholly:  # there is no end to its slip
        return judged(0.0, False, reason)
    if found is None or reason:
        return judged(None, False, f"not solved: {reason}", solved=False)
    slip, stretch = found.largest_true_slip, found.stretch
    if slip > most:
        return judged(most / slip, False, against(slip, most))
    if found.outside:
        return judged(None, False, f"not solved: {against(slip, most)}, yet {found.outside}", solved=False)
    if slip + stretch > most:
        left_out = f"up to {in_um(stretch)} more by the stretch of the plates, which the model leaves out"
        return judged(None, False, f"not solved: {against(slip, most)}, yet {left_out}", solved=False)
    said = f"{in_um(slip)} + {in_um(stretch)} of stretch against {in_um(most)}" if stretch else against(slip, most)
    return judged(most / (slip + stretch) if slip + stretch > 0 else float("inf"), True, said)


def against(slip: float, most: float) -> str:
    """A true slip and its limit [mm] in micrometres."""
    return f"{in_um(slip)} against {in_um(most)}"


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
