"""A mechanical model of a face under a load: what every model is asked for."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import field

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face
from slip.pressure.patch import Patch

Array = np.ndarray
RIM_SHARE = 0.01  # of the clamp: what the points carry that lie where the pressure runs out
FINE = 4001  # places along the radius of a patch
RIM_SAID = "first slip is judged without the last 1 % of the clamp, where the pressure runs out: a constant stiffness has none there"


@record(eq=False)
class Judged:
    """Points as first slip and largest motion see them, each field (*field): pressure [MPa], that of the rim no less than `patch_rim`.

    own: compliance of each point by itself [mm/MPa] in the model; local: the same at the pressure here; face: the face's part of local.
    """

    pressure: Array
    own: Array
    local: Array
    face: Array


@record(eq=False)
class Built:
    """A model at given clamps: compliance, the face's rigid motions, and press(clamp (n,) [N]) -> pressure (*field) [MPa] on its points.

    edge(traction (c, *field) [MPa], load) -> motion (*field) [mm] by which the outer edge of a point moves more than its mean; None
    where points stand for no more than themselves. judged: None where a point's own compliance cannot be told from the others'.
    """

    compliance: Compliance
    face: Face
    press: Callable[[Array], Array]
    edge: Callable[[Array, Array], Array] | None = None
    judged: Judged | None = None


@record(eq=False)
class Model:
    """A model by name, why it was chosen and what its range says; `faces` shares the load between parallel faces.

    build(clamp (n,), reading): the model at clamps [N] and one reading of the face's stiffness.
    load(shear and moment (3,)): the model's load.
    length [mm]: of a lap, 0 for any other model. basis: of what it gives. trace: what the model takes.
    stretch [mm]: the most that plates stretch in their plane where the model takes them as rigid, 0 where it does not.
    outside: how the joint lies out of the range in which the model's true slip and energy are known, '' inside.
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
    stretch: float = 0.0
    outside: str = ""


def rim_pressure(pressure: Array, force: Array) -> float:
    """Pressure at which the places below it carry RIM_SHARE of the force. pressure, force (*field), in any units.

    Where the pressure falls to nothing a finer mesh would find ever less pressed points; this is one and the same for all meshes.
    Under even pressure it is that pressure. 0 where nothing presses.
    """
    p, f = pressure[force > 0], force[force > 0]
    order = np.argsort(p)
    return float(np.interp(RIM_SHARE * f.sum(), np.cumsum(f[order]), p[order])) if f.size else 0.0


def patch_rim(patch: Patch) -> float:
    """The same of the patch of one bolt for a unit of clamp [1/mm^2], from its profile and not from its points."""
    r = np.linspace(patch.radii[0], patch.radii[-1], FINE)
    p = np.interp(r, patch.radii, patch.profile)
    return rim_pressure(p, p * r)
