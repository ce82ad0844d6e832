"""Partial slip of a pressed contact by two routes: the closed form of its profile, and the frictional step on half-spaces."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.friction.closed import bodies, cylinder, flat, sphere, strip, superposition
from slip.friction.closed.superposition import Profile
from slip.friction.compliance.dense import Dense
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face
from slip.friction.march.step import step
from slip.joint.contact import PressedContact
from slip.joint.loads import Case

Array = np.ndarray
NO_SHEAR = "no shear"
CELLS = 96  # across a round contact
PLANE_CELLS = 240  # across a plane contact
MARGIN = 1.04  # grid over contact size
FAR = 20.0  # contact half-widths to the points from which motion is measured in plane strain
FULL = 1 - 1e-9  # traction over bound from which a point counts as slipping
STUCK = 1e6  # bounds this many times the largest hold everything


@record
class Route:
    """What one route gives for shear Q: motion of the bodies [mm], stiffness before slip [N/mm], stick size over contact size,
    largest true slip and elastic slip [mm] (None where the route does not tell), energy per cycle [N mm], None without a cycle."""

    name: str
    displacement: float
    stiffness: float
    stick_ratio: float
    true_slip: float | None
    elastic_slip: float | None
    energy_per_cycle: float | None


@record
class PressedSlip:
    """Partial slip under one shear [N]: gross slip load [N]; size [mm] and peak pressure [MPa] of the contact; edge_stress [MPa] of a
    plane contact, None else; both routes, empty with a `reason` where the load slips wholly or a route has no answer."""

    shear: float
    gross_slip_load: float
    size: float
    peak_pressure: float
    edge_stress: float | None
    routes: tuple[Route, ...]
    notes: tuple[str, ...]
    reason: str


@record(eq=False)
class Pair:
    """The contact made ready: profile per mm of length where plane, rho of the rule, moduli, length (1 for a round contact)."""

    profile: Profile | None
    rho: float
    E_star: float
    G_star: float
    length: float
    plane: bool
    size: float


def pair(c: PressedContact) -> Pair:
    """Profile and moduli of a contact; a flat punch without rounding has no profile: it sticks until it slips wholly."""
    first, second = c.bodies
    E_star = float(
        bodies.normal_modulus(first.youngs_modulus, first.poissons_ratio, second.youngs_modulus, second.poissons_ratio)
    )
    G = [float(bodies.shear_modulus(m.youngs_modulus, m.poissons_ratio)) for m in c.bodies]
    G_star = float(bodies.shear_pair_modulus(G[0], first.poissons_ratio, G[1], second.poissons_ratio))
    plane = c.length is not None
    length = c.length if c.length is not None else 1.0
    half = (c.flat_width or 0.0) / 2
    force = c.normal_force / length
    if c.shape == "flat":
        return Pair(None, float(bodies.stiffness_ratio(G_star, E_star)), E_star, G_star, length, plane, half)
    assert c.radius is not None
    if plane:
        size = (
            strip.half_width(force, half, c.radius, E_star)
            if half
            else cylinder.contact_half_width(force, c.radius, E_star)
        )
        D = FAR * float(size)
        made = strip.profile(half, c.radius, E_star, D) if half else cylinder.profile(c.radius, E_star, D)
        return Pair(made, 1.0, E_star, G_star, length, True, float(size))
    made = flat.rounded_profile(half, c.radius, E_star) if half else sphere.profile(c.radius, E_star)
    return Pair(
        made,
        float(bodies.stiffness_ratio(G_star, E_star)),
        E_star,
        G_star,
        length,
        False,
        float(made.radius(c.normal_force)),
    )


def pressed_slip(c: PressedContact, case: Case, end: str) -> PressedSlip:
    """Partial slip at one end of a case by both routes, at the lowest friction.

    At a constant normal force the energy of a cycle depends on the range of the shear alone, so it is that of +- half the range.
    """
    load = dict(case.ends)[end].shear
    reach = [float(np.hypot(*load_.shear)) * (1 if np.dot(load_.shear, load) >= 0 else -1) for _, load_ in case.ends]
    swing = (max(reach) - min(reach)) / 2 if case.alternating else None
    return slip_under(c, float(np.hypot(*load)), swing)


def slip_under(c: PressedContact, shear: float, swing: float | None = None) -> PressedSlip:
    """Partial slip under a shear [N] by both routes, and the energy of a cycle of +-swing [N], None for no cycle."""
    ready, mu = pair(c), c.interface.friction_low
    gross = mu * c.normal_force
    peak = _peak(c, ready)
    notes = _notes(c, ready)
    if shear == 0:
        return PressedSlip(shear, gross, ready.size, peak, None, (), notes, NO_SHEAR)
    if not max(shear, swing or 0.0) < gross:
        reason = f"slips wholly at {gross:.6g} N; nothing beyond is computed"
        return PressedSlip(shear, gross, ready.size, peak, None, (), notes, reason)
    routes = (_closed(c, ready, shear, swing, mu), *_stepped(c, ready, shear, swing, mu))
    edge = _edge_stress(c, ready, shear / gross, mu, peak) if c.shape == "cylinder" else None
    if c.shape == "cylinder" and edge is None:
        notes = (*notes, "the bulk stress moves the stick zone to the edge: no closed form for the edge stress")
    return PressedSlip(shear, gross, ready.size, peak, edge, routes, notes, "")


def _edge_stress(c: PressedContact, ready: Pair, q: float, mu: float, peak: float) -> float | None:
    """Stress [MPa] at the trailing edge of a cylinder, the bulk stress in the first body; None beyond the closed form's range."""
    first = c.bodies[0]
    strain = float(cylinder.bulk_strain(c.bulk_stress, first.youngs_modulus, first.poissons_ratio))
    try:
        shift = float(cylinder.shift_ratio(strain, mu, peak, ready.E_star))
        return float(cylinder.edge_stress(q, mu, peak, shift, c.bulk_stress))
    except ValueError:
        return None


