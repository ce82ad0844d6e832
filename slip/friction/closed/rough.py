"""Rough faces: stiffness of an interface from its pressure and roughness, and its partial slip under shear.

Holds for nominally flat faces whose real contact is about 0.1 % to 15 % of the area, roughness measured over its long
waves. Lengths in mm, roughness included (1 um = 0.001 mm); pressures in MPa; stiffnesses per area in N/mm3; forces
in N, energies in N mm = mJ. Everything broadcasts, is odd in Q (energies even); ValueError where |Q| reaches mu P.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Value, log_rest
from slip.friction.closed.superposition import shear_share

NORMAL: dict[str, Any] = {"source": "persson2007", "basis": "memory"}
SHEARED: dict[str, Any] = {"source": "medina2013", "basis": "derived"}
SUMMITS: dict[str, Any] = {"source": "greenwood_williamson1966", "basis": "derived"}
STEP, STEPS = 0.05, 100  # of the summit heights' square root: 1e-12 for separations from -3 to 100


# Stiffness of the face


@formula("h_rms", "sqrt(Rq_1^2 + Rq_2^2)", unit="mm", source="statics", basis="derived", valid="independent faces")
def combined_roughness(Rq_1: Value, Rq_2: Value) -> Value:
    """Roughness [mm] of two faces as one against a smooth one (independent heights add by squares, derived)."""
    return np.hypot(Rq_1, Rq_2)


@formula("k_n", "p/(gamma*h_rms)", unit="N/mm^3", **NORMAL, valid="real contact 0.1 % to 15 % of the area")
def normal_stiffness(p: Value, h_rms: Value, gamma: Value) -> Value:
    """Normal stiffness per area [N/mm3] at the pressure p; gamma 0.40 to 0.48, 0.48 commonly used.

    persson2007, memory; by boundary elements on random faces 0.40 to 0.48 (derived).
    """
    return p / (gamma * h_rms)


@formula(
    "k_t0",
    "rho*k_n",
    unit="N/mm^3",
    source="campana2011;paggi2014",
    basis="published",
    valid="no shear yet, full stick",
)
def shear_stiffness(k_n: Value, rho: Value) -> Value:
    """Shear stiffness per area [N/mm3] before any slip; rho = 4 G*/E*, see bodies.py.

    campana2011 and paggi2014, published; measured ratios run from 0.35 to 0.75 (memory).
    """
    return rho * k_n


@formula("d_e", "mu*gamma*h_rms/rho", unit="mm", **SHEARED, valid="as k_n; mu p/k_t0")
def elastic_slip_length(mu: Value, gamma: Value, h_rms: Value, rho: Value) -> Value:
    """Length [mm] that scales the face's partial slip, mu p/k_t0: whatever the pressure (medina2013, derived)."""
    return mu * gamma * h_rms / rho


# Partial slip of the face as a whole


@formula("k_t", "k_t0*(1 - abs(Q)/(mu*P))", unit="N/mm^3", **SHEARED, valid="|Q| < mu P, constant P")
def tangent_stiffness(Q: Value, P: Value, mu: Value, k_t0: Value) -> Value:
    """Stiffness per area [N/mm3] against further loading with the shear Q already on (medina2013, derived)."""
    return k_t0 * (1 - shear_share(Q, P, mu))


@formula("delta", "-d_e*ln(1 - Q/(mu*P))", unit="mm", **SHEARED, valid="0 <= Q < mu P, constant P")
def displacement(Q: Value, P: Value, mu: Value, d_e: Value) -> Value:
    """Shear displacement [mm] of the faces on first loading; d_e: elastic slip length (medina2013, derived)."""
    return -np.sign(Q) * d_e * np.log1p(-shear_share(Q, P, mu))


@formula("Q", "mu*P*(1 - exp(-delta/d_e))", unit="N", **SHEARED, valid="delta >= 0, constant P")
def force(delta: Value, P: Value, mu: Value, d_e: Value) -> Value:
    """Shear force [N] at the displacement delta [mm] on first loading: nears mu P (medina2013, derived)."""
    return -np.sign(delta) * mu * P * np.expm1(-np.abs(delta) / d_e)


