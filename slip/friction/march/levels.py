"""A start from coarser grids: the coarse problem that asks for the same correction, its change brought back."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from slip.friction.compliance.protocol import Transfer
from slip.friction.march.face import Face
from slip.friction.march.newton import Active
from slip.friction.march.problem import Point, Problem, length, within

Array = NDArray[np.float64]
Solver = Callable[[Problem, Point, float, int], Point]

# Tuning, held by tests on the number of applications.
COARSE_PART = 1e-2  # of its residual at the start, a coarse grid's answer may keep
COARSE_TOL = 1e-4  # and it has to be at least as good as this, ...
COARSE_STEPS = 20  # in no more steps than these, or it is not used: its load may be more than the coarse face can carry


def from_coarse(problem: Problem, point: Point, tol: float, solver: Solver) -> Point:
    """`point`, moved by what the coarser grids find where that is a better start; never raises.

    The coarse target is set so that at the means of the fine tractions the coarse slip is the mean of the fine slip:
    the coarse problem asks for nothing where the fine one does. So it serves cold and warm starts alike.
    """
    transfer = problem.compliance.coarser()
    if transfer is None or point.residual <= tol:
        return point
    coarse, first = _coarse(problem, point, transfer)
    tol_coarse = max(tol, min(COARSE_TOL, COARSE_PART * first.residual))
    end = solver(coarse, from_coarse(coarse, first, tol_coarse, solver), tol_coarse, COARSE_STEPS)
    if not end.residual <= tol_coarse:
        return point
    better = _brought_back(problem, point, coarse, end.traction - first.traction, end, transfer)
    return better if better.residual < point.residual else point


def _coarse(problem: Problem, point: Point, transfer: Transfer) -> tuple[Problem, Point]:
    """The coarse problem that corresponds to a fine point, and its point."""
    restrict, shape, positions = transfer.restrict, problem.bound.shape, problem.face.positions
    closed = restrict(problem.closed.astype(float))
    slip = restrict(point.slip * problem.closed) / np.where(closed > 0.0, closed, 1.0)
    coarse = dataclasses.replace(
        problem,
        compliance=transfer.compliance,
        face=Face(
            problem.face.components, None if positions is None else restrict(positions) / restrict(np.ones(shape))
        ),
        bound=restrict(problem.bound),
        target=slip,
        share=problem.share * float(np.prod(transfer.compliance.shape) / np.prod(shape)),
    )
    traction = restrict(point.traction)
    displacement = coarse.apply(traction) if traction.any() else traction
    load = None if problem.load is None else coarse.carried(traction) + point.short
    coarse = dataclasses.replace(coarse, target=slip + displacement, load=load)
    return coarse, coarse.at(traction, displacement, np.zeros_like(point.motion))


def _brought_back(
    problem: Problem, point: Point, coarse: Problem, change: Array, end: Point, transfer: Transfer
) -> Point:
    """The fine point with the coarse change, in parts of the bounds, and on the rim wherever the coarse cell slips."""
    parts = change / np.where(coarse.closed, coarse.bound, 1.0)
    traction = point.traction + problem.bound * transfer.prolong(parts)
    size = length(traction)
    rim = (transfer.prolong(Active(coarse, end).slipping.astype(float)) > 0.0) & (size > 0.0)
    traction = within(np.where(rim, traction * (problem.bound / np.where(rim, size, 1.0)), traction), problem.bound)
    displacement = point.displacement + problem.apply(traction - point.traction)
    return problem.at(traction, displacement, point.motion + end.motion)
