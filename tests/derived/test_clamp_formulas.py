"""Formulas of the clamp against a second route: equilibrium, work, integrals, closed forms. Basis derived."""

from math import atan, cos, inf, log, pi, sin, sqrt, tan

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import norm

from slip.clamp import losses, springs, thread, tightening

M10 = {"P": 1.5, "d2": 9.026}
CLOSE = 1e-9


# Thread and torque


@pytest.mark.parametrize("P", [0.5, 1.25, 3.5])
def test_diameters_from_the_sharp_triangle(P):
    """Profile of 60 degrees: height H = P sqrt(3)/2; crest H/8, nut root H/4, bolt root H/6 cut off."""
    H, d = P / 2 / tan(pi / 6), 20
    sharp = d + 2 * H / 8
    assert thread.pitch_diameter(d, P) == pytest.approx(sharp - H, rel=1e-6)
    assert thread.nut_minor_diameter(d, P) == pytest.approx(sharp - 2 * (H - H / 4), rel=1e-6)
    assert thread.minor_diameter(d, P) == pytest.approx(sharp - 2 * (H - H / 6), rel=1e-6)
    assert thread.stress_area_unified(d, P) == pytest.approx(pi / 4 * (d - 9 / 8 * H) ** 2, rel=1e-6)
    assert thread.round_area(d) == pytest.approx(quad(lambda r: 2 * pi * r, 0, d / 2)[0], rel=CLOSE)


def test_torque_of_an_m10(validate):
    """M10, friction .12, 29.6 kN: 48.34 N m with exact 2 cos 30, and back to the friction; pitch torque 7.162 N m."""
    torque = tightening.torque_from_preload(29.6e3, **M10, mu_th=0.12, D_km=12.815, mu_b=0.12)
    source = "work over a turn, 60 degree thread"
    validate(14, "M10 at 29.6 kN, friction .12: torque", source, "derived", "48.34", torque / 1e3, unit="N m")
    thread_part = tightening.thread_torque(29.6e3, **M10, mu_th=0.12)
    back = tightening.thread_friction_from_torque(thread_part, 29.6e3, **M10)
    validate(14, "the same: thread friction back", source, "derived", "0.120", back, rel=CLOSE)
    assert tightening.head_friction_from_torque(torque - thread_part, 29.6e3, 12.815) == pytest.approx(0.12, rel=CLOSE)
    assert tightening.bearing_friction_diameter(14.63, 11) == pytest.approx(12.815)
    pitch = tightening.pitch_torque(30e3, 1.5) / 1e3
    validate(14, "M10 at 30 kN: pitch torque", source, "derived", "7.162", pitch, unit="N m")


def test_torque_does_the_work_of_a_turn():
    """Over a turn the torque lifts F by P and moves both friction forces along their circles."""
    F, mu_th, mu_b, D_km = 2e4, 0.11, 0.17, 12.8
    work = F * M10["P"] + mu_th * F / cos(pi / 6) * pi * M10["d2"] + mu_b * F * pi * D_km
    T = tightening.torque_from_preload(F, **M10, mu_th=mu_th, D_km=D_km, mu_b=mu_b)
    assert T * 2 * pi == pytest.approx(work, rel=CLOSE)


@pytest.mark.parametrize(("P", "d2"), [(0.5, 2.675), (1.5, 9.026), (1.25, 9.188), (3, 22.051)])
@pytest.mark.parametrize("mu", [0.05, 0.12, 0.2])
def test_thread_torque_against_equilibrium_on_the_slope(P, d2, mu):
    """Forces of a block on the slope, solved from its two equations; the linear form neglects a product."""
    a, rho, F = atan(P / (pi * d2)), mu / cos(pi / 6), 1e4
    # unknown: normal force N and horizontal push Q; upwards N cos a - rho N sin a = F, along N sin a + rho N cos a = Q
    _, push = np.linalg.solve([[cos(a) - rho * sin(a), 0], [sin(a) + rho * cos(a), -1]], [F, 0])
    linear = tightening.thread_torque(F, P, d2, mu)
    assert linear == pytest.approx(push * d2 / 2 * (1 - tan(a) * rho), rel=CLOSE)
    assert 0.98 < linear / (push * d2 / 2) < 1


