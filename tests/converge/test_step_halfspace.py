"""The step on half-spaces against closed forms that it does not know: sphere, flat punch, torsion, a Hertzian traction.

Basis derived unless said otherwise; tolerances are orders of convergence that were observed over the grids shown.
"""

from math import pi, sqrt

import numpy as np
import pytest
from scipy.integrate import dblquad

from slip.friction.compliance.dense import Dense
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.march.face import Face
from slip.friction.march.step import step

E, NU, R, P, MU = 210e3, 0.3, 10.0, 100.0, 0.3
G = E / 2 / (1 + NU)
G_STAR = G / (2 * (2 - NU))  # 1/G* = sum (2 - nu)/G
A = (3 * P * R / (4 * E / 2 / (1 - NU**2))) ** (1 / 3)
P0 = 3 * P / (2 * pi * A**2)
UNCOUPLED = [(4 * G_STAR, 0.0)] * 2  # the same G*, without Poisson's ratio
STEEL = [(G, NU)] * 2


def grid(n, reach):
    """Cell and positions of n x n cells over a square of half side `reach`."""
    cell = 2 * reach / n
    x = (np.arange(n) + 0.5) * cell - reach
    return cell, np.array(np.meshgrid(x, x, indexing="ij"))


def sphere(n, bodies, components=2):
    """Compliance, bound and face of the sphere of check 20 on n x n cells."""
    cell, r = grid(n, 1.05 * A)
    bound = MU * P0 * np.sqrt(np.maximum(0.0, 1 - (r**2).sum(0) / A**2))
    return HalfSpace((n, n), (cell, cell), bodies, components=components), bound, Face(components)


def order(errors, ratio=2.0):
    """Observed order over the whole range of grids, each finer by `ratio`."""
    return np.log(abs(errors[0] / errors[-1])) / np.log(ratio) / (len(errors) - 1)


# Kernels


@pytest.mark.parametrize(("nu1", "nu2"), [(0.3, 0.3), (0.0, 0.5), (0.25, 0.0)])
def test_influence_numbers_against_quadrature(nu1, nu2):
    """A uniform traction on one cell, integrated from Cerruti's point load by quadrature over the cell."""
    bodies, (dx, dy) = [(1000.0, nu1), (2500.0, nu2)], (0.4, 0.7)
    body = HalfSpace((5, 4), (dx, dy), bodies)

    def point_load(nu, G_):
        """Displacements (xx, yy, xy) at (x, y) from a unit tangential force at the origin: Cerruti."""
        return lambda x, y: (
            ((1 - nu) / np.hypot(x, y) + nu * x * x / np.hypot(x, y) ** 3) / (2 * pi * G_),
            ((1 - nu) / np.hypot(x, y) + nu * y * y / np.hypot(x, y) ** 3) / (2 * pi * G_),
            (nu * x * y / np.hypot(x, y) ** 3) / (2 * pi * G_),
        )

    for component, cell in ((0, (1, 2)), (1, (3, 0))):
        q = np.zeros((2, 5, 4))
        q[(component, *cell)] = 1.0
        u = body.apply(q)
        for i, j in ((0, 0), (2, 3), (4, 1)):
            x, y = (i - cell[0]) * dx, (j - cell[1]) * dy
            forms = [point_load(nu, G_) for G_, nu in bodies]
            for part, seen in ((component, u[component, i, j]), (2, u[1 - component, i, j])):
                value = dblquad(
                    lambda b, a, part=part, x=x, y=y, forms=forms: sum(f(x - a, y - b)[part] for f in forms),
                    *(-dx / 2, dx / 2, -dy / 2, dy / 2),
                )[0]
                assert seen == pytest.approx(value, rel=1e-7, abs=1e-12)


@pytest.mark.parametrize("nu", [0.0, 0.3, 0.5])
def test_hertzian_traction_displaces_as_known(nu):
    """q_x = sqrt(1 - r^2/a^2) over a circle: u_x = pi/(32 G a) [4 (2 - nu) a^2 - (4 - 3 nu) x^2 - (4 - nu) y^2],
    u_y = pi/(32 G a) 2 nu x y (Johnson, Contact Mechanics, section 3.7: memory; at nu = 0 it is the normal problem's
    2 a^2 - r^2). Midpoint errors fall with the cell."""
    errors = []
    for n in (16, 32, 64, 128):
        cell, (x, y) = grid(n, 1.0)
        inside = x**2 + y**2 < 0.8**2
        u = HalfSpace((n, n), (cell, cell), [(1.0, nu), (np.inf, 0.0)]).apply(
            np.array([np.sqrt(np.maximum(0.0, 1 - x**2 - y**2)), 0 * x])
        )
        exact = pi / 32 * np.array([4 * (2 - nu) - (4 - 3 * nu) * x**2 - (4 - nu) * y**2, 2 * nu * x * y])
        errors.append(np.abs(u - exact)[:, inside].max())
        assert np.abs(u[1] - exact[1])[inside].max() <= (nu > 0) * 0.05 * cell**1.2 + 1e-15
    assert order(errors) > 1.2 and errors[-1] < 1e-3


