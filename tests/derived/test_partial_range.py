"""What keeps partial slip honest: stretch that points leave out, the range of strips, the rim of a patch, clamps that change, and what
is said of it all."""

import numpy as np
import pytest

from slip import read_text
from slip.assess import assess
from slip.cli import main
from slip.friction import cycle, models
from slip.friction.faces import face_stiffness
from slip.friction.model_strips import SLENDER, THIN
from slip.friction.partial import motions_of
from slip.pressure import patch as patches
from slip.pressure.receding import contact
from slip.pressure.rings import Body
from slip.pressure.stage import pressure
from slip.report.page import page

E, MU, CLAMP = 210000.0, 0.2, 20000.0


def lap(
    load,
    t=6.0,
    half=60.0,
    bolts="[[-35, 0], [35, 0]]",
    face='roughness = ["Ra 1 um", "Ra 1 um"]',
    required="",
    edge=30.0,
    more="",
):
    """Two bars in lap, the overlap 2 half long; `load` is the case's."""
    material = f"material = {{ youngs_modulus = {E}, poissons_ratio = 0.3 }}"
    return f"""format = 1
units = "N mm"
[bolt]
hole_diameter = 11
bearing_diameter = 16
[tightening]
preload = [{CLAMP}, 25000]
[losses]
embedding = 0
relaxation = 0
[[plate]]
{material}
thickness = {t}
outline = [{-half}, -{edge}, 300, {edge}]
load_edge = "right"
[[plate]]
{material}
thickness = {t}
outline = [-300, -{edge}, {half}, {edge}]
load_edge = "left"
[interface]
friction = [{MU}, 0.3]
{face}
[pattern]
positions = {bolts}
[required]
static = 1
alternating = 1
{required}
[[case]]
name = "pull"
acts_on = "joint"
{load}
kind = "alternating"
{more}
"""


def slip_of(run_check, text):
    found, code = run_check(text)
    assert "errors" not in found, found
    return found["cases"][0]["ends"][0]["partial_slip"], found, code


# stretch that points leave out

RAIL = f"{[[50 * i, 0] for i in range(10)]}"


def rail(x, y, required):
    text = lap(f"shear = [{x}, {y}]", bolts=RAIL, half=510, required=required)
    return text.replace("[-510,", "[-60,").replace("300, 30.0]", "900, 30.0]")


@pytest.mark.parametrize("face", ['roughness = ["Ra 1 um", "Ra 1 um"]', "tangential_stiffness = [12000, 12000]"])
@pytest.mark.parametrize("load", [3000, 6000, 7600])
@pytest.mark.parametrize("clamps", [(1.0, 1.0), (0.3, 1.7)])
def test_points_with_the_stretch_are_never_below_strips(face, load, clamps):
    """A lap that both models can do: a load along it for the strips, the same laid on points."""
    joint = read_text(lap(f"shear = [{load}, 0]", face=face))
    patch, stiffness = pressure(joint, False).patch, face_stiffness(joint)
    clamp, V = CLAMP * np.array(clamps), np.array([float(load), 0.0, 0.0])
    strips = models.choose(joint, patch, stiffness, V, clamp)
    points = models.choose(joint, patch, stiffness, V + [0, 0.011 * load, 0], clamp)
    assert (strips.name, points.name) == ("shear-lag strips", "points over the pressure patches")
    one, other = (V, clamp), (-V, clamp)
    for reading in range(3):
        real, rigid = (motions_of(model, MU, reading, one, other, False) for model in (strips, points))
        assert rigid.true_slip + points.stretch >= real.true_slip
    assert strips.stretch == 0


