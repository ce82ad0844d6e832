"""Pressed contacts in partial slip against potential theory, done numerically from the tractions alone.

A round traction q(r) moves the surface by its ring potential phi(r) = integral of q over the distance: pressing by
phi/(pi E*), shear by phi/(4 pi G*) (mean over the directions). A plane one moves it by -2/(pi E*) times the integral of
q ln|x - s|.
Basis derived, but for the numbers of the checks, whose digits are as printed.
"""

from functools import cache
from math import inf, isfinite, log, nan, pi, sqrt

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import ellipe, ellipkm1

from slip.friction.closed import bodies, cylinder, flat, loops, powerlaw, sphere, strip, superposition

E, NU, MU = 210e3, 0.3, 0.3
E_STAR = bodies.normal_modulus(E, NU, E, NU)
G = bodies.shear_modulus(E, NU)
G_STAR = bodies.shear_pair_modulus(G, NU, G, NU)
RHO = 4 * G_STAR / E_STAR
CLOSE = 1e-9
POTENTIALS = "potential theory of the half-space"


# Checks 20 to 22: steel on steel, mu 0.3


def test_check_20_sphere(validate):
    P, R = 100.0, 10.0
    Q, a = 0.5 * MU * P, sphere.contact_radius(P, R, E_STAR)
    k_t = bodies.circle_shear_stiffness(a, G_STAR)
    for what, printed, got, unit in (
        ("contact radius", "0.18663", a, "mm"),
        ("peak pressure", "1370.9", sphere.peak_pressure(P, a), "MPa"),
        ("shear stiffness", "35467", k_t, "N/mm"),
        ("shear over normal stiffness", "0.82353", k_t / bodies.circle_normal_stiffness(a, E_STAR), ""),
        ("stick over contact radius", "0.79370", sphere.stick_ratio(Q, P, MU), ""),
        ("displacement", "0.46950", sphere.displacement(Q, P, MU, a, G_STAR) * 1e3, "um"),
        ("energy per cycle", "1.07238e-3", sphere.energy(Q, P, MU, a, G_STAR), "mJ"),
        ("energy by the small-load form", "7.049e-4", sphere.small_load_energy(Q, P, MU, a, G_STAR), "mJ"),
    ):
        validate(20, f"steel sphere, Q at half of mu P: {what}", POTENTIALS, "derived", printed, got, unit=unit)


def test_check_21_cylinder(validate):
    P, R = 200.0, 50.0
    Q, a = 0.5 * MU * P, cylinder.contact_half_width(P, R, E_STAR)
    p_0 = cylinder.peak_pressure(P, a)
    for what, printed, got, unit in (
        ("half-width", "0.33219", a, "mm"),
        ("peak pressure", "383.29", p_0, "MPa"),
        ("stick over contact width", "0.70711", cylinder.stick_ratio(Q, P, MU), ""),
        ("stress at the edge", "162.62", cylinder.edge_stress(0.5, MU, p_0), "MPa"),
        ("energy per cycle", "1.12924e-3", cylinder.energy(Q, P, MU, E_STAR), "mJ/mm"),
    ):
        validate(21, f"steel cylinder, Q at half of mu P: {what}", POTENTIALS, "derived", printed, got, unit=unit)


def test_check_22_flat_punch(validate):
    for what, printed, got in (
        ("shear stiffness", "9.5023e5", bodies.circle_shear_stiffness(5.0, G_STAR)),
        ("normal stiffness", "1.15385e6", bodies.circle_normal_stiffness(5.0, E_STAR)),
    ):
        validate(22, f"flat steel punch, radius 5 mm: {what}", POTENTIALS, "derived", printed, got, unit="N/mm")


# Numerical potentials


@cache
def unit_nodes(n):
    x, w = np.polynomial.legendre.leggauss(n)
    v = (x + 1) / 2
    return v**4 * (35 - 84 * v + 70 * v**2 - 20 * v**3), 140 * v**3 * (1 - v) ** 3 * w / 2


