"""How far a pressed contact's answers hold: size against the radius, first yield; and what its ends share."""

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import minimize_scalar

from slip.assess import assess
from slip.base.trace import Trace
from slip.friction.closed import reach
from slip.friction.march.face import Face
from slip.friction.pressed import grids, stepped
from slip.friction.pressed.closed import Asked
from slip.friction.pressed.pair import pair
from slip.friction.pressed.stage import pressed_slip, pressed_slips
from slip.read.build import read_text
from slip.report.pressed import pressed_text
from slip.report.pressed_lines import explain_pressed, explain_pressed_text
from slip.report.pressed_page import pressed_page

E_STAR = 210000 / 0.91 / 2
ROUGH = 'roughness = ["Ra 0.4 um", "Rz 2 um"]'
SHAKE = '[[case]]\nname = "shake"\nshear = [{q}, 0]\n'


@pytest.fixture(autouse=True)
def few_cells(monkeypatch):
    """What is asked here does not hang on the grid."""
    monkeypatch.setattr(grids, "CELLS", 24)
    monkeypatch.setattr(grids, "PLANE_CELLS", 48)


def contact(shape: str, force: float, more: str = "", Y: str = "", face: str = "", cases: str = SHAKE) -> str:
    """Two bodies of steel; the shear, where a case names it q, is half of what slips."""
    steel = "{ youngs_modulus = 210000, poissons_ratio = 0.3" + (f", yield_strength = {Y}" if Y else "") + " }"
    return f"""format = 1
units = "N mm"
[contact]
{shape}
normal_force = {force!r}
[[body]]
material = {steel}
[[body]]
material = {{ youngs_modulus = 210000, poissons_ratio = 0.3 }}
[interface]
friction = [0.3, 0.4]
{face}
{cases.replace("{q}", repr(0.15 * force))}
{more}
"""


def sphere_force(share: float) -> float:
    """Force [N] under which a sphere of radius 1 has a/R = share: a^3 = 3 P R/(4 E*), johnson1985."""
    return 4 * E_STAR * share**3 / 3


def cylinder_force(share: float) -> float:
    """The same of a cylinder 2 mm long: a^2 = 4 P R/(pi E* l)."""
    return np.pi * E_STAR * share**2 / 4 * 2


SPHERE = 'shape = "sphere"\nradius = 1'
CYLINDER = 'shape = "cylinder"\nradius = 1\nlength = 2'
SHAPES = {"sphere": (SPHERE, sphere_force), "cylinder": (CYLINDER, cylinder_force)}


def notes_of(found: dict) -> list[str]:
    return found["cases"][0]["ends"][0]["partial_slip"].get("notes", [])


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize(("share", "said"), [(0.299, ""), (0.301, "0.3"), (0.52, "0.52")])
def test_a_contact_that_is_not_small_is_told(run_check, shape, share, said):
    text, force = SHAPES[shape]
    found, code = run_check(contact(text, force(share)))
    words = [note for note in notes_of(found) if "small against the radius" in note]
    expected = [f"a/R = {said}: the forms hold for contacts small against the radius, up to 0.3"] if said else []
    assert (words, code) == (expected, 0)  # gross slip does not hang on the forms


def test_of_a_rounded_flat_its_rounded_part_counts(run_check):
    """(a - b)/R from the contact's size in the result: b = 0.5, R = 0.005 and 20; of a sharp flat nothing is said."""
    for radius, beyond in ((0.005, True), (20, False)):
        for length in ("", "\nlength = 10"):
            shape = f'shape = "rounded flat"\nflat_width = 1\nradius = {radius}{length}'
            found, _ = run_check(contact(shape, 9000.0))
            size = found["cases"][0]["ends"][0]["partial_slip"]["contact_size"]
            assert ((size - 0.5) / radius > 0.3) == beyond
            assert any(note.startswith("(a - b)/R = ") for note in notes_of(found)) == beyond
    found, _ = run_check(contact('shape = "flat"\nflat_width = 4', 9000.0, Y="1"))
    assert not [note for note in notes_of(found) if "forms" in note]


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize(
    ("share", "most", "code", "said"),
    [
        (0.52, "1 mm", 3, "not solved: a/R = 0.52"),
        (0.52, "0.0001 um", 1, " um against 0.0001 um"),
        (0.2, "1 mm", 0, "against 1e+03 um"),
    ],
)
def test_a_limit_of_true_slip_out_of_range_is_not_solved_unless_it_fails(run_check, shape, share, most, code, said):
    text, force = SHAPES[shape]
    found, exit_code = run_check(contact(text, force(share), f'[required]\ntrue_slip = "{most}"'))
    check = next(check for check in found["checks"] if check["check"] == "true_slip")
    assert exit_code == code and found["holds"] == check["holds"] == (code == 0)
    assert said in check["reason"]
    assert ("reserve_factor" in check) == (code != 3)


def test_without_shear_there_is_no_true_slip_to_judge(run_check):
    limit = '[required]\ntrue_slip = "1 um"'
    rest = '[[case]]\nname = "rest"\nshear = [0, 0]\nkind = "static"\n'
    assert run_check(contact(SPHERE, sphere_force(0.52), limit, cases=rest))[1] == 0


def test_screen_page_and_explanation_say_the_range():
    found = assess(read_text(contact(SPHERE, sphere_force(0.52), Y="235"), "contact.toml"))
    told = explain_pressed(found)
    share = next(line for line in told.lines if line.symbol == "a/R")
    assert share.result == pytest.approx(0.52, rel=1e-6)
    for text in (pressed_text(found), pressed_page(found), explain_pressed_text(told, found)):
        flat = " ".join(text.split())
        assert "a/R = 0.52: the forms hold for contacts small against the radius, up to 0.3" in flat
        assert "the first body yields below the face" in flat


