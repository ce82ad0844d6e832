"""Checks of gross slip and separation for one end of a case, from its load states."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.clamp.stage import Clamp
from slip.friction.stage import Slip
from slip.joint.joint import Joint, Required
from slip.joint.loads import Case
from slip.verdict.checks import TIE, Check, first_least

Array = np.ndarray
LONE = "force alone, never decides"


@record
class End:
    """One end of a case: its checks, and the load states (indices) that govern them; an end has several only when unsigned.

    state and bolt govern the factor per bolt, group_state that of the group; bolt_states holds for every bolt the state
    with its own smallest factor, of equal ones that with the lowest clamp.
    """

    case: int
    end: str
    state: int
    bolt: int
    group_state: int
    bolt_states: tuple[int, ...]
    checks: tuple[Check, ...]


def judge_end(joint: Joint, clamp: Clamp, slip: Slip, case: int, end: str) -> End:
    """Checks per bolt, of the group, for the force alone, and of separation; the worst of the end's states counts."""
    rows = np.flatnonzero((clamp.states.case == case) & (np.array(clamp.states.end) == end))
    required, given = joint.required, joint.cases[case]
    least = required.alternating if given.alternating else required.static
    bolt_factor = deciding(joint, slip.bolt_safety, slip.bolt_load_factor)
    group_factor = deciding(joint, slip.group.factor, slip.group_load_factor)
    force_factor = deciding(joint, slip.force_safety, slip.force_load_factor)
    state, bolt = divmod(first_least(bolt_factor[rows].ravel()), joint.pattern.count)
    state = int(rows[state])
    group, force = int(rows[first_least(group_factor[rows])]), int(rows[first_least(force_factor[rows])])
    sliding = bool(slip.sliding[rows].any())
    name = joint.pattern.names[bolt]

    def check(what: str, bolt: str, safety: Array, growing: Array) -> Check:
        # Each factor is the smallest of its kind; state and bolt are those of the one held against the requirement.
        smallest = safety[rows].min(), growing[rows].min()
        return _check(required, given, end, what, bolt, *smallest, least, sliding, joint.axial.credit_compression)

    checks = [
        check("per_bolt", name, slip.bolt_safety, slip.bolt_load_factor),
        check("group", "", slip.group.factor, slip.group_load_factor),
        check("force_only", "", slip.force_safety, slip.force_load_factor),
    ]
    other, way = slip.bolt_safety[rows], "the clamp held"
    if required.grows == "shear":
        other, way = slip.bolt_load_factor[rows], "all loads growing"
    if not checks[0].reason and other[rows == state, bolt] > other.min() * (1 + TIE):
        first = joint.pattern.names[first_least(other.ravel()) % joint.pattern.count]
        checks[0] = _with_reason(checks[0], f"with {way} {first} is the first")
    if slip.turning[force]:
        checks[2] = _with_reason(checks[2], f"{LONE}; the moment about the normal is left out")
    separation = _separation(joint, clamp, given, end, rows, least)
    own = tuple(
        _own_state(bolt_factor[rows, i], clamp.ledger.clamp_low[rows, i], rows) for i in range(joint.pattern.count)
    )
    return End(case, end, state, bolt, group, own, tuple(checks + separation))


def deciding(joint: Joint, safety: Array, growing: Array) -> Array:
    """The factor that is held against the requirement; where compression is credited the smaller, since it grows with the load."""
    if joint.axial.credit_compression:
        return np.minimum(safety, growing)
    return growing if joint.required.grows == "all loads" else safety


def _own_state(factors: Array, clamps: Array, rows: Array) -> int:
    """The state of one bolt's smallest factor; of factors that tie, that of the lowest clamp."""
    tied = np.flatnonzero(~(factors > factors[first_least(factors)] * (1 + TIE)))  # also where that is not a number
    return int(rows[tied[first_least(clamps[tied])]])


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
    credited: bool,
) -> Check:
    """One gross-slip check. Comparison is made with the unrounded factor; NaN never holds."""
    decides = required.decides.replace(" ", "_") == what
    safety, growing = float(safety), float(growing)
    factor = float(np.minimum(safety, growing)) if credited else growing if required.grows == "all loads" else safety
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
