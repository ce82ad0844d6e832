"""The gross-slip load of points under Coulomb friction, with its proof: tractions that carry it, a motion it cannot exceed.

The two theorems of limit analysis. Tractions within their bounds that balance `factor` times the load prove that the factor is reached;
a rigid motion on which the load does unit work proves that the work of the bounds on it is not exceeded. Newton's descent to the
motion of least work supplies both; a second-order-cone programme does where that fails, mostly with bounds that are orders of magnitude
apart. However it got there, the answer is as good as the gap between the two.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.friction.march.cone import Array, Index
from slip.friction.march.descent import least_work
from slip.friction.march.frame import Frame, by_cone

GAP_ALLOWED = 1e-8  # relative; a larger gap is not an answer
CHUNK = 40_000  # points worked on together: few enough for their arrays to stay in the cache, enough to hide the calls


@record(eq=False)
class Limit:
    """A gross-slip load with its proof; leading axes `...` are those of the cases, n the points.

    factor (...): the load reaches this multiple, proven by `tractions`; inf for a load of zero, 0 for one that cannot be carried.
    upper (...): it reaches no more than this, proven by `motion`.
    gap (...): (upper - factor)/upper, at most 1e-8, usually below 1e-12; 0 where both are 0 or both infinite.
    motion (..., 3): shift of the origin and turn (vx, vy, w) on which the load does unit work [1/N, 1/N, 1/(N mm)]; 0 for no load.
    centre (..., 2): instant centre [mm]; (inf, inf) where the motion is a pure shift, or where there is none.
    tractions (..., 2, n): forces of the points at the limit [N]: in balance with factor times the load, each within its bound.
    iterations (...): steps of the method that found the answer, Newton's or the cone programme's; 0 where it needed none.
    """

    factor: Array
    upper: Array
    gap: Array
    motion: Array
    centre: Array
    tractions: Array
    iterations: Index


def limit(bound: ArrayLike, positions: ArrayLike, load: ArrayLike) -> Limit:
    """Largest factor at which forces within `bound` at `positions` can balance factor times `load`.

    bound (..., n): Coulomb bound of each point, friction times faces times clamp [N], >= 0; 0 is an open point.
    positions (n, 2) or (..., n, 2): the points in the plane [mm].
    load (..., 3): forces Vx, Vy [N] and moment Mz about the origin, counter-clockwise [N mm].
    Leading axes broadcast; the cases are solved together, each as if it were alone.

    Range: rigid bodies; bounds that do not depend on the slip; bounds apart by up to twelve orders of magnitude.
    Raises ValueError for shapes, signs or numbers without meaning, NotConverged where a gap of 1e-8 cannot be proven.
    Source limit, derived.
    """
    b, r, c, lead = checked(bound, positions, load)
    n = b.shape[-1]
    # Cases last: sums over points then run along memory.
    b, r, c = (np.ascontiguousarray(a) for a in (b.T, r.transpose(2, 1, 0), c.T))
    cases = b.shape[1]
    factor, upper, iterations = np.empty(cases), np.empty(cases), np.empty(cases, dtype=np.int64)
    motion, tractions = np.empty((3, cases)), np.empty((2, n, cases))
    width = max(1, CHUNK // n)
    # Cases without load, and last digits, pass through 0/0: what comes of it is judged by the gap alone.
    with np.errstate(all="ignore"):
        for first in range(0, cases, width):
            part = slice(first, first + width)
            solved = _solve(b[:, part], r[..., part], c[:, part])
            factor[part], upper[part], motion[:, part], tractions[..., part], iterations[part] = solved
    return proven(lead, factor, upper, motion.T, np.moveaxis(tractions, -1, 0), iterations)


def proven(
    lead: tuple[int, ...], factor: Array, upper: Array, motion: Array, tractions: Array, iterations: Index
) -> Limit:
    """The record for flat cases (first axis) in the shape `lead`, or NotConverged where the two sides of a proof are too far apart."""
    with np.errstate(divide="ignore", invalid="ignore"):
        excess = np.where(upper == factor, 1.0, factor / upper)
        centre = np.where(motion[:, 2:] == 0.0, np.inf, np.stack([-motion[:, 1], motion[:, 0]], -1) / motion[:, 2:])
    open_cases = np.flatnonzero(~(np.abs(1.0 - excess) <= GAP_ALLOWED))
    if open_cases.size:
        case = open_cases[0]
        raise NotConverged(
            "limit-gap",
            f"The gross-slip load could not be proven to 1e-8: it lies between {factor[case]:.9g} and {upper[case]:.9g} times the load "
            f"(case {case}; {open_cases.size} of {excess.size} cases). Measure positions and moment from a point inside the pattern, join "
            "points that coincide, and leave out bounds below 1e-12 of the largest.",
        )
    # Rounding can lift the one side over the other: the lower is believed.
    factor, gap = np.minimum(factor, upper), np.maximum(1.0 - excess, 0.0)
    return Limit(
        factor=factor.reshape(lead)[()],
        upper=upper.reshape(lead)[()],
        gap=gap.reshape(lead)[()],
        motion=motion.reshape(*lead, 3),
        centre=centre.reshape(*lead, 2),
        tractions=tractions.reshape(*lead, *tractions.shape[1:]),
        iterations=iterations.reshape(lead)[()],
    )


def checked(bound: ArrayLike, positions: ArrayLike, load: ArrayLike) -> tuple[Array, Array, Array, tuple[int, ...]]:
    """Bounds (cases, n), positions (cases, n, 2), loads (cases, 3) and the leading shape, or ValueError."""
    b, r, c = (np.asarray(a, dtype=float) for a in (bound, positions, load))
    if b.ndim < 1 or b.shape[-1] == 0 or r.shape[-2:] != (b.shape[-1], 2) or c.shape[-1:] != (3,):
        raise ValueError(
            f"bound (..., n), positions (..., n, 2) and load (..., 3) are needed, not {b.shape}, {r.shape}, {c.shape}"
        )
    if not (np.isfinite(b).all() and np.isfinite(r).all() and np.isfinite(c).all() and (b >= 0.0).all()):
        raise ValueError("bounds must be finite and not negative, positions and loads finite")
    n = b.shape[-1]
    lead = np.broadcast_shapes(b.shape[:-1], r.shape[:-2], c.shape[:-1])
    b = np.broadcast_to(b, (*lead, n)).reshape(-1, n)
    r = np.broadcast_to(r, (*lead, n, 2)).reshape(-1, n, 2)
    c = np.broadcast_to(c, (*lead, 3)).reshape(-1, 3)
    return b, r, c, lead


def _solve(b: Array, r: Array, c: Array) -> tuple[Array, Array, Array, Array, Index]:
    """Factor, upper bound, motion, tractions, iterations of a chunk of cases."""
    frame = Frame(b, r, c, b > 0.0)
    # All strength in one place: it carries a force through that place, and nothing else.
    through = (frame.reach == 0.0) & (frame.force > 0.0) & (frame.moment == 0.0)
    factor, iterations = np.where(through, b.sum(0) / frame.force, 0.0), np.zeros(b.shape[1], dtype=np.int64)
    tractions = b * np.where(through, frame.axis[:, None], 0.0)
    found = least_work(frame.bound, frame.place, frame.pull, frame.twist)
    hard = np.flatnonzero(~found.sure)
    if hard.size:
        by_cone(frame, found, hard)
    go = frame.go
    tractions[..., go], factor[go], iterations[go] = frame.forces(found), found.factor * frame.scale, found.steps
    motion, upper = frame.bounding(b, found)
    motion[:, frame.idle] = 0.0
    factor[frame.idle] = upper[frame.idle] = np.inf
    return factor, upper, motion, tractions, iterations
