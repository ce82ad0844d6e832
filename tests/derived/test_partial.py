"""Partial slip of bolted joints through `slip check --json`, against sliders summed by hand and against limits that need no solver."""

import numpy as np
import pytest

from slip.pressure.patch import from_profile
from slip.pressure.receding import contact
from slip.pressure.rings import Body
from slip.pressure.stage import AROUND, RINGS

E, NU, MU = 210000.0, 0.3, 0.2
STEEL = f"{{ youngs_modulus = {E}, poissons_ratio = {NU} }}"


def single(shear: float, face: str, kind: str = "alternating", more: str = "") -> str:
    """One bolt of 40 kN, bearing 16, hole 11, two steel plates of 12 and 16 mm."""
    ratio = "ratio = -1" if kind == "alternating" else ""
    return f"""format = 1
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
material = {STEEL}
thickness = 12
[[plate]]
material = {STEEL}
thickness = 16
[interface]
friction = [{MU}, 0.3]
{face}
[required]
static = 1
alternating = 1
{more}
[[case]]
name = "pull"
shear = [{shear}, 0]
kind = "{kind}"
{ratio}
"""


def entry(run_check, text):
    found, code = run_check(text)
    return found["cases"][0]["ends"][0]["partial_slip"], found, code


def sliders(k_of_p):
    """Spring and slip force of every point of the patch, and the interface compliance per area, summed here by hand."""
    found = contact(Body(12, E, NU), Body(16, E, NU), 5.5, 8.0)
    patch = from_profile(found.radii, found.pressure, RINGS, AROUND)
    shear = (12 + 16) / (3 * E / (2 * (1 + NU)))
    pressure = 40000 * patch.shares / patch.areas
    spring = patch.areas / (1 / k_of_p(pressure) + shear)
    return spring, MU * pressure * patch.areas, k_of_p(pressure)


def rim():
    """Pressure of one patch beyond which 1 % of the clamp lies, by fine trapezoids over the computed contact."""
    found = contact(Body(12, E, NU), Body(16, E, NU), 5.5, 8.0)
    r = np.linspace(found.radii[0], found.contact_radius, 40001)
    p = np.interp(r, found.radii, found.pressure)
    outside = np.cumsum((p * r)[::-1])[::-1]
    return 40000 * float(np.interp(0.01, (outside / outside[0])[::-1], p[::-1]))


def motion_at(load, spring, limit):
    """Displacement at which sliders in parallel carry a load, by bisection."""
    low, high = 0.0, float((limit / spring).max())
    for _ in range(200):
        middle = (low + high) / 2
        low, high = (middle, high) if np.minimum(spring * middle, limit).sum() < load else (low, middle)
    return high


@pytest.mark.parametrize("load", [3000, 6000])
def test_one_bolt_with_a_measured_stiffness_is_sliders_in_parallel(run_check, load):
    """Plates rigid in plane: every point a spring in series with the layer, sliding at mu p; loop area 4 sum f (u - f/k)."""
    spring, limit, _ = sliders(lambda p: np.full_like(p, 20000.0))
    found, whole, _ = entry(run_check, single(load, "tangential_stiffness = [20000, 20000]"))
    u = motion_at(load, spring, limit)
    assert found["gross_slip_load"] == pytest.approx(MU * 40000)
    assert found["stiffness"] == pytest.approx(spring.sum(), rel=1e-6)
    series = 1 / 20000 + (12 + 16) / (3 * E / 2.6)
    assert found["first_slip_load"] == pytest.approx(spring.sum() * MU * rim() * series, rel=0.01)
    energy = 4 * (limit * np.maximum(u - limit / spring, 0)).sum()
    assert found["energy_per_cycle"] == pytest.approx(energy, rel=1e-4)
    q = min(MU * rim(), u / series)  # where most moves: at the rim, which gives least to the plates
    assert found["true_slip"] == pytest.approx(u - q * series, rel=0.01, abs=1e-9)
    assert found["elastic_slip"] == pytest.approx(q / 20000, rel=0.01)
    assert whole["stiffness"]["interface_tangential"]["typical"] == pytest.approx(20000)


