"""What successive steps of a run tell: energy, loads that are held, cycles that close, and whether slip goes on from one to the next."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.records import record

Array = np.ndarray
SAME_LOAD = 0.01  # of the largest force: loads within it are the same
UNCHANGED = 0.01  # of the largest friction limit: tractions within it are unchanged
GOES_ON = 0.005  # of the largest motion: what a held load must add to it to count as creep
FADES = 0.95  # of the cycle before: net slip that stays above it does not fall
NOTHING = 1e-6  # mm
ZERO = 0.01  # of the slip that a cycle is measured against
SHAKEDOWN, COMES_BACK, WALKS, SETTLES, ONE = "shakedown", "comes back", "walks", "settles", "one cycle"


@record
class Hold:
    """Steps first to last at one load: largest change of motion [mm] and of traction [MPa] of a point between both ends."""

    first: int
    last: int
    motion: float
    traction: float
    creeps: bool


@record
class Cycles:
    """Cycles that close, oldest first; turns: the step at which each begins, and the last one's end. Of each: net slip and path of the
    points that have most [mm], energy by mean tractions and with mu p over the slip [mJ].

    verdict: shakedown, comes back, walks, settles, or one cycle, which cannot tell.
    """

    turns: tuple[int, ...]
    net: tuple[float, ...]
    path: tuple[float, ...]
    energy: tuple[float, ...]
    energy_at_limit: tuple[float, ...]
    verdict: str


def energy_of(t: Array, slip: Array, area: Array) -> Array:
    """Energy [mJ] of each point between steps, (S - 1, n): area times mean traction times change of true slip.

    t [MPa], slip [mm]: (2, S, n), area [mm^2] (S, n).
    """
    work: Array = ((t[:, 1:] + t[:, :-1]) / 2 * np.diff(slip, axis=1)).sum(axis=0)
    return work * (area[1:] + area[:-1]) / 2


def energy_at_limit(limit: Array, slip: Array, area: Array, rest: Array) -> Array:
    """The same where slip happens at mu p, the only traction at which Coulomb's law lets it: what mean tractions miss when a point turns
    round between two steps. Slip below `rest` [mm] does not count; limit [MPa], rest (S, n)."""
    way = np.hypot(*np.diff(slip, axis=1))
    work: Array = (limit[1:] + limit[:-1]) / 2 * np.where(way > rest[1:], way, 0.0) * (area[1:] + area[:-1]) / 2
    return work


def largest_range(motion: Array) -> Array:
    """Largest distance between any two steps, (n,), of positions (2, S, n)."""
    most = np.zeros(motion.shape[-1])
    for i in range(1, motion.shape[1]):
        np.maximum(most, np.hypot(*(motion[:, :i] - motion[:, i : i + 1])).max(axis=0), out=most)
    return most


def path_of(motion: Array) -> Array:
    """Way from step to step, (n,), of positions (2, S, n)."""
    way: Array = np.hypot(*np.diff(motion, axis=1)).sum(axis=0)
    return way


def loads_of(t: Array, p: Array, area: Array, x: Array, y: Array) -> Array:
    """Loads of each step (S, 6), each over the largest of its kind: shear along x and y, contact force, and the moments of both about
    the middle of the points. The moments tell a load that rocks from one that is held."""
    x, y = x - x.mean(), y - y.mean()
    size = float(max(np.ptp(x), np.ptp(y))) or 1.0
    shear, normal = t * area, p * area
    turning = (x * shear[1] - y * shear[0]) / size
    force = np.hypot(*shear.sum(axis=-1)).max(), normal.sum(axis=-1).max()
    parts = [(shear[0], force[0]), (shear[1], force[0]), (normal, force[1])]
    parts += [(turning, force[0]), (normal * x / size, force[1]), (normal * y / size, force[1])]
    return np.stack([part.sum(axis=-1) / (scale or 1.0) for part, scale in parts], axis=1)


def plateaus(loads: Array) -> list[tuple[int, int]]:
    """First and last step of each stretch at one load."""
    found = [(0, 0)]
    for i in range(1, len(loads)):
        first, _ = found[-1]
        if _same(loads[first], loads[i]):
            found[-1] = first, i
        else:
            found.append((i, i))
    return found


def holds(loads: Array, t: Array, g: Array, limit: Array) -> tuple[Hold, ...]:
    """Every load that is held over two steps or more."""
    least, most = UNCHANGED * float(limit.max()), float(np.hypot(*g).max())
    found = []
    for first, last in plateaus(loads):
        if last > first:
            motion = float(np.hypot(*(g[:, last] - g[:, first])).max())
            traction = float(np.hypot(*(t[:, last] - t[:, first])).max())
            goes = motion > max(GOES_ON * most, NOTHING) and traction <= least
            found.append(Hold(first, last, motion, traction, goes))
    return tuple(found)


def turns(loads: Array) -> tuple[int, ...]:
    """Steps at which the last cycles begin, and the end of the last one; empty where the steps close no cycle.

    The period is the least number of loads after which all of them come again from the beginning; else, after a run-up, the least
    that holds over a whole period; else the least after which the last load comes again.
    """
    flats = plateaus(loads)
    at = np.array([loads[first] for first, _ in flats])
    count = len(flats)
    agree = {period: _agreeing(at, period) for period in range(2, count)}
    whole = [p for p, n in agree.items() if n == count - p]
    steady = [p for p, n in agree.items() if n >= p]
    period = min(whole or steady or [p for p, n in agree.items() if n] or [0])
    if not period:
        return ()
    known = agree[period] + period  # loads at the end that repeat
    begin = [i for i in range(count - 1, -1, -period) if count - i <= known][::-1]
    return tuple(flats[i][1] for i in begin)


def cycles(at: Sequence[int], slip: Array, energies: tuple[Array, Array], elastic: float) -> Cycles | None:
    """The cycles between the steps `at`, None for no whole one; energies: by mean tractions and at the limit, (S - 1, n) each [mJ];
    elastic: slip of the contact's own stiffness at its limit [mm], 0 where not known."""
    if len(at) < 2:
        return None
    spans = list(zip(at, at[1:], strict=False))
    net = [float(np.hypot(*(slip[:, b] - slip[:, a])).max()) for a, b in spans]
    path = [float(path_of(slip[:, a : b + 1]).max()) for a, b in spans]
    mean, limit = (tuple(float(energy[a:b].sum()) for a, b in spans) for energy in energies)
    least = max(ZERO * max(*path, elastic, 0.0), NOTHING)
    return Cycles(tuple(at), tuple(net), tuple(path), mean, limit, _verdict(net, path, least))


def _verdict(net: list[float], path: list[float], least: float) -> str:
    if path[-1] <= least:
        return SHAKEDOWN
    if len(net) < 2:
        return ONE
    if net[-1] <= max(ZERO * path[-1], NOTHING):
        return COMES_BACK
    return WALKS if net[-1] > FADES * net[-2] else SETTLES


def _agreeing(at: Array, period: int) -> int:
    """Loads at the end, one after the other, that are those of a period before."""
    n = 0
    while n < len(at) - period and _same(at[-1 - n], at[-1 - n - period]):
        n += 1
    return n


def _same(one: Array, other: Array) -> bool:
    return bool((np.abs(one - other) <= SAME_LOAD).all())
