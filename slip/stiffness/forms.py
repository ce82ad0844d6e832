"""One tangential contact stiffness in every form in which a finite-element model may ask for it, and back.

The value itself is k_t, force per area and motion [N/mm^3]: what stands between the two faces, without any of the bodies.
All functions take numbers or arrays that broadcast, above 0. Pressures and moduli in MPa, lengths in mm, forces in N.
"""

from __future__ import annotations

from math import isfinite
from typing import Any

from slip.base.formulas import formula
from slip.base.records import record
from slip.base.units import parse_unit

Value = Any  # a number, or an array of numbers that broadcasts with the others

STATICS: dict[str, Any] = {"source": "statics", "basis": "derived"}
UNITS_OF = {
    "stiffness per area": ("N/mm^3", "N/m^3", "lbf/in^3"),
    "stiffness": ("N/mm", "N/m", "lbf/in"),
}


# Per node


@record
class NodeAreas:
    """Area [mm^2] for which a node of a regular face mesh stands, elements of one size.

    inside, edge, corner: a corner node of elements, inside the face, at its edge, at its corner. corner_split: at a corner of
    the face that two triangles share; as corner for other faces. midside_inside, midside_edge, centre: nodes on the elements'
    edges and in their middle; None where the face has none. positive: every area is above 0, so that each may hold a spring.
    """

    inside: float
    edge: float
    corner: float
    corner_split: float
    midside_inside: float | None
    midside_edge: float | None
    centre: float | None

    @property
    def positive(self) -> bool:
        """Whether every area is above 0, so that each may hold a spring."""
        areas = (self.inside, self.midside_inside, self.centre)
        return all(area > 0 for area in areas if area is not None)


@record
class Face:
    """Shares of an element's face at a corner, a midside and the centre, and how many faces make up one h_x h_y."""

    corner: float
    midside: float | None
    centre: float | None
    triangles: bool = False


# Work-equivalent: integral of the shape function over the element's area. Keys: dimension of the model, nodes of the face.
CONSISTENT = {
    (2, 2): Face(1 / 2, None, None),
    (2, 3): Face(1 / 6, None, 2 / 3),
    (3, 3): Face(1 / 3, None, None, triangles=True),
    (3, 4): Face(1 / 4, None, None),
    (3, 6): Face(0.0, 1 / 3, None, triangles=True),
    (3, 8): Face(-1 / 12, 1 / 3, None),
    (3, 9): Face(1 / 36, 1 / 9, 4 / 9),
}
# In proportion to the integral of the shape function squared: positive, same sum. Other faces have it equal to the above.
LUMPED = CONSISTENT | {
    (3, 6): Face(1 / 19, 16 / 57, None, triangles=True),
    (3, 8): Face(3 / 76, 4 / 19, None),
}
FIRST = {(1, 2): 2, (2, 2): 3, (1, 3): 4, (2, 3): 8}  # order, dimension: nodes that a face has when it is not said


@formula("A_i", "w*n*A_e", unit="mm^2", **STATICS, valid="n like elements meet in the node")
def node_area(w: Value, n: Value, A_e: Value) -> Value:
    """Area [mm^2] of a node in which n elements of area A_e [mm^2] meet, w the share of each (statics, derived)."""
    return w * n * A_e


