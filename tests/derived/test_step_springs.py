"""The march on springs against what can be said by hand: sliders, walking under a clamp that changes sides, parallel
sliders.

Basis derived (checks 31 and 33 of the collection, in SI there); N, mm, mJ here. k = 1e8 N/m = 1e5 N/mm.
"""

from math import pi

import numpy as np
import pytest

from slip.friction.compliance.dense import Dense
from slip.friction.compliance.springs import Springs
from slip.friction.march.face import Face
from slip.friction.march.history import march
from slip.friction.march.step import step

LINE, K = Face(1), 1e5


@pytest.mark.parametrize(("Q", "walk"), [(200.0, 0.0), (240.0, 0.0), (250.0, 0.2e-3), (300.0, 1.2e-3)])
def test_walking_under_alternating_clamp(Q, walk):
    """Two contacts, clamp 1000 (1 +- .6 sin wt) in turn, mu .3, shear Q held: 2 [Q - 2 mu N0 (1 - e)]/k per cycle
    (check 31).

    Q - 2 mu N0 (1 - e): at the turn the weak side slides until it carries mu N0 (1 - e), its partner's spring takes the
    rest.
    """
    assert walk == pytest.approx(2 * max(0.0, Q - 2 * 0.3 * 1000 * 0.4) / K)
    n = 256
    t = 2 * pi * np.arange(1, 4 * n + 1) / n
    bounds = 300 * np.stack([1 + 0.6 * np.sin(t), 1 - 0.6 * np.sin(t)], axis=1)
    steps = list(march(Springs([K, K]), bounds, LINE, loads=np.full(len(t), Q)))
    motion = np.array([made.state.motion[0] for made in steps])
    assert motion[-1] - motion[-n - 1] == pytest.approx(walk, abs=1e-9)
    # All that the held load works in a steady cycle becomes heat.
    assert sum(made.dissipation for made in steps[-n:]) == pytest.approx(Q * walk, rel=2e-4, abs=1e-9)
    assert max(made.balance for made in steps) < 1e-12


@pytest.mark.parametrize(("psi", "joule"), [(0.0, 0.019456), (pi / 2, 0.020332)])
def test_slider_with_varying_clamp(psi, joule):
    """u = U sin wt, N = 1000 (1 + .6 sin(wt + psi)), U 2e-2 mm, mu .3 (check 33); finer steps come closer."""
    errors = []
    for n in (40, 640):
        t = 2 * pi * np.arange(1, 2 * n + 1) / n
        bounds = 300 * (1 + 0.6 * np.sin(t + psi))
        steps = list(march(Springs([K]), bounds[:, None], LINE, motions=0.02 * np.sin(t)))
        errors.append(1e-3 * sum(made.dissipation for made in steps[n:]) - joule)
    assert abs(errors[0]) < 6e-5 and abs(errors[1]) < 1e-6


@pytest.mark.parametrize("n", [4, 8, 40])
def test_slider_with_constant_clamp(n):
    """4 f (U - f/k) = .0204 J with f 300 N, whatever the steps as long as the turning points are among them."""
    t = 2 * pi * np.arange(1, 2 * n + 1) / n
    steps = list(march(Springs([K]), 300.0, LINE, motions=0.02 * np.sin(t)))
    assert sum(made.dissipation for made in steps[n:]) == pytest.approx(4 * 300 * (0.02 - 300 / K), rel=1e-12)


def test_parallel_sliders_under_motion_and_under_load():
    """Sliders of one stiffness and growing strength in parallel: force, slip and loop energy by Masing's rule."""
    k, strength, u = 2000.0, np.linspace(1.0, 30.0, 40), 0.009
    body = Springs(np.full(40, k))
    force = np.minimum(k * u, strength).sum()
    lost = 4 * (strength * np.maximum(0.0, u - strength / k)).sum()
    for given in ({"motions": [u, -u, u]}, {"loads": [force, -force, force]}):
        up, down, again = march(body, strength, LINE, **given)
        assert up.load[0] == pytest.approx(force, rel=1e-6) and up.state.motion[0] == pytest.approx(u, rel=1e-5)
        assert np.allclose(up.state.slip[0], np.maximum(0.0, u - strength / k), atol=1e-7)
        assert down.dissipation + again.dissipation == pytest.approx(lost, rel=1e-5)
        assert up.energy == pytest.approx((np.minimum(k * u, strength) ** 2 / k / 2).sum(), rel=1e-5)


