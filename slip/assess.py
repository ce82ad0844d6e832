"""The path walked once: joint in, assessment out."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from slip.base.notes import Note
from slip.clamp.stage import Clamp, clamp
from slip.friction.partial import Partial
from slip.friction.stage import Slip, slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure, pressure
from slip.read.build import read
from slip.verdict.stage import Verdict, verdict


@dataclass(frozen=True, eq=False)
class Assessment:
    """What every stage found for a joint."""

    joint: Joint
    clamp: Clamp
    pressure: Pressure
    slip: Slip
    partial: Partial
    verdict: Verdict

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


def assess(joint: Joint | str | Path) -> Assessment:
    """The assessment of a joint, or of the joint file at a path.

    Raises slip.base.errors.Problems for a wrong file, NotConverged where a numerical answer could not be proven.
    """
    if not isinstance(joint, Joint):
        joint = read(joint)
    held = clamp(joint)
    pressed = pressure(joint, turning=bool((held.states.load[:, 2] != 0).any()))
    slipping = slip(joint, held, pressed)
    partial = Partial(joint, held, pressed, slipping)
    return Assessment(joint, held, pressed, slipping, partial, verdict(joint, held, pressed, slipping, partial))
