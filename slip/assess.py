"""The path walked once: joint in, assessment out."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from slip.base.notes import Note
from slip.base.progress import Progress
from slip.base.records import record
from slip.clamp.stage import Clamp, clamp
from slip.clamp.states import States
from slip.friction.partial import Partial
from slip.friction.stage import Slip, slip
from slip.joint.contact import PressedContact, PressedFace
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure, pressure
from slip.read.build import read
from slip.verdict.stage import Verdict, verdict


@record(eq=False)
class Assessment:
    """What every stage found for a joint."""

    joint: Joint
    clamp: Clamp
    pressure: Pressure
    slip: Slip
    partial: Partial
    verdict: Verdict
    pressed: Literal[False] = False

    @property
    def holds(self) -> bool:
        """Whether every check that decides holds."""
        return self.verdict.holds

    @property
    def assumptions(self) -> tuple[Note, ...]:
        """Every default that was used, in the order of the path."""
        return (*self.joint.assumptions, *self.clamp.assumptions, *self.pressure.assumptions)

    @property
    def warnings(self) -> tuple[Note, ...]:
        """What a reader must know, in the order of the path."""
        return (*self.joint.warnings, *self.clamp.warnings)


if TYPE_CHECKING:
    from slip.friction.known_pressure import FaceSlip
    from slip.friction.pressed.records import PressedSlip


@record(eq=False)
class PressedAssessment:
    """What was found for a pressed contact: partial slip by case and end, the verdict."""

    joint: PressedContact
    slips: Mapping[tuple[int, str], PressedSlip]
    verdict: Verdict
    pressed: Literal[True] = True

    @property
    def holds(self) -> bool:
        """Whether every check that decides holds."""
        return self.verdict.holds

    @property
    def assumptions(self) -> tuple[Note, ...]:
        """Every default that was used."""
        return self.joint.assumptions

    @property
    def warnings(self) -> tuple[Note, ...]:
        """What a reader must know."""
        return self.joint.warnings


@record(eq=False)
class FaceAssessment:
    """What was found for a face of known pressure: gross and partial slip by case and end, the verdict."""

    joint: PressedFace
    slips: Mapping[tuple[int, str], FaceSlip]
    verdict: Verdict
    pressed: Literal["face"] = "face"

    @property
    def holds(self) -> bool:
        """Whether every check that decides holds."""
        return self.verdict.holds

    @property
    def assumptions(self) -> tuple[Note, ...]:
        """Every default that was used."""
        return self.joint.assumptions

    @property
    def warnings(self) -> tuple[Note, ...]:
        """What a reader must know."""
        return self.joint.warnings


Subject = Joint | PressedContact | PressedFace


def assess(
    joint: Subject | str | Path, progress: Progress | None = None
) -> Assessment | PressedAssessment | FaceAssessment:
    """The assessment of a joint, a pressed contact or a face of known pressure, or of the joint file at a path.

    progress: called as cases and ends are worked out, where that takes long.
    Raises slip.base.errors.Problems for a wrong file, NotConverged where a numerical answer could not be proven.
    """
    if isinstance(joint, (str, Path)):
        joint = read(joint)
    if isinstance(joint, PressedFace):
        return _face(joint, progress)
    return _pressed(joint, progress) if isinstance(joint, PressedContact) else assess_states(joint, progress=progress)


def _pressed(contact: PressedContact, progress: Progress | None) -> PressedAssessment:
    from slip.friction.pressed.stage import pressed_slips  # brings SciPy's transforms; only a contact pays for them
    from slip.verdict.pressed import pressed_verdict  # likewise

    slips = pressed_slips(contact, progress)
    return PressedAssessment(contact, slips, pressed_verdict(contact, slips))


def _face(face: PressedFace, progress: Progress | None) -> FaceAssessment:
    from slip.friction.known_pressure import face_slips  # only a face of known pressure pays for its way
    from slip.verdict.pressed_face import face_verdict  # likewise

    slips = face_slips(face, progress)
    return FaceAssessment(face, slips, face_verdict(face, slips))


def assess_states(joint: Joint, loaded: States | None = None, progress: Progress | None = None) -> Assessment:
    """The assessment of a joint under its own cases, or under states that a table gives in their place."""
    held = clamp(joint, loaded)
    pressed = pressure(joint, turning=bool((held.states.load[:, 2] != 0).any()))
    slipping = slip(joint, held.states, held.ledger, pressed)
    partial = Partial(joint, held, pressed, slipping, progress)
    return Assessment(joint, held, pressed, slipping, partial, verdict(joint, held, pressed, slipping, partial))
