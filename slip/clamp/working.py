"""Formulas of the loaded joint: loads moved to the centroid, shared over the bolts, and the clamp that they leave.

Forces in N, moments in N mm, lengths in mm; everything broadcasts. x, y are measured from the centroid of all bolts;
z points from the lower to the upper plate; an axial force is positive in tension.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any
STATICS: dict[str, Any] = {"source": "statics", "basis": "derived"}


@formula("M_x", "C_x + F_z*y - z*V_y", unit="N mm", **STATICS)
def moment_x(C_x: Value, F_z: Value, y: Value, z: Value, V_y: Value) -> Value:
    """Moment about x at the centroid in the sliding face: couple C_x, axial F_z at y, shear V_y at height z (statics, derived)."""
    return C_x + F_z * y - z * V_y


@formula("M_y", "C_y - F_z*x + z*V_x", unit="N mm", **STATICS)
def moment_y(C_y: Value, F_z: Value, x: Value, z: Value, V_x: Value) -> Value:
    """Moment about y at the centroid in the sliding face: couple C_y, axial F_z at x, shear V_x at height z (statics, derived)."""
    return C_y - F_z * x + z * V_x


@formula("M_z", "C_z + x*V_y - y*V_x", unit="N mm", **STATICS)
def moment_z(C_z: Value, x: Value, V_y: Value, y: Value, V_x: Value) -> Value:
    """Moment about the normal at the centroid: couple C_z and the shear that acts at x, y (statics, derived)."""
    return C_z + x * V_y - y * V_x


@formula("F_x", "V_x/n - M_z*y/sum_r2", unit="N", **STATICS, valid="equal springs, rigid plates")
def bolt_shear_x(V_x: Value, n: Value, M_z: Value, y: Value, sum_r2: Value) -> Value:
    """Shear of one bolt along x: equal part of V_x and the share of M_z of n equal springs (statics, derived)."""
    return V_x / n - M_z * y / sum_r2


@formula("F_y", "V_y/n + M_z*x/sum_r2", unit="N", **STATICS, valid="equal springs, rigid plates")
def bolt_shear_y(V_y: Value, n: Value, M_z: Value, x: Value, sum_r2: Value) -> Value:
    """Shear of one bolt along y: equal part of V_y and the share of M_z of n equal springs (statics, derived)."""
    return V_y / n + M_z * x / sum_r2


@formula("F_s", "hypot(F_x, F_y)", unit="N", **STATICS)
def resultant(F_x: Value, F_y: Value) -> Value:
    """Resultant of two components; friction bounds the resultant, not each axis (statics, derived)."""
    return np.hypot(F_x, F_y)


@formula("M", "M_x*a_x + M_y*a_y", unit="N mm", **STATICS, valid="a_x^2 + a_y^2 = 1")
def principal_moment(M_x: Value, a_x: Value, M_y: Value, a_y: Value) -> Value:
    """Part of a tilting moment about the axis with direction a_x, a_y (statics, derived)."""
    return M_x * a_x + M_y * a_y


@formula(
    "F_ax", "F_z/n + M_u*v/sum_v2 - M_v*u/sum_u2", unit="N", **STATICS, valid="rigid plates, turning about the centroid"
)
def bolt_tension(
    F_z: Value, n: Value, M_u: Value, v: Value, sum_v2: Value, M_v: Value, u: Value, sum_u2: Value
) -> Value:
    """External axial force at one bolt: equal part of F_z and the moments about the pattern's principal axes u, v.

    Prying is not in it (statics, derived).
    """
    return F_z / n + M_u * v / sum_v2 - M_v * u / sum_u2


@formula("F_A", "(F_b - F_0)/Phi_m", unit="N", **STATICS, valid="the model's joint stays closed")
def external_from_bolt_force(F_b: Value, F_0: Value, Phi_m: Value) -> Value:
    """External axial force behind a model's bolt force F_b that holds the preload F_0, bolt share Phi_m (statics, derived)."""
    return (F_b - F_0) / Phi_m


@formula("F_A", "dF_b/Phi_m", unit="N", **STATICS, valid="the model's joint stays closed")
def external_from_change(dF_b: Value, Phi_m: Value) -> Value:
    """External axial force behind a model's change of bolt force dF_b, bolt share Phi_m (statics, derived)."""
    return dF_b / Phi_m


@formula("relief", "(1 - Phi)*max(F_ax, 0)", unit="N", **STATICS)
def axial_relief(Phi: Value, F_ax: Value) -> Value:
    """Clamp [N] that an axial tension takes away: what the bolt does not carry; compression is not credited (statics, derived)."""
    return (1 - Phi) * np.maximum(F_ax, 0)


