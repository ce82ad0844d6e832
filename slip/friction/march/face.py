"""The rigid motions of a face: what a motion displaces, and which load the points' tractions add up to."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from slip.base.records import record

Array = NDArray[np.float64]

ONE_PLACE = 1e-9  # points that lie as near to each other as this, in parts of their positions, bear no moment


@record(eq=False)
class Face:
    """B: one translation (one component), two translations, or two translations and a rotation (with positions).

    components: 1 or 2.
    positions (2, *field) [mm]: the points, when the face may turn; None holds its rotation.

    A motion is (d,), (dx, dy) or (dx, dy, turn about the origin, counter-clockwise) [mm, mm, rad]; the load beside it
    (Q,), (Qx, Qy) or (Qx, Qy, Mz about the origin) [N, N, N mm].
    """

    components: int
    positions: Array | None = None

    def __post_init__(self) -> None:
        if self.components not in (1, 2) or (
            self.positions is not None and (self.components != 2 or len(self.positions) != 2)
        ):
            raise ValueError("a face has one component, or two with or without positions of shape (2, *field)")

    @property
    def freedoms(self) -> int:
        """Number of components of a motion."""
        return self.components + (self.positions is not None)

    def spread(self, motion: Array, shape: tuple[int, ...]) -> Array:
        """B d: displacement [mm] of the points of a field of `shape`, (components, *shape)."""
        moved = np.empty((self.components, *shape))
        moved[:] = np.asarray(motion)[: self.components].reshape(-1, *(1 for _ in shape))
        if self.positions is not None:
            moved[0] -= motion[2] * self.positions[1]
            moved[1] += motion[2] * self.positions[0]
        return moved

    def columns(self, shape: tuple[int, ...]) -> list[Array]:
        """The displacement of the points by a unit of each freedom."""
        return [self.spread(unit, shape) for unit in np.eye(self.freedoms)]

    def gather(self, forces: Array) -> Array:
        """B^T f: the load (freedoms,) of forces f (components, *field) [N] at the points."""
        total = forces.reshape(self.components, -1).sum(1)
        if self.positions is None:
            return total
        return np.append(total, (self.positions[0] * forces[1] - self.positions[1] * forces[0]).sum())

    def gauge(self, weight: Array) -> Callable[[Array], float]:
        """How a load (freedoms,) counts as one force [N].

        Its moment is taken about the middle of `weight` (*field) and divided by the spread of that.
        """
        if self.positions is None or not weight.any():
            return lambda load: float(np.linalg.norm(load[: self.components]))
        axes = tuple(range(1, self.positions.ndim))
        middle = (weight * self.positions).sum(axes) / weight.sum()
        way = self.positions - middle.reshape(2, *(1 for _ in axes))
        spread = float(np.sqrt((weight * way**2).sum() / weight.sum()))
        if spread <= ONE_PLACE * float(np.abs(self.positions).max()):
            return lambda load: float(np.hypot(load[0], load[1]))

        def size(load: Array) -> float:
            moment = float(load[2] - middle[0] * load[1] + middle[1] * load[0])
            return max(float(np.hypot(load[0], load[1])), abs(moment) / spread)

        return size

    def vector(self, given: ArrayLike, what: str) -> Array:
        """A motion or load as an array (freedoms,), from a number where there is one freedom; else ValueError."""
        vector = np.atleast_1d(np.asarray(given, dtype=float))
        if vector.shape != (self.freedoms,) or not np.isfinite(vector).all():
            raise ValueError(f"the {what} must be {self.freedoms} finite number(s), not {given!r}")
        return vector
