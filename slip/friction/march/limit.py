"""The gross-slip load of points under Coulomb friction, with its proof: tractions that carry it, a motion it cannot exceed.

The two theorems of limit analysis. Tractions within their bounds that balance `factor` times the load prove that the factor is reached;
a rigid motion on which the load does unit work proves that the work of the bounds on it is not exceeded. A second-order-cone
programme supplies both. However it got there, the answer is as good as the gap between the two.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.friction.march.cone import Array, Index, cross, dot, largest_factor, length, turned

GAP_ALLOWED = 1e-8  # relative; a larger gap is not an answer
CHUNK = 15_000  # points worked on together: their arrays stay in the cache
ON_LINE = 1e-15  # a line of action this near to a point, in parts of the lengths at hand, goes through it
TIE = 1e-13  # turning about a point or pure shifting is preferred where it bounds as well as this


@record(eq=False)
class Limit:
    """A gross-slip load with its proof; leading axes `...` are those of the cases, n the points.

    factor (...): the load reaches this multiple, proven by `tractions`; inf for a load of zero, 0 for one that cannot be carried.
    upper (...): it reaches no more than this, proven by `motion`.
    gap (...): (upper - factor)/upper, at most 1e-8, usually 1e-12; 0 where both are 0 or both infinite.
    motion (..., 3): shift of the origin and turn (vx, vy, w) on which the load does unit work [1/N, 1/N, 1/(N mm)]; 0 for no load.
    centre (..., 2): instant centre [mm]; (inf, inf) where the motion is a pure shift, or where there is none.
    tractions (..., 2, n): forces of the points at the limit [N]: in balance with factor times the load, each within its bound.
    iterations (...): steps of the cone programme; 0 where the answer needed none.
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
    every = np.arange(b.shape[1])
    # Seen from the strongest point: where one bound outweighs the rest, its small motion must not drown in rounding.
    pivot = b.argmax(0)
    home = r[:, pivot, every]
    arm = r - home[:, None]
    reach = length(np.where(b > 0.0, arm, 0.0)).max(0)
    force, moment = length(c), _moment(home, r, c)
    axis = np.where(force > 0.0, c[:2] / force, [[1.0], [0.0]])

    # All strength in one place: it carries a force through that place, and nothing else.
    through = (reach == 0.0) & (force > 0.0) & (moment == 0.0)
    factor = np.where(through, b.sum(0) / force, 0.0)
    share = np.where(through, axis[:, None], np.zeros_like(r))
    shift, turn, iterations = np.zeros_like(home), np.zeros_like(force), np.zeros(every.size, dtype=np.int64)

    go = np.flatnonzero((reach > 0.0) & ((force > 0.0) | (moment != 0.0)))
    if go.size:
        bound, long, strong = b[:, go], reach[go], b[:, go].max(0)
        size = np.maximum(force[go], np.abs(moment[go] / long))
        frame = np.array([dot(axis[:, None, go], arm[..., go]), cross(axis[:, None, go], arm[..., go])]) / long
        t, s, w, f, iterations[go] = largest_factor(bound / strong, frame, force[go] / size, moment[go] / long / size)
        share[..., go], factor[go], turn[go] = turned(axis[:, None, go], t), f * strong / size, w / long
        # The point that moves least holds the motion to the most digits.
        speed = length(s) * strong / bound
        pivot[go] = np.where(bound > 0.0, speed, np.inf).argmin(0)
        least = s[:, pivot[go], np.arange(go.size)] * strong / b[pivot[go], go]
        shift[:, go] = turned(axis[:, go], least)

    motion, upper = _bounding(b, r, c, r[:, pivot, every], shift, turn)
    idle = (force == 0.0) & (c[2] == 0.0)
    motion[:, idle] = 0.0
    factor[idle] = upper[idle] = np.inf
    return factor, upper, motion, b * share, iterations


def _moment(point: Array, r: Array, c: Array) -> Array:
    """Moment of the loads c about `point`; 0 where it is no more than the rounding of the data."""
    moment = c[2] - cross(point, c)
    return np.where(np.abs(moment) <= ON_LINE * (np.abs(c[2]) + length(c) * length(r).max(0)), 0.0, moment)


def _bounding(b: Array, r: Array, c: Array, pivot: Array, shift: Array, turn: Array) -> tuple[Array, Array]:
    """The best of three bounding motions, about the origin: turning about the pivot, a pure shift along the force, the one found."""
    none = np.zeros_like(turn)
    arm = r - pivot[:, None]
    moment = _moment(pivot, r, c)
    about = np.array([[none, none, 1.0 / moment], [*(c[:2] / dot(c, c)), none], [*shift, turn]])
    about[2] /= dot(c, shift) + moment * turn
    work = np.array([(b * length(np.array([vx - w * arm[1], vy + w * arm[0]]))).sum(0) for vx, vy, w in about])
    work[~np.isfinite(work)] = np.inf
    best, every = (work * [[1.0], [1.0], [1.0 + TIE]]).argmin(0), np.arange(turn.size)
    vx, vy, w = about[best, :, every].T
    # Formed like this, a pivot that rests is at rest to the last digit for whoever multiplies it out again.
    return np.array([vx + w * pivot[1], vy - w * pivot[0], w]), work[best, every]
