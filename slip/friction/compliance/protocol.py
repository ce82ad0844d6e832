"""What a compliance must be able to do so that the frictional step can work on it."""

from __future__ import annotations

from collections.abc import Callable
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from slip.base.records import record

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


@record(eq=False)
class Transfer:
    """The same bodies on a coarser grid, and the way there and back.

    compliance: the coarser one.
    restrict: (..., *field) -> (..., *coarse), mean of the fine cells of each coarse one, 0 for those beyond an edge.
    prolong: (..., *coarse) -> (..., *field), the coarse cell's value in each of its fine cells.
    """

    compliance: Compliance
    restrict: Callable[[Array], Array]
    prolong: Callable[[Array], Array]


class Compliance(Protocol):
    """Relative elastic displacement u = C q of the two faces under tangential tractions q.

    C is linear, and symmetric and positive in the product sum area a.b. Tractions and displacements have the shape
    (components, *field): tractions in MPa, displacements in mm.

    shape: the field's axes. components: 1 or 2. area: of each point [mm^2], scalar or (*field).
    """

    @property
    def shape(self) -> tuple[int, ...]:
        """Axes of the field."""
        ...

    @property
    def components(self) -> int:
        """Components of a traction, 1 or 2."""
        ...

    @property
    def area(self) -> Array | float:
        """Area of each point [mm^2], scalar or (*field)."""
        ...

    def apply(self, q: Array) -> Array:
        """C q [mm], the layer included."""
        ...

    def near_inverse(self, extra: Array, fixed: Mask) -> Callable[[Array], Array]:
        """An inverse near to that of C + extra on the points that are not `fixed`; symmetric and positive there.

        extra (*field) [mm/MPa] >= 0.
        """
        ...

    def largest(self) -> Array:
        """A field (*field) with C <= diag(largest) [mm/MPa], such as the sums of absolute values along the rows."""
        ...

    def elongation(self, q: Array) -> Array:
        """The layer's part of C q [mm]: elastic slip of the interface."""
        ...

    def coarser(self) -> Transfer | None:
        """The next coarser grid; None where there is none or none is needed."""
        ...
