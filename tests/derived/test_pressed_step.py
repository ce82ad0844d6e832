"""What the step of a pressed contact adds to the closed form: bulk stress in plane contacts, the give of a rough face."""

import numpy as np
import pytest

from slip.base.trace import Trace
from slip.friction.closed import rough
from slip.friction.march.face import Face
from slip.friction.pressed import grids
from slip.friction.pressed.closed import Asked, closed_route
from slip.friction.pressed.grids import laid, trailing_stress
from slip.friction.pressed.pair import pair
from slip.friction.pressed.stage import pressed_slips
from slip.friction.pressed.stepped import bulk_displacement, put_on, stepped_route
from slip.read.build import read_text

STEEL = "material = { youngs_modulus = 210000, poissons_ratio = 0.3 }"
E, NU, MU, P, L, R = 210e3, 0.3, 0.3, 200.0, 10.0, 50.0
SPHERE = 'shape = "sphere"\nradius = 10\nnormal_force = 100'
CYLINDER = 'shape = "cylinder"\nradius = 50\nlength = 10\nnormal_force = 2000'
FLAT = 'shape = "flat"\nflat_width = 10\nnormal_force = 2000'
ROUNDED = 'shape = "rounded flat"\nradius = 20\nflat_width = 4\nlength = 10\nnormal_force = 2000'


@pytest.fixture(autouse=True)
def few_cells(monkeypatch):
    """What is asked here of round contacts holds on any grid."""
    monkeypatch.setattr(grids, "CELLS", 48)


def described(shape: str, shear: float = 15.0, face: str = "", ratio: float = -1.0):
    text = f"""format = 1
units = "N mm"
[contact]
{shape}
[[body]]
{STEEL}
[[body]]
{STEEL}
[interface]
friction = [0.3, 0.4]
{face}
[[case]]
name = "rock"
shear = [{shear}, 0]
ratio = {ratio}
"""
    return read_text(text)


def made_ready(shape: str, shear: float, bulk: float = 0.0, face: str = ""):
    c = described(shape, shear, face)
    return c, pair(c, Trace()), Asked(shear, shear, MU, bulk)


def given_end(shape: str, shear: float = 15.0, face: str = ""):
    """Both routes of the given end."""
    return pressed_slips(described(shape, shear, face))[0, "given"].routes


# Bulk stress


def by_hand(q: float, part: float):
    """Half-width, peak pressure, shift and edge stress of the cylinder under `part` of the largest bulk stress, like bodies.

    e = s a/(4 mu p0), the stick zone a sqrt(1 - q), 2 mu p0 [sqrt((1 + e/a)^2 - (1 - q)) - e/a] + s: Nowell and Hills, derived
    in test_contact_forms by potentials and by boundary elements.
    """
    E_star = E / 2 / (1 - NU**2)
    a = np.sqrt(4 * P * R / (np.pi * E_star))
    p_0 = 2 * P / (np.pi * a)
    s = part * 4 * MU * p_0 * (1 - np.sqrt(1 - q))
    e = s / (4 * MU * p_0)
    return a, p_0, s, e * a, 2 * MU * p_0 * (np.sqrt((1 + e) ** 2 - (1 - q)) - e) + s


def stepped_at(q: float, part: float, cells: int):
    """Stick zone's ends, edge stress, and the shift that the moment of the tractions tells, from the step on so many cells.

    The corrective pressing mu P (1 - q) lies about the shifted middle: the moment of the tractions is -mu P (1 - q) e.
    """
    a, _, s, _, _ = by_hand(q, part)
    c, ready, asked = made_ready(CYLINDER, q * MU * P * L, s)
    grid = laid(c, ready, cells=cells)
    body, bound = grid.compliance, MU * grid.pressure
    scale = (grid.pressure * body.area).sum() / (P * L)
    strain = bulk_displacement(c, ready, asked, grid)
    done = put_on(body, bound, Face(1), np.array([q * MU * P * L * scale]), strain)
    traction = done.state.traction[0]
    stuck = grid.x[np.abs(traction) < bound * (1 - 1e-9)]
    h = 2 * a / cells
    moment = -(traction * grid.x).sum() * h / (MU * P * (1 - q))
    return stuck.min() - h / 2, stuck.max() + h / 2, trailing_stress(ready, traction / bound, MU, s), moment


