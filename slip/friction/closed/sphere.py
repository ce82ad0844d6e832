"""Sphere on flat, or two spheres, pressed by P and sheared by Q below gross slip (Hertz; Cattaneo; Mindlin).

P, Q in N, mu friction, lengths in mm, E_star, G_star [MPa] of both bodies (bodies.py), R the radius of the pair,
1/R = 1/R_1 + 1/R_2. The loops are those of constant P. The slip across the load, which the solution neglects, makes
a few percent; for nu = 0 it is exact. Everything broadcasts, is odd in Q (energies even), and raises ValueError where
|Q| reaches mu P.
"""

from __future__ import annotations

from functools import partial
from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import bodies, loops
from slip.friction.closed.numeric import Value
from slip.friction.closed.superposition import Profile, shear_share, stick_force

HERTZ: dict[str, Any] = {"source": "johnson1985", "basis": "derived"}
SHEARED: dict[str, Any] = {"source": "cattaneo1938;mindlin1949", "basis": "derived"}
CYCLED: dict[str, Any] = {"source": "mindlin_deresiewicz1953", "basis": "derived"}


# Pressing


@formula("a", "(3*P*R/(4*E_star))^(1/3)", unit="mm", **HERTZ, valid="a << R")
def contact_radius(P: Value, R: Value, E_star: Value) -> Value:
    """Radius [mm] of the contact (johnson1985, derived)."""
    return np.cbrt(3 * P * R / (4 * E_star))


@formula("p_0", "3*P/(2*pi*a^2)", unit="MPa", **HERTZ, valid="a > 0")
def peak_pressure(P: Value, a: Value) -> Value:
    """Pressure [MPa] in the middle; a: contact radius (johnson1985, derived)."""
    return 3 * P / (2 * np.pi * a**2)


def pressure(r: Value, P: Value, a: Value) -> Value:
    """Pressure [MPa] at distance r from the middle, 0 outside; a: contact radius (johnson1985, derived)."""
    return peak_pressure(P, a) * np.sqrt(np.maximum(0.0, 1 - (r / a) ** 2))


@formula("d_n", "a^2/R", unit="mm", **HERTZ, valid="a << R")
def approach(a: Value, R: Value) -> Value:
    """Approach [mm] of the bodies; a: contact radius (johnson1985, derived)."""
    return a**2 / R


@formula("sigma_p", "(1 - 2*nu)*p_0/3", unit="MPa", **HERTZ, valid="edge of the contact, along the radius")
def pressed_edge_stress(p_0: Value, nu: Value) -> Value:
    """Tension [MPa] that pressing leaves at the edge, in the body of Poisson's ratio nu; p_0: peak pressure.

    johnson1985, derived.
    """
    return (1 - 2 * nu) * p_0 / 3


# Shearing


@formula("c/a", "(1 - abs(Q)/(mu*P))^(1/3)", unit="", **SHEARED, valid="|Q| < mu P")
def stick_ratio(Q: Value, P: Value, mu: Value) -> Value:
    """Radius of the stick zone over that of the contact (cattaneo1938 and mindlin1949, derived)."""
    return np.cbrt(1 - shear_share(Q, P, mu))


def traction(r: Value, Q: Value, P: Value, mu: Value, a: Value) -> Value:
    """Shear traction [MPa] at distance r from the middle, 0 outside; a: contact radius.

    cattaneo1938 and mindlin1949, derived.
    """
    within = pressure(r, stick_force(Q, P, mu), stick_ratio(Q, P, mu) * a)
    return np.sign(Q) * mu * (pressure(r, P, a) - within)


