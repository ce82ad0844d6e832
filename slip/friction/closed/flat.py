"""Flat-ended round punch with a sharp or a rounded edge, pressed by P and sheared by Q.

The rounded end is flat up to the radius b and leaves the plane as (r - b)^2/(2 R) beyond. P, Q in N, mu friction,
lengths in mm, E_star, G_star [MPa] of both bodies. The rounded form is a Profile: what shear does to it is in
superposition.py. With s = sqrt(a^2 - b^2) and the angle arccos(b/a) = arctan(s/b), all of it is written in
e = s - b arctan(s/b), which is computed without cancellation when the contact has hardly left the flat.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import bodies
from slip.friction.closed.numeric import Value, arc_rest, gauss, increasing_root, pairs
from slip.friction.closed.superposition import Profile, shear_share

PUNCH: dict[str, Any] = {"source": "johnson1985;mindlin1949", "basis": "derived"}
ROUNDED: dict[str, Any] = {"source": "sneddon1965;ciavarella1998", "basis": "derived"}
NARROWEST = 1e-6  # of s: nearer to r = b the pressure is taken at that distance, which changes it by its square


# Sharp edge


def punch_pressure(r: Value, P: Value, a: Value) -> Value:
    """Pressure [MPa] under a sharp-edged punch of radius a at distance r from the middle; infinite at r = a, 0 outside.

    johnson1985, derived.
    """
    inside = np.maximum(0.0, a**2 - np.asarray(r) ** 2)
    with np.errstate(divide="ignore"):
        return np.where(r <= a, P / (2 * np.pi * a * np.sqrt(inside)), 0.0)[()]


def punch_traction(r: Value, Q: Value, P: Value, mu: Value, a: Value) -> Value:
    """Shear traction [MPa] under a sharp-edged punch: like the pressure everywhere, so that all slips at once or none.

    Raises ValueError where |Q| reaches mu P. mindlin1949, derived.
    """
    shear_share(Q, P, mu)
    return np.sign(Q) * punch_pressure(r, np.abs(Q), a)


@formula("d_n", "P/(2*a*E_star)", unit="mm", **PUNCH, valid="sharp edge")
def punch_approach(P: Value, a: Value, E_star: Value) -> Value:
    """Approach [mm] of a sharp-edged punch of radius a (johnson1985 and mindlin1949, derived)."""
    return P / bodies.circle_normal_stiffness(a, E_star)


def punch_displacement(Q: Value, P: Value, mu: Value, a: Value, G_star: Value) -> Value:
    """Shear displacement [mm] of a sharp-edged punch, linear up to gross slip: no energy is lost below it.

    Raises ValueError where |Q| reaches mu P. mindlin1949, derived.
    """
    shear_share(Q, P, mu)
    return Q / bodies.circle_shear_stiffness(a, G_star)


# Rounded edge


def _beyond(a: Value, b: Value) -> Value:
    """s = sqrt(a^2 - b^2) of a contact radius a >= b."""
    if np.any(np.asarray(a) < b):
        raise ValueError("the contact radius must be at least that of the flat, a >= b")
    return np.sqrt((a - b) * (a + b))


@formula("d_n", "a/R*(sqrt(a^2 - b^2) - b*acos(b/a))", unit="mm", **ROUNDED, valid="0 <= b <= a << R")
def rounded_approach(a: Value, b: Value, R: Value) -> Value:
    """Approach [mm] at the contact radius a: flat up to b, edge radius R. ValueError for a < b.

    sneddon1965 and ciavarella1998, derived.
    """
    return a / R * arc_rest(_beyond(a, b), b)


@formula(
    "P",
    "E_star/(3*R)*((4*a^2 - b^2)*sqrt(a^2 - b^2) - 3*a^2*b*acos(b/a))",
    unit="N",
    **ROUNDED,
    valid="0 <= b <= a << R",
)
def rounded_force(a: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Force [N] at the contact radius a: flat up to b, edge radius R. ValueError for a < b.

    sneddon1965 and ciavarella1998, derived.
    """
    return _force(_beyond(a, b), b, R, E_star)


def _force(s: Value, b: Value, R: Value, E_star: Value) -> Value:
    return E_star / R * (s**3 / 3 + (s**2 + b**2) * arc_rest(s, b))


def _reach(P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """s = sqrt(a^2 - b^2) under the force P >= 0."""
    if np.any(~(np.asarray(P) >= 0)):
        raise ValueError("the force must be a number of at least 0")
    highest = np.cbrt(3 * P * R / E_star)
    return increasing_root(lambda s: _force(s, b, R, E_star), P, 0.0, highest)


def rounded_radius(P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Contact radius [mm] under the force P >= 0: the inverse of rounded_force, b for P = 0. Source there, derived."""
    return np.hypot(_reach(P, b, R, E_star), b)


def rounded_pressure(r: Value, P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Pressure [MPa] at distance r from the middle under the force P >= 0, 0 outside; finite everywhere.

    The sum over all contact radii t up to a of flat punches that carry dP(t). Source as rounded_force, derived.
    """

    def slope(s: Value) -> Value:  # of the approach over t, times R/t
        t = np.hypot(s, b)
        return (s + arc_rest(s, b)) / np.where(t > 0, t, 1.0)

    return E_star / (np.pi * R) * over_punches(slope, r, _reach(P, b, R, E_star), b)


def over_punches(function: Callable[[Value], Value], r: Value, s_a: Value, b: Value) -> Value:
    """Integral of function(s) s ds/sqrt(s^2 + b^2 - r^2) up to s_a, from 0 or where the root is real; 0 outside."""
    square = b**2 - np.asarray(r, dtype=float) ** 2
    floor = np.where(s_a > 0, NARROWEST * s_a, 1.0)
    scale, inside = np.maximum(np.sqrt(np.abs(square)), floor), square > 0
    x = s_a / scale
    top = np.where(inside, np.arcsinh(x), np.arccosh(np.maximum(x, 1.0)))
    total = 0.0
    for node, weight in pairs(*gauss()):
        s = scale * np.where(inside, np.sinh(node * top), np.cosh(node * top))
        total = total + weight * function(s) * s
    return (total * top)[()]


def rounded_profile(b: Value, R: Value, E_star: Value) -> Profile:
    """The rounded punch for the general rule of superposition.py. Source as rounded_force, derived."""

    def radius(P: Value) -> Value:
        return rounded_radius(P, b, R, E_star)

    def approach(P: Value) -> Value:
        s = _reach(P, b, R, E_star)
        return np.hypot(s, b) / R * arc_rest(s, b)

    return Profile(
        radius=radius,
        pressure=lambda r, P: rounded_pressure(r, P, b, R, E_star),
        approach=approach,
        stiffness=lambda P: bodies.circle_normal_stiffness(radius(P), E_star),
    )
