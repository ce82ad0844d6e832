"""Along the overlap of a lap joint: shear flow, true slip and the force in the strips at any place.

Joint and symbols as in lap.py; x [mm] from the end at which strip 2 is pulled, 0 <= x <= L. Everything broadcasts and
is odd in P; ValueError where |P| reaches q_l L. Source metherell_diller1968 and statics, derived.
"""

from __future__ import annotations

import numpy as np

from slip.friction.closed import lap
from slip.friction.closed.numeric import Value


def traction(x: Value, P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Shear flow [N/mm] at x on first loading: q_l where it slips; per width it is the traction in MPa. Derived."""
    a_0, a_L = lap.slip_lengths(P, EA_1, EA_2, k, q_l, L)
    slope_0, slope_L, D = _slopes(P, EA_1, EA_2, q_l, a_0, a_L)
    y, z, c = _stuck_place(x, a_0, a_L, L)
    omega = lap.joint_decay(EA_1, EA_2, k, L)
    whole = -np.expm1(-2 * omega * c)
    left = slope_0 * (np.exp(-omega * y) + np.exp(-omega * (c + z)))
    right = slope_L * (np.exp(-omega * z) + np.exp(-omega * (c + y)))
    stuck = np.minimum(q_l, omega / D * (left + right) / whole)  # rounding must not pass the limit
    return np.sign(P) * np.where((x < a_0) | (x > L - a_L), q_l, stuck)


def slip(x: Value, P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """True slip [mm] at x on first loading, 0 where it sticks. Derived."""
    a_0, a_L = lap.slip_lengths(P, EA_1, EA_2, k, q_l, L)
    slope_0, slope_L, D = _slopes(P, EA_1, EA_2, q_l, a_0, a_L)
    y, z = np.maximum(0.0, a_0 - x), np.maximum(0.0, x - (L - a_L))
    return np.sign(P) * (slope_0 * y + slope_L * z + D * q_l * (y**2 + z**2) / 2)


def strip_force(x: Value, P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Force [N] in strip 1 at x on first loading, 0 at x = 0 and P at x = L; strip 2 holds the rest of P. Derived."""
    a_0, a_L = lap.slip_lengths(P, EA_1, EA_2, k, q_l, L)
    slope_0, slope_L, D = _slopes(P, EA_1, EA_2, q_l, a_0, a_L)
    y, z, c = _stuck_place(x, a_0, a_L, L)
    omega = lap.joint_decay(EA_1, EA_2, k, L)
    whole = -np.expm1(-2 * omega * c)
    left = slope_0 * (np.exp(-omega * y) - np.exp(-omega * (c + z)))
    right = slope_L * (np.exp(-omega * z) - np.exp(-omega * (c + y)))
    size = np.abs(P)
    stuck = (size / EA_2 + (right - left) / whole) / D
    return np.sign(P) * np.where(x < a_0, q_l * x, np.where(x > L - a_L, size - q_l * (L - x), stuck))


def _slopes(P: Value, EA_1: Value, EA_2: Value, q_l: Value, a_0: Value, a_L: Value) -> tuple[Value, Value, Value]:
    """Slopes of the relative motion at the edges of the stuck length, positive outwards, and D."""
    D, size = lap.strain_per_force(EA_1, EA_2), np.abs(P)
    return size / EA_2 - D * q_l * a_0, size / EA_1 - D * q_l * a_L, D


def _stuck_place(x: Value, a_0: Value, a_L: Value, L: Value) -> tuple[Value, Value, Value]:
    """Distances of x from both edges of the stuck length, not beyond them, and that length."""
    c = L - a_0 - a_L
    y = np.clip(x - a_0, 0.0, c)
    return y, c - y, c
