"""Two thick bodies that meet on a flat face: elastic half-spaces under tangential tractions on a grid of cells."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import cached_property

import numpy as np
import scipy.fft as sf
from numpy.typing import ArrayLike

from slip.base.errors import InputError
from slip.friction.compliance.cerruti import cell_kernel, circulant, inverse, times, wrapped
from slip.friction.compliance.layer import layer_compliance, side_by_side, without_compliance
from slip.friction.compliance.protocol import Array, Mask, Transfer

# Tuning, held by tests on the number of applications.
COARSEST = 16  # cells along the shorter side that are not coarsened further
MOST_BYTES = 4e9  # what a face may take; a finer one is refused with its size
BYTES_PER_CELL = 1100  # kernels, padded transforms and the fields of a step, measured


class HalfSpace:
    """Relative tangential displacement of two half-spaces under cell-wise uniform tractions, at the cells' centres.

    shape (nx, ny): cells along x and y. cell (dx, dy) [mm].
    bodies: shear modulus G [MPa] and Poisson's ratio of each of the two; G = inf is rigid.
    components: 2, or 1 for tractions and displacements along x alone (the transverse part is then left out).
    layer: k_t [N/mm^3], scalar or (nx, ny), inf where a cell has none; None for none.

    Per unit load, with A = sum (1 - nu)/G and N = sum nu/G over the bodies and r, x, y the way from the load to the
    point, u_x = (A/r + N x^2/r^3) q_x/2pi + (N x y/r^3) q_y/2pi, and likewise along y; 2A + N = sum (2 - nu)/G = 1/G*
    is what a sphere feels. With nu = 0 the components are uncoupled exactly.

    Range: bodies thick against the patch; tangential tractions do not change the pressure (exact for like bodies, small
    for Dundurs |beta| < 0.2). Points out of contact carry nothing by their bound of 0: let the grid reach just over the
    patch.
    Raises ValueError for shapes or values without meaning, InputError (no-compliance, face-too-fine).
    Source: Cerruti's solution, integrated over a rectangle. Basis: derived.
    """

    def __init__(
        self,
        shape: tuple[int, int],
        cell: tuple[float, float],
        bodies: Sequence[tuple[float, float]],
        *,
        components: int = 2,
        layer: ArrayLike | None = None,
    ) -> None:
        _check(shape, cell, bodies, components)
        self.shape, self.components, self.cell, self.bodies = (shape[0], shape[1]), components, cell, tuple(bodies)
        self.area = cell[0] * cell[1]
        self._layer = layer_compliance(layer, self.shape)
        self._A, self._N = sum((1.0 - nu) / G for G, nu in bodies), sum(nu / G for G, nu in bodies)
        self._rigid = self._A == 0.0
        if self._rigid and not (self._layer > 0.0).all():
            raise without_compliance("two rigid bodies and no layer in some cell")
        kernel = cell_kernel(self.shape, cell, self._A, self._N)
        parts = ((kernel[0], 1), (kernel[1], 1), (kernel[2], -1))[: 1 if components == 1 else 3 if self._N else 2]
        self._padded = sf.next_fast_len(2 * shape[0] - 1), sf.next_fast_len(2 * shape[1] - 1, real=True)
        self._waves = [sf.rfft2(wrapped(k, self._padded, sign)).real for k, sign in parts]
        self._near_waves = [sf.rfft2(circulant(k, sign)).real for k, sign in parts]
        self._local = float(max(kernel[0][0, 0], kernel[1][0, 0]))

    def apply(self, q: Array) -> Array:
        """Displacement [mm] of tractions q (components, nx, ny) [MPa]."""
        return self._bulk(q) + self._layer * q

    def _bulk(self, q: Array) -> Array:
        (nx, ny), (px, py) = self.shape, self._padded
        wave = sf.fft(sf.rfft(q, n=py, axis=-1), n=px, axis=-2, overwrite_x=True)
        wave = sf.ifft(times(self._waves, wave), axis=-2, overwrite_x=True)[:, :nx]
        return sf.irfft(wave, n=py, axis=-1)[..., :ny]

    def near_inverse(self, extra: Array, fixed: Mask) -> Callable[[Array], Array]:
        """Inverse of the nearest circulant with the least extra compliance, blended with the diagonal where it is more.

        Exact for a periodic face without fixed points and with the same extra compliance everywhere.
        """
        if fixed.all():
            return np.zeros_like
        more = np.where(fixed, np.inf, extra + self._layer)
        least = float(more.min())
        if self._rigid:
            diagonal = 1.0 / more
            return lambda u: diagonal * u
        local = self._local + least
        share = local / (local + more - least)
        inside, beside = np.sqrt(share), (1.0 - share) * share / local
        waves = inverse(self._near_waves, least)

        def solve(u: Array) -> Array:
            wave = times(waves, sf.rfft2(inside * u))
            return inside * sf.irfft2(wave, s=self.shape) + beside * u

        return solve

    def largest(self) -> Array:
        """Sums of absolute values along the rows [mm/MPa]."""
        return self._largest

    @cached_property
    def _largest(self) -> Array:
        # |x y|/r^3 is at most half of 1/r, and 1/r is both kernels' sum over 2A + N.
        rows = np.empty((self.components, *self.shape))
        for component in range(self.components):
            unit = np.zeros_like(rows)
            unit[component] = 1.0
            rows[component] = self._bulk(unit)[component]
        if self.components == 2 and self._N:
            rows += 0.5 * self._N / (2.0 * self._A + self._N) * rows.sum(0)
        return rows.max(0) + self._layer

    def elongation(self, q: Array) -> Array:
        """The layer's part of the displacement [mm]."""
        return self._layer * q

    def coarser(self) -> Transfer | None:
        """Cells of twice the size; None from 16 cells on."""
        return self._coarser

    @cached_property
    def _coarser(self) -> Transfer | None:
        nx, ny = self.shape
        if min(nx, ny) <= COARSEST or self._rigid:
            return None
        half = ((nx + 1) // 2, (ny + 1) // 2)
        layer = side_by_side(
            np.broadcast_to(self._layer, self.shape), lambda k: _pairs(k) / _pairs(np.ones(self.shape))
        )
        cell = (2.0 * self.cell[0], 2.0 * self.cell[1])
        coarse = HalfSpace(half, cell, self.bodies, components=self.components, layer=layer)
        return Transfer(coarse, _pairs, lambda a: np.repeat(np.repeat(a, 2, -2), 2, -1)[..., :nx, :ny])


def _pairs(a: Array) -> Array:
    """Means over 2 x 2 cells of the last two axes; what lies beyond an odd edge counts as 0."""
    odd = [(0, n % 2) for n in a.shape[-2:]]
    if any(end for _, end in odd):
        a = np.pad(a, [(0, 0)] * (a.ndim - 2) + odd)
    a = a[..., ::2, :] + a[..., 1::2, :]
    return 0.25 * (a[..., ::2] + a[..., 1::2])


def _check(
    shape: tuple[int, int], cell: tuple[float, float], bodies: Sequence[tuple[float, float]], components: int
) -> None:
    """Raise for what has no meaning or no room."""
    if len(shape) != 2 or len(cell) != 2 or min(shape) < 1 or components not in (1, 2):
        raise ValueError("a half-space needs a grid (nx, ny) of cells (dx, dy), and one or two components")
    if not (min(cell) > 0.0 and np.isfinite(cell).all()):
        raise ValueError(f"cells must have positive sides, not {cell}")
    if len(bodies) != 2 or not all(G > 0.0 and 0.0 <= nu <= 0.5 for G, nu in bodies):
        raise ValueError("two bodies are needed, each with G > 0 and 0 <= nu <= 0.5")
    size = float(shape[0]) * shape[1] * BYTES_PER_CELL
    if size > MOST_BYTES:
        side = int(np.sqrt(MOST_BYTES / BYTES_PER_CELL))
        raise InputError(
            code="face-too-fine",
            key="cells",
            found=f"{shape[0]} x {shape[1]} cells, some {size / 1e9:.3g} GB",
            expected=f"at most {MOST_BYTES / 1e9:.3g} GB, as with {side} x {side} cells",
            remedy="take larger cells, or let the grid reach just over the patch",
        )