@formula(
    "delta", "3*mu*P/(16*a*G_star)*(1 - (1 - Q/(mu*P))^(2/3))", unit="mm", **SHEARED, valid="0 <= Q < mu P, constant P"
)
def displacement(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Shear displacement [mm] of the bodies on first loading; a: contact radius.

    Written in the stick ratio, since 1 - s^2 = q (1 + s)/(1 + s + s^2) keeps its digits at small loads.
    cattaneo1938 and mindlin1949, derived.
    """
    s = stick_ratio(Q, P, mu)
    return 3 * Q * (1 + s) / (16 * a * G_star * (1 + s + s**2))


def tangent_stiffness(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Stiffness [N/mm] against further loading: 8 G* on the stick radius; at Q = 0 the initial one.

    cattaneo1938 and mindlin1949, derived.
    """
    return bodies.circle_shear_stiffness(stick_ratio(Q, P, mu) * a, G_star)


def secant_stiffness(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Load over displacement [N/mm] on first loading (cattaneo1938 and mindlin1949, derived)."""
    return loops.secant_stiffness(Q, displacement(Q, P, mu, a, G_star), bodies.circle_shear_stiffness(a, G_star))


@formula(
    "W",
    "9*(mu*P)^2/(10*a*G_star)*(1 - (1 - Q/(mu*P))^(5/3) - 5*Q/(6*mu*P)*(1 + (1 - Q/(mu*P))^(2/3)))",
    unit="mJ",
    **CYCLED,
    valid="0 <= Q < mu P, constant P",
)
def energy(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Energy [mJ] per cycle between -Q and Q; a: contact radius.

    Written in the stick ratio s: the bracket is (1 - s)^3 (1 + 3 s + s^2)/6, and 1 - s = q/(1 + s + s^2), so that no
    digits cancel at small loads. mindlin_deresiewicz1953, derived.
    """
    s = stick_ratio(Q, P, mu)
    size = np.abs(Q)
    return 3 * size**3 * (1 + 3 * s + s**2) / (20 * mu * P * a * G_star * (1 + s + s**2) ** 3)


@formula("W", "Q^3/(36*a*mu*P*G_star)", unit="mJ", **CYCLED, valid="0 <= Q << mu P, constant P")
def small_load_energy(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Energy [mJ] per cycle at small loads: a third below the full form at half of mu P.

    mindlin_deresiewicz1953, derived.
    """
    return np.abs(Q) ** 3 / (36 * a * mu * P * G_star)


@formula(
    "sigma_t",
    "mu*p_0*(acos(s) + s*sqrt(1 - s^2) + nu/4*(acos(s) + s*sqrt(1 - s^2)*(1 - 2*s^2)))",
    unit="MPa",
    source="johnson1985",
    basis="derived",
    valid="0 <= s <= 1, at the rear edge on the line of the load",
)
def sheared_edge_stress(s: Value, mu: Value, p_0: Value, nu: Value) -> Value:
    """Tension [MPa] along the load that shear adds at the edge behind the load, in the body with Poisson's ratio nu.

    s: stick ratio; p_0: peak pressure. The edge ahead has as much compression; the tension of pressing comes on top.
    s = 0 is Johnson's sliding sphere, mu p_0 pi (4 + nu)/8; the rest is derived from the rule of two pressings.
    ValueError for s outside 0 to 1.
    """
    if np.any(~((np.asarray(s) >= 0) & (np.asarray(s) <= 1))):
        raise ValueError("the stick ratio s must be between 0 and 1")
    reach, arm = np.arccos(s), s * np.sqrt(1 - s**2)
    return mu * p_0 * (reach + arm + nu / 4 * (reach + arm * (1 - 2 * s**2)))


def profile(R: Value, E_star: Value) -> Profile:
    """The sphere for the general rule of superposition.py; with P [N]. Source johnson1985, derived."""
    radius = partial(contact_radius, R=R, E_star=E_star)

    def pressed(r: Value, P: Value) -> Value:
        a = radius(P)
        return pressure(r, P, np.where(a > 0, a, 1.0))

    return Profile(
        radius=radius,
        pressure=pressed,
        approach=lambda P: approach(radius(P), R),
        stiffness=lambda P: bodies.circle_normal_stiffness(radius(P), E_star),
    )
