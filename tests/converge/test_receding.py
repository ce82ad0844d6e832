"""Contact of plates round a bolt against an independent finite-element table, against exact states, and against its own finer mesh.

Tapped joints and stacks against elements of another make: test_receding_elements.py.
"""

import numpy as np
import pytest

from slip.base.tables import number, table
from slip.pressure import receding
from slip.pressure.receding import WEDGE, Engagement, contact, contacts
from slip.pressure.rings import Body, Ring, edge_loads

STEEL, NU = 206000.0, 0.3
HOLE, BEARING = 5.5, 8.0  # mm, of the table


def mean_pressure(found, hole=HOLE):
    """Pressure of a unit force spread evenly over the contact."""
    return 1 / (np.pi * (found.contact_radius**2 - hole**2))


def force(found):
    """Total force by Simpson's rule on each linear piece of the pressure times the linear radius: exact."""
    r, p = found.radii, found.pressure
    middle = (r[1:] + r[:-1]) / 2 * (p[1:] + p[:-1]) / 2
    return np.sum(2 * np.pi * np.diff(r) / 6 * (r[:-1] * p[:-1] + 4 * middle + r[1:] * p[1:]))


@pytest.mark.parametrize("row", table("receding_contact"), ids=lambda row: row["thickness/bearing_radius"])
def test_equal_plates_against_the_table(row):
    """Equal plates, hole radius 5.5, bearing radius 8 (derived: an independent axisymmetric finite-element model, printed to two digits).

    Contact radius within 0.03 of a thickness; pressure at the hole over the mean within 3.5 %.
    """
    t = number(row, "thickness/bearing_radius") * BEARING
    found = contact(Body(t, STEEL, NU), Body(t, STEEL, NU), HOLE, BEARING)
    assert found.contact_radius == pytest.approx(BEARING + number(row, "c") * t, abs=0.03 * t)
    assert found.pressure[0] / mean_pressure(found) == pytest.approx(number(row, "p_hole/p_mean"), rel=0.035)


@pytest.mark.parametrize(("t", "within"), [(2.5, 0.08), (10, 0.04), (20, 0.04), (30, 0.06)])
def test_shape_against_the_table(t, within):
    """Pressure shape of t = 10 to 20; the source says within 6 % at 2.5 and 4 % at 30 (of the pressure at the hole)."""
    found = contact(Body(t, STEEL, NU), Body(t, STEEL, NU), HOLE, BEARING)
    x = (found.radii - HOLE) / (found.contact_radius - HOLE)
    rows = [row for row in table("pressure_shape") if number(row, "x") > 0]
    shape = np.interp([number(row, "x") for row in rows], x, found.pressure / found.pressure[0])
    assert shape == pytest.approx([number(row, "p/p_hole") for row in rows], abs=within)


def test_finer_mesh_changes_little(monkeypatch):
    """Twice the elements every way: contact radius moves by less than 1.5 % of a thickness, friction radius by less than 0.5 %."""
    plates = Body(20, 110000, 0.26), Body(30, STEEL, NU)
    coarse = contact(*plates, 8.75, 11.245)
    for name in ("ACROSS", "NEAR", "FAR", "DEEP"):
        monkeypatch.setattr(receding, name, 2 * getattr(receding, name))
    fine = contact(*plates, 8.75, 11.245)
    assert coarse.contact_radius == pytest.approx(fine.contact_radius, abs=0.015 * 20)
    assert friction_radius(coarse) == pytest.approx(friction_radius(fine), rel=0.005)


def friction_radius(found):
    r = np.linspace(found.radii[0], found.contact_radius, 4001)
    p = np.interp(r, found.radii, found.pressure)
    return np.trapezoid(p * r**2, r) / np.trapezoid(p * r, r)


def test_force_is_one_and_pressure_never_pulls():
    found = contact(Body(6, 71000, 0.33), Body(25, STEEL, NU), 6.75, 9.0)
    assert force(found) == pytest.approx(1, rel=5e-3)  # the last cell is cut where the pressure, carried on, ends
    assert (found.pressure >= 0).all()


def test_swapped_plates_press_alike():
    one = contact(Body(6, 71000, 0.33), Body(25, STEEL, NU), 6.75, 9.0)
    other = contact(Body(25, STEEL, NU), Body(6, 71000, 0.33), 6.75, 9.0)
    assert other.contact_radius == pytest.approx(one.contact_radius, rel=1e-9)
    assert other.pressure == pytest.approx(one.pressure, rel=1e-6, abs=1e-9 * one.pressure.max())


