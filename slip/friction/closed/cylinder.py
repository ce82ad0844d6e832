"""Cylinder on flat, or two parallel cylinders, in plane strain: pressed, sheared, with tension in one body.

P, Q in N per mm of length, mu friction, lengths in mm, E_star [MPa] of both bodies, 1/R = 1/R_1 + 1/R_2; x from the
middle of the contact along the load. In plane strain shear is as stiff as pressing (rho = 1) and the solution is exact
for like bodies. Q > 0 pulls the stretched body towards +x, which puts its edge at x = -a in tension. The loops are
those of constant P and no bulk tension. Everything broadcasts, is odd in Q (energies even), and raises ValueError
where |Q| reaches mu P.
"""

from __future__ import annotations

from functools import partial
from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Value, log_rest, share_of_limit
from slip.friction.closed.superposition import Profile, stick_force

HERTZ: dict[str, Any] = {"source": "johnson1985", "basis": "derived"}
SHEARED: dict[str, Any] = {"source": "cattaneo1938;ciavarella1998", "basis": "derived"}
BULK: dict[str, Any] = {"source": "nowell_hills1987", "basis": "derived"}


# Pressing


@formula("a", "sqrt(4*P*R/(pi*E_star))", unit="mm", **HERTZ, valid="a << R")
def contact_half_width(P: Value, R: Value, E_star: Value) -> Value:
    """Half-width [mm] of the contact (johnson1985, derived)."""
    return np.sqrt(4 * P * R / (np.pi * E_star))


@formula("p_0", "2*P/(pi*a)", unit="MPa", **HERTZ, valid="a > 0")
def peak_pressure(P: Value, a: Value) -> Value:
    """Pressure [MPa] in the middle; a: half-width (johnson1985, derived)."""
    return 2 * P / (np.pi * a)


def pressure(x: Value, P: Value, a: Value) -> Value:
    """Pressure [MPa] at x, 0 outside; a: half-width (johnson1985, derived)."""
    return peak_pressure(P, a) * np.sqrt(np.maximum(0.0, 1 - (x / a) ** 2))


@formula("d_n", "2*P/(pi*E_star)*(ln(2*D/a) + 1/2)", unit="mm", **HERTZ, valid="D >> a, P > 0")
def approach(P: Value, a: Value, E_star: Value, D: Value) -> Value:
    """Approach [mm] of the bodies as seen from surface points at the distance D from the middle; a: half-width.

    It grows without limit with D, as all displacements of plane contacts do (johnson1985, derived).
    """
    return 2 * P / (np.pi * E_star) * (np.log(2 * D / a) + 0.5)


@formula("k", "pi*E_star/(2*ln(2*D/a))", unit="N/mm^2", **HERTZ, valid="D >> a")
def stiffness(a: Value, E_star: Value, D: Value) -> Value:
    """Stiffness per length [N/mm2] of a strip of half-width a that sticks, normal and in shear alike.

    D: distance of the surface points that the motion is measured from. With the stick half-width for a it is the
    tangent stiffness in partial slip. johnson1985, derived.
    """
    return np.pi * E_star / (2 * np.log(2 * D / a))


# Shearing


def _share(Q: Value, P: Value, mu: Value) -> Value:
    return share_of_limit(Q, mu * P, "N/mm")


@formula("c/a", "sqrt(1 - abs(Q)/(mu*P))", unit="", **SHEARED, valid="|Q| < mu P")
def stick_ratio(Q: Value, P: Value, mu: Value) -> Value:
    """Half-width of the stick zone over that of the contact (cattaneo1938 and ciavarella1998, derived)."""
    return np.sqrt(1 - _share(Q, P, mu))


def traction(x: Value, Q: Value, P: Value, mu: Value, a: Value, shift: Value = 0.0) -> Value:
    """Shear traction [MPa] at x, 0 outside; a: half-width; shift: of the stick zone by bulk tension (`shift`).

    Raises ValueError where the shifted stick zone would reach beyond the contact. cattaneo1938, ciavarella1998 and
    nowell_hills1987, derived.
    """
    s = stick_ratio(Q, P, mu)
    _hold_inside(shift / a, s)
    within = pressure(x - shift, stick_force(Q, P, mu), s * a)
    return np.sign(Q) * mu * (pressure(x, P, a) - within)


@formula(
    "delta",
    "2*mu*P/(pi*E_star)*(Q/(mu*P)*(ln(2*D/a) + 1/2) + (1 - Q/(mu*P))/2*ln(1 - Q/(mu*P)))",
    unit="mm",
    **SHEARED,
    valid="0 <= Q < mu P, constant P, no bulk tension, D >> a",
)
def displacement(Q: Value, P: Value, mu: Value, a: Value, E_star: Value, D: Value) -> Value:
    """Shear displacement [mm] of the bodies as seen from surface points at the distance D; a: half-width.

    cattaneo1938 and ciavarella1998, derived.
    """
    q = _share(Q, P, mu)
    bracket = q * (np.log(2 * D / a) + 0.5) + (1 - q) / 2 * np.log1p(-q)
    return np.sign(Q) * 2 * mu * P / (np.pi * E_star) * bracket


