"""One value of the contact stiffness in every form, each with what it means in neutral words."""

from __future__ import annotations

from slip.base.records import record
from slip.friction.closed.bodies import shear_modulus
from slip.joint.elements import Elements
from slip.stiffness.forms import (
    edge_fraction,
    elastic_slip,
    elastic_slip_at_limit,
    element_ratio,
    element_stiffness,
    in_series,
    joint_spring,
    node_areas,
    normal_fraction,
    per_node,
)
from slip.stiffness.subject import Subject
from slip.stiffness.window import Response


@record
class Form:
    """A form of the value: what it means, the number in inside units, its kind for units ("" for none), a remark."""

    meaning: str
    value: float
    kind: str
    remark: str = ""


def forms(subject: Subject, elements: Elements, k: float, normal: float | None, found: Response) -> tuple[Form, ...]:
    """Every form of a value per area k [N/mm^3] that the file tells enough for.

    normal: normal stiffness per area [N/mm^3], None where it is not known; found: what the joint does at k.
    """
    listed = [
        Form("force per area and motion", k, "stiffness per area", "between the faces, without any of the bodies")
    ]
    p, mu = subject.pressures.weighted, subject.friction
    size = min(elements.element_size) if elements.element_size else None
    if size is not None:
        listed += _per_node(elements, k, size)
    limit = float(elastic_slip_at_limit(mu, p, k))
    service = float(elastic_slip(subject.force / subject.faces / subject.pressures.area / subject.clamps.shape[1], k))
    listed.append(Form("elastic slip under the load, mean traction", service, "length"))
    listed.append(
        Form("elastic slip at the limit traction", limit, "length", "depends on the pressure where k_t is constant")
    )
    if size is not None:
        listed.append(
            Form("the latter over the element's edge", float(edge_fraction(limit, size)), "", "only for this mesh")
        )
    listed += _against_elements(subject, elements, k)
    if normal is not None:
        listed.append(Form("part of the normal stiffness", float(normal_fraction(k, normal)), ""))
    if found.motions.stiffness is not None:
        remark = "bulk of the plates included: never beside a mesh of them"
        listed.append(
            Form("one spring for the whole joint", float(joint_spring(found.motions.stiffness)), "stiffness", remark)
        )
    return tuple(listed)


def _per_node(elements: Elements, k: float, size: float) -> list[Form]:
    """The value at nodes inside the face, at its edge and at its corner, of the finer mesh, which carries the contact points."""
    if elements.dimension == 2 and elements.width is None:
        return []
    nodes = node_areas(size, order=elements.element_order, dimension=elements.dimension, width=elements.width)
    remark = "" if nodes.positive else "work-equivalent; negative or none: let the contact act at integration points"
    places = [
        ("inside the face", nodes.inside, remark),
        ("at its edge", nodes.edge, remark),
        ("at its corner", nodes.corner, remark),
    ]
    if elements.dimension == 2:
        places = [("inside the face", nodes.inside, remark), ("at its end", nodes.corner, remark)]
    if nodes.midside_inside is not None:
        places.append(("on an element's edge inside the face", nodes.midside_inside, ""))
    return [Form(f"per node {place}", float(per_node(k, area)), "stiffness", said) for place, area, said in places]


def _against_elements(subject: Subject, elements: Elements, k: float) -> list[Form]:
    """The value against the elements behind the face: each side, and both in series."""
    depth = elements.element_depth or (min(elements.element_size) if elements.element_size else None)
    materials = [plate.material for plate in subject.joint.plates[:2] if plate.material is not None]
    if depth is None or len(materials) < 2:
        return []
    found = []
    for name, moduli in (
        ("G/h", [float(shear_modulus(m.youngs_modulus, m.poissons_ratio)) for m in materials]),
        ("E/h", [m.youngs_modulus for m in materials]),
    ):
        sides = [float(element_stiffness(modulus, depth)) for modulus in moduli]
        softer = float(element_ratio(k, min(sides)))
        both = float(element_ratio(k, float(in_series(*sides))))
        found.append(Form(f"over {name} of the softer side", softer, ""))
        found.append(Form(f"over {name} of both sides in series", both, "", "two like sides halve it"))
    return found
