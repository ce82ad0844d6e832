"""Faces of known pressure through `slip check --json`: check 28 from a file, limits in closed form, the models, and what is refused."""

import json
from math import log, pi, sqrt

import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from slip.assess import assess
from slip.base.formulas import evaluate
from slip.cli import main
from slip.friction.closed import lap
from slip.read.build import read_text

SIMULATION = "bars with sliders, simulated"


def plate(outline: str, thickness: float, edge: str = "", nu: float = 0.3) -> str:
    load_edge = f'load_edge = "{edge}"' if edge else ""
    return f"""[[plate]]
material = {{ youngs_modulus = 210000, poissons_ratio = {nu} }}
thickness = {thickness}
outline = {outline}
{load_edge}
"""


def face(plates: str, case: str, interface: str = "tangential_stiffness = [12000, 12000]", more: str = "") -> str:
    return f"""format = 1
units = "N mm"
{plates}
[interface]
pressure = 60
friction = [0.2, 0.3]
{interface}
{more}
[[case]]
name = "pull"
kind = "static"
{case}
"""


BARS = plate("[-50, -30, 300, 30]", 12, "right") + plate("[-300, -30, 50, 30]", 12, "left")
LONG = plate("[-120, -30, 600, 30]", 12, "right") + plate("[-600, -30, 120, 30]", 12, "left")
SQUARE = plate("[0, 0, 50, 50]", 12) + plate("[0, 0, 50, 80]", 12)


def end(run_check, text):
    found, code = run_check(text)
    assert "errors" not in found, found
    return found["cases"][0]["ends"][0], found, code


@pytest.mark.parametrize(
    ("k_t", "motion", "elastic", "true", "digits"),
    [
        (3000, "4.13", "4.00", "0.13", 0.005),
        (12000, "2.5677", "1.00", "1.57", 0.005),
        (120000, "2.1168", None, None, None),
    ],
)
def test_two_bars_are_check_28(run_check, validate, k_t, motion, elastic, true, digits):
    """Steel bars, t 12, b 60, overlap 100, p 60, mu .2, at 30 kN: what the simulation of the check says, and the closed form beside it."""
    measured = f"tangential_stiffness = [{k_t}, {k_t}]\nplate_shear = false"
    got, _, code = end(run_check, face(BARS, "shear = [30000, 0]", measured))
    slip = got["partial_slip"]
    what = f"bars from a joint file, k_t {k_t} N/mm3"
    parts = 1e3 * slip["elastic_slip"], 1e3 * slip["true_slip"]
    validate(28, f"{what}: end motion", SIMULATION, "derived", motion, sum(parts), 0.005, unit="um")
    if digits:
        validate(28, f"{what}: elastic slip", SIMULATION, "derived", elastic, parts[0], digits, unit="um")
        validate(28, f"{what}: true slip", SIMULATION, "derived", true, parts[1], digits, unit="um")
    assert slip["model"] == "shear-lag strips" and code == 0
    assert slip["gross_slip_load"] == pytest.approx(0.2 * 60 * 100 * 60, rel=1e-9)
    closed = slip["closed_form"]
    for name in ("first_slip_load", "stiffness", "elastic_slip", "true_slip"):
        assert slip[name] == pytest.approx(closed[name], rel=2e-3), name
    assert slip["slip_length"] == pytest.approx(closed["slip_length"], abs=2 * 100 / 240)


def test_shear_through_the_thickness_is_taken_in_series(run_check):
    """As k_t' = 1/(1/k_t + 2 t/(3 G)) on bars without it: the same true slip; of the elastic motion the face has k_t'/k_t."""
    with_shear = end(run_check, face(BARS, "shear = [30000, 0]"))[0]["partial_slip"]
    series = 1 / (1 / 12000 + 2 * 12 / (3 * 210000 / 2.6))
    measured = f"tangential_stiffness = [{series}, {series}]\nplate_shear = false"
    alone = end(run_check, face(BARS, "shear = [30000, 0]", measured))[0]["partial_slip"]
    assert with_shear["true_slip"] == pytest.approx(alone["true_slip"], rel=1e-6)
    assert with_shear["elastic_slip"] == pytest.approx(alone["elastic_slip"] * series / 12000, rel=1e-6)


