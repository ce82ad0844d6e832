"""A pressed contact: two bodies, a profile, a normal force, loads."""

from __future__ import annotations

from slip.base.notes import Note
from slip.base.records import record
from slip.base.units import System
from slip.joint.joint import Required
from slip.joint.loads import Case
from slip.joint.material import Material
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
