"""Long rows of bolts in line with the load: the end bolts carry more, and slip first.

Two plates lie over each other, joined by n bolts in a row. Plate 2 is pulled at the first bolt, plate 1 at the last.
Each bolt passes its force through a spring k_b (bolted face included) up to its friction limit; between the bolts the
plates stretch. Leading axes broadcast; the last axis counts the bolts (n) or the gaps between them (n - 1).
Forces in N, displacements in mm, stiffnesses in N/mm. Odd in P, energies even. Where the plates' stiffnesses vary
strongly and in opposite ways along the row, a bolt can be loaded backwards; should one that has slipped stick again,
ValueError says so, since the loop is then no longer Masing's.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from slip.base.formulas import formula
from slip.friction.closed import loops
from slip.friction.closed.numeric import Array, Value, share_of_limit

ROUNDING = 1e-11  # bolts whose turn comes within this slip together; what is left of the load below it is none


@formula("k", "EA/p", unit="N/mm", source="statics", basis="derived", valid="uniform tension between two bolts")
def gap_stiffness(EA: Value, p: Value) -> Value:
    """Stiffness [N/mm] of a plate of EA [N] between two bolts at the pitch p [mm] (statics, derived)."""
    return EA / p


def shares(k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike) -> Array:
    """Share of each bolt in the load while none slips, (..., n), sum 1.

    k_b (..., n): bolts, > 0; k_1, k_2 (..., n - 1): plates between them, > 0, inf allowed. n = 1 takes empty plates.
    The springs' compatibility R_i/k_b + N_1/k_1 = N_2/k_2 + R_(i+1)/k_b with equilibrium. volkersen1938 and statics,
    derived.
    """
    k_b, k_1, k_2 = _row(k_b, k_1, k_2)
    return _tangent(k_b, k_1, k_2, np.ones(k_b.shape, dtype=bool))[0]


def first_slip(limit: ArrayLike, share: ArrayLike) -> Array:
    """Load [N] at which the first bolt of a row slips; limit (..., n) [N], share (..., n) (statics, derived)."""
    with np.errstate(divide="ignore"):
        return np.min(np.asarray(limit) / np.abs(share), axis=-1)


def forces(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """Force [N] of each bolt, (..., n), under the load P (...): those at their limit have slipped.

    limit (..., n) [N], >= 0. ValueError where |P| reaches the sum of the limits, and where a bolt would stick
    again. statics, derived.
    """
    return _load(P, k_b, k_1, k_2, limit)[0]


def slips(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """True slip [mm] at each bolt, (..., n). Arguments and errors as `forces`. statics, derived."""
    return _load(P, k_b, k_1, k_2, limit)[1]


def displacement(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """Extension [mm] between plate 2 at the first bolt and plate 1 at the last, (...). As `forces`. Derived."""
    return _load(P, k_b, k_1, k_2, limit)[2]


def initial_stiffness(k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike) -> Array:
    """Load over extension [N/mm] while no bolt slips, (...). Arguments as `shares`. statics, derived."""
    k_b, k_1, k_2 = _row(k_b, k_1, k_2)
    return (1 / _tangent(k_b, k_1, k_2, np.ones(k_b.shape, dtype=bool))[2])[()]


def tangent_stiffness(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """Stiffness [N/mm] against further loading, (...). Arguments and errors as `forces`. statics, derived."""
    return (1 / _load(P, k_b, k_1, k_2, limit)[3])[()]


def secant_stiffness(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """Load over extension [N/mm], (...). Arguments and errors as `forces`. statics, derived."""
    u = displacement(P, k_b, k_1, k_2, limit)
    return loops.secant_stiffness(P, u, initial_stiffness(k_b, k_1, k_2))


def energy(P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike) -> Array:
    """Energy [mJ] per cycle between -P and P, (...): by Masing each bolt slips four times what it slipped at P.

    Arguments and errors as `forces`. masing1926 and statics, derived.
    """
    return 4 * np.sum(np.asarray(limit) * np.abs(slips(P, k_b, k_1, k_2, limit)), axis=-1)


def _row(k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike) -> tuple[Array, Array, Array]:
    """The springs as arrays of one leading shape."""
    bolts, plate_1, plate_2 = (np.asarray(k, dtype=float) for k in (k_b, k_1, k_2))
    n = bolts.shape[-1]
    lead = np.broadcast_shapes(bolts.shape[:-1], plate_1.shape[:-1], plate_2.shape[:-1])
    return (
        np.broadcast_to(bolts, (*lead, n)),
        np.broadcast_to(plate_1, (*lead, n - 1)),
        np.broadcast_to(plate_2, (*lead, n - 1)),
    )


def _tangent(k_b: Array, k_1: Array, k_2: Array, stuck: NDArray[np.bool_]) -> tuple[Array, Array, Array]:
    """Per unit of load: forces (..., n), relative motions of the plates at the bolts (..., n), extension (...).

    Unknown are the forces R and the motion g at the first bolt. Further on g_(i+1) - g_i = S_i (1/k_1 + 1/k_2) - P/k_2
    with S_i what the first i bolts have passed to plate 1. A bolt that slips takes no more force.
    """
    n = k_b.shape[-1]
    give = np.concatenate([np.zeros((*k_b.shape[:-1], 1)), np.cumsum(1 / k_1 + 1 / k_2, axis=-1)], axis=-1)
    drop = np.concatenate([np.zeros((*k_b.shape[:-1], 1)), np.cumsum(1 / k_2, axis=-1)], axis=-1)
    passed = np.tril(give[..., :, None] - give[..., None, :])  # g_i - g_1 + drop_i = sum over j < i of R_j times this
    matrix = np.zeros((*k_b.shape[:-1], n + 1, n + 1))
    matrix[..., :n, :n] = np.where(stuck[..., None], np.eye(n) / k_b[..., None] - passed, np.eye(n))
    matrix[..., :n, n] = np.where(stuck, -1.0, 0.0)
    matrix[..., n, :n] = 1.0
    right = np.concatenate([np.where(stuck, -drop, 0.0), np.ones((*k_b.shape[:-1], 1))], axis=-1)
    found = np.linalg.solve(matrix, right[..., None])[..., 0]
    R = np.where(stuck, found[..., :n], 0.0)
    motion = found[..., n:] - drop + np.einsum("...ij,...j->...i", passed, R)
    stretch = np.sum(np.cumsum(R, axis=-1)[..., : n - 1] / k_1, axis=-1)
    return R, motion, motion[..., 0] + stretch


def _load(
    P: ArrayLike, k_b: ArrayLike, k_1: ArrayLike, k_2: ArrayLike, limit: ArrayLike
) -> tuple[Array, Array, Array, Array]:
    """Forces, slips, extension and compliance against further loading, followed from one bolt's slip to the next."""
    bolts, plate_1, plate_2 = _row(k_b, k_1, k_2)
    P, most = np.asarray(P, dtype=float), np.asarray(limit, dtype=float)
    share_of_limit(P, np.sum(most, axis=-1))
    lead = np.broadcast_shapes(P.shape, bolts.shape[:-1], most.shape[:-1])
    n = bolts.shape[-1]
    bolts, most = np.broadcast_to(bolts, (*lead, n)), np.broadcast_to(most, (*lead, n))
    plate_1, plate_2 = (np.broadcast_to(k, (*lead, n - 1)) for k in (plate_1, plate_2))
    left = np.broadcast_to(np.abs(P), lead).copy()
    R, slip, extension, stuck = np.zeros((*lead, n)), np.zeros((*lead, n)), np.zeros(lead), most > 0
    for _ in range(n):
        dR, motion, du = _tangent(bolts, plate_1, plate_2, stuck)
        if np.any(~stuck & (R * motion < 0) & (left > 0)[..., None]):
            raise ValueError("a bolt that has slipped would stick again: march the row in small steps instead")
        loaded = stuck & (dR != 0)
        room = np.where(loaded, (most - np.sign(dR) * R) / np.where(loaded, np.abs(dR), 1.0), np.inf)
        nearest = np.min(room, axis=-1)
        go = np.minimum(nearest, left)
        R, slip = R + go[..., None] * dR, slip + np.where(stuck, 0.0, go[..., None] * motion)
        extension = extension + go * du
        left = np.where(left - go > ROUNDING * np.abs(P), left - go, 0.0)
        if not np.any(left > 0):
            break
        reached = stuck & (room <= nearest[..., None] * (1 + ROUNDING)) & (left > 0)[..., None]
        R, stuck = np.where(reached, np.sign(R) * most, R), stuck & ~reached
    sign = np.sign(P)
    return sign[..., None] * R, sign[..., None] * slip, (sign * extension)[()], du
