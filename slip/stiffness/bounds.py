"""How stiff a contact may be before the computation suffers: rounding, stick and slip in turn, the explicit time step.

All functions take numbers or arrays that broadcast, above 0. Stiffnesses per area in N/mm^3, per node in N/mm, masses in
t = N s^2/mm, times in s, lengths in mm.
"""

from __future__ import annotations

from math import sqrt
from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.base.records import record
from slip.stiffness.forms import above_zero, element_stiffness

Value = Any  # a number, or an array of numbers that broadcasts with the others

ROUNDING: dict[str, Any] = {"source": "nour_omid1987", "basis": "memory"}
STATUS: dict[str, Any] = {"source": "statics", "basis": "derived"}
EXPLICIT: dict[str, Any] = {"source": "central_differences", "basis": "derived"}
PRECISION = {"double": 2.0**-53, "single": 2.0**-24}  # largest relative error of a rounded number
ALLOWED = 1e-3  # error by rounding that is still borne: a tenth of the finest error of a window, 1 %


# Conditioning: implicit computations


@formula(
    "cond", "(largest + 2*k_node)/smallest", unit="1", source="weyl1912", basis="derived", valid="k_node > largest"
)
def condition_number(k_node: Value, largest: Value, smallest: Value) -> Value:
    """Condition number of a model whose nodes are joined by springs k_node [N/mm]: grows linearly with them.

    largest: eigenvalue [N/mm] of the bodies apart; smallest: of the bodies joined rigidly (weyl1912, derived).
    """
    return (largest + 2 * k_node) / smallest


@formula("e_p", "k_e/k_t", unit="1", **ROUNDING, valid="the contact only has to enforce sticking")
def penalty_error(k_t: Value, k_e: Value) -> Value:
    """Relative error by the contact's own compliance, beside one element of stiffness per area k_e (nour_omid1987, memory)."""
    return k_e / k_t


@formula("e_r", "n*t*k_t/k_e", unit="1", **ROUNDING, valid="k_t >= k_e, direct solution")
def rounding_error(k_t: Value, k_e: Value, n: Value, t: Value) -> Value:
    """Relative error by rounding of a model with n unknowns, t the rounding of one number (nour_omid1987, memory)."""
    return n * t * k_t / k_e


@formula("k_best", "k_e/sqrt(n*t)", unit="N/mm^3", **ROUNDING, valid="direct solution")
def best_stiffness(k_e: Value, n: Value, t: Value) -> Value:
    """Value per area [N/mm^3] with the smallest sum of both errors, 2 sqrt(n t) (nour_omid1987, memory)."""
    return k_e / np.sqrt(n * t)


@formula("k_max", "k_e*max(epsilon/(n*t), 1/sqrt(n*t))", unit="N/mm^3", **ROUNDING, valid="direct solution")
def largest_stiffness(k_e: Value, n: Value, t: Value, epsilon: Value) -> Value:
    """Value per area [N/mm^3] up to which rounding stays below epsilon.

    Never below the best value: up to there more stiffness lowers the error as a whole (nour_omid1987, memory).
    """
    return k_e * np.maximum(epsilon / (n * t), 1 / np.sqrt(n * t))


@record
class Conditioning:
    """Bounds of the value per area [N/mm^3] by rounding, for a direct solution.

    element: stiffness of the element behind the face. best: least error as a whole, error_best by the rule. largest: no more
    than `allowed` of error by rounding, or best. serves: an error within `allowed` as a whole can be had.
    """

    element: float
    best: float
    error_best: float
    largest: float
    allowed: float
    serves: bool


def conditioning(
    E: float, depth: float, unknowns: float, precision: str = "double", allowed: float = ALLOWED
) -> Conditioning:
    """Bounds by rounding of a model with so many unknowns.

    E [MPa], depth [mm] normal to the face: of the element behind the face, on the side where E/depth is lower. precision:
    "double" or "single". The rule counts a rounding error for each unknown in a row and is usually ten times too careful.
    ValueError for values that are not above 0, or another precision. Source nour_omid1987, memory.
    """
    k_e = float(element_stiffness(above_zero(E, "the modulus"), above_zero(depth, "the element's depth")))
    if precision not in PRECISION:
        raise ValueError(f"the precision must be double or single, found {precision!r}")
    n, t = above_zero(unknowns, "the number of unknowns"), PRECISION[precision]
    error = 2 * sqrt(n * t)
    largest = float(largest_stiffness(k_e, n, t, above_zero(allowed, "the error that is allowed")))
    return Conditioning(k_e, float(best_stiffness(k_e, n, t)), error, largest, allowed, error <= allowed)


