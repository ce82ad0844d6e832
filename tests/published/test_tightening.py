"""Preload, torque and thread areas against printed tables. Tolerance: as the case says, or half of the last digit."""

import pytest

from slip.clamp import thread, tightening

CATALOGUE = "VDI 2230:2001 table as reprinted in a fastener supplier's catalogue, fine threads"
# d, P, bearing, hole, friction, yield strengths, preloads [kN], torques [N m] for the classes 8.8, 10.9, 12.9
TABLE = {
    "M10x1.25": (10, 1.25, 14.63, 11, 0.12, (640, 940, 1100), (31.6, 46.4, 54.3), (51, 75, 87)),
    "M16x1.5": (16, 1.5, 22.49, 17.5, 0.12, (640, 940, 1100), (87.6, 128.7, 150.6), (218, 320, 374)),
    "M24x2": (24, 2, 33.61, 26, 0.10, (660, 940, 1100), (213, 304, 355), (666, 949, 1110)),
}
CASES = [
    pytest.param(*row[:5], R_p, F, T, id=f"{name} Rp {R_p}")
    for name, row in TABLE.items()
    for R_p, F, T in zip(*row[5:], strict=True)
]


def at_ninety_percent(d, P, mu, R_p):
    d2, d3 = thread.pitch_diameter(d, P), thread.minor_diameter(d, P)
    k = tightening.shear_ratio(P, d2, mu, thread.stress_diameter(d2, d3))
    return d2, tightening.preload_at_yield_share(0.9, R_p, thread.stress_area(d2, d3), k)


@pytest.mark.parametrize(("d", "P", "d_w", "d_h", "mu", "R_p", "preload", "torque"), CASES)
def test_preload_at_ninety_percent_of_yield(d, P, d_w, d_h, mu, R_p, preload, torque, validate):
    """Agreement .3 %: the table is rounded to three digits and its yield strengths to ten MPa."""
    _, F = at_ninety_percent(d, P, mu, R_p)
    validate(4, f"M{d}x{P} preload, yield {R_p} MPa", CATALOGUE, "published", preload, F / 1e3, rel=3e-3, unit="kN")


@pytest.mark.parametrize(("d", "P", "d_w", "d_h", "mu", "R_p", "preload", "torque"), CASES)
def test_torque_at_ninety_percent_of_yield(d, P, d_w, d_h, mu, R_p, preload, torque, validate):
    """Agreement .7 %."""
    d2, F = at_ninety_percent(d, P, mu, R_p)
    T = tightening.torque_from_preload(F, P, d2, mu, tightening.bearing_friction_diameter(d_w, d_h), mu)
    validate(4, f"M{d}x{P} torque, yield {R_p} MPa", CATALOGUE, "published", torque, T / 1e3, rel=7e-3, unit="N m")


@pytest.mark.parametrize(
    ("d", "P", "area", "half_digit"),
    [(12, 1.75, 84.3, 0.05), (16, 2, 157, 0.5), (20, 2.5, 245, 0.5), (24, 3, 353, 0.5), (30, 3.5, 561, 0.5)],
)
def test_metric_stress_area(d, P, area, half_digit):
    """Nominal stress areas of ISO 898-1 for M12, M16, M20, M24, M30 coarse; basis published."""
    got = thread.stress_area(thread.pitch_diameter(d, P), thread.minor_diameter(d, P))
    assert got == pytest.approx(area, abs=half_digit)


@pytest.mark.parametrize(
    ("inches", "n", "area", "half_digit"),
    [(0.25, 28, 0.0364, 5e-5), (0.5, 13, 0.1419, 5e-5), (0.75, 10, 0.334, 5e-4), (1, 8, 0.606, 5e-4)],
)
def test_unified_stress_area(inches, n, area, half_digit):
    """Tensile stress areas of ASME B1.1 in in^2, 1/4-28, 1/2-13, 3/4-10, 1-8; basis memory, check the printed table."""
    got = thread.stress_area_unified(inches * 25.4, thread.pitch_from_count(n)) / 25.4**2
    assert got == pytest.approx(area, abs=half_digit)


@pytest.mark.parametrize(
    ("d", "P", "d2", "d3", "D1"), [(10, 1.5, 9.026, 8.160, 8.376), (16, 2, 14.701, 13.546, 13.835)]
)
def test_metric_diameters(d, P, d2, d3, D1):
    """ISO 724 (d2, D1) and ISO 898-1 (d3) for M10 and M16 coarse; basis memory, check the printed table."""
    got = thread.pitch_diameter(d, P), thread.minor_diameter(d, P), thread.nut_minor_diameter(d, P)
    assert got == pytest.approx((d2, d3, D1), abs=5e-4)