def nodes(*ends, n=100):
    """Points and weights over the pieces between `ends`, drawn towards every end so that roots and logs do no harm."""
    place, weight = unit_nodes(n)
    pieces = [(lo, hi) for lo, hi in zip(ends[:-1], ends[1:], strict=True) if hi > lo]
    return (
        np.concatenate([lo + (hi - lo) * place for lo, hi in pieces]),
        np.concatenate([(hi - lo) * weight for lo, hi in pieces]),
    )


def breaks(low, high, *inner):
    return [low, *sorted(x for x in inner if low < x < high), high]


def ring_potential(q, r, a, *kinks):
    s, w = nodes(*breaks(0.0, a, r, *kinks))
    return np.sum(w * q(s) * 4 * s / (r + s) * ring_integral((r - s) ** 2 / (r + s) ** 2))


def ring_integral(one_less):
    """K(m) from 1 - m, which keeps the logarithm at s = r."""
    return ellipkm1(np.maximum(one_less, 1e-300))


def line_potential(q, x, a, *kinks):
    s, w = nodes(*breaks(-a, a, x, *kinks))
    return -np.sum(w * q(s) * np.log(np.maximum(np.abs(x - s), 1e-300)))


# Approach over the gap at the edge: integral of f'(r) t dr/sqrt(t^2 - r^2) for f = r^n at t = 1, r = sin x
KAPPA = {n: quad(lambda x, n=n: n * np.sin(x) ** (n - 1), 0, pi / 2)[0] for n in (1, 1.5, 2, 4)}
ROUND = {
    "sphere": (sphere.profile(10.0, E_STAR), lambda r: r**2 / 20),
    "cone": (powerlaw.profile(0.02, 1.0, E_STAR), lambda r: 0.02 * r),
    "power 1.5": (powerlaw.profile(0.03, 1.5, E_STAR), lambda r: 0.03 * r**1.5),
    "power 4": (powerlaw.profile(0.5, 4.0, E_STAR), lambda r: 0.5 * r**4),
    "rounded": (flat.rounded_profile(0.2, 10.0, E_STAR), lambda r: max(0.0, r - 0.2) ** 2 / 20),
    "hardly left the flat": (flat.rounded_profile(1.0, 10.0, E_STAR), lambda r: max(0.0, r - 1.0) ** 2 / 20),
}
PLANE = {
    "cylinder": (cylinder.profile(50.0, E_STAR, 1e4), lambda x: x**2 / 100, 0.0),
    "rounded strip": (strip.profile(0.2, 50.0, E_STAR, 1e4), lambda x: max(0.0, abs(x) - 0.2) ** 2 / 100, 0.2),
    "cylinder as strip": (strip.profile(0.0, 50.0, E_STAR, 1e4), lambda x: x**2 / 100, 0.0),
}
P = 100.0


def flat_part(name):
    return {"rounded": 0.2, "hardly left the flat": 1.0}.get(name, 0.0)


@pytest.mark.parametrize("name", ROUND)
def test_round_pressure_fits_the_gap(name):
    """Inside, the potential of the pressure is the approach less the gap; its integral is the force."""
    profile, gap = ROUND[name]
    a, b = float(profile.radius(P)), flat_part(name)
    s, w = nodes(*breaks(0.0, a, b))
    assert np.sum(w * 2 * pi * s * profile.pressure(s, P)) == pytest.approx(P, rel=1e-7)
    for r in (0.01, 0.4, 0.85, 0.999):
        moved = ring_potential(lambda s: profile.pressure(s, P), r * a, a, b) / (pi * E_STAR)
        assert moved + gap(r * a) == pytest.approx(profile.approach(P), rel=2e-6)
    step = 1e-4 * P
    slope = (profile.approach(P + step) - profile.approach(P - step)) / (2 * step)
    assert profile.stiffness(P) == pytest.approx(1 / slope, rel=1e-6)
    assert profile.pressure(np.array([1.001, 3.0]) * a, P) == pytest.approx([0.0, 0.0], abs=0)
    assert profile.radius(0.0) == pytest.approx(b, abs=1e-12) and profile.approach(0.0) == 0.0


