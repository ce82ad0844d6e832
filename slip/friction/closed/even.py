"""Plates under an even pressure: their area, the force that presses, and what several faces side by side add up to.

Forces in N, lengths in mm, pressures in MPa; everything broadcasts.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed.numeric import Value

STATICS: dict[str, Any] = {"source": "statics", "basis": "derived"}


@formula("A", "l*b", unit="mm^2", **STATICS)
def rectangle_area(l: Value, b: Value) -> Value:  # noqa: E741 - the symbol
    """Area [mm2] of an overlap of length l and width b [mm] (statics, derived)."""
    return l * b


@formula("A", "pi/4*(D^2 - d^2)", unit="mm^2", **STATICS)
def ring_area(D: Value, d: Value) -> Value:
    """Area [mm2] of a ring of outer diameter D and inner diameter d [mm] (statics, derived)."""
    return np.pi / 4 * (D**2 - d**2)


@formula("F_p", "p*A", unit="N", **STATICS, valid="the same pressure all over")
def face_force(p: Value, A: Value) -> Value:
    """Force [N] that presses one face of area A [mm2] at the pressure p [MPa] (statics, derived)."""
    return p * A


@formula("q_l", "mu*p*b", unit="N/mm", **STATICS, valid="Coulomb friction, the same pressure all over")
def slip_flow(mu: Value, p: Value, b: Value) -> Value:
    """Friction [N/mm] that each mm of a lap of width b [mm] holds at the pressure p [MPa] (statics, derived)."""
    return mu * p * b


@formula("F_g", "S*F_s", unit="N", **STATICS)
def gross_load(S: Value, F_s: Value) -> Value:
    """Shear [N] at which all slips: the factor S on the shear F_s [N] (statics, derived)."""
    return S * F_s


# Faces side by side that share a load alike


@formula("P", "F/m", unit="N", **STATICS, valid="faces alike")
def face_share(F: Value, m: Value) -> Value:
    """Pull [N] on each of m faces (statics, derived)."""
    return F / m


@formula("F_on", "m*P_on", unit="N", **STATICS, valid="faces alike")
def whole_onset(P_on: Value, m: Value) -> Value:
    """Pull [N] at first slip of m faces from that of one (statics, derived)."""
    return m * P_on


@formula("K", "m/C_0", unit="N/mm", **STATICS, valid="faces alike")
def whole_stiffness(C_0: Value, m: Value) -> Value:
    """Stiffness [N/mm] of m faces from the extension C_0 for each newton on one [mm/N] (statics, derived)."""
    return m / C_0


@formula("W", "m*(W_0 + W_L)", unit="mJ", **STATICS, valid="faces alike")
def whole_energy(W_0: Value, W_L: Value, m: Value) -> Value:
    """Energy [mJ] of a cycle of m faces from that lost at both ends of one (statics, derived)."""
    return m * (W_0 + W_L)
