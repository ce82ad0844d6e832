"""The convex problem of one step on one grid, and how far a point of it is from the answer.

Sought are tractions q in Coulomb's discs |q| <= b that minimise 1/2 q.C q - q.(B d - slip before), with the product
sum area a.b; where a load is given, the motion d that carries it is sought with them. What is left over,
s = B d - slip before - C q, is the slip of the step: nothing where a point sticks, along q where it slips.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from slip.base.records import record
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

MOST_NEWTON = 1000  # Newton steps in all on all grids, after which a step is given up; 10 are usual, 300 were seen


def length(a: Array) -> Array:
    """Euclidean length over the first axis."""
    return np.abs(a[0]) if len(a) == 1 else np.hypot(a[0], a[1])


def within(q: Array, bound: Array) -> Array:
    """Radial return: the nearest tractions in the discs."""
    size = length(q)
    over = size > bound
    return np.where(over, q * (bound / np.where(over, size, 1.0)), q)


@dataclass
class Tally:
    """Work so far: applications of C and its near inverse, coarser grids by their share of points; Newton steps."""

    applications: float = 0.0
    near_inverses: float = 0.0
    newton: int = 0


@record(eq=False)
class Problem:
    """One grid's problem.

    bound (*field) [MPa]; target (components, *field): slip at the motion 0 without tractions [mm];
    load (freedoms,) [N, N mm], None when the motion is given.
    displacement_scale [mm, by the product's norm], load_scale [N]: residuals are relative to no less than these.
    gauge: a load as one number [N]. tally: counts the work. share: points of this grid over those of the finest.
    """

    compliance: Compliance
    face: Face
    bound: Array
    target: Array
    load: Array | None
    displacement_scale: float
    load_scale: float
    gauge: Callable[[Array], float]
    tally: Tally
    share: float = 1.0

    @cached_property
    def closed(self) -> Mask:
        """Points that can carry anything."""
        return self.bound > 0.0

    @cached_property
    def largest(self) -> Array:
        """The diagonal that C does not exceed [mm/MPa]."""
        return self.compliance.largest()

    def apply(self, q: Array) -> Array:
        """C q, counted."""
        self.tally.applications += self.share
        return self.compliance.apply(q)

    def product(self, a: Array, b: Array) -> float:
        """sum area a.b"""
        area = self.compliance.area
        return float(np.vdot(a * area, b)) if np.ndim(area) else float(area) * float(np.vdot(a, b))

    def norm(self, a: Array) -> float:
        """Root of the product of a field with itself."""
        return float(np.sqrt(self.product(a, a)))

    def carried(self, q: Array) -> Array:
        """B^T q, the load of tractions q."""
        return self.face.gather(self.compliance.area * q)

    def at(self, traction: Array, displacement: Array, motion: Array) -> Point:
        """The point of the problem with these tractions, C times them, and this motion."""
        slip = self.target - displacement
        if motion.any():
            slip = slip + self.face.spread(motion, self.bound.shape)
        pull = within(traction + slip / self.largest, self.bound) - traction
        scale = max(self.norm(displacement * self.closed), self.displacement_scale)
        error = _ratio(self.norm(self.largest * pull), scale)
        if self.load is None:
            return Point(traction, displacement, motion, slip, pull, scale, error, np.zeros(len(motion)), 0.0)
        short = self.load - self.carried(traction)
        return Point(
            traction, displacement, motion, slip, pull, scale, error, short, _ratio(self.gauge(short), self.load_scale)
        )


@record(eq=False)
class Point:
    """Tractions within their bounds, C times them, and a motion, with what is wrong with them.

    slip = target + B d - C q [mm].
    pull: what a projected-gradient step would add to the tractions [MPa], 0 at the answer.
    scale: size of the displacements [mm, by the product's norm]. error: norm of largest times pull, over the scale.
    short: load that is not carried yet (0 when the motion is given); load_error: its size over the load's scale.
    """

    traction: Array
    displacement: Array
    motion: Array
    slip: Array
    pull: Array
    scale: float
    error: float
    short: Array
    load_error: float

    @property
    def residual(self) -> float:
        """Both errors together."""
        return float(np.hypot(self.error, self.load_error))


def _ratio(part: float, whole: float) -> float:
    if part == 0.0:
        return 0.0
    return part / whole if whole > 0.0 else float("inf")
