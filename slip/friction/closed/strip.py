"""Flat strip with rounded edges (the pad of a fretting test, the foot of a long part) in plane strain.

Flat over the half-width b, edge radius R beyond: the gap is (|x| - b)^2/(2 R). P, Q in N per mm of length, mu
friction, lengths in mm, E_star [MPa] of both bodies. A Profile: what shear does to it is in superposition.py with
rho = 1. b = 0 is the cylinder. Everything broadcasts. Source ciavarella1998, derived.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import cylinder
from slip.friction.closed.flat import over_punches
from slip.friction.closed.numeric import Value, arc_rest, gauss, increasing_root, pairs, share_of_limit
from slip.friction.closed.superposition import Profile

ROUNDED: dict[str, Any] = {"source": "ciavarella1998", "basis": "derived"}


@formula("P", "E_star/(2*R)*(a^2*acos(b/a) - b*sqrt(a^2 - b^2))", unit="N/mm", **ROUNDED, valid="0 <= b <= a << R")
def force(a: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Force per length [N/mm] at the half-width a of the contact. ValueError for a < b. ciavarella1998, derived."""
    if np.any(np.asarray(a) < b):
        raise ValueError("the contact's half-width must be at least that of the flat, a >= b")
    return _force(np.sqrt((a - b) * (a + b)), b, R, E_star)


def _force(s: Value, b: Value, R: Value, E_star: Value) -> Value:
    """The force at s = sqrt(a^2 - b^2), in terms of one sign."""
    return E_star / (2 * R) * (s**2 * np.arctan2(s, b) - b * arc_rest(s, b))


def _reach(P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """s = sqrt(a^2 - b^2) under the force P >= 0."""
    if np.any(~(np.asarray(P) >= 0)):
        raise ValueError("the force must be a number of at least 0")
    # _force is at least E*/(2 R) times .45 s^3/b for s <= b, and .55 s^2 beyond
    highest = np.cbrt(5 * P * R * b / E_star) + 2 * np.sqrt(P * R / E_star)
    return increasing_root(lambda s: _force(s, b, R, E_star), P, 0.0, highest)


def half_width(P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Half-width [mm] of the contact under the force P >= 0: the inverse of `force`. ciavarella1998, derived."""
    return np.hypot(_reach(P, b, R, E_star), b)


def pressure(x: Value, P: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Pressure [MPa] at x from the middle under the force P >= 0, 0 outside. ciavarella1998, derived."""
    s_a = _reach(P, b, R, E_star)
    return E_star / (np.pi * R) * over_punches(lambda s: np.arctan2(s, b), x, s_a, b)


def edge_stress(Q: Value, P: Value, mu: Value, b: Value, R: Value, E_star: Value) -> Value:
    """Stress [MPa] at the edge that shear puts in tension; pressing adds nothing there. ciavarella1998, derived.

    The sum over all half-widths t from the stick zone's to a of flat strips that carry mu dP(t), each of which gives
    (2/pi) mu dP/sqrt(a^2 - t^2) at the edge. Raises ValueError where |Q| reaches mu P.
    """
    q = share_of_limit(Q, mu * P, "N/mm")
    s_a, s_c = _reach(P, b, R, E_star), _reach(P * (1 - q), b, R, E_star)
    start = np.arcsin(np.minimum(1.0, s_c / s_a))
    total = 0.0
    for node, weight in pairs(*gauss()):
        s = s_a * np.sin(start + node * (np.pi / 2 - start))
        total = total + weight * np.arctan2(s, b) * s
    return 2 * mu * E_star / (np.pi * R) * total * (np.pi / 2 - start)


def approach(P: Value, b: Value, R: Value, E_star: Value, D: Value) -> Value:
    """Approach [mm] of the bodies as seen from surface points at the distance D >> a. ciavarella1998, derived.

    The sum over all half-widths t up to a of dP(t)/stiffness of a flat strip, (2/(pi E*)) ln(2 D/t) dP(t).
    """
    s_a = _reach(P, b, R, E_star)
    total = 0.0
    for node, weight in pairs(*gauss()):
        s = s_a * node**2  # dP = (E*/R) arctan(s/b) s ds; the square thins out the logarithm at t = 0
        t = np.hypot(s, b)
        log = np.log(2 * D / np.where(t > 0, t, 1.0))
        total = total + weight * 2 * node * s_a * np.arctan2(s, b) * s * log
    return 2 / (np.pi * R) * total


def profile(b: Value, R: Value, E_star: Value, D: Value) -> Profile:
    """The rounded strip for the general rule of superposition.py, with rho = 1 and P [N/mm]. ciavarella1998, derived.

    D: distance of the surface points that displacements are measured from; the energy does not depend on it.
    """
    return Profile(
        radius=lambda P: half_width(P, b, R, E_star),
        pressure=lambda x, P: pressure(x, P, b, R, E_star),
        approach=lambda P: approach(P, b, R, E_star, D),
        stiffness=lambda P: cylinder.stiffness(half_width(P, b, R, E_star), E_star, D),
    )
