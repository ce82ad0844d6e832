"""How the group limit sees its cases: from their strongest point, x along the force, lengths in parts of the reach.

Arrays hold the components first, then the points, then the cases: (2, n, cases), (n, cases), (cases,). Division by zero is left to
the caller's error state.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from slip.friction.march.cone import Array, Index, cross, dot, largest_factor, length, turned
from slip.friction.march.motions import Found

ON_LINE = 1e-15  # a line of action this near to a point, in parts of the lengths at hand, goes through it
TIE = 1e-13  # turning about a point or pure shifting is preferred where it bounds as well as this


class Frame:
    """Bounds b (n, cases), positions r (2, n, cases), loads c (3, cases); points that `count` make the reach.

    `go` are the cases with a load and an arm. Of these alone: bound, place, pull (force along x), twist, as the solvers ask for them;
    `strong` and `size`, the units of bound and load, and `scale` = strong/size, that of the factor.
    """

    def __init__(self, b: Array, r: Array, c: Array, count: NDArray[np.bool_]) -> None:
        self.b, self.r, self.c = b, r, c
        every = np.arange(b.shape[1])
        # Seen from the strongest point: where one bound outweighs the rest, its small motion must not drown in rounding.
        self.pivot = b.argmax(0)
        self.home = r[:, self.pivot, every]
        arm = r - self.home[:, None]
        reach = np.sqrt(np.where(count, dot(arm, arm), 0.0).max(0))
        self.force, self.moment = length(c), moment_about(self.home, r, c)
        self.axis = np.where(self.force > 0.0, c[:2] / self.force, [[1.0], [0.0]])
        self.reach = reach
        self.idle = (self.force == 0.0) & (c[2] == 0.0)
        self.go = go = np.flatnonzero((reach > 0.0) & ((self.force > 0.0) | (self.moment != 0.0)))
        if go.size < every.size:
            arm, b = arm[..., go], b[:, go]
        self.long, self.strong = reach[go], b.max(0)
        self.size = np.maximum(self.force[go], np.abs(self.moment[go] / self.long))
        self.scale = self.strong / self.size
        axis = self.axis[:, go] / self.long
        self.bound, self.place = b / self.strong, np.array([dot(axis[:, None], arm), cross(axis[:, None], arm)])
        self.pull, self.twist = self.force[go] / self.size, self.moment[go] / self.long / self.size

    def forces(self, found: Found) -> Array:
        """Forces found for the cases `go`, in the axes of the positions and in newtons."""
        return turned((self.axis[:, self.go] * self.strong)[:, None], found.forces)

    def bounding(self, b: Array, found: Found) -> tuple[Array, Array]:
        """Motions about the origin, and the work of the bounds b on them; of all cases."""
        pivot, shift, turn = self.pivot.copy(), np.zeros_like(self.home), np.zeros_like(self.force)
        # The point that moves least holds the motion to the most digits.
        pivot[self.go], turn[self.go] = found.pivot, found.turn / self.long
        shift[:, self.go] = turned(self.axis[:, self.go], found.slip)
        return _bounding(b, self.r, self.c, self.r[:, pivot, np.arange(pivot.size)], shift, turn)


def by_cone(frame: Frame, found: Found, those: Index) -> None:
    """Put the answers of the cone programme for the cases `those` of the ones that go into `found`."""
    bound = frame.bound[:, those]
    t, s, w, f, steps = largest_factor(bound, frame.place[..., those], frame.pull[those], frame.twist[those])
    # Slips times bounds come back.
    near = np.where(bound > 0.0, length(s) / bound, np.inf).argmin(0)
    at = (near, np.arange(those.size))
    found.forces[..., those], found.factor[those], found.steps[those] = bound * t, f, steps
    found.pivot[those], found.turn[those] = near, w
    found.slip[:, those] = np.array([s[0][at], s[1][at]]) / bound[at]


def moment_about(point: Array, r: Array, c: Array) -> Array:
    """Moment of the loads c about `point`; 0 where it is no more than the rounding of the data."""
    moment = c[2] - cross(point, c)
    return np.where(np.abs(moment) <= ON_LINE * (np.abs(c[2]) + length(c) * length(r).max(0)), 0.0, moment)


def _bounding(b: Array, r: Array, c: Array, pivot: Array, shift: Array, turn: Array) -> tuple[Array, Array]:
    """The best of three bounding motions, about the origin: turning about the pivot, a pure shift along the force, the one found."""
    none = np.zeros_like(turn)
    arm = r - pivot[:, None]
    moment = moment_about(pivot, r, c)
    about = np.array([[none, none, 1.0 / moment], [*(c[:2] / dot(c, c)), none], [*shift, turn]])
    about[2] /= dot(c, shift) + moment * turn
    (ux, uy), (vx, vy, w) = arm, about[2]
    arms = (b * np.sqrt(ux * ux + uy * uy)).sum(0)
    ux, uy = vx - w * arm[1], vy + w * arm[0]
    slips = (b * np.sqrt(ux * ux + uy * uy)).sum(0)
    work = np.array([arms * np.abs(about[0, 2]), b.sum(0) * length(about[1]), slips])
    work[~np.isfinite(work)] = np.inf
    best, every = (work * [[1.0], [1.0], [1.0 + TIE]]).argmin(0), np.arange(turn.size)
    vx, vy, w = about[best, :, every].T
    # Formed like this, a pivot that rests is at rest to the last digit for whoever multiplies it out again.
    return np.array([vx + w * pivot[1], vy - w * pivot[0], w]), work[best, every]
