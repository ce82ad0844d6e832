"""One contact stiffness in all its forms: areas of nodes against meshes that are integrated here, the rest by hand."""

from fractions import Fraction
from math import inf, nan

import numpy as np
import pytest

from slip.joint.elements import FORMS
from slip.stiffness import forms
from slip.stiffness.forms import as_per_area, node_areas


def test_check_29_forms(validate):
    """12000 N/mm3 in the units of the trade; square mesh of 4 mm, 12 MPa, 80 GPa."""
    k_t, said = 12000.0, forms.in_units(12000.0, "stiffness per area")
    inside = forms.per_node(k_t, node_areas(4.0).inside)
    ratio = forms.element_ratio(k_t, forms.element_stiffness(80e3, 4.0))
    for what, printed, got, unit in (
        ("12000 N/mm3, SI", "1.2e13", said["N/m^3"], "N/m3"),
        ("12000 N/mm3, US", "4.42e7", said["lbf/in^3"], "lbf/in3"),
        ("node inside a square mesh of 4 mm", "192", inside / 1e3, "kN/mm"),
        ("elastic slip at 12 MPa", "1.0", forms.elastic_slip(12.0, k_t) * 1e3, "um"),
        ("ratio to G/h, 80 GPa and 4 mm", "0.60", ratio, ""),
    ):
        validate(29, f"forms of one stiffness: {what}", "statics", "derived", printed, got, unit=unit)


# Areas of nodes: shape functions from their corners, integrated by Gauss points, summed over a mesh that is numbered here

GAUSS = np.polynomial.legendre.leggauss(5)
CORNERS = [(-1, -1), (1, -1), (1, 1), (-1, 1)]
MIDSIDES = [(0, -1), (1, 0), (0, 1), (-1, 0)]
# Nodes of the parent element and exponents of the polynomial that runs through them.
LINEAR, FULL = [(0, 0), (1, 0), (0, 1)], [(i, j) for i in range(3) for j in range(3)]
QUADS = {
    4: (CORNERS, [(0, 0), (1, 0), (0, 1), (1, 1)]),
    8: (CORNERS + MIDSIDES, [e for e in FULL if e != (2, 2)]),
    9: ([*CORNERS, *MIDSIDES, (0, 0)], FULL),
}
CUT = [(0, 0), (1, 0), (0, 1)]
TRIANGLES = {
    3: (CUT, LINEAR),
    6: ([*CUT, (0.5, 0), (0.5, 0.5), (0, 0.5)], [*LINEAR, (2, 0), (1, 1), (0, 2)]),
}


def integrals(nodes, powers, points, weights):
    """Mean over the element of each shape function, and of its square."""
    vandermonde = np.array([[x**i * y**j for i, j in powers] for x, y in nodes])
    values = np.array([[x**i * y**j for i, j in powers] for x, y in points]) @ np.linalg.inv(vandermonde)
    return weights @ values / weights.sum(), weights @ values**2 / weights.sum()


def of_element(nodes):
    x, w = GAUSS
    grid, weights = [(a, b) for a in x for b in x], np.outer(w, w).ravel()
    if nodes in QUADS:
        return (*integrals(*QUADS[nodes], grid, weights), QUADS[nodes][0])
    # the square folded into the triangle 0 <= x, y; x + y <= 1
    folded = [((1 + a) / 2, (1 + b) * (1 - a) / 4) for a, b in grid]
    return (*integrals(*TRIANGLES[nodes], folded, weights * [(1 - a) / 8 for a, _ in grid]), TRIANGLES[nodes][0])


def mesh_areas(nodes, h_x, h_y, lumped, n=4):
    """Area of every node of n x n rectangles, keyed by its place in half elements."""
    means, squares, places = of_element(nodes)
    shares = squares / squares.sum() if lumped else means
    found = {}
    for i in range(n):
        for j in range(n):
            if nodes in QUADS:
                elements = [[(2 * i + 1 + x, 2 * j + 1 + y) for x, y in places]]
            else:  # cut from lower right to upper left
                elements = [[(2 * i + 2 * x, 2 * j + 2 * y) for x, y in places]]
                elements.append([(2 * i + 2 - 2 * x, 2 * j + 2 - 2 * y) for x, y in places])
            for element in elements:
                for place, share in zip(element, shares, strict=True):
                    found[place] = found.get(place, 0.0) + share * h_x * h_y / len(elements)
    return found


