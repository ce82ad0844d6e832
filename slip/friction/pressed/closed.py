"""The first route: the closed form of the profile, a smooth face. Every number through the trace."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import bodies, cylinder, flat, sphere, strip, superposition, whole
from slip.friction.pressed.pair import ROOT, Pair
from slip.friction.pressed.records import Route
from slip.joint.contact import PressedContact

Array = np.ndarray
NAME = "closed form"
RULE: dict[str, str] = {"source": "jaeger1998;ciavarella1998", "basis": "derived"}


@record
class Asked:
    """What is asked of both routes: shear [N], half the range of a cycle [N] or None, lowest friction, bulk stress [MPa] at the shear."""

    shear: float
    swing: float | None
    mu: float
    bulk: float


def closed_route(c: PressedContact, ready: Pair, asked: Asked, trace: Trace) -> Route:
    """Motion, stiffness, stick size, energy of a cycle; of a cylinder or a plane rounded flat the stress at the trailing edge."""
    Q, swing = asked.shear, asked.swing
    if ready.plane:
        Q = float(trace("shear for each mm of length", whole.line_load, F=Q, l=ready.length))
        if swing is not None:
            swing = float(
                trace("half range of the shear for each mm of length", whole.line_load, F=swing, l=ready.length)
            )
    made = {"sphere": _sphere, "cylinder": _cylinder, "flat": _flat, "rounded flat": _rounded}[ready.shape]
    return made(c, ready, Q, swing, asked, trace)


def _sphere(c: PressedContact, ready: Pair, Q: float, swing: float | None, asked: Asked, trace: Trace) -> Route:
    P, mu, a, G_star = ready.force, asked.mu, ready.size, ready.G_star
    ratio = trace("stick size over contact size", sphere.stick_ratio, Q=Q, P=P, mu=mu)
    moved = trace("motion of the bodies", sphere.displacement, Q=Q, P=P, mu=mu, a=a, G_star=G_star)
    stiffness = trace("stiffness before slip", bodies.circle_shear_stiffness, a=a, G_star=G_star)
    energy = None
    if swing is not None:
        energy = float(trace("energy of a cycle", sphere.energy, Q=swing, P=P, mu=mu, a=a, G_star=G_star))
    return _route(moved, stiffness, ratio, energy)


def _cylinder(c: PressedContact, ready: Pair, Q: float, swing: float | None, asked: Asked, trace: Trace) -> Route:
    P, mu, a, E_star = ready.force, asked.mu, ready.size, ready.E_star
    ratio = trace("stick size over contact size", cylinder.stick_ratio, Q=Q, P=P, mu=mu)
    far: dict[str, Any] = {"E_star": E_star, "D": ready.far}
    moved = trace("motion of the bodies", cylinder.displacement, Q=Q, P=P, mu=mu, a=a, **far)
    stiffness = _plane_stiffness(ready, trace)
    energy = None
    if swing is not None:
        W = trace("energy of a cycle for each mm of length", cylinder.energy, Q=swing, P=P, mu=mu, E_star=E_star)
        energy = float(trace("energy of a cycle", whole.whole_energy, W_l=W, l=ready.length))
    shift, edge = _bulk(c, ready, asked, trace)
    return _route(moved, stiffness, ratio, energy, shift, edge)


def _bulk(c: PressedContact, ready: Pair, asked: Asked, trace: Trace) -> tuple[float | None, float | None]:
    """Shift of the stick zone [mm], stress [MPa] at the trailing edge of a cylinder; None beyond the closed form's range."""
    first, mu, p_0 = c.bodies[0], asked.mu, ready.peak
    q = superposition.shear_share(asked.shear, c.normal_force, mu)
    eps = cylinder.bulk_strain(asked.bulk, first.youngs_modulus, first.poissons_ratio)
    e_a = cylinder.shift_ratio(eps, mu, p_0, ready.E_star)
    try:
        cylinder.edge_stress(q, mu, p_0, e_a, asked.bulk)
    except ValueError:
        return None, None
    trace("shear over the shear that slips", superposition.shear_share, Q=asked.shear, P=c.normal_force, mu=mu)
    if asked.bulk:
        E, nu = first.youngs_modulus, first.poissons_ratio
        trace("strain of the first body by the bulk stress", cylinder.bulk_strain, s=asked.bulk, E=E, nu=nu)
        trace(
            "shift of the stick zone over the half-width",
            cylinder.shift_ratio,
            eps=eps,
            mu=mu,
            p_0=p_0,
            E_star=ready.E_star,
        )
    edge = trace("stress at the trailing edge", cylinder.edge_stress, q=q, mu=mu, p_0=p_0, e_a=float(e_a), s=asked.bulk)
    return float(e_a) * ready.size if asked.bulk else None, float(edge)


