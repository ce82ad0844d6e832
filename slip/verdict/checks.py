"""One check: a factor held against its requirement, for one case, end and bolt."""

from __future__ import annotations

import numpy as np

from slip.base.records import record

TIE = 1e-9  # factors closer than this, relative, are equal: the first in file order governs


@record
class Check:
    """Name of the check as in the JSON result; case, end and bolt where it speaks of one ('' otherwise).

    safety and load_factor: the two factors, None where the check has no such factor, infinite where nothing limits.
    reserve_factor: factor over required, infinite likewise, None when it could not be computed. solved: False when
    something that decides could not be computed; then `holds` is False and `reason` says why.
    """

    check: str
    case: str
    end: str
    bolt: str
    safety: float | None
    load_factor: float | None
    required: float | None
    reserve_factor: float | None
    holds: bool
    decides: bool
    reason: str
    solved: bool = True

    def factor(self, grows: str) -> float | None:
        """The factor that is held against the requirement: the one whose share of it is the reserve."""
        both = (self.load_factor, self.safety) if grows == "all loads" else (self.safety, self.load_factor)
        given = [factor for factor in both if factor is not None]
        held = [
            f
            for f in given
            if self.required and self.reserve_factor is not None and f / self.required == self.reserve_factor
        ]
        return next(iter([*held, *given]), None)


def first_least(values: np.ndarray) -> int:
    """Index of the smallest value; of values that tie within 1e-9 the first. NaN counts as smallest: it is never a pass."""
    values = np.where(np.isnan(values), -np.inf, values)
    least = values.min()
    if not np.isfinite(least):
        return int(np.argmin(values))
    return int(np.argmax(values <= least + TIE * abs(least)))