# Stick and slip in turn: iterations that carry the contact's status over from the step before


@formula("k_max", "2*mu*p/s", unit="N/mm^3", **STATUS, valid="status carried over; stiffer than the bodies")
def chatter_stiffness(mu: Value, p: Value, s: Value) -> Value:
    """Value per area [N/mm^3] at which twice the elastic slip at the limit is s [mm], the largest slip of one load step.

    Above it a load that turns round jumps over the sticking range, between slip forward and slip backward, in an iteration
    that begins with the status of the step before. One that begins each step with sticking (radial return with its own
    tangent) does not chatter, whatever the value (statics, derived).
    """
    return 2 * mu * p / s


@formula("s", "4*d/(N*x)", unit="mm", **STATUS, valid="even steps; 0 < x <= 1, N x >= 1")
def slip_per_step(d: Value, N: Value, x: Value) -> Value:
    """Slip [mm] of a load step, mean over the steps that slip: N steps per cycle, x the part of the cycle that slips.

    d: amplitude of the true slip, half its way from end to end. A load +-P above its onset P_on has x = 1 - P_on/P. A motion
    that is given has x = d/(d + g), which makes it 4 (d + g)/N (statics, derived).
    """
    return 4 * d / (N * x)


# The stable step of explicit time integration


@formula("dt_el", "h*sqrt(rho/E)", unit="s", **EXPLICIT, valid="bars with lumped masses; long mesh")
def element_step(h: Value, rho: Value, E: Value) -> Value:
    """Stable step [s] of a chain of elements h [mm] without contact, rho in N s^2/mm^4 (central_differences, derived)."""
    return h * np.sqrt(rho / E)


@formula("dt_c", "2/sqrt(k_node*(1/m_1 + 1/m_2))", unit="s", **EXPLICIT, valid="two masses on one spring")
def contact_step(k_node: Value, m_1: Value, m_2: Value) -> Value:
    """Stable step [s] of two contact nodes alone, of masses m_1 and m_2 [t] (central_differences, derived)."""
    return 2 / np.sqrt(k_node * (1 / m_1 + 1 / m_2))


@formula("dt", "1/sqrt(1/dt_el^2 + 1/dt_c^2)", unit="s", source="weyl1912", basis="derived", valid="always safe")
def stable_step(dt_el: Value, dt_c: Value) -> Value:
    """Step [s] that is stable for elements and contact together, whatever they are (weyl1912, derived).

    For like bars at most 11 % short; the smaller of the two alone is up to 27 % too long.
    """
    return 1 / np.sqrt(1 / dt_el**2 + 1 / dt_c**2)


@formula(
    "k_max", "4*(1/r^2 - 1)/(dt_el^2*(1/m_1 + 1/m_2))", unit="N/mm", source="weyl1912", basis="derived", valid="r < 1"
)
def largest_node_stiffness(r: Value, dt_el: Value, m_1: Value, m_2: Value) -> Value:
    """Stiffness per node [N/mm] that leaves at least the part r of the elements' step dt_el [s] (weyl1912, derived)."""
    return 4 * (1 / r**2 - 1) / (dt_el**2 * (1 / m_1 + 1 / m_2))


@formula("r", "sqrt(2/(1 + sqrt(1 + 4*(k_t*h/E)^2)))", unit="1", **EXPLICIT, valid="long like bars, lumped masses")
def step_ratio(k_t: Value, h: Value, E: Value) -> Value:
    """Stable step with contact over that without, for two like bars of elements h [mm] (central_differences, derived)."""
    return np.sqrt(2 / (1 + np.sqrt(1 + 4 * (k_t * h / E) ** 2)))


@formula("k_max", "E/h*sqrt(1 - r^2)/r^2", unit="N/mm^3", **EXPLICIT, valid="long like bars, lumped masses; r <= 1")
def stiffness_at_ratio(r: Value, h: Value, E: Value) -> Value:
    """Value per area [N/mm^3] at which the part r of the step is left, for two like bars (central_differences, derived)."""
    return E / h * np.sqrt(1 - r**2) / r**2