@pytest.mark.parametrize("q", [0.2, 0.7])
@pytest.mark.parametrize("name", ROUND)
def test_round_shear_sticks_where_it_may(name, q):
    """One displacement all over the stick zone, friction limit outside; energy from the slip along it."""
    profile, _ = ROUND[name]
    Q, b = q * MU * P, flat_part(name)
    a, c = float(profile.radius(P)), float(superposition.stick_radius(profile, Q, P, MU))

    def traction(r):
        return superposition.traction(profile, r, Q, P, MU)

    s, w = nodes(*breaks(0.0, a, b, c))
    assert np.sum(w * 2 * pi * s * traction(s)) == pytest.approx(Q, rel=1e-6)
    within = s < c
    assert np.all(traction(s[within]) < MU * profile.pressure(s[within], P))
    assert traction(s[~within]) == pytest.approx(MU * profile.pressure(s[~within], P), rel=1e-6)
    delta = superposition.displacement(profile, Q, P, MU, RHO)

    def left_over(r):
        return delta - ring_potential(traction, r, a, b, c) / (4 * pi * G_STAR)

    assert [left_over(x * c) for x in (0.02, 0.5, 0.97)] == pytest.approx([0.0] * 3, abs=2e-6 * delta)
    r, w = nodes(c, a, n=24)
    slip = np.array([left_over(x) for x in r])
    assert np.all(slip > -1e-6 * delta)
    lost = 4 * np.sum(w * slip * traction(r) * 2 * pi * r)
    assert superposition.energy(profile, Q, P, MU, RHO) == pytest.approx(lost, rel=5e-5)


@pytest.mark.parametrize("name", PLANE)
def test_plane_pressure_fits_the_gap(name):
    profile, gap, b = PLANE[name]
    a = float(profile.radius(P))
    s, w = nodes(*breaks(-a, a, -b, b))
    assert np.sum(w * profile.pressure(s, P)) == pytest.approx(P, rel=1e-9)

    def moved(x):
        return 2 / (pi * E_STAR) * line_potential(lambda s: profile.pressure(s, P), x, a, -b, b)

    for x in (-0.95, 0.1, 0.6, 0.999):
        assert moved(0.0) - moved(x * a) == pytest.approx(gap(x * a), abs=1e-8 * moved(0.0))
    far = 2 / (pi * E_STAR) * P * log(1e4)
    assert profile.approach(P) == pytest.approx(moved(0.0) + far, rel=1e-8)
    step = 1e-4 * P
    slope = (profile.approach(P + step) - profile.approach(P - step)) / (2 * step)
    assert profile.stiffness(P) == pytest.approx(1 / slope, rel=1e-6)


@pytest.mark.parametrize("q", [0.2, 0.7])
@pytest.mark.parametrize("name", PLANE)
def test_plane_shear_sticks_where_it_may(name, q):
    profile, _, b = PLANE[name]
    Q = q * MU * P
    a, c = float(profile.radius(P)), float(superposition.stick_radius(profile, Q, P, MU))

    def traction(x):
        return superposition.traction(profile, x, Q, P, MU)

    def moved(x):
        return 2 / (pi * E_STAR) * line_potential(traction, x, a, -b, b, -c, c)

    s, w = nodes(*breaks(-a, a, -b, b, -c, c))
    assert np.sum(w * traction(s)) == pytest.approx(Q, rel=1e-9)
    scale = moved(0.0)
    assert [moved(x * c) for x in (-0.97, 0.5)] == pytest.approx([scale, scale], rel=1e-8)
    assert superposition.displacement(profile, Q, P, MU, 1.0) == pytest.approx(
        scale + 2 / (pi * E_STAR) * Q * log(1e4), rel=1e-8
    )
    x, w = nodes(c, a, n=40)
    lost = 2 * 4 * np.sum(w * traction(x) * np.array([scale - moved(y) for y in x]))  # both sides of the stick zone
    assert superposition.energy(profile, Q, P, MU, 1.0) == pytest.approx(lost, rel=1e-6)
    edge = 2 / pi * np.sum(nodes(*breaks(-a, a, -b, b, -c, c))[1] * traction(s) / (a + s))
    if name == "cylinder":
        assert cylinder.edge_stress(q, MU, cylinder.peak_pressure(P, a)) == pytest.approx(edge, rel=2e-7)
    else:
        assert strip.edge_stress(Q, P, MU, b, 50.0, E_STAR) == pytest.approx(edge, rel=2e-7)


