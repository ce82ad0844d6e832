"""The interface's own compliance: a tangential stiffness per area in series with the bodies at every point."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from slip.base.errors import InputError
from slip.friction.compliance.protocol import Array


def layer_compliance(layer: ArrayLike | None, shape: tuple[int, ...]) -> Array:
    """1/k_t over the field [mm/MPa], 0 without a layer.

    layer: tangential stiffness per area k_t [N/mm^3] > 0, scalar or of `shape`; inf where a cell has none; None for
    none at all.
    Raises ValueError for another shape, or a stiffness that is not positive.
    """
    k = np.asarray(np.inf if layer is None else layer, dtype=float)
    if k.ndim and k.shape != shape:
        raise ValueError(f"the layer must be a number or of shape {shape}, not {k.shape}")
    if not (k > 0.0).all():
        raise ValueError(
            "a layer's stiffness must be positive; give inf where a cell has none, and a bound of 0 where it is open"
        )
    return np.broadcast_to(1.0 / k, shape)


def side_by_side(compliance: Array, mean: Callable[[Array], Array]) -> Array:
    """Stiffness [N/mm^3] of coarse cells whose parts move together, so that it adds; inf where a part is rigid.

    compliance (*field) [mm/MPa]; mean: over the parts of each coarse cell.
    """
    with np.errstate(divide="ignore"):
        return mean(1.0 / compliance)


def without_compliance(what: str) -> InputError:
    """The error for points that cannot move elastically at all."""
    return InputError(
        code="no-compliance",
        key="layer",
        found=what,
        expected="bodies or an interface that yield elastically at every point",
        remedy="give the layer a stiffness, or ask for the gross-slip load, which needs no compliance",
    )