def test_stiffness_of_a_rough_face_follows_from_roughness_and_pressure(run_check):
    """k_t = rho p/(0.48 h_rms), Rq = 1.25 Ra, rho = 2 (1 - nu)/(2 - nu) for like bodies; a factor of two either way."""
    found, whole, _ = entry(run_check, single(3000, 'roughness = ["Ra 0.8 um", "Ra 1.6 um"]'))
    h_rms = 1.25e-3 * np.hypot(0.8, 1.6)
    slope = 2 * (1 - NU) / (2 - NU) / (0.48 * h_rms)
    face = whole["stiffness"]["interface_tangential"]
    assert face["typical"] / face["pressure"] == pytest.approx(slope, rel=1e-9)
    assert (face["low"], face["high"]) == (pytest.approx(face["typical"] / 2), pytest.approx(2 * face["typical"]))
    spring, limit, _ = sliders(lambda p: slope * p)
    assert found["stiffness"] == pytest.approx(spring.sum(), rel=1e-6)
    assert found["band"]["low"]["stiffness"] < found["stiffness"] < found["band"]["high"]["stiffness"]


def test_measured_stiffness_wins_over_roughness(run_check):
    both = 'roughness = ["Ra 0.8 um", "Ra 1.6 um"]\ntangential_stiffness = [9000, 16000]'
    _, whole, _ = entry(run_check, single(3000, both))
    face = whole["stiffness"]["interface_tangential"]
    assert (face["low"], face["typical"], face["high"]) == (9000, pytest.approx(12000), 16000)
    assert face["basis"] == "given" and "pressure" not in face


def test_without_roughness_or_measurement_nothing_is_invented(run_check):
    found, code = run_check(single(3000, ""))
    assert "partial_slip" not in found["cases"][0]["ends"][0] and "stiffness" not in found


def test_static_case_has_no_energy_and_beyond_gross_slip_nothing_is_computed(run_check):
    static, _, _ = entry(run_check, single(3000, "tangential_stiffness = [20000, 20000]", "static"))
    assert "energy_per_cycle" not in static
    beyond, _, code = entry(run_check, single(8100, "tangential_stiffness = [20000, 20000]"))
    assert code == 1 and "slips wholly" in beyond["reason"] and "true_slip" not in beyond


def test_no_cycle_where_the_other_end_slips_wholly(run_check):
    text = single(3000, "tangential_stiffness = [20000, 20000]").replace(
        "ratio = -1", "other_end = { shear = [-9000, 0] }"
    )
    found, _, code = entry(run_check, text)
    assert code == 1 and found["stiffness"] > 0 and "energy_per_cycle" not in found
    assert any("no energy of a cycle" in note for note in found["notes"])


def test_own_limit_of_true_slip_decides(run_check):
    """The limit lies between what the low and the high reading of the stiffness give: the larger counts."""
    face = "tangential_stiffness = [15000, 60000]"
    found, _, _ = entry(run_check, single(6500, face))
    slips = [found["band"][name]["true_slip"] for name in ("low", "high")]
    middle = 1e3 * sum(slips) / 2
    whole, code = run_check(single(6500, face, more=f'true_slip = "{middle} um"'))
    assert min(slips) < max(slips) and code == 1 and whole["governing"]["check"] == "true_slip"
    stretch = found["stretch_left_out"]
    between, code = run_check(single(6500, face, more=f'true_slip = "{1e3 * (max(slips) + 0.9 * stretch)} um"'))
    (said,) = {c["reason"] for c in between["checks"] if c["check"] == "true_slip"}
    assert code == 3 and not between["holds"]
    assert f"{1e3 * max(slips):.3g} um against" in said and f"up to {1e3 * stretch:.3g} um more" in said
    held, code = run_check(single(6500, face, more=f'true_slip = "{1e3 * (max(slips) + 1.1 * stretch)} um"'))
    assert code == 0 and held["holds"]


