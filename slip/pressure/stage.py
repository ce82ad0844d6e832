"""The pressure stage: points of the face that carry the clamp of a single bolt, where its torque needs them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.joint.joint import Joint
from slip.pressure.annulus import friction_radius
from slip.pressure.spread import contact_radius, in_range, ring_forces

Array = np.ndarray
RINGS, AROUND = 12, 72  # points of a patch in radius and around; 24 x 144 changes the limit load by less than 1e-3


@dataclass(frozen=True, eq=False)
class Patch:
    """Points (m, 2) [mm] from the bolt's axis and their shares (m,) of the clamp; friction radius [mm] and where it comes from."""

    points: Array
    shares: Array
    friction_radius: float
    basis: str


@dataclass(frozen=True)
class Pressure:
    """What the pressure stage found: the patch of a single bolt, None where points or radius are not known or not needed."""

    patch: Patch | None
    assumptions: tuple[Note, ...]


def pressure(joint: Joint, turning: bool) -> Pressure:
    """The pressure stage. Only a single bolt under a torque (`turning`) needs a patch; several bolts act as points.

    Raises Problems when the patch is needed and neither hole nor thread tells its size.
    """
    bolt, plates = joint.bolt, joint.plates
    if joint.pattern.count > 1 or not turning:
        return Pressure(None, ())
    if bolt.hole_diameter is None:
        expected = "hole_diameter, the radius at which a single bolt holds a torque"
        raise Problems([InputError("missing-key", "bolt.hole_diameter", "nothing", expected, "add it", joint.file)])
    hole, bearing = bolt.hole_diameter / 2, (bolt.bearing_diameter or 0.0) / 2
    equal = len(plates) == 2 and not bolt.tapped and bolt.washers == (0.0, 0.0)
    equal = equal and plates[0].thickness == plates[1].thickness and plates[0].material == plates[1].material
    if equal and bearing > 0 and in_range(plates[0].thickness, bearing, hole):
        radii, shares = ring_forces(hole, contact_radius(plates[0].thickness, bearing), RINGS)
        return Pressure(_patch(radii, shares, "derived"), ())
    note = Note("friction-radius-hole", "torque on one bolt is held at the hole radius", "plate")
    return Pressure(_patch(np.array([hole]), np.array([1.0]), "practice"), (note,))


def _patch(radii: Array, shares: Array, basis: str) -> Patch:
    """Rings of equal points around the bolt."""
    angles = 2 * np.pi * np.arange(AROUND) / AROUND
    points = radii[:, None, None] * np.stack([np.cos(angles), np.sin(angles)], axis=-1)
    return Patch(points.reshape(-1, 2), np.repeat(shares / AROUND, AROUND), friction_radius(radii, shares), basis)