def node_areas(
    h_x: float,
    h_y: float | None = None,
    *,
    order: int = 1,
    dimension: int = 3,
    width: float | None = None,
    nodes: int | None = None,
    lumped: bool = False,
) -> NodeAreas:
    """Areas of the nodes of a regular mesh of rectangles h_x by h_y [mm], each cut in two where `nodes` names triangles.

    h_y: as h_x when not given. order: of the elements, 1 or 2. dimension 2: h_x along the face, width [mm] instead of h_y.
    nodes: of one element's face; 4 or 3 of the first order, 8, 9 or 6 of the second (4 and 8 when not given); in two
    dimensions 2 and 3. lumped: positive shares instead of the work-equivalent ones.

    Work-equivalent shares give an even traction its true nodal forces: an eight-node face has negative shares at its corners,
    a six-node face none. Springs on such nodes push the wrong way, or are not there: let the contact act at integration
    points, with the value per area, or take the lumped shares. Those keep the total force, not an even traction.

    ValueError for a size that is not above 0, a width that is missing, or nodes that such a face cannot have. Sources
    statics, derived; lumped shares hinton1976, derived.
    """
    nodes = FIRST.get((order, dimension)) if nodes is None else nodes
    face = (LUMPED if lumped else CONSISTENT).get((dimension, nodes or 0))
    first = {2: (2,), 3: (3, 4)}
    if order not in (1, 2) or face is None or (order == 1) != (nodes in first[dimension]):
        raise ValueError(f"no face of order {order} in {dimension} dimensions has {nodes} nodes")
    if dimension == 2:
        area = above_zero(h_x, "the element's edge") * above_zero(width, "the width of the model in two dimensions")
        inside, edge, corner, split = 2, 1, 1, 1  # elements that meet; a face's edge is its end
    else:
        area = above_zero(h_x, "the element's edge") * above_zero(h_x if h_y is None else h_y, "the element's edge")
        area = area / 2 if face.triangles else area
        inside, edge, corner, split = (6, 3, 1, 2) if face.triangles else (4, 2, 1, 1)

    def stands_for(share: float | None, elements: int) -> float | None:
        return None if share is None else float(node_area(share, elements, area))

    return NodeAreas(
        inside=float(node_area(face.corner, inside, area)),
        edge=float(node_area(face.corner, edge, area)),
        corner=float(node_area(face.corner, corner, area)),
        corner_split=float(node_area(face.corner, split, area)),
        midside_inside=stands_for(face.midside, 2),
        midside_edge=stands_for(face.midside, 1),
        centre=stands_for(face.centre, 1),
    )


@formula("k_node", "k_t*A_i", unit="N/mm", **STATICS, valid="spring from node to face")
def per_node(k_t: Value, A_i: Value) -> Value:
    """Stiffness [N/mm] of the spring at a node that stands for the area A_i [mm^2] (statics, derived)."""
    return k_t * A_i


@formula("k_t", "k_node/A_i", unit="N/mm^3", **STATICS, valid="A_i > 0")
def from_node(k_node: Value, A_i: Value) -> Value:
    """Value per area [N/mm^3] of a spring k_node [N/mm] at a node of area A_i [mm^2] (statics, derived)."""
    return k_node / A_i


# As a motion


@formula("g", "tau/k_t", unit="mm", **STATICS, valid="stuck: tau < mu*p")
def elastic_slip(tau: Value, k_t: Value) -> Value:
    """Motion [mm] of the faces at the traction tau [MPa] that comes back when it goes (statics, derived)."""
    return tau / k_t


@formula("g_limit", "mu*p/k_t", unit="mm", **STATICS, valid="the motion at which true slip begins")
def elastic_slip_at_limit(mu: Value, p: Value, k_t: Value) -> Value:
    """Motion [mm] of the faces at the limit traction, the largest that comes back (statics, derived)."""
    return mu * p / k_t


@formula("k_t", "mu*p/g_limit", unit="N/mm^3", **STATICS, valid="at the pressure p only")
def from_elastic_slip(mu: Value, p: Value, g_limit: Value) -> Value:
    """Value per area [N/mm^3] of a contact told by its elastic slip at the limit [mm] (statics, derived)."""
    return mu * p / g_limit


@formula("f", "g/h", unit="1", **STATICS, valid="h along the face")
def edge_fraction(g: Value, h: Value) -> Value:
    """An elastic slip g [mm] against the element's edge h [mm] in the face (statics, derived)."""
    return g / h


@formula("k_t", "mu*p/(f*h)", unit="N/mm^3", **STATICS, valid="f: elastic slip at the limit over the edge h")
def from_edge_fraction(mu: Value, p: Value, f: Value, h: Value) -> Value:
    """Value per area [N/mm^3] of a contact told by its elastic slip at the limit over the edge h [mm] (statics, derived)."""
    return mu * p / (f * h)


# Against other stiffnesses


@formula("k_e", "M/h", unit="N/mm^3", **STATICS, valid="one element, h normal to the face")
def element_stiffness(M: Value, h: Value) -> Value:
    """Stiffness per area [N/mm^3] of the element behind the face, M its shear modulus G or its modulus E (statics, derived)."""
    return M / h


