"""Derived cases written as joint files and put through `slip check --json`.

Not as a file: check 13 for a body narrower than the bearing face (D_A 14 under 14.63): a bearing face that overhangs
its edge is taken as a sleeve of its own width, which is stiffer and costs more preload by embedding.
"""

from __future__ import annotations

from math import hypot, pi
from typing import Any

import pytest
from scipy.optimize import minimize_scalar

from slip import read_text
from slip.assess import assess

# --- springs: checks 8, 13, 14, 15 -----------------------------------------------------------------------------------

E_BOLT = 205e3  # MPa
A_N, A_3 = pi / 4 * 10**2, pi / 4 * (10 - 1.226869 * 1.5) ** 2  # nominal and core of M10
# M10 hexagon, 10 mm shank and 20 mm free thread in the grip; half a head, half a thread engaged, four tenths a nut
BOLT_COMPLIANCE = ((5 + 10 + 4) / A_N + (20 + 5) / A_3) / E_BOLT

SPRINGS = """
format = 1
units = "N mm"
[bolt]
thread = "M10"
material = {{ youngs_modulus = 205e3, poissons_ratio = 0.3, expansion = "11.5e-6 1/K" }}
[[bolt.segment]]
diameter = 10
length = 10
[[bolt.segment]]
diameter = 8.1596965
length = 20
[tightening]
preload = [30e3, 40e3]
[losses]
embedding = {embedding}
relaxation = 0
{thermal}
[[plate]]
material = {{ youngs_modulus = {E}, poissons_ratio = 0.3, expansion = "23.5e-6 1/K" }}
thickness = 12
outline = {{ outer_diameter = {D_A} }}
[[plate]]
material = {{ youngs_modulus = {E}, poissons_ratio = 0.3, expansion = "23.5e-6 1/K" }}
thickness = 18
[interface]
friction = [0.2, 0.3]
[[case]]
shear = [1000, 0]
kind = "static"
"""


def only_bolt(result: dict[str, Any]) -> dict[str, Any]:
    (row,) = result["cases"][0]["ends"][0]["ledger"]
    return row


@pytest.mark.parametrize(("D_A", "printed"), [(60, "6.0375e-7"), (20, "8.7019e-7")])
def test_deformation_cone(D_A: float, printed: str, run_check: Any, validate: Any) -> None:
    """What 10 um of embedding cost is 10 um over both compliances; less the bolt's, by hand, the plates' is left."""
    result, _ = run_check(SPRINGS.format(embedding='"10 um"', thermal="", E="205e3", D_A=D_A))
    plates = 10e-3 / only_bolt(result)["embedding"] - BOLT_COMPLIANCE
    what = f"joint file, deformation cone, D_A {D_A} mm"
    validate(13, what, "integral over the depth", "derived", printed, plates, unit="mm/N")


@pytest.mark.parametrize(
    ("upper", "lower", "printed"), [("207e3", "207e3", "2235"), ("100e3", "100e3", "1080"), ("207e3", "100e3", "1456")]
)
def test_frusta_for_comparison(upper: str, lower: str, printed: str, validate: Any) -> None:
    """Problem 8-20's joint, d 12, bearing 18, 20 + 20 mm, as a file: the second opinion on the springs."""
    text = f"""
format = 1
units = "N mm"
[bolt]
thread = "M12"
bearing_diameter = 18
hole_diameter = 12
[tightening]
preload = [30e3, 40e3]
[[plate]]
material = {{ youngs_modulus = {upper}, poissons_ratio = 0.3 }}
thickness = 20
[[plate]]
material = {{ youngs_modulus = {lower}, poissons_ratio = 0.3 }}
thickness = 20
[interface]
friction = [0.2, 0.3]
[[case]]
shear = [1000, 0]
"""
    springs = assess(read_text(text)).clamp.assembly.springs
    assert springs is not None and springs.frustum is not None
    what, source = f"joint file, frusta of {upper} and {lower} MPa", "frustum of one material worked by hand"
    validate(8, what, source, "derived", printed, 1e-3 / springs.frustum, unit="MN/m")


def test_torque_to_preload(run_check: Any, validate: Any) -> None:
    """48.34 N m on M10 at friction .12 throughout: 29.6 kN; hole 11 and bearing 14.63 by default give D_km 12.815."""
    text = """
format = 1
units = "N mm"
[bolt]
thread = "M10"
[tightening]
torque = "48.34 N m"
thread_friction = 0.12
head_friction = 0.12
scatter = 0
[losses]
embedding = 0
relaxation = 0
[interface]
friction = [0.2, 0.3]
[[case]]
shear = [1000, 0]
"""
    result, _ = run_check(text)
    found = only_bolt(result)["assembly_low"] / 1e3
    validate(14, "joint file, M10 at 48.34 N m: preload", "work over a turn", "derived", "29.60", found, unit="kN")


