"""Rigid plates held by springs: one at each bolt, contact or point, each for itself."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from slip.friction.compliance.layer import layer_compliance, without_compliance
from slip.friction.compliance.protocol import Array, Mask


class Springs:
    """Diagonal compliance: 1/stiffness and the layer's 1/k_t in series at each point.

    stiffness (*field): of the body per area [N/mm^3] > 0, inf for a rigid one; a spring of K [N/mm] has K/area.
    area (*field) or scalar [mm^2]; tractions times area are the forces of the points.
    layer: k_t [N/mm^3], scalar or (*field); None for none.

    Raises ValueError for shapes or values without meaning, InputError (no-compliance) where a point has neither spring
    nor layer.
    Source: statics. Basis: derived.
    """

    def __init__(
        self, stiffness: ArrayLike, area: ArrayLike = 1.0, *, components: int = 1, layer: ArrayLike | None = None
    ) -> None:
        k = np.atleast_1d(np.asarray(stiffness, dtype=float))
        self.area = np.asarray(area, dtype=float)
        self.shape, self.components = k.shape, components
        if not (k > 0.0).all() or not (self.area > 0.0).all() or components not in (1, 2):
            raise ValueError("springs need positive stiffnesses, positive areas, and one or two components")
        if self.area.ndim and self.area.shape != self.shape:
            raise ValueError(f"area must be a number or of shape {self.shape}, not {self.area.shape}")
        self._layer = layer_compliance(layer, self.shape)
        self._total = 1.0 / k + self._layer
        if not (self._total > 0.0).all():
            raise without_compliance("a rigid point without a layer")

    def apply(self, q: Array) -> Array:
        """Displacement [mm] of tractions q (components, *field) [MPa]."""
        return self._total * q

    def near_inverse(self, extra: Array, fixed: Mask) -> Callable[[Array], Array]:
        """The exact inverse of C + extra on the points that are not fixed."""
        inverse = np.where(fixed, 0.0, 1.0 / (self._total + extra))
        return lambda u: inverse * u

    def largest(self) -> Array:
        """C itself, point by point [mm/MPa]."""
        return self._total

    def elongation(self, q: Array) -> Array:
        """The layer's part of the displacement [mm]."""
        return self._layer * q

    def coarser(self) -> None:
        """No coarser grid: the inverse is exact."""
        return None