# Closed forms against the general rule


@pytest.mark.parametrize("q", [1e-4, 0.1, 0.5, 0.95, 0.999])
def test_sphere_against_the_rule(q):
    R, Q = 10.0, q * MU * P
    profile, a = sphere.profile(R, E_STAR), sphere.contact_radius(P, R, E_STAR)
    common = {"Q": Q, "P": P, "mu": MU}
    assert sphere.displacement(**common, a=a, G_star=G_STAR) == pytest.approx(
        superposition.displacement(profile, **common, rho=RHO), rel=1e-9
    )
    assert sphere.tangent_stiffness(**common, a=a, G_star=G_STAR) == pytest.approx(
        superposition.tangent_stiffness(profile, **common, rho=RHO), rel=CLOSE
    )
    assert sphere.energy(**common, a=a, G_star=G_STAR) == pytest.approx(
        superposition.energy(profile, **common, rho=RHO), rel=1e-8
    )
    r = np.linspace(0, 1.2, 13) * a
    assert sphere.traction(r, **common, a=a) == pytest.approx(
        superposition.traction(profile, r, **common), abs=1e-9 * MU * sphere.peak_pressure(P, a)
    )


@pytest.mark.parametrize("q", [1e-4, 0.1, 0.5, 0.95, 0.999])
def test_cylinder_against_the_rule(q):
    R, D, Q = 50.0, 300.0, q * MU * P
    profile, a = cylinder.profile(R, E_STAR, D), cylinder.contact_half_width(P, R, E_STAR)
    common = {"Q": Q, "P": P, "mu": MU}
    assert cylinder.displacement(**common, a=a, E_star=E_STAR, D=D) == pytest.approx(
        superposition.displacement(profile, **common, rho=1.0), rel=1e-9
    )
    assert cylinder.tangent_stiffness(**common, a=a, E_star=E_STAR, D=D) == pytest.approx(
        superposition.tangent_stiffness(profile, **common, rho=1.0), rel=CLOSE
    )
    assert cylinder.energy(**common, E_star=E_STAR) == pytest.approx(
        superposition.energy(profile, **common, rho=1.0), rel=1e-8
    )


@pytest.mark.parametrize("n", [1.0, 1.5, 2.0, 4.0])
@pytest.mark.parametrize("q", [1e-3, 0.5, 0.95])
def test_power_law_against_the_rule_and_its_text(n, q):
    A, Q = 0.02, q * MU * P
    profile = powerlaw.profile(A, n, E_STAR)
    assert powerlaw.shape_factor(n) == pytest.approx(KAPPA[n], rel=1e-9)
    a = powerlaw.contact_radius(P, A, n, E_STAR, KAPPA[n])
    assert powerlaw.force(a, powerlaw.approach(a, A, n, KAPPA[n]), n, E_STAR) == pytest.approx(P, rel=CLOSE)
    common = {"Q": Q, "P": P, "mu": MU}
    f = {"a": a, "n": n, "G_star": G_STAR}
    assert powerlaw.displacement(**common, **f) == pytest.approx(
        superposition.displacement(profile, **common, rho=RHO), rel=1e-9
    )
    u = powerlaw.displacement(**common, **f)
    area = quad(lambda x: powerlaw.displacement(x, P, MU, **f), 0, Q, epsabs=0, epsrel=1e-12)[0]
    assert powerlaw.energy(**common, **f) == pytest.approx(loops.masing_energy(Q, u, area), rel=1e-6)
    assert powerlaw.secant_stiffness(**common, **f) == pytest.approx(Q / u, rel=CLOSE)
    assert powerlaw.stick_ratio(**common, n=n) * a == pytest.approx(
        superposition.stick_radius(profile, **common), rel=CLOSE
    )


