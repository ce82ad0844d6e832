"""The path walked once: joint in, assessment out."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from slip.base.notes import Note
from slip.base.records import record
from slip.clamp.stage import Clamp, clamp
from slip.friction.partial import Partial
from slip.friction.stage import Slip, slip
from slip.joint.contact import PressedContact
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
    from slip.friction.pressed import PressedSlip


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


def assess(joint: Joint | PressedContact | str | Path) -> Assessment | PressedAssessment:
    """The assessment of a joint or a pressed contact, or of the joint file at a path.

    Raises slip.base.errors.Problems for a wrong file, NotConverged where a numerical answer could not be proven.
    """
    if isinstance(joint, (str, Path)):
        joint = read(joint)
    return _pressed(joint) if isinstance(joint, PressedContact) else _bolted(joint)


def _pressed(contact: PressedContact) -> PressedAssessment:
    from slip.friction.pressed import pressed_slip  # brings SciPy's transforms; only a contact pays for them
    from slip.verdict.pressed import pressed_verdict  # likewise

    slips = {(i, end): pressed_slip(contact, case, end) for i, case in enumerate(contact.cases) for end, _ in case.ends}
    return PressedAssessment(contact, slips, pressed_verdict(contact, slips))


def _bolted(joint: Joint) -> Assessment:
    held = clamp(joint)
    pressed = pressure(joint, turning=bool((held.states.load[:, 2] != 0).any()))
    slipping = slip(joint, held, pressed)
    partial = Partial(joint, held, pressed, slipping)
    return Assessment(joint, held, pressed, slipping, partial, verdict(joint, held, pressed, slipping, partial))