def test_stretch_by_hand(run_check):
    """F L/EA: of two bolts 70 mm apart with patches of some 28 mm; the plates are 60 wide and 6 thick, the force 4 kN and 1.1 % across."""
    text = lap("shear = [4000, 44]")
    patch = pressure(read_text(text), False).patch
    length = 70 * 4000 / np.hypot(4000, 44) + 2 * patch.contact_radius
    found = slip_of(run_check, text)[0]["stretch_left_out"]
    assert found == pytest.approx(np.hypot(4000, 44) * length / (E * 6 * 60), rel=1e-3)
    turning = lap(
        "shear = [0, 0]\nmoment = [0, 0, 70000]"
    )  # a couple of 1 kN on two bolts, and what their patches turn
    wide = 2 * patch.contact_radius
    found = slip_of(run_check, turning)[0]["stretch_left_out"]
    assert found == pytest.approx(2000 * np.hypot(70 + wide, wide) / (E * 6 * 60), rel=0.25)


def test_a_long_rail_does_not_hold_by_points_alone(run_check):
    """450 mm of bolts, the load 2 % off the axis: points alone slip little, the plates stretch far more than the limit."""
    slip, found, code = slip_of(run_check, rail(30000, 600, 'true_slip = "20 um"'))
    (said,) = {c["reason"] for c in found["checks"] if c["check"] == "true_slip"}
    worst = max(slip["band"][name]["true_slip"] for name in ("low", "high"))
    assert slip["model"].startswith("points") and worst < 0.02 < slip["stretch_left_out"]
    assert code == 3 and not found["holds"] and "more by the stretch of the plates" in said
    assert f"{1e3 * slip['stretch_left_out']:.3g} um" in said and "against 20 um" in said
    assert any("plates stretch by up to" in note for note in slip["notes"])
    assert slip_of(run_check, rail(30000, 600, 'true_slip = "400 um"'))[2] == 0


# the range of strips


def omega(text):
    joint = read_text(text)
    V = np.array([1000.0, 0.0, 0.0])
    found = models.choose(joint, pressure(joint, False).patch, face_stiffness(joint), V, np.full(2, CLAMP))
    (line,) = [step.result for step in found.trace.steps if step.name == "decay of the motion from the ends"]
    return float(line), found


@pytest.mark.parametrize("side", [0.99, 1.01])
def test_range_of_decay_from_both_sides(side):
    """A stiffness for which omega t is just inside, or just outside: k/(1 + k C) = (omega t)^2 E t/2/t^2."""
    t = 6.0
    wanted = (side * THIN / t) ** 2 / 2 * E * t  # series of face and plates per area, over the whole width
    k = 1 / (1 / wanted - 2 * t / (3 * E / 2.6))
    w, found = omega(lap("shear = [1000, 0]", t=t, face=f"tangential_stiffness = [{k}, {k}]"))
    assert w * t == pytest.approx(side * THIN, rel=1e-6)
    assert (found.outside != "") == (side > 1) and any("omega t" in note for note in found.notes) == (side > 1)


@pytest.mark.parametrize("side", [0.99, 1.01])
def test_range_of_slenderness_from_both_sides(side):
    t, k = 6.0, 500
    half = side * SLENDER * t / 2
    _, found = omega(
        lap("shear = [1000, 0]", t=t, half=half, bolts="[[-20, 0], [20, 0]]", face=f"tangential_stiffness = [{k}, {k}]")
    )
    assert (found.outside == f"the lap is shorter than {SLENDER:g} thicknesses") == (side < 1)
    assert (found.outside == "") == (side > 1)


def test_a_limit_outside_the_range_is_not_a_pass(run_check):
    text = lap("shear = [6000, 0]", half=40, bolts="[[-20, 0], [20, 0]]")
    slip, _, _ = slip_of(run_check, text)
    worst = max(slip["band"][b]["true_slip"] for b in ("low", "high"))
    assert "shorter than" in slip["outside_range"] and worst > 0
    for limit, code, word in ((0.9 * worst, 1, "against"), (1.5 * worst, 3, "the lap is shorter than 16 thicknesses")):
        found, got = run_check(text.replace("alternating = 1", f'alternating = 1\ntrue_slip = "{1e3 * limit} um"'))
        (said,) = {c["reason"] for c in found["checks"] if c["check"] == "true_slip"}
        assert got == code and not found["holds"] and word in said


