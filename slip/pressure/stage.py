"""The pressure stage: how the clamp of a bolt presses on the sliding face, where torque or partial slip needs it."""

from __future__ import annotations

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.records import record
from slip.joint.joint import Joint
from slip.joint.plates import Plate
from slip.pressure.patch import Patch, from_profile, thin_ring
from slip.pressure.receding import Body, contact

RINGS, AROUND = 12, 72  # of a single bolt under torque; 24 x 144 changes the limit load by less than 1e-3
FEW_RINGS, FEW_AROUND = 10, 16  # of each bolt of a pattern, where partial slip sums over many points


@record
class Pressure:
    """What the pressure stage found. patch: of one bolt by the contact of its plates, None where nothing needs it or the file does not
    describe it; torque_patch: what a torque on a single bolt is held by, None where there is none; basis: of the torque patch."""

    patch: Patch | None
    torque_patch: Patch | None
    basis: str
    assumptions: tuple[Note, ...]


def pressure(joint: Joint, turning: bool) -> Pressure:
    """The pressure stage; `turning` says whether any load has a moment about the normal.

    Raises Problems when a single bolt under torque tells neither hole nor thread.
    """
    single = joint.pattern.count == 1
    known = joint.interface.roughness is not None or joint.interface.tangential_stiffness is not None
    profile = _profile(joint) if known or (single and turning) else None
    patch = (
        None if profile is None else from_profile(*profile, *((RINGS, AROUND) if single else (FEW_RINGS, FEW_AROUND)))
    )
    if not (single and turning):
        return Pressure(patch, None, "", ())
    if patch is not None and all(plate.outline is not None for plate in joint.plates):
        radius = joint.system.say(patch.friction_radius, "length")
        note = Note("friction-radius", f"plates flat round the bolt: its torque is held at {radius}", "plate.outline")
        return Pressure(patch, patch, "derived", (note,))
    if joint.bolt.hole_diameter is None:
        expected = "hole_diameter, the radius at which a single bolt holds a torque"
        raise Problems([InputError("missing-key", "bolt.hole_diameter", "nothing", expected, "add it", joint.file)])
    note = Note("friction-radius-hole", "torque on one bolt is held at the hole radius", "plate")
    return Pressure(patch, thin_ring(joint.bolt.hole_diameter / 2, AROUND), "practice", (note,))


def _profile(joint: Joint) -> tuple[np.ndarray, np.ndarray] | None:
    """Pressure along the radius between the first plate and the rest of the stack, or None.

    Not for tapped joints, whose thread pulls from inside the lower plate; washers are left out, which narrows the contact.
    """
    bolt, plates = joint.bolt, joint.plates
    if len(plates) < 2 or bolt.tapped or bolt.hole_diameter is None or bolt.bearing_diameter is None:
        return None
    if any(plate.material is None for plate in plates):
        return None
    found = contact(_body(plates[:1]), _body(plates[1:]), bolt.hole_diameter / 2, bolt.bearing_diameter / 2)
    edges = [p.outline.edge_distance(joint.pattern.positions).min() for p in plates if p.outline is not None]
    return _within(found.radii, found.pressure, min(edges, default=np.inf))


def _within(radii: np.ndarray, pressure: np.ndarray, edge: float) -> tuple[np.ndarray, np.ndarray]:
    """The profile cut at the nearest edge of a plate: what would press beyond it presses inside."""
    if edge >= radii[-1]:
        return radii, pressure
    edge = max(edge, float(radii[1]))
    kept = radii < edge
    return np.append(radii[kept], edge), np.append(pressure[kept], np.interp(edge, radii, pressure))


def _body(plates: tuple[Plate, ...]) -> Body:
    """Plates below the face as one: thicknesses added, moduli by their compliance in series."""
    thickness = sum(p.thickness for p in plates)
    soft = sum(p.thickness / p.material.youngs_modulus for p in plates if p.material is not None)
    ratio = sum(p.thickness * p.material.poissons_ratio for p in plates if p.material is not None) / thickness
    return Body(thickness, thickness / soft, ratio)