@pytest.mark.parametrize(("q", "part"), [(0.5, 0.6), (0.5, -0.7), (0.85, 0.9)])
def test_bulk_stress_shifts_the_stick_zone_of_the_step(q, part):
    """Within the cells; the edge stress, which is an integral, far closer."""
    a, p_0, s, shift, edge = by_hand(q, part)
    low, high, stress, _ = stepped_at(q, part, 240)
    cell = 2 * a / 240
    c = a * np.sqrt(1 - q)
    assert [low, high] == pytest.approx([shift - c, shift + c], abs=1.5 * cell)
    assert stress == pytest.approx(edge, rel=2e-4)


@pytest.mark.parametrize("part", [0.6, -0.7])
def test_bulk_stress_converges_to_the_closed_form(part):
    """Shift from the moment of the tractions: the error falls with the square of the cell.

    Where the kinks fall in their cells changes the error from one grid to the next; the mean over eight neighbours does not.
    """
    a, _, _, shift, _ = by_hand(0.5, part)
    cells = (16, 32, 64, 128)
    off = [[(stepped_at(0.5, part, n + i)[3] - shift) / a for i in range(8)] for n in cells]
    errors = np.sqrt(np.mean(np.square(off), axis=1))
    order = -np.polyfit(np.log(np.array(cells) + 3.5), np.log(errors), 1)[0]
    assert errors[-1] < 1e-4 and 1.7 < order < 2.4, (errors, order)


def test_the_route_of_a_cylinder_tells_shift_and_stress():
    a, p_0, s, shift, edge = by_hand(0.5, 0.6)
    c, ready, asked = made_ready(CYLINDER, 300.0, s)
    closed, stepped = closed_route(c, ready, asked, Trace()), stepped_route(c, ready, asked).route
    assert closed.stick_shift == pytest.approx(shift) and closed.edge_stress == pytest.approx(edge)
    assert stepped.stick_shift == pytest.approx(shift, abs=2 * a / 240)
    assert stepped.edge_stress == pytest.approx(edge, rel=2e-4)
    assert stepped.stick_ratio == pytest.approx(np.sqrt(0.5), abs=2 / 240)


def test_without_bulk_stress_the_step_has_the_edge_stress_of_two_closed_forms():
    """2 mu p0 sqrt(q) under the cylinder; under the rounded flat by the sum over flat strips."""
    p_0 = by_hand(0.5, 0.0)[1]
    assert given_end(CYLINDER, 300.0)[1].edge_stress == pytest.approx(2 * MU * p_0 * np.sqrt(0.5), rel=1e-4)
    closed, stepped = given_end(ROUNDED, 450.0)
    assert stepped.edge_stress == pytest.approx(closed.edge_stress, rel=1e-2)


def test_beyond_the_closed_form_the_step_goes_on():
    """Slip turns round at one edge: no edge stress in closed form, one by the step, and traction below zero there."""
    _, p_0, s, _, _ = by_hand(0.5, 2.0)
    found = pressed_slips(described(f"{CYLINDER}\nbulk_stress = {s}", 300.0))[0, "given"]
    closed, stepped = found.routes
    assert closed.edge_stress is None and found.curves.closed.size == 0
    assert found.edge_stress == stepped.edge_stress > s
    assert found.curves.stepped.min() < 0
    assert any("the edge stress is the step's" in note for note in found.notes)


def test_the_bulk_stress_of_a_case_follows_its_shear():
    """At the other end of ratio 0.5 half the bulk stress acts, and the stick zone is shifted by half as much."""
    slips = pressed_slips(described(f"{CYLINDER}\nbulk_stress = 40", 300.0, ratio=0.5))
    whole, half = (slips[0, end].routes[0].stick_shift for end in ("given", "other"))
    assert half == pytest.approx(whole / 2) and whole > 0


