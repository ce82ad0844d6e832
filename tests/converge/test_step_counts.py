"""What a step costs, in applications of the compliance: held here so that a change of the tuned constants shows. Wall
times stand in tests/speed/step.py."""

import time
from math import pi

import numpy as np
import pytest

from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.strips import Strips
from slip.friction.march.face import Face
from slip.friction.march.history import march
from slip.friction.march.step import step

FACE = Face(2)


def sphere(cells, nu, radius=1.0, layer=None):
    """Smooth sphere on cells x cells, its patch over 1/1.1 of the grid; bound of unit peak, one G* for every nu."""
    cell = 2.2 * radius / cells
    x = (np.arange(cells) + 0.5) * cell - 1.1 * radius
    bound = np.sqrt(np.maximum(0.0, 1 - np.add.outer(x**2, x**2) / radius**2))
    G = 2 * (2 - nu) * 2e4
    return HalfSpace((cells, cells), (cell, cell), [(G, nu)] * 2, layer=layer), bound, 2 * pi / 3 * radius**2


def motion_at(q):
    """3 mu P/(16 a G*) [1 - (1 - q)^(2/3)] with mu P = 2 pi/3, a = 1, G* = 2e4."""
    return 3 * 2 * pi / 3 / (16 * 2e4) * (1 - (1 - q) ** (2 / 3))


@pytest.mark.parametrize("nu", [0.0, 0.3])
def test_sphere_from_cold(nu):
    """At q = .6 on 256 x 256, to 1e-6: at most 40 under a given motion; the load costs no more."""
    body, bound, total = sphere(256, nu)
    by_motion = step(body, bound, FACE, motion=[motion_at(0.6), 0.0])
    assert by_motion.residual <= 1e-6 and by_motion.applications <= 25
    by_load = step(body, bound, FACE, load=[0.6 * total, 0.0])
    assert by_load.residual <= 1e-6 and by_load.applications <= 32
    assert by_load.near_inverses <= 45


def test_finer_grids_cost_hardly_more():
    """512 x 512 in no more than 1.3 times the applications of 256 x 256."""
    coarse, fine = (step(*sphere(n, 0.3)[:2], FACE, motion=[motion_at(0.6), 0.0]).applications for n in (256, 512))
    assert fine <= 1.3 * coarse


@pytest.mark.parametrize("kind", ["uniform", "pressure", "scattered"])
@pytest.mark.parametrize("nu", [0.0, 0.3])
def test_sphere_with_a_layer(nu, kind):
    """2e4 N/mm^3 on a grid of .25 mm: at most 20 from cold; scattered over four decades at most 50."""
    cells = 128
    plain, bound, total = sphere(cells, nu, radius=0.25 * cells / 2.2)
    assert plain.cell[0] == pytest.approx(0.25)
    layer = {
        "uniform": 2e4,
        "pressure": np.where(bound > 0, 2e4 * np.where(bound > 0, bound, 1.0), np.inf),
        "scattered": 2e4 * np.exp(2 * np.random.default_rng(0).normal(size=bound.shape)),
    }[kind]
    body, bound, total = sphere(cells, nu, radius=0.25 * cells / 2.2, layer=layer)
    made = step(body, bound, FACE, load=[0.6 * total, 0.0])
    assert made.applications <= (50 if kind == "scattered" else 20)


@pytest.mark.parametrize(("nu", "mean"), [(0.0, 18), (0.3, 25)])
def test_warm_steps_of_a_cycle(nu, mean):
    """Forty steps of a full cycle at q = .6 on 128 x 128, after loading in ten."""
    body, bound, total = sphere(128, nu)
    way = np.concatenate([np.linspace(0.1, 1, 10), np.linspace(0.9, -1, 20), np.linspace(-0.9, 1, 20)])
    steps = [
        (made.applications, made.balance)
        for made in march(body, bound, FACE, loads=[[0.6 * total * q, 0.0] for q in way])
    ]
    assert np.mean([applications for applications, _ in steps[1:]]) <= mean
    assert max(balance for _, balance in steps) < 1e-6


def test_cycle_on_strips():
    """Forty steps on 2000 cells: under a second of one core, ten applications each."""
    body = Strips(80.0, 50.0, 2000, (8e6, 8e6), layer=80.0)
    way = 0.85 * 24000.0 * np.concatenate([np.linspace(0.1, 1, 10), np.linspace(0.9, -1, 20), np.linspace(-0.9, 0, 10)])
    start = time.process_time()
    steps = [made.applications for made in march(body, 6.0, Face(1), loads=way)]
    assert time.process_time() - start < 1.0
    assert np.mean(steps) <= 10