def _peak(c: PressedContact, ready: Pair) -> float:
    """Largest pressure [MPa]; for a flat punch the mean, since its edge has no finite one."""
    if ready.profile is None:
        return c.normal_force / ((2 * ready.size * ready.length) if ready.plane else np.pi * ready.size**2)
    r = np.linspace(0, ready.size, 401)
    return float(np.max(ready.profile.pressure(r, c.normal_force / ready.length)))


def _notes(c: PressedContact, ready: Pair) -> tuple[str, ...]:
    notes = []
    first, second = c.bodies
    nu = [m.poissons_ratio for m in c.bodies]
    beta = float(bodies.mismatch(first.youngs_modulus, nu[0], second.youngs_modulus, nu[1]))
    if abs(beta) >= 0.2:
        notes.append(
            f"the bodies differ by beta = {beta:.2g}: tangential tractions change the pressure, which both routes neglect"
        )
    if ready.plane:
        far = f"{FAR:g} half-widths away, {FAR * ready.size:.3g} mm"
        notes.append(f"motion is measured from points {far}; slip and energy do not depend on it")
    if c.bulk_stress:
        where = "in the edge stress alone" if c.shape == "cylinder" else "not used for this shape"
        notes.append(f"the bulk stress is {where}; motion, slip and energy are without it")
    return tuple(notes)


def _closed(c: PressedContact, ready: Pair, shear: float, swing: float | None, mu: float) -> Route:
    """The superposition rule on the profile; a flat punch moves as a whole."""
    Q, P = shear / ready.length, c.normal_force / ready.length
    if ready.profile is None:
        stiffness = float(bodies.circle_shear_stiffness(ready.size, ready.G_star))
        return Route("closed form", shear / stiffness, stiffness, 1.0, 0.0, None, 0.0 if swing is not None else None)
    p = ready.profile
    return Route(
        "closed form",
        float(superposition.displacement(p, Q, P, mu, ready.rho)),
        ready.length * float(superposition.initial_stiffness(p, P, ready.rho)),
        float(superposition.stick_radius(p, Q, P, mu)) / ready.size,
        None,
        None,
        ready.length * float(superposition.energy(p, swing / ready.length, P, mu, ready.rho))
        if swing is not None
        else None,
    )


