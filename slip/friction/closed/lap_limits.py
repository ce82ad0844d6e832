"""Limits of the lap joint in one line each: one strip on a rigid base, an interface without compliance.

Symbols as in lap.py, whose functions give the same with EA_1 = inf and with k = inf, for any load.
"""

from __future__ import annotations

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed.lap import LAG, SLIPPING
from slip.friction.closed.numeric import Value

# One strip on a rigid base, beta = sqrt(k/EA)


@formula("K_0", "EA*beta*tanh(beta*L)", unit="N/mm", **LAG, valid="one strip on a rigid base, stuck")
def base_stiffness(EA: Value, beta: Value, L: Value) -> Value:
    """Stiffness [N/mm] of the pulled end, stuck; beta: decay [1/mm] (volkersen1938 and statics, derived)."""
    return EA * beta * np.tanh(beta * L)


@formula("P_on", "q_l/beta*tanh(beta*L)", unit="N", **LAG, valid="one strip on a rigid base")
def base_onset(q_l: Value, beta: Value, L: Value) -> Value:
    """Force [N] at which the pulled end slips (volkersen1938 and statics, derived)."""
    return q_l / beta * np.tanh(beta * L)


@formula("P", "q_l*a + q_l/beta*tanh(beta*(L - a))", unit="N", **SLIPPING, valid="one strip on a rigid base")
def base_force(a: Value, q_l: Value, beta: Value, L: Value) -> Value:
    """Force [N] at which a length a slips (metherell_diller1968 and statics, derived)."""
    return q_l * a + base_onset(q_l, beta, L - a)


@formula("W", "2/3*q_l^2/(k*beta)*(r - 1)^2*(r + 2)", unit="mJ", **SLIPPING, valid="beta L >> 1, r >= 1")
def long_base_energy(q_l: Value, k: Value, beta: Value, r: Value) -> Value:
    """Energy [mJ] per cycle between -P and P of a long strip, r = P/P_on (metherell_diller1968, derived)."""
    return 2 / 3 * q_l**2 / (k * beta) * (r - 1) ** 2 * (r + 2)


@formula(
    "dlnK_0/dlnk", "(1 + 2*beta*L/sinh(2*beta*L))/2", unit="", **LAG, valid="one strip on a rigid base, stuck, L > 0"
)
def base_sensitivity(beta: Value, L: Value) -> Value:
    """Relative change of K_0 per relative change of k: 1 for short joints, 1/2 for long ones.

    The same holds for the end motion of two equal strips with omega L for 2 beta L, not for their extension, of which
    the strips' own stretch is a part (lap.interface_share). volkersen1938 and statics, derived.
    """
    x = 2 * beta * L
    return 0.5 - x * np.exp(-x) / np.expm1(-2 * x)


# No compliance in the interface: slip at any load


@formula("a", "P/(EA*D*q_l)", unit="mm", **SLIPPING, valid="rigid stick, P < q_l L")
def rigid_slip_length(P: Value, EA: Value, D: Value, q_l: Value) -> Value:
    """Length [mm] that slips at the pulled end of the strip EA; P/(2 q_l) for equal strips.

    metherell_diller1968, derived.
    """
    return np.abs(P) / (EA * D * q_l)


@formula("W", "P^3/(3*EA*q_l)", unit="mJ", **SLIPPING, valid="rigid stick, equal strips, P < q_l L")
def rigid_energy(P: Value, EA: Value, q_l: Value) -> Value:
    """Energy [mJ] per cycle between -P and P of two equal strips EA, both ends (metherell_diller1968, derived)."""
    return np.abs(P) ** 3 / (3 * EA * q_l)


@formula("W", "P^3/(24*EA*q_l)", unit="mJ", **SLIPPING, valid="rigid stick, equal strips, P < q_l L")
def rigid_pulsating_energy(P: Value, EA: Value, q_l: Value) -> Value:
    """Energy [mJ] per cycle between 0 and P: an eighth, since half the range slips (metherell_diller1968, derived)."""
    return rigid_energy(P / 2, EA, q_l)