def test_friction_diameter_is_that_of_an_evenly_worn_ring():
    """Even wear: p r constant. An evenly pressed ring acts further out, by less than 2 % up to a ratio of 1.5."""
    r_i, r_o = 5.5, 8.25
    worn = quad(lambda r: (1 / r) * r * 2 * pi * r, r_i, r_o)[0] / quad(lambda r: (1 / r) * 2 * pi * r, r_i, r_o)[0]
    even = quad(lambda r: r * 2 * pi * r, r_i, r_o)[0] / quad(lambda r: 2 * pi * r, r_i, r_o)[0]
    D_km = tightening.bearing_friction_diameter(2 * r_o, 2 * r_i)
    assert D_km == pytest.approx(2 * worn, rel=CLOSE)
    assert 1 < 2 * even / D_km < 1.02


def test_torsion_of_a_round_bar():
    """Elastic: stress proportional to the radius; plastic: the same everywhere, which gives the factor 3/2."""
    d0, F, mu_th = 8.593, 2.5e4, 0.12
    M = tightening.thread_torque(F, **M10, mu_th=mu_th)
    elastic = M / quad(lambda r: r / (d0 / 2) * r * 2 * pi * r, 0, d0 / 2)[0]
    plastic = M / quad(lambda r: r * 2 * pi * r, 0, d0 / 2)[0]
    assert tightening.torsional_stress(M, d0) == pytest.approx(elastic, rel=CLOSE)
    k = tightening.shear_ratio(M10["P"], M10["d2"], mu_th, d0)
    assert k * F / thread.round_area(d0) == pytest.approx(plastic, rel=CLOSE)


def test_preload_at_yield_share_brings_the_section_to_that_share():
    """Mises stress from the principal stresses of tension with plastic torsion is .9 of yield."""
    A0, R_p, k = 58.0, 640, 0.55
    sigma = tightening.preload_at_yield_share(0.9, R_p, A0, k) / A0
    s1, s2 = np.linalg.eigvalsh([[sigma, k * sigma], [k * sigma, 0]])
    mises = sqrt(s1**2 - s1 * s2 + s2**2)
    assert mises == pytest.approx(0.9 * R_p, rel=CLOSE)
    assert tightening.equivalent_stress(sigma, k * sigma) == pytest.approx(mises, rel=CLOSE)
    assert tightening.yield_use(mises, R_p) == pytest.approx(0.9, rel=CLOSE)


def test_scatter_as_bound_ratio_and_variation():
    """Highest/lowest of middle (1 +- t); a Gaussian with bounds at z deviations has the shares of z outside them."""
    t = tightening.bound_from_ratio(1.6)
    assert (1 + t) / (1 - t) == pytest.approx(1.6)
    assert tightening.ratio_from_bound(0.25) == pytest.approx(1.25 / 0.75)
    V = tightening.variation(1.6, 2.0)
    assert norm.cdf(1 - t, loc=1, scale=V) == pytest.approx(norm.cdf(-2.0), rel=1e-6)


# Springs


def tangent(l_K, d_w, D_A, tapped):
    y = min(max(D_A / d_w, 1), 10)
    if tapped:
        return 0.348 + 0.013 * log(l_K / d_w) + 0.193 * log(y)
    return 0.362 + 0.032 * log(l_K / d_w / 2) + 0.153 * log(y)


def three_branches(l_K, E, d_w, d_h, D_A, tapped):
    """The closed forms for one material: cone, cone and sleeve, sleeve."""
    w, phi = (2 if tapped else 1), tangent(l_K, d_w, D_A, tapped)
    limit = d_w + w * l_K * phi
    if d_w >= D_A:
        return 4 * l_K / (E * pi * (D_A**2 - d_h**2))
    if limit <= D_A:
        inside = (d_w + d_h) * (limit - d_h) / ((d_w - d_h) * (limit + d_h))
        return 2 * log(inside) / (w * E * pi * d_h * phi)
    inside = (d_w + d_h) * (D_A - d_h) / ((d_w - d_h) * (D_A + d_h))
    sleeve = 4 / (D_A**2 - d_h**2) * (l_K - (D_A - d_w) / (w * phi))
    return (2 / (w * d_h * phi) * log(inside) + sleeve) / (E * pi)


