"""Plates that stretch or shear through their thickness, and two layers that slip on each other in bending.

Lengths in mm, forces in N, moduli and pressures in MPa; everything broadcasts, energies are even in the load.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed.numeric import Value

BENDING: dict[str, Any] = {"source": "goodman_klumpp1956", "basis": "derived"}
THROUGH: dict[str, Any] = {"source": "tsai1998", "basis": "derived"}


# Stretch, and shear through the thickness


@formula("EA", "E*t*b", unit="N", source="statics", basis="derived", valid="thickness t, width b")
def strip_stiffness(E: Value, t: Value, b: Value) -> Value:
    """Stiffness EA [N] of a strip of thickness t and width b: force for each unit of strain (statics, derived)."""
    return E * t * b


@formula("t/(3 G)", "t/(3*G)", unit="mm^3/N", **THROUGH, valid="shear stress falls linearly, omega t < 0.3")
def thickness_compliance(t: Value, G: Value) -> Value:
    """Compliance per area [mm3/N] that a plate of thickness t sheared on one face adds to the interface.

    tsai1998, derived from the shear energy of a stress that falls linearly to the free face.
    """
    return t / (3 * G)


@formula("t/(6 G)", "t/(6*G)", unit="mm^3/N", **THROUGH, valid="opposite shear on both faces, omega t < 0.3")
def inner_thickness_compliance(t: Value, G: Value) -> Value:
    """The same per face of a plate that is sheared by both neighbours, as the middle of a double lap.

    tsai1998, derived: either half is a plate of t/2.
    """
    return thickness_compliance(t / 2, G)


@formula("k", "1/(1/k_t + C)", unit="N/mm^3", source="statics", basis="derived", valid="")
def in_series(k_t: Value, C: Value) -> Value:
    """Stiffness per area [N/mm3] of an interface k_t (inf allowed) in series with a compliance C [mm3/N].

    C is the sum of the plates' thickness compliances; 0 changes nothing (statics, derived).
    """
    with np.errstate(divide="ignore"):
        return np.divide(1.0, 1.0 / np.asarray(k_t, dtype=float) + C)


# Two equal layers, clamped at one end, bent by a force at the other, pressed together


@formula("P_on", "4/3*mu*p*b*h", unit="N", **BENDING, valid="two layers of height h each")
def layers_onset(mu: Value, p: Value, b: Value, h: Value) -> Value:
    """Tip force [N] at which the whole face slips at once; width b, height h of each layer.

    goodman_klumpp1956, derived.
    """
    return 4 / 3 * mu * p * b * h


@formula("u", "P*L^3/(2*E*b*h^3)", unit="mm", **BENDING, valid="P <= P_on")
def layers_stuck_deflection(P: Value, E: Value, b: Value, h: Value, L: Value) -> Value:
    """Deflection [mm] of the tip before slip, as one beam of 2 h, bending only (goodman_klumpp1956, derived)."""
    return P * L**3 / (2 * E * b * h**3)


@formula("u", "2*(P - mu*p*b*h)*L^3/(E*b*h^3)", unit="mm", **BENDING, valid="P >= P_on, first loading")
def layers_slipping_deflection(P: Value, E: Value, b: Value, h: Value, L: Value, mu: Value, p: Value) -> Value:
    """Deflection [mm] of the tip once the face slips: four times as soft (goodman_klumpp1956, derived)."""
    return 2 * (P - mu * p * b * h) * L**3 / (E * b * h**3)


@formula("W", "max(0, 8*mu*p*L^3/(E*h^2)*(P - 4/3*mu*p*b*h))", unit="mJ", **BENDING, valid="P >= 0")
def layers_energy(P: Value, E: Value, b: Value, h: Value, L: Value, mu: Value, p: Value) -> Value:
    """Energy [mJ] per cycle of the tip force between -P and P, 0 before slip (goodman_klumpp1956, derived)."""
    return 8 * mu * p * L**3 / (E * h**2) * np.maximum(0.0, np.abs(P) - layers_onset(mu, p, b, h))