def test_a_round_contact_says_that_bulk_stress_is_not_in_it():
    slips = pressed_slips(described(f"{SPHERE}\nbulk_stress = 50"))[0, "given"]
    assert any("not modelled for a round contact" in note for note in slips.notes)
    assert slips.routes == given_end(SPHERE)


def slip_by_hand(x, q: float, part: float):
    """Slip [mm] of the cylinder at x, derived: nothing in the stick zone, else what the corrective pressing lacks of a parabola.

    Under either pressing the surface follows a parabola inside its contact, and stick asks for just the difference of the two and
    the strain. Outside its strip of half-width c the corrective one lies above its parabola by p0/(E* a) times
    y sqrt(y^2 - c^2) - c^2 arcosh(y/c), y = |x - e|.
    """
    a, p_0, _, e, _ = by_hand(q, part)
    c = a * np.sqrt(1 - q)
    y = np.maximum(np.abs(x - e), c)
    return MU * p_0 / (E / 2 / (1 - NU**2) * a) * (y * np.sqrt(y**2 - c**2) - c**2 * np.arccosh(y / c))


@pytest.mark.parametrize("part", [0.0, 0.6])
def test_true_slip_and_energy_under_bulk_stress(part):
    """Largest slip at the middle of the first cell; heat of a cycle from the slip, which doubles when the load is turned round
    (Masing): 2 turns, each mu p times twice the slip."""
    q = 0.5
    a, p_0, s, _, _ = by_hand(q, part)
    x = np.linspace(-a, a, 20001)
    pressure = p_0 * np.sqrt(np.maximum(0, 1 - (x / a) ** 2))
    heat = L * np.trapezoid(MU * pressure * 4 * slip_by_hand(x, q, part), x)
    found = given_end(f"{CYLINDER}\nbulk_stress = {s}", q * MU * P * L)[1]
    assert found.true_slip == pytest.approx(slip_by_hand(-a * (1 - 1 / 240), q, part), rel=3e-3)
    assert found.energy_per_cycle == pytest.approx(heat, rel=3e-3)
    if part == 0:  # the same by the closed form of the loop
        E_star = E / 2 / (1 - NU**2)
        loop = 4 * (MU * P) ** 2 / (np.pi * E_star) * ((1 - q) * np.log(1 - q) + q - q**2 / 2)
        assert heat == pytest.approx(L * loop, rel=1e-5)


# The rough face


def rq(um: float) -> str:
    return f'roughness = ["Rq {um} um", "Rq {um} um"]'


def d_e(um: float) -> float:
    """Slip of a rough face over its friction, mu gamma h/rho [mm], like bodies."""
    return MU * 0.48 * np.sqrt(2) * um * 1e-3 / (2 * (1 - NU) / (2 - NU))


@pytest.mark.parametrize("shape", [SPHERE, CYLINDER])
def test_a_face_that_is_hardly_rough_is_smooth(shape):
    shear = 15.0 if shape is SPHERE else 300.0
    smooth = given_end(shape, shear)[1]
    off = []
    for um in (1e-2, 1e-3, 1e-4):
        found = given_end(shape, shear, rq(um))[1]
        off.append(abs(found.displacement / smooth.displacement - 1))
    assert off[0] > off[1] > off[2] and off[2] < 1e-3
    assert found.true_slip == pytest.approx(smooth.true_slip, rel=2e-2)
    assert found.energy_per_cycle == pytest.approx(smooth.energy_per_cycle, rel=2e-2)


@pytest.mark.parametrize("q", [0.01, 0.5])
def test_a_very_rough_face_gives_all_the_motion(q):
    """Bodies as good as rigid: every place reaches the same part of its friction, so Q/(mu P) d_e wherever the pressure is.

    That is the face's closed form before its own slip sets in, -d_e ln(1 - q) at small loads.
    """
    um = 4000.0
    found = given_end(FLAT, q * MU * 2000, rq(um))[1]
    assert found.displacement == pytest.approx(q * d_e(um), rel=2e-3)
    assert found.elastic_slip == pytest.approx(q * d_e(um), rel=2e-3)
    assert found.stiffness == pytest.approx(MU * 2000 / d_e(um), rel=2e-3)
    assert found.true_slip == 0
    if q == 0.01:
        assert found.displacement == pytest.approx(rough.displacement(q * MU * 2000, 2000.0, MU, d_e(um)), rel=8e-3)


