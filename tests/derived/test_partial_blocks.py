"""Bolted blocks thicker than a patch is wide: half-spaces against the sphere's and the punch's closed forms, and against points."""

import numpy as np
import pytest

from slip.base.trace import Trace
from slip.friction import model_blocks, models
from slip.friction.faces import FaceStiffness, face_stiffness
from slip.friction.partial import under
from slip.pressure.patch import from_profile
from slip.pressure.stage import pressure
from slip.read.build import read_text

E = 210000.0
RIGID = FaceStiffness(None, (np.inf, np.inf, np.inf), "test", "given", Trace())


def blocks(thickness: float, face: str, bolts: int = 1, nu: float = 0.3, half: float = 15, pitch: float = 100) -> str:
    """Blocks whose sides end 15 mm from the bolts: there the pressure ends, 30 mm wide."""
    far = pitch * (bolts - 1) + half
    material = f"material = {{ youngs_modulus = {E}, poissons_ratio = {nu} }}\nthickness = {thickness}"
    plate = f"[[plate]]\n{material}\noutline = [{-half}, {-half}, {far}, {half}]\n"
    return f"""format = 1
units = "N mm"
[bolt]
hole_diameter = 11
bearing_diameter = 16
[tightening]
preload = [40000, 50000]
[losses]
embedding = 0
relaxation = 0
{plate}{plate}
[interface]
friction = [0.2, 0.3]
{face}
[pattern]
positions = {[[pitch * i, 0] for i in range(bolts)]}
[required]
static = 1
[[case]]
acts_on = "joint"
shear = [{3000 * bolts}, 0]
kind = "static"
"""


def slip_of(run_check, text):
    return run_check(text)[0]["cases"][0]["ends"][0]["partial_slip"]


SOFT, HARD = "tangential_stiffness = [20, 20]", "tangential_stiffness = [20000, 20000]"


def test_a_patch_that_spreads_is_never_narrower_than_its_plates(run_check):
    """Far edges: the contact of two plates spreads beyond a thickness either way, so points serve; cut at 30 mm, half-spaces do."""
    assert slip_of(run_check, blocks(60, HARD, half=400))["model"] == "points over the pressure patches"
    assert slip_of(run_check, blocks(20, HARD))["model"] == "points over the pressure patches"
    assert slip_of(run_check, blocks(60, HARD))["model"] == "half-spaces"


@pytest.mark.parametrize("bolts", [1, 2])
def test_a_very_soft_face_leaves_nothing_to_the_model(run_check, bolts):
    """20 N/mm3 on blocks of 210 GPa: half-spaces and points alike are the face's stiffness times the area in contact."""
    got = slip_of(run_check, blocks(60, SOFT, bolts))
    points = slip_of(run_check, blocks(20, SOFT, bolts, half=15))
    area = bolts * np.pi * (15**2 - 5.5**2)
    assert got["stiffness"] == pytest.approx(20 * area, rel=0.01)
    assert got["elastic_slip"] == pytest.approx(points["elastic_slip"], rel=0.01)
    assert got["gross_slip_load"] == pytest.approx(0.2 * 40000 * bolts, rel=1e-9)


def test_blocks_yield_less_than_their_thickness_would(run_check):
    """t/(3G) has no end as a block grows; a half-space does not know of it."""
    thick, thicker = (slip_of(run_check, blocks(t, HARD)) for t in (60, 600))
    assert thicker["stiffness"] == pytest.approx(thick["stiffness"], rel=1e-3)
    G = E / 2.6
    area = np.pi * (15**2 - 5.5**2)
    assert area / (1 / 20000 + 2 * 60 / (3 * G)) < thick["stiffness"] < 20000 * area


def hertz(nu: float):
    """A joint with the pressure of a sphere in place of its own: the patch, its radius and G*."""
    joint = read_text(blocks(60, HARD, nu=nu))
    a = 12.0
    r = np.linspace(0, a, 400)
    patch = from_profile(r, np.sqrt(np.maximum(1 - (r / a) ** 2, 0)), 12, 72)
    return joint, patch, a, E / 2 / (1 + nu) / (2 * (2 - nu))


@pytest.mark.parametrize("nu", [0.0, 0.3])
def test_under_the_pressure_of_a_sphere_it_is_the_closed_form(nu):
    """Cattaneo and Mindlin at Q = 0.5 mu P: stick size 0.5^(1/3), energy, stuck stiffness 8 a G*, within what 40 cells across give."""
    joint, patch, a, G_star = hertz(nu)
    grid = model_blocks.of_patches(np.zeros((1, 2)), patch)
    model = model_blocks.blocks(joint, grid, RIGID, ())
    P, mu = 40000.0, 0.2
    load = np.array([0.5 * mu * P, 0.0, 0.0])
    got = under(model, mu, (load, np.array([P])), (-load, np.array([P])), 2.0, True).readings[1]
    assert got.stiffness == pytest.approx(8 * a * G_star, rel=0.02)
    energy = 9 * (mu * P) ** 2 / (10 * a * G_star) * (1 - 0.5 ** (5 / 3) - 5 / 12 * (1 + 0.5 ** (2 / 3)))
    assert got.energy_per_cycle == pytest.approx(energy, rel=0.025)
    stick = 1 - (1 - 0.5 ** (2 / 3)) ** 1.5  # part of the clamp inside the stick radius
    assert got.slip_share == pytest.approx(1 - stick, abs=0.02)
    assert got.elastic_slip == 0


def test_far_bolts_fall_back_to_points_and_say_so(run_check):
    got = slip_of(run_check, blocks(60, HARD, 40))
    assert got["model"] == "points over the pressure patches" and any("too many cells" in note for note in got["notes"])


def test_the_grid_gives_every_bolt_its_force():
    joint = read_text(blocks(60, HARD, 3, pitch=22))  # patches that overlap
    patch = pressure(joint, False).patch
    grid = model_blocks.of_patches(joint.pattern.arms, patch)
    built = model_blocks.blocks(joint, grid, face_stiffness(joint), ()).build(np.array([1.0, 2.0, 3.0]), 1)
    p = built.press(np.array([1000.0, 2000.0, 3000.0])) * built.compliance.area
    assert p.sum() == pytest.approx(6000, rel=1e-12)
    assert (p * grid.centres[0]).sum() == pytest.approx(-22 * 1000 + 22 * 3000, rel=1e-3)
    assert models.choose(joint, patch, face_stiffness(joint), np.array([1.0, 1, 0]), np.ones(3)).name == "half-spaces"
