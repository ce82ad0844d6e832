"""The clamped plates, from the bolt head down."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.joint.material import Material

Array = np.ndarray


@record
class Rectangle:
    """Outline with corners (x0, y0) and (x1, y1) in mm."""

    x0: float
    y0: float
    x1: float
    y1: float

    def edge_distance(self, positions: Array) -> Array:
        """Distance [mm] of points, shape (n, 2), from the nearest edge, shape (n,); negative outside."""
        x, y = positions[:, 0], positions[:, 1]
        return np.minimum.reduce([x - self.x0, self.x1 - x, y - self.y0, self.y1 - y])


@record
class Ring:
    """Outline between two circles about the origin, diameters in mm."""

    outer_diameter: float
    inner_diameter: float

    def edge_distance(self, positions: Array) -> Array:
        """Distance [mm] of points, shape (n, 2), from the nearer circle, shape (n,); negative outside the ring."""
        r = np.hypot(positions[:, 0], positions[:, 1])
        outer = self.outer_diameter / 2 - r
        return np.minimum(outer, r - self.inner_diameter / 2) if self.inner_diameter > 0 else outer


@record
class Plate:
    """One clamped plate: thickness in mm, outline or None where not given, edge through which its load enters or ''."""

    name: str
    material: Material | None
    thickness: float
    outline: Rectangle | Ring | None
    load_edge: str


def clamped(plates: tuple[Plate, ...], tapped: bool) -> tuple[Plate, ...]:
    """The plates inside the grip: all of them, or all but the last when the bolt is screwed into that one."""
    return plates[:-1] if tapped else plates
