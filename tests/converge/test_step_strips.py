"""The step on two strips against shear-lag theory, derived here once more from equilibrium and stretch.

Strip 1 is pulled at x = L, strip 2 at x = 0. N1 grows by the traction per length, N2 = P - N1, and the relative
displacement g of the faces changes by g' = N1/EA1 - N2/EA2 = D N1 - P/EA2 with D = 1/EA1 + 1/EA2. Where the faces stick
g = N1'/k, so that N1'' = w^2 (N1 - N_inf) with w^2 = k D, N_inf = P/(EA2 D); where they slip N1' = q_l. Everything
below follows from these and from continuity. Basis derived. N, mm; tolerances are observed orders or the printed digits
of the numbers.
"""

from math import cosh, sinh, sqrt, tanh

import numpy as np
import pytest
from scipy.optimize import brentq

from slip.friction.closed.layers import thickness_compliance
from slip.friction.compliance.strips import Strips
from slip.friction.march.face import Face
from slip.friction.march.history import march
from slip.friction.march.step import step

LINE = Face(1)


def stuck(EA1, EA2, k, L, P):
    """Motion of the pulled ends, and the largest traction per length, without any slip."""
    D = 1 / EA1 + 1 / EA2
    w, N = sqrt(k * D), P / (EA2 * D)
    slope = [w * ((P - N) + N * cosh(w * L)) / sinh(w * L), w * ((P - N) * cosh(w * L) + N) / sinh(w * L)]
    mean = N * L + ((P - N) - N) * (cosh(w * L) - 1) / (w * sinh(w * L))  # integral of N1
    return slope[0] / k + mean / EA1, max(slope)


def both_ends(EA1, EA2, k, q_l, L, P):
    """Slip from both ends: stuck length c, slip lengths at 0 and L, motion, relative displacement g at x = 0."""
    D = 1 / EA1 + 1 / EA2
    w = sqrt(k * D)
    c = brentq(lambda c: q_l * (L - c) + 2 * q_l / w * tanh(w * c / 2) - P, 1e-9, L)
    N = P / (EA2 * D)
    a0, aL = N / q_l - tanh(w * c / 2) / w, (P - N) / q_l - tanh(w * c / 2) / w
    g0 = q_l / k + P * a0 / EA2 - D * q_l * a0**2 / 2
    mean = q_l * a0**2 / 2 + N * c + P * aL - q_l * aL**2 / 2
    return c, a0, aL, g0 + mean / EA1, g0


def one_end(EA1, EA2, k, q_l, L, P):
    """Slip from x = 0 alone: its length and the motion."""
    D = 1 / EA1 + 1 / EA2
    w, N = sqrt(k * D), P / (EA2 * D)

    def at_the_other_end(a):
        return N + (q_l * a - N) * cosh(w * (L - a)) + q_l / w * sinh(w * (L - a)) - P

    a = brentq(at_the_other_end, 0, L)
    c = L - a
    g0 = q_l / k + P * a / EA2 - D * q_l * a**2 / 2
    mean = q_l * a**2 / 2 + N * c + (q_l * a - N) * sinh(w * c) / w + q_l / w**2 * (cosh(w * c) - 1)
    return a, g0 + mean / EA1


def loop(motion_of, P):
    """Energy per cycle +-P of a system with like unloading (Masing): 4 P f(P) - 8 integral of f, by Gauss's rule on
    panels.
    """
    x, weight = np.polynomial.legendre.leggauss(12)
    edges = np.linspace(0, P, 41)
    area = sum(
        (b - a) / 2 * sum(w_ * motion_of((a + b) / 2 + (b - a) / 2 * x_) for x_, w_ in zip(x, weight, strict=True))
        for a, b in zip(edges[:-1], edges[1:], strict=True)
    )
    return 4 * P * motion_of(P) - 8 * area


def order(errors):
    return np.log2(abs(errors[0] / errors[-1])) / (len(errors) - 1)


# Check 25 in N and mm: two equal strips EA 8e6 N, L 80 mm, k 4000 N/mm2, q_l 300 N/mm; width 50, so k_t 80 and mu p 6
EQUAL = {"EA1": 8e6, "EA2": 8e6, "k": 4000.0, "L": 80.0}


def equal(cells):
    return Strips(80.0, 50.0, cells, (8e6, 8e6), layer=80.0)


def test_stuck_stiffness_and_onset():
    """Onset 16173.39 N (check 25); the stuck motion and the largest traction of an elastic step, second order."""
    motion, steepest = stuck(**EQUAL, P=1.0)
    assert 300 / steepest == pytest.approx(16173.39, abs=0.005)
    errors = []
    for cells in (50, 100, 200, 400):
        made = step(equal(cells), 6.0, LINE, load=16000.0)
        assert not made.slipping.any() and made.dissipation == 0.0
        errors.append(made.state.motion[0] / (16000 * motion) - 1)
    assert abs(errors[-1]) < 1e-6 and order(errors) == pytest.approx(2, abs=0.1)


