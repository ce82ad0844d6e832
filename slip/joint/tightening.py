"""How the bolts were tightened and what is lost afterwards."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.joint.material import Material

Array = np.ndarray
Range = tuple[float, float]


@record
class Scatter:
    """Plus and minus `bound` (a share) about the nominal preload; `text` says where it comes from, `given` whether the file said it."""

    bound: float
    text: str
    source: str
    basis: str
    given: bool


@record
class Torque:
    """Tightening by torque [N mm]. Either both frictions or the nut factor; either a scatter or the accuracy of the tool (a share)."""

    torque: float
    thread_friction: Range | None
    head_friction: Range | None
    nut_factor: Range | None
    prevailing: Range
    scatter: Scatter | None
    tool_accuracy: float | None
    source: str


@record(eq=False)
class Preload:
    """Assembly preload given as lowest and highest per bolt, shape (n,) in N; `nominal` where a scatter made them, else None.

    thread_friction is only asked for by the torsion that tightening leaves in the bolt. source: where the file says it comes from.
    """

    low: Array
    high: Array
    nominal: Array | None
    scatter: Scatter | None
    thread_friction: Range | None
    source: str


@record
class Rises:
    """Temperature rises since assembly in K: of the bolt and of each plate."""

    bolt: float
    plates: tuple[float, ...]


@record
class Losses:
    """What the preload loses: embedding by the table (None), a length [mm] or a force [N]; relaxation as a share; thermal.

    `thermal` is a loss in N, the rises, or None. `washer_material` carries the washers' expansion.
    """

    embedding_force: float | None
    embedding_length: float | None
    relaxation: float
    thermal: float | Rises | None
    washer_material: Material