@pytest.mark.parametrize("nu", [0.0, 0.3])
def test_convolution_is_symmetric_and_positive(nu):
    shape = (6, 5)
    body = HalfSpace(shape, (0.3, 0.9), [(800.0, nu), (3000.0, 0.4 * nu)], layer=5e3)
    C = np.array([body.apply(e.reshape(2, *shape)).ravel() for e in np.eye(60)])
    assert np.abs(C - C.T).max() < 1e-14 * C.max()
    assert np.linalg.eigvalsh(C).min() > 1 / 5e3
    assert np.linalg.eigvalsh(np.diag(np.tile(body.largest().ravel(), 2)) - C).min() > -1e-12 * C.max()


# The sphere, check 20


def test_sphere_force_stick_and_energy_converge():
    """q = .5: c/a .79370, delta .46950 um, W 1.07238e-3 mJ (check 20); uncoupled, where Mindlin's form is exact."""
    load = 0.5 * MU * P
    assert [
        pytest.approx(0.18663, abs=5e-6),
        pytest.approx(1370.9, abs=0.05),
        pytest.approx(35467, abs=0.5),
    ] == [A, P0, 8 * A * G_STAR]
    motions, energies, radii = [], [], []
    for n in (32, 64, 128):
        body, bound, face = sphere(n, UNCOUPLED)
        up = step(body, bound, face, load=[load, 0])
        down = step(body, bound, face, up.state, load=[-load, 0])
        again = step(body, bound, face, down.state, load=[load, 0])
        motions.append(up.state.motion[0] / 0.46950e-3 - 1)
        energies.append((down.dissipation + again.dissipation) / 1.07238e-3 - 1)
        stuck = (bound > 0) & ~up.slipping
        radii.append(sqrt(stuck.sum() * body.area / pi) / A / 0.79370 - 1)
        assert up.load[0] == pytest.approx(load, rel=1e-6)
    assert (np.abs(motions) < [3e-3, 6e-4, 2e-4]).all()
    assert (np.abs(energies) < [2e-2, 5e-3, 1.5e-3]).all()
    assert order(energies) > 1.5 and order(motions) > 1.5
    assert abs(radii[-1]) < 4e-3


def test_small_load_is_linear_with_8_a_gstar():
    """The stuck stiffness 8 a G* = 35467 N/mm, up to the little slip at the rim: (2/3 of it) q/2 to first order."""
    body, bound, face = sphere(128, UNCOUPLED)
    q = 1e-2
    made = step(body, bound, face, load=[q * MU * P, 0])
    assert made.load[0] / made.state.motion[0] == pytest.approx(35467 * (1 - q / 6), rel=2e-3)


def test_poisson_ratio_brings_the_transverse_traction():
    """nu = .3: loop energy -.4 %, transverse traction 3.5 % of mu p0 (by an independent trial at q = .6; digits as
    given).

    Against the uncoupled answer on the same grid, so that the grid's own error drops out."""
    load, made = 0.6 * MU * P, {}
    for name, bodies in (("uncoupled", UNCOUPLED), ("steel", STEEL)):
        body, bound, face = sphere(96, bodies)
        up = step(body, bound, face, load=[load, 0])
        down = step(body, bound, face, up.state, load=[-load, 0])
        made[name] = down.dissipation, np.abs(up.state.traction[1]).max() / (MU * P0)
    assert made["steel"][0] / made["uncoupled"][0] - 1 == pytest.approx(-0.004, abs=5e-4)
    assert made["steel"][1] == pytest.approx(0.035, abs=0.003)
    assert made["uncoupled"][1] == 0.0


# Punch and torsion: stuck faces


