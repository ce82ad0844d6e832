"""A pressed contact as a whole: its load, what a length of it adds up to, and what it does while it sticks all over.

Forces in N, per mm of length N/mm, lengths in mm; everything broadcasts.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed.numeric import Value

STATICS: dict[str, Any] = {"source": "statics", "basis": "derived"}


@formula("Q", "hypot(Q_x, Q_y)", unit="N", **STATICS)
def resultant(Q_x: Value, Q_y: Value) -> Value:
    """Shear [N] of two components [N] (statics, derived)."""
    return np.hypot(Q_x, Q_y)


@formula("Q_h", "abs(Q_1 - Q_2)/2", unit="N", **STATICS, valid="both ends on one line")
def half_range(Q_1: Value, Q_2: Value) -> Value:
    """Half the range [N] of a shear between two ends, signed along their line (statics, derived)."""
    return np.abs(Q_1 - Q_2) / 2


@formula("F/l", "F/l", unit="N/mm", **STATICS, valid="even along the length")
def line_load(F: Value, l: Value) -> Value:  # noqa: E741 - the symbol
    """Force [N/mm] for each mm of the length l (statics, derived)."""
    return F / l


@formula("k", "k_l*l", unit="N/mm", **STATICS, valid="even along the length")
def whole_stiffness(k_l: Value, l: Value) -> Value:  # noqa: E741
    """Stiffness [N/mm] of the length l from that per length [N/mm2] (statics, derived)."""
    return k_l * l


@formula("W", "W_l*l", unit="mJ", **STATICS, valid="even along the length")
def whole_energy(W_l: Value, l: Value) -> Value:  # noqa: E741
    """Energy [mJ] of the length l from that per length [mJ/mm] (statics, derived)."""
    return W_l * l


@formula("delta", "Q/k", unit="mm", **STATICS, valid="sticks all over")
def stuck_displacement(Q: Value, k: Value) -> Value:
    """Displacement [mm] under the shear Q [N] at the stiffness k [N/mm] (statics, derived)."""
    return Q / k


@formula("p_m", "P/(pi*a^2)", unit="MPa", **STATICS)
def disc_pressure(P: Value, a: Value) -> Value:
    """Mean pressure [MPa] over a circle of radius a (statics, derived)."""
    return P / (np.pi * a**2)


@formula("p_m", "P/(2*a)", unit="MPa", **STATICS)
def strip_pressure(P: Value, a: Value) -> Value:
    """Mean pressure [MPa] over a strip of half-width a, P [N/mm] (statics, derived)."""
    return P / (2 * a)


@formula("c/a", "c/a", unit="", **STATICS)
def size_ratio(c: Value, a: Value) -> Value:
    """Size of the stick zone over that of the contact (statics, derived)."""
    return c / a


@formula(
    "delta", "mu/rho*(d_a - d_c)", unit="mm", source="jaeger1998;ciavarella1998", basis="derived", valid="constant P"
)
def displacement(mu: Value, rho: Value, d_a: Value, d_c: Value) -> Value:
    """Shear displacement [mm] from the approach of the contact, d_a, and that of its stick zone alone, d_c.

    The rule of superposition.py (jaeger1998 and ciavarella1998, derived).
    """
    return mu / rho * (d_a - d_c)


def strip_punch_pressure(x: Value, P: Value, a: Value) -> Value:
    """Pressure [MPa] under a sharp-edged flat strip of half-width a at x, P [N/mm]; infinite at its edges, 0 outside.

    johnson1985, derived.
    """
    inside = np.maximum(0.0, a**2 - np.asarray(x, dtype=float) ** 2)
    with np.errstate(divide="ignore"):
        return np.where(np.abs(x) <= a, P / (np.pi * np.sqrt(inside)), 0.0)[()]
