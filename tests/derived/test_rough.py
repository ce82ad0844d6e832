"""The rough face against the asperities that make it up, each a small sphere. Basis derived, but for printed digits."""

from math import exp, gamma, inf, log, nan, sqrt

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import pbdv

from slip.friction.closed import bodies, loops, rough, sphere

MU = 0.2


def test_check_24_rough_law(validate):
    """p 20, h_rms .8 sqrt(2) um, gamma .48, nu .3, mu .2, 100 mm2."""
    h_rms, rho, P = rough.combined_roughness(0.8e-3, 0.8e-3), bodies.like_stiffness_ratio(0.3), 20 * 100
    assert h_rms == pytest.approx(0.8e-3 * sqrt(2))
    k_n = rough.normal_stiffness(20.0, h_rms, 0.48)
    k_t = rough.shear_stiffness(k_n, rho)
    d_e = rough.elastic_slip_length(MU, 0.48, h_rms, rho)
    assert d_e == pytest.approx(MU * 20 / k_t)
    for what, printed, got, unit in (
        ("normal stiffness", "36828", k_n, "N/mm3"),
        ("shear stiffness", "30329", k_t, "N/mm3"),
        ("elastic slip length", "0.1319", d_e * 1e3, "um"),
        ("displacement at half of mu P", "0.0914", rough.displacement(0.5 * MU * P, P, MU, d_e) * 1e3, "um"),
        ("energy per cycle", "8.38e-3", rough.energy(0.5 * MU * P, P, MU, d_e), "mJ"),
    ):
        validate(24, f"rough face: {what}", "summits, each a small sphere", "derived", printed, got, unit=unit)


def test_check_23_summits(validate):
    source = "summits, each a small sphere"
    got = rough.exponential_summits(3.0, 0.5) * 0.5 / 3.0
    validate(23, "k_n sigma/p, exponential heights", source, "derived", 1, got, 1e-12)
    for separation, printed in ((1, "2.065"), (2, "2.816"), (3, "3.647")):
        got = rough.gaussian_summits(separation)
        validate(23, f"k_n sigma/p, Gaussian heights, separation {separation}", source, "derived", printed, got)


def test_exponential_summits_from_the_pressure():
    """p falls with the separation like the number of summits above it."""

    def pressure(d):
        return quad(lambda z: (z - d) ** 1.5 * exp(-z / 0.7), d, d + 30, epsabs=0, epsrel=1e-11)[0]

    slope = (pressure(1 - 1e-4) - pressure(1 + 1e-4)) / 2e-4
    assert rough.exponential_summits(pressure(1.0), 0.7) == pytest.approx(slope, rel=1e-6)


@pytest.mark.parametrize("h", [-3.0, -0.5, 0.0, 1.0, 2.5, 8.0, 30.0])
def test_gaussian_summits_against_parabolic_cylinder_functions(h):
    """Integral of s^m exp(-(s + h)^2/2) is Gamma(m + 1) exp(-h^2/4) D(-m-1, h): 3/2 times a ratio of two of them."""
    ratio = 1.5 * gamma(1.5) * pbdv(-1.5, h)[0] / (gamma(2.5) * pbdv(-2.5, h)[0])
    assert rough.gaussian_summits(h) == pytest.approx(ratio, rel=1e-10)


def test_gaussian_summits_from_the_pressure():
    """Stiffness as the derivative of a pressure that is integrated over the heights."""

    def pressure(h):
        return quad(lambda z: (z - h) ** 1.5 * exp(-(z**2) / 2), h, h + 12, epsabs=0, epsrel=1e-11)[0]

    step = 1e-4
    slope = (pressure(1.5 - step) - pressure(1.5 + step)) / (2 * step)
    assert rough.gaussian_summits(1.5) == pytest.approx(slope / pressure(1.5), rel=1e-6)


# A face of spherical summits with exponential heights, as the whole and summit by summit

SIGMA, R, E_STAR = 0.8e-3, 0.05, 115e3
RHO = 0.8
G_STAR = RHO * E_STAR / 4


def over_summits(function, start=0.0):
    """Sum over summits of compression w, exponentially rare."""
    return quad(lambda x: function(SIGMA * x) * exp(-x), start, 60, epsabs=0, epsrel=1e-10, limit=400)[0]


def hertz(w):
    return 4 / 3 * E_STAR * sqrt(R) * w**1.5


def sheared(w, delta):
    """Shear force of a summit in partial slip: Cattaneo's rule, from delta = mu/rho (w - c^2/R)."""
    left = w - RHO * delta / MU
    return MU * (hertz(w) - (hertz(left) if left > 0 else 0.0))