@pytest.mark.parametrize(("rise", "key"), [(60, "thermal_gain"), (-60, "thermal_loss")])
def test_thermal_change(rise: float, key: str, run_check: Any, validate: Any) -> None:
    """30 mm of aluminium (70 GPa, so that delta_P is 1.7681e-6) on a bolt of delta_S 3.5123e-6 to four digits: .1 N.

    Warming gains 4091 N, which the lowest clamp must not have and the highest must; cooling loses as much.
    """
    assert pytest.approx(3.5123e-6, rel=5e-5) == BOLT_COMPLIANCE
    rises = f"thermal = {{ bolt = {rise}, plates = {rise} }}"
    result, _ = run_check(SPRINGS.format(embedding=0, thermal=rises, E="70e3", D_A=60))
    row = only_bolt(result)
    what = f"joint file, aluminium on steel, {rise:+} K: {key.replace('_', ' ')}"
    validate(15, what, "equilibrium of bolt and stack", "derived", "4091", row[key], unit="N")
    lost, gained = (row["thermal_loss"], row["thermal_gain"])
    assert min(lost, gained) == 0
    assert row["clamp_low"] == pytest.approx(30e3 - lost)
    assert row["clamp_high"] == pytest.approx(40e3 + gained)


# --- the bracket: check 16 -------------------------------------------------------------------------------------------

BRACKET = """
format = 1
units = "N mm"
[tightening]
preload = [78000, 125e3]
[losses]
embedding = "4500 N"
relaxation = 0
thermal = 3000
[interface]
friction = [0.18, 0.25]
[pattern]
positions = {positions}
[axial]
meaning = "external"
bolt_share = 0.15
[[case]]
kind = "static"
{case}
"""
DERIVED = "statics; limit analysis by an independent simulation"


def bracket(case: str, shift: float = 0.0) -> str:
    positions = [[x + shift, y] for y in (60, -60) for x in (-80, 0, 80)]
    return BRACKET.format(positions=positions, case=case)


def test_bracket_of_one_bolt_load(run_check: Any, validate: Any) -> None:
    """78000 - 4500 - 3000 - .85 12500 = 59875 N; .18 59875/5220.2 = 2.06; .18 70500/(5220.2 + .18 .85 12500) = 1.779."""
    result, code = run_check(bracket('acts_on = "each bolt"\nshear = [4200, -3100]\naxial = 12500'))
    end = result["cases"][0]["ends"][0]
    per_bolt = end["gross_slip"]["per_bolt"]
    validate(16, "bracket: clamp", DERIVED, "derived", "59875", end["ledger"][0]["clamp_low"], rel=1e-12, unit="N")
    validate(16, "bracket, one bolt: safety, clamp held", DERIVED, "derived", "2.06", per_bolt["safety"])
    validate(16, "bracket, one bolt: load factor, all loads", DERIVED, "derived", "1.779", per_bolt["load_factor"])
    assert code == 0


@pytest.mark.parametrize("shift", [0.0, 1000.0])
def test_bracket_under_shear_and_moment(shift: float, run_check: Any, validate: Any) -> None:
    """The tie of B3 and B6 goes to B3; the centre moves with the pattern."""
    result, _ = run_check(bracket('acts_on = "joint"\nshear = [0, 24000]\nmoment = [0, 0, 2.0e6]', shift))
    end = result["cases"][0]["ends"][0]
    slip, shear = end["gross_slip"], [row["shear"] for row in end["ledger"]]
    x, y = slip["group"]["centre"]
    for what, printed, found in (
        ("per bolt", "1.6238", slip["per_bolt"]["safety"]),
        ("shear of B3 [N]", "7814.9", shear[2]),
        ("shear of B1 [N]", "2614.6", shear[0]),
        ("group", "2.1300", slip["group"]["safety"]),
        ("centre, from the centroid [mm]", "-93.93", x - shift),
        ("force only", "3.1725", slip["force_only"]["safety"]),
    ):
        validate(16, f"bracket, centroid at {shift:.0f}: {what}", DERIVED, "derived", printed, found)
    assert y == pytest.approx(0, abs=1e-6)
    assert slip["per_bolt"]["bolt"] == "B3" and shear[5] == pytest.approx(shear[2], rel=1e-12)
    for name in ("per_bolt", "group", "force_only"):  # nothing axial: both factors are one
        assert slip[name]["load_factor"] == pytest.approx(slip[name]["safety"], rel=1e-10)


def test_bracket_with_axial(run_check: Any, validate: Any) -> None:
    """6250 N on every bolt."""
    result, _ = run_check(bracket('acts_on = "joint"\nshear = [0, 24000]\nmoment = [0, 0, 2.0e6]\naxial = 37500'))
    found, what = result["cases"][0]["ends"][0]["gross_slip"]["group"], "bracket, 6250 N axial per bolt: group"
    validate(16, f"{what}, clamp held", DERIVED, "derived", "1.97", found["safety"])
    validate(16, f"{what}, all loads", DERIVED, "derived", "1.84", found["load_factor"])


# --- groups: checks 17, 18 -------------------------------------------------------------------------------------------

GROUP = """
format = 1
units = "N mm"
[tightening]
preload = [100e3, 100e3]
[losses]
embedding = 0
relaxation = 0
[interface]
friction = 0.15
[pattern]
positions = {positions}
[[case]]
acts_on = "joint"
kind = "static"
{case}
"""
SIMULATION = "limit analysis by an independent simulation"
HELD = 15e3  # N that friction holds at each bolt