def test_ends_of_the_power_law():
    """n = 2 is the sphere, n large the flat punch; at gross slip a sphere loses 0.2 of 4 Q u, a cone 1/3."""
    a, Q = 0.3, 10.0
    for function in (powerlaw.displacement, powerlaw.energy, powerlaw.tangent_stiffness):
        same = getattr(sphere, function.__name__)(Q, P, MU, a, G_STAR)
        assert function(Q, P, MU, a, 2.0, G_STAR) == pytest.approx(same, rel=1e-9)
    r = np.linspace(0, a, 7)
    assert powerlaw.pressure(r, P, a, 2.0) == pytest.approx(sphere.pressure(r, P, a), rel=CLOSE)
    assert powerlaw.traction(r, -Q, P, MU, a, 2.0) == pytest.approx(sphere.traction(r, -Q, P, MU, a), rel=CLOSE)
    assert powerlaw.displacement(Q, P, MU, a, 1e7, G_STAR) == pytest.approx(
        flat.punch_displacement(Q, P, MU, a, G_STAR), rel=1e-6
    )
    nearly = MU * P * (1 - 1e-12)
    for n, ratio in ((2.0, 0.2), (1.0, 1 / 3), (50.0, 1 / 101)):
        W, u = powerlaw.energy(nearly, P, MU, a, n, G_STAR), powerlaw.displacement(nearly, P, MU, a, n, G_STAR)
        assert loops.energy_ratio(W, nearly, u) == pytest.approx(ratio, rel=1e-5)
    W, u = sphere.energy(nearly, P, MU, a, G_STAR), sphere.displacement(nearly, P, MU, a, G_STAR)
    assert loops.energy_ratio(W, nearly, u) == pytest.approx(0.2, rel=1e-5)


def test_rounded_ends():
    """No flat part is the sphere or the cylinder; the radius is the inverse of the force."""
    assert flat.rounded_radius(P, 0.0, 10.0, E_STAR) == pytest.approx(sphere.contact_radius(P, 10.0, E_STAR), rel=CLOSE)
    a = sphere.contact_radius(P, 10.0, E_STAR)
    r = np.linspace(0, 0.99, 8) * a
    assert flat.rounded_pressure(r, P, 0.0, 10.0, E_STAR) == pytest.approx(sphere.pressure(r, P, a), rel=1e-8)
    assert strip.half_width(P, 0.0, 50.0, E_STAR) == pytest.approx(
        cylinder.contact_half_width(P, 50.0, E_STAR), rel=CLOSE
    )
    for b in (0.01, 0.3, 2.0):
        for reach in (1.02, 1.5, 4.0):
            assert flat.rounded_radius(flat.rounded_force(reach * b, b, 9.0, E_STAR), b, 9.0, E_STAR) == pytest.approx(
                reach * b, rel=CLOSE
            )
            assert strip.half_width(strip.force(reach * b, b, 9.0, E_STAR), b, 9.0, E_STAR) == pytest.approx(
                reach * b, rel=CLOSE
            )
    s = 1e-6  # a narrow rim of s = sqrt(a^2 - b^2): P = 2/3 E* s^3/R, and 1/3 of it per length of the strip
    a = np.sqrt(1 + s**2)
    assert flat._force(s, 1.0, 9.0, E_STAR) == pytest.approx(2 / 3 * E_STAR * s**3 / 9, rel=1e-9)
    assert strip._force(s, 1.0, 9.0, E_STAR) == pytest.approx(1 / 3 * E_STAR * s**3 / 9, rel=1e-9)
    for function in (flat.rounded_force, strip.force):
        with pytest.raises(ValueError, match="at least that of the flat"):
            function(0.9, 1.0, 9.0, E_STAR)