def test_cycle_against_the_closed_form(run_check):
    """Between 30 and -10 kN at a constant pressure: that of +-20 kN."""
    case = "shear = [30000, 0]\nother_end = { shear = [-10000, 0] }"
    text = face(BARS, case).replace('kind = "static"', 'kind = "alternating"')
    slip = end(run_check, text)[0]["partial_slip"]
    assert slip["energy_per_cycle"] == pytest.approx(slip["closed_form"]["energy_per_cycle"], rel=2e-3)
    both = text.replace("30000", "20000").replace("-10000", "-20000")
    assert end(run_check, both)[0]["partial_slip"]["energy_per_cycle"] == pytest.approx(
        slip["energy_per_cycle"], rel=1e-3
    )


def test_a_face_that_hardly_yields_is_rigid_stick(run_check, validate):
    """As check 28 with rigid stick: 2.07 um at the ends; the cells are refined for it."""
    rigid = "tangential_stiffness = [1e7, 1e7]\nplate_shear = false"
    slip = end(run_check, face(BARS, "shear = [30000, 0]", rigid))[0]["partial_slip"]
    what = "bars from a joint file, k_t 1e7 N/mm3"
    validate(28, f"{what}: end motion", SIMULATION, "derived", "2.07", 1e3 * slip["true_slip"], unit="um")
    decay = sqrt(1e7 * 60 * 2 / (210000 * 12 * 60))
    assert slip["slip_length"] / 2 == pytest.approx(
        30000 / (2 * 0.2 * 60 * 60) - 1 / decay, abs=100 / 960
    )  # of 20.83 mm rigid


def test_no_cycle_where_the_other_end_slips_wholly(run_check):
    text = face(BARS, "shear = [30000, 0]\nother_end = { shear = [-80000, 0] }")
    got, _, code = end(run_check, text.replace('kind = "static"', 'kind = "alternating"'))
    slip = got["partial_slip"]
    assert code == 1 and slip["true_slip"] > 0 and "energy_per_cycle" not in slip
    assert "energy_per_cycle" not in slip["closed_form"] and any("no energy" in note for note in slip["notes"])


def factors(got):
    return got["gross_slip"]["group"]["safety"], got["gross_slip"].get("force_only", {}).get("safety")


def test_force_through_the_middle_slips_at_mu_p_A(run_check):
    """Overlap 50 x 50 of two outlines, force at its middle by default: 0.2 x 60 x 2500 = 30 kN."""
    got, found, code = end(run_check, face(SQUARE, "shear = [6000, 8000]"))
    assert factors(got) == (pytest.approx(3.0, rel=1e-9), pytest.approx(3.0, rel=1e-12))
    assert found["pressed_face"] == {"pressure": 60.0, "force": 150000.0, "middle": [25.0, 25.0]} and code == 0
    assert end(run_check, face(SQUARE, "shear = [20000, 18000]"))[2] == 1  # 1.115 against 1.2


def test_pure_torque_on_a_square_and_on_a_ring(run_check):
    """mu p times the integral of r: a^3 (sqrt 2 + ln(1 + sqrt 2))/6 over a square, 2 pi/3 (R^3 - r^3) over a ring."""
    got = end(run_check, face(SQUARE, "moment = [0, 0, 200000]"))[0]
    torque = 0.2 * 60 * 50**3 * (sqrt(2) + log(1 + sqrt(2))) / 6
    assert factors(got)[0] == pytest.approx(torque / 200000, rel=1e-3)
    rings = plate("{ outer_diameter = 80, inner_diameter = 20 }", 12) + plate("{ outer_diameter = 60 }", 12)
    got = end(run_check, face(rings, "moment = [0, 0, 200000]"))[0]
    torque = 0.2 * 60 * 2 * pi / 3 * (30**3 - 10**3)
    assert factors(got)[0] == pytest.approx(torque / 200000, rel=1e-3)
    got = end(run_check, face(rings, "shear = [10000, 0]"))[0]
    assert factors(got)[0] == pytest.approx(0.2 * 60 * pi * (30**2 - 10**2) / 10000, rel=1e-9)


def test_force_off_the_middle_against_the_least_work_of_turning(run_check):
    """8 kN along y, 20 mm off the middle of the square: the least work of friction about any centre on the axis, by Gauss points."""
    got = end(run_check, face(SQUARE, "shear = [0, 8000]\nat = [45, 25]"))[0]
    places, weights = np.polynomial.legendre.leggauss(60)
    x, y = np.meshgrid(25 * places, 25 * places)
    area = 25**2 * np.outer(weights, weights)

    def factor(c):
        return 0.2 * 60 * (area * np.hypot(x + c, y)).sum() / (8000 * (20 + c))

    least = minimize_scalar(factor, bounds=(0, 500), method="bounded", options={"xatol": 1e-6}).fun
    whole, alone = factors(got)
    assert whole == pytest.approx(least, rel=1e-3) and alone == pytest.approx(30000 / 8000, rel=1e-12)