def tangent_stiffness(Q: Value, P: Value, mu: Value, a: Value, E_star: Value, D: Value) -> Value:
    """Stiffness per length [N/mm2] against further loading, that of the stick zone; at Q = 0 the initial one.

    cattaneo1938 and ciavarella1998, derived.
    """
    return stiffness(stick_ratio(Q, P, mu) * a, E_star, D)


def secant_stiffness(Q: Value, P: Value, mu: Value, a: Value, E_star: Value, D: Value) -> Value:
    """Load over displacement [N/mm2] on first loading (cattaneo1938 and ciavarella1998, derived)."""
    return loops.secant_stiffness(Q, displacement(Q, P, mu, a, E_star, D), stiffness(a, E_star, D))


@formula(
    "W",
    "4*(mu*P)^2/(pi*E_star)*((1 - Q/(mu*P))*ln(1 - Q/(mu*P)) + Q/(mu*P) - (Q/(mu*P))^2/2)",
    unit="mJ/mm",
    **SHEARED,
    valid="0 <= Q < mu P, constant P, no bulk tension",
)
def energy(Q: Value, P: Value, mu: Value, E_star: Value) -> Value:
    """Energy per length [mJ/mm] and cycle between -Q and Q, whatever the radius.

    The bracket is q^3/2 - (1 - q)(-ln(1 - q) - q - q^2/2), which keeps its digits at small loads. cattaneo1938 and
    ciavarella1998, derived.
    """
    q = _share(Q, P, mu)
    return 4 * (mu * P) ** 2 / (np.pi * E_star) * (q**3 / 2 - (1 - q) * log_rest(q))


# Tension in one body


def _hold_inside(shift_ratio: Value, s: Value) -> None:
    """Raise ValueError where the stick zone, s of the contact, is shifted beyond its edge."""
    if np.any(~(np.abs(shift_ratio) <= 1 - s)):
        raise ValueError(
            "the bulk stress is too large for the shear: slip turns round at one edge and the closed form ends there; "
            "march the contact instead, or keep |stress| <= 4 mu p_0 (1 - sqrt(1 - q)) for like bodies"
        )


@formula("s_max", "4*mu*p_0*(1 - sqrt(1 - q))", unit="MPa", **BULK, valid="like bodies, in phase with the shear")
def largest_bulk_stress(q: Value, mu: Value, p_0: Value) -> Value:
    """Largest bulk stress [MPa] that only shifts the stick zone; q: Q/(mu P); p_0: peak pressure.

    ValueError for q outside 0 <= q < 1. nowell_hills1987, derived.
    """
    share = share_of_limit(q, 1.0, "of mu P")
    return 4 * mu * p_0 * share / (1 + np.sqrt(1 - share))


@formula("eps", "s*(1 - nu^2)/E", unit="", source="statics", basis="derived", valid="plane strain")
def bulk_strain(s: Value, E: Value, nu: Value) -> Value:
    """Strain along x of the body under bulk stress s [MPa], E and nu its own (statics, derived)."""
    return s * (1 - nu**2) / E


@formula("e/a", "E_star*eps/(2*mu*p_0)", unit="", **BULK, valid="shear Q > 0; |e/a| <= 1 - sqrt(1 - q)")
def shift_ratio(eps: Value, mu: Value, p_0: Value, E_star: Value) -> Value:
    """Shift of the stick zone over a, away from the edge that shear puts in tension when eps > 0.

    eps: strain of the stretched body less that of the other; for like bodies E_star eps = s/2. p_0: peak pressure.
    For Q < 0 that edge is at +a and the shift points to -x. nowell_hills1987, derived.
    """
    return E_star * eps / (2 * mu * p_0)


@formula(
    "sigma",
    "2*mu*p_0*(sqrt((1 + e_a)^2 - (1 - q)) - e_a) + s",
    unit="MPa",
    **BULK,
    valid="|e_a| <= 1 - sqrt(1 - q), 0 <= q < 1",
)
def edge_stress(q: Value, mu: Value, p_0: Value, e_a: Value = 0.0, s: Value = 0.0) -> Value:
    """Stress [MPa] of the stretched body at the edge that shear puts in tension; pressing adds nothing there.

    q: Q/(mu P); p_0: peak pressure; e_a: shift ratio; s: bulk stress [MPa]. 2 mu p_0 sqrt(q) without bulk stress.
    Raises ValueError for q outside 0 <= q < 1 and a shift beyond the edge. nowell_hills1987, derived.
    """
    share = share_of_limit(q, 1.0, "of mu P")
    _hold_inside(e_a, np.sqrt(1 - share))
    return 2 * mu * p_0 * (np.sqrt(share + e_a * (2 + e_a)) - e_a) + s


def profile(R: Value, E_star: Value, D: Value) -> Profile:
    """The cylinder for the general rule of superposition.py, with rho = 1 and P [N/mm]. Source johnson1985, derived."""
    half_width = partial(contact_half_width, R=R, E_star=E_star)

    def width(P: Value) -> Value:
        a = half_width(P)
        return np.where(a > 0, a, 1.0)[()]

    return Profile(
        radius=half_width,
        pressure=lambda x, P: pressure(x, P, width(P)),
        approach=lambda P: approach(P, width(P), E_star, D),
        stiffness=lambda P: stiffness(half_width(P), E_star, D),
    )