def test_rounded_radius_from_the_printed_force():
    """The force as the text prints it, by an independent root."""
    b, R = 0.25, 12.0
    a = brentq(
        lambda a: E_STAR / (3 * R) * ((4 * a**2 - b**2) * sqrt(a**2 - b**2) - 3 * a**2 * b * np.arccos(b / a)) - P,
        b,
        3.0,
        xtol=1e-15,
    )
    assert flat.rounded_radius(P, b, R, E_STAR) == pytest.approx(a, rel=1e-10)


# Flat punch


def test_flat_punch():
    """Even displacement under the traction, all stick below mu P, infinite edge, no loop."""
    a, Q = 2.0, 12.0
    for r in (0.1, 1.0, 1.9):
        moved = ring_potential(lambda s: flat.punch_traction(s, Q, P, MU, a), r, a) / (4 * pi * G_STAR)
        assert moved == pytest.approx(flat.punch_displacement(Q, P, MU, a, G_STAR), rel=1e-5)
        pressed = ring_potential(lambda s: flat.punch_pressure(s, P, a), r, a) / (pi * E_STAR)
        assert pressed == pytest.approx(flat.punch_approach(P, a, E_STAR), rel=1e-5)
    assert flat.punch_pressure(np.array([a, 1.1 * a]), P, a) == pytest.approx([inf, 0.0])
    assert flat.punch_traction(1.0, -Q, P, MU, a) == -flat.punch_traction(1.0, Q, P, MU, a)


# Edge stresses


def edge_derivatives(q, a, c):
    """phi'(a) of the ring potential, and Psi'''(a) of the potential with the distance itself, from the tractions."""
    s, w = nodes(0.0, c, a, n=400)
    resolved = (s > 1e-9 * a) & (s < a * (1 - 1e-12))
    s, w = s[resolved], w[resolved]
    m = 4 * a * s / (a + s) ** 2
    one_less = ((a - s) / (a + s)) ** 2
    K, El = ring_integral(one_less), ellipe(np.minimum(m, 1.0))
    slope = (El - one_less * K) / (2 * m * one_less) * 4 * s * (s - a) / (a + s) ** 3  # dK/dm dm/dr
    d_phi = np.sum(w * q(s) * 4 * s * (slope / (a + s) - K / (a + s) ** 2))
    r, v = nodes(0.0, c, a, n=40)
    phi_a = ring_potential(q, a, a, c)
    d_psi = np.sum(v * np.array([ring_potential(q, x, a, c) for x in r]) * r) / a  # of Psi'' + Psi'/r = phi
    dd_psi = phi_a - d_psi / a
    return d_phi, d_phi - dd_psi / a + d_psi / a**2


@pytest.mark.parametrize("nu", [0.0, 0.3, 0.5])
@pytest.mark.parametrize("q", [0.1, 0.5, 0.9])
def test_edge_stress_of_the_sphere(q, nu):
    """Surface strains of the traction by potentials: sigma = ((1 + nu) phi' - nu Psi''')/pi, tension at the rear."""
    a, Q = 0.8, q * MU * P
    c = float(sphere.stick_ratio(Q, P, MU)) * a
    d_phi, ddd_psi = edge_derivatives(lambda r: sphere.traction(r, Q, P, MU, a), a, c)
    stress = -((1 + nu) * d_phi - nu * ddd_psi) / pi
    p_0 = sphere.peak_pressure(P, a)
    assert sphere.sheared_edge_stress(c / a, MU, p_0, nu) == pytest.approx(stress, rel=1e-5)


def test_edge_stress_of_the_sliding_sphere():
    """Johnson, Contact Mechanics, 1985 (memory): p_0 [(1 - 2 nu)/3 + mu pi (4 + nu)/8]."""
    for nu in (0.0, 0.3):
        whole = sphere.pressed_edge_stress(900.0, nu) + sphere.sheared_edge_stress(0.0, MU, 900.0, nu)
        assert whole == pytest.approx(900 * ((1 - 2 * nu) / 3 + MU * pi * (4 + nu) / 8), rel=1e-12)


