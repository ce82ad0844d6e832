"""Checks of gross slip and separation for one end of a case, from its load states."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from slip.clamp.stage import Clamp
from slip.friction.stage import Slip
from slip.joint.joint import Joint, Required
from slip.joint.loads import Case
from slip.verdict.checks import Check, first_least

Array = np.ndarray
LONE = "force alone, never decides"


@dataclass(frozen=True)
class End:
    """One end of a case: its checks, and the load state and bolt (indices) that govern the per-bolt factor."""

    case: int
    end: str
    state: int
    bolt: int
    group_state: int
    checks: tuple[Check, ...]


def judge_end(joint: Joint, clamp: Clamp, slip: Slip, case: int, end: str) -> End:
    """Checks per bolt, of the group, for the force alone, and of separation; the worst of the end's states counts."""
    rows = np.flatnonzero((clamp.states.case == case) & (np.array(clamp.states.end) == end))
    required, given = joint.required, joint.cases[case]
    least = required.alternating if given.alternating else required.static
    bolt_factor = slip.bolt_load_factor if required.grows == "all loads" else slip.bolt_safety
    group_factor = slip.group_load_factor if required.grows == "all loads" else slip.group.factor
    force_factor = slip.force_load_factor if required.grows == "all loads" else slip.force_safety
    state, bolt = divmod(first_least(bolt_factor[rows].ravel()), joint.pattern.count)
    state = int(rows[state])
    group, force = int(rows[first_least(group_factor[rows])]), int(rows[first_least(force_factor[rows])])
    sliding = bool(slip.sliding[rows].any())
    name = joint.pattern.names[bolt]
    checks = [
        _check(
            required,
            given,
            end,
            "per_bolt",
            name,
            slip.bolt_safety[state, bolt],
            slip.bolt_load_factor[state, bolt],
            least,
            sliding,
        ),
        _check(
            required, given, end, "group", "", slip.group.factor[group], slip.group_load_factor[group], least, sliding
        ),
        _check(
            required,
            given,
            end,
            "force_only",
            "",
            slip.force_safety[force],
            slip.force_load_factor[force],
            least,
            sliding,
        ),
    ]
    if slip.turning[force]:
        checks[2] = _with_reason(checks[2], f"{LONE}; the moment about the normal is left out")
    separation = _separation(joint, clamp, given, end, rows, least)
    return End(case, end, state, bolt, group, tuple(checks + separation))


def _check(
    required: Required,
    case: Case,
    end: str,
    what: str,
    bolt: str,
    safety: float,
    growing: float,
    least: float,
    sliding: bool,
) -> Check:
    """One gross-slip check. Comparison is made with the unrounded factor; NaN never holds."""
    decides = required.decides.replace(" ", "_") == what
    safety, growing = float(safety), float(growing)
    factor = growing if required.grows == "all loads" else safety
    reason = LONE if what == "force_only" else ""
    if not sliding:  # nothing to resist, also where a bolt is open: separation judges that
        safety = growing = factor = float("inf")
        reason = "no shear"
    elif factor == 0 and what == "per_bolt":
        reason = "the bolt is open"
    return Check(
        check=f"gross_slip.{what}",
        case=case.name,
        end=end,
        bolt=bolt,
        safety=safety,
        load_factor=growing,
        required=least,
        reserve_factor=factor / least,
        holds=bool(factor >= least),
        decides=decides,
        reason=reason,
    )


def _with_reason(check: Check, reason: str) -> Check:
    return Check(**{**check.__dict__, "reason": reason})


def _separation(joint: Joint, clamp: Clamp, case: Case, end: str, rows: Array, least: float) -> list[Check]:
    """Separation of the worst bolt; absent without tension unless a bolt has no clamp at all."""
    ledger = clamp.ledger
    factors = np.where(ledger.open[rows] & ~(ledger.relief[rows] > 0), 0.0, ledger.separation_factor[rows])
    worst = first_least(factors.ravel())
    factor = float(factors.ravel()[worst])
    if np.isinf(factor):
        return []
    bolt = joint.pattern.names[worst % joint.pattern.count]
    reason = "no clamp left before any axial load" if factor == 0 else ""
    return [
        Check(
            "separation", case.name, end, bolt, None, factor, least, factor / least, bool(factor >= least), True, reason
        )
    ]
