"""The whole joint as one record."""

from __future__ import annotations

from collections.abc import Mapping

from slip.base.notes import Note
from slip.base.records import record
from slip.base.units import System
from slip.joint.bolt import Bolt
from slip.joint.elements import Elements
from slip.joint.loads import Case
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate
from slip.joint.surface import Interface
from slip.joint.table import TableForm
from slip.joint.tightening import Losses, Preload, Torque


@record
class Axial:
    """What an axial force means and who carries it. Shares between 0 and 1; None where not given.

    meaning: "external", "bolt force" or "bolt force change"; model_preload [N].
    """

    meaning: str | None
    model_preload: float | None
    model_bolt_share: float | None
    bolt_share: tuple[float, float] | None
    load_introduction: float | None
    credit_compression: bool


@record
class Required:
    """What the result must reach. decides: "per bolt" or "group"; grows: "all loads" or "shear"; true_slip [mm] or None."""

    static: float
    alternating: float
    decides: str
    decides_reason: str
    grows: str
    true_slip: float | None


@record
class Standard:
    """A standard that must be met as well: its name, a label that tells two entries of one name apart, and the entry's values."""

    name: str
    label: str
    options: Mapping[str, object]
    to_standard_level: float | None


@record(eq=False)
class Joint:
    """Everything that the file says, in inside units, with what was assumed and warned while reading."""

    title: str
    system: System
    bolt: Bolt
    tightening: Torque | Preload
    losses: Losses
    plates: tuple[Plate, ...]
    interface: Interface
    pattern: Pattern
    axial: Axial
    required: Required
    standards: tuple[Standard, ...]
    cases: tuple[Case, ...]
    table: TableForm
    elements: Elements
    loosening_limit: bool
    assumptions: tuple[Note, ...]
    warnings: tuple[Note, ...]
    digest: str
    file: str
