"""Quantities at the door: every unit by its definition, every refusal with the words to write instead."""

from __future__ import annotations

import re
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from slip.base.units import KINDS, SI, SYSTEMS, UNITS, US, UnitError, example, parse, parse_unit

# Definitions: 1 lb = 0.45359237 kg and 1 in = 25.4 mm (international yard and pound), g = 9.80665 m/s^2 (third CGPM).
POUND_FORCE = Fraction("0.45359237") * Fraction("9.80665")  # N
INCH = Fraction("25.4")  # mm
# Quantities that equal each other by definition: text, kind, value in N, mm, MPa, K, s.
DEFINED = [
    ("1 N", "force", 1),
    ("1 kN", "force", 1000),
    ("1 MN", "force", 10**6),
    ("1 lbf", "force", Fraction("4.4482216152605")),
    ("1 kipf", "force", Fraction("4448.2216152605")),
    ("1 mm", "length", 1),
    ("1 cm", "length", 10),
    ("1 m", "length", 1000),
    ("1 um", "length", Fraction(1, 1000)),
    ("1 nm", "length", Fraction(1, 10**6)),
    ("1 in", "length", Fraction("25.4")),
    ("1 ft", "length", Fraction("304.8")),
    ("1 mil", "length", Fraction("0.0254")),
    ("1 uin", "length", Fraction("0.0000254")),
    ("1 Pa", "pressure", Fraction(1, 10**6)),
    ("1 kPa", "pressure", Fraction(1, 1000)),
    ("1 MPa", "pressure", 1),
    ("1 GPa", "pressure", 1000),
    ("1 bar", "pressure", Fraction(1, 10)),
    ("1 psi", "pressure", POUND_FORCE / INCH**2),
    ("1 ksi", "pressure", 1000 * POUND_FORCE / INCH**2),
    ("1 Msi", "pressure", 10**6 * POUND_FORCE / INCH**2),
    ("1 N/mm^2", "pressure", 1),
    ("1 N m", "moment", 1000),
    ("1 N mm", "moment", 1),
    ("1 lbf in", "moment", POUND_FORCE * INCH),
    ("1 lbf ft", "moment", 12 * POUND_FORCE * INCH),
    ("1 J", "energy", 1000),
    ("1 mJ", "energy", 1),
    ("1 K", "temperature rise", 1),
    ("1 degF", "temperature rise", Fraction(5, 9)),
    ("1 N/mm^3", "stiffness per area", 1),
    ("1 N/m^3", "stiffness per area", Fraction(1, 10**9)),
    ("1 lbf/in^3", "stiffness per area", POUND_FORCE / INCH**3),
    ("1 kN/mm", "stiffness", 1000),
    ("1 lbf/in", "stiffness", POUND_FORCE / INCH),
    ("1 um/N", "compliance", Fraction(1, 1000)),
    ("1 1/K", "expansion", 1),
    ("1 1/degF", "expansion", Fraction(9, 5)),
    ("1 kg/m^3", "density", Fraction(1, 10**12)),  # 1 kg = 1 N s^2/m = 1e-3 N s^2/mm
    ("1 t/m^3", "density", Fraction(1, 10**9)),
    ("1 g/cm^3", "density", Fraction(1, 10**9)),
    ("1 mm^3/J", "wear per energy", Fraction(1, 1000)),
    ("1 s", "time", 1),
    ("1 ms", "time", Fraction(1, 1000)),
    ("1 min", "time", 60),
    ("1 h", "time", 3600),
    ("1 %", "share", Fraction(1, 100)),
]


def test_the_pound_force_and_the_inch_are_exact() -> None:
    assert Fraction("4.4482216152605") == POUND_FORCE
    assert parse("1 lbf", "force") == 4.4482216152605
    assert parse("1 in", "length") == 25.4
    assert 1000.0 * parse("1 psi", "pressure") == pytest.approx(6.894757, abs=5e-7)  # kPa, to its printed digits


