"""Lap joint of two strips pulled apart along the overlap (shear lag), with slip that grows from its ends.

Strip 2 is pulled at x = 0, strip 1 at x = L, with the force P; a strip on a rigid base is strip 2 with EA_1 = inf.
EA_1, EA_2 [N]: stiffness of the strips; k [N/mm2]: shear stiffness of the interface per length (k_t times the width);
q_l [N/mm]: slip limit per length (mu p times the width), both constant over the overlap L [mm]. k = inf is the
interface without compliance (rigid stick). Bending and the shear through the thickness are left out; the latter can be
taken into k (thickness_compliance). D = 1/EA_1 + 1/EA_2, decay omega = sqrt(k D).

Each formula has the length that slips or sticks as argument; `slip_lengths` finds it. Everything broadcasts and is odd
in P, energies and lengths even. ValueError where |P| reaches q_l L: the joint slips wholly. The texts take exp(-omega L)
in place of hyperbolic sines, which would overflow on a long lap.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Value, increasing_root, share_of_limit

LAG: dict[str, Any] = {"source": "volkersen1938;statics", "basis": "derived"}
SLIPPING: dict[str, Any] = {"source": "metherell_diller1968;statics", "basis": "derived"}
RIGID = 1e15  # decay times overlap that stands for an interface without compliance


def coth(x: Value) -> Value:
    """Hyperbolic cotangent, 1 at inf."""
    return 1 / np.tanh(x)


def csch(x: Value) -> Value:
    """1/sinh(x) for x > 0, 0 at inf."""
    return -2 * np.exp(-x) / np.expm1(-2 * x)


# Two strips: decay and stiffness of the stuck joint


@formula("k", "k_A*b", unit="N/mm^2", source="statics", basis="derived", valid="the same over the width b")
def line_stiffness(k_A: Value, b: Value) -> Value:
    """Shear stiffness per length [N/mm2] of an interface of k_A [N/mm3] over a width b (statics, derived)."""
    return k_A * b


@formula("D", "1/EA_1 + 1/EA_2", unit="1/N", **LAG, valid="EA_1 = inf: rigid base")
def strain_per_force(EA_1: Value, EA_2: Value) -> Value:
    """Difference of the strips' strains per force passed on [1/N] (volkersen1938 and statics, derived)."""
    return 1 / EA_1 + 1 / EA_2


@formula("omega", "sqrt(k*D)", unit="1/mm", **LAG, valid="")
def decay(k: Value, D: Value) -> Value:
    """Decay of the relative displacement from the ends [1/mm] (volkersen1938 and statics, derived)."""
    return np.sqrt(k * D)


@formula(
    "C_0",
    "(L + (EA_2/EA_1 + EA_1/EA_2)/(omega*tanh(omega*L)) + 4*exp(-omega*L)/(omega*(1 - exp(-2*omega*L))))/(EA_1 + EA_2)",
    unit="mm/N",
    **LAG,
    valid="stuck all over; omega = sqrt(k D)",
)
def stuck_compliance(EA_1: Value, EA_2: Value, omega: Value, L: Value) -> Value:
    """Extension between the two pulled ends per force [mm/N], stuck (volkersen1938 and statics, derived)."""
    g_0, g_L = _edge_motions(1 / EA_2, 1 / EA_1, omega, L)
    return extension(g_0, g_L, 1.0, EA_1, EA_2, L)


def joint_decay(EA_1: Value, EA_2: Value, k: Value, L: Value) -> Value:
    """The joint's decay [1/mm], kept finite for k = inf (volkersen1938 and statics, derived)."""
    return np.minimum(decay(k, strain_per_force(EA_1, EA_2)), RIGID / L)


def initial_stiffness(EA_1: Value, EA_2: Value, k: Value, L: Value) -> Value:
    """Force over extension [N/mm] of the stuck joint (volkersen1938 and statics, derived)."""
    return 1 / stuck_compliance(EA_1, EA_2, joint_decay(EA_1, EA_2, k, L), L)


def interface_share(EA_1: Value, EA_2: Value, k: Value, L: Value) -> Value:
    """d ln K_0/d ln k of the stuck joint's stiffness: the share of its elastic energy that the interface holds.

    One strip on a rigid base: base_sensitivity. Two strips also stretch, so that a long joint goes to 0 and not to
    1/2. k finite. volkersen1938 and statics, derived.
    """
    omega = decay(k, strain_per_force(EA_1, EA_2))
    g_0, g_L = _edge_motions(1 / EA_2, 1 / EA_1, omega, L)
    slope = (1 / EA_1**2 + 1 / EA_2**2) * csch(omega * L) ** 2
    slope = slope + 2 / (EA_1 * EA_2) * coth(omega * L) * csch(omega * L)
    square = (g_L / EA_1 + g_0 / EA_2 + L * slope) / (2 * omega**2)  # integral of the motion squared, unit force
    return k * square / stuck_compliance(EA_1, EA_2, omega, L)


