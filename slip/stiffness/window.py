"""The window of a contact stiffness: the error that each value causes in each quantity of the joint, and the values that serve.

The stiffness is swept through the joint's own model, whose plates give by t/(3G) in every run, the reference included: that part of
the compliance is in the solid elements of a mesh already. For sticking the reference is a contact that does not give; for the
interface it is the face's own stiffness, which follows the pressure where it comes from roughness.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.errors import InputError, NotConverged
from slip.base.progress import Progress, told
from slip.base.records import record
from slip.friction.faces import FaceStiffness
from slip.friction.march.load import SlipsWholly
from slip.friction.march.step import step
from slip.friction.model import Built, Model
from slip.friction.partial import STUCK, TYPICAL, Motions, motions_of
from slip.stiffness.subject import Subject, constant

Array = np.ndarray
DECADES, EACH, FEW = 6, 4, 2  # of the sweep; values in a decade; on half-spaces, whose steps are dear
LEVELS = (0.10, 0.05, 0.01)
HARD = 1e5  # times what the bodies give: a contact that does not give to five digits
STICK, INTERFACE = "stick", "interface"
# Quantities of the window: what a value of the sweep is asked for.
QUANTITIES = ("stiffness", "first slip", "slip length", "true slip", "energy", "load sharing")
# A contact that does not give has a stress without bound at its ends: its first slip is a matter of the mesh, and no reference.
WITHOUT = {STICK: ("first slip",), INTERFACE: ()}
NEAR_NOTHING = 0.01  # an error below this part of a level is taken for none
NOTHING = 1e-12  # below this part of what the contact can do a quantity is none, and has no error


@record(eq=False)
class Response:
    """What the joint does at one contact stiffness: the motions, and the part of the load that each bolt's patch carries.

    grain: share of the clamp on the largest point of the model, by which a slip length is known.
    """

    motions: Motions
    shares: Array
    grain: float

    def value(self, quantity: str) -> float | None:
        """A quantity by its name; None where the model has none. Of the stiffness the motion that it stands for: 1/K [mm/N], whose
        error is that of the motion under a low load."""
        m = self.motions
        found = {
            "stiffness": 1 / m.stiffness if m.stiffness else None,
            "first slip": m.first_slip_factor,
            "slip length": m.slip_share,
            "true slip": m.true_slip,
            "energy": m.energy_per_cycle,
            "load sharing": float(self.shares.max()) if self.shares.size > 1 else None,
        }
        return found[quantity]


@record(eq=False)
class Window:
    """A sweep against one reference. k (K,) [N/mm^3]; responses (K,); reference; errors: by quantity, (K,), relative, NaN for none.

    lowest: by quantity and level, the smallest stiffness from which on the error stays within the level, None where none does;
    highest: likewise the largest up to which it does, infinite where it never leaves it again.
    """

    purpose: str
    k: Array
    responses: tuple[Response, ...]
    reference: Response
    errors: dict[str, Array]
    lowest: dict[str, dict[float, float | None]]
    highest: dict[str, dict[float, float | None]]


def response(subject: Subject, stiffness: FaceStiffness, reading: int = TYPICAL) -> Response:
    """The joint's response with a contact of this stiffness, at one of its readings.

    Raises NotConverged or InputError where the model cannot be solved.
    """
    model = subject.model(stiffness)
    found = motions_of(model, subject.friction, reading, subject.one, subject.other, subject.alternating)
    clamp = subject.one[1]
    built = model.build(clamp, TYPICAL)
    pressed = built.press(clamp) * built.compliance.area
    shares = np.ones(1) if clamp.size < 2 else _shares(model, built, subject)
    return Response(found, shares, float(pressed.max() / pressed.sum()))


def _shares(model: Model, built: Built, subject: Subject) -> Array:
    """Part of the stuck load that the contact round each bolt carries along it, (n,); a point belongs to bolts as they press on it."""
    load, clamp = subject.one
    pressure = built.press(clamp)
    wanted = model.load(load)
    bound = np.where(pressure > 0, STUCK * pressure.max(), 0.0)
    traction = step(built.compliance, bound, built.face, load=wanted).state.traction
    along = wanted[: built.face.components] / np.linalg.norm(wanted[: built.face.components])
    carried = np.tensordot(along, traction, axes=1) * built.compliance.area
    safe = np.where(pressure > 0, pressure, 1.0)
    parts = [
        float((carried * built.press(np.where(np.arange(clamp.size) == i, clamp, 0.0)) / safe).sum())
        for i in range(clamp.size)
    ]
    found: Array = np.array(parts) / sum(parts)
    return found


def values(subject: Subject) -> Array:
    """Stiffnesses of the sweep [N/mm^3]: six decades about the face's own, or about what the plates give."""
    middle = 1 / subject.shear if subject.shear else 1e4
    if subject.stiffness is not None:
        middle = float(subject.stiffness.at(subject.pressures.weighted, TYPICAL))
    each = FEW if "half-space" in subject.model(constant(middle)).name else EACH
    found: Array = middle * np.logspace(-DECADES / 2, DECADES / 2, DECADES * each + 1)
    return found