def test_slip_from_both_ends():
    """At 20400 N: extension .2008055 mm and W(+-) 298.20 mJ, W(0..P..0) 0 (check 25), second order."""
    assert both_ends(**EQUAL, q_l=300.0, P=20400.0)[3] == pytest.approx(0.2008055, abs=5e-8)

    def motion_of(P):
        linear, steepest = stuck(**EQUAL, P=P)
        return linear if steepest <= 300 else both_ends(**EQUAL, q_l=300.0, P=P)[3]

    lost = loop(motion_of, 20400.0)
    assert lost == pytest.approx(298.20, abs=0.005)
    motions, energies = [], []
    for cells in (50, 100, 200):
        up, down, again, off = march(equal(cells), 6.0, LINE, loads=[20400.0, -20400.0, 20400.0, 0.0], tol=1e-9)
        motions.append(up.state.motion[0] / both_ends(**EQUAL, q_l=300.0, P=20400.0)[3] - 1)
        energies.append((down.dissipation + again.dissipation) / lost - 1)
        assert off.dissipation == 0.0
    assert abs(motions[-1]) < 1e-6 and abs(energies[-1]) < 2e-5
    assert order(motions) > 1.9 and order(energies) > 1.9


@pytest.mark.parametrize(("P", "ends"), [(12000.0, 1), (22000.0, 2)])
def test_unequal_strips(P, ends):
    """EA2 = EA1/3: slip begins at x = 0, where the softer strip is pulled, and comes to the other end later."""
    EA1, EA2, k, L, q_l = 9e6, 3e6, 4000.0, 80.0, 300.0
    errors = []
    for cells in (100, 200, 400):
        made = step(Strips(L, 50.0, cells, (EA1, EA2), layer=80.0), 6.0, LINE, load=P)
        x = np.flatnonzero(~made.slipping)
        a0, aL = x[0] * L / cells, L - (x[-1] + 1) * L / cells
        if ends == 1:
            a, motion = one_end(EA1, EA2, k, q_l, L, P)
            assert aL == 0.0
        else:
            _, a, a_other, motion, _ = both_ends(EA1, EA2, k, q_l, L, P)
            assert aL == pytest.approx(a_other, abs=1.01 * L / cells) and a_other > 0
        assert a0 == pytest.approx(a, abs=1.01 * L / cells)
        errors.append(made.state.motion[0] / motion - 1)
    assert (np.abs(errors) < [2e-5, 5e-6, 2e-6]).all()


def test_swapped_strips_are_mirrored():
    first = step(Strips(80.0, 50.0, 200, (9e6, 3e6), layer=80.0), 6.0, LINE, load=12000.0)
    other = step(Strips(80.0, 50.0, 200, (3e6, 9e6), layer=80.0), 6.0, LINE, load=12000.0)
    assert np.allclose(first.state.traction[:, ::-1], other.state.traction, atol=1e-5)
    assert first.state.motion == pytest.approx(other.state.motion, rel=1e-7)


def test_one_strip_on_a_rigid_base():
    """Pulled at x = L: P = q_l a + (q_l/beta) tanh(beta (L - a)); check 26's long strip, W 1.0223 J at r = 1.6."""
    EA, k, q_l, L = 7e6, 2000.0, 200.0, 600.0
    beta = sqrt(k / EA)
    onset = q_l / beta * tanh(beta * L)
    P = 1.6 * onset
    a = brentq(lambda a: q_l * a + q_l / beta * tanh(beta * (L - a)) - P, 0, L)
    motion = q_l / k + q_l * a / (EA * beta) * tanh(beta * (L - a)) + q_l * a**2 / (2 * EA)
    for layer_side in ("first", "second"):
        stiffness = (EA, np.inf) if layer_side == "first" else (np.inf, EA)
        up, down, again = march(Strips(L, 40.0, 1200, stiffness, layer=50.0), 5.0, LINE, loads=[P, -P, P])
        # The motion is that of the pulled ends: of the strip's loaded end against the base.
        assert up.state.motion[0] == pytest.approx(motion, rel=1e-5)
        assert down.dissipation + again.dissipation == pytest.approx(1022.3, abs=0.3)
        assert np.flatnonzero(up.slipping).size * L / 1200 == pytest.approx(a, abs=0.51)


# Check 28: two equal steel bars, t 12, b 60, overlap 100, p 60, mu .2, E 210 GPa
BARS = {"length": 100.0, "width": 60.0, "stiffness": (210e3 * 720, 210e3 * 720)}


def stuck_motion(**kind):
    """Motion of the stuck bars under 1000 N, the second-order error of two grids taken out."""
    coarse, fine = (
        step(Strips(**BARS, cells=cells, **kind), 1e6, LINE, load=1000.0, tol=1e-9).state.motion[0]
        for cells in (500, 1000)
    )
    return (4 * fine - coarse) / 3


