"""The gross-slip load when the bounds change with the load: separating forces relieve a joint, pressing ones are credited to it.

All loads grow by one factor f; the bound of a point is max(0, bound - f relief). Divided by f this falls as f rises, so the factors
that can be carried reach from 0 to one largest value, and the tractions that prove it prove every smaller factor in proportion.

Newton's descent with the bounds of the factor that each motion allows finds it; what that leaves (mostly loads that pressing alone
carries) is searched with limits of fixed bounds.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from slip.base.records import record
from slip.friction.march.cone import Array, Index, length
from slip.friction.march.descent import least_work
from slip.friction.march.frame import Frame
from slip.friction.march.limit import CHUNK, Limit, checked, limit, proven
from slip.friction.march.motions import crossing

GAP_SOUGHT = 2e-12  # relative; the solver behind each step proves about 1e-12
GAP_FAIR = 1e-11  # no more is asked of the two sides
MOST_STEPS = 60  # 3 to 6 are usual
# How far below the upper bound its bounds are taken, and what they may then miss of the factor.
STEPS_BACK = (1e-11, 0.0), (1e-10, 0.0), (1e-9, 0.0), (8e-9, 0.0), (0.0, GAP_SOUGHT)


def relieved_factor(bound: ArrayLike, relief: ArrayLike, slip: ArrayLike) -> Array:
    """Smallest f at which the work of the bounds on one motion, sum of max(0, bound - f relief) slip, is no more than f.

    bound (..., n): bound of each point without load [N], >= 0.
    relief (..., n): fall of the bound per unit of factor [N]; negative where the load presses the point.
    slip (..., n): slip of each point in a motion on which the load does unit work [1/N], finite, >= 0.
    Axes broadcast, the last is summed. One point alone: n = 1 and slip 1/|V|. The force alone, without its moment: slip 1/|V| for all.

    Returns (...); inf where the work keeps ahead of every f. Exact: the points open one after the other, and each set of points that
    are still closed gives a linear equation.
    Raises ValueError for a slip that is not finite (a load of zero has no such motion).
    Source limit, derived.
    """
    b, q, s = np.broadcast_arrays(*(np.asarray(a, dtype=float) for a in (bound, relief, slip)))
    if not np.isfinite(s).all():
        raise ValueError("slips must be finite: a load of zero has no motion of unit work")
    with np.errstate(divide="ignore", invalid="ignore"):
        return crossing(*(np.moveaxis(a, -1, 0) for a in (b, q, s)))[()]


def limit_with_relief(bound: ArrayLike, relief: ArrayLike, positions: ArrayLike, load: ArrayLike) -> Limit:
    """Largest factor f at which forces within max(0, bound - f relief) at `positions` can balance f times `load`.

    bound (..., n): Coulomb bound of each point without load [N], >= 0.
    relief (..., n): fall of the bound per unit of factor [N], friction times faces times relieved clamp; negative where pressing is
    credited, and the bound then grows.
    positions (n, 2) or (..., n, 2) [mm], load (..., 3) = Vx, Vy [N], Mz about the origin [N mm]. Leading axes broadcast.

    Returns a Limit: `tractions` lie within the bounds of `factor`, and on `motion` the work of the bounds falls behind the load at
    `upper`. Where pressing alone carries the load the factor is inf, motion is 0, and the tractions balance the load itself within
    max(0, -relief): in proportion they serve any factor. A load of zero gives inf.

    Range: as `limit`. Raises ValueError for shapes, signs or numbers without meaning, NotConverged where a gap of 1e-8 is not proven.
    Source limit, derived.
    """
    bounds, reliefs = np.broadcast_arrays(np.asarray(bound, dtype=float), np.asarray(relief, dtype=float))
    b, r, c, lead = checked(bounds, positions, load)
    q = np.broadcast_to(reliefs, (*lead, b.shape[-1])).reshape(b.shape)
    if not np.isfinite(q).all():
        raise ValueError("relief must be finite")
    if not q.any():
        return limit(bounds, positions, load)
    cases, n = b.shape
    lower, upper = np.empty((2, cases))
    found = _Answers(lower, upper, np.empty((cases, 3)), np.empty((cases, 2, n)), np.empty(cases, dtype=np.int64))
    level = ~q.any(-1)
    at = limit(b[level], r[level], c[level])
    found.put(np.flatnonzero(level), at.factor, at.upper, at.motion, at.tractions, at.iterations)
    hard = _descended(np.flatnonzero(~level), b, q, r, c, found)
    if hard.size:
        search = _Search(b[hard], q[hard], r[hard], c[hard])
        search.run()
        found.put(hard, search.lower, search.upper, search.motion, search.tractions, search.iterations)
    return proven(lead, found.lower, found.upper, found.motion, found.tractions, found.iterations)


def _descended(those: Index, b: Array, q: Array, r: Array, c: Array, answers: _Answers) -> Index:
    """Put the answers of Newton's descent for the flat cases `those`; which of them it cannot prove."""
    hard = [np.zeros(0, dtype=np.int64)]
    width = max(1, CHUNK // b.shape[1])
    for first in range(0, those.size, width):
        at = those[first : first + width]
        parts = (np.ascontiguousarray(a) for a in (b[at].T, q[at].T, r[at].transpose(2, 1, 0), c[at].T))
        # As in `limit`: what comes of 0/0 is judged by the gap.
        with np.errstate(all="ignore"):
            lower, upper, motion, tractions, steps, sure = _descent(*parts)
        answers.put(at, lower, upper, motion.T, np.moveaxis(tractions, -1, 0), steps)
        hard.append(at[~sure])
    return np.concatenate(hard)


def _descent(b: Array, q: Array, r: Array, c: Array) -> tuple[Array, Array, Array, Array, Index, NDArray[np.bool_]]:
    """Lower and upper factor, motion, tractions, iterations of a chunk of cases, cases last, and which of them are proven."""
    frame = Frame(b, r, c, (b > 0.0) | (q < 0.0))
    go, cases = frame.go, b.shape[1]
    found = least_work(frame.bound, frame.place, frame.pull, frame.twist, q[:, go] / frame.size)
    lower, steps, tractions = np.zeros(cases), np.zeros(cases, dtype=np.int64), np.zeros_like(r)
    lower[go], steps[go], tractions[..., go] = found.factor * frame.scale, found.steps, frame.forces(found)
    motion, _ = frame.bounding(np.maximum(0.0, b - lower * q), found)
    upper = crossing(b, q, length(np.array([motion[0] - motion[2] * r[1], motion[1] + motion[2] * r[0]])))
    # All strength in one place, and the force through it: nothing to be sought.
    through = (frame.reach == 0.0) & (frame.force > 0.0) & (frame.moment == 0.0) & np.isfinite(upper)
    lower[through] = upper[through]
    tractions[..., through] = (np.maximum(0.0, b - lower * q) * frame.axis[:, None])[..., through]
    sure = (np.abs(upper - lower) <= GAP_SOUGHT * upper) & np.isfinite(upper)
    sure[go] &= found.sure
    motion[:, frame.idle] = 0.0
    lower[frame.idle] = upper[frame.idle] = np.inf
    return lower, upper, motion, tractions, steps, sure | frame.idle


@record(eq=False)
class _Answers:
    """Both sides, motions, tractions and iterations of flat cases, filled part by part."""

    lower: Array
    upper: Array
    motion: Array
    tractions: Array
    iterations: Index

    def put(self, at: Index, lower: Array, upper: Array, motion: Array, tractions: Array, iterations: Index) -> None:
        """Write the cases `at`."""
        self.lower[at], self.upper[at], self.motion[at] = lower, upper, motion
        self.tractions[at], self.iterations[at] = tractions, iterations


class _Search:
    """Upper bounds of flat cases, lowered until the bounds of that very factor carry it."""

    def __init__(self, b: Array, q: Array, r: Array, c: Array) -> None:
        self.b, self.q, self.r, self.c = b, q, r, c
        cases, n = b.shape
        start = limit(b, r, c)
        self.lower, self.upper = np.where(c.any(-1), 0.0, np.inf), np.full(cases, np.inf)
        self.motion, self.tractions = np.zeros((cases, 3)), np.zeros((cases, 2, n))
        self.iterations = start.iterations.copy()
        loaded = np.flatnonzero(c.any(-1))
        self._bound_above(loaded, start.motion[loaded])

    def run(self) -> None:
        """Close in on the answers."""
        self.press()
        go = np.flatnonzero(self.lower < self.upper)
        for _ in range(MOST_STEPS):
            if not go.size:
                break
            go = go[self.attempt(go)]
        self.step_back()

    def press(self) -> None:
        """What the pressed points alone carry per unit of factor: all of it, or a motion that bounds every factor."""
        go = np.flatnonzero((self.q < 0.0).any(-1) & self.c.any(-1))
        pressed = limit(np.maximum(0.0, -self.q[go]), self.r[go], self.c[go])
        self.iterations[go] += pressed.iterations
        self._bound_above(go, pressed.motion)
        endless = np.isinf(self.upper[go])
        at = go[endless]
        self.lower[at] = self.upper[at] = np.inf
        self.motion[at] = 0.0
        self.tractions[at] = pressed.tractions[endless] / pressed.factor[endless, None, None]

    def attempt(self, go: Index) -> NDArray[np.bool_]:
        """Solve cases `go` with the bounds of their upper bound, which lowers it; which of them are to be tried again."""
        factor = self.upper[go]
        at = self._limit(go, factor)
        self._bound_above(go, at.motion)
        with np.errstate(divide="ignore", invalid="ignore"):
            # Tractions in proportion to the load, grown until the first of them meets the bound that is left at that factor.
            share = np.hypot(at.tractions[:, 0], at.tractions[:, 1]) / at.factor[:, None]
            met = np.where((share > 0.0) & (share + self.q[go] > 0.0), self.b[go] / (share + self.q[go]), np.inf).min(
                -1
            )
        carried = np.where(at.factor > 0.0, np.minimum(met, self.upper[go]), 0.0)
        self._carry(go, at, carried)
        return self.upper[go] < factor * (1.0 - GAP_SOUGHT)

    def step_back(self) -> None:
        """Where the bounds of the upper bound prove too little (all but gone, or pressed), those a little below it prove more.

        Where work and load keep level over a stretch of factors none do, and the last try takes them as level.
        """
        go = np.flatnonzero(self.lower < self.upper * (1.0 - GAP_FAIR))
        for back, spare in STEPS_BACK:
            factor = self.upper[go] * (1.0 - back)
            go, factor = go[self.lower[go] < factor], factor[self.lower[go] < factor]
            if not go.size:
                break
            at = self._limit(go, factor)
            enough = at.factor >= factor * (1.0 - spare)
            self._carry(go, at, np.where(enough, factor, 0.0))
            go = go[~enough]

    def _carry(self, go: Index, at: Limit, carried: Array) -> None:
        """Take tractions in proportion to those of `at` that carry more than is known yet."""
        more = carried > self.lower[go]
        self.lower[go[more]] = carried[more]
        self.tractions[go[more]] = at.tractions[more] * (carried[more] / at.factor[more])[:, None, None]

    def _limit(self, go: Index, factor: Array) -> Limit:
        at = limit(np.maximum(0.0, self.b[go] - factor[:, None] * self.q[go]), self.r[go], self.c[go])
        self.iterations[go] += at.iterations
        return at

    def _bound_above(self, go: Index, motion: Array) -> None:
        """Lower the upper bound where `motion` bounds the factor more closely."""
        vx, vy, w = motion[:, None].transpose(2, 0, 1)
        slip = np.hypot(vx - w * self.r[go, :, 1], vy + w * self.r[go, :, 0])
        factor = relieved_factor(self.b[go], self.q[go], slip)
        better = factor < self.upper[go]
        self.upper[go[better]], self.motion[go[better]] = factor[better], motion[better]
