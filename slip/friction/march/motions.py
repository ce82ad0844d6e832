"""Rigid motions of a group of points, many cases at a time: slips, work of the bounds, its slopes, and the forces that prove it.

Arrays hold the components first, then the points, then the cases: (2, n, cases), (n, cases), (cases,). Division by zero is left to
the caller's error state: a case that meets it is not sure.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from slip.friction.march.cone import Array, Index, length

# Tuning, held by tests on the proof and on the number of cases that are left to the cone programme.
GAP_SURE = 5e-13  # relative; larger gaps are the caller's
BALANCE = 1e-13  # forces out of balance in parts of their sum
REST = 16.0 * float(np.finfo(float).eps)  # a slip in parts of the motion: rounding
CLOSE = 1e-6  # a slip in parts of the motion: half of its digits are rounding
ROUNDING = 4e-15  # of a force
STRONG = 1e-3  # a bound in parts of their sum that is told from the rounding of the others
TINY = 1e-100  # keeps 0/0 away, and its cube is still a number


class Found(NamedTuple):
    """Motions of unit work with the forces that prove them.

    forces (2, n, cases) within the bounds, in balance with `factor` times the load; pivot (cases,) the point that moves least, slip
    (2, cases) its slip, turn (cases,); sure (cases,): the proof is closed to 5e-13. `steps` counts looks at a motion.
    """

    forces: Array
    factor: Array
    pivot: Index
    slip: Array
    turn: Array
    sure: NDArray[np.bool_]
    steps: Index


def crossing(b: Array, relief: Array, slip: Array) -> Array:
    """Smallest f at which the sum over the first axis of max(0, b - f relief) slip is no more than f; inf where there is none."""
    closed = (b > 0.0) | (relief < 0.0)
    work, loss = b * slip, relief * slip
    while True:
        rate = 1.0 + np.where(closed, loss, 0.0).sum(0)
        factor = np.where(rate > 0.0, np.where(closed, work, 0.0).sum(0) / rate, np.inf)
        # The work is convex in f, so this factor is never too large: what is open by then stays open.
        still = closed & (b > factor * relief)
        if (still == closed).all():
            return factor
        closed = still


class Look(NamedTuple):
    """What one motion looks like: slips u (2, n, cases), bounds, work; pull = b/|u| and stiff = b/|u|^3, 0 for points at rest."""

    bound: Array
    u: tuple[Array, Array]
    speed: Array
    work: Array
    pull: Array
    stiff: Array
    rest: NDArray[np.bool_]


class Cases:
    """Bounds, places and loads of cases. A motion of unit work has two parts p: a shift across the force, and `mixed`, see `motion`."""

    def __init__(self, b: Array, r: Array, force: Array, moment: Array, relief: Array | None) -> None:
        self.b, self.relief, (self.x, self.y) = b, relief, r
        self.force, self.moment = force, moment
        self.size = length(np.array([force, moment]))
        self.along, self.about = force / self.size, moment / self.size
        # A turn with the shift along the force that makes up for its work.
        self.mx, self.my = -self.about - self.along * self.y, self.along * self.x

    def take(self, keep: Index) -> Cases:
        """The cases `keep` alone."""
        part = object.__new__(Cases)
        vars(part).update({name: None if a is None else np.take(a, keep, -1) for name, a in vars(self).items()})
        return part

    def motion(self, p: Array) -> tuple[Array, Array, Array]:
        """Shift of the place r = 0, and turn."""
        return self.along / self.size - p[1] * self.about, p[0], self.about / self.size + p[1] * self.along

    def start(self) -> Array:
        """The elastic answer, points as springs in proportion to their bounds."""
        total = self.b.sum(0)
        x, y = (self.b * self.x).sum(0) / total, (self.b * self.y).sum(0) / total
        moment = self.moment + y * self.force
        polar = (self.b * ((self.x - x) ** 2 + (self.y - y) ** 2)).sum(0)
        work = self.force**2 / total + moment**2 / polar
        w = moment / polar / work
        return np.array([-w * x, self.along * w - self.about * (self.force / total / work + w * y)])

    def centred(self, k: Index) -> Array:
        """Turning about the points k, one for each case."""
        every = np.arange(k.size)
        q = (self.along - self.about * self.y[k, every]) / self.size / -self.mx[k, every]
        return np.array([-(self.about / self.size + q * self.along) * self.x[k, every], q])

    def look(self, p: Array) -> Look:
        """Slips and bounds on the motions p."""
        vx, vy, w = self.motion(p)
        ux, uy = vx - w * self.y, vy + w * self.x
        square = np.maximum(ux * ux + uy * uy, TINY * TINY)
        speed = np.sqrt(square)
        bound = self.b
        if self.relief is None:
            work = (bound * speed).sum(0)
        else:
            work = crossing(self.b, self.relief, speed)
            bound = np.maximum(0.0, self.b - work * self.relief)
        pull = bound / speed
        rest = square <= (REST * (np.abs(vx) + np.abs(vy) + np.abs(w))) ** 2
        return Look(bound, (ux, uy), speed, work, pull, pull / square, rest)

    def slopes(self, look: Look, across: Array) -> tuple[Array, Array]:
        """Gradient (2, cases) and curvature (3, cases: pp, pq, qq) of the work; `across` as from `bends`."""
        ux, uy = look.u
        g = np.array([(look.pull * uy).sum(0), (look.pull * (ux * self.mx + uy * self.my)).sum(0)])
        side, other = look.stiff * ux, look.stiff * across
        return g, np.array([(side * ux).sum(0), (side * across).sum(0), (other * across).sum(0)])

    def bends(self, look: Look) -> Array:
        """Slips of `mixed` across the slips at hand, times those."""
        return look.u[0] * self.my - look.u[1] * self.mx

    def proof(self, p: Array, steps: Index) -> Found:
        """Tractions on the motions p, put into balance; and what they carry."""
        look = self.look(p)
        vx, vy, w = self.motion(p)
        near = np.where(look.bound > 0.0, look.speed, np.inf).argmin(0)
        at = (near, np.arange(near.size))
        u = np.where(look.rest[at], 0.0, np.array([look.u[0][at], look.u[1][at]]))
        # A small slip holds few digits of its direction; unless the point is weak, the balance with the others holds more.
        free = look.speed[at] <= CLOSE * (np.abs(vx) + np.abs(vy) + np.abs(w))
        free &= look.bound[at] >= STRONG * look.bound.sum(0)
        t = self._tractions(look, at, free | look.rest[at])
        forces = look.bound * (t / np.maximum(length(t).max(0), 1.0))
        factor, sure = self._carried(look.bound, forces)
        if self.relief is not None:
            forces, factor = self._grown(forces, factor, look.work)
        sure &= (factor >= look.work * (1.0 - GAP_SURE)) & np.isfinite(look.work)
        return Found(forces, factor, near, u, w, sure, steps)

    def _tractions(self, look: Look, at: tuple[Index, Index], free: NDArray[np.bool_]) -> Array:
        """Tractions in parts of the bounds, in balance: those at the points `at` hold what is left, where they are `free` to."""
        (ux, uy), held = look.u, look.rest & (look.bound > 0.0)
        held[at] |= free
        if free.any():
            look.pull[held] = look.stiff[held] = 0.0
        across = self.bends(look)
        g, h = self.slopes(look, across)
        # Of the others, to first order of one more step the directions turn just so that they balance.
        d, slope = np.where(free, 0.0, solved(h, g)), 1.0 / look.speed
        swing = (d[0] * ux + d[1] * across) * (slope * slope)
        t = np.array([(ux - swing * uy) * slope, (uy + swing * ux) * slope])
        if free.any():
            left = -at_point(g, np.array([self.mx[at], self.my[at]])) / (look.bound * held).sum(0)
            t = np.where(held, left[:, None], t)
        idle = look.bound == 0.0
        if idle.any():
            t[:, idle] = 0.0
        return t

    def _carried(self, bound: Array, forces: Array) -> tuple[Array, NDArray[np.bool_]]:
        """Factor that the forces carry, and whether they balance the load."""
        fx, fy = forces.sum(1)
        turn = (self.x * forces[1] - self.y * forces[0]).sum(0)
        total, arms = bound.sum(0), (bound * (np.abs(self.x) + np.abs(self.y))).sum(0)
        off = np.abs(self.along * turn - self.about * fx)
        balanced = (np.abs(fy) <= BALANCE * total) & (np.abs(self.about) * off <= BALANCE * total)
        balanced &= self.along * off <= BALANCE * arms
        return (self.along * fx + self.about * turn) / self.size, balanced

    def _grown(self, forces: Array, factor: Array, most: Array) -> tuple[Array, Array]:
        """Forces in proportion to the load, grown until the first meets the bound that is left at that factor."""
        assert self.relief is not None
        share = length(forces) / factor
        rate = share + self.relief
        # Up to rounding the force of a point that lives on pressing alone keeps to its bound at any factor.
        met = np.where((share > 0.0) & (rate > ROUNDING * share), self.b / rate, np.inf).min(0)
        carried = np.where(factor > 0.0, np.minimum(met, most), 0.0)
        return forces * (carried / factor), carried


def at_point(g: Array, lever: Array) -> Array:
    """Gradient g in the two parts of the motion as one in the slip of a point whose slip by `mixed` is `lever`."""
    return np.array([(g[1] - lever[1] * g[0]) / lever[0], g[0]])


def solved(h: Array, g: Array) -> Array:
    """-h^-1 g for the symmetric h = (pp, pq, qq)."""
    return np.array([h[1] * g[1] - h[2] * g[0], h[1] * g[0] - h[0] * g[1]]) / (h[0] * h[2] - h[1] * h[1])
