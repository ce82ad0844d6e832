"""Which cases have been seen, as 64-bit marks of their names: many of them, asked about and added chunk by chunk."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.uint64]


class Marks:
    """Sorted runs whose sizes at least double from one to the next, so that a mark is moved only a few times."""

    def __init__(self) -> None:
        self._runs: list[Array] = []

    def has_any(self, marks: Array) -> bool:
        """Whether any of the marks was added before."""
        for run in self._runs:
            at = np.minimum(np.searchsorted(run, marks), len(run) - 1)
            if (run[at] == marks).any():
                return True
        return False

    def add(self, marks: Array) -> None:
        """Add marks, in any order."""
        if not marks.size:
            return
        self._runs.append(np.sort(marks))
        while len(self._runs) > 1 and self._runs[-2].size < 2 * self._runs[-1].size:
            self._runs.append(np.sort(np.concatenate([self._runs.pop(), self._runs.pop()])))
