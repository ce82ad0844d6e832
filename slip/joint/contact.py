"""What is pressed without bolts: a contact of two bodies under a force, a face of plates under a known pressure."""

from __future__ import annotations

import math

from slip.base.notes import Note
from slip.base.records import record
from slip.base.units import System
from slip.joint.elements import Elements
from slip.joint.joint import Required
from slip.joint.loads import Case
from slip.joint.material import Material
from slip.joint.plates import Plate, Rectangle, Ring
from slip.joint.surface import Interface

SHAPES = ("sphere", "cylinder", "flat", "rounded flat")


@record(eq=False)
class PressedContact:
    """What a file with [contact] says, in inside units.

    shape: one of SHAPES. radius [mm] of the profile, of the edge of a rounded flat, None for a flat. flat_width [mm]: diameter or
    width of the flat part. length [mm]: None for a round contact, else that of a plane one. normal_force [N]; bulk_stress [MPa] in
    the first body along the shear.
    """

    title: str
    system: System
    shape: str
    radius: float | None
    flat_width: float | None
    length: float | None
    normal_force: float
    bulk_stress: float
    bodies: tuple[Material, Material]
    interface: Interface
    required: Required
    cases: tuple[Case, ...]
    assumptions: tuple[Note, ...]
    warnings: tuple[Note, ...]
    digest: str
    file: str


@record(eq=False)
class PressedFace:
    """What a file with [interface] pressure says, in inside units: plates that lie on each other under an even pressure, no bolts.

    overlap: of the outlines, over which the pressure acts; every face of parallel ones has the same.
    """

    title: str
    system: System
    plates: tuple[Plate, ...]
    overlap: Rectangle | Ring
    interface: Interface
    required: Required
    cases: tuple[Case, ...]
    elements: Elements
    assumptions: tuple[Note, ...]
    warnings: tuple[Note, ...]
    digest: str
    file: str

    @property
    def area(self) -> float:
        """Area of one face [mm^2]."""
        o = self.overlap
        if isinstance(o, Rectangle):
            return (o.x1 - o.x0) * (o.y1 - o.y0)
        return math.pi / 4 * (o.outer_diameter**2 - o.inner_diameter**2)

    @property
    def width(self) -> float:
        """Diameter [mm] of a circle of the same area; of a ring its outer diameter."""
        return (
            math.sqrt(4 / math.pi * self.area) if isinstance(self.overlap, Rectangle) else self.overlap.outer_diameter
        )

    @property
    def middle(self) -> tuple[float, float]:
        """Centroid of the face [mm]."""
        o = self.overlap
        return ((o.x0 + o.x1) / 2, (o.y0 + o.y1) / 2) if isinstance(o, Rectangle) else (0.0, 0.0)

    @property
    def force(self) -> float:
        """Force that presses one face [N]."""
        assert self.interface.pressure is not None
        return self.interface.pressure * self.area