def sweep(subject: Subject, k: Array, progress: Progress | None = None) -> tuple[Response | None, ...]:
    """The response at every stiffness; None where the model cannot be solved at it."""

    def at(value: float) -> Response | None:
        try:
            return response(subject, constant(value))
        except (NotConverged, InputError, SlipsWholly):
            return None

    return tuple(at(float(value)) for value in told(k.tolist(), progress))


def rigid(subject: Subject) -> Response:
    """The response with a contact that does not give."""
    hard = HARD * (1 / subject.shear if subject.shear else 1e4)
    return response(subject, constant(hard))


def window(purpose: str, k: Array, responses: Sequence[Response | None], reference: Response) -> Window:
    """Errors of a sweep against a reference, and the bounds of the values that serve."""
    solved = [i for i, r in enumerate(responses) if r is not None]
    k, kept = k[solved], tuple(r for r in responses if r is not None)
    asked = [name for name in QUANTITIES if name not in WITHOUT[purpose]]
    errors = {name: np.array([error(r, reference, name) for r in kept]) for name in asked}
    return Window(
        purpose,
        k,
        kept,
        reference,
        errors,
        {name: {level: lowest(k, e, level) for level in LEVELS} for name, e in errors.items()},
        {name: {level: highest(k, e, level) for level in LEVELS} for name, e in errors.items()},
    )


def error(found: Response, reference: Response, quantity: str) -> float:
    """Relative error of a quantity; NaN where there is nothing to compare. A slip length is known to a point of the model."""
    value, wanted = found.value(quantity), reference.value(quantity)
    if value is None or wanted is None or not np.isfinite(wanted) or abs(wanted) <= NOTHING:
        return float("nan")
    unknown = max(found.grain, reference.grain) if quantity == "slip length" else 0.0
    return (abs(value - wanted) + unknown) / abs(wanted)


def lowest(k: Array, error: Array, level: float) -> float | None:
    """Smallest k from which the error stays within the level up to the end of the sweep or the other side; None where none does."""
    return _edge(k, error, level, from_above=True)


def highest(k: Array, error: Array, level: float) -> float | None:
    """Largest k up to which the error stays within the level; infinite where the sweep ends before it leaves."""
    return _edge(k, error, level, from_above=False)


def _edge(k: Array, error: Array, level: float, from_above: bool) -> float | None:
    """Where the error crosses the level, on the stretch of values that serve and holds the smallest error; by straight lines in
    logarithms."""
    inside = error <= level
    if not inside.any() or np.isnan(error).all():
        return None
    best = int(np.nanargmin(error))
    i, move = best, -1 if from_above else 1
    while 0 <= i + move < len(k) and inside[i + move]:
        i += move
    beyond = i + move
    if not 0 <= beyond < len(k):
        return float(k[i]) if from_above else float("inf")
    if np.isnan(error[beyond]):
        return float(k[i])
    if error[i] < level * NEAR_NOTHING:  # at the reference itself, where no power law leads to
        part = (level - error[i]) / (error[beyond] - error[i])
    else:
        low, high = np.log(error[i]), np.log(error[beyond])
        part = (np.log(level) - low) / (high - low)
    return float(np.exp(np.log(k[i]) + part * (np.log(k[beyond]) - np.log(k[i]))))
