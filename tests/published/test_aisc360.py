"""AISC 360, J3.8 and J3.9, editions 2016 and 2005: slip-critical bolts against printed values and other routes."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from slip.base.tables import table
from slip.verdict.standards import aisc360
from slip.verdict.standards.common import Judgement

KIP = 4448.2216152605  # N
FORCE = st.floats(0.0, 3e5)
D_U = 1.13


def judge(**given: Any) -> Judgement:
    usual: dict[str, Any] = {
        "shear": 1.0,
        "n_faces": 1,
        "size": "3/4",
        "group": "A325",
        "slip_factor": "A",
        "method": "LRFD",
    }
    return aisc360.judge(**(usual | given))


def kips(judgement: Judgement) -> Any:
    return judgement.resistance / KIP


def test_eleven_bolts_of_the_2005_edition(validate: Any) -> None:
    """Eleven 3/4 A325, mu .35, T_b 28 kips, one face: 122 kips nominal, 81.2 kips ASD."""
    book = "Quimby, Beginner's Guide to the Steel Construction Manual, Ex. 4.1"
    nominal = aisc360.nominal_resistance_2005(0.35, D_U, 1.0, 28.0, 1)
    validate(3, "eleven 3/4 A325: nominal", book, "published", "122", 11 * nominal, unit="kips")
    asd = judge(method="ASD", edition="2005", limit="serviceability")
    validate(3, "eleven 3/4 A325: ASD", book, "published", "81.2", 11 * kips(asd), unit="kips")
    assert asd.edition == "AISC 360-05"


RECOMPUTED = "AISC 360-10 and later, J3.8, by hand"


def test_two_faces(validate: Any) -> None:
    """3/4 A325, mu .30, T_b 28, two faces: 18.98 kips."""
    validate(10, "3/4 A325, class A, two faces", RECOMPUTED, "memory", "18.98", kips(judge(n_faces=2)), unit="kips")


@pytest.mark.parametrize(("size", "printed"), [("5/8", "6.44"), ("3/4", "9.49"), ("7/8", "13.2"), ("1", "17.3")])
def test_single_face_class_a(size: str, printed: str, validate: Any) -> None:
    """A325, class A, one face, standard holes."""
    validate(10, f"{size} A325, class A, one face", RECOMPUTED, "memory", printed, kips(judge(size=size)), unit="kips")


STRESS_AREAS = {  # in^2 and mm^2: ASME B1.1 and ISO 898-1 [memory]
    **{"1/2": 0.142, "5/8": 0.226, "3/4": 0.334, "7/8": 0.462, "1": 0.606},
    **{"M16": 157, "M20": 245, "M22": 303, "M24": 353, "M27": 459, "M30": 561, "M36": 817},
}
STRENGTHS = {"kipf": {"A325": 120.0, "A490": 150.0}, "kN": {"A325": 0.830, "A490": 1.040}}  # ksi and kN/mm^2


def test_pretension_is_seven_tenths_of_the_tensile_strength() -> None:
    """Every row of the table (AISC 360-05, Table J3.1 [published]) is 0.7 f_u A_s to its printed unit [derived].

    One value, M20 A490, stands 0.64 kN above its product; all others are within half a unit.
    """
    rows = table("aisc_pretension")
    assert {row["size"] for row in rows} == set(STRESS_AREAS)
    for row in rows:
        for group, strength in STRENGTHS[row["unit"]].items():
            off = float(row[group]) - 0.7 * strength * STRESS_AREAS[row["size"]]
            assert abs(off) <= (0.65 if (row["size"], group) == ("M20", "A490") else 0.5), (row["size"], group)


def test_pretension_in_newtons() -> None:
    assert aisc360.minimum_pretension("3/4", "A325") == pytest.approx(28 * KIP, rel=1e-12)
    assert aisc360.minimum_pretension("3/4-10 UNC", "A490") == pytest.approx(35 * KIP, rel=1e-12)
    assert aisc360.minimum_pretension("M20", "A325M") == 142e3
    assert judge(size="M24", group="A490").presumed_preload == 257e3


def test_tension_by_another_route() -> None:
    """phi k_sc R_n is the friction of what is left of the mean pretension D_u T_b [derived]."""
    tension = np.array([0.0, 5.0, 20.0]) * KIP
    left = D_U * 28 * KIP - tension
    found = judge(shear=np.ones(3), tension=tension, n_faces=2, filler_factor=0.85)
    assert found.resistance == pytest.approx(0.30 * 0.85 * 2 * left, rel=1e-12)
    assert found.clause == "J3.8 and J3.9"
    assert judge().clause == "J3.8"


def test_asd_and_lrfd_agree_at_loads_in_the_ratio_of_one_and_a_half() -> None:
    """With Omega = 1.5/phi and T_u = 1.5 T_a both methods give one and the same utilisation [derived]."""
    asd = judge(method="ASD", shear=10e3, tension=20e3)
    lrfd = judge(method="LRFD", shear=15e3, tension=30e3)
    assert asd.utilisation == pytest.approx(lrfd.utilisation, rel=1e-12)


def test_tension_that_leaves_nothing() -> None:
    found = judge(tension=D_U * 28 * KIP * (1 + 1e-9))
    assert (found.resistance, found.worst, found.reserve_factor) == (0.0, np.inf, 0.0)
    assert judge(tension=D_U * 28 * KIP * (1 - 1e-9)).worst < np.inf


HOLES_2016 = {  # J3.8, edition 2016 [memory]
    ("normal", ""): (1.00, 1.50),
    ("oversized", ""): (0.85, 1.76),
    ("short slot", "across"): (1.00, 1.50),
    ("short slot", "along"): (0.85, 1.76),
    ("long slot", "across"): (0.70, 2.14),
    ("long slot", "along"): (0.70, 2.14),
}


@pytest.mark.parametrize(("hole", "slot"), HOLES_2016)
def test_holes_2016(hole: str, slot: str) -> None:
    phi, omega = HOLES_2016[hole, slot]
    nominal = 0.30 * D_U * 28 * KIP
    assert judge(hole=hole, slot=slot).resistance == pytest.approx(phi * nominal, rel=1e-12)
    assert judge(hole=hole, slot=slot, method="ASD").resistance == pytest.approx(nominal / omega, rel=1e-12)
    assert phi * omega == pytest.approx(1.5, abs=0.005)  # the two methods meet at a load ratio of 1.5


@pytest.mark.parametrize(
    ("hole", "slot", "h_sc"), [("normal", "", 1.0), ("short slot", "along", 0.85), ("long slot", "across", 0.7)]
)
@pytest.mark.parametrize(("limit", "phi", "omega"), [("serviceability", 1.0, 1.5), ("strength", 0.85, 1.76)])
def test_holes_and_limits_2005(hole: str, slot: str, h_sc: float, limit: str, phi: float, omega: float) -> None:
    """Hole factor in the nominal resistance, phi and Omega by the limit. J3.8, edition 2005 [memory]."""
    old = {"edition": "2005", "hole": hole, "slot": slot, "limit": limit}
    nominal = 0.35 * D_U * h_sc * 28 * KIP
    assert judge(**old).resistance == pytest.approx(phi * nominal, rel=1e-12)
    assert judge(**old, method="ASD").resistance == pytest.approx(nominal / omega, rel=1e-12)


def test_wrong_readings_give_other_numbers() -> None:
    """2005's mu .35 with 2016, the limits of 2005 swapped, ASD without its 1.5 on tension, LRFD for ASD."""
    new, old = judge(), judge(edition="2005", limit="serviceability")
    assert old.resistance / new.resistance == pytest.approx(0.35 / 0.30, rel=1e-12)
    assert judge(edition="2005").resistance < 0.9 * old.resistance
    pulled = judge(method="ASD", tension=10 * KIP)
    without = 0.30 * (D_U * 28 - 10) / 1.5
    assert kips(pulled) < 0.8 * without
    assert judge(hole="short slot", slot="along").resistance < judge(hole="short slot", slot="across").resistance


