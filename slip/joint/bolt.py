"""The bolt: thread, grade, head, what lies in the grip."""

from __future__ import annotations

from slip.base.records import record
from slip.joint.material import Material


@record
class Thread:
    """A thread by its designation; diameter and pitch in mm. `unified` selects the stress area of ASME B1.1."""

    designation: str
    diameter: float
    pitch: float
    unified: bool
    source: str
    basis: str


@record
class Grade:
    """Strengths in MPa: lowest yield and tensile strength, and the nominal tensile strength that structural standards use."""

    name: str
    yield_strength: float
    tensile_strength: float
    tensile_nominal: float
    source: str
    basis: str


@record
class Segment:
    """A piece of the bolt inside the grip: diameter and length in mm."""

    diameter: float
    length: float


@record
class Bolt:
    """One bolt of the pattern; all bolts are alike. Lengths in mm; None where the file is silent and no table can say.

    `washers` are the thicknesses under the head and under the nut. Without `segments` the shank may reach from none to all of the grip.
    """

    thread: Thread | None
    grade: Grade | None
    head: str
    bearing_diameter: float | None
    hole_diameter: float | None
    shank_diameter: float | None
    segments: tuple[Segment, ...]
    tapped: bool
    washers: tuple[float, float]
    material: Material
