"""What the file says of a finite-element model whose contact is to be set or judged."""

from __future__ import annotations

from slip.base.records import record

FORMS = ("per_area", "per_node", "elastic_slip", "edge_fraction", "of_normal")


@record
class Elements:
    """[finite_elements], in inside units; None where the file is silent and nothing may be taken for it.

    purpose: "stick" or "interface", None for both. present: form, one of FORMS, and value of the tangential stiffness in use:
    per_area [N/mm^3], per_node of a node inside the face [N/mm], elastic_slip at the limit traction [mm], edge_fraction: that slip
    over the element's edge, of_normal: part of the normal stiffness. present_normal [N/mm^3]. friction: of the model. element_size:
    edge in the face of the upper and the lower body [mm]; element_depth: edge normal to the face [mm]; element_order 1 or 2;
    dimension 2 or 3, width [mm] of a model in two dimensions. unknowns: of the model. steps_per_cycle: load steps of a cycle.
    scheme: "implicit" or "explicit"; precision: "double" or "single".
    """

    purpose: str | None
    present: tuple[str, float] | None
    present_normal: float | None
    friction: float | None
    element_size: tuple[float, float] | None
    element_depth: float | None
    element_order: int
    dimension: int
    width: float | None
    unknowns: float | None
    steps_per_cycle: int | None
    scheme: str
    precision: str
