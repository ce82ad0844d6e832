"""Loops of elements that slip at a fixed clamp: Masing's rule, one slider, sliders of evenly spread strength.

A backbone is the curve of first loading. Masing: each later branch is the backbone doubled, and the energy per cycle
follows from the backbone alone. It holds while no slip limit changes; with a varying clamp the loop has to be marched.
Forces in N, displacements in mm, stiffnesses in N/mm, energies per cycle in N mm = mJ; everything broadcasts and is
odd in the load, energies are even.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed.numeric import Array, Value, share_of_limit, smooth_gauss

MASING: dict[str, Any] = {"source": "masing1926", "basis": "derived"}
IWAN: dict[str, Any] = {"source": "iwan1966", "basis": "derived"}


# Any backbone


@formula("W", "4*Q*u - 8*I", unit="mJ", **MASING, valid="Masing, cycle between -Q and Q")
def masing_energy(Q: Value, u: Value, I: Value) -> Value:  # noqa: E741 - the symbol
    """Energy [mJ] per cycle between -Q and Q: u: displacement [mm] at Q on the backbone, I: integral of u dQ.

    For small loads the terms cancel: `energy` and `energy_from_stiffness` keep the digits. masing1926, derived.
    """
    return 4 * Q * u - 8 * I


def energy(backbone: Callable[[Value], Value], Q: Value) -> Value:
    """Energy [mJ] per cycle between -Q and Q of any odd backbone, Q [N] -> displacement [mm].

    masing_energy under one integral: 8 times the area between the backbone and its chord. masing1926, derived.
    """
    u = np.asarray(backbone(Q))
    x, w = _along(u.ndim)
    return 8 * Q * np.sum(w * (x * u - backbone(x * Q)), axis=0)


def energy_from_stiffness(tangent: Callable[[Value], Value], Q: Value) -> Value:
    """The same from the tangent stiffness, Q [N] -> N/mm, even in Q: 8 times the integral of (Q' - Q/2)/k from 0 to Q.

    Masing's energy by parts; of all forms it keeps the most digits at small loads. masing1926, derived.
    """
    x, w = _along(np.ndim(tangent(Q)))
    return 8 * Q**2 * np.sum(w * (x - 0.5) / tangent(x * Q), axis=0)


def _along(ndim: int) -> tuple[Array, Array]:
    """Nodes and weights from 0 to 1 on a new first axis, before the `ndim` axes of the cases."""
    return tuple(a.reshape(-1, *(1,) * ndim) for a in smooth_gauss())  # type: ignore[return-value]


def branch(backbone: Callable[[Value], Value], Q: Value, Q_turn: Value, u_turn: Value) -> Value:
    """Displacement [mm] at load Q after the load turned back at (Q_turn, u_turn): the backbone doubled.

    backbone: odd, Q [N] -> displacement [mm]. Holds until Q reaches the turning point before that one, after which
    the older branch goes on. masing1926, derived.
    """
    return u_turn + 2 * backbone((Q - Q_turn) / 2)


def secant_stiffness(Q: Value, u: Value, initial: Value) -> Value:
    """Load over displacement [N/mm], and the initial stiffness where there is no load (statics, derived)."""
    Q, u, initial = np.broadcast_arrays(Q, u, np.asarray(initial, dtype=float))
    loaded = u != 0
    return np.where(loaded, Q / np.where(loaded, u, 1.0), initial)[()]


@formula("e", "W/(4*Q*u)", unit="", **MASING, valid="cycle between -Q and Q")
def energy_ratio(W: Value, Q: Value, u: Value) -> Value:
    """Energy of a cycle over that of a rigid slider of the same corners: 1 wholly slipping, near 0 sticking.

    At the edge of gross slip it tells the contact: 0.2 a sphere, 1/3 a cone, 0 a flat (masing1926, derived).
    """
    return W / (4 * Q * u)


# One slider: a spring k that slips at f_s


@formula("Q", "min(k*u, f_s)", unit="N", source="statics", basis="derived", valid="first loading, u >= 0")
def slider_force(u: Value, k: Value, f_s: Value) -> Value:
    """Force [N] at displacement u on first loading: spring k, slip force f_s (statics, derived)."""
    return np.clip(k * u, -f_s, f_s)


def slider_displacement(Q: Value, k: Value, f_s: Value) -> Value:
    """Displacement [mm] at force Q; ValueError where |Q| >= f_s, since the slider then slips (statics, derived)."""
    share_of_limit(Q, f_s)
    return Q / k


def slider_tangent_stiffness(u: Value, k: Value, f_s: Value) -> Value:
    """Stiffness [N/mm] against further loading at displacement u: k, then 0 (statics, derived)."""
    return np.where(np.abs(k * u) < f_s, k, 0.0)[()]


@formula("W", "max(0, 4*f_s*(u_0 - f_s/k))", unit="mJ", source="statics", basis="derived", valid="u_0 >= 0")
def slider_energy(u_0: Value, k: Value, f_s: Value) -> Value:
    """Energy [mJ] per cycle of displacement between -u_0 and u_0, 0 before it slips (statics, derived)."""
    return np.maximum(0.0, 4 * f_s * (np.abs(u_0) - f_s / k))


# Sliders of evenly spread strength: total stiffness k, total slip force F_S, the last slips at 2 F_S/k


@formula("u_S", "2*F_S/k", unit="mm", **IWAN, valid="uniform strengths")
def uniform_slip_displacement(k: Value, F_S: Value) -> Value:
    """Displacement [mm] at which the last slider slips: stiffness k [N/mm], slip force F_S [N] (iwan1966, derived)."""
    return 2 * F_S / k


@formula("Q", "k*u - k^2*u^2/(4*F_S)", unit="N", **IWAN, valid="0 <= u <= 2 F_S/k")
def uniform_force(u: Value, k: Value, F_S: Value) -> Value:
    """Force [N] at displacement u on first loading; F_S from 2 F_S/k on (iwan1966, derived)."""
    size = np.minimum(np.abs(u), uniform_slip_displacement(k, F_S))
    return np.copysign(k * size - k**2 * size**2 / (4 * F_S), u)


@formula("u", "2*F_S/k*(1 - sqrt(1 - Q/F_S))", unit="mm", **IWAN, valid="0 <= Q < F_S")
def uniform_displacement(Q: Value, k: Value, F_S: Value) -> Value:
    """Displacement [mm] at force Q; ValueError where |Q| >= F_S (iwan1966, derived)."""
    q = share_of_limit(Q, F_S)
    return 2 * Q / (k * (1 + np.sqrt(1 - q)))


@formula("k_tan", "k*(1 - k*u/(2*F_S))", unit="N/mm", **IWAN, valid="0 <= u <= 2 F_S/k")
def uniform_tangent_stiffness(u: Value, k: Value, F_S: Value) -> Value:
    """Stiffness [N/mm] against further loading at displacement u, 0 from 2 F_S/k on (iwan1966, derived)."""
    return np.maximum(0.0, k * (1 - k * np.abs(u) / (2 * F_S)))


@formula("W", "k^2*u_0^3/(3*F_S)", unit="mJ", **IWAN, valid="0 <= u_0 <= 2 F_S/k")
def uniform_energy(u_0: Value, k: Value, F_S: Value) -> Value:
    """Energy [mJ] per cycle of displacement between -u_0 and u_0; beyond 2 F_S/k what wholly slips is added.

    iwan1966, derived.
    """
    partial = np.minimum(np.abs(u_0), uniform_slip_displacement(k, F_S))
    return k**2 * partial**3 / (3 * F_S) + 4 * F_S * (np.abs(u_0) - partial)
