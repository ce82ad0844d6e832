"""What the analyst's own run should show, so that a model can be accepted or sent back."""

from __future__ import annotations

import numpy as np

import slip
from slip.base.records import record
from slip.friction.partial import HIGH, LOW, TYPICAL
from slip.joint.elements import Elements
from slip.joint.plates import Plate
from slip.stiffness.subject import Subject, constant
from slip.stiffness.window import STICK, WITHOUT, Response, response

ALIKE = 1.1  # moduli or thicknesses within this factor are alike
TESTS = (
    "Elastic slip: put the load on to half of first slip and take it off. The relative motion goes back to zero; "
    "what stays is no elastic slip.",
    "True slip: put the load on to twice first slip and take it off. What stays is true slip; "
    "its energy does not depend on the load steps.",
    "Creep: hold the load for ten more load steps. Motion that goes on while the load is held comes from a friction law "
    "that is smoothed over the slip rate; its speed follows the load and the smoothing.",
)
TWO_MESHES = (
    "Two meshes: halve the elements in the contact and keep the stiffness per area. First slip, slip length and energy "
    "may change by a few per cent; if they follow the element size, the stiffness was tied to the mesh.",
)
NO_CURE = "More friction or more preload does not cure creep: it hides it below a larger load."


@record(eq=False)
class Expected:
    """A quantity that the run should show: low, typical and high in inside units, its kind for units; None where nothing is expected."""

    name: str
    low: float
    typical: float
    high: float
    kind: str


@record(eq=False)
class Card:
    """Expected values, the tests, which face should carry the contact points and the rule that decided, a line for the model's log."""

    expected: tuple[Expected, ...]
    tests: tuple[str, ...]
    carries: str
    rule: str
    log: str


def card(subject: Subject, k: float, purpose: str, elements: Elements) -> Card:
    """The card for a value per area [N/mm^3] and its purpose; that of the interface follows the pressure where the face does."""
    responses = _readings(subject, k, purpose)
    carries, rule = contact_points(subject.joint.plates, elements.element_size)
    return Card(
        expected=tuple(_expected(subject, responses, purpose)),
        tests=(*TESTS, *TWO_MESHES, NO_CURE),
        carries=carries,
        rule=rule,
        log=_log(subject, k, purpose),
    )


def _readings(subject: Subject, k: float, purpose: str) -> tuple[Response, ...]:
    """What the joint does over the band of the face's own stiffness, or at the one value that only has to stick."""
    face = subject.stiffness
    if purpose == STICK or face is None:
        return (response(subject, constant(k)),) * 3
    return tuple(response(subject, face, reading) for reading in (LOW, TYPICAL, HIGH))


def _expected(subject: Subject, responses: tuple[Response, ...], purpose: str) -> list[Expected]:
    """The band of each quantity over the readings; the contact force over the clamps, the gross slip load is one number."""
    low, high = (float(v.sum()) for v in subject.clamps)
    motions = [r.motions for r in responses]
    gross = subject.gross * subject.force
    rows = [Expected("contact force", low, low, high, "force")]
    for name, kind, attribute in (
        ("stiffness", "stiffness", "stiffness"),
        ("first slip", "force", "first_slip_load"),
    ):
        if name in WITHOUT[purpose]:
            continue
        found = [getattr(m, attribute) for m in motions]
        if all(v is not None for v in found):
            rows.append(Expected(name, min(found), found[TYPICAL], max(found), kind))
    if np.isfinite(gross) and gross > 0:
        rows.append(Expected("gross slip", gross, gross, gross, "force"))
    energies = [m.energy_per_cycle for m in motions if m.energy_per_cycle is not None]
    if len(energies) == len(motions):
        rows.append(Expected("energy of a cycle", min(energies), energies[TYPICAL], max(energies), "energy"))
    return rows


def contact_points(plates: tuple[Plate, ...], size: tuple[float, float] | None) -> tuple[str, str]:
    """Which of the two plates at the face carries the contact points, checked against the other, and the rule that decided.

    The softer part checks against the stiffer one; of like materials the thinner one; of like parts the finer mesh (practice). Stiffness
    means the part here, not the material alone.
    """
    upper, lower = plates[:2]
    names = [
        plate.name or place for plate, place in zip((upper, lower), ("the upper plate", "the lower plate"), strict=True)
    ]
    E = [plate.material.youngs_modulus for plate in (upper, lower) if plate.material is not None]
    rules = []
    if len(E) == 2:
        rules.append((E, "the softer material checks against the stiffer one"))
    rules.append(
        ([upper.thickness, lower.thickness], "of like materials the thinner part checks against the thicker one")
    )
    if size is not None:
        rules.append((list(size), "of like parts the finer mesh checks against the coarser one"))
    for measure, rule in rules:
        if max(measure) > ALIKE * min(measure):
            return names[measure.index(min(measure))], rule
    return names[0], "both parts are alike: either may carry the points"


def _log(subject: Subject, k: float, purpose: str) -> str:
    """One line for the log of a model: what was set, from what."""
    joint = subject.joint
    traction = subject.friction * subject.pressures.weighted
    name = joint.title or joint.file
    slope = None if purpose == STICK or subject.stiffness is None else subject.stiffness.slope
    follows = "" if slope is None else f" (following the pressure: {slope[TYPICAL]:.4g} /mm times it)"
    return (
        f"{name}, {joint.digest[:12]}: contact stiffness {k:.4g} N/mm^3 along the face{follows}, for {purpose}; "
        f"elastic slip {1e3 * traction / k:.3g} um at {traction:.3g} MPa; friction {subject.friction:g}; slip {slip.__version__}"
    )
