"""Cerruti's surface displacements integrated over a rectangular cell."""

from __future__ import annotations

import numpy as np

from slip.friction.compliance.protocol import Array

Kernel = tuple[Array, Array, Array]


def cell_kernel(shape: tuple[int, int], cell: tuple[float, float], A: float, N: float) -> Kernel:
    """Displacements [mm/MPa] at offsets (0 .. nx-1) dx, (0 .. ny-1) dy from the centre of a cell under unit traction.

    shape (nx, ny); cell (dx, dy) [mm]; A = sum (1 - nu)/G, N = sum nu/G over both bodies [1/MPa].
    Returns u_x from q_x (A/r + N x^2/r^3), u_y from q_y (A/r + N y^2/r^3) and u_y from q_x (N x y/r^3), each over 2 pi
    and integrated over the cell. The first two are even in both offsets, the last is odd in each.

    Integrals over x and y: y asinh(x/|y|) of x^2/r^3, x asinh(y/|x|) of y^2/r^3, -r of x y/r^3; of 1/r the first two.
    Source: Cerruti's solution (elasticity). Basis: derived.
    """
    x = ((np.arange(shape[0] + 1) - 0.5) * cell[0])[:, None]
    y = ((np.arange(shape[1] + 1) - 0.5) * cell[1])[None, :]
    # The corners lie half a cell from the axes, so that neither x nor y is 0.
    along = _over_cell(y * np.arcsinh(x / np.abs(y)))
    across = _over_cell(x * np.arcsinh(y / np.abs(x)))
    mixed = _over_cell(-np.hypot(x, y))
    scale = 0.5 / np.pi
    return scale * ((A + N) * along + A * across), scale * (A * along + (A + N) * across), scale * N * mixed


def _over_cell(primitive: Array) -> Array:
    """Differences of a primitive over the four corners of each cell."""
    return primitive[1:, 1:] - primitive[:-1, 1:] - primitive[1:, :-1] + primitive[:-1, :-1]


def wrapped(kernel: Array, padded: tuple[int, int], sign: int) -> Array:
    """A kernel laid round the corner of a zero-padded grid; sign 1 for one that is even in each offset, -1 for odd.

    Turning the grid by 180 degrees changes neither kind, so its transform is real.
    """
    (nx, ny), (px, py) = kernel.shape, padded
    out = np.zeros(padded)
    out[:nx, :ny] = kernel
    out[px - nx + 1 :, :ny] = sign * kernel[:0:-1]
    out[:nx, py - ny + 1 :] = sign * kernel[:, :0:-1]
    out[px - nx + 1 :, py - ny + 1 :] = kernel[:0:-1, :0:-1]
    return out


def circulant(kernel: Array, sign: int) -> Array:
    """The circulant nearest to the convolution on the bare grid: offsets and their images, weighted by their numbers.

    Positive where the convolution is (Chan's averaging along the diagonals).
    """
    for axis in (0, 1):
        n = kernel.shape[axis]
        share = np.arange(n) / n
        image = sign * np.roll(np.flip(kernel, axis), 1, axis)
        share = share[:, None] if axis == 0 else share
        kernel = (1.0 - share) * kernel + share * image
    return kernel


def times(waves: list[Array], wave: Array) -> Array:
    """Products of matrices, given as [xx], [xx, yy] or [xx, yy, xy], with transforms (components, ...)."""
    out = np.empty_like(wave)
    for component, product in enumerate(out):
        np.multiply(waves[component], wave[component], out=product)
    if len(waves) == 3:
        mixed = np.multiply(waves[2], wave[1])
        out[0] += mixed
        np.multiply(waves[2], wave[0], out=mixed)
        out[1] += mixed
    return out


def inverse(waves: list[Array], extra: float) -> list[Array]:
    """Inverses of the matrices with `extra` on their diagonals."""
    if len(waves) < 3:
        return [1.0 / (k + extra) for k in waves]
    xx, yy, xy = waves[0] + extra, waves[1] + extra, waves[2]
    det = xx * yy - xy * xy
    return [yy / det, xx / det, -xy / det]