@pytest.mark.parametrize(("D_A", "delta"), [(60, "6.0375e-7"), (20, "8.7019e-7"), (14, "2.4844e-6")])
def test_cone_values(D_A, delta, validate):
    """d_w 14.63, d_h 11, l_K 30, E 205000, nut joint: whole cone, cone and sleeve, sleeve."""
    got = springs.plate_compliance([30.0], [205e3], 14.63, 11, D_A, tapped=False)
    validate(13, f"deformation cone, D_A {D_A} mm", "integral over the depth", "derived", delta, got, unit="mm/N")


@pytest.mark.parametrize("tapped", [False, True])
@pytest.mark.parametrize("l_K", [8.0, 30.0, 120.0])
@pytest.mark.parametrize("D_A", [12.0, 14.63, 16.0, 20.0, 35.0, 60.0, 200.0, inf])
def test_slices_against_the_three_branches(D_A, l_K, tapped):
    got = springs.plate_compliance([l_K / 3, l_K / 6, l_K / 2], [7e4] * 3, 14.63, 11, D_A, tapped)
    assert got == pytest.approx(three_branches(l_K, 7e4, 14.63, 11, D_A, tapped), rel=CLOSE)


@pytest.mark.parametrize("tapped", [False, True])
@pytest.mark.parametrize("D_A", [13.0, 20.0, 30.0, inf])
def test_slices_against_the_integral_over_the_depth(D_A, tapped):
    """Layers of different modulus, one of them across the middle; the width at a depth from the nearer bearing face."""
    layers, moduli, d_w, d_h = [3.0, 14.0, 9.0], [205e3, 7e4, 1.1e5], 16.0, 11.0
    ends = np.cumsum(layers)
    grip = ends[-1]
    phi = tangent(grip, d_w, D_A, tapped)

    def per_depth(z):
        depth = z if tapped else min(z, grip - z)
        D = min(D_A, d_w + 2 * depth * phi)
        return 1 / (moduli[np.searchsorted(ends, z)] * pi / 4 * (D**2 - d_h**2))

    turn = min((D_A - d_w) / (2 * phi), grip) if d_w < D_A else 0
    cuts = sorted({0, *ends, grip / 2, turn, grip - turn})
    integral = sum(quad(per_depth, a, b, epsabs=0, epsrel=1e-11)[0] for a, b in zip(cuts, cuts[1:], strict=False))
    assert springs.plate_compliance(layers, moduli, d_w, d_h, D_A, tapped) == pytest.approx(integral, rel=CLOSE)


@pytest.mark.parametrize("length", [1e-6, 0.5, 20.0])
def test_cone_and_sleeve_slice_against_the_integral(length):
    E, d_h, D_0, slope = 2e5, 11.0, 14.63, 0.44
    cone = quad(lambda z: 4 / (E * pi * ((D_0 + 2 * z * slope) ** 2 - d_h**2)), 0, length, epsabs=0, epsrel=1e-11)[0]
    assert springs.cone_slice(D_0, length, slope, d_h, E) == pytest.approx(cone, rel=CLOSE)
    sleeve = length / E / quad(lambda r: 2 * pi * r, d_h / 2, D_0 / 2)[0]
    assert springs.sleeve_slice(D_0, length, d_h, E) == pytest.approx(sleeve, rel=CLOSE)


def test_bolt_of_pieces():
    """M10 hexagon bolt, nut, 10 mm shank, 20 mm free thread: bars of (5 + 10 + 4) mm on A_N, (20 + 5) mm on A_d3."""
    E, A_N, A_d3 = 205e3, pi * 5**2, pi * 4.0798**2
    pieces = [
        springs.hexagon_head_compliance(10, E, A_N),
        springs.piece_compliance(10, E, A_N),
        springs.piece_compliance(20, E, A_d3),
        springs.engaged_thread_compliance(10, E, A_d3),
        springs.nut_compliance(10, E, A_N),
    ]
    assert springs.series(pieces) == pytest.approx((19 / A_N + 25 / A_d3) / E, rel=CLOSE)
    assert springs.socket_head_compliance(10, E, A_N) == pytest.approx(4 / A_N / E, rel=CLOSE)
    assert springs.tapped_hole_compliance(10, 7e4, A_N) == pytest.approx(3.3 / A_N / 7e4, rel=CLOSE)


