"""Any small problem: the compliance as a matrix, for bodies whose influence numbers come from elsewhere."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from slip.friction.compliance.layer import layer_compliance, without_compliance
from slip.friction.compliance.protocol import Array, Mask

TRACE = 1e-12  # of the rows' sums, added to the diagonal before it is inverted


class Dense:
    """Compliance as a matrix over n points, all components of one after all of the other.

    matrix (components n, components n): displacement [mm] per traction [MPa], so that area times matrix is symmetric
    and positive. area (n,) or scalar [mm^2]. layer: k_t [N/mm^3], scalar or (n,); None for none.

    Raises ValueError for shapes or values without meaning, InputError (no-compliance) where a point has none.
    """

    def __init__(
        self, matrix: ArrayLike, area: ArrayLike = 1.0, *, components: int = 1, layer: ArrayLike | None = None
    ) -> None:
        bulk = np.asarray(matrix, dtype=float)
        size = len(bulk) if bulk.ndim else 0
        if components not in (1, 2) or not size or bulk.shape != (size, size) or size % components:
            raise ValueError(f"a square matrix over {components} component(s) of n points is needed, not {bulk.shape}")
        self.components, self.shape = components, (size // components,)
        self.area = np.asarray(area, dtype=float)
        if self.area.shape not in ((), self.shape) or not (self.area > 0.0).all():
            raise ValueError(f"area must be positive, a number or of shape {self.shape}")
        weighted = np.tile(np.broadcast_to(self.area, self.shape), components)[:, None] * bulk
        if not np.isfinite(bulk).all() or np.abs(weighted - weighted.T).max() > 1e-9 * np.abs(weighted).max():
            raise ValueError("area times matrix must be finite and symmetric")
        self._layer = layer_compliance(layer, self.shape)
        self._matrix = bulk + np.diag(np.tile(self._layer, components))
        if not (np.diag(self._matrix) > 0.0).all():
            raise without_compliance("a point without compliance")
        self._largest = np.abs(self._matrix).sum(1).reshape(components, -1).max(0)

    def apply(self, q: Array) -> Array:
        """Displacement [mm] of tractions q (components, n) [MPa]."""
        return (self._matrix @ q.reshape(-1)).reshape(q.shape)

    def near_inverse(self, extra: Array, fixed: Mask) -> Callable[[Array], Array]:
        """The inverse of C + extra on the points that are not fixed, exact but for a trace that keeps it regular."""
        go = np.flatnonzero(~np.tile(fixed, self.components))
        more = np.tile(extra + TRACE * self._largest, self.components)
        inverse = np.linalg.inv(self._matrix[np.ix_(go, go)] + np.diag(more[go]))

        def solve(u: Array) -> Array:
            out = np.zeros(u.size)
            out[go] = inverse @ u.reshape(-1)[go]
            return out.reshape(u.shape)

        return solve

    def largest(self) -> Array:
        """Sums of absolute values along the rows [mm/MPa], the larger of the components."""
        return self._largest

    def elongation(self, q: Array) -> Array:
        """The layer's part of the displacement [mm]."""
        return self._layer * q

    def coarser(self) -> None:
        """No coarser grid: the inverse is exact."""
        return None