@pytest.mark.parametrize("lumped", [False, True])
@pytest.mark.parametrize("nodes", [3, 4, 6, 8, 9])
def test_areas_of_nodes_against_an_integrated_mesh(nodes, lumped):
    mesh = mesh_areas(nodes, 3.0, 5.0, lumped)
    order = 1 if nodes < 5 else 2
    got = node_areas(3.0, 5.0, order=order, nodes=nodes, lumped=lumped)
    places = {"inside": (4, 4), "edge": (4, 0), "corner": (0, 0), "corner_split": (8, 0)}
    places |= {"midside_inside": (3, 4), "midside_edge": (3, 0), "centre": (3, 3)}
    for name, place in places.items():
        here = getattr(got, name)
        if name == "centre" and nodes != 9:
            assert here is None  # in triangles it lies on the cut, a midside
        else:
            assert (0 if here is None else here) == pytest.approx(mesh.get(place, 0), rel=1e-12, abs=1e-12), name
    assert sum(mesh.values()) == pytest.approx(12 * 20)
    assert got.positive == (lumped or nodes not in (6, 8))


def test_areas_of_nodes_by_moments():
    """Weights that integrate 1 and x^2 over the square, and 1, x and x^2 over the triangle, in fractions by hand.

    Eight nodes: 4 c + 4 m = 1 and 4 c + 2 m = 1/3. Six nodes: 3 c + 3 m = 1; means of x and x^2 are 1/3 and 1/6, the nodes
    give c + m (2/2) and c + 2 m/4.
    """
    m = (1 - Fraction(1, 3)) / 2
    c = Fraction(1, 4) - m
    got = node_areas(1.0, order=2)
    assert (got.corner, got.midside_edge) == pytest.approx((float(c), float(m)))
    assert (got.inside, got.midside_inside) == pytest.approx((-1 / 3, 2 / 3))
    m = 2 * (Fraction(1, 3) - Fraction(1, 6))
    c = Fraction(1, 3) - m
    got = node_areas(1.0, order=2, nodes=6)
    assert (c, m) == (0, Fraction(1, 3))
    assert (got.inside, got.midside_inside, got.midside_edge) == pytest.approx((0, 1 / 3, 1 / 6))


def test_areas_of_nodes_in_two_dimensions():
    """Halves at the ends; Simpson's rule for the second order: 1/6, 4/6, 1/6."""
    got = node_areas(4.0, dimension=2, width=10.0)
    assert (got.inside, got.edge, got.corner, got.centre) == (40, 20, 20, None)
    got = node_areas(4.0, order=2, dimension=2, width=10.0)
    assert (got.inside, got.edge, got.centre) == pytest.approx((40 / 3, 40 / 6, 160 / 6))


def test_areas_of_square_faces_by_hand():
    got = node_areas(4.0)
    assert (got.inside, got.edge, got.corner, got.midside_inside) == (16, 8, 4, None)
    assert node_areas(4.0, 4.0, nodes=3).corner_split == pytest.approx(16 / 3)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ({"h_x": 0.0}, "edge must be above 0, found 0"),
        ({"h_x": nan}, "above 0, found nan"),
        ({"h_x": 4.0, "dimension": 2}, "width of the model in two dimensions is not known"),
        ({"h_x": 4.0, "nodes": 8}, "no face of order 1 in 3 dimensions has 8 nodes"),
        ({"h_x": 4.0, "order": 2, "nodes": 4}, "no face of order 2"),
        ({"h_x": 4.0, "order": 3, "nodes": 9}, "no face of order 3"),
        ({"h_x": 4.0, "dimension": 1}, "in 1 dimensions"),
    ],
)
def test_faces_that_cannot_be(arguments, words):
    with pytest.raises(ValueError, match=words):
        node_areas(**arguments)


# The other forms, by hand