def test_a_moment_that_takes_the_force_back_to_the_middle(run_check):
    """Arms (20, 15) of (3, 8) kN make 115 N m about the middle; the opposite couple leaves the force alone."""
    case = "shear = [3000, 8000]\nat = [45, 40]\nmoment = [0, 0, -115000]"
    assert factors(end(run_check, face(SQUARE, case))[0])[0] == pytest.approx(30000 / np.hypot(3000, 8000), rel=1e-9)


def test_double_lap_holds_twice(run_check):
    three = (
        plate("[-50, -30, 300, 30]", 6, "right")
        + plate("[-300, -30, 50, 30]", 12, "left")
        + plate("[-50, -30, 300, 30]", 6, "right")
    )
    got = end(
        run_check, face(three, "shear = [60000, 0]", "parallel_faces = 2\ntangential_stiffness = [12000, 12000]")
    )[0]
    assert factors(got)[0] == pytest.approx(2 * 72000 / 60000, rel=1e-9)
    half = plate("[-50, -30, 300, 30]", 6, "right") + plate("[-300, -30, 50, 30]", 6, "left")
    single = end(run_check, face(half, "shear = [30000, 0]"))[0]["partial_slip"]
    assert got["partial_slip"]["true_slip"] == pytest.approx(single["true_slip"], rel=1e-6)
    assert got["partial_slip"]["stiffness"] == pytest.approx(2 * single["stiffness"], rel=1e-6)


def test_wide_plates_take_points_and_thick_blocks_half_spaces(run_check):
    """A rigid face under even pressure has no partial slip under a force; thick blocks slip first at the edges."""
    points = end(run_check, face(SQUARE, "shear = [15000, 0]"))[0]["partial_slip"]
    assert points["model"] == "points over the pressed face" and points["true_slip"] == 0
    series = 1 / (1 / 12000 + 2 * 12 / (3 * 210000 / 2.6))
    assert points["stiffness"] == pytest.approx(2500 * series, rel=1e-9)
    assert points["elastic_slip"] == pytest.approx(15000 / 2500 / 12000, rel=1e-9)
    thick = SQUARE.replace("thickness = 12", "thickness = 60")
    blocks = end(run_check, face(thick, "shear = [15000, 0]"))[0]["partial_slip"]
    assert blocks["model"] == "half-spaces" and "thicker" in blocks["why"]
    assert blocks["first_slip_load"] < 0.9 * 30000 and blocks["gross_slip_load"] == pytest.approx(30000, rel=1e-9)
    soft = "tangential_stiffness = [10, 10]"
    even = end(run_check, face(thick, "shear = [15000, 0]", soft))[0]["partial_slip"]
    assert even["stiffness"] == pytest.approx(10 * 2500, rel=0.01)  # the face yields, the blocks do not
    assert even["elastic_slip"] == pytest.approx(15000 / 2500 / 10, rel=0.02)


def test_round_face_on_thick_blocks_is_the_flat_punch(run_check):
    """A disc of even motion, the face rigid: 8 a G* exactly for nu 0, within 1 % for 0.3; cells are coarse at its edge."""
    discs = plate("{ outer_diameter = 40 }", 90) + plate("{ outer_diameter = 40 }", 90)
    stiffness = 1e9
    got = end(run_check, face(discs, "shear = [3000, 0]", f"tangential_stiffness = [{stiffness}, {stiffness}]"))[0]
    G = 210000 / 2.6
    G_star = 1 / (2 * 1.7 / G)
    assert got["partial_slip"]["stiffness"] == pytest.approx(8 * 20 * G_star, rel=0.03)


def test_without_stiffness_or_material_only_gross_slip(run_check):
    got, found, code = end(run_check, face(SQUARE, "shear = [6000, 8000]", ""))
    assert "partial_slip" not in got and code == 0
    bare = "\n".join(line for line in SQUARE.splitlines() if "material" not in line)
    got, found, code = end(run_check, face(bare, "shear = [6000, 8000]", more="[required]\ntrue_slip = 1e-3"))
    (check,) = [c for c in found["checks"] if c["check"] == "true_slip"]
    assert code == 3 and "material of both plates" in check["reason"]


def test_no_shear_holds(run_check):
    got, found, code = end(run_check, face(SQUARE, "shear = [0, 0]", more="[required]\ntrue_slip = 1e-3"))
    assert code == 0 and found["governing"]["reason"] == "no shear" and got["partial_slip"]["reason"] == "no shear"


