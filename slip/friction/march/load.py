"""The tractions and the motion under a given load, and the load above which there are none."""

from __future__ import annotations

import dataclasses

import numpy as np
from numpy.typing import NDArray

from slip.base.errors import InputError, SlipError
from slip.friction.march.face import Face
from slip.friction.march.limit import limit
from slip.friction.march.newton import Active, Border, newton_change
from slip.friction.march.problem import MOST_NEWTON, Point, Problem, length, within
from slip.friction.march.settle import returned, settle

Array = NDArray[np.float64]

# Tuning, held by tests on the number of applications and on hundreds of random problems.
PATIENCE = 6  # joint steps that may go by before the residual has halved
INNER_PART = 0.1  # of the load's error, the tractions at one motion may keep ...
INNER_TOL = 1e-2  # ... but not more than this
MOST_SETTLING = 40  # steps of the tractions at one motion
MOST_TRIALS = 25  # motions along one direction
GENTLE = 0.5  # of the slope at its start, a motion may leave this, or turn it into
DAMPING = 1e-3  # part of the stuck face's stiffness that is added to the tangent at first ...
EASIER = 10.0  # ... and falls by this where a motion was good, by its square where it was timid


class SlipsWholly(SlipError):
    """The load is more than friction carries; `load` is the part `factor` of it at which the face slips as a whole."""

    code = "slips-wholly"

    def __init__(self, factor: float, load: Array) -> None:
        self.factor, self.load = factor, load
        parts = ", ".join(f"{part:.6g}" for part in load)
        super().__init__(
            f"The face slips as a whole at {factor:.6g} of the given load, at ({parts}); beyond that nothing is "
            "computed. Give a smaller load, more clamp or friction, or a motion in place of the load."
        )


def check_limit(face: Face, strength: Array, load: Array) -> None:
    """Raise SlipsWholly where `load` (freedoms,) reaches what the points can carry.

    strength (*field): bound times area of each [N]. Raises InputError (no-clamp) where none can carry anything.
    """
    total = float(strength.sum())
    if not total > 0.0:
        raise InputError(
            code="no-clamp",
            key="bound",
            found="no clamped point",
            expected="friction times pressure above 0 somewhere",
            remedy="clamp the face, or give its motion in place of the load",
        )
    if not load.any():
        return
    if face.positions is None:
        factor = total / float(np.linalg.norm(load))
    elif _carried_elastically(face, strength, load):
        return
    else:
        closed = strength > 0.0
        factor = float(limit(strength[closed], face.positions[:, closed].T, load).factor)
    if factor <= 1.0:
        raise SlipsWholly(factor, factor * load)


def _carried_elastically(face: Face, strength: Array, load: Array) -> bool:
    """Whether forces in proportion to strength and to a rigid motion carry the load: a cheap proof for most loads."""
    columns = face.columns(strength.shape)
    W = np.array([[float((strength * (a * b).sum(0)).sum()) for b in columns] for a in columns])
    size = np.sqrt(np.diag(W))
    if not (size > 0.0).all():
        return False
    motion, rank = np.linalg.lstsq(W / np.outer(size, size), load / size, rcond=1e-9)[::2]
    return bool(rank == len(load) and length(face.spread(motion / size, strength.shape))[strength > 0.0].max() < 1.0)


def carry(problem: Problem, point: Point, tol: float, most: int) -> Point:
    """Tractions and motion under the problem's load, to a residual of `tol`; what has been reached after `most` steps.

    Newton's steps change both together as long as that halves the residual every few steps. Where it does not, one step
    of the convex minimisation over the motion alone is taken: its value is that of the problem at a given motion, its
    slope the load that is not carried, and radial return cannot lose any load there.
    """
    best, waited, damping = point, 0, DAMPING
    for _ in range(most):
        if point.residual <= tol or problem.tally.newton >= MOST_NEWTON:
            break
        change = newton_change(problem, point, Active(problem, point), tol)
        if change is not None:
            dq, du = returned(problem, point, change.traction, change.displacement, tol)
            point = problem.at(point.traction + dq, point.displacement + du, point.motion + change.motion)
        waited += 1
        if point.residual <= 0.5 * best.residual:
            best, waited = point, 0
        if change is None or waited >= PATIENCE:
            best, damping = _minimised(problem, best, tol, damping)
            point, waited = best, 0
    return point if point.residual <= best.residual else best


def _minimised(problem: Problem, point: Point, tol: float, damping: float) -> tuple[Point, float]:
    """One step of the minimisation over the motion, and the damping for the next.

    The direction balances what is short by the tangent stiffness, damped by a part of the stuck face's. The slope along
    it only falls: where some of it is left the objective has fallen; where it has turned by much, the point in between
    is sought, by Newton's rule from beyond (there the points stick again, and the stiffness is the one that counts) or
    by halving.
    """
    inner = max(0.5 * tol, min(INNER_TOL, INNER_PART * point.load_error))
    point = settle(problem, point, inner, MOST_SETTLING)
    if point.residual <= tol:
        return point, damping
    tangent = Border(Active(problem, point), True)
    stuck = Border(Active(problem, dataclasses.replace(point, traction=np.zeros_like(point.traction))), True)
    motion = tangent.motion_under(point.short, damping * stuck.stiffness)
    first = float(point.short @ motion)
    low, high, part = 0.0, np.inf, 1.0
    for _ in range(MOST_TRIALS):
        traction = within(point.traction + part * tangent.moved(motion), problem.bound)
        displacement = point.displacement + problem.apply(traction - point.traction)
        trial = settle(problem, problem.at(traction, displacement, point.motion + part * motion), inner, MOST_SETTLING)
        slope = float(trial.short @ motion)
        if slope > GENTLE * first and high == np.inf:
            return trial, damping / EASIER**2
        if abs(slope) <= GENTLE * first:
            return trial, damping / EASIER
        if slope > 0.0:
            low, part = part, 0.5 * (part + high)
            continue
        high = part
        stiffness = float(motion @ Border(Active(problem, trial), True).stiffness @ motion)
        part = high + slope / max(stiffness, -slope / high)
        if not low < part < high:
            part = 0.5 * (low + high)
    return trial, damping