def test_motion_forms_by_hand():
    """0.2 of 60 MPa are 12 MPa: 3 um at 4000 N/mm3, 1/2000 of an edge of 6 mm; at 5 MPa of service 1.25 um."""
    assert forms.elastic_slip(5.0, 4000.0) == pytest.approx(1.25e-3)
    assert forms.elastic_slip_at_limit(0.2, 60.0, 4000.0) == pytest.approx(3e-3)
    assert forms.edge_fraction(3e-3, 6.0) == pytest.approx(1 / 2000)
    assert forms.from_elastic_slip(0.2, 60.0, 3e-3) == pytest.approx(4000)
    assert forms.from_edge_fraction(0.2, 60.0, 1 / 2000, 6.0) == pytest.approx(4000)
    assert forms.from_node(64e3, 16.0) == pytest.approx(4000)


def test_ratios_by_hand():
    """Two like elements behind the face are half as stiff as one: the ratio doubles."""
    one = forms.element_stiffness(80e3, 4.0)
    both = forms.in_series(one, one)
    assert (one, both) == pytest.approx((20e3, 10e3))
    assert forms.element_ratio(12000.0, both) == pytest.approx(1.2)
    assert forms.in_series(20e3, 5e3) == pytest.approx(4e3)
    assert forms.normal_fraction(8000.0, 10000.0) == pytest.approx(0.8)
    assert forms.from_normal(0.8, 10000.0) == pytest.approx(8000)
    assert forms.joint_spring(3.1e5) == 3.1e5


def test_series_from_a_stack_of_springs():
    """Two layers under a traction of 1 MPa: compliances add."""
    stiff = np.array([[7.0, -7.0], [-7.0, 7.0 + 11.0]])
    assert forms.in_series(7.0, 11.0) == pytest.approx(1 / np.linalg.solve(stiff, [1.0, 0.0])[0])


def test_units_of_a_spring():
    """192000 N/mm: 1.92e8 N/m; an inch is 25.4 mm and a pound-force 4.4482216152605 N."""
    assert forms.in_units(192e3, "stiffness") == pytest.approx(
        {"N/mm": 192e3, "N/m": 1.92e8, "lbf/in": 192e3 * 25.4 / 4.4482216152605}
    )


def test_arrays_broadcast():
    got = forms.from_edge_fraction(0.2, np.array([30.0, 60.0]), 1 / 2000, np.array([[6.0], [3.0]]))
    assert got == pytest.approx(np.array([[2000.0, 4000.0], [4000.0, 8000.0]]))


# The present value of a model

KNOWN = {"limit_traction": 12.0, "element_size": (6.0, 8.0), "normal": 5000.0}
SAME = {"per_area": 4000.0, "per_node": 144e3, "elastic_slip": 3e-3, "edge_fraction": 5e-4, "of_normal": 0.8}


@pytest.mark.parametrize("form", FORMS)
def test_present_value_by_hand(form):
    """4000 N/mm3 in each form: 36 mm2 at a node of the finer mesh; 12 MPa move 3 um, 1/2000 of 6 mm."""
    assert as_per_area(form, SAME[form], **KNOWN) == pytest.approx(4000)


def test_present_value_in_two_dimensions():
    known = {"element_size": 6.0, "dimension": 2, "width": 10.0}
    assert as_per_area("per_node", 240e3, **known) == pytest.approx(4000)


@pytest.mark.parametrize(
    ("form", "value", "known", "words"),
    [
        ("per_area", 0.0, {}, "the present value must be above 0, found 0"),
        ("per_area", inf, {}, "the present value must be above 0, found inf"),
        ("per_node", 1e5, {}, "the element's edge in the face is not known"),
        ("per_node", 1e5, {"element_size": 6.0, "order": 2}, "state the value per area"),
        ("per_node", 1e5, {"element_size": 6.0, "dimension": 2}, "the width of the model"),
        ("elastic_slip", 1e-3, {}, "the limit traction mu p is not known"),
        ("elastic_slip", 1e-3, {"limit_traction": 0.0}, "the limit traction mu p must be above 0, found 0"),
        ("edge_fraction", 1e-3, {"limit_traction": 12.0}, "the element's edge in the face is not known"),
        ("edge_fraction", 1e-3, {"element_size": 6.0}, "the limit traction mu p is not known"),
        ("of_normal", 0.8, {}, "normal stiffness is not known"),
        ("per_bolt", 1.0, {}, "found 'per_bolt'"),
    ],
)
def test_present_value_that_cannot_be_told(form, value, known, words):
    with pytest.raises(ValueError, match=words):
        as_per_area(form, value, **known)
