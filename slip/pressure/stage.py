"""The pressure stage: how the clamp of a bolt presses on the sliding face, where torque or partial slip needs it."""

from __future__ import annotations

import numpy as np

from slip.base.errors import InputError, NotConverged, Problems
from slip.base.notes import Note
from slip.base.records import record
from slip.joint.joint import Joint
from slip.pressure.patch import Patch, from_profile, thin_ring
from slip.pressure.receding import Engagement, contacts
from slip.pressure.rings import Body

RINGS, AROUND = 12, 72  # of a single bolt under torque; 24 x 144 changes the limit load by less than 1e-3
FEW_RINGS, FEW_AROUND = 10, 16  # of each bolt of a pattern, where partial slip sums over many points
# Fall of a thread's pull along its depth: middling for partial slip, and what narrows the contact for a torque.
EVEN, NEAR_FACE = 0.0, 1.0


@record
class Pressure:
    """What the pressure stage found. patch: of one bolt by the contact of its plates, None where nothing needs it or the file does not
    describe it; torque_patch: what a torque on a single bolt is held by, None where there is none; basis: of the torque patch.
    reason: why there is no patch though the file describes it, ''."""

    patch: Patch | None
    torque_patch: Patch | None
    basis: str
    assumptions: tuple[Note, ...]
    reason: str = ""


def pressure(joint: Joint, turning: bool) -> Pressure:
    """The pressure stage; `turning` says whether any load has a moment about the normal.

    Raises Problems when a single bolt under torque tells neither hole nor thread.
    """
    single = joint.pattern.count == 1
    known = joint.interface.roughness is not None or joint.interface.tangential_stiffness is not None
    turned = single and turning
    rings = (RINGS, AROUND) if single else (FEW_RINGS, FEW_AROUND)
    try:
        profile, reason = _profile(joint, EVEN) if known or turned else None, ""
    except NotConverged as error:  # gross slip needs no contact of the plates
        profile, reason = None, str(error)
    patch = None if profile is None else from_profile(*profile, *rings)
    notes = () if patch is None else _engaged_note(joint)
    if not turned:
        return Pressure(patch, None, "", notes, reason)
    torque_patch = _torque_patch(joint, patch)
    if torque_patch is not None:
        radius, other = joint.system.say(torque_patch.friction_radius, "length"), ""
        if torque_patch is not patch and known:
            other = "; partial slip takes a wider contact"
        said = f"plates flat round the bolt: its torque is held at {radius}{other}"
        return Pressure(patch, torque_patch, "derived", (*notes, Note("friction-radius", said, "plate.outline")))
    if joint.bolt.hole_diameter is None:
        expected = "hole_diameter, the radius at which a single bolt holds a torque"
        raise Problems([InputError("missing-key", "bolt.hole_diameter", "nothing", expected, "add it", joint.file)])
    other = "; partial slip takes the contact of the plates" if patch is not None and known else ""
    note = Note("friction-radius-hole", f"torque on one bolt is held at the hole radius{other}", "plate")
    return Pressure(patch, thin_ring(joint.bolt.hole_diameter / 2, AROUND), "practice", (*notes, note), reason)


def _torque_patch(joint: Joint, patch: Patch | None) -> Patch | None:
    """The contact that holds a torque on a single bolt: narrow for a thread; None where plates or contact are not known."""
    if patch is None or any(plate.outline is None for plate in joint.plates):
        return None
    if not joint.bolt.tapped:
        return patch
    try:
        near = _profile(joint, NEAR_FACE)
    except NotConverged:
        return None
    return patch if near is None else from_profile(*near, RINGS, AROUND)


def _profile(joint: Joint, fall: float) -> tuple[np.ndarray, np.ndarray] | None:
    """Pressure along the radius of the sliding face, or None when the file does not describe the plates; `fall` of a thread's pull.

    The face is the one under the first plate; of several sliding faces the one with the least friction radius. Washers are left out,
    which narrows the contact.
    """
    bolt, plates = joint.bolt, joint.plates
    if len(plates) < 2 or bolt.hole_diameter is None or bolt.bearing_diameter is None:
        return None
    thread = _engagement(joint, fall)
    if bolt.tapped and thread is None:
        return None
    bodies = [Body(p.thickness, p.material.youngs_modulus, p.material.poissons_ratio) for p in plates if p.material]
    if len(bodies) < len(plates):
        return None
    found = contacts(bodies, bolt.hole_diameter / 2, bolt.bearing_diameter / 2, thread)
    edges = [p.outline.edge_distance(joint.pattern.positions).min() for p in plates if p.outline is not None]
    faces = found if joint.interface.parallel_faces > 1 else found[:1]
    profiles = [_within(face.radii, face.pressure, min(edges, default=np.inf)) for face in faces]
    return min(profiles, key=_friction_radius)


def _friction_radius(profile: tuple[np.ndarray, np.ndarray]) -> float:
    radii, pressure = profile
    return from_profile(radii, pressure, RINGS, 1).friction_radius


def _engagement(joint: Joint, fall: float) -> Engagement | None:
    """The thread in the last plate, as deep as its nominal diameter where the plate is; None with a nut, or an unknown thread."""
    thread = joint.bolt.thread
    if not joint.bolt.tapped or thread is None:
        return None
    return Engagement(thread.diameter / 2, min(joint.plates[-1].thickness, thread.diameter), fall)


def _engaged_note(joint: Joint) -> tuple[Note, ...]:
    """What is assumed of the thread in the last plate; nothing with a nut."""
    thread = _engagement(joint, EVEN)
    if thread is None:
        return ()
    length = joint.system.say(thread.length, "length")
    return (Note("thread-engagement", f"thread engaged over {length} from the face on", "bolt.far_end"),)


def _within(radii: np.ndarray, pressure: np.ndarray, edge: float) -> tuple[np.ndarray, np.ndarray]:
    """The profile cut at the nearest edge of a plate: what would press beyond it presses inside."""
    if edge >= radii[-1]:
        return radii, pressure
    edge = max(edge, float(radii[1]))
    kept = radii < edge
    return np.append(radii[kept], edge), np.append(pressure[kept], np.interp(edge, radii, pressure))
