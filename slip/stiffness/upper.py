"""How stiff the contact of this model may be: by rounding, by stick and slip in turn, by the explicit time step."""

from __future__ import annotations

from slip.base.records import record
from slip.joint.elements import Elements
from slip.stiffness.bounds import (
    chatter_stiffness,
    conditioning,
    slip_per_step,
    step_ratio,
    stiffness_at_ratio,
)
from slip.stiffness.subject import Subject
from slip.stiffness.window import Response

UNKNOWNS = 1e6  # of a model whose file does not say them (practice)
RATIO = 0.9  # part of the time step without contact that is worth keeping
PRECISIONS = ("double", "single")


@record
class Upper:
    """One upper bound of the value per area [N/mm^3]: what sets it; the value, None where the file does not tell enough; words."""

    name: str
    value: float | None
    said: str


def upper_bounds(subject: Subject, elements: Elements, found: Response, k: float) -> tuple[Upper, ...]:
    """The bounds for a model of this joint; found: what the joint does at the recommended value k [N/mm^3]."""
    softest, depth = _behind(subject, elements)
    bounds = []
    unknowns = elements.unknowns or UNKNOWNS
    assumed = "" if elements.unknowns else ", taken"
    for precision in PRECISIONS if elements.precision == "single" else PRECISIONS[:1]:
        name = f"rounding, {precision} precision"
        if softest is None or depth is None:
            bounds.append(Upper(name, None, "give element_depth, or element_size, and the plates' materials"))
            continue
        rule = conditioning(softest, depth, unknowns, precision)
        said = f"{unknowns:.3g} unknowns{assumed}; least error as a whole at {rule.best:.3g} N/mm^3"
        bounds.append(Upper(name, rule.largest, said))
    bounds.append(_chatter(subject, elements, found))
    if elements.scheme == "explicit":
        bounds.append(_explicit(softest, depth, k))
    return tuple(bounds)


def _behind(subject: Subject, elements: Elements) -> tuple[float | None, float | None]:
    """Modulus [MPa] and depth [mm] of the softer element behind the face; the depth is the edge along the face where it is not given."""
    moduli = [plate.material.youngs_modulus for plate in subject.joint.plates[:2] if plate.material is not None]
    depth = elements.element_depth or (max(elements.element_size) if elements.element_size else None)
    return (min(moduli) if moduli else None), depth


def _chatter(subject: Subject, elements: Elements, found: Response) -> Upper:
    """Where one load step slips by more than the contact can give elastically."""
    name = "stick and slip in turn"
    if elements.steps_per_cycle is None:
        return Upper(name, None, "give steps_per_cycle")
    slip = found.motions.true_slip
    slipping = max(1.0 - found.motions.first_slip_factor, 1.0 / elements.steps_per_cycle)
    if slip <= 0:
        return Upper(name, None, "nothing slips at this load")
    each = float(slip_per_step(slip, elements.steps_per_cycle, slipping))
    value = float(chatter_stiffness(subject.friction, subject.pressures.weighted, each))
    steps = f"{elements.steps_per_cycle} load steps a cycle slip by {1e3 * each:.3g} um each"
    said = f"{steps}; only where a step begins with the status of the one before"
    return Upper(name, value, said)


def _explicit(E: float | None, depth: float | None, k: float) -> Upper:
    """Where the contact takes a tenth off the stable time step."""
    name = "explicit time step"
    if E is None or depth is None:
        return Upper(name, None, "give element_depth and the plates' materials")
    value = float(stiffness_at_ratio(RATIO, depth, E))
    return Upper(
        name, value, f"leaves {RATIO:.0%} of the step; {k:.3g} N/mm^3 leaves {float(step_ratio(k, depth, E)):.0%}"
    )