class PlaneGrid:
    """Boundary elements of a pressed strip under shear and a strain of one body: stick and slip found by trial."""

    def __init__(self, a, n):
        self.h = 2 * a / n
        self.x = -a + self.h * (np.arange(n) + 0.5)
        edge = self.x[:, None] - self.x[None, :]
        lo, hi = edge - self.h / 2, edge + self.h / 2
        self.C = -2 / (pi * E_STAR) * ((hi * np.log(abs(hi)) - hi) - (lo * np.log(abs(lo)) - lo))

    def solve(self, bound, Q, strain):
        n = self.x.size
        slipping = np.zeros(n)
        for _ in range(200):
            stuck = slipping == 0
            matrix, right = np.zeros((n + 1, n + 1)), np.zeros(n + 1)
            matrix[:n, :n], right[:n] = np.eye(n), slipping * bound
            matrix[:n][stuck, :n], matrix[:n, n][stuck] = self.C[stuck], -1.0
            right[:n][stuck] = -strain * self.x[stuck]
            matrix[n, :n], right[n] = self.h, Q
            found = np.linalg.solve(matrix, right)
            q, motion = found[:n], found[n]
            left_over = motion - self.C @ q - strain * self.x
            new = np.where(stuck & (abs(q) > bound), np.sign(q), np.where(slipping * left_over < 0, 0, slipping))
            if np.array_equal(new, slipping):
                return q, stuck
            slipping = new
        raise AssertionError("no pattern of stick and slip found")


@pytest.mark.parametrize(("q", "part"), [(0.5, 0.0), (0.5, 0.6), (0.5, -0.7), (0.85, 0.9)])
def test_bulk_tension_shifts_the_stick_zone(q, part):
    """Like bodies, one under `part` of the largest bulk stress, against boundary elements."""
    R, n = 50.0, 240
    a = float(cylinder.contact_half_width(P, R, E_STAR))
    p_0 = cylinder.peak_pressure(P, a)
    largest = cylinder.largest_bulk_stress(q, MU, p_0)
    assert largest == pytest.approx(4 * MU * p_0 * (1 - sqrt(1 - q)), rel=CLOSE)
    s = part * largest
    strain = cylinder.bulk_strain(s, E, NU)
    shift = a * cylinder.shift_ratio(strain, MU, p_0, E_STAR)
    assert shift == pytest.approx(s * a / (4 * MU * p_0), rel=CLOSE, abs=1e-15)
    grid = PlaneGrid(a, n)
    traction, stuck = grid.solve(MU * cylinder.pressure(grid.x, P, a), q * MU * P, strain)
    closed = cylinder.traction(grid.x, q * MU * P, P, MU, a, shift)
    assert traction == pytest.approx(closed, abs=0.02 * MU * p_0)  # the cell at the kink
    c = sqrt(1 - q) * a
    ends = grid.x[stuck][[0, -1]]
    assert ends == pytest.approx([shift - c, shift + c], abs=3 * grid.h)
    # the edge that shear puts in tension, from the tractions
    x, w = nodes(*breaks(-a, a, shift - c, shift + c))
    stress = 2 / pi * np.sum(w * cylinder.traction(x, q * MU * P, P, MU, a, shift) / (a + x)) + s
    assert cylinder.edge_stress(q, MU, p_0, shift / a, s) == pytest.approx(stress, rel=1e-7)


def test_bulk_tension_beyond_the_closed_form():
    with pytest.raises(ValueError, match="march the contact"):
        cylinder.traction(0.0, 15.0, P, MU, 1.0, shift=0.9)
    with pytest.raises(ValueError, match="march the contact"):
        cylinder.edge_stress(0.5, MU, 400.0, 0.3, 100.0)
    for q in (1.0, 1.2, nan):
        with pytest.raises(ValueError, match="slips wholly at 1 of mu P"):
            cylinder.largest_bulk_stress(q, MU, 400.0)
    for s in (-0.1, 1.1, nan):
        with pytest.raises(ValueError, match="between 0 and 1"):
            sphere.sheared_edge_stress(s, MU, 400.0, NU)
    a, p_0 = 0.3, 400.0
    s = cylinder.largest_bulk_stress(0.5, MU, p_0)
    at_edge = cylinder.shift_ratio(s / 2 / E_STAR, MU, p_0, E_STAR) * (1 - 1e-12)
    assert isfinite(cylinder.edge_stress(0.5, MU, p_0, at_edge, s))
    assert at_edge * a + sqrt(0.5) * a == pytest.approx(a)


