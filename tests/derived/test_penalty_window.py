"""The window of a contact stiffness: errors against a reference that holds the plates' shear, on bars that have a closed form."""

from __future__ import annotations

from math import log, sqrt, tanh
from typing import Any

import numpy as np
import pytest

from slip import read_text
from slip.assess import assess
from slip.stiffness.stage import common, penalty
from slip.stiffness.subject import Subject, constant, of_face, of_joint
from slip.stiffness.window import QUANTITIES, Window, error, highest, lowest, response, rigid, sweep, window

E, T, B, L, P_FACE, MU = 210e3, 12.0, 60.0, 100.0, 60.0, 0.2
SOURCE, BASIS = "shear lag of two equal bars, t/(3G) of both in series with the contact", "derived"


def bars(load: float = 30e3, nu: float = 0.3, more: str = "plate_shear = false") -> str:
    plates = "".join(
        f"""
[[plate]]
name = "{side} bar"
material = {{ youngs_modulus = {E}, poissons_ratio = {nu} }}
thickness = {T}
outline = {outline}
load_edge = "{side}"
"""
        for side, outline in (("right", [-50, -30, 400, 30]), ("left", [-400, -30, 50, 30]))
    )
    return f"""\
format = 1
units = "N mm"
{plates}
[interface]
pressure = {P_FACE}
friction = [{MU}, 0.28]
{more}
[[case]]
name = "pull"
shear = [{load}, 0]
kind = "alternating"
ratio = -1
"""


def subject(**options: Any) -> Subject:
    found = of_face(assess(read_text(bars(**options))))  # type: ignore[arg-type]
    assert found is not None
    return found


def compliance(k: float, shear: float) -> float:
    """Extension of the overlap for each newton over that of both bars as one, by the closed form of two equal strips."""
    in_series = 1 / (1 / k + shear)
    w = sqrt(in_series * B * 2 / (E * T * B))
    return 1 + 2 / (w * L) / tanh(w * L / 2)


# k_t, error of the motion under a low load in per cent at nu 0.3, as printed
PRINTED = {3000.0: "20.96", 12000.0: "6.58", 120000.0: ".755"}


@pytest.mark.parametrize(("k", "printed"), PRINTED.items())
def test_error_of_the_low_load_motion_with_shear(k: float, printed: str, validate: Any) -> None:
    shear = 2 * T / (3 * E / 2.6)
    assert 1 / shear == pytest.approx(10096, abs=0.5)
    s = subject()
    reference = rigid(s)
    found = window("stick", np.array([k]), [response(s, constant(k))], reference).errors["stiffness"][0]
    exact = compliance(k, shear) / compliance(1e12, shear) - 1
    assert found == pytest.approx(exact, rel=2e-3)
    digits = len(printed.partition(".")[2])
    assert round(100 * exact, digits) == float(printed)
    validate(
        28, f"window of two steel bars, k_t {k:g} N/mm3: error", SOURCE, BASIS, printed, 100 * found, rel=5e-4, unit="%"
    )


@pytest.mark.parametrize(("k", "printed"), {3000.0: "22.54", 12000.0: "7.36", 120000.0: ".874"}.items())
def test_error_without_cross_contraction(k: float, printed: str) -> None:
    s = subject(nu=0.0)
    assert 1 / s.shear == pytest.approx(13125)
    found = window("stick", np.array([k]), [response(s, constant(k))], rigid(s)).errors["stiffness"][0]
    assert 100 * found == pytest.approx(float(printed), rel=2e-3)


def test_the_reference_holds_the_plates_shear_whatever_the_file_says() -> None:
    """plate_shear = false is for comparison with bars that have none; a mesh of solid elements always has it."""
    with_it, without = (subject(more=more) for more in ("", "plate_shear = true"))
    assert with_it.shear == without.shear == pytest.approx(2 * T / (3 * E / 2.6))


