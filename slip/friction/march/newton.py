"""Newton's step on the points that may still move: sticking points in full, slipping ones along their discs' rim."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from slip.base.records import record
from slip.friction.march.problem import Point, Problem, length

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

# Tuning, held by tests on the number of applications and on hundreds of random problems.
ON_RIM = 1e-9  # a traction this near to its bound, relatively, is on it
GRAZING = 1e-4  # slip below this part of the residual times what friction displaces is a remainder: the point sticks
INNER = 0.03  # conjugate gradients bring the residual down to this part of it ...
ENOUGH = 0.3  # ... or to this part of what is allowed in the end
MOST_INNER = 200  # 2 to 10 are usual
TIED = 1e-12  # motions that the points resist less than this, over what a stuck face resists at least, are left alone


@record(eq=False)
class Change:
    """A change of tractions [MPa], C times it [mm], and the change of motion that goes with it."""

    traction: Array
    displacement: Array
    motion: Array


class Active:
    """The set of slipping points, the projector P on what may move, and the curvature of the discs.

    Along the rim the traction turns with the slip s: that adds s.n/b to the compliance, n the traction's direction.
    """

    def __init__(self, problem: Problem, point: Point) -> None:
        q, divisor = point.traction, np.where(problem.closed, problem.bound, 1.0)
        n = q / divisor
        outward = (point.slip * n).sum(0)
        self.problem = problem
        grazing = GRAZING * min(point.residual, 1.0) * problem.largest * problem.bound
        self.slipping: Mask = problem.closed & (length(n) >= 1.0 - ON_RIM) & (outward > grazing)
        self.curvature: Array = np.zeros(problem.bound.shape)
        self._rim: Array | None = None
        self.moving: Mask = problem.closed
        if len(q) == 1:
            self.moving = problem.closed & ~self.slipping
        elif self.slipping.any():
            self._rim = n * self.slipping
            self.curvature = np.where(self.slipping, outward / divisor, 0.0)
        self._near_inverse = problem.compliance.near_inverse(self.curvature, ~self.moving)

    def project(self, a: Array) -> Array:
        """P a."""
        a = a * self.moving
        return a if self._rim is None else a - self._rim * (self._rim * a).sum(0)

    def near_inverse(self, a: Array) -> Array:
        """P M a, with M near to the inverse of C + curvature."""
        self.problem.tally.near_inverses += self.problem.share
        return self.project(self._near_inverse(a))


class Border:
    """Keeps the load of what conjugate gradients add at 0, in the metric of the near inverse.

    Without columns, when the motion is given, it does nothing.
    """

    def __init__(self, active: Active, given_load: bool) -> None:
        self.problem, self.freedoms = active.problem, active.problem.face.freedoms
        columns = self.problem.face.columns(self.problem.bound.shape) if given_load else []
        self.columns = [active.project(column) for column in columns]
        self.answers = [active.near_inverse(column) for column in self.columns]
        self.stiffness = np.array([[self.problem.product(a, b) for b in self.answers] for a in self.columns])
        stuck = self.problem.closed / np.sqrt(self.problem.largest)
        sizes = np.array([self.problem.norm(stuck * column) for column in columns])
        self._size = np.where(sizes > 0.0, sizes, 1.0)

    def motion_under(self, load: Array, more: Array | float = 0.0) -> Array:
        """The motion (freedoms,) under a load, by the near inverse's tangent stiffness and some more."""
        scaled = (self.stiffness + more) / np.outer(self._size, self._size)
        values, vectors = np.linalg.eigh(0.5 * (scaled + scaled.T))
        firm = values > TIED
        return vectors @ (firm / np.where(firm, values, 1.0) * (vectors.T @ (load / self._size))) / self._size

    def moved(self, motion: Array) -> Array:
        """Tractions that a motion brings forth."""
        return _sum(motion, self.answers, np.zeros_like(self.answers[0]))

    def split(self, z: Array) -> tuple[Array, Array]:
        """Tractions without their load, and the motion that took it away."""
        if not self.columns:
            return z, np.zeros(self.freedoms)
        motion = -self.motion_under(np.array([self.problem.product(column, z) for column in self.columns]))
        return _sum(motion, self.answers, z), motion

    def left(self, r: Array, motion: Array) -> Array:
        """What a motion leaves of a residual."""
        return _sum(motion, self.columns, r)


def _sum(factors: Array, fields: list[Array], start: Array) -> Array:
    for factor, field in zip(factors, fields, strict=False):
        start = start + factor * field
    return start


def newton_change(problem: Problem, point: Point, active: Active, tol: float) -> Change | None:
    """Conjugate gradients for P (C + curvature) P dq - P B dd = P s, with B^T dq = what is short of a given load.

    None where nothing can move.
    """
    if not active.moving.any():
        return None
    problem.tally.newton += 1
    loaded, right = problem.load is not None, active.project(point.slip)
    border = Border(active, loaded)
    dq = border.moved(border.motion_under(point.short)) if loaded else np.zeros_like(right)
    du = problem.apply(dq) if loaded else np.zeros_like(right)
    done = active.project(du + active.curvature * dq)
    goal = max(INNER * (problem.norm(right) + problem.norm(done)), ENOUGH * tol * point.scale)
    r, p, before, dd = right - done, np.zeros_like(right), np.inf, np.zeros(border.freedoms)
    for _ in range(MOST_INNER):
        if not loaded and problem.norm(r) <= goal:
            break
        z, dd = border.split(active.near_inverse(r))
        if loaded and problem.norm(border.left(r, dd)) <= goal:
            break
        gain = problem.product(r, z)
        p = z + (gain / before) * p
        before = gain
        u = problem.apply(p)
        answer = active.project(u + active.curvature * p)
        stiff = problem.product(p, answer)
        if not (gain > 0.0 and stiff > 0.0):
            break
        dq, du, r = dq + gain / stiff * p, du + gain / stiff * u, r - gain / stiff * answer
    return Change(dq, du, dd)