# First yield


def round_shear(depth: float, nu: float) -> float:
    """Largest shear stress over p_0 on the axis of a Hertz contact at a depth in radii: point loads summed over the pressure."""

    def parts(r: float) -> tuple[float, float]:
        rho, p = np.hypot(r, depth), np.sqrt(1 - r * r)
        across = 0.5 * ((1 - 2 * nu) * depth / rho**3 - 3 * depth * r * r / rho**5)
        return p * r * across, -3 * p * r * depth**3 / rho**5

    across, along = (quad(lambda r, i=i: parts(r)[i], 0, 1)[0] for i in (0, 1))
    return abs(across - along) / 2


def plane_shear(depth: float) -> float:
    """The same of a cylinder, line loads summed."""
    load = lambda s: 2 / np.pi * np.sqrt(1 - s * s) / (s * s + depth**2) ** 2  # noqa: E731
    across, along = quad(lambda s: load(s) * s * s * depth, -1, 1)[0], quad(lambda s: load(s) * depth**3, -1, 1)[0]
    return abs(across - along) / 2


def test_first_yield_is_where_the_largest_shear_reaches_half_the_yield_strength():
    """Printed to two digits in the books: 0.31 at 0.48 a (nu 0.3), 0.30 at 0.79 a; so 1.6 Y and 1.67 Y (Tresca)."""
    for shear, formula, at, most in (
        (lambda z: round_shear(z, 0.3), reach.round_first_yield, 0.48, 0.31),
        (plane_shear, reach.plane_first_yield, 0.79, 0.30),
    ):
        found = minimize_scalar(lambda z, shear=shear: -shear(z), bounds=(0.1, 2), method="bounded")
        assert (found.x, -found.fun) == (pytest.approx(at, abs=0.005), pytest.approx(most, abs=0.005))
        assert formula(100.0) == pytest.approx(100 / (2 * -found.fun), rel=0.01)
    assert reach.round_first_yield(1.0) == pytest.approx(1.6, abs=0.02)
    assert reach.plane_first_yield(1.0) == pytest.approx(1.67, abs=0.005)


@pytest.mark.parametrize(("shape", "times"), [("sphere", 1.61), ("cylinder", 1.667)])
def test_a_peak_above_first_yield_is_told_of_a_body_that_has_one(run_check, shape, times):
    text, force = SHAPES[shape]
    found, _ = run_check(contact(text, force(0.1)))
    assert not [note for note in notes_of(found) if "yield" in note]
    peak = found["cases"][0]["ends"][0]["partial_slip"]["peak_pressure"]
    for part, told in ((0.99, True), (1.01, False)):
        found, code = run_check(contact(text, force(0.1), Y=repr(part * peak / times)))
        assert code == 0
        assert any(note.startswith("the first body yields below the face") for note in notes_of(found)) == told


# What ends share

THREE = (
    '[[case]]\nname = "a"\nshear = [180, 0]\n'
    '[[case]]\nname = "b"\nshear = [0, 200]\nratio = 0.2\n'
    '[[case]]\nname = "c"\nshear = [100, 100]\nkind = "static"\n'
)


@pytest.mark.parametrize(
    ("shape", "most"), [("flat_width = 10\nshape = 'flat'", 3), ("radius = 30\nshape = 'sphere'", 30)]
)
def test_ends_share_what_they_have_in_common_and_say_what_they_said_alone(monkeypatch, shape, most):
    """A flat that sticks needs one step at each reading of its face; of a sphere no stuck answer, route or cycle is made twice.

    Of the sphere at each of three readings: the stuck answer; case a and a cycle from there, 3; case b, both ends, 2, and its
    cycle, 3; case c, 1.
    """
    steps = []
    original = stepped.step
    monkeypatch.setattr(stepped, "step", lambda *args, **more: steps.append(1) or original(*args, **more))
    c = read_text(contact(shape, 2000.0, face=ROUGH, cases=THREE))
    together = pressed_slips(c)
    assert 3 <= len(steps) <= most
    for (i, end), found in together.items():
        assert found.routes == pressed_slip(c, c.cases[i], end).routes


@pytest.mark.parametrize("load", [1.0, 300.0])
def test_what_sticks_is_the_stuck_answer_in_proportion(load):
    """Against a step of its own under the load."""
    c = read_text(contact("flat_width = 10\nshape = 'flat'", 2000.0, face=ROUGH))
    ready = pair(c, Trace())
    route = stepped.stepped_route(c, ready, Asked(load, load, 0.3, 0.0)).route
    grid = grids.laid(c, ready)
    scale = float((grid.pressure * grid.compliance.area).sum()) / 2000.0
    alone = stepped.put_on(grid.compliance, 0.3 * grid.pressure, Face(2), np.array([load * scale, 0.0]), np.zeros(1))
    assert not alone.slipping[grid.pressure > 0].any()
    assert route.displacement == pytest.approx(float(alone.state.motion[0]), rel=1e-5)
    assert route.elastic_slip == pytest.approx(
        float(np.hypot(*grid.compliance.elongation(alone.state.traction))[grid.pressure > 0].max()), rel=1e-4
    )
    assert (route.true_slip, route.energy_per_cycle, route.stick_ratio) == (0.0, 0.0, 1.0)