@formula("k_e", "1/(1/k_1 + 1/k_2)", unit="N/mm^3", **STATICS, valid="one behind the other")
def in_series(k_1: Value, k_2: Value) -> Value:
    """Stiffness per area [N/mm^3] of two layers one behind the other; two like ones have half of it (statics, derived)."""
    return 1 / (1 / k_1 + 1 / k_2)


@formula("r", "k_t/k_e", unit="1", **STATICS, valid="k_e of one side, or of both in series")
def element_ratio(k_t: Value, k_e: Value) -> Value:
    """The value against the element behind the face (statics, derived)."""
    return k_t / k_e


@formula("f_n", "k_t/k_n", unit="1", **STATICS, valid="k_n of the same contact")
def normal_fraction(k_t: Value, k_n: Value) -> Value:
    """The value as a part of the contact's normal stiffness per area k_n [N/mm^3] (statics, derived)."""
    return k_t / k_n


@formula("k_t", "f_n*k_n", unit="N/mm^3", **STATICS, valid="k_n of the same contact")
def from_normal(f_n: Value, k_n: Value) -> Value:
    """Value per area [N/mm^3] from the part f_n of the normal stiffness per area k_n [N/mm^3] (statics, derived)."""
    return f_n * k_n


@formula("K_joint", "K_stuck", unit="N/mm", **STATICS, valid="a single spring instead of the joint, bulk included")
def joint_spring(K_stuck: Value) -> Value:
    """Stiffness [N/mm] of one spring that stands for the whole joint: load over motion between its ends while it sticks.

    The plates are in it, unlike in k_t: put it between rigid ends only, where no mesh of the plates adds its own
    compliance a second time (statics, derived).
    """
    return K_stuck


# Units, and the present value of a model


def in_units(value: float, kind: str) -> dict[str, float]:
    """A stiffness per area [N/mm^3] or a stiffness [N/mm] in SI and US units: unit -> number. kind: a key of UNITS_OF."""
    return {unit: value / parse_unit(unit)[0] for unit in UNITS_OF[kind]}


def as_per_area(
    form: str,
    value: float,
    *,
    limit_traction: float | None = None,
    element_size: float | tuple[float, float] | None = None,
    normal: float | None = None,
    order: int = 1,
    dimension: int = 3,
    width: float | None = None,
) -> float:
    """Value per area [N/mm^3] of a stiffness that a model states in one of the forms of joint/elements.py.

    form, value: per_area [N/mm^3]; per_node [N/mm] of a node inside the face; elastic_slip [mm] at the limit traction;
    edge_fraction, that slip over the element's edge; of_normal, part of the normal stiffness. limit_traction: mu p [MPa] at
    the pressure for which the answer is wanted. element_size: edge [mm] in the face, or that of both bodies, of which the
    smaller counts, since the finer mesh carries the contact points. normal: normal stiffness [N/mm^3]. width [mm] of a
    model in two dimensions.

    ValueError says what is not known, or what is not above 0.
    """
    above_zero(value, "the present value")
    if form == "per_area":
        return value
    if form == "of_normal":
        return float(from_normal(value, above_zero(normal, "the contact's normal stiffness")))
    if form == "elastic_slip":
        return float(from_elastic_slip(1.0, above_zero(limit_traction, "the limit traction mu p"), value))
    if form not in ("per_node", "edge_fraction"):
        raise ValueError(
            f"a form per_area, per_node, elastic_slip, edge_fraction or of_normal is expected, found {form!r}"
        )
    size = min(element_size) if isinstance(element_size, tuple) else element_size
    edge = above_zero(size, "the element's edge in the face")
    if form == "edge_fraction":
        return float(from_edge_fraction(1.0, above_zero(limit_traction, "the limit traction mu p"), value, edge))
    if order != 1:
        raise ValueError("a value per node of second-order faces differs from node to node: state the value per area")
    return float(from_node(value, node_areas(edge, order=order, dimension=dimension, width=width).inside))


def above_zero(value: float | None, what: str) -> float:
    """The value; ValueError where it is not known, or not a finite number above 0."""
    if value is None:
        raise ValueError(f"{what} is not known and must be given")
    if not (value > 0 and isfinite(value)):
        raise ValueError(f"{what} must be above 0, found {value:g}")
    return value
