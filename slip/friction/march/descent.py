"""Newton's descent to the rigid motion of least work, many cases at a time: the quick way to a group limit, and its proof.

The work of the bounds on a motion, sum b |s|, is convex and bends sharply where a point rests: at the instant centre. So the point
nearest to the centre enters the model of each step with its own b |s|, and only the others by their second order. The model's
least work is then found in one go, with the point at rest or moving: a centre on a bolt, or near one, costs no more than another.

Arrays hold the components first, then the points, then the cases: (2, n, cases), (n, cases), (cases,). Division by zero is left to
the caller's error state: a case that meets it is not sure, and the caller asks the cone programme.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from slip.friction.march.cone import Array, Index, dot, length, turned
from slip.friction.march.motions import BALANCE, TINY, Cases, Found, solved

# Tuning, held by tests on the number of cases that are left to the cone programme.
MOST_STEPS = 14  # 2 to 5 are usual
LAST = 1e-12  # a step that will save less than this part of the work is the last
LAST_NEAR = 1e-8  # square of what it may then still change of the slip nearest to the centre
ROUNDING = 1e-15  # of the work
TURNS = 4  # of the equation for how far the nearest point moves
FEW = 24  # points that are all tried as centres where no step leads on
CROWD = 0.75  # finished cases are carried along until this part is left
NO_LEVER = 1e-9  # a point that near to the line of action, in parts of the reach, cannot be the centre


def least_work(b: Array, r: Array, force: Array, moment: Array, relief: Array | None = None) -> Found:
    """Motion of unit work on which the bounds do the least, and the tractions that belong to it.

    b (n, cases) bounds, r (2, n, cases) positions, largest about 1 each; the force acts along x, the moment about r = 0. With `relief`
    (n, cases) the bounds are max(0, b - f relief), f being what the motion itself allows; the forces of all smaller factors are in
    proportion.
    """
    cases = Cases(b, r, force, moment, relief)
    ends, steps = _descend(cases)
    found = cases.proof(ends, steps)
    hard = np.flatnonzero(~found.sure)
    if hard.size and b.shape[0] <= FEW:
        left = cases.take(hard)
        for end, value in zip(found, left.proof(_best_centre(left), steps[hard]), strict=True):
            end[..., hard] = value
    return found


def _descend(cases: Cases) -> tuple[Array, Index]:
    """The motion of least work of each case, NaN where none is found, and the looks that it took."""
    p = cases.start()
    ends, steps, running = np.full_like(p, np.nan), np.full(p.shape[1], MOST_STEPS), np.arange(p.shape[1])
    base, goal, share, least = p, p, np.ones_like(p[0]), np.full_like(p[0], np.inf)
    going = np.ones(p.shape[1], dtype=bool)
    for count in range(1, MOST_STEPS + 1):
        work, further, last = _step(cases, p)
        lower = work <= least * (1.0 + ROUNDING)
        base, goal, least = np.where(lower, p, base), np.where(lower, further, goal), np.where(lower, work, least)
        share = np.where(lower, 1.0, 0.5 * share)
        p = np.where(lower, goal, base + share * (goal - base))
        ready = going & lower & last
        ends[:, running[ready]], steps[running[ready]] = p[:, ready], count
        going &= ~last & np.isfinite(p).all(0)
        keep = np.flatnonzero(going)
        if not keep.size:
            break
        if keep.size < CROWD * going.size:
            cases, running, going = cases.take(keep), running[keep], going[keep]
            p, base, goal, share, least = (a[..., keep] for a in (p, base, goal, share, least))
    return ends, steps


def _step(cases: Cases, p: Array) -> tuple[Array, Array, NDArray[np.bool_]]:
    """Work on the motions p, where to go from there, and whether that is the last step."""
    look = cases.look(p)
    k, every = look.pull.argmax(0), np.arange(p.shape[1])
    at = (k, every)
    rest, weight = look.rest[at], look.bound[at]
    if rest.any():
        weight = np.where(rest, (look.bound * look.rest).sum(0), weight)
        look.pull[look.rest] = look.stiff[look.rest] = 0.0
    across = cases.bends(look)
    stiff, bend = look.stiff[at], across[at]
    look.pull[at] = look.stiff[at] = 0.0
    g, h = cases.slopes(look, across)
    u, lever = np.where(rest, 0.0, np.array([look.u[0][at], look.u[1][at]])), np.array([cases.mx[at], cases.my[at]])
    z, halt = _nearest_moves(g, h, u, lever, weight)
    turn = (z[0] - u[0]) / lever[0]
    d = np.array([z[1] - u[1] - lever[1] * turn, turn])
    h += stiff * np.array([u[0] * u[0], u[0] * bend, bend * bend])
    fixed = np.abs(lever[0]) < NO_LEVER
    if fixed.any():
        pull = weight / np.maximum(length(u), TINY)
        plain = solved(h, g + pull * np.array([u[1], dot(u, lever)]))
        d, halt = np.where(fixed, plain, d), halt & ~fixed
    saved = d[0] * d[0] * h[0] + 2.0 * d[0] * d[1] * h[1] + d[1] * d[1] * h[2]
    last = (saved <= LAST * look.work) & (fixed | (dot(z - u, z - u) <= LAST_NEAR * dot(u, u)))
    goal = p + d
    if halt.any():
        goal = np.where(halt, cases.centred(k), goal)
    return look.work, goal, last


def _nearest_moves(g: Array, h: Array, u: Array, lever: Array, weight: Array) -> tuple[Array, NDArray[np.bool_]]:
    """Slip z of the nearest point that makes the model g.d + d.h.d/2 + weight |z| least, z = u + what d adds; whether it is to rest.

    Away from rest z = rho e with (rho h + weight) e = -g and |e| = 1. In the axes of h that is one equation for rho, and as 1/|e| is
    nearly straight in rho, Newton is soon there.
    """
    (x, y), (pp, pq, qq) = lever, h
    h11, h12 = (y * (y * pp - 2.0 * pq) + qq) / (x * x), (pq - y * pp) / x
    gx, gy = (g[1] - y * g[0]) / x - h11 * u[0] - h12 * u[1], g[0] - h12 * u[0] - pp * u[1]
    half = 0.5 * (h11 - pp)
    radius = np.sqrt(half * half + h12 * h12)
    main, side = radius + np.abs(half) + TINY, np.copysign(h12, half * h12)
    size = np.sqrt(main * main + side * side)
    axis = np.array([main / size, side / size])
    spread = np.copysign(radius, half)
    bend = np.maximum(0.5 * (h11 + pp) + np.array([spread, -spread]), 0.0)
    pull = np.array([axis[0] * gx + axis[1] * gy, axis[0] * gy - axis[1] * gx])
    rho = length(u)
    for _ in range(TURNS):
        stiff = rho * bend + weight
        e = pull / stiff
        square = e * e
        both = square[0] + square[1]
        fall = square * bend / stiff
        rho = np.maximum(rho + (np.sqrt(both) - 1.0) * both / (fall[0] + fall[1]), 0.1 * rho)
    rest = np.sqrt(gx * gx + gy * gy) <= weight * (1.0 + BALANCE)
    return np.where(rest, 0.0, turned(axis, -rho * pull / (rho * bend + weight))), rest


def _best_centre(cases: Cases) -> Array:
    """Turning about the point for which the bounds work least. It is the answer where all points pull one way, as in a row."""
    best, least = np.full((2, cases.size.size), np.nan), np.full_like(cases.size, np.inf)
    for k in range(cases.x.shape[0]):
        p = cases.centred(np.full(cases.size.size, k))
        work = cases.look(p).work
        best, least = np.where(work < least, p, best), np.fmin(work, least)
    return best