def test_face_and_bodies_give_in_series():
    """A sharp flat presses in proportion to the traction of a common motion, and so does the face: their compliances add.

    Of all tractions that carry a load those of the answer give least (complementary energy), so on a grid the sum is a bound.
    """
    um = 2.0
    smooth, found = given_end(FLAT, 300.0)[1], given_end(FLAT, 300.0, rq(um))[1]
    both = 1 / smooth.stiffness + d_e(um) / (MU * 2000)
    assert both * (1 - 1e-6) < 1 / found.stiffness < 1.01 * both


@pytest.mark.parametrize(
    ("shape", "shear"),
    [(SPHERE, 15.0), (SPHERE, 28.0), (CYLINDER, 300.0), (f"{CYLINDER}\nbulk_stress = 60", 400.0), (ROUNDED, 450.0)],
)
def test_laws_of_a_rough_face(shape, shear):
    """True slip at most the smooth one's, heat never negative, more give with less stiffness, over the band and beside it."""
    smooth = given_end(shape, shear)[1]
    typical = given_end(shape, shear, rq(0.3))[1]
    low, high = typical.band
    assert low.stiffness < typical.stiffness < high.stiffness < smooth.stiffness
    assert low.displacement > typical.displacement > high.displacement > smooth.displacement
    assert low.elastic_slip > typical.elastic_slip > high.elastic_slip > smooth.elastic_slip == 0
    for reading in (low, typical, high):
        assert 0 <= reading.true_slip <= smooth.true_slip
        assert reading.energy_per_cycle >= 0
    assert low.true_slip <= typical.true_slip <= high.true_slip


def test_the_band_is_a_factor_of_two_either_way():
    """The low reading is the typical one of a face twice as rough, the high one that of a face half as rough."""
    for reading, um in zip(given_end(SPHERE, 15.0, rq(0.3))[1].band, (0.6, 0.15), strict=True):
        other = given_end(SPHERE, 15.0, rq(um))[1]
        assert reading.stiffness == pytest.approx(other.stiffness, rel=1e-6)
        assert reading.displacement == pytest.approx(other.displacement, rel=1e-6)


def test_a_measured_face_has_its_band():
    found = given_end(SPHERE, 15.0, "tangential_stiffness = [5e5, 2e6]")[1]
    low, high = found.band
    middle = given_end(SPHERE, 15.0, "tangential_stiffness = [1e6, 1e6]")[1]
    assert middle.band == () and found.stiffness == pytest.approx(middle.stiffness, rel=1e-6)
    assert low.stiffness < found.stiffness < high.stiffness


def test_the_limit_of_true_slip_meets_the_worst_of_the_band(run_check):
    """The high reading slips the most, and it decides."""
    found = given_end(SPHERE, 15.0, rq(0.3))[1]
    between = 0.5 * (found.true_slip + found.band[1].true_slip)
    assert found.true_slip < between < found.band[1].true_slip
    text = f"""format = 1
units = "N mm"
[contact]
{SPHERE}
[[body]]
{STEEL}
[[body]]
{STEEL}
[interface]
friction = [0.3, 0.4]
{rq(0.3)}
[required]
true_slip = {between}
[[case]]
shear = [15, 0]
kind = "static"
"""
    result, code = run_check(text)
    assert code == 1 and result["governing"]["check"] == "true_slip"
    (entry,) = result["cases"][0]["ends"]
    assert entry["partial_slip"]["routes"][1]["band"]["high"]["true_slip"] == pytest.approx(found.band[1].true_slip)
    assert any("times that of the smooth closed form" in note for note in entry["partial_slip"]["notes"])