@pytest.mark.parametrize("share", [0.02, 0.5, 0.95])
def test_rough_law_summit_by_summit(share):
    """All summits move by one displacement: the weak slip, the strong stick; forces and energies add up."""
    P = over_summits(hertz)
    d_e = MU * SIGMA / RHO
    Q = share * MU * P
    delta = rough.displacement(Q, P, MU, d_e)
    edge = RHO * delta / MU / SIGMA  # summits less compressed than this slip
    total = over_summits(lambda w: sheared(w, delta), edge)
    total += quad(lambda x: MU * hertz(SIGMA * x) * exp(-x), 0, edge)[0]
    assert total == pytest.approx(Q, rel=1e-8)

    def lost(w):
        P_i, a = hertz(w), sqrt(w * R)
        if w * (1 - 1e-9) <= RHO * delta / MU:  # wholly: the sphere's 0.2 of 4 Q u at the edge of slip, then a slider
            first = MU * w / RHO
            return 4 * MU * P_i * (0.2 * first + delta - first)
        return sphere.energy(sheared(w, delta), P_i, MU, a, G_STAR)

    energy = quad(lambda x: lost(SIGMA * x) * exp(-x), 0, edge, epsabs=0, epsrel=1e-9)[0] + over_summits(lost, edge)
    assert rough.energy(Q, P, MU, d_e) == pytest.approx(energy, rel=1e-6)
    step = 1e-6 * MU * P
    slope = (rough.displacement(Q + step, P, MU, d_e) - rough.displacement(Q - step, P, MU, d_e)) / (2 * step)
    area, p = 50.0, P / 50.0
    k_t0 = rough.shear_stiffness(rough.exponential_summits(p, SIGMA), RHO)
    assert rough.tangent_stiffness(Q, P, MU, k_t0) * area == pytest.approx(1 / slope, rel=1e-6)


@pytest.mark.parametrize("q", [1e-5, 0.01, 0.0999, 0.1001, 0.5, 0.99])
def test_rough_energy_against_the_backbone(q):
    P, d_e = 2000.0, 1.3e-4
    Q = q * MU * P
    assert rough.energy(Q, P, MU, d_e) == pytest.approx(
        loops.energy_from_stiffness(lambda x: rough.tangent_stiffness(x, P, MU, MU * P / d_e), Q), rel=1e-9
    )
    u = rough.displacement(Q, P, MU, d_e)
    assert rough.force(u, P, MU, d_e) == pytest.approx(Q, rel=1e-12)
    assert rough.force(-u, P, MU, d_e) == pytest.approx(-Q, rel=1e-12)
    assert rough.secant_stiffness(Q, P, MU, d_e) == pytest.approx(Q / u, rel=1e-12)
    if q > 0.05:
        area = quad(lambda x: -d_e * log(1 - x / (MU * P)), 0, Q, epsabs=0, epsrel=1e-12)[0]
        assert rough.energy(Q, P, MU, d_e) == pytest.approx(loops.masing_energy(Q, u, area), rel=1e-7)


def test_the_ends_of_the_rough_law():
    P, d_e = 2000.0, 1.3e-4
    assert rough.secant_stiffness(0.0, P, MU, d_e) == pytest.approx(MU * P / d_e)
    assert rough.force(inf, P, MU, d_e) == pytest.approx(MU * P)
    q = 1e-6  # small loads: 2/3 mu P d_e q^3
    assert rough.energy(q * MU * P, P, MU, d_e) == pytest.approx(2 / 3 * MU * P * d_e * q**3, rel=1e-5)


# Constant stiffness on a pressure that falls linearly with area


def test_check_30_constant_penalty(validate):
    P, p_0, k_t = 3000.0, 40.0, 5000.0
    got = rough.penalty_energy(0.5 * MU * P, P, MU, p_0, k_t) / (MU * P * MU * p_0 / k_t)
    what = "constant stiffness, pressure linear over the area: energy over mu P (mu p0/k_t)"
    validate(30, what, "sliders, place by place", "derived", "0.0335", got)


@pytest.mark.parametrize("share", [0.1, 0.5, 0.9])
def test_constant_penalty_place_by_place(share):
    """Places of equal area, each with k_t and its own limit, moved back and forth together."""
    P, p_0, k_t, n = 3000.0, 40.0, 5000.0, 20000
    area = 2 * P / p_0 / n
    limit = MU * p_0 * (np.arange(n) + 0.5) / n
    Q = share * MU * P
    delta = rough.penalty_displacement(Q, P, MU, p_0, k_t)
    traction = np.minimum(limit, k_t * delta)
    assert np.sum(traction) * area == pytest.approx(Q, rel=1e-6)
    slip = delta - traction / k_t
    assert rough.penalty_energy(Q, P, MU, p_0, k_t) == pytest.approx(4 * np.sum(traction * slip) * area, rel=1e-5)
    D = k_t * delta / (MU * p_0)
    assert pytest.approx(share, rel=1e-12) == 2 * D - D**2


@pytest.mark.parametrize("Q", [400.0, -400.0, 401.0, [1.0, 500.0], nan])
def test_gross_slip_is_said(Q):
    Q, P = np.array(Q), 2000.0
    for call in (
        lambda: rough.displacement(Q, P, MU, 1e-4),
        lambda: rough.energy(Q, P, MU, 1e-4),
        lambda: rough.tangent_stiffness(Q, P, MU, 1e4),
        lambda: rough.secant_stiffness(Q, P, MU, 1e-4),
        lambda: rough.penalty_displacement(Q, P, MU, 40.0, 1e4),
        lambda: rough.penalty_energy(Q, P, MU, 40.0, 1e4),
    ):
        with pytest.raises(ValueError, match="slips wholly at 400 N"):
            call()