def test_motion_is_split() -> None:
    """At 30 kN and k_t 12 000 with shear 1.00 um is elastic: mu p/k_t, since the ends slip."""
    m = response(subject(), constant(12000.0)).motions
    assert m.elastic_slip == pytest.approx(MU * P_FACE / 12000, rel=1e-9)
    assert m.true_slip > 0 and m.energy_per_cycle is not None and m.energy_per_cycle > 0


def test_a_softer_contact_is_worse_for_sticking() -> None:
    s = subject()
    k = np.logspace(3, 6, 13)
    w = window("stick", k, sweep(s, k), rigid(s))
    for name in ("stiffness", "true slip", "energy", "slip length"):
        assert (np.diff(w.errors[name]) <= 1e-9).all(), name
        bounds = [w.lowest[name][level] for level in (0.10, 0.05, 0.01)]
        known = [b for b in bounds if b is not None]
        assert known == sorted(known)
        for level, bound in zip((0.10, 0.05, 0.01), bounds, strict=True):
            if bound is not None:  # the value itself, put into the model, has that error
                again = error(response(s, constant(bound)), w.reference, name)
                if name == "slip length":  # it goes by steps of a cell
                    assert again <= 1.3 * level
                else:
                    assert again == pytest.approx(level, rel=0.1)
    assert w.lowest["slip length"][0.01] is None, "a slip length of some 45 cells is not known to one per cent"


def test_bounds_by_hand() -> None:
    """error = 1/k: 10 % at 10, 5 % at 20, 1 % at 100; a valley about 10: 10 % from 10/2.5 up to 10 * 2.5 where error is |ln k/10|/..."""
    k = np.logspace(0, 3, 13)
    assert [lowest(k, 1 / k, level) for level in (0.10, 0.05, 0.01)] == pytest.approx([10, 20, 100])
    assert highest(k, 1 / k, 0.05) == float("inf")
    valley = 0.02 * 10 ** np.abs(np.log10(k / 10))  # 2 % at 10, ten times more a decade away
    assert (lowest(k, valley, 0.10), highest(k, valley, 0.10)) == pytest.approx((2.0, 50.0))
    assert lowest(k, valley, 0.01) is None and highest(k, valley, 0.01) is None
    nothing = np.full(13, np.nan)
    assert lowest(k, nothing, 0.1) is None


BRACKET = """\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
[tightening]
preload = [60000, 90000]
[losses]
embedding = "4500 N"
relaxation = 0
[interface]
friction = [0.18, 0.25]
{face}
[[plate]]
material = "steel"
thickness = 20
[[plate]]
material = "steel"
thickness = 20
[pattern]
positions = [[-80, -60], [80, -60], [-80, 60], [80, 60]]
{more}
[[case]]
acts_on = "joint"
shear = [0, 14000]
moment = [0, 0, 4e5]
kind = "alternating"
"""
ROUGH = 'roughness = ["Ra 0.8 um", "Ra 1.6 um"]'


def test_rigid_plates_give_what_two_springs_in_series_give() -> None:
    """Points on rigid plates, stuck: the motion is the load over the sum of areas over (1/k + t/(3G)); the error is that of the series."""
    found = of_joint(assess(read_text(BRACKET.format(face=ROUGH, more=""))))  # type: ignore[arg-type]
    assert found is not None
    k, shear = 5000.0, 2 * 20 / (3 * 210e3 / 2.6)
    off = window("stick", np.array([k]), [response(found, constant(k))], rigid(found)).errors["stiffness"][0]
    assert off == pytest.approx((1 / k) / shear, rel=0.03)  # steel of the table: 206 to 210 GPa
    shares = response(found, constant(k)).shares
    assert shares.sum() == pytest.approx(1) and shares.size == 4