@formula(
    "P_on",
    "q_l*omega/(k*(1/(min(EA_1, EA_2)*tanh(omega*L)) + 2*exp(-omega*L)/(max(EA_1, EA_2)*(1 - exp(-2*omega*L)))))",
    unit="N",
    **LAG,
    valid="omega = sqrt(k D)",
)
def onset(q_l: Value, k: Value, EA_1: Value, EA_2: Value, omega: Value, L: Value) -> Value:
    """Force [N] at which the first end slips, the softer strip's; k finite (volkersen1938 and statics, derived)."""
    g_0, g_L = _edge_motions(1 / EA_2, 1 / EA_1, omega, L)
    return q_l / (k * np.maximum(g_0, g_L))


@formula("q", "P/P_on*q_l", unit="N/mm", **LAG, valid="stuck all over, P <= P_on")
def end_flow(P: Value, P_on: Value, q_l: Value) -> Value:
    """Shear flow [N/mm] at the end that slips first, before it does: in proportion to the pull (statics, derived)."""
    return P / P_on * q_l


@formula("P_on", "2*q_l/omega*tanh(omega*L/2)", unit="N", **LAG, valid="equal strips")
def equal_onset(q_l: Value, omega: Value, L: Value) -> Value:
    """Force [N] at which both ends of two equal strips slip (volkersen1938 and statics, derived)."""
    return 2 * q_l / omega * np.tanh(omega * L / 2)


# Slip that has begun


@formula("P", "q_l*(L - c) + 2*q_l/omega*tanh(omega*c/2)", unit="N", **SLIPPING, valid="both ends slip")
def both_ends_force(c: Value, q_l: Value, omega: Value, L: Value) -> Value:
    """Force [N] at which a length c still sticks (metherell_diller1968 and statics, derived)."""
    return q_l * (L - c) + equal_onset(q_l, omega, c)


@formula("a", "P/(EA*D*q_l) - tanh(omega*c/2)/omega", unit="mm", **SLIPPING, valid="both ends slip")
def end_slip_length(P: Value, EA: Value, D: Value, q_l: Value, c: Value, omega: Value) -> Value:
    """Length [mm] that slips at the pulled end of the strip EA; below 0: only the other end slips.

    c: stuck length from both_ends_force. metherell_diller1968 and statics, derived.
    """
    return P / (EA * D * q_l) - np.tanh(omega * c / 2) / omega


@formula(
    "P",
    "q_l*(1/EA_a + 1/EA_b)*(tanh(omega*(L - a))/omega + a)"
    "/(1/EA_a + 2*exp(-omega*(L - a))/(EA_b*(1 + exp(-2*omega*(L - a)))))",
    unit="N",
    **SLIPPING,
    valid="only the pulled end of strip a slips",
)
def one_end_force(a: Value, q_l: Value, EA_a: Value, EA_b: Value, omega: Value, L: Value) -> Value:
    """Force [N] at which a length a slips at the pulled end of strip a, the softer one.

    For a rigid base EA_b = inf: P = q_l (a + tanh(omega (L - a))/omega). metherell_diller1968 and statics, derived.
    """
    x = omega * (L - a)
    sech = 2 * np.exp(-x) / (1 + np.exp(-2 * x))
    D = strain_per_force(EA_a, EA_b)
    return q_l * D * (np.tanh(x) / omega + a) / (1 / EA_a + sech / EA_b)


@formula("s", "P*a/EA - D*q_l*a^2/2", unit="mm", **SLIPPING, valid="at a pulled end that slips over a")
def end_slip(P: Value, a: Value, EA: Value, D: Value, q_l: Value) -> Value:
    """True slip [mm] at the pulled end of the strip EA, 0 for a = 0 (metherell_diller1968 and statics, derived)."""
    return P * a / EA - D * q_l * a**2 / 2


@formula("g_el", "q_l/k", unit="mm", **SLIPPING, valid="where the joint slips")
def elastic_slip(q_l: Value, k: Value) -> Value:
    """The part of the relative motion that comes back on unloading [mm], where the joint slips (statics, derived)."""
    return q_l / k


@formula(
    "u", "EA_1/(EA_1 + EA_2)*g_0 + EA_2/(EA_1 + EA_2)*g_L + P*L/(EA_1 + EA_2)", unit="mm", **LAG, valid="all states"
)
def extension(g_0: Value, g_L: Value, P: Value, EA_1: Value, EA_2: Value, L: Value) -> Value:
    """Extension [mm] between the two pulled ends; g_0, g_L: relative motion at x = 0 and L (statics, derived)."""
    part = 1 / (1 + EA_2 / EA_1)
    return part * g_0 + (1 - part) * g_L + P * L / (EA_1 + EA_2)


