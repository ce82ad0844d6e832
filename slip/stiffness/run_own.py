"""The contact stiffness that a run really has: what its sticking points tell of motion over traction."""

from __future__ import annotations

import numpy as np

from slip.base.records import record

Array = np.ndarray
LEAST = 3  # pairs below which nothing is told
TRACTION = 1e-3  # of the largest friction limit: a change of traction below it tells nothing but rounding
SURE = 1.5  # high over low end up to which the points agree on one value
EDGES = (0.1, 0.5, 0.9)  # parts of the weight at the low end, the value, the high end
NOTHING = 1e-6  # mm: motion that no table and no face can tell from zero


@record(eq=False)
class OwnStiffness:
    """k, low, high [N/mm^3]: the middle value and where 10 and 90 % of the weight lie; high is inf where points do not move.

    slope [1/mm]: k over pressure where that holds the points together better than one k does, else None; its ends slope_low,
    slope_high. k_of, p_of, weight (m,): of each pair, k 0 where the motion does not follow the traction. sure: the points agree.
    """

    k: float
    low: float
    high: float
    slope: tuple[float, float, float] | None
    k_of: Array
    p_of: Array
    weight: Array

    @property
    def sure(self) -> bool:
        """Whether the points agree on one k, or on one k over pressure."""
        low, _, high = self.slope or (self.low, self.k, self.high)
        return high <= SURE * low

    def compliance(self, p: Array) -> Array:
        """Motion over traction [mm/MPa] at a pressure [MPa], any shape; 0 where nothing presses."""
        if self.slope is None:
            return np.full(np.shape(p), 1.0 / self.k)
        return np.divide(1.0, self.slope[1] * p, out=np.zeros_like(p), where=p > 0)


def own_stiffness(t: Array, g: Array, p: Array, area: Array, limit: Array, sticks: Array) -> OwnStiffness | None:
    """The stiffness of the sticking points; None where they do not move, or are too few.

    t [MPa], g [mm]: (2, S, n); p, limit [MPa], area [mm^2], sticks: (S, n). Of several steps the changes from one to the next are taken,
    in which slip of long ago has no part; of one step the values. Least absolute deviations of g over t through the origin, that is
    the weighted median of their ratio: up to half of the points may carry old slip without bending it.
    """
    dt, dg, both = t, g, sticks
    if t.shape[1] > 1:
        dt, dg, both = np.diff(t, axis=1), np.diff(g, axis=1), sticks[1:] & sticks[:-1]
        p, area = (p[1:] + p[:-1]) / 2, (area[1:] + area[:-1]) / 2
    size = np.hypot(*dt)
    used = both & (size > TRACTION * limit.max())
    if used.sum() < LEAST:
        return None
    along = (dt * dg).sum(axis=0)[used] / size[used] ** 2
    if np.median(np.abs(along) * size[used]) < NOTHING:
        return None
    weight, pressure = (size * area)[used], p[used]
    c_high, c, c_low = quantiles(along, weight, EDGES)
    if c <= 0:
        return None
    k, low, high = 1 / c, 1 / c_low, 1 / c_high if c_high > 0 else np.inf
    k_of = np.divide(1.0, along, out=np.zeros_like(along), where=along > 0)
    return OwnStiffness(k, low, high, _slope(along * pressure, weight, high / low), k_of, pressure, weight)


def _slope(compliance: Array, weight: Array, spread: float) -> tuple[float, float, float] | None:
    """k over pressure, low, middle, high, where its spread is less than that of one k."""
    high, middle, low = quantiles(compliance, weight, EDGES)
    if high <= 0 or low / high >= spread / (1 + 1e-6):
        return None
    return 1 / low, 1 / middle, 1 / high


def quantiles(values: Array, weight: Array, parts: tuple[float, ...]) -> list[float]:
    """Values below which parts of the weight lie; values and weight (m,)."""
    order = np.argsort(values)
    total = np.cumsum(weight[order])
    places = np.searchsorted(total, np.array(parts) * total[-1])
    return [float(values[order[min(int(i), len(order) - 1)]]) for i in places]
