"""The tractions at a given motion: Newton's steps on the active set, held back where the objective does not fall."""

from __future__ import annotations

import dataclasses

import numpy as np
from numpy.typing import NDArray

from slip.friction.march.newton import Active, Change, newton_change
from slip.friction.march.problem import MOST_NEWTON, Point, Problem, within

Array = NDArray[np.float64]

# Tuning, held by tests on the number of applications and on hundreds of random problems.
SHORTENED = (1.0, 0.25, 0.06, 0.015, 0.004)  # parts of a step that are tried before a projected-gradient step
SHARE_OF_PROMISE = 0.1  # of what a projected-gradient step promises, a step has to bring
NO_RETURN = 1e-3  # of the tolerance: a radial return that changes less needs no application of C


def settle(problem: Problem, point: Point, tol: float, most: int) -> Point:
    """The tractions at the motion of `point`, to an error of `tol`; what has been reached after `most` steps."""
    held = dataclasses.replace(problem, load=None)
    for _ in range(most):
        if point.error <= tol or problem.tally.newton >= MOST_NEWTON:
            break
        point = _rewarded(held, point, newton_change(held, point, Active(held, point), tol), tol)
    return problem.at(point.traction, point.displacement, point.motion)


def _rewarded(problem: Problem, point: Point, change: Change | None, tol: float) -> Point:
    """The longest step along the change that the objective rewards, else a projected-gradient step: that one always.

    The fall is computed from the change itself; as a difference of two totals it would drown in rounding.
    """
    promise = 0.5 * problem.product(problem.largest * point.pull, point.pull)
    if change is not None:
        for part in SHORTENED:
            dq, du = returned(problem, point, part * change.traction, part * change.displacement, tol)
            if problem.product(dq, 0.5 * du - point.slip) <= -SHARE_OF_PROMISE * promise:
                return problem.at(point.traction + dq, point.displacement + du, point.motion)
    return problem.at(point.traction + point.pull, point.displacement + problem.apply(point.pull), point.motion)


def returned(problem: Problem, point: Point, dq: Array, du: Array, tol: float) -> tuple[Array, Array]:
    """What is left of a change of tractions after radial return, and C times it."""
    left = within(point.traction + dq, problem.bound) - point.traction
    if problem.norm(problem.largest * (left - dq)) > NO_RETURN * tol * point.scale:
        du = problem.apply(left)
    return left, du