@pytest.mark.parametrize("n", [0.0, 0.4, 1.0])
def test_bolt_share_from_equilibrium(n):
    """An axial load enters at two depths with the share n of the plates' compliance between them.

    Bolt and outer plate parts carry the same change, the inner part what is left of the load; all move together.
    """
    delta_S, delta_P, load = 3.5e-6, 1.8e-6, 1000.0
    bolt, plates = np.linalg.solve([[1, 1], [delta_S + (1 - n) * delta_P, -n * delta_P]], [load, 0])
    assert springs.bolt_share(delta_S, delta_P, n) * load == pytest.approx(bolt, abs=1e-6)
    assert bolt + plates == pytest.approx(load)


# Losses


def clamp_left(delta_S, delta_P, bolt_growth, stack_growth, settled, F=2e4):
    """Clamp force of a bolt that was short of the stack by (delta_S + delta_P) F, after both have changed length."""
    shortage = (delta_S + delta_P) * F + stack_growth - settled - bolt_growth
    stretch, squeeze, force = np.linalg.solve([[1, 1, 0], [1, 0, -delta_S], [0, 1, -delta_P]], [shortage, 0, 0])
    assert stretch + squeeze == pytest.approx(shortage)
    return force


def test_thermal_change_of_aluminium_on_steel(validate):
    """30 mm of aluminium on a steel bolt, + 60 K on both: -4091 N, the preload rises; and by equilibrium."""
    growth = losses.stack_growth([12.0, 18.0], [23.5e-6] * 2, 60.0)
    got = losses.thermal_change(30, 11.5e-6, 60, growth, 3.5123e-6, 1.7681e-6)
    what = "aluminium plates on a steel bolt, +60 K: loss of preload"
    validate(15, what, "equilibrium of bolt and stack", "derived", "-4091", got, unit="N")
    left = clamp_left(3.5123e-6, 1.7681e-6, 30 * 11.5e-6 * 60, 30 * 23.5e-6 * 60, 0)
    assert got == pytest.approx(2e4 - left, rel=1e-6)


def test_embedding_of_a_joint():
    """Thread 3, two bearing faces 4.5, one interface 2.5 um (Rz 10 to 40, shear) are 14.5 um; by equilibrium."""
    length = losses.embedding_length(1, 3e-3, 2, 4.5e-3, 1, 2.5e-3)
    assert length == pytest.approx(14.5e-3)
    lost = losses.embedding_force(length, 3.5123e-6, 1.7681e-6)
    assert lost == pytest.approx(2e4 - clamp_left(3.5123e-6, 1.7681e-6, 0, 0, length), rel=1e-6)


def test_gaussian_heights_have_rq_over_ra_of_about_1_25():
    """Ra is the mean deviation of a unit Gaussian, by integration."""
    Ra = 2 * quad(lambda z: z * norm.pdf(z), 0, inf)[0]
    assert losses.rq_from_ra(Ra) == pytest.approx(1, rel=3e-3)
    assert losses.ra_from_rq(1) == pytest.approx(Ra, rel=3e-3)


def test_rz_from_ra_is_above_what_profiles_show():
    """Peak to valley over Ra: sine pi, saw-tooth 4, Gaussian heights by the expected range of independent points.

    The ranges of 20 and 100 points, 3.735 and 5.015 deviations, are those of Tippett's tables (from memory).
    """
    x = np.linspace(0, 1, 100001)
    sine, saw = np.sin(2 * pi * x), 2 * x - 1
    periodic = [np.ptp(z) / np.mean(np.abs(z)) for z in (sine, saw)]
    assert periodic == pytest.approx([pi, 4], rel=1e-3)
    Ra = sqrt(2 / pi)
    gaussian = [quad(lambda z, n=n: 1 - norm.cdf(z) ** n - norm.sf(z) ** n, -9, 9)[0] / Ra for n in (20, 100)]
    assert gaussian == pytest.approx([3.735 / Ra, 5.015 / Ra], rel=2e-4)
    assert max(periodic + gaussian) < losses.rz_from_ra(1.0) < 1.15 * max(gaussian)
    assert losses.rz_from_rq(1.25) == pytest.approx(losses.rz_from_ra(1.0), rel=CLOSE)
