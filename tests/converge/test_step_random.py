"""Three hundred random problems: all converge, and what they claim is computed again from the compliance alone.

Discs, rings, separate and speckled patches with open points; layers of none, one, scattered and pressure-like
stiffness; several steps with slip before and changing bounds; loads from nothing to .9999 of the gross-slip load, half
of them with a moment.
"""

import numpy as np
import pytest

from slip.friction.compliance.dense import Dense
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.springs import Springs
from slip.friction.compliance.strips import Strips
from slip.friction.march.face import Face
from slip.friction.march.limit import limit
from slip.friction.march.step import step

TOL = 1e-6
SEEDS, BLOCK = 300, 25
LIMITS = 1 - 10.0 ** np.array([-4, -3, -2, -1])


def patch(rng, shape):
    """Pressure [MPa] on a grid of one of five shapes and four distributions, now and then with holes."""
    x, y = (np.linspace(-1, 1, n) for n in shape)
    X, Y = np.meshgrid(x, y, indexing="ij")
    r, kind = np.hypot(X, Y), rng.integers(5)
    if kind == 0:
        inside = r < 0.9
    elif kind == 1:
        inside = (r < 0.95) & (r > rng.uniform(0.2, 0.7))
    elif kind == 2:
        spots = zip(rng.uniform(-0.8, 0.8, (4, 2)), rng.uniform(0.1, 0.4, 4), strict=True)
        inside = np.any([np.hypot(X - a, Y - b) < size for (a, b), size in spots], axis=0)
    elif kind == 3:
        inside = rng.random(shape) < rng.uniform(0.05, 0.6)
    else:
        inside = np.ones(shape, dtype=bool)
    pressure = [
        np.ones(shape),
        np.sqrt(np.maximum(1 - r**2, 1e-4)),
        np.exp(rng.normal(size=shape) * rng.uniform(0.3, 2)),
        1.2 + 0.5 * X + 0.6 * Y,
    ][rng.integers(4)]
    pressure = pressure * inside * (rng.random(shape) < rng.choice([1.0, 0.9]))
    pressure[shape[0] // 2, shape[1] // 2] = 1.0
    return pressure * 10 ** rng.uniform(0, 2.5)


def some_layer(rng, pressure, usual):
    """None, one number, scattered over decades with and without gaps, or in proportion to the pressure."""
    kind = rng.integers(4)
    if kind == 0:
        return None
    if kind == 1:
        return usual * 10 ** rng.uniform(-1.5, 1.5)
    if kind == 2:
        scattered = usual * np.exp(rng.normal(size=pressure.shape) * rng.uniform(0.5, 3))
        return np.where(rng.random(pressure.shape) < rng.choice([0.0, 0.3]), np.inf, scattered)
    share = np.where(pressure > 0, pressure, 1.0) / pressure.max()
    return np.where(pressure > 0, usual * 10 ** rng.uniform(-1, 1) * share, np.inf)


def some_body(rng):
    """Compliance, pressure and positions."""
    kind = rng.choice(["half", "half", "half", "half", "strips", "springs", "dense"])
    if kind == "half":
        shape, cell = (
            tuple(rng.integers(8, 33, 2)),
            rng.uniform(0.3, 1.0) * np.array([1.0, rng.choice([1.0, rng.uniform(0.5, 2)])]),
        )
        nu, pressure = rng.choice([0.0, 0.3, 0.5]), patch(rng, shape)
        bodies = [(8e4, nu), (8e4 * rng.choice([1.0, 0.4, np.inf]), rng.choice([nu, 0.2]))]
        body = HalfSpace(shape, tuple(cell), bodies, layer=some_layer(rng, pressure, 1e4 / cell[0]))
        return (
            body,
            pressure,
            np.array(np.meshgrid(*(np.arange(n) * h for n, h in zip(shape, cell, strict=True)), indexing="ij")),
        )
    n = int(rng.integers(20, 300) if kind == "strips" else rng.integers(2, 50 if kind == "springs" else 25))
    pressure = 20 * np.exp(rng.normal(size=n) * rng.choice([0, 1])) * (rng.random(n) < rng.choice([1, 0.8]))
    pressure[0] = 20.0
    layer = some_layer(rng, pressure, 3000.0)
    if kind == "strips":
        stiffness = (1.5e8 * rng.choice([1, 0.2]), 1.5e8)
        resolved = 60 * (100 / n) ** 2 * sum(1 / EA for EA in stiffness) * 10 ** rng.uniform(0, 2)
        return Strips(100.0, 60.0, n, stiffness, layer=layer, shear=resolved), pressure, None
    area, positions = np.exp(rng.normal(size=n) * rng.choice([0, 1])), 30 * rng.normal(size=(2, n))
    if kind == "springs":
        stiffness = 3000 * np.exp(rng.normal(size=n) * rng.choice([0, 2]))
        return Springs(stiffness, area, components=2, layer=layer), pressure, positions
    roots = rng.normal(size=(2 * n, 2 * n + 2))
    return (
        Dense(1e-5 * roots @ roots.T / np.tile(area, 2)[:, None], area, components=2, layer=layer),
        pressure,
        positions,
    )


def some_load(rng, body, face, bound):
    """A load at a random part of what the bounds can carry."""
    part = rng.choice([0.0, *LIMITS, *rng.uniform(0.1, 0.95, 5)])
    strength = body.area * bound
    if face.components == 1:
        return part * np.array([rng.choice([-1, 1]) * strength.sum()])
    force = rng.normal(size=2)
    if face.positions is None:
        return part * strength.sum() * force / np.hypot(*force)
    middle = (strength * face.positions).reshape(2, -1).sum(1) / strength.sum()
    spread = np.sqrt((strength * (face.positions - middle.reshape(2, *(1,) * bound.ndim)) ** 2).sum() / strength.sum())
    direction = np.append(force, middle[0] * force[1] - middle[1] * force[0] + 2 * spread * rng.normal())
    closed = bound > 0
    return part * direction * limit(strength[closed], face.positions[:, closed].T, direction).factor


def norm(body, a):
    return np.sqrt((body.area * a**2).sum())


def conditions(body, face, before, made, bound):
    """What is left of Coulomb's conditions, over the displacements; before: traction and slip of the last state."""
    q, u = made.state.traction, body.apply(made.state.traction)
    motion = made.state.motion
    moved = np.zeros_like(q) + motion[: len(q)].reshape(-1, *(1,) * bound.ndim)
    if face.positions is not None:
        moved = moved + motion[2] * np.array([-face.positions[1], face.positions[0]])
    slip = moved - u - before[1]
    size, closed = np.sqrt((q**2).sum(0)), bound > 0
    assert (size <= bound * (1 + 1e-12)).all()
    rim = closed & (size >= bound * (1 - 1e-6))
    n = q / np.where(closed, bound, 1.0)
    along = (slip * n).sum(0)
    aside = np.sqrt(((slip - n * along) ** 2).sum(0))
    # Where a point slips far, it is the direction of its traction that counts.
    turn = np.minimum(1.0, body.largest() * bound / np.maximum(np.abs(along), 1e-300))
    scale = max(
        norm(body, u * closed),
        0.1 * norm(body, body.apply(before[0]) * closed),
        1e-9 * norm(body, body.largest() * bound),
    )
    wrong = (
        norm(body, slip * (closed & ~rim)),
        norm(body, np.minimum(along, 0.0) * rim),
        norm(body, aside * turn * rim),
        norm(body, made.state.slip - before[1] - np.where(rim & (along > 0) | ~closed, slip, 0.0)),
    )
    return max(wrong) / scale


def body_load(body, face, t):
    """Force and moment of tractions t."""
    force = (body.area * t).reshape(len(t), -1).sum(1)
    if face.positions is None:
        return force
    return np.append(force, (body.area * (face.positions[0] * t[1] - face.positions[1] * t[0])).sum())


def balance(body, face, before, made):
    """1/2 (Q_old + Q).dd = dE + sum area 1/2 (q_old + q).ds, its error over the work that is done or stored; before:
    the last state.
    """
    q, q_old = made.state.traction, before.traction
    load, load_old = body_load(body, face, q), body_load(body, face, q_old)
    energy, energy_old = (0.5 * (body.area * t * body.apply(t)).sum() for t in (q, q_old))
    work = 0.5 * (load_old + load) @ (made.state.motion - before.motion)
    lost = 0.5 * (body.area * (q_old + q) * (made.state.slip - before.slip)).sum()
    works = np.abs(load_old * before.motion).sum(), np.abs(load * made.state.motion).sum()
    return abs(work - (energy - energy_old) - lost), max(*works, energy, energy_old)


@pytest.mark.parametrize("first", range(0, SEEDS, BLOCK))
def test_random_problems(first):
    applications = []
    for seed in range(first, first + BLOCK):
        rng = np.random.default_rng(seed)
        body, pressure, positions = some_body(rng)
        face = Face(body.components, positions if rng.random() < 0.5 else None)
        state = None
        for _ in range(rng.integers(2, 5)):
            bound = 0.2 * pressure * rng.choice([1.0, 1.0, rng.uniform(0.7, 1.4)])
            bound = bound * (rng.uniform(0.5, 1.5, bound.shape) if rng.random() < 0.25 else 1.0)
            wanted = some_load(rng, body, face, bound)
            made = step(body, bound, face, state, load=wanted, tol=TOL)
            q_old = np.zeros_like(made.state.traction) if state is None else state.traction
            s_old = np.zeros_like(made.state.traction) if state is None else state.slip
            assert conditions(body, face, (q_old, s_old), made, bound) < 2 * TOL, seed
            if state is not None:
                missed, work = balance(body, face, state, made)
                assert missed <= 1e-6 * max(work, 1e-8 * (body.area * bound**2 * body.largest()).sum()), seed
                assert made.balance < 1e-6
            size = face.gauge(body.area * bound)
            reach = max(
                size(wanted), 0.1 * size(body_load(body, face, q_old)), 1e-3 * (body.area * np.abs(q_old)).sum()
            )
            assert size(made.load - wanted) <= 1.1 * TOL * reach + 1e-15, seed
            arms = 1.0 if face.positions is None else np.abs(face.positions).max()
            rounding = 1e-12 * (body.area * np.abs(made.state.traction)).sum() * max(1.0, arms)
            assert np.allclose(body_load(body, face, made.state.traction), made.load, rtol=1e-9, atol=rounding)
            assert made.dissipation >= 0.0 and np.isfinite(made.state.traction).all()
            # The motion that was found, given: the same answer by the solver that knows no loads.
            again = step(body, bound, face, state, motion=made.state.motion, tol=TOL)
            assert conditions(body, face, (q_old, s_old), again, bound) < 2 * TOL, seed
            strength = (body.area * bound).sum() + 1e-3 * (body.area * np.abs(q_old)).sum()
            assert size(again.load - made.load) < 1e-4 * strength, seed
            applications.append(made.applications)
            state = made.state
    assert np.median(applications) < 40