def test_limit_of_true_slip_without_a_face_is_not_a_pass(run_check):
    found, code = run_check(single(3000, "", more='true_slip = "5 um"'))
    (check,) = {c["reason"] for c in found["checks"] if c["check"] == "true_slip"}
    assert code == 3 and not found["holds"] and "not solved: give roughness" in check


LAP = """format = 1
units = "N mm"
[bolt]
hole_diameter = 11
bearing_diameter = 16
[tightening]
preload = [20000, 25000]
[losses]
embedding = 0
relaxation = 0
[[plate]]
material = {{ youngs_modulus = {E}, poissons_ratio = 0.3 }}
thickness = 6
outline = [-60, -30, 300, 30]
load_edge = "right"
[[plate]]
material = {{ youngs_modulus = {E}, poissons_ratio = 0.3 }}
thickness = 6
outline = [-300, -30, 60, 30]
load_edge = "left"
[interface]
friction = [0.2, 0.3]
{face}
[pattern]
positions = [[-35, 0], [35, 0]]
[required]
static = 1
alternating = 1
[[case]]
acts_on = "joint"
shear = {shear}
kind = "alternating"
ratio = -1
"""


def lap(run_check, E=2.1e5, face='roughness = ["Ra 1 um", "Ra 1 um"]', shear="[4000, 0]"):
    return entry(run_check, LAP.format(E=E, face=face, shear=shear))[0]


def test_load_along_two_lapped_plates_takes_strips_and_any_other_load_points(run_check):
    assert lap(run_check)["model"] == "shear-lag strips"
    assert "points" in lap(run_check, shear="[3000, 1500]")["model"]


def test_rigid_strips_on_a_rough_face_slip_all_at_once(run_check):
    """k_t proportional to p: one elastic-slip length for all points, so rigid plates have no partial slip below gross slip."""
    found = lap(run_check, E=2.1e9, shear="[7000, 0]")
    h_rms = 1.25e-3 * np.sqrt(2)
    rho = 2 * 0.7 / 1.7
    assert found["gross_slip_load"] == pytest.approx(8000)
    assert found["first_slip_load"] == pytest.approx(8000, rel=0.01)
    assert found["true_slip"] == pytest.approx(0, abs=1e-9) and found["energy_per_cycle"] == pytest.approx(0, abs=1e-6)
    assert found["stiffness"] == pytest.approx(rho * 40000 / (0.48 * h_rms), rel=0.01)
    assert found["elastic_slip"] == pytest.approx(7000 / 8000 * 0.2 * 0.48 * h_rms / rho, rel=0.01)


def test_softer_plates_slip_earlier_at_the_ends(run_check):
    stiff, soft = lap(run_check, E=2.1e6), lap(run_check, E=7e4)
    assert soft["first_slip_load"] < stiff["first_slip_load"] < 8000
    assert soft["true_slip"] > stiff["true_slip"] and soft["slip_length"] > 0
    assert soft["stiffness"] < stiff["stiffness"]


def test_turned_lap_gives_the_same(run_check):
    turned = LAP.replace("[-60, -30, 300, 30]", "[-30, -60, 30, 300]").replace(
        "[-300, -30, 60, 30]", "[-30, -300, 30, 60]"
    )
    turned = (
        turned.replace('"right"', '"top"')
        .replace('"left"', '"bottom"')
        .replace("[[-35, 0], [35, 0]]", "[[0, -35], [0, 35]]")
    )
    one = lap(run_check)
    other = entry(run_check, turned.format(E=2.1e5, face='roughness = ["Ra 1 um", "Ra 1 um"]', shear="[0, 4000]"))[0]
    for name in ("first_slip_load", "stiffness", "true_slip", "elastic_slip", "energy_per_cycle"):
        assert other[name] == pytest.approx(one[name], rel=2e-2)