def test_scales_with_size_and_not_with_modulus():
    """All lengths doubled: radii double, pressure falls to a quarter; both moduli alike: nothing changes."""
    one = contact(Body(10, STEEL, NU), Body(14, STEEL, NU), 5, 8)
    large = contact(Body(20, 7e4, NU), Body(28, 7e4, NU), 10, 16)
    assert large.radii == pytest.approx(2 * one.radii, rel=1e-9)
    assert large.pressure == pytest.approx(one.pressure / 4, rel=1e-6, abs=1e-12)


def test_thicker_plates_spread_further():
    radii = [contact(Body(t, STEEL, NU), Body(t, STEEL, NU), HOLE, BEARING).contact_radius for t in (3, 6, 12, 24)]
    assert (np.diff(radii) > 0.5).all()


def test_ring_elements_hold_an_even_squeeze():
    """A ring squeezed evenly along its axis between frictionless ends: quadratic elements are exact, the work is F^2 t/(E A)."""
    radii, heights = np.linspace(4, 9, 7), np.linspace(0, 5, 5)
    ring = Ring(Body(5, STEEL, NU), radii, heights)
    loads = np.zeros((ring.size, 1))
    loads[ring.top, 0], loads[ring.bottom, 0] = edge_loads(radii, radii), -edge_loads(radii, radii)
    assert ring.work(loads)[0, 0] == pytest.approx(5 / (STEEL * np.pi * (9**2 - 4**2)), rel=1e-9)


# Tapped joints: the thread of the last plate pulls on the wall of its hole


THREAD = Engagement(5.0, 10.0)


def tapped(upper, lower, thread=THREAD):
    return contacts((Body(upper, STEEL, NU), Body(lower, STEEL, NU)), HOLE, BEARING, thread)[0]


def test_rigid_block_presses_as_the_mirror_image_of_the_plate():
    """On a rigid block the thread's pull deforms nothing, and a frictionless plane is the plane of symmetry of two equal plates."""
    plate = Body(12, STEEL, NU)
    (found,) = contacts((plate, Body(40, 1e7 * STEEL, NU)), HOLE, BEARING, THREAD)
    mirror = contact(plate, plate, HOLE, BEARING)
    for radius in (6, 8, 10, 12):
        assert inside(found, radius) == pytest.approx(inside(mirror, radius), abs=2e-3)
    assert found.contact_radius == pytest.approx(mirror.contact_radius, abs=0.02 * 12)


def inside(found, radius):
    """Share of the force inside a radius."""
    r = np.linspace(found.radii[0], radius, 2001)
    return np.trapezoid(2 * np.pi * r * np.interp(r, found.radii, found.pressure), r) / force(found)


@pytest.mark.parametrize("t", [5, 12, 30])
def test_thick_block_lies_between_a_rigid_block_and_a_pull_from_far(t):
    """An elastic block is softer than a rigid one and lets the contact spread; its thread pulls nearer than a ring on a far face."""
    found = tapped(t, 100)
    rigid = contact(Body(t, STEEL, NU), Body(t, STEEL, NU), HOLE, BEARING)
    far = contact(Body(t, STEEL, NU), Body(100, STEEL, NU), HOLE, BEARING)
    assert rigid.contact_radius < found.contact_radius < far.contact_radius
    assert friction_radius(found) < friction_radius(far)


def test_thicker_block_changes_nothing_in_the_end():
    one, other = tapped(12, 60), tapped(12, 240)
    assert friction_radius(one) == pytest.approx(friction_radius(other), rel=2e-3)


@pytest.mark.parametrize(("upper", "lower"), [(5, 100), (12, 12), (12, 100), (30, 30), (30, 100)])
def test_how_the_thread_pulls(upper, lower):
    """What the documents say of the pull's reading: friction radius against an even pull with flanks of 60 degrees."""
    even = friction_radius(tapped(upper, lower))

    def against(**other):
        reading = {"radius": 5.0, "length": 10.0} | other
        return friction_radius(tapped(upper, lower, Engagement(**reading))) / even - 1

    assert -0.06 < against(fall=1.0) < 0
    assert 0 < against(fall=-1.0) < 0.03  # growing with the depth
    assert 0 <= against(wedge=0.0) < 0.06
    assert abs(against(radius=4.5)) < 0.016
    assert 0 < against(length=15.0) < 0.08
    assert -0.06 < against(length=7.0) < 0