@pytest.mark.parametrize(("k_t", "percent"), [(3000.0, "41.616"), (12000.0, "20.496"), (120000.0, "6.4807")])
def test_compliance_error_of_a_layer(k_t, percent):
    """Stuck, against rigid stick, where the bars share the pull equally: P L/(EA1 + EA2)."""
    rigid = 1000.0 * 100 / (2 * 210e3 * 720)
    decimals = len(percent.split(".")[1])
    assert 100 * (stuck_motion(layer=k_t) / rigid - 1) == pytest.approx(float(percent), abs=0.51 * 10**-decimals)


@pytest.mark.parametrize(
    ("nu", "per_area", "percents"),
    [(0.0, 13125, ("22.54", "7.36", ".874")), (0.3, 10096, ("20.96", "6.58", ".755"))],
)
def test_compliance_error_with_shear_through_the_thickness(nu, per_area, percents):
    """Against rigid stick of the same bars with t/(3G) of both."""
    shear = 2 * float(thickness_compliance(12.0, 210e3 / 2 / (1 + nu)))
    assert 1 / shear == pytest.approx(per_area, abs=0.5)
    reference = stuck_motion(shear=shear)
    for k_t, percent in zip((3000.0, 12000.0, 120000.0), percents, strict=True):
        decimals, error = len(percent.split(".")[1]), stuck_motion(layer=k_t, shear=shear) / reference - 1
        assert 100 * error == pytest.approx(float(percent), abs=0.51 * 10**-decimals)


@pytest.mark.parametrize(
    ("k_t", "total", "elastic", "true"),
    [(3000.0, 4.13, 4.00, 0.13), (12000.0, 2.5677, 1.00, 1.57), (120000.0, 2.1168, 0.1, 2.017)],
)
def test_split_of_the_end_motion(k_t, total, elastic, true):
    """At 30 kN, relative motion at the overlap's ends in um = elastic slip + true slip; the split is read off the
    state.

    The ends lie half a cell outside the outer cells' middles."""
    cells = 2000
    body = Strips(**BARS, cells=cells, layer=k_t)
    made = step(body, 12.0, LINE, load=30e3)
    parts = made.split(body, LINE)
    assert np.allclose(parts.motion, parts.slip + parts.elongation + parts.bulk, atol=1e-6 * parts.motion.max())

    def at_end(field):
        return 1e3 * (1.5 * field[0, 0] - 0.5 * field[0, 1]), 1e3 * (1.5 * field[0, -1] - 0.5 * field[0, -2])

    exact = both_ends(210e3 * 720, 210e3 * 720, 60 * k_t, 720.0, 100.0, 30e3)[4]
    assert at_end(parts.elongation) == pytest.approx([elastic, elastic], abs=5e-3)
    assert at_end(parts.slip) == pytest.approx([true, true], abs=5e-3)
    assert sum(at_end(parts.slip + parts.elongation)) / 2 == pytest.approx(total, abs=0.5e-2 if k_t == 3000 else 0.5e-4)
    assert sum(at_end(parts.slip + parts.elongation)) / 2e3 == pytest.approx(exact, rel=2e-5)


# The compliance itself


@pytest.mark.parametrize("stiffness", [(8e6, 8e6), (8e6, 2e6), (2e6, 8e6), (np.inf, 2e6), (2e6, np.inf)])
def test_running_sums_against_the_kernel(stiffness):
    """Means over cells of (L - max(x, xi))/EA1 + min(x, xi)/EA2, whose kink costs h/6 on the diagonal; and the near
    inverse.
    """
    rng = np.random.default_rng(3)
    n, (EA1, EA2), layer = 40, stiffness, np.exp(rng.normal(size=40)) * 3000
    body = Strips(80.0, 60.0, n, stiffness, layer=layer, shear=3e-4)
    x = (np.arange(n) + 0.5) * 2.0
    kernel = (
        (80 - np.maximum.outer(x, x)) / EA1 + np.minimum.outer(x, x) / EA2 - np.eye(n) * 2.0 / 6 * (1 / EA1 + 1 / EA2)
    )
    C = 120.0 * kernel + np.diag(1 / layer + 3e-4)
    assert np.allclose([body.apply(e[None])[0] for e in np.eye(n)], C, rtol=1e-12, atol=1e-12 * C.max())
    assert np.linalg.eigvalsh(np.diag(body.largest()) - C).min() > -1e-12 * C.max()
    fixed, extra = rng.random(n) < 0.4, rng.random(n) * 1e-4
    go, u = ~fixed, rng.normal(size=n)
    q = np.zeros(n)
    q[go] = np.linalg.solve((C + np.diag(extra))[np.ix_(go, go)], u[go])
    assert np.allclose(body.near_inverse(extra, fixed)((u * go)[None])[0], q, rtol=1e-9, atol=1e-9 * np.abs(q).max())
