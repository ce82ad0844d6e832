"""A mechanical model of a face under a load: what every model is asked for."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import field

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face

Array = np.ndarray


@record(eq=False)
class Built:
    """A model at given clamps: compliance, the face's rigid motions, and press(clamp (n,) [N]) -> pressure (*field) [MPa] on its points.

    edge(traction (c, *field) [MPa], load) -> motion (*field) [mm] by which the outer edge of a point moves more than its mean; None
    where points stand for no more than themselves. local (*field): compliance of each point by itself [mm/MPa], where there is an edge.
    """

    compliance: Compliance
    face: Face
    press: Callable[[Array], Array]
    edge: Callable[[Array, Array], Array] | None = None
    local: Array | None = None


@record(eq=False)
class Model:
    """A model by name, why it was chosen and what its range says; `faces` shares the load between parallel faces.

    build(clamp (n,), reading): the model at clamps [N] and one reading of the face's stiffness.
    load(shear and moment (3,)): the model's load.
    length [mm]: of a lap, 0 for any other model. basis: of what it gives. trace: what the model takes.
    """

    name: str
    why: str
    faces: int
    build: Callable[[Array, int], Built]
    load: Callable[[Array], Array]
    basis: str
    length: float = 0.0
    notes: tuple[str, ...] = field(default=())
    trace: Trace = field(default_factory=Trace)