@formula("relief", "(1 - Phi)*max(F_ax, 0) + (1 - Phi_c)*min(F_ax, 0)", unit="N", **STATICS)
def axial_relief_credited(Phi: Value, F_ax: Value, Phi_c: Value) -> Value:
    """As axial_relief, with compression credited on request: it adds clamp, less with the high bolt share Phi_c (statics, derived)."""
    return (1 - Phi) * np.maximum(F_ax, 0) + (1 - Phi_c) * np.minimum(F_ax, 0)


@formula("relief", "max(F_0 - F_c, 0)", unit="N", **STATICS)
def contact_relief(F_0: Value, F_c: Value) -> Value:
    """Clamp [N] taken away in a model that tells the contact force F_c round the bolt, F_0 its preload; a gain is not credited.

    (statics, derived)
    """
    return np.maximum(F_0 - F_c, 0)


@formula("relief", "F_0 - F_c", unit="N", **STATICS)
def contact_relief_credited(F_0: Value, F_c: Value) -> Value:
    """As contact_relief, with a contact force above the preload credited on request (statics, derived)."""
    return F_0 - F_c


@formula("F_A", "relief/(1 - Phi)", unit="N", **STATICS, valid="Phi < 1")
def external_from_relief(relief: Value, Phi: Value) -> Value:
    """External axial force [N] behind a relief of the clamp, bolt share Phi (statics, derived)."""
    return relief / (1 - Phi)


@formula("F_A", "max(F_1, F_2)", unit="N", **STATICS)
def larger(F_1: Value, F_2: Value) -> Value:
    """The larger of two external axial forces [N]: where a table tells both, the bolt is judged on the worse (statics, derived)."""
    return np.maximum(F_1, F_2)


@formula("clamp_0", "max(F_low - F_Z - F_R - F_th, 0)", unit="N", **STATICS)
def clamp_without_axial(F_low: Value, F_Z: Value, F_R: Value, F_th: Value) -> Value:
    """Lowest clamp [N] before the axial load: assembly less embedding, relaxation, thermal loss; never below zero (statics, derived)."""
    return np.maximum(F_low - F_Z - F_R - F_th, 0)


@formula("clamp_low", "max(F_low - F_Z - F_R - F_th - relief, 0)", unit="N", **STATICS)
def clamp_low(F_low: Value, F_Z: Value, F_R: Value, F_th: Value, relief: Value) -> Value:
    """Lowest clamp [N] under load: assembly less all losses and the axial relief; zero where the joint is open (statics, derived)."""
    return np.maximum(F_low - F_Z - F_R - F_th - relief, 0)


@formula("clamp_high", "F_high + F_gain", unit="N", **STATICS)
def clamp_high(F_high: Value, F_gain: Value) -> Value:
    """Highest clamp [N]: highest assembly preload and thermal gain, no losses (statics, derived)."""
    return F_high + F_gain


@formula("clamp_high", "F_high + F_gain - min(relief, 0)", unit="N", **STATICS)
def clamp_high_credited(F_high: Value, F_gain: Value, relief: Value) -> Value:
    """As clamp_high, with the clamp that a credited compression adds, a negative relief (statics, derived)."""
    return F_high + F_gain - np.minimum(relief, 0)


@formula("F_bolt", "F_high + F_gain + Phi*max(F_ax, 0)", unit="N", **STATICS)
def bolt_force_high(F_high: Value, F_gain: Value, Phi: Value, F_ax: Value) -> Value:
    """Highest bolt force [N]: highest clamp and the bolt's share (its high end) of an axial tension (statics, derived)."""
    return F_high + F_gain + Phi * np.maximum(F_ax, 0)


@formula("sigma", "F_bolt/A0", unit="MPa", **STATICS)
def axial_stress(F_bolt: Value, A0: Value) -> Value:
    """Axial stress [MPa] in the weakest section A0 [mm^2] (statics, derived)."""
    return F_bolt / A0


@formula("p_head", "F_bolt/(pi/4*(d_w^2 - d_h^2))", unit="MPa", **STATICS, valid="d_h < d_w")
def bearing_pressure(F_bolt: Value, d_w: Value, d_h: Value) -> Value:
    """Mean pressure [MPa] under the head, outer diameter d_w, hole d_h [mm] (statics, derived)."""
    return F_bolt / (np.pi / 4 * (d_w**2 - d_h**2))


@formula("S_sep", "clamp_0/relief", unit="", **STATICS, valid="relief > 0")
def separation_factor(clamp_0: Value, relief: Value) -> Value:
    """Factor on the axial tension at which no clamp is left; infinite without tension (statics, derived)."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(np.asarray(relief) > 0, clamp_0 / np.asarray(relief), np.inf)[()]