def test_the_interface_has_its_own_value_and_elastic_slip() -> None:
    """k_t = rho p/(gamma h_rms): the slip at the limit mu gamma h_rms/rho is a length of the surface, whatever the pressure."""
    found = penalty(read_text(BRACKET.format(face=ROUGH, more="")))
    own = found.interface
    assert own is not None and own.slope is not None
    h_rms, rho = 1.25e-3 * sqrt(0.8**2 + 1.6**2), 2 * (1 - 0.3) / (2 - 0.3)
    assert own.slope[1] == pytest.approx(rho / (0.48 * h_rms), rel=1e-3)
    assert own.elastic_slip[1] == pytest.approx(0.18 * 0.48 * h_rms / rho, rel=1e-3)
    for name, pressure in (("mean", found.subject.pressures.mean), ("peak", found.subject.pressures.peak)):
        assert own.k_t[name][1] == pytest.approx(own.slope[1] * pressure)
        low, typical, high = own.k_t[name]
        assert (low, high) == pytest.approx((typical / 2, typical * 2))
    assert found.recommended["interface"] == own.typical
    # a constant cannot follow the pressure to the rim: it slips there too early, and its cycles cost more
    face, fixed = own.own.motions, own.constant.motions
    assert fixed.first_slip_factor < 0.9 * face.first_slip_factor
    assert fixed.energy_per_cycle > 2 * face.energy_per_cycle  # type: ignore[operator]
    assert found.serves_all["interface"] is None


def test_sticking_asks_for_the_least_stiffness_that_serves() -> None:
    found = penalty(read_text(BRACKET.format(face=ROUGH, more="")))
    w = next(w for w in found.windows if w.purpose == "stick")
    k = found.recommended["stick"]
    at_k = window("stick", np.array([k]), [response(found.subject, constant(k))], found.rigid)
    worst = max(e[0] for name, e in at_k.errors.items() if name in ("stiffness", "true slip", "energy", "load sharing"))
    assert worst == pytest.approx(0.05, rel=0.05)
    assert isinstance(w, Window) and set(w.errors) == set(QUANTITIES) - {"first slip"}


def test_purpose_chooses() -> None:
    for purpose in ("stick", "interface"):
        found = penalty(read_text(BRACKET.format(face=ROUGH, more=f'[finite_elements]\npurpose = "{purpose}"')))
        assert [w.purpose for w in found.windows] == [purpose] and list(found.recommended) == [purpose]


def test_without_roughness_only_sticking_is_answered() -> None:
    found = penalty(read_text(BRACKET.format(face="tangential_stiffness = [9000, 11000]", more="")))
    assert found.interface is not None and found.interface.slope is None
    assert found.interface.typical == pytest.approx(sqrt(9000 * 11000))
    text = bars()
    alone = penalty(read_text(text))
    assert alone.interface is None and [w.purpose for w in alone.windows] == ["stick"]
    (note,) = [n for n in alone.notes if n.code == "interface-unknown"]
    assert "measure" in note.text


def test_a_mesh_that_does_not_see_the_contact() -> None:
    found = penalty(read_text(BRACKET.format(face=ROUGH, more='[finite_elements]\nelement_size = "15 mm"')))
    (note,) = [n for n in found.notes if n.code == "mesh-coarse"]
    across = found.subject.width / 15
    assert f"{across:.2g} elements" in note.text


def test_errors_cross_levels_between_the_swept_values() -> None:
    assert log(lowest(np.array([1.0, 100.0]), np.array([1.0, 0.01]), 0.1) or 0) == pytest.approx(log(10))
    k = np.array([1.0, 10.0, 100.0])
    errors = {"stiffness": np.array([0.5, 0.5, 0.01]), "energy": np.array([0.01, 0.5, 0.9])}
    level = 0.1
    w = Window(
        "interface",
        k,
        (),
        None,  # type: ignore[arg-type]
        errors,
        {name: {level: lowest(k, e, level)} for name, e in errors.items()},
        {name: {level: highest(k, e, level)} for name, e in errors.items()},
    )
    assert common(w, level) is None
