"""Springs of bolted members against printed problems. Tolerance: half of the last printed digit."""

import pytest

from slip.clamp import springs

STEEL, IRON = 207e3, 100e3  # MPa, of the printed problem
FIT = {"steel": (STEEL, 0.78715, 0.62873), "iron": (IRON, 0.77871, 0.61616)}


def test_frustum_slices_in_series():
    """Shigley, 9th ed., problem 8-24: 33.30, 173.8, 21.47, 97.27 give k_m = 10.79 Mlbf/in; basis published."""
    slices = [1 / k for k in (33.30, 173.8, 21.47, 97.27)]
    assert 1 / springs.series(slices) == pytest.approx(10.79, abs=0.005)


def test_bolt_share_of_the_joint():
    """Shigley, 9th ed., problem 8-24: k_b = 3.94 and k_m = 10.79 Mlbf/in give C = .267; basis published."""
    assert springs.bolt_share(1 / 3.94, 1 / 10.79, 1) == pytest.approx(0.267, abs=5e-4)


@pytest.mark.parametrize(("material", "k"), [("steel", 2361), ("iron", 1124)])
def test_fitted_stiffness(material, k):
    """Shigley, 9th ed., problem 8-20 with the constants of Table 8-8: d 12, l 40 mm, in MN/m; basis published."""
    E, A, B = FIT[material]
    assert springs.fitted_stiffness(E, 12, 40, A, B) / 1e3 == pytest.approx(k, abs=0.5)


def test_fitted_stiffness_of_two_materials():
    """Shigley, 9th ed., problem 8-20: half steel, half iron, each twice its value, in series: 1523 MN/m; published."""
    halves = [1 / (2 * springs.fitted_stiffness(E, 12, 40, A, B)) for E, A, B in FIT.values()]
    assert 1e-3 / springs.series(halves) == pytest.approx(1523, abs=0.5)


@pytest.mark.parametrize(
    ("thicknesses", "moduli", "k"), [([40], [STEEL], 2235), ([40], [IRON], 1080), ([20, 20], [STEEL, IRON], 1456)]
)
def test_frustum_on_the_same_joint(thicknesses, moduli, k):
    """30 degree frustum (Shigley, Eq. for like members) on the joint of problem 8-20, bearing 1.5 d; basis derived.

    E = 207: .5774 pi 207 12/(2 ln(5 (.5774 40 + 6)/(.5774 40 + 30))) = 2235 MN/m, worked by hand.
    """
    assert 1e-3 / springs.frustum_compliance(thicknesses, moduli, 18, 12) == pytest.approx(k, abs=0.5)