def test_limit_of_true_slip(run_check):
    limit = "[required]\ntrue_slip = {}"
    low = end(
        run_check,
        face(
            BARS,
            "shear = [30000, 0]",
            "tangential_stiffness = [12000, 12000]\nplate_shear = false",
            limit.format(1.56e-3),
        ),
    )[1]
    assert not low["holds"] and low["governing"]["check"] == "true_slip" and low["answers"]["slip"] == "fails"
    high = face(
        BARS, "shear = [30000, 0]", "tangential_stiffness = [12000, 12000]\nplate_shear = false", limit.format(1.58e-3)
    )
    unknown, code = end(run_check, high)[1:]  # 8 thicknesses: the slip is not known to 10 %
    (said,) = {c["reason"] for c in unknown["checks"] if c["check"] == "true_slip"}
    assert code == 3 and not unknown["holds"] and "shorter than 16 thicknesses" in said
    slender = face(
        LONG, "shear = [30000, 0]", "tangential_stiffness = [500, 500]\nplate_shear = false", limit.format(0.1)
    )
    assert end(run_check, slender)[1]["holds"]


def test_points_over_a_face_leave_the_stretch_out(run_check):
    """Two squares of 50 mm at 15 kN: F L/EA = 15 000 x 50/(210 000 x 12 x 50) = 0.0060 mm; true slip is 0, up to 6.0 um more."""
    limit = "[required]\ntrue_slip = {}"
    got, found, code = end(run_check, face(SQUARE, "shear = [15000, 0]", more=limit.format(0.005)))
    assert got["partial_slip"]["stretch_left_out"] == pytest.approx(15000 * 50 / (210000 * 12 * 50), rel=1e-9)
    assert code == 3 and not found["holds"]
    assert end(run_check, face(SQUARE, "shear = [15000, 0]", more=limit.format(0.0061)))[2] == 0


APART = plate("[0, 0, 50, 50]", 12) + plate("[60, 0, 90, 50]", 12)
MIXED = plate("[0, 0, 50, 50]", 12) + plate("{ outer_diameter = 60 }", 12)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        (face(SQUARE, "shear = [1, 0]\naxial = 5"), "face-load"),
        (face(SQUARE, "shear = [1, 0]\nmoment = [3, 0, 0]"), "face-load"),
        (face(SQUARE, "shear = [1, 0]\nat = [25, 25, 10]"), "face-load"),
        (face(SQUARE, 'shear = [1, 0]\nacts_on = "each bolt"'), "face-load"),
        (face(SQUARE, "shear = [1, 0]\nthermal = 5"), "face-load"),
        (face(APART, "shear = [1, 0]"), "face-plates"),
        (face(MIXED, "shear = [1, 0]"), "face-plates"),
        (face(SQUARE + plate("[0, 0, 50, 50]", 12), "shear = [1, 0]"), "face-plates"),
        (face("", "shear = [1, 0]"), "face-plates"),
        (face(SQUARE.replace("outline", "# outline", 1), "shear = [1, 0]"), "missing-key"),
        (face(SQUARE, "shear = [1, 0]", more="[losses]\nembedding = 0"), "pressure-twice"),
    ],
)
def test_what_a_known_pressure_cannot_carry(run_check, text, code):
    found, exit_code = run_check(text)
    assert exit_code == 2 and [error["code"] for error in found["errors"]] == [code]


SLIM = plate("[-50, -30, 300, 30]", 6, "right") + plate("[-300, -30, 50, 30]", 12, "left")
SLIM_LEFT = plate("[-50, -30, 300, 30]", 12, "right") + plate("[-300, -30, 50, 30]", 6, "left")
DOUBLE = (
    plate("[-50, -30, 300, 30]", 6, "right")
    + plate("[-300, -30, 50, 30]", 16, "left")
    + plate("[-50, -30, 300, 30]", 6, "right")
)