@pytest.mark.parametrize(("text", "kind", "value"), DEFINED, ids=[text for text, _, _ in DEFINED])
def test_units_follow_from_their_definitions(text: str, kind: str, value: Fraction) -> None:
    assert parse(text, kind) == pytest.approx(float(value), rel=1e-15)


def test_every_unit_and_every_kind_is_defined_above() -> None:
    words = set(re.findall(r"[A-Za-z%]+", " ".join(text for text, _, _ in DEFINED)))
    assert set(UNITS) <= words
    assert {kind for _, kind, _ in DEFINED} == set(KINDS) - {"force per length", "number"}


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("12kN", "force", 12e3),
        ("  12   kN ", "force", 12e3),
        ("-3.5e2 N", "force", -350.0),
        (".5 mm", "length", 0.5),
        ("5. mm", "length", 5.0),
        ("+1E3 N", "force", 1e3),
        ("210 Nm", "moment", 210e3),
        ("210 N·m", "moment", 210e3),
        ("210 N*m", "moment", 210e3),
        ("0.21 kNm", "moment", 210e3),
        ("210 m N", "moment", 210e3),
        ("100 ft-lbf", "moment", 100 * 12 * 25.4 * 4.4482216152605),
        ("100 in-lbf", "moment", 100 * 25.4 * 4.4482216152605),
        ("3.2 µm", "length", 0.0032),  # micro sign
        ("3.2 μm", "length", 0.0032),  # Greek letter
        ('0.5"', "length", 12.7),
        ("0.5 inch", "length", 12.7),
        ("60 N/mm²", "pressure", 60.0),
        ("60 N/mm2", "pressure", 60.0),
        ("60 N/mm/mm", "pressure", 60.0),
        ("12000 N/mm³", "stiffness per area", 12000.0),
        ("11.5e-6 K^-1", "expansion", 11.5e-6),
        ("11.5e-6 1/K", "expansion", 11.5e-6),
        ("72 °F", "temperature rise", 40.0),
        ("25%", "share", 0.25),
        ("0.05", "share", 0.05),
        ("7", "number", 7.0),
    ],
)
def test_ways_to_write_a_quantity(text: str, kind: str, value: float) -> None:
    assert parse(text, kind) == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "kind", "code", "says"),
    [
        ("1850 lb", "force", "unit-ambiguous", "write lbf for a force"),
        ("1850 lbs", "force", "unit-ambiguous", "write lbf for a force"),
        ("12 kip", "force", "unit-ambiguous", "write kipf for a force"),
        ("12 kips", "force", "unit-ambiguous", "write kipf for a force"),
        ("150 ft-lb", "moment", "unit-ambiguous", "write lbf for a force"),
        ("150 lb in", "moment", "unit-ambiguous", "write lbf for a force"),
        ("20 kgf", "force", "unit-ambiguous", "N or lbf"),
        ("40 degC", "temperature rise", "unit-ambiguous", "rise since assembly"),
        ("40 °C", "temperature rise", "unit-ambiguous", "rise since assembly"),
        ("40 C", "temperature rise", "unit-ambiguous", "rise since assembly"),
        ("40 F", "temperature rise", "unit-ambiguous", "rise since assembly"),
        ("12", "force", "unit-missing", '"12 kN" or "2700 lbf"'),
        ("8", "length", "unit-missing", '"8 mm" or "0.3 in"'),
        ("200 N", "moment", "unit-wrong", '"210 N m" or "1850 lbf in"'),
        ("12 kN", "length", "unit-wrong", '"8 mm" or "0.3 in"'),
        ("40 K", "force", "unit-wrong", '"12 kN"'),
        ("5 mm", "share", "unit-wrong", '"5 %" or 0.05'),
        ("5 N", "number", "unit-wrong", "1.5"),
        ("12 kNewton", "force", "unit-unknown", "units like N, kN, lbf"),
        ("12 dyn", "force", "unit-unknown", "units like N, kN, lbf"),
        ("12 N^99", "force", "unit-unknown", "units like N, kN, lbf"),
        ("12 mm^99999999999999999999", "length", "unit-unknown", "units like N, kN, lbf"),
        ("2,5 kN", "force", "not-a-quantity", "a point for decimals"),
        ("12 000 N", "force", "not-a-quantity", "without spaces"),
        ("3/4 in", "length", "not-a-quantity", "without spaces, commas or fractions"),
        ("1 1/2 in", "length", "not-a-quantity", "without spaces, commas or fractions"),
        ("1.2.3 N", "force", "not-a-quantity", "a point for decimals"),
        ("twelve kN", "force", "not-a-quantity", '"12 kN"'),
        ("kN", "force", "not-a-quantity", '"12 kN"'),
        ("", "length", "not-a-quantity", '"8 mm"'),
        ("nan N", "force", "not-a-quantity", '"12 kN"'),
        ("inf N", "force", "not-a-quantity", '"12 kN"'),
        ("٣ N", "force", "not-a-quantity", '"12 kN"'),
    ],
)
def test_refusals_say_what_to_write(text: str, kind: str, code: str, says: str) -> None:
    with pytest.raises(UnitError) as caught:
        parse(text, kind)
    assert caught.value.code == code
    assert says in caught.value.remedy


