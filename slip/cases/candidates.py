"""What may govern a case: its deciding checks as columns over all cases, in the order of a joint's verdict, and the one that does."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from slip.base.records import record
from slip.cases.rows import Block
from slip.clamp.stage import Clamp
from slip.friction.partial import Partial
from slip.friction.stage import Slip
from slip.joint.joint import Joint
from slip.joint.loads import Case, Load
from slip.pressure.stage import Pressure
from slip.verdict.by_standard import judge_standard
from slip.verdict.checks import TIE, Check
from slip.verdict.stage import FAILS, HOLDS, NOT_SOLVED, true_slip

Array = np.ndarray
ENDS = ("given", "other")
NO_LOAD = Load((0.0, 0.0), 0.0, (0.0, 0.0, 0.0))


@record(eq=False)
class Candidate:
    """A deciding check at one end (0 given, 1 other) of C cases: bolt (-1 for none), factor and reserve (NaN for none), whether it was
    solved and whether it fails, each (C,). Where a case has no such end or nothing limits, the reserve is infinite."""

    check: str
    end: int
    bolt: Array
    factor: Array
    reserve: Array
    solved: Array
    failed: Array


def candidate(check: str, end: int, bolt: Array, factor: Array, reserve: Array) -> Candidate:
    """A check that was solved for all cases and holds where its reserve is 1 or more; NaN never is."""
    return Candidate(check, end, bolt, factor, reserve, np.ones(len(reserve), dtype=bool), ~(reserve >= 1))


def governing(candidates: Sequence[Candidate], unknown: Array) -> dict[str, Array]:
    """Code, check, end, bolt, factor and reserve of what governs each case, (C,); a case that is `unknown` is not judged.

    The failed checks go before the others, then the smallest reserve; of equal ones the first.
    """
    reserves, solved, failed = (
        np.stack([getattr(c, name) for c in candidates]) for name in ("reserve", "solved", "failed")
    )
    failed &= solved
    code = np.where(failed.any(0), FAILS, np.where(solved.all(0), HOLDS, NOT_SOLVED))
    ranked = np.where(np.where(failed.any(0), failed, solved), reserves, np.inf)
    first = first_least(ranked.T)
    every = np.arange(len(unknown))
    return {
        "code": np.where(unknown, NOT_SOLVED, code),
        "check": np.array([c.check for c in candidates])[first],
        "end": np.array([c.end for c in candidates])[first],
        "bolt": np.stack([c.bolt for c in candidates])[first, every],
        "factor": np.stack([c.factor for c in candidates])[first, every],
        "reserve": reserves[first, every],
    }


def first_least(values: Array) -> Array:
    """As verdict.checks.first_least, for each row of (C, k)."""
    if not values.size:
        return np.zeros(len(values), dtype=int)
    values = np.where(np.isnan(values), -np.inf, values)
    least = values.min(axis=1, keepdims=True)
    with np.errstate(invalid="ignore"):
        tied = np.where(np.isfinite(least), values <= least + TIE * np.abs(least), values == least)
    found: Array = np.argmax(tied, axis=1)
    return found


def extras(
    joint: Joint, clamp: Clamp, pressure: Pressure, slip: Slip, block: Block, at: Array
) -> tuple[list[Candidate], list[Candidate]]:
    """Listed standards and the limit of true slip at both ends, case by case as a joint file has them judged.

    at (2, C): the state of each end of each case, -1 for none.
    """
    most = joint.required.true_slip
    if not block.count or (not joint.standards and most is None):
        return [], []
    both = tuple((end, NO_LOAD) for end in ENDS)
    cases = tuple(
        Case(name, True, both if other >= 0 else both[:1], None, None, bool(alternates), False, None, None)
        for name, other, alternates in zip(block.names.to_list(), at[1], block.alternating, strict=True)
    )
    joint = replace(joint, cases=cases)
    partial = Partial(joint, clamp, pressure, slip)

    def checks(i: int, end: int) -> list[Check]:
        if at[end, i] < 0:
            return []
        rows = np.array([at[end, i]])
        listed = [judge_standard(joint, clamp, slip, pressure, s, i, ENDS[end], rows).check for s in joint.standards]
        return listed if most is None else [*listed, true_slip(joint, partial, most, i, ENDS[end])]

    first, second = (_columns(joint, [checks(i, end) for i in range(block.count)], end) for end in (0, 1))
    return first, second


def _columns(joint: Joint, listed: list[list[Check]], end: int) -> list[Candidate]:
    """Checks of each case, the same in all that have this end, as columns."""
    bolts = {name: i for i, name in enumerate(joint.pattern.names)}
    names = next(([check.check for check in checks] for checks in listed if checks), [])
    made = []
    for k, name in enumerate(names):
        column = [checks[k] if checks else None for checks in listed]
        made.append(
            Candidate(
                check=name,
                end=end,
                bolt=np.array([-1 if c is None else bolts.get(c.bolt, -1) for c in column]),
                factor=np.full(len(column), np.nan),
                reserve=np.array([np.inf if c is None else _reserve(c) for c in column]),
                solved=np.array([c is None or c.solved for c in column]),
                failed=np.array([c is not None and c.solved and not c.holds for c in column]),
            )
        )
    return made


def _reserve(check: Check) -> float:
    return np.nan if check.reserve_factor is None else check.reserve_factor