def test_the_range_is_said_on_every_report(tmp_path, capsys):
    path = tmp_path / "lap.toml"
    path.write_text(lap("shear = [6000, 0]", half=40, bolts="[[-20, 0], [20, 0]]"))
    for command in ("check", "explain"):
        assert main([command, str(path)]) == 0
        said = capsys.readouterr().out
        assert "utside" in said or "shorter than 16 thicknesses" in said.replace("\n", " "), command
    assert "shorter than 16 thicknesses" in page(assess(path))


WIDE = """format = 1
units = "N mm"
[bolt]
hole_diameter = 11
bearing_diameter = 16
[tightening]
preload = [40000, 50000]
[losses]
embedding = 0
relaxation = 0
[[plate]]
{m}
thickness = {t}
outline = {o}
[[plate]]
{m}
thickness = {t}
outline = {p}
[interface]
friction = [0.2, 0.3]
{face}
[pattern]
positions = {bolts}
[required]
static = 1
{required}
[[case]]
name = "pull"
{load}
{kind}
"""


def wide(
    t,
    o="[-400, -400, 400, 400]",
    p="[-400, -400, 400, 400]",
    bolts="[[0, 0]]",
    load="shear = [3000, 0]",
    kind='kind = "static"',
    face="tangential_stiffness = [20000, 20000]",
    required="",
):
    m = f"material = {{ youngs_modulus = {E}, poissons_ratio = 0.3 }}"
    return WIDE.format(m=m, t=t, o=o, p=p, bolts=bolts, load=load, kind=kind, face=face, required=required)


def square(reach):
    return f"[{-reach}, {-reach}, {reach}, {reach}]"


@pytest.mark.parametrize(("part", "said"), [(0.99, False), (1.01, True)])
def test_note_of_narrow_patches_from_both_sides(run_check, part, said):
    """Plates whose patch spreads over just four thicknesses, by halving, a little thinner and thicker."""
    low, high = 2.0, 12.0
    for _ in range(30):
        t = (low + high) / 2
        wider = contact(Body(t, E, 0.3), Body(t, E, 0.3), 5.5, 8.0).contact_radius > 2 * t
        low, high = (t, high) if wider else (low, t)
    slip = slip_of(run_check, wide(part * t))[0]
    assert any("only roughly counted" in note for note in slip["notes"]) == said


@pytest.mark.parametrize(("thickness", "name"), [(29.9, "points over the pressure patches"), (30.1, "half-spaces")])
def test_half_spaces_from_plates_thicker_than_the_patch(run_check, thickness, name):
    slip = slip_of(run_check, wide(thickness, square(15), square(15)))[0]
    assert slip["model"] == name
    assert any("steep traction of half-spaces" in note for note in slip["notes"]) == (name == "half-spaces")


@pytest.mark.parametrize("which", [0, 1])
def test_the_patch_ends_at_the_nearest_edge_of_any_plate_and_bolt(which):
    """One plate ends 13 mm from one bolt, 20 mm from the other, the other plate further off."""
    outlines = ["[-13, -50, 120, 50]", "[-20, -50, 140, 50]"]
    o, p = outlines if which == 0 else outlines[::-1]
    joint = read_text(wide(12, o, p, bolts="[[0, 0], [100, 0]]", load='acts_on = "joint"\nshear = [3000, 0]'))
    assert pressure(joint, False).patch.contact_radius == pytest.approx(13)


# the rim of a patch


def measured(text, rim=None, monkeypatch=None):
    if rim is not None:
        monkeypatch.setattr(patches, "RIM", rim)
    found = assess(read_text(text)).partial.of(0, "given")
    return found.readings[1]


CONSTANT = "tangential_stiffness = [20000, 20000]"


@pytest.mark.parametrize("load", ["shear = [3000, 300]", "shear = [3000, 0]"])
def test_rim_does_not_follow_the_mesh(monkeypatch, load):
    """Points and strips under a constant stiffness: 505, 5.06 and 0.0506 N before, by the width of the outermost ring."""
    text = lap(load, face=CONSTANT)
    found = [measured(text, rim, monkeypatch) for rim in (1e-2, 1e-4, 1e-6)]
    for name in ("first_slip_load", "elastic_slip", "true_slip"):
        values = [getattr(one, name) for one in found]
        assert values == pytest.approx([values[1]] * 3, rel=0.03), name
    assert found[0].first_slip_load > 200


