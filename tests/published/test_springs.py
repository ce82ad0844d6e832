"""Springs of bolted members against printed problems. Tolerance: half of the last printed digit."""

import pytest

from slip.clamp import springs

STEEL, IRON = 207e3, 100e3  # MPa, of the printed problem
PROBLEM_20, PROBLEM_24 = (f"Shigley, 9th ed., {said}" for said in ("Table 8-8, problem 8-20", "problem 8-24"))
FIT = {"steel": (STEEL, 0.78715, 0.62873), "iron": (IRON, 0.77871, 0.61616)}


def test_frustum_slices_in_series(validate):
    """33.30, 173.8, 21.47, 97.27 give k_m = 10.79 Mlbf/in."""
    together = 1 / springs.series([1 / k for k in (33.30, 173.8, 21.47, 97.27)])
    validate(6, "frustum slices in series", PROBLEM_24, "published", "10.79", together, unit="Mlbf/in")


def test_bolt_share_of_the_joint(validate):
    """k_b = 3.94 and k_m = 10.79 Mlbf/in give C = .267."""
    share = springs.bolt_share(1 / 3.94, 1 / 10.79, 1)
    validate(6, "share of the bolt", PROBLEM_24, "published", "0.267", share)


@pytest.mark.parametrize(("material", "k"), [("steel", 2361), ("iron", 1124)])
def test_fitted_stiffness(material, k, validate):
    """d 12, l 40 mm, in MN/m."""
    E, A, B = FIT[material]
    found = springs.fitted_stiffness(E, 12, 40, A, B) / 1e3
    validate(8, f"fitted stiffness, {material}", PROBLEM_20, "published", k, found, unit="MN/m")


def test_fitted_stiffness_of_two_materials(validate):
    """Half steel, half iron, each twice its value, in series: 1523 MN/m."""
    halves = [1 / (2 * springs.fitted_stiffness(E, 12, 40, A, B)) for E, A, B in FIT.values()]
    found = 1e-3 / springs.series(halves)
    validate(8, "fitted stiffness, half and half", PROBLEM_20, "published", "1523", found, unit="MN/m")


@pytest.mark.parametrize(
    ("thicknesses", "moduli", "k"), [([40], [STEEL], 2235), ([40], [IRON], 1080), ([20, 20], [STEEL, IRON], 1456)]
)
def test_frustum_on_the_same_joint(thicknesses, moduli, k, validate):
    """30 degree frustum on the joint of problem 8-20, bearing 1.5 d.

    E = 207: .5774 pi 207 12/(2 ln(5 (.5774 40 + 6)/(.5774 40 + 30))) = 2235 MN/m, worked by hand.
    """
    what = f"30 degree frusta, E {' and '.join(f'{E / 1e3:.0f}' for E in moduli)} GPa"
    found = 1e-3 / springs.frustum_compliance(thicknesses, moduli, 18, 12)
    validate(8, what, "frustum of one material (Shigley, 9th ed.) worked by hand", "derived", k, found, unit="MN/m")
