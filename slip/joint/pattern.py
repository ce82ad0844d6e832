"""The bolt pattern."""

from __future__ import annotations

import numpy as np

from slip.base.records import record

Array = np.ndarray


@record(eq=False)
class Pattern:
    """Bolt names and positions, shape (n, 2) in mm, in file order."""

    names: tuple[str, ...]
    positions: Array

    @property
    def count(self) -> int:
        """Number of bolts."""
        return len(self.names)

    @property
    def centroid(self) -> Array:
        """Centroid of all bolts as equal springs, shape (2,) in mm."""
        return self.positions.mean(axis=0)

    @property
    def arms(self) -> Array:
        """Positions from the centroid, shape (n, 2) in mm."""
        return self.positions - self.centroid

    @property
    def spacing(self) -> Array:
        """Distance of each bolt to its nearest neighbour, shape (n,) in mm; infinite for a single bolt."""
        gap = np.linalg.norm(self.positions[:, None, :] - self.positions[None, :, :], axis=-1)
        np.fill_diagonal(gap, np.inf)
        return gap.min(axis=1)
