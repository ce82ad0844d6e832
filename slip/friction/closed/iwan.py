"""Four-parameter Iwan element: sliders in parallel whose slip displacements follow a power law with a jump at its end.

F_S [N]: slip force; K_T [N/mm]: stiffness without load; chi, -1 < chi <= 0: the energy of small cycles grows with
amplitude to the power 3 + chi; beta >= 0: size of the jump of stiffness when all slips, over that of the power law.
phi_max [mm]: displacement at which all slips. R and S: strength of the power law and of the jump. Displacements in
mm, energies in N mm = mJ. Everything broadcasts and is odd in load and displacement, energies even. Past phi_max the
force stays at F_S; a force of F_S or more raises ValueError. Source segalman2005, derived from the density.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Value, increasing_root, share_of_limit

IWAN: dict[str, Any] = {"source": "segalman2005", "basis": "derived"}


# Parameters


@formula(
    "phi_max", "F_S*(1 + beta)/(K_T*(beta + (chi + 1)/(chi + 2)))", unit="mm", **IWAN, valid="-1 < chi <= 0, beta >= 0"
)
def slip_displacement(F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Displacement [mm] at which the last slider slips (segalman2005, derived)."""
    return F_S * (1 + beta) / (K_T * (beta + (chi + 1) / (chi + 2)))


@formula(
    "R",
    "F_S*(chi + 1)/(phi_max^(chi + 2)*(beta + (chi + 1)/(chi + 2)))",
    unit="",
    **IWAN,
    valid="-1 < chi <= 0, beta >= 0",
)
def power_strength(F_S: Value, chi: Value, beta: Value, phi_max: Value) -> Value:
    """Factor [N/mm^(chi + 2)] of the power law: sliders of stiffness R phi^chi dphi slip at phi.

    segalman2005, derived.
    """
    return F_S * (chi + 1) / (phi_max ** (chi + 2) * (beta + (chi + 1) / (chi + 2)))


@formula("S", "F_S/phi_max*beta/(beta + (chi + 1)/(chi + 2))", unit="N/mm", **IWAN, valid="-1 < chi <= 0, beta >= 0")
def jump_stiffness(F_S: Value, chi: Value, beta: Value, phi_max: Value) -> Value:
    """Stiffness [N/mm] of the sliders that slip at phi_max: what is left just before (segalman2005, derived)."""
    return F_S / phi_max * beta / (beta + (chi + 1) / (chi + 2))


@formula("F", "K_T*u - R*u^(chi + 2)/((chi + 1)*(chi + 2))", unit="N", **IWAN, valid="0 <= u <= phi_max")
def backbone(u: Value, K_T: Value, R: Value, chi: Value) -> Value:
    """Force [N] at displacement u on first loading, up to phi_max (segalman2005, derived)."""
    return K_T * u - R * u ** (chi + 2) / ((chi + 1) * (chi + 2))


@formula("W", "4*R*u_0^(chi + 3)/((chi + 2)*(chi + 3))", unit="mJ", **IWAN, valid="0 <= u_0 <= phi_max")
def partial_energy(u_0: Value, R: Value, chi: Value) -> Value:
    """Energy [mJ] per cycle of displacement between -u_0 and u_0, up to phi_max (segalman2005, derived)."""
    return 4 * R * u_0 ** (chi + 3) / ((chi + 2) * (chi + 3))


# The element


def _constants(F_S: Value, K_T: Value, chi: Value, beta: Value) -> tuple[Value, Value]:
    """phi_max and R. Raises ValueError for exponents and jumps that no density has."""
    if np.any(~(np.asarray(chi) > -1)) or np.any(~(np.asarray(beta) >= 0)):
        raise ValueError("the exponent chi must be above -1 and the jump beta at least 0")
    phi_max = slip_displacement(F_S, K_T, chi, beta)
    return phi_max, power_strength(F_S, chi, beta, phi_max)


def force(u: Value, F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Force [N] at displacement u on first loading, F_S from phi_max on (segalman2005, derived)."""
    phi_max, R = _constants(F_S, K_T, chi, beta)
    return np.copysign(backbone(np.minimum(np.abs(u), phi_max), K_T, R, chi), u)


def displacement(Q: Value, F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Displacement [mm] at force Q on first loading; ValueError where |Q| reaches F_S (segalman2005, derived)."""
    share_of_limit(Q, F_S)
    phi_max, R = _constants(F_S, K_T, chi, beta)
    return np.copysign(increasing_root(lambda u: backbone(u, K_T, R, chi), np.abs(Q), 0.0, phi_max), Q)


def tangent_stiffness(u: Value, F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Stiffness [N/mm] against further loading at displacement u: the sliders that still stick, 0 from phi_max on.

    segalman2005, derived.
    """
    phi_max, R = _constants(F_S, K_T, chi, beta)
    return np.where(np.abs(u) < phi_max, K_T - R * np.abs(u) ** (chi + 1) / (chi + 1), 0.0)[()]


def secant_stiffness(u: Value, F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Force over displacement [N/mm] at displacement u on first loading (segalman2005, derived)."""
    return loops.secant_stiffness(force(u, F_S, K_T, chi, beta), u, K_T)


def energy(u_0: Value, F_S: Value, K_T: Value, chi: Value, beta: Value) -> Value:
    """Energy [mJ] per cycle of displacement between -u_0 and u_0; past phi_max what wholly slips is added.

    segalman2005, derived.
    """
    phi_max, R = _constants(F_S, K_T, chi, beta)
    within = np.minimum(np.abs(u_0), phi_max)
    return partial_energy(within, R, chi) + 4 * F_S * (np.abs(u_0) - within)