def group(positions: list[tuple[float, float]], case: str) -> str:
    return GROUP.format(positions=[list(p) for p in positions], case=case)


@pytest.mark.parametrize(
    ("e", "limit", "first"), [(100, "32211.4", "26832.8"), (50, "45553.9", "37947.3"), (200, "19239.3", "16641.0")]
)
def test_four_bolts_eccentric(e: float, limit: str, first: str, run_check: Any, validate: Any) -> None:
    """15 kN each at (+-50, +-50), force along y at x = e; the load of the file is 10 kN."""
    square = [(50, 50), (50, -50), (-50, 50), (-50, -50)]
    result, _ = run_check(group(square, f"shear = [0, 10000]\nat = [{e}, 0]"))
    slip = result["cases"][0]["ends"][0]["gross_slip"]
    for what, name, printed in (("group", "group", limit), ("first slip", "per_bolt", first)):
        found = 1e4 * slip[name]["safety"]
        validate(17, f"joint file, e {e} mm: {what}", SIMULATION, "derived", printed, found, unit="N")


def test_four_bolts_in_pounds_and_inches(run_check: Any) -> None:
    """The instant centre comes in the units of the file, those of the positions."""
    square = [(2, 2), (2, -2), (-2, 2), (-2, -2)]
    text = group(square, "shear = [0, 10000]\nat = [4, 0]")
    metric, _ = run_check(text)
    inches, _ = run_check(text.replace('"N mm"', '"lbf in"'))
    assert (metric["units"]["length"], inches["units"]["length"]) == ("mm", "in")
    left, right = (result["cases"][0]["ends"][0]["gross_slip"]["group"] for result in (metric, inches))
    assert left["safety"] == pytest.approx(right["safety"], rel=1e-9)
    assert left["centre"] == pytest.approx(right["centre"], abs=1e-4)

    def work(c: float) -> float:
        """Friction work of a turn about (c, 0) for unit work of the load; R of each bolt left out."""
        return 2 * (hypot(2 - c, 2) + hypot(2 + c, 2)) / (4 - c)

    centre = minimize_scalar(work, bounds=(-10, 0), method="bounded", options={"xatol": 1e-9})
    assert left["centre"] == pytest.approx([centre.x, 0], abs=1e-4)


def test_four_bolts_under_pure_torque(run_check: Any, validate: Any) -> None:
    """4 x 15 kN at 50 sqrt 2 mm. There is no resultant force, so the force alone has no finite factor."""
    square = [(50, 50), (50, -50), (-50, 50), (-50, -50)]
    result, _ = run_check(group(square, "moment = [0, 0, 1e6]"))
    slip = result["cases"][0]["ends"][0]["gross_slip"]
    torque = 1e6 * slip["group"]["safety"] / 1e3
    validate(17, "joint file, pure torque", "4 x 15 kN x 50 sqrt 2 mm", "derived", "4242.64", torque, unit="N m")
    assert slip["force_only"] == {}
    assert slip["per_bolt"]["safety"] == pytest.approx(slip["group"]["safety"], rel=1e-9)


LINE = [(0.0, -60.0), (0.0, 60.0)]
THREE, SIX = ([(0.0, 3.0 * i - 1.5 * (n - 1)) for i in range(n)] for n in (3, 6))
TWO_BY_THREE = [(x, y) for x in (-2.75, 2.75) for y in (-3.0, 0.0, 3.0)]
FACTORS = [
    ("2 bolts +-60, e 200", LINE, (0, 1), (200, 0), "0.5747"),
    ("2 bolts +-60, e 200, load across the line", LINE, (1, 0), (0, 200), "0.4615"),
    ("3 in line, pitch 3, e 3", THREE, (0, 1), (3, 0), "1.8229"),
    ("6 in line, pitch 3, e 6", SIX, (0, 1), (6, 0), "3.7413"),
    ("2 x 3, gauge 5.5, pitch 3, e 8", TWO_BY_THREE, (0, 1), (8, 0), "2.2353"),
]


@pytest.mark.parametrize(("what", "positions", "along", "at", "printed"), FACTORS, ids=[row[0] for row in FACTORS])
def test_slip_factor_of_a_pattern(
    what: str, positions: Any, along: Any, at: Any, printed: str, run_check: Any, validate: Any
) -> None:
    """C = P/R: the load at the group's limit over what one bolt holds."""
    case = f"shear = [{1e3 * along[0]}, {1e3 * along[1]}]\nat = [{at[0]}, {at[1]}]"
    result, _ = run_check(group(positions, case))
    found = result["cases"][0]["ends"][0]["gross_slip"]["group"]
    validate(18, f"joint file, {what}", SIMULATION, "derived", printed, 1e3 * found["safety"] / HELD)
    if len(positions) == 6 and at == (8, 0):  # the centre lies on a bolt, where root finding has nothing to hold on to
        assert min(hypot(found["centre"][0] - x, found["centre"][1] - y) for x, y in positions) < 1e-6