def _flat(c: PressedContact, ready: Pair, Q: float, swing: float | None, asked: Asked, trace: Trace) -> Route:
    """A sharp flat moves as a whole and sticks until it slips wholly."""
    if ready.plane:
        stiffness = _plane_stiffness(ready, trace)
    else:
        stiffness = float(trace("stiffness", bodies.circle_shear_stiffness, a=ready.size, G_star=ready.G_star))
    moved = trace("motion of the bodies", whole.stuck_displacement, Q=asked.shear, k=stiffness)
    return _route(moved, stiffness, 1.0, 0.0 if swing is not None else None, true_slip=0.0)


def _rounded(c: PressedContact, ready: Pair, Q: float, swing: float | None, asked: Asked, trace: Trace) -> Route:
    """The rule of two pressings: the contact under its force less its stick zone alone."""
    assert ready.profile is not None
    P, mu, a, profile = ready.force, asked.mu, ready.size, ready.profile
    values: dict[str, Any] = {"b": (c.flat_width or 0.0) / 2, "R": c.radius}
    P_c = trace("force that presses the stick zone alone", superposition.stick_force, Q=Q, P=P, mu=mu)
    size = trace.given(
        "size of the stick zone, by halving until it bears that force", "c", float(profile.radius(P_c)), "mm", **ROOT
    )
    trace(
        "force that presses to this size",
        strip.force if ready.plane else flat.rounded_force,
        a=size,
        E_star=ready.E_star,
        **values,
    )
    ratio = trace("stick size over contact size", whole.size_ratio, c=size, a=a)
    approaches = []
    for name, radius, force in (("contact", a, P), ("stick zone alone", size, P_c)):
        if ready.plane:
            found = float(profile.approach(force))
            approaches.append(trace.given(f"approach of the {name}, by quadrature", "d_n", found, "mm", **ROOT))
        else:
            approaches.append(trace(f"approach of the {name}", flat.rounded_approach, a=radius, **values))
    moved = trace(
        "motion of the bodies", whole.displacement, mu=mu, rho=ready.rho, d_a=approaches[0], d_c=approaches[1]
    )
    if ready.plane:
        stiffness = _plane_stiffness(ready, trace)
    else:
        stiffness = float(trace("stiffness before slip", bodies.circle_shear_stiffness, a=a, G_star=ready.G_star))
    energy, edge = None, None
    if swing is not None:
        W = ready.length * float(superposition.energy(profile, swing, P, mu, ready.rho))
        energy = float(trace.given("energy of a cycle, by quadrature of the stiffness", "W", W, "mJ", **RULE))
    if ready.plane and not asked.bulk:
        edge = float(strip.edge_stress(Q, P, mu, E_star=ready.E_star, **values))
        trace.given("stress at the trailing edge, by quadrature", "sigma", edge, "MPa", **RULE)
    return _route(moved, stiffness, ratio, energy, None, edge)


def _plane_stiffness(ready: Pair, trace: Trace) -> float:
    far: dict[str, Any] = {"E_star": ready.E_star, "D": ready.far}
    for_each = trace("stiffness before slip for each mm of length", cylinder.stiffness, a=ready.size, **far)
    return float(trace("stiffness before slip", whole.whole_stiffness, k_l=for_each, l=ready.length))


def _route(
    moved: float,
    stiffness: float,
    ratio: float,
    energy: float | None,
    shift: float | None = None,
    edge: float | None = None,
    true_slip: float | None = None,
) -> Route:
    return Route(NAME, float(moved), float(stiffness), float(ratio), shift, true_slip, None, edge, energy)


def closed_traction(ready: Pair, asked: Asked, x: Array, shift: float | None) -> Array:
    """Traction [MPa] of the closed form at x along the shear; empty where the bulk stress has led beyond it."""
    Q, P, mu = asked.shear / ready.length, ready.force, asked.mu
    if ready.profile is None:
        return Q / P * pressure(ready, x)
    if asked.bulk and ready.plane:
        if shift is None:
            return np.empty(0)
        return np.asarray(cylinder.traction(x, Q, P, mu, ready.size, shift))
    return np.asarray(superposition.traction(ready.profile, np.abs(x), Q, P, mu))


def pressure(ready: Pair, x: Array) -> Array:
    """Pressure [MPa] at the distance |x| from the middle."""
    if ready.profile is not None:
        return np.asarray(ready.profile.pressure(np.abs(x), ready.force))
    punch = whole.strip_punch_pressure if ready.plane else flat.punch_pressure
    return np.asarray(punch(np.abs(x), ready.force, ready.size))
