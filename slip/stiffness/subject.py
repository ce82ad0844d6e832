"""What the contact stiffness of a model is judged on: one load case of a joint or of a face of known pressure, and its model."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import TypeVar

import numpy as np

from slip.assess import Assessment, FaceAssessment
from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.faces import Faced, FaceStiffness, face_stiffness, plate_shear
from slip.friction.model import Model
from slip.friction.models import choose, choose_face
from slip.friction.partial import End
from slip.joint.contact import PressedFace
from slip.joint.joint import Joint

Array = np.ndarray
J = TypeVar("J", Joint, PressedFace)
SLIPPING = 0.5  # part of gross slip at which a face is judged whose own load is beyond it, or that has no load


@record(eq=False)
class Pressures:
    """Pressure of the face at the lowest clamp [MPa]: mean over the contact, weighted with itself, peak; and the contact's area [mm^2]."""

    mean: float
    weighted: float
    peak: float
    area: float


@record(eq=False)
class Subject:
    """One end of a case. one, other: shear and moment with the clamps at both ends; gross: factor on `one` at which all slips.

    model(stiffness of the face): the mechanical model under `one`. stiffness: of the face itself, None where it is not known.
    shear: of both plates through their thickness [mm/MPa]; reason: why another load than the case's own is taken, ''.
    clamps: lowest and highest of each bolt [N], (2, n). width: of a patch or of the face [mm].
    """

    joint: Faced
    case: str
    end: str
    alternating: bool
    one: End
    other: End
    gross: float
    friction: float
    faces: int
    model: Callable[[FaceStiffness], Model]
    stiffness: FaceStiffness | None
    pressures: Pressures
    shear: float
    clamps: Array
    width: float
    reason: str

    @property
    def force(self) -> float:
        """Resultant shear of the end that is judged [N]."""
        return float(np.hypot(*self.one[0][:2]))


def constant(k_t: float) -> FaceStiffness:
    """A contact stiffness [N/mm^3] that does not follow the pressure."""

    return FaceStiffness(None, (k_t, k_t, k_t), "file", "given", Trace())


def of_joint(found: Assessment) -> Subject | None:
    """The governing end of a bolted joint; None where its contact cannot be worked out.

    The plates always shear through their thickness here, whatever the file says: a mesh of solid elements holds that already.
    """
    joint, states, ledger = _sheared(found.joint), found.clamp.states, found.clamp.ledger
    patch = found.pressure.patch
    if patch is None:
        return None
    governing = found.verdict.governing
    sliding = np.flatnonzero(found.slip.sliding)
    if not sliding.size:
        return None
    names = [joint.cases[i].name for i in states.case]
    own = [s for s in sliding if (names[s], states.end[s]) == (governing.case, governing.end)]
    row = int(min(own or sliding, key=lambda s: float(found.slip.bolt_safety[s].min())))
    rest = [s for s in np.flatnonzero(states.case == states.case[row]) if states.end[s] != states.end[row]]
    clamp = ledger.clamp_low[row]
    load, gross, reason = _loaded(states.load[row], float(found.slip.group.factor[row]))
    other = (states.load[rest[0]], ledger.clamp_low[rest[0]]) if rest and not reason else (-load, clamp)
    weighted = float((patch.shares * patch.density).sum())
    area = float(patch.areas[patch.shares > 0].sum())
    mean = float(clamp.mean())
    return Subject(
        joint=joint,
        case=names[row],
        end=states.end[row],
        alternating=True,
        one=(load, clamp),
        other=other,
        gross=gross,
        friction=joint.interface.friction_low,
        faces=joint.interface.parallel_faces,
        model=lambda stiffness: choose(joint, patch, stiffness, load, clamp, without_rim=True),
        stiffness=face_stiffness(joint),
        pressures=Pressures(mean / area, weighted * mean, float(patch.profile.max()) * float(clamp.max()), area),
        shear=plate_shear(joint),
        clamps=np.stack([clamp, ledger.clamp_high[row]]),
        width=2 * patch.contact_radius,
        reason=reason,
    )


def of_face(found: FaceAssessment) -> Subject | None:
    """The governing end of a face of known pressure, as `of_joint`."""
    face, governing = _sheared(found.joint), found.verdict.governing
    named = {(face.cases[i].name, end): slip for (i, end), slip in found.slips.items()}
    slip = named.get((governing.case, governing.end)) or next(iter(named.values()))
    if not slip.load.any():
        return None
    load, gross, reason = _loaded(slip.load, float(slip.group.factor))
    others = [s.load for (case, end), s in named.items() if case == governing.case and end != governing.end]
    clamp = np.array([face.force])
    pressure = face.interface.pressure
    assert pressure is not None
    return Subject(
        joint=face,
        case=governing.case,
        end=governing.end,
        alternating=True,
        one=(load, clamp),
        other=(others[0] if others and not reason else -load, clamp),
        gross=gross,
        friction=face.interface.friction_low,
        faces=face.interface.parallel_faces,
        model=lambda stiffness: choose_face(face, stiffness, load),
        stiffness=face_stiffness(face),
        pressures=Pressures(pressure, pressure, pressure, face.area),
        shear=plate_shear(face),
        clamps=np.stack([clamp, clamp]),
        width=face.width,
        reason=reason,
    )


def _sheared(joint: J) -> J:
    return replace(joint, interface=replace(joint.interface, plate_shear=True))


def _loaded(load: Array, gross: float) -> tuple[Array, float, str]:
    """The load itself, or half of gross slip where it is beyond that."""
    if gross > 1.0 / 0.999:
        return load, gross, ""
    said = f"the load is {1 / gross:.3g} times gross slip: judged at {SLIPPING:g} of gross slip" if gross else ""
    return SLIPPING * gross * load, 1 / SLIPPING, said or "no clamp is left"
