"""What the closed forms share: the guard against gross slip, a root, a quadrature, differences that lose no digits."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

Value = Any  # a number, or an array of numbers that broadcasts with the others
Array = NDArray[np.float64]

HALVINGS = 1100  # of an interval down to the nearest double, also when the root is next to zero; 60 to 100 are usual
NODES = 64  # of the quadrature: 1e-12 for the backbones of this folder
SERIES_BELOW = 0.1  # smaller arguments are summed as a series ..
TERMS = 18  # .. of this length, whose first neglected term is below rounding
LOG_SERIES = tuple(1 / n for n in range(3, 3 + TERMS))
ARC_SERIES = tuple((-1) ** n / (2 * n + 3) for n in range(TERMS // 2))


def share_of_limit(load: Value, limit: Value, unit: str = "N") -> Value:
    """|load|/limit, in 0 <= share < 1.

    Raises ValueError where a limit is not above 0, a number is not a number, or the load reaches the limit: the
    interface then slips as a whole and no partial slip is left to speak of.
    """
    load, limit = np.broadcast_arrays(np.abs(np.asarray(load, dtype=float)), np.asarray(limit, dtype=float))
    if not np.all(limit > 0):
        raise ValueError(f"the friction limit must be above 0 {unit}, found {limit[~(limit > 0)][0]:g} {unit}")
    beyond = ~(load < limit)
    if np.any(beyond):
        raise ValueError(f"slips wholly at {limit[beyond][0]:.6g} {unit}, found a load of {load[beyond][0]:.6g} {unit}")
    return (load / limit)[()]


def increasing_root(function: Callable[[Value], Value], target: Value, low: Value, high: Value) -> Value:
    """Where an increasing function meets `target` between low and high, by halving; all broadcast, elementwise.

    The nearer end where the target lies outside. To the last bit of what the function resolves.
    """
    at_low, at_high = function(low), function(high)
    shape = np.broadcast_shapes(*(np.shape(v) for v in (target, low, high, at_low, at_high)))
    low, high = (np.broadcast_to(np.asarray(v, dtype=float), shape) for v in (low, high))
    low, high = np.where(at_high <= target, high, low), np.where(at_low >= target, low, high)
    for _ in range(HALVINGS):
        middle = low + (high - low) / 2
        if np.all((middle == low) | (middle == high)):
            break
        below = function(middle) < target
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    return high[()]


@cache
def gauss() -> tuple[Array, Array]:
    """Nodes and weights (Gauss and Legendre) of an integral from 0 to 1."""
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    return (nodes + 1) / 2, weights / 2


@cache
def smooth_gauss() -> tuple[Array, Array]:
    """The same for integrands with a root or logarithm at either end: nodes drawn towards both ends."""
    v, w = gauss()
    return v**3 * (10 - 15 * v + 6 * v**2), 30 * v**2 * (1 - v) ** 2 * w


def pairs(nodes: Array, weights: Array) -> tuple[tuple[float, float], ...]:
    """Nodes and weights as numbers, for sums that are run one node after the other."""
    return tuple(zip(nodes.tolist(), weights.tolist(), strict=True))


def log_rest(q: Value) -> Value:
    """-ln(1-q) - q - q^2/2 for 0 <= q < 1, with all its digits where q is small and the terms cancel."""
    q = np.asarray(q, dtype=float)
    small = np.minimum(q, SERIES_BELOW)
    series = small**3 * np.polynomial.polynomial.polyval(small, LOG_SERIES)
    return np.where(q < SERIES_BELOW, series, -np.log1p(-q) - q - q**2 / 2)[()]


def arc_rest(s: Value, b: Value) -> Value:
    """s - b arctan(s/b) for s >= 0, b >= 0, with all its digits where s/b is small and the terms cancel."""
    s, b = np.broadcast_arrays(np.asarray(s, dtype=float), np.asarray(b, dtype=float))
    small = s < SERIES_BELOW * b
    x = np.where(small, s, 0.0) / np.where(small, b, 1.0)
    series = b * x**3 * np.polynomial.polynomial.polyval(x**2, ARC_SERIES)
    return np.where(small, series, s - b * np.arctan2(s, b))[()]