@given(preload=st.floats(1e4, 5e5), more=st.floats(1.0, 3.0), tension=FORCE, pull=FORCE)
def test_laws(preload: float, more: float, tension: float, pull: float) -> None:
    """More pretension never lowers the resistance, more tension never raises it (formula and judge)."""
    for factor in (aisc360.tension_factor_lrfd, aisc360.tension_factor_asd):

        def left(T_b: float, T: float, factor: Any = factor) -> float:
            return max(0.0, float(factor(T, D_U, T_b, 1) * aisc360.nominal_resistance(0.3, D_U, 1.0, T_b, 1)))

        assert left(preload * more, tension) >= left(preload, tension) * (1 - 1e-12)
        assert left(preload, tension + pull) <= left(preload, tension)
    assert judge(tension=tension + pull).resistance <= judge(tension=tension).resistance
    assert judge(tension=tension, size="1").resistance >= judge(tension=tension).resistance


def test_load_level_and_basis_are_said() -> None:
    assert any("LRFD load combinations" in note for note in judge().notes)
    assert any("ASD load combinations" in note for note in judge(method="ASD").notes)
    assert judge().basis == "memory"
    assert "From memory, check the printed clause." in judge().notes


@pytest.mark.parametrize(
    ("wrong", "named"),
    [
        ({"edition": "1999"}, "2016, 2005"),
        ({"method": "WSD"}, "LRFD, ASD"),
        ({"slip_factor": "C"}, "A; B"),
        ({"group": "A307"}, "A325, A490"),
        ({"size": "9/16"}, "5/8; 3/4"),
        ({"size": "1-1/8"}, "1; M16"),
        ({"size": "3/4-16 UNF"}, "3/4"),
        ({"hole": "round"}, "normal; oversized"),
        ({"hole": "short slot"}, "short slot, across"),
        ({"filler_factor": 0.9}, "1, 0.85"),
        ({"filler_factor": 0.85, "edition": "2005"}, "allowed: 1"),
        ({"limit": "serviceability"}, "allowed: strength"),
        ({"limit": "ultimate", "edition": "2005"}, "strength, serviceability"),
        ({"shear": np.array([1.0, np.nan])}, "shear"),
        ({"tension": -1.0}, "tension"),
        ({"n_faces": 0}, "n_faces"),
    ],
)
def test_wrong_input(wrong: dict[str, Any], named: str) -> None:
    with pytest.raises(ValueError, match=named):
        judge(**wrong)
