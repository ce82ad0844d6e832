"""Tightening: torque, friction and preload, the scatter between them, and what the bolt's yield strength allows.

Forces in N, torques in N mm, lengths in mm, stresses in MPa; the arguments broadcast, numbers in give a number out.
Friction of the thread and friction under the turned head or nut are two numbers, never one for the other.

The torque is linear in both frictions. Equilibrium on the thread's slope gives the thread's part over 1 - P/(pi d2)
mu_th/cos 30: under 2 % more for standard threads with mu_th up to 0.2 (held in tests/derived).
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any  # a number, or an array of numbers that broadcasts with the others
COS_FLANK = np.cos(np.pi / 6)  # half the flank angle of 60 degrees
SMALL_LEAD = "60 degree thread of small lead"


@formula("D_km", "(d_w + d_h)/2", unit="mm", source="vdi2230", basis="memory", valid="d_w > d_h")
def bearing_friction_diameter(d_w: Value, d_h: Value) -> Value:
    """Mean diameter [mm] at which the friction under the turned head or nut acts.

    d_w: outer bearing diameter [mm]; d_h: hole diameter [mm], d_h < d_w. It is the ring of evenly worn faces; evenly
    pressed faces act up to 2 % further out (d_w/d_h up to 1.5). Source vdi2230, memory.
    """
    return (d_w + d_h) / 2


@formula(
    "F",
    "T/(P/(2*pi) + d2*mu_th/(2*cos(pi/6)) + D_km*mu_b/2)",
    unit="N",
    source="vdi2230",
    basis="derived",
    valid=SMALL_LEAD,
)
def preload_from_torque(T: Value, P: Value, d2: Value, mu_th: Value, D_km: Value, mu_b: Value) -> Value:
    """Preload [N] from the tightening torque.

    T: torque [N mm], less the prevailing torque of a locking element; P: pitch [mm]; d2: pitch diameter [mm]; mu_th:
    thread friction; D_km: friction diameter under head or nut [mm]; mu_b: friction there. All >= 0, P > 0. Source
    vdi2230, derived.
    """
    return T / (P / (2 * np.pi) + d2 * mu_th / (2 * COS_FLANK) + D_km * mu_b / 2)


@formula(
    "T",
    "F*(P/(2*pi) + d2*mu_th/(2*cos(pi/6)) + D_km*mu_b/2)",
    unit="N mm",
    source="vdi2230",
    basis="derived",
    valid=SMALL_LEAD,
)
def torque_from_preload(F: Value, P: Value, d2: Value, mu_th: Value, D_km: Value, mu_b: Value) -> Value:
    """Tightening torque [N mm] for a preload: the inverse of preload_from_torque, same arguments.

    F: preload [N]; the torque is what lifts the load over a turn plus what the two frictions take. Source vdi2230,
    derived.
    """
    return F * (P / (2 * np.pi) + d2 * mu_th / (2 * COS_FLANK) + D_km * mu_b / 2)


@formula("F", "T/(K*d)", unit="N", source="shigley9", basis="memory", valid="K > 0")
def preload_from_nut_factor(T: Value, K: Value, d: Value) -> Value:
    """Preload [N] from torque T [N mm], nut factor K (all friction in one number) and nominal diameter d [mm].

    K, d > 0. Source shigley9, memory.
    """
    return T / (K * d)


@formula(
    "M_G",
    "F*(P/(2*pi) + d2*mu_th/(2*cos(pi/6)))",
    unit="N mm",
    source="vdi2230",
    basis="derived",
    valid=SMALL_LEAD,
)
def thread_torque(F: Value, P: Value, d2: Value, mu_th: Value) -> Value:
    """Part of the tightening torque [N mm] that reaches the thread and twists the bolt.

    F: preload [N]; P: pitch [mm]; d2: pitch diameter [mm]; mu_th: thread friction, >= 0. Source vdi2230, derived.
    """
    return F * (P / (2 * np.pi) + d2 * mu_th / (2 * COS_FLANK))


@formula("M_P", "F*P/(2*pi)", unit="N mm", source="statics", basis="derived", valid="")
def pitch_torque(F: Value, P: Value) -> Value:
    """Torque [N mm] with which the preload itself tries to unwind the bolt: work F P over a turn.

    F: preload [N]; P: pitch [mm]. Source statics, derived.
    """
    return F * P / (2 * np.pi)


@formula(
    "mu_th",
    "(M_G/F - P/(2*pi))*2*cos(pi/6)/d2",
    unit="",
    source="iso16047",
    basis="derived",
    valid=SMALL_LEAD + ", M_G >= F P/2 pi",
)
def thread_friction_from_torque(M_G: Value, F: Value, P: Value, d2: Value) -> Value:
    """Thread friction from a test that measures thread torque and preload.

    M_G: thread torque [N mm]; F: preload [N], > 0; P: pitch [mm]; d2: pitch diameter [mm]. Negative when the torque
    is less than the pitch's own F P/2 pi: the measurement is then wrong. Source iso16047, derived.
    """
    return (M_G / F - P / (2 * np.pi)) * 2 * COS_FLANK / d2


@formula("mu_b", "2*T_b/(F*D_km)", unit="", source="iso16047", basis="derived", valid="F > 0")
def head_friction_from_torque(T_b: Value, F: Value, D_km: Value) -> Value:
    """Friction under the turned head or nut from a test that measures the torque taken there.

    T_b: bearing torque [N mm]; F: preload [N], > 0; D_km: friction diameter [mm], > 0. Source iso16047, derived.
    """
    return 2 * T_b / (F * D_km)


@formula("t", "(alpha - 1)/(alpha + 1)", unit="", source="vdi2230", basis="derived", valid="alpha >= 1")
def bound_from_ratio(alpha: Value) -> Value:
    """Scatter as a bound t, plus and minus about the middle, from the ratio alpha of highest to lowest preload.

    alpha >= 1; t is then from 0 to below 1. Source vdi2230, derived.
    """
    return (alpha - 1) / (alpha + 1)


@formula("alpha", "(1 + t)/(1 - t)", unit="", source="vdi2230", basis="derived", valid="0 <= t < 1")
def ratio_from_bound(t: Value) -> Value:
    """Ratio of highest to lowest preload from a bound t of plus and minus, 0 <= t < 1. Source vdi2230, derived."""
    return (1 + t) / (1 - t)


@formula(
    "V",
    "(alpha - 1)/(z*(alpha + 1))",
    unit="",
    source="statics",
    basis="derived",
    valid="alpha >= 1, z > 0, Gaussian scatter",
)
def variation(alpha: Value, z: Value) -> Value:
    """Coefficient of variation of a Gaussian preload whose bounds lie z standard deviations from the mean.

    alpha: ratio of the upper to the lower bound, >= 1; z > 0 is an assumption and belongs beside the result.
    Source statics, derived.
    """
    return (alpha - 1) / (z * (alpha + 1))


@formula(
    "k",
    "3/2*d2/d0*(P/(pi*d2) + mu_th/cos(pi/6))",
    unit="",
    source="vdi2230",
    basis="memory",
    valid=SMALL_LEAD,
)
def shear_ratio(P: Value, d2: Value, mu_th: Value, d0: Value) -> Value:
    """Torsional over axial stress during tightening, the section yielding in torsion throughout (modulus pi d^3/12).

    P: pitch [mm]; d2: pitch diameter [mm]; mu_th: thread friction; d0: diameter [mm] of the weakest section, that of
    the stress area or of a thinner shank. Source vdi2230, memory (the factor 3/2 is derived in tests/derived).
    """
    return 3 / 2 * d2 / d0 * (P / (np.pi * d2) + mu_th / COS_FLANK)


@formula("F_M", "share*R_p*A0/sqrt(1 + 3*k^2)", unit="N", source="vdi2230", basis="memory", valid="0 < share <= 1")
def preload_at_yield_share(share: Value, R_p: Value, A0: Value, k: Value) -> Value:
    """Preload [N] at which tension and tightening torsion together use a share of the yield strength.

    share: 0 to 1, 0.9 is customary; R_p: yield strength Rp0.2 [MPa]; A0: weakest section [mm2]; k: shear_ratio of
    that section; more thread friction allows less preload. Source vdi2230, memory.
    """
    return share * R_p * A0 / np.sqrt(1 + 3 * k**2)


@formula("tau", "16*M_G/(pi*d0^3)", unit="MPa", source="statics", basis="derived", valid="elastic round section")
def torsional_stress(M_G: Value, d0: Value) -> Value:
    """Largest shear stress [MPa] of an elastic round bar of diameter d0 [mm], > 0, under the torque M_G [N mm].

    A third above the stress of the plastic section that shear_ratio uses, hence on the safe side. Source statics,
    derived.
    """
    return 16 * M_G / (np.pi * d0**3)


@formula("sigma_eq", "sqrt(sigma^2 + 3*tau^2)", unit="MPa", source="statics", basis="derived", valid="ductile bolt")
def equivalent_stress(sigma: Value, tau: Value) -> Value:
    """Equivalent stress [MPa] of an axial stress sigma [MPa] and a shear stress tau [MPa], by distortion energy.

    Source statics, derived.
    """
    return np.sqrt(sigma**2 + 3 * tau**2)


@formula("use", "sigma_eq/R_p", unit="", source="statics", basis="derived", valid="R_p > 0")
def yield_use(sigma_eq: Value, R_p: Value) -> Value:
    """Used share of the yield strength: equivalent stress sigma_eq over R_p, both [MPa]. Source statics, derived."""
    return sigma_eq / R_p
