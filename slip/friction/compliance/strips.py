"""Two elastic strips that overlap, pulled along x (shear lag): each stretches under what friction hands to it."""

from __future__ import annotations

import copy
from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike
from scipy.linalg.lapack import dpttrf, dpttrs

from slip.base.errors import InputError
from slip.friction.compliance.layer import layer_compliance, side_by_side, without_compliance
from slip.friction.compliance.protocol import Array, Mask, Transfer

COARSEST = 16  # cells that are not coarsened further
LEAST_LOCAL = 1e-3  # local compliance that the near inverse takes at least, in parts of what one cell's stretch adds


class Strips:
    """Strip 1 pulled at x = length, strip 2 at x = 0: the motion is that of the pulled ends apart, the load their pull.

    length, width: of the overlap [mm]. cells: of equal length along x. stiffness: (EA1, EA2) [N]; inf is rigid.
    layer: k_t [N/mm^3], scalar or (cells,), inf where there is none; None for none.
    shear: compliance per area [mm/MPa] of both plates' shear through the thickness (closed/layers.py), a part of the
    bodies.

    A pull P that has passed into strip 1 up to x stretches it by P/EA1 and leaves the rest to strip 2:
    C(x, xi) = (length - max(x, xi))/EA1 + min(x, xi)/EA2 per force, here as exact means over the cells.

    Range: strips that do not bend; cells that resolve the decay length (w h <= 0.1, w^2 = k_t width (1/EA1 + 1/EA2)).
    Raises ValueError for values without meaning, InputError for rigid strips without a layer (no-compliance) and for
    cells longer than the decay length (cells-too-coarse).
    Source: shear-lag theory (Volkersen). Basis: derived.
    """

    components = 1

    def __init__(
        self,
        length: float,
        width: float,
        cells: int,
        stiffness: tuple[float, float],
        *,
        layer: ArrayLike | None = None,
        shear: float = 0.0,
    ) -> None:
        EA1, EA2 = (float(EA) for EA in stiffness)
        if not (
            0.0 < length < np.inf
            and 0.0 < width < np.inf
            and cells >= 1
            and EA1 > 0.0
            and EA2 > 0.0
            and 0.0 <= shear < np.inf
        ):
            raise ValueError(
                "strips need a positive length, width and stiffness, at least one cell, and no negative shear"
            )
        self.shape, self.cell = (int(cells),), length / cells
        self.area = self.cell * width
        self._layer = layer_compliance(layer, self.shape)
        self._beside = self._layer + shear
        # Stretch of one cell of either strip under the force of one cell at unit traction, and of both together.
        self._first, self._second = self.area * self.cell / EA1, self.area * self.cell / EA2
        self._both = self._first + self._second
        if not self._both and not (self._beside > 0.0).all():
            raise without_compliance("two rigid strips without a layer")
        if self._both > self._beside.min():
            raise _too_coarse(self.cell, self.cell * float(np.sqrt(self._beside.min() / self._both)), cells)

    def apply(self, q: Array) -> Array:
        """Displacement [mm] of tractions q (1, cells) [MPa]."""
        stretch = self._first * _to_the_end(q[..., ::-1])[..., ::-1] + self._second * _to_the_end(q)
        return stretch + self._beside * q

    def near_inverse(self, extra: Array, fixed: Mask) -> Callable[[Array], Array]:
        """The inverse of C + extra on the points that are not fixed, exact on cells that resolve the decay length.

        From the pulled end of the softer strip, y in cells, C = both min(y, eta) + lesser (cells - y - eta) + local.
        The first part has a tridiagonal inverse, the second is of rank two.
        """
        local = self._beside + extra
        free = ~fixed
        if not self._both:
            return lambda u: np.where(free, u / local, 0.0)
        flip = self._first > self._second
        order = slice(None, None, -1) if flip else slice(None)
        near = _NearInverse(
            np.maximum(local / self._both - 1.0 / 6.0, LEAST_LOCAL)[order],
            free[order],
            min(self._first, self._second) / self._both,
        )
        both = self._both
        return lambda u: (near(u[0, order]) / both)[None, order]

    def largest(self) -> Array:
        """Sums along the rows [mm/MPa]: no influence is negative."""
        return self.apply(np.ones((1, *self.shape)))[0]

    def elongation(self, q: Array) -> Array:
        """The layer's part of the displacement [mm]."""
        return self._layer * q

    def coarser(self) -> Transfer | None:
        """Cells of twice the length; None for an odd number of cells, and from 16 on."""
        cells = self.shape[0]
        if cells <= COARSEST or cells % 2:
            return None
        coarse = copy.copy(self)
        coarse.shape = (cells // 2,)
        coarse.cell, coarse.area, coarse._both = 2.0 * self.cell, 2.0 * self.area, 4.0 * self._both
        coarse._first, coarse._second = 4.0 * self._first, 4.0 * self._second
        coarse._layer = 1.0 / side_by_side(self._layer, _pairs)
        coarse._beside = 1.0 / side_by_side(self._beside, _pairs)
        return Transfer(coarse, _pairs, lambda a: np.repeat(a, 2, -1))


def _too_coarse(cell: float, decay: float, cells: int) -> InputError:
    need = (
        f"{int(np.ceil(10 * cells * cell / decay))} cells or more"
        if decay > 0.0
        else "a layer, or shear through the thickness"
    )
    return InputError(
        code="cells-too-coarse",
        key="cells",
        found=f"cells of {cell:.4g} mm where traction decays over {decay:.4g} mm",
        expected="cells that are no longer than the decay length, better a tenth of it",
        remedy=f"give {need}; strips that stick rigidly have a closed form",
    )


def _pairs(a: Array) -> Array:
    """Means over pairs of cells."""
    return 0.5 * (a[..., ::2] + a[..., 1::2])


def _to_the_end(q: Array) -> Array:
    """Sum over j of the mean of min(y, eta) over the cells i and j times q_j, in cells: i + 1/2 - 1/6 on the diagonal.

    It is the integral from 0 of the force that has still to be handed over, by two running sums.
    """
    force = np.cumsum(q[..., ::-1], axis=-1)[..., ::-1]
    return np.cumsum(force - 0.5 * q, axis=-1) - 0.5 * force + q / 3.0


class _NearInverse:
    """(min(y, eta) + lesser (n - y - eta) + diag(local))^-1 on the free cells, y = 1/2, 3/2, ... in cells."""

    def __init__(self, local: Array, free: Mask, lesser: float) -> None:
        n = len(local)
        self._hold = np.where(free, 1.0 / local, 0.0)
        diagonal = np.full(n, 2.0)
        diagonal[0] += 1.0
        diagonal[-1] -= 1.0
        self._diagonal = diagonal
        self._factors = dpttrf(diagonal + self._hold, np.full(n - 1, -1.0))[:2]
        self._sides = np.where(free, [np.ones(n), (np.arange(n) + 0.5) / n], 0.0)
        self._answers = np.array([self._stem(side) for side in self._sides])
        self._middle = np.zeros((2, 2))
        if lesser and free.any():
            start = np.array([[0.0, -1.0], [-1.0, -1.0]]) / (lesser * n)
            self._middle = np.linalg.inv(start + self._sides @ self._answers.T)

    def _stem(self, u: Array) -> Array:
        """The inverse of the first part: w with (T^-1 + hold) w = hold u, then T^-1 w."""
        w = dpttrs(*self._factors, self._hold * u)[0]
        out = self._diagonal * w
        out[1:] -= w[:-1]
        out[:-1] -= w[1:]
        return np.where(self._hold > 0.0, out, 0.0)

    def __call__(self, u: Array) -> Array:
        return self._stem(u) - self._answers.T @ (self._middle @ (self._answers @ u))