def test_vector_slider_turns_with_the_motion():
    """One spring dragged far along x, then along y: radial return turns the traction into the new direction."""
    body, face = Springs([K], components=2), Face(2)
    steps = list(march(body, 300.0, face, motions=[[0.02, 0.0], [0.02, 0.01], [0.02, 0.05]]))
    q, expected = [made.state.traction[:, 0] for made in steps], np.array([300.0, 0.0])
    assert q[0] == pytest.approx(expected)
    for now, moved in zip(q[1:], ([0.0, 0.01], [0.0, 0.04]), strict=True):
        trial = expected + K * np.array(moved)
        expected = 300 * trial / np.hypot(*trial)
        assert now == pytest.approx(expected, rel=1e-6)
    assert steps[2].state.slip[:, 0] + q[2] / K == pytest.approx([0.02, 0.05], rel=1e-9)


def test_springs_are_a_diagonal_matrix():
    rng = np.random.default_rng(1)
    k, area, layer = 1e3 * rng.random(6) + 100, rng.random(6) + 0.5, 5e3
    face = Face(2, 10 * rng.normal(size=(2, 6)))
    springs = Springs(k, area, components=2, layer=layer)
    dense = Dense(np.diag(np.tile(1 / k, 2)), area, components=2, layer=layer)
    load = 0.3 * (area * 10.0).sum() * np.array([1.0, 0.5, 4.0])
    a, b = (step(body, 10.0, face, load=load, tol=1e-9) for body in (springs, dense))
    assert np.allclose(a.state.traction, b.state.traction, atol=1e-5) and np.allclose(
        a.state.motion, b.state.motion, rtol=1e-6
    )
    parts = a.split(springs, face)
    assert np.allclose(parts.elongation, a.state.traction / layer) and np.allclose(parts.bulk, a.state.traction / k)
    assert np.allclose(parts.motion, parts.slip + parts.elongation + parts.bulk, atol=1e-9)


def test_opening_and_closing_again():
    """A point that opens lets go of its traction and slips freely; clamped again it holds where it then is."""
    body = Springs([K])
    loaded, opened, moved, closed, back = march(
        body, np.array([300.0, 0.0, 0.0, 300.0, 300.0])[:, None], LINE, motions=[0.001, 0.001, 0.01, 0.01, 0.009]
    )
    assert loaded.state.traction[0, 0] == pytest.approx(100.0) and loaded.energy == pytest.approx(0.05)
    assert (
        opened.state.traction[0, 0] == 0.0
        and opened.dissipation == pytest.approx(0.05)
        and opened.work == pytest.approx(0.0)
    )
    assert moved.state.slip[0, 0] == pytest.approx(0.01) and moved.dissipation == 0.0
    assert closed.state.traction[0, 0] == 0.0 and back.state.traction[0, 0] == pytest.approx(-100.0)


def test_march_reports_and_never_runs_ahead():
    """The callback sees each step; nothing is computed before it is asked for, so the loads may go on forever."""
    seen, asked = [], []

    def loads():
        while True:
            asked.append(1)
            yield 100.0 * (-1) ** len(asked)

    steps = march(
        Springs([K]), 300.0, LINE, loads=loads(), progress=lambda number, made: seen.append((number, made.residual))
    )
    for _ in range(3):
        next(steps)
    assert (
        len(asked) == 3
        and [number for number, _ in seen] == [1, 2, 3]
        and max(residual for _, residual in seen) <= 1e-6
    )