def test_rim_does_not_follow_the_cells(monkeypatch):
    from slip.friction import model_strips

    text = lap("shear = [3000, 0]", face=CONSTANT)
    found = []
    for cells in (240, 480):
        monkeypatch.setattr(model_strips, "CELLS", cells)
        found.append(measured(text))
    for name in ("first_slip_load", "elastic_slip", "true_slip"):
        assert getattr(found[0], name) == pytest.approx(getattr(found[1], name), rel=0.05), name


def test_even_pressure_leaves_nothing_out():
    from slip.friction.model import rim_pressure

    assert rim_pressure(np.full(7, 3.0), np.full(7, 2.0)) == 3.0
    assert rim_pressure(np.array([0.0, 4.0]), np.array([0.0, 1.0])) == 4.0


def test_the_note_of_the_rim_stands_where_it_matters(run_check):
    of = {face: slip_of(run_check, wide(12, face=face))[0] for face in (CONSTANT, 'roughness = ["Ra 1 um", "Ra 1 um"]')}
    notes = [any("last 1 % of the clamp" in note for note in found["notes"]) for found in of.values()]
    assert notes == [True, False]


# clamps that change

RELIEVED = "shear = [2500, 0]\naxial = 8000\nother_end = { shear = [-2500, 0], axial = 0 }"


def relieved(bolts="[[-35, 0], [35, 0]]"):
    loads = "shear = [2500, 300]\naxial = 16000\nother_end = { shear = [-2500, -300], axial = 0 }"
    return lap(loads, bolts=bolts).replace("[bolt]", '[bolt]\nthread = "M10"').replace("[[case]]", "[[case]]")


def test_elastic_slip_of_a_relieved_end_is_that_of_the_surface(run_check):
    """mu gamma h_rms/rho whatever the clamp; with the stiffness of the larger clamp it was too small by the ratio of the clamps."""
    found, _ = run_check(relieved())
    assert "errors" not in found, found
    ends = [end["partial_slip"] for end in found["cases"][0]["ends"]]
    clamps = [end["ledger"][0]["clamp_low"] for end in found["cases"][0]["ends"]]
    assert clamps[0] < 0.8 * clamps[1]
    d_e = MU * 0.48 * 1.25e-3 * np.sqrt(2) / (2 * 0.7 / 1.7)
    slipping = [end for end in ends if end["true_slip"] > 0]
    assert slipping and ends[0]["true_slip"] > 0
    for end in slipping:
        assert end["elastic_slip"] == pytest.approx(d_e, rel=1e-6)


def test_both_ends_of_a_case_lose_the_same(run_check):
    found, _ = run_check(relieved())
    energies = [end["partial_slip"]["energy_per_cycle"] for end in found["cases"][0]["ends"]]
    assert energies[0] == pytest.approx(energies[1], rel=0.02) and energies[0] > 0


def test_cycles_with_changing_clamp_are_fine_enough(monkeypatch, run_check):
    energies = []
    for turns in (cycle.TURNS, 4 * cycle.TURNS):
        monkeypatch.setattr(cycle, "TURNS", turns)
        energies.append(run_check(relieved())[0]["cases"][0]["ends"][0]["partial_slip"]["energy_per_cycle"])
    assert energies[0] == pytest.approx(energies[1], rel=0.03)


def test_a_cycle_that_does_not_settle_has_no_energy(monkeypatch, run_check):
    monkeypatch.setattr(cycle, "LAPS", 1)
    slip = run_check(relieved())[0]["cases"][0]["ends"][0]["partial_slip"]
    assert "energy_per_cycle" not in slip and any("energy still changes: no energy" in note for note in slip["notes"])


# what is said