def _stepped(c: PressedContact, ready: Pair, shear: float, swing: float | None, mu: float) -> tuple[Route, ...]:
    """The frictional step: load put on, then a full cycle."""
    if ready.plane and ready.profile is None:
        return ()
    compliance, pressure = (_plane if ready.plane else _round)(c, ready)
    bound = mu * pressure
    face = Face(compliance.components)
    scale = (
        float((pressure * compliance.area).sum()) / c.normal_force
    )  # the grid's share of the force; gross slip scales with it
    load = np.zeros(face.freedoms)
    load[0] = shear * scale
    stuck = step(compliance, np.where(bound > 0, STUCK * bound.max(), 0.0), face, load=load)
    there = step(compliance, bound, face, load=load)
    size = np.sqrt((there.state.traction**2).sum(axis=0))
    sticking = (bound > 0) & (size < FULL * bound)
    share = float(sticking.sum() / (bound > 0).sum())
    return (
        Route(
            "step on half-spaces",
            float(there.state.motion[0]),
            float(load[0] / stuck.state.motion[0]) / scale,
            share if ready.plane else float(np.sqrt(share)),
            float(np.sqrt((there.state.slip**2).sum(axis=0))[bound > 0].max()),
            float(np.sqrt((compliance.elongation(there.state.traction) ** 2).sum(axis=0)).max()),
            _stepped_energy(compliance, bound, face, swing * load / shear) / scale if swing is not None else None,
        ),
    )


def _stepped_energy(compliance: Compliance, bound: Array, face: Face, load: Array) -> float:
    """Energy [N mm] of a cycle between load and -load, after the first quarter."""
    first = step(compliance, bound, face, load=load)
    back = step(compliance, bound, face, first.state, load=-load)
    again = step(compliance, bound, face, back.state, load=load)
    return float(back.dissipation + again.dissipation)


def _round(c: PressedContact, ready: Pair) -> tuple[Compliance, Array]:
    """Half-spaces on a square grid over a round contact, and the mean pressure of every cell."""
    reach = MARGIN * ready.size
    cell = 2 * reach / CELLS
    x = (np.arange(CELLS) + 0.5) * cell - reach
    fine = (x[:, None] + cell * (np.arange(4) - 1.5)[None, :] / 4).ravel()
    r = np.hypot(fine[:, None], fine[None, :])
    p = (
        flat.punch_pressure(np.minimum(r, 0.999 * ready.size), c.normal_force, ready.size)
        if ready.profile is None
        else None
    )
    p = np.where(r < ready.size, p, 0.0) if p is not None else ready.profile.pressure(r, c.normal_force)  # type: ignore[union-attr]
    pressure = np.asarray(p).reshape(CELLS, 4, CELLS, 4).mean(axis=(1, 3))
    G = [(float(bodies.shear_modulus(m.youngs_modulus, m.poissons_ratio)), m.poissons_ratio) for m in c.bodies]
    return HalfSpace((CELLS, CELLS), (cell, cell), G, layer=_layer(c)), pressure


def _plane(c: PressedContact, ready: Pair) -> tuple[Compliance, Array]:
    """Half-planes in plane strain: u(x) = 2/(pi E*) integral of q ln(D/|x - xi|), exact over a cell."""
    assert ready.profile is not None
    h = 2 * ready.size / PLANE_CELLS
    x = (np.arange(PLANE_CELLS) + 0.5) * h - ready.size
    edges = x[:, None] - x[None, :] + h * np.array([0.5, -0.5])[:, None, None]
    D = FAR * ready.size

    def primitive(s: Array) -> Array:
        return s * (1 + np.log(D / np.abs(s)))

    matrix = 2 / (np.pi * ready.E_star) * (primitive(edges[0]) - primitive(edges[1]))
    fine = (x[:, None] + h * (np.arange(8) - 3.5)[None, :] / 8).ravel()
    pressure = ready.profile.pressure(fine, c.normal_force / ready.length).reshape(PLANE_CELLS, 8).mean(axis=1)
    return Dense(matrix, h * ready.length, layer=_layer(c)), pressure


def _layer(c: PressedContact) -> float | None:
    """The interface's own stiffness where it was measured; a rough face is not added to smooth profiles."""
    measured = c.interface.tangential_stiffness
    return float(np.sqrt(measured[0] * measured[1])) if measured is not None else None