# Two bodies


def test_pairs_of_bodies():
    E_1, nu_1, E_2, nu_2 = 210e3, 0.3, 70e3, 0.33
    G_1, G_2 = bodies.shear_modulus(E_1, nu_1), bodies.shear_modulus(E_2, nu_2)
    # each body alone against a rigid one; their compliances add
    alone = [bodies.normal_modulus(e, n, inf, 0.3) for e, n in ((E_1, nu_1), (E_2, nu_2))]
    assert 1 / bodies.normal_modulus(E_1, nu_1, E_2, nu_2) == pytest.approx(sum(1 / m for m in alone), rel=1e-12)
    alone = [bodies.shear_pair_modulus(g, n, inf, 0.3) for g, n in ((G_1, nu_1), (G_2, nu_2))]
    assert 1 / bodies.shear_pair_modulus(G_1, nu_1, G_2, nu_2) == pytest.approx(sum(1 / m for m in alone), rel=1e-12)
    assert bodies.like_stiffness_ratio(NU) == pytest.approx(RHO, rel=1e-12)
    # Dundurs' beta in its other form: (G_1 (m_2 - 1) - G_2 (m_1 - 1))/(G_1 (m_2 + 1) + G_2 (m_1 + 1)), m = 3 - 4 nu
    m_1, m_2 = 3 - 4 * nu_1, 3 - 4 * nu_2
    other = (G_1 * (m_2 - 1) - G_2 * (m_1 - 1)) / (G_1 * (m_2 + 1) + G_2 * (m_1 + 1))
    assert bodies.mismatch(E_1, nu_1, E_2, nu_2) == pytest.approx(-other, rel=1e-12)
    assert bodies.mismatch(E, NU, E, NU) == 0
    assert bodies.mismatch(E, 0.0, inf, 0.0) == pytest.approx(0.5)


# The limit


WHOLE = [
    lambda Q: sphere.displacement(Q, P, MU, 1.0, G_STAR),
    lambda Q: sphere.energy(Q, P, MU, 1.0, G_STAR),
    lambda Q: sphere.traction(0.1, Q, P, MU, 1.0),
    lambda Q: cylinder.displacement(Q, P, MU, 1.0, E_STAR, 100.0),
    lambda Q: cylinder.energy(Q, P, MU, E_STAR),
    lambda Q: powerlaw.energy(Q, P, MU, 1.0, 1.5, G_STAR),
    lambda Q: flat.punch_displacement(Q, P, MU, 1.0, G_STAR),
    lambda Q: superposition.energy(ROUND["rounded"][0], Q, P, MU, RHO),
    lambda Q: strip.edge_stress(Q, P, MU, 0.1, 9.0, E_STAR),
]


@pytest.mark.parametrize("Q", [30.0, -30.0, 31.0, [3.0, 300.0], nan])
@pytest.mark.parametrize("number", range(len(WHOLE)))
def test_gross_slip_is_said(number, Q):
    with pytest.raises(ValueError, match="slips wholly at 30 N"):
        WHOLE[number](np.array(Q))


def test_an_open_contact_is_said():
    for function in (flat.rounded_radius, strip.half_width):
        for P_open in (-1.0, nan, [1.0, -1.0]):
            with pytest.raises(ValueError, match="at least 0"):
                function(np.array(P_open), 0.1, 9.0, E_STAR)
    for P_open in (0.0, -5.0, nan):
        with pytest.raises(ValueError, match="limit must be above 0"):
            superposition.shear_share(1.0, P_open, MU)
