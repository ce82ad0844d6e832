"""Where the work of a step goes, stored or dissipated, and of what the relative motion consists."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from slip.base.records import record
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face
from slip.friction.march.problem import Problem, length

Array = NDArray[np.float64]


@record(eq=False)
class Split:
    """The relative motion of the faces [mm]: motion = slip + elongation + bulk, each (components, *field).

    motion: of the bodies as a whole, B d. slip: true slip, which dissipates.
    elongation: of the layer, elastic slip that comes back. bulk: elastic displacement of the bodies.
    """

    motion: Array
    slip: Array
    elongation: Array
    bulk: Array


def split(
    compliance: Compliance, face: Face, traction: Array, motion: Array, slip: Array, displacement: Array
) -> Split:
    """The parts of the relative motion, as the state holds them; nothing is fitted."""
    layer = compliance.elongation(traction)
    return Split(face.spread(motion, compliance.shape), slip, layer, displacement - layer)


def stored(problem: Problem, traction: Array, displacement: Array) -> float:
    """Elastic energy 1/2 q.C q of bodies and layer [mJ]."""
    return 0.5 * problem.product(traction, displacement)


def dissipated(problem: Problem, bound_before: Array, traction_before: Array, slip: Array) -> float:
    """Energy that the slip of a step (components, *field) [mm] turns into heat [mJ].

    Traction at the end times slip; where the bound changes, the mean of both bounds, for friction follows it. A point
    that opens lets its traction go over the slip that it frees.
    """
    friction = np.where(problem.closed, 0.5 * (bound_before + problem.bound) * length(slip), 0.0)
    opened = 0.5 * problem.product(traction_before * ~problem.closed, slip)
    return float((problem.compliance.area * friction).sum()) + max(opened, 0.0)
