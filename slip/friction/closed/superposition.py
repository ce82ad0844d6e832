"""The rule behind all pressed contacts: shear in partial slip is friction times the difference of two pressings.

A contact pressed by P and sheared by Q is, where mu p is not exceeded, the contact at P less the contact at P - Q/mu:
tractions, displacements and stick size all follow from the normal problem. The rule is exact in plane strain and for
nu = 0, and within a few percent in 3-D, where it neglects the slip across the load. Both bodies enter through E* and
G*; it neglects Dundurs' beta. P is constant; unloading follows Masing.

P, Q in N (N/mm for plane contacts), lengths in mm; everything broadcasts, what follows the load is odd in Q.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NamedTuple

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Value, share_of_limit

RULE: dict[str, Any] = {"source": "jaeger1998;ciavarella1998", "basis": "derived"}


class Profile(NamedTuple):
    """A normal contact as functions of the force P, which must take P = 0 as well as arrays.

    radius: P -> contact radius or half-width [mm]; pressure: (r, P) -> MPa, 0 outside the contact;
    approach: P -> normal displacement of the bodies [mm]; stiffness: P -> dP/d(approach) [N/mm].
    """

    radius: Callable[[Value], Value]
    pressure: Callable[[Value, Value], Value]
    approach: Callable[[Value], Value]
    stiffness: Callable[[Value], Value]


@formula("q", "abs(Q)/(mu*P)", unit="", source="statics", basis="derived", valid="q < 1")
def shear_share(Q: Value, P: Value, mu: Value) -> Value:
    """Shear over the shear that slips, in 0 <= q < 1. Raises ValueError where the contact slips wholly or is open.

    statics, derived.
    """
    return share_of_limit(Q, mu * P)


@formula("P_c", "P - abs(Q)/mu", unit="N", **RULE, valid="|Q| < mu P")
def stick_force(Q: Value, P: Value, mu: Value) -> Value:
    """Force [N] that alone would press just the stick zone together: the corrective pressing of the rule.

    ValueError as shear_share. jaeger1998 and ciavarella1998, derived.
    """
    return P * (1 - shear_share(Q, P, mu))


def stick_radius(profile: Profile, Q: Value, P: Value, mu: Value) -> Value:
    """Radius [mm] (half-width) inside which the contact sticks. Errors and source as stick_force, derived."""
    return profile.radius(stick_force(Q, P, mu))


def traction(profile: Profile, r: Value, Q: Value, P: Value, mu: Value) -> Value:
    """Shear traction [MPa] at distance r from the middle, 0 outside. Errors and source as stick_force, derived."""
    within = profile.pressure(r, stick_force(Q, P, mu))
    return np.sign(Q) * mu * (profile.pressure(r, P) - within)


def displacement(profile: Profile, Q: Value, P: Value, mu: Value, rho: Value) -> Value:
    """Shear displacement [mm] of the bodies: rho = 4 G*/E* in 3-D, 1 in plane strain.

    In plane strain it depends on the point that it is measured from, as the approach does. Errors and source as
    stick_force, derived.
    """
    return np.sign(Q) * mu / rho * (profile.approach(P) - profile.approach(stick_force(Q, P, mu)))


def initial_stiffness(profile: Profile, P: Value, rho: Value) -> Value:
    """Shear stiffness [N/mm] without shear, all stuck. Source as stick_force, derived."""
    return rho * profile.stiffness(P)


def tangent_stiffness(profile: Profile, Q: Value, P: Value, mu: Value, rho: Value) -> Value:
    """Shear stiffness [N/mm] against further loading: that of the stick zone. Errors and source as stick_force."""
    return initial_stiffness(profile, stick_force(Q, P, mu), rho)


def secant_stiffness(profile: Profile, Q: Value, P: Value, mu: Value, rho: Value) -> Value:
    """Shear force over displacement [N/mm]. Errors and source as stick_force, derived."""
    return loops.secant_stiffness(Q, displacement(profile, Q, P, mu, rho), initial_stiffness(profile, P, rho))


def energy(profile: Profile, Q: Value, P: Value, mu: Value, rho: Value) -> Value:
    """Energy [mJ] per cycle between -Q and Q at constant P, by quadrature of the tangent stiffness.

    Errors and source as stick_force, derived.
    """
    shear_share(Q, P, mu)
    return loops.energy_from_stiffness(lambda shear: tangent_stiffness(profile, shear, P, mu, rho), Q)