@pytest.mark.parametrize("nu", [0.0, 0.3, 0.5])
def test_stuck_disc_shift_and_torsion(nu):
    """Shift 8 a G* (check 22: 9.5023e5 N/mm for steel, a = 5); torsion (16/3) a^3/sum(1/G), which must not feel nu."""
    a, G_ = 5.0, 210e3 / 2 / (1 + nu)
    shift, turn = [], []
    for n in (32, 64, 128):
        cell, r = grid(n, 1.05 * a)
        inside = (r**2).sum(0) < a**2
        body, face = HalfSpace((n, n), (cell, cell), [(G_, nu)] * 2), Face(2, r)
        a_grid = sqrt(inside.sum() * cell**2 / pi)
        made = step(body, 1e9 * inside, face, motion=[1e-3, 0, 0])
        shift.append(made.load[0] / 1e-3 / (8 * a_grid * G_ / 2 / (2 - nu)) - 1)
        assert abs(made.load[1]) < 1e-9 * made.load[0] and abs(made.load[2]) < 1e-9 * made.load[0]
        made = step(body, 1e9 * inside, face, motion=[0, 0, 1e-4])
        turn.append(made.load[2] / 1e-4 / (16 / 3 * a_grid**3 * G_ / 2) - 1)
    if nu == 0.3:
        assert 8 * a * G_ / 2 / (2 - nu) == pytest.approx(9.5023e5, rel=1e-4)
    assert order(shift) > 0.9 and abs(shift[-1]) < 3e-3
    assert order(turn) > 0.9 and abs(turn[-1]) < 7e-3


# Symmetries


def test_turning_load_and_face_turns_the_answer():
    """A quarter turn with Poisson's ratio; any angle without it, where both components see the same kernel."""
    body, bound, face = sphere(32, STEEL)
    bound = bound * (1 + 0.3 * grid(32, 1.0)[1][0])
    along = step(body, bound, face, load=[15.0, 4.0])
    turned = step(body, np.rot90(bound), face, load=[-4.0, 15.0])
    q = np.array([np.rot90(part) for part in along.state.traction])
    assert np.allclose(turned.state.traction, [-q[1], q[0]], atol=1e-4)
    assert turned.dissipation == pytest.approx(along.dissipation, rel=1e-5)

    body, bound, face = sphere(32, UNCOUPLED)
    c, s = np.cos(0.7), np.sin(0.7)
    along = step(body, bound, face, load=[15.0, 0.0])
    turned = step(body, bound, face, load=[15.0 * c, 15.0 * s])
    q = along.state.traction
    assert np.allclose(turned.state.traction, [c * q[0] - s * q[1], s * q[0] + c * q[1]], atol=1e-3)
    assert turned.dissipation == pytest.approx(along.dissipation, rel=1e-5)


def test_one_component_is_two_without_poisson_ratio():
    two, bound, face = sphere(32, UNCOUPLED)
    one, _, line = sphere(32, UNCOUPLED, components=1)
    for load in (5.0, 20.0):
        a, b = step(two, bound, face, load=[load, 0]), step(one, bound, line, load=load)
        assert np.allclose(a.state.traction[0], b.state.traction[0], atol=1e-3) and not a.state.traction[1].any()
        assert b.dissipation == pytest.approx(a.dissipation, rel=1e-5, abs=1e-15)


def test_convolution_is_the_matrix():
    """The same step on the half-space and on its own matrix: two near inverses, with and without coarser grids."""
    n, layer = 20, 3e4
    cell, r = grid(n, 1.0)
    body = HalfSpace((n, n), (cell, cell), STEEL, layer=layer)
    bulk = HalfSpace((n, n), (cell, cell), STEEL)
    matrix = np.array([bulk.apply(e.reshape(2, n, n)).ravel() for e in np.eye(2 * n * n)]).T
    dense = Dense(matrix, cell**2, components=2, layer=layer)
    bound = 50.0 * np.maximum(0.0, 1 - (r**2).sum(0))
    a, b = None, None
    for load in ([30.0, 10.0, 5.0], [-20.0, 25.0, -4.0]):
        a = step(body, bound, Face(2, r), a and a.state, load=load, tol=1e-8)
        b = step(dense, bound.ravel(), Face(2, r.reshape(2, -1)), b and b.state, load=load, tol=1e-8)
        assert np.allclose(a.state.traction.ravel(), b.state.traction.ravel(), atol=1e-4)
        assert a.dissipation == pytest.approx(b.dissipation, rel=1e-6)
        assert a.energy == pytest.approx(b.energy, rel=1e-7)