@pytest.mark.parametrize("pull", [4000, 12500, 16000, 30000, 45000, 69000])
@pytest.mark.parametrize("other", [-1.0, -0.6, 0.5])
@pytest.mark.parametrize(
    ("plates", "t", "faces"),
    [(BARS, (12, 12), 1), (SLIM, (6, 12), 1), (SLIM_LEFT, (12, 6), 1), (DOUBLE, (6, 8), 2)],
)
def test_closed_form_against_the_motion_of_the_ends(plates, t, faces, pull, other):
    """The lines of the closed form against lap.end_motions and lap.energy, which find their own way: elastic is what k carries."""
    case = f"shear = [{faces * pull}, 0]\nother_end = {{ shear = [{other * faces * pull}, 0] }}"
    measured = f"tangential_stiffness = [12000, 12000]\nplate_shear = false\nparallel_faces = {faces}"
    text = face(plates, case, measured).replace('kind = "static"', 'kind = "alternating"')
    found = assess(read_text(text)).slips[0, "given"]
    joint = 210000 * t[0] * 60, 210000 * t[1] * 60, 12000 * 60, 0.2 * 60 * 60, 100
    ends = lap.end_motions(pull, *joint)
    most = max(float(g) for g in ends)
    assert found.closed.elastic_slip == pytest.approx(min(most, 1e-3), rel=1e-9)
    assert found.closed.true_slip == pytest.approx(max(most - 1e-3, 0), rel=1e-7, abs=1e-12)
    assert found.closed.slip_length == pytest.approx(sum(lap.slip_lengths(pull, *joint)), rel=1e-12)
    energy = faces * lap.energy(abs(1 - other) / 2 * pull, *joint)
    assert found.closed.energy_per_cycle == pytest.approx(float(energy), rel=1e-9)
    assert found.closed.stiffness == pytest.approx(faces * lap.initial_stiffness(*joint[:3], 100), rel=1e-12)


@pytest.mark.parametrize(("soft", "stiff"), [(12, 12), (6, 12), (12, 6)])
def test_flow_at_the_end_before_slip_follows_the_pull(soft, stiff):
    """q_l P/P_on against stiffness times the motion of the ends of the stuck lap."""
    EA, k, q_l = (210000 * soft * 60, 210000 * stiff * 60), 720000, 720
    omega = lap.joint_decay(*EA, k, 100)
    P_on = lap.onset(q_l, k, *EA, omega, 100)
    for share in (0.1, 0.5, 0.999):
        flow = lap.end_flow(share * P_on, P_on, q_l)
        assert flow == pytest.approx(k * max(lap.end_motions(share * P_on, *EA, k, q_l, 100)), rel=1e-9)


@pytest.mark.parametrize("k_t", [1e3, 1e5, 1e9])
def test_texts_of_a_long_lap_do_not_overflow(k_t):
    """Decay times overlap of 44 to 44 000: the printed sums are still worked out."""
    EA, k = (1.5e8, 0.7e8), k_t * 60
    omega = float(lap.joint_decay(*EA, k, 1000.0))
    for function, values in (
        (lap.onset, {"q_l": 720.0, "k": k}),
        (lap.stuck_compliance, {}),
    ):
        values = values | {"EA_1": EA[0], "EA_2": EA[1], "omega": omega, "L": 1000.0}
        assert evaluate(function.formula.put_in(values)) == pytest.approx(float(function(**values)), rel=1e-6)


@pytest.mark.parametrize("plates", [BARS, SQUARE, plate("{ outer_diameter = 80, inner_diameter = 20 }", 12) * 2])
def test_force_and_area_of_the_lines_are_those_of_the_face(plates):
    text = face(plates, "shear = [1000, 0]")
    found = assess(read_text(text))
    steps = {step.name: step.result for step in found.slips[0, "given"].parts["pressure and load"].steps}
    assert steps["area of one face"] == pytest.approx(found.joint.area, rel=1e-15)
    assert steps["force that presses each face"] == pytest.approx(found.joint.force, rel=1e-15)


def test_screen(tmp_path, capsys):
    path = tmp_path / "face.toml"
    path.write_text(face(BARS, "shear = [30000, 0]"), encoding="utf-8")
    assert main(["check", str(path)]) == 0
    said = capsys.readouterr().out
    assert max(map(len, said.splitlines())) <= 80 and "In closed form" in said and "slips wholly at 2.400" in said
    assert main(["check", str(path), "--json", "--units", "lbf in"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["pressed_face"]["force"] == pytest.approx(360000 / 4.4482216152605, rel=1e-9)


def test_the_first_line_names_what_is_not_solved(tmp_path, capsys):
    path = tmp_path / "face.toml"
    path.write_text(face(BARS, "shear = [30000, 0]", more='[required]\ntrue_slip = "1 mm"'), encoding="utf-8")
    assert main(["check", str(path)]) == 3
    said = " ".join(capsys.readouterr().out.split())
    assert said.startswith("NOT SOLVED: true slip: ") and "shorter than 16 thicknesses" in said.partition("(pull")[0]