def test_terminal_shows_another_end_where_the_governing_one_has_none(tmp_path, capsys):
    text = (
        lap("shear = [9000, 0]\nratio = -1")
        + '[[case]]\nname = "idle"\nacts_on = "joint"\nshear = [4000, 0]\nkind = "static"\n'
    )
    text += '[[case]]\nname = "busy"\nacts_on = "joint"\nshear = [6000, 0]\nkind = "static"\n'
    path = tmp_path / "lap.toml"
    path.write_text(text)
    assert main(["check", str(path)]) == 1
    said = capsys.readouterr().out
    assert "Partial slip in busy, given end," in said
    assert max(map(len, said.splitlines())) <= 80 and len(said.splitlines()) <= 24


def test_gross_slip_is_said_where_there_is_room(tmp_path, capsys):
    path = tmp_path / "lap.toml"
    path.write_text(lap("shear = [4000, 0]\nratio = -1", face='roughness = ["Rz 250 um", "Rz 250 um"]'))
    main(["check", str(path)])
    assert "all at 8 000 N" in capsys.readouterr().out


def test_page_words_of_a_failing_limit_and_bands_in_order():
    text = lap("shear = [6000, 0]\nratio = -1", required='true_slip = "0.001 um"')
    text += '[[case]]\nname = "askew"\nacts_on = "joint"\nshear = [1000, 1000]\nkind = "static"\n'
    found = assess(read_text(text))
    shown = page(found)
    assert "precondition not met" not in shown and "true slip: reserve" in shown
    assert "(askew, given)" in shown  # the model and the notes of points are of that case alone
    from slip.report.partial import banded

    for end in found.verdict.ends:
        slip = found.partial.of(end.case, end.end)
        for name in ("first_slip_load", "true_slip", "elastic_slip", "stiffness"):
            low, high = banded(slip, name, found.joint.system).partition(" (")[2].rstrip(")").split(" .. ")
            assert float(low.replace(" ", "")) <= float(high.replace(" ", "")), name


def test_explain_is_80_columns_and_keeps_the_reason_apart(tmp_path, capsys):
    path = tmp_path / "joint.toml"
    text = (
        wide(0.5, "[-20, -20, 20, 20]", "[-20, -20, 20, 20]").replace('"N mm"', '"lbf in"').replace("210000.0", "3e7")
    )
    path.write_text(text.replace("= 11", "= 0.43").replace("= 16", "= 0.63"))
    assert main(["explain", str(path)]) in (0, 1)
    said = capsys.readouterr().out
    assert max(map(len, said.splitlines())) <= 80 and "psi" in said
    assert "factor on the load at first slip [" in said.replace("\n", " ") and "plates rigid in plane" in said


def test_torque_and_partial_slip_on_other_patches_is_said(run_check):
    """Without outlines the torque is held at the hole radius, while partial slip has the computed contact."""
    text = wide(12, load="shear = [500, 0]\nmoment = [0, 0, 5000]")
    bare = "\n".join(line for line in text.splitlines() if not line.startswith("outline"))
    for made, said in ((text, False), (bare, True)):
        found, _ = run_check(made)
        assert any("partial slip takes" in note["text"] for note in found["assumptions"]) == said
    none = bare.replace("tangential_stiffness = [20000, 20000]", "")
    assert not any("partial slip takes" in note["text"] for note in run_check(none)[0]["assumptions"])


@pytest.mark.parametrize("load", ["shear = [3000, 0]", "shear = [500, 0]\nmoment = [0, 0, 5000]"])
def test_a_contact_that_does_not_settle_leaves_gross_slip(run_check, load):
    text = wide(10, load=load).replace("thickness = 10", "thickness = 0.001", 1)
    found, code = run_check(text)
    assert "errors" not in found and code in (0, 1)
    end = found["cases"][0]["ends"][0]
    assert "partial_slip" not in end
    if "moment" in load:
        assert end["gross_slip"]["group"]["safety"] > 0
        assert "friction-radius-hole" in {note["code"] for note in found["assumptions"]}
    else:
        assert end["gross_slip"]["per_bolt"]["safety"] == pytest.approx(0.2 * 40000 / 3000)
    limited, code = run_check(text.replace("static = 1", 'static = 1\ntrue_slip = "5 um"', 1))
    (said,) = {c["reason"] for c in limited["checks"] if c["check"] == "true_slip"}
    assert code == 3 and "does not settle" in said