@pytest.mark.parametrize("kind", sorted(KINDS))
def test_examples_are_of_their_kind(kind: str) -> None:
    for text in example(kind).split(" or "):
        parse(text.strip('"'), kind)


@pytest.mark.parametrize("system", [SI, US], ids=["N mm", "lbf in"])
@pytest.mark.parametrize("kind", sorted(set(KINDS) - {"share", "number"}))
def test_a_system_s_unit_is_of_the_kind_and_is_its_factor(system, kind: str) -> None:
    factor, dimension = parse_unit(system.unit(kind))
    assert dimension == KINDS[kind]
    assert factor == pytest.approx(system.factor(KINDS[kind]), rel=1e-14)


def test_systems_are_named_as_a_file_declares_them() -> None:
    assert SYSTEMS == {"N mm": SI, "lbf in": US}
    assert [US.unit(kind) for kind in ("force", "length", "pressure", "moment")] == ["lbf", "in", "psi", "lbf in"]
    assert SI.factor(KINDS["stiffness per area"]) == 1.0
    assert US.say(44482.216152605, "force") == "10000 lbf"
    assert SI.say(17.5, "length") == "17.5 mm"
    assert SI.say(0.25, "share") == "0.25"


VALUES = st.floats(1e-9, 1e9) | st.floats(-1e9, -1e-9)


@given(VALUES, st.sampled_from(sorted(set(KINDS) - {"share", "number"})), st.sampled_from([SI, US]))
def test_out_and_in_again(value: float, kind: str, system) -> None:
    text = f"{system.out(value, kind)!r} {system.unit(kind)}"
    assert parse(text, kind) == pytest.approx(value, rel=1e-13)


@given(VALUES, st.sampled_from([(text.split(" ", 1)[1], kind, value) for text, kind, value in DEFINED]))
def test_a_quantity_is_its_number_times_its_unit(number: float, unit: tuple[str, str, Fraction]) -> None:
    word, kind, factor = unit
    assert parse(f"{number!r} {word}", kind) == pytest.approx(number * float(factor), rel=1e-14)


@given(
    st.text(max_size=30) | st.text("0123456789.,eE+-/ *^%NmkinlbfKPadegFC", max_size=20), st.sampled_from(sorted(KINDS))
)
def test_any_text_is_a_number_or_refused_in_words(text: str, kind: str) -> None:
    try:
        value = parse(text, kind)
    except UnitError as error:
        assert error.code and error.expected and error.remedy
    else:
        assert isinstance(value, float)