# Stacks of more than two plates


def stack(*thicknesses, thread=None):
    return contacts([Body(t, STEEL, NU) for t in thicknesses], HOLE, BEARING, thread)


@pytest.mark.parametrize("t", [0.01, 0.15])
def test_a_foil_between_two_plates_passes_the_pressure_on(t):
    """Below a hundredth of the thickest plate it is taken as passing all on; just above, it is computed and does."""
    (two,), foil = stack(12, 12), stack(12, t, 12)
    assert len(foil) == 2
    for found in foil:
        assert friction_radius(found) == pytest.approx(friction_radius(two), rel=2e-3)
        assert found.contact_radius == pytest.approx(two.contact_radius, abs=0.02 * 12)


def test_a_stack_turned_over_presses_alike():
    one = contacts([Body(6, 71000, 0.33), Body(9, STEEL, NU), Body(14, 1.1e5, 0.26)], HOLE, BEARING)
    other = contacts([Body(14, 1.1e5, 0.26), Body(9, STEEL, NU), Body(6, 71000, 0.33)], HOLE, BEARING)
    for a, b in zip(one, other[::-1], strict=True):
        assert a.contact_radius == pytest.approx(b.contact_radius, rel=1e-9)
        assert a.pressure == pytest.approx(b.pressure, rel=1e-6, abs=1e-9 * a.pressure.max())


def test_a_plate_cut_in_two_lets_the_pressure_spread_less():
    """Free layers are softer in bending than one plate: below 12 mm, 6 and 6 instead of 12."""
    whole, cut = stack(12, 12)[0], stack(12, 6, 6)[0]
    assert friction_radius(cut) / friction_radius(whole) == pytest.approx(0.92, abs=0.01)
    assert whole.contact_radius - cut.contact_radius == pytest.approx(1.5, abs=0.3)


@pytest.mark.parametrize(
    ("thicknesses", "thread"),
    [((2, 30, 30), None), ((5, 5, 5, 5, 5), None), ((12, 50), THREAD), ((12, 12, 50), THREAD), ((30, 6), THREAD)],
)
def test_finer_mesh_changes_little_in_stacks_and_tapped_joints(monkeypatch, thicknesses, thread):
    """Twice the elements every way: friction radius of each face within 0.5 %, contact radius within 4 % of the thinner side."""
    coarse = stack(*thicknesses, thread=thread)
    for name in ("ACROSS", "NEAR", "FAR", "DEEP", "BELOW"):
        monkeypatch.setattr(receding, name, 2 * getattr(receding, name))
    for face, (a, b) in enumerate(zip(coarse, stack(*thicknesses, thread=thread), strict=True)):
        side = min(sum(thicknesses[: face + 1]), sum(thicknesses[face + 1 :]))
        assert friction_radius(a) == pytest.approx(friction_radius(b), rel=0.005)
        assert a.contact_radius == pytest.approx(b.contact_radius, abs=0.04 * side)


@pytest.mark.parametrize("seed", range(20))
def test_any_stack_settles_and_every_face_carries_the_whole_force(seed):
    draw = np.random.default_rng(seed)
    hole = draw.uniform(2, 20)
    thick = hole * 10 ** draw.uniform(-0.5, 1, draw.integers(2, 6))
    thick[-1] = max(thick[-1], hole)  # a thread needs some depth
    plates = [Body(t, 10 ** draw.uniform(4.5, 5.4), draw.uniform(0.2, 0.4)) for t in thick]
    thread = Engagement(0.9 * hole, 1.8 * hole, draw.uniform(0, 1), draw.uniform(0, WEDGE)) if seed % 2 else None
    for found in contacts(plates, hole, hole * draw.uniform(1.3, 2), thread):
        assert force(found) == pytest.approx(1, abs=0.02)  # the last cell is cut where the pressure, carried on, ends
        assert (found.pressure >= 0).all() and np.isfinite(found.pressure).all()


def test_equal_holes_need_no_collar():
    """A thread as wide as the clearance hole, engaged through a plate thinner than asked."""
    assert force(tapped(12, 6, Engagement(HOLE, 10.0))) == pytest.approx(1, rel=5e-3)