@formula("W", "2*q_l*a^2*(P/EA - 2/3*D*q_l*a)", unit="mJ", **SLIPPING, valid="one end, cycle between -P and P")
def end_energy(P: Value, a: Value, EA: Value, D: Value, q_l: Value) -> Value:
    """Energy [mJ] per cycle lost at the pulled end of the strip EA that slips over a at the peak P.

    4 q_l times the slip summed over a, by Masing. metherell_diller1968 and statics, derived.
    """
    return 2 * q_l * a**2 * (P / EA - 2 / 3 * D * q_l * a)


# The joint at a load


def slip_lengths(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> tuple[Value, Value]:
    """Lengths (a_0, a_L) [mm] that slip at x = 0 and at x = L; 0 where that end sticks.

    ValueError where |P| reaches q_l L. metherell_diller1968 and statics, derived.
    """
    P = np.abs(np.asarray(P, dtype=float))
    share_of_limit(P, q_l * np.asarray(L, dtype=float))
    D, omega = strain_per_force(EA_1, EA_2), joint_decay(EA_1, EA_2, k, L)
    c = L - increasing_root(lambda slipping: both_ends_force(L - slipping, q_l, omega, L), P, 0.0, L)
    two = [end_slip_length(P, EA, D, q_l, c, omega) for EA in (EA_2, EA_1)]
    both = (equal_onset(q_l, omega, L) < P) & (two[0] > 0) & (two[1] > 0)
    soft, stiff = np.minimum(EA_1, EA_2), np.maximum(EA_1, EA_2)
    one = increasing_root(lambda a: one_end_force(a, q_l, soft, stiff, omega, L), P, 0.0, L)
    one = np.where(one_end_force(0.0, q_l, soft, stiff, omega, L) < P, one, 0.0)
    at_0, at_L = np.where(EA_2 <= EA_1, one, 0.0), np.where(EA_1 < EA_2, one, 0.0)
    return np.where(both, two[0], at_0)[()], np.where(both, two[1], at_L)[()]


def _edge_motions(slope_0: Value, slope_L: Value, omega: Value, c: Value) -> tuple[Value, Value]:
    """Relative motion at both edges of a stuck length c from its slopes there, taken positive outwards."""
    x = omega * c
    return (slope_0 * coth(x) + slope_L * csch(x)) / omega, (slope_0 * csch(x) + slope_L * coth(x)) / omega


def end_motions(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> tuple[Value, Value]:
    """Relative motion [mm] of the strips at x = 0 and at x = L; what exceeds q_l/k is true slip.

    ValueError as slip_lengths. metherell_diller1968 and statics, derived.
    """
    a_0, a_L = slip_lengths(P, EA_1, EA_2, k, q_l, L)
    D, size = strain_per_force(EA_1, EA_2), np.abs(P)
    slopes = size / EA_2 - D * q_l * a_0, size / EA_1 - D * q_l * a_L
    edges = _edge_motions(*slopes, joint_decay(EA_1, EA_2, k, L), L - a_0 - a_L)
    found = []
    for edge, a, EA in zip(edges, (a_0, a_L), (EA_2, EA_1), strict=True):
        slipping = elastic_slip(q_l, k) + end_slip(size, a, EA, D, q_l)
        found.append(np.sign(P) * np.where(a > 0, slipping, edge))
    return found[0], found[1]


def displacement(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Extension [mm] between the two pulled ends on first loading. ValueError as slip_lengths.

    metherell_diller1968 and statics, derived.
    """
    return extension(*end_motions(P, EA_1, EA_2, k, q_l, L), P, EA_1, EA_2, L)


def tangent_stiffness(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Stiffness [N/mm] against further loading: the stuck rest in series with the strips beside it.

    ValueError as slip_lengths. metherell_diller1968 and statics, derived.
    """
    a_0, a_L = slip_lengths(P, EA_1, EA_2, k, q_l, L)
    rest = stuck_compliance(EA_1, EA_2, joint_decay(EA_1, EA_2, k, L), L - a_0 - a_L)
    return 1 / (a_0 / EA_2 + a_L / EA_1 + rest)


def secant_stiffness(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Force over extension [N/mm] on first loading. ValueError as slip_lengths. Source there, derived."""
    u = displacement(P, EA_1, EA_2, k, q_l, L)
    return loops.secant_stiffness(P, u, initial_stiffness(EA_1, EA_2, k, L))


def energy(P: Value, EA_1: Value, EA_2: Value, k: Value, q_l: Value, L: Value) -> Value:
    """Energy [mJ] per cycle between -P and P; a cycle between 0 and P is one between -P/2 and P/2, by Masing.

    ValueError as slip_lengths. metherell_diller1968 and statics, derived.
    """
    a_0, a_L = slip_lengths(P, EA_1, EA_2, k, q_l, L)
    D, size = strain_per_force(EA_1, EA_2), np.abs(P)
    return end_energy(size, a_0, EA_2, D, q_l) + end_energy(size, a_L, EA_1, D, q_l)