def secant_stiffness(Q: Value, P: Value, mu: Value, d_e: Value) -> Value:
    """Shear force over displacement [N/mm] of the whole face, mu P/d_e without shear (medina2013, derived)."""
    return loops.secant_stiffness(Q, displacement(Q, P, mu, d_e), mu * P / d_e)


@formula(
    "W",
    "mu*P*d_e*((4*Q/(mu*P) - 8)*ln(1 - Q/(mu*P)) - 8*Q/(mu*P))",
    unit="mJ",
    **SHEARED,
    valid="0 <= Q < mu P, constant P",
)
def energy(Q: Value, P: Value, mu: Value, d_e: Value) -> Value:
    """Energy [mJ] per cycle between -Q and Q; d_e: elastic slip length.

    The bracket is (8 - 4 q) l - 2 q^3 with l = -ln(1 - q) - q - q^2/2, which keeps its digits at small loads.
    medina2013, derived.
    """
    q = shear_share(Q, P, mu)
    return mu * P * d_e * ((8 - 4 * q) * log_rest(q) - 2 * q**3)


# Where the law of the stiffness comes from: summits of like radius, each a small sphere


@formula("k_n", "p/sigma_s", unit="N/mm^3", **SUMMITS, valid="exponential heights of deviation sigma_s")
def exponential_summits(p: Value, sigma_s: Value) -> Value:
    """Normal stiffness per area [N/mm3] of summits with exponentially spread heights.

    greenwood_williamson1966, derived.
    """
    return p / sigma_s


def gaussian_summits(separation: Value) -> Value:
    """k_n sigma_s/p for summits with Gaussian heights of deviation sigma_s; the plane lies at separation*sigma_s.

    3/2 F(1/2)/F(3/2), F(m) the mean of (z - separation)^m over the summits above. Substituting x^2 for the height
    above the plane makes integrands even in x, for which the rule of equal steps is as good as exact. Range -3 to
    100. greenwood_williamson1966, derived.
    """
    h = np.asarray(separation, dtype=float)
    pressed, stiff = np.zeros(h.shape), np.zeros(h.shape)
    for x in STEP * np.arange(1, STEPS):
        weight = np.exp(-(x**2) * (h + x**2 / 2))
        stiff, pressed = stiff + x**2 * weight, pressed + x**4 * weight
    return (1.5 * stiff / pressed)[()]


# A stiffness that does not know the pressure: rigid bodies, pressure that falls linearly with area from p_0 to 0


def penalty_stiffness(P: Value, p_0: Value, k_t: Value) -> Value:
    """Shear stiffness [N/mm] of the whole face, k_t [N/mm3] on its area 2 P/p_0 (statics, derived)."""
    return 2 * k_t * P / p_0


@formula(
    "delta", "mu*p_0/k_t*(1 - sqrt(1 - Q/(mu*P)))", unit="mm", source="iwan1966", basis="derived", valid="0 <= Q < mu P"
)
def penalty_displacement(Q: Value, P: Value, mu: Value, p_0: Value, k_t: Value) -> Value:
    """Displacement [mm] of a face with one k_t at all places: slip from the least pressed places inwards.

    p_0: largest pressure. The places are sliders of evenly spread strength (iwan1966, derived).
    """
    return loops.uniform_displacement(Q, penalty_stiffness(P, p_0, k_t), mu * P)


@formula(
    "W",
    "4/3*mu*P*mu*p_0/k_t*(1 - sqrt(1 - Q/(mu*P)))^3",
    unit="mJ",
    source="iwan1966",
    basis="derived",
    valid="0 <= Q < mu P",
)
def penalty_energy(Q: Value, P: Value, mu: Value, p_0: Value, k_t: Value) -> Value:
    """Energy [mJ] per cycle of that face: micro-slip that the constant k_t makes up (iwan1966, derived)."""
    u = penalty_displacement(Q, P, mu, p_0, k_t)
    return loops.uniform_energy(u, penalty_stiffness(P, p_0, k_t), mu * P)
