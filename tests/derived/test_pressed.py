"""Pressed contacts through `slip check --json`: checks 20, 21 and 22 by both routes, and what such a file may not say."""

import numpy as np
import pytest

from slip.report.machine import slip_answer
from slip.verdict.checks import Check
from slip.verdict.stage import conclude

STEEL = "material = { youngs_modulus = 210000, poissons_ratio = 0.3 }"


def contact(shape: str, cases: str = "shear = [15, 0]\nkind = 'alternating'\nratio = -1", interface: str = "") -> str:
    return f"""format = 1
units = "N mm"
[contact]
{shape}
[[body]]
{STEEL}
[[body]]
{STEEL}
[interface]
friction = [0.3, 0.4]
{interface}
[[case]]
name = "rock"
{cases}
"""


SPHERE = 'shape = "sphere"\nradius = 10\nnormal_force = 100'
CYLINDER = 'shape = "cylinder"\nradius = 50\nlength = 10\nnormal_force = 2000'


def routes(found: dict) -> tuple[dict, dict, dict]:
    """The partial slip of the first end, its closed form and its step."""
    entry = found["cases"][0]["ends"][0]["partial_slip"]
    return entry, entry["routes"][0], entry["routes"][1]


def test_sphere_is_check_20(run_check, validate):
    """Steel sphere R 10, P 100, mu .3, q .5 (check 20, derived): both routes, the step with nu 0.3 within what the closed form neglects."""
    found, code = run_check(contact(SPHERE))
    entry, closed, stepped = routes(found)
    assert code == 0 and found["governing"]["factor"] == pytest.approx(2.0)
    source = ("Mindlin and Deresiewicz", "derived")
    validate(
        "20", "contact radius", *source, printed=0.18663, computed=entry["contact_size"], tolerance=6e-6, unit="mm"
    )
    validate(
        "20", "peak pressure", *source, printed=1370.9, computed=entry["peak_pressure"], tolerance=0.06, unit="MPa"
    )
    validate("20", "stiffness", *source, printed=35467, computed=closed["stiffness"], tolerance=0.6, unit="N/mm")
    validate("20", "stick radius over a", *source, printed=0.79370, computed=closed["stick_ratio"], tolerance=6e-6)
    validate(
        "20", "displacement", *source, printed=0.46950e-3, computed=closed["displacement"], tolerance=6e-9, unit="mm"
    )
    validate(
        "20", "energy", *source, printed=1.07238e-3, computed=closed["energy_per_cycle"], tolerance=6e-9, unit="mJ"
    )
    assert stepped["stiffness"] == pytest.approx(35467, rel=0.01)
    assert stepped["displacement"] == pytest.approx(0.46950e-3, rel=0.005)
    assert stepped["stick_ratio"] == pytest.approx(0.79370, abs=0.01)
    assert stepped["energy_per_cycle"] == pytest.approx(1.07238e-3, rel=0.01)


def test_cylinder_is_check_21(run_check):
    """Cylinder P 200 N/mm, R 50, mu .3, q .5 (check 21, derived), ten millimetres long."""
    found, _ = run_check(contact(CYLINDER, "shear = [300, 0]\nkind = 'alternating'\nratio = -1"))
    entry, closed, stepped = routes(found)
    assert entry["contact_size"] == pytest.approx(0.33219, abs=6e-6)
    assert entry["peak_pressure"] == pytest.approx(383.29, abs=0.006)
    assert entry["edge_stress"] == pytest.approx(162.62, abs=0.006)
    assert closed["stick_ratio"] == pytest.approx(0.70711, abs=6e-6)
    assert closed["energy_per_cycle"] == pytest.approx(10 * 1.12924e-3, rel=1e-5)
    assert stepped["stick_ratio"] == pytest.approx(0.70711, abs=0.005)
    assert stepped["energy_per_cycle"] == pytest.approx(10 * 1.12924e-3, rel=0.003)
    assert stepped["displacement"] == pytest.approx(closed["displacement"], rel=1e-3)


def test_flat_punch_is_check_22(run_check):
    """Flat punch a 5, two steel bodies (check 22, derived): stiffness 9.5023e5 N/mm; it sticks until it slips wholly."""
    found, _ = run_check(
        contact('shape = "flat"\nflat_width = 10\nnormal_force = 2000', "shear = [300, 0]\nkind = 'static'")
    )
    entry, closed, stepped = routes(found)
    assert closed["stiffness"] == pytest.approx(9.5023e5, rel=1e-5)
    assert closed["stick_ratio"] == 1 and "energy_per_cycle" not in closed
    assert stepped["stiffness"] == pytest.approx(9.5023e5, rel=0.03)
    assert entry["gross_slip_load"] == pytest.approx(600)


@pytest.mark.parametrize("length", ["", "\nlength = 10"])
def test_rounded_flat_by_two_routes(run_check, length):
    shape = f'shape = "rounded flat"\nradius = 20\nflat_width = 4\nnormal_force = 2000{length}'
    found, _ = run_check(contact(shape, "shear = [450, 0]\nkind = 'alternating'\nratio = -1"))
    _, closed, stepped = routes(found)
    assert stepped["displacement"] == pytest.approx(closed["displacement"], rel=0.01)
    assert stepped["energy_per_cycle"] == pytest.approx(closed["energy_per_cycle"], rel=0.1)


def test_energy_of_a_pulsating_shear_is_that_of_half_its_range(run_check):
    """0 .. Q costs what -Q/2 .. Q/2 costs at constant P (Masing), far less than -Q .. Q."""
    pulsating = routes(run_check(contact(SPHERE, "shear = [15, 0]\nkind = 'alternating'\nratio = 0"))[0])[1]
    half = routes(run_check(contact(SPHERE, "shear = [7.5, 0]\nkind = 'alternating'\nratio = -1"))[0])[1]
    full = routes(run_check(contact(SPHERE))[0])[1]
    assert pulsating["energy_per_cycle"] == pytest.approx(half["energy_per_cycle"])
    assert pulsating["energy_per_cycle"] < 0.2 * full["energy_per_cycle"]


def test_a_direction_is_as_good_as_another(run_check):
    along, across = (
        run_check(contact(SPHERE, f"shear = {shear}\nkind = 'static'"))[0] for shear in ("[15, 0]", "[9, -12]")
    )
    assert routes(along)[1] == routes(across)[1]


def test_beyond_gross_slip_nothing_is_computed(run_check):
    found, code = run_check(contact(SPHERE, "shear = [31, 0]\nkind = 'static'"))
    entry = found["cases"][0]["ends"][0]["partial_slip"]
    assert code == 1 and entry["routes"] == [] and entry["reason"] == "slips wholly at 30 N; nothing beyond is computed"


def test_limit_of_true_slip(run_check):
    """The step's largest true slip inside the contact, 0.15 um here, against the file's own limit."""
    text = contact(SPHERE) + '[required]\ntrue_slip = "{} um"\n'
    assert run_check(text.replace("{}", "0.3"))[1] == 0
    found, code = run_check(text.replace("{}", "0.1"))
    assert code == 1 and found["governing"]["check"] == "true_slip"


def test_a_layer_adds_elastic_slip(run_check):
    smooth = routes(run_check(contact(SPHERE))[0])[2]
    coated = routes(run_check(contact(SPHERE, interface="tangential_stiffness = [1e6, 1e6]"))[0])[2]
    assert smooth["elastic_slip"] == 0
    assert coated["elastic_slip"] > 0 and coated["displacement"] > smooth["displacement"]
    assert coated["stiffness"] < smooth["stiffness"]


@pytest.mark.parametrize(
    ("text", "code", "words"),
    [
        (contact(SPHERE) + '[bolt]\nthread = "M10"\n', "contact-with-bolts", "a contact or a joint with bolts"),
        (contact(SPHERE, "shear = [1, 0]\naxial = 5"), "contact-load", "shear alone"),
        (contact(SPHERE, "shear = [5, 0]\nother_end = { shear = [0, 5] }"), "contact-load", "both ends on one line"),
        (contact(SPHERE, interface="parallel_faces = 2"), "contact-load", "one face"),
        (contact('shape = "sphere"\nnormal_force = 5'), "missing-key", "the radius of a sphere"),
        (contact('shape = "cylinder"\nradius = 5\nnormal_force = 5'), "missing-key", "the length of a cylinder"),
        (contact(SPHERE).replace(f"[[body]]\n{STEEL}\n", "", 1), "wrong-count", "the two bodies"),
        (contact(SPHERE + "\nlength = 5"), "key-not-of-shape", 'only radius for shape = "sphere"'),
        (contact(SPHERE + "\nflat_width = 5"), "key-not-of-shape", 'only radius for shape = "sphere"'),
        (contact(CYLINDER + "\nflat_width = 5"), "key-not-of-shape", 'only radius and length for shape = "cylinder"'),
        (
            contact('shape = "flat"\nflat_width = 5\nradius = 3\nnormal_force = 5'),
            "key-not-of-shape",
            'only flat_width and length for shape = "flat"',
        ),
        (contact(SPHERE, interface="tangential_stiffness = [1e-200, 1e4]"), "out-of-limits", "from 0.001 N/mm^3"),
        (contact(SPHERE, interface="tangential_stiffness = [1e4, 1e13]"), "out-of-limits", "to 1e+12 N/mm^3"),
    ],
)
def test_bad_contacts_say_what_to_write(run_check, text, code, words):
    found, exit_code = run_check(text)
    assert exit_code == 2
    assert (code, True) in [(e["code"], words in e["expected"]) for e in found["errors"]]


def test_step_and_closed_form_meet_on_the_traction_balance(run_check):
    """Displacement from stiffness: for a small shear all routes give Q/k, k = 8 a G* (exact)."""
    found, _ = run_check(contact(SPHERE, "shear = [0.3, 0]\nkind = 'static'"))
    _, closed, stepped = routes(found)
    a, G = 0.18663, 210000 / 2.6
    k = 8 * a / (2 * 1.7 / G)
    assert closed["displacement"] == pytest.approx(0.3 / k, rel=0.01)
    assert stepped["displacement"] == pytest.approx(0.3 / k, rel=0.02)
    assert np.isfinite(stepped["true_slip"])


def test_flat_strip_by_two_routes(run_check):
    """Sharp plane flat b 5, l 10, steel: pressure P/(pi l sqrt(b^2 - x^2)) sinks evenly, so k = pi E* l/(2 ln(2 D/b)), D = 20 b.

    The step knows nothing of that: matrix and pressure of cells. It sticks until it slips wholly.
    """
    found, _ = run_check(
        contact(
            'shape = "flat"\nflat_width = 10\nlength = 10\nnormal_force = 2000', "shear = [300, 0]\nkind = 'static'"
        )
    )
    entry, closed, stepped = routes(found)
    stiffness = np.pi * 210000 / 1.82 * 10 / (2 * np.log(40))
    assert entry["peak_pressure"] == pytest.approx(20)  # the mean
    assert closed["stiffness"] == pytest.approx(stiffness)
    assert closed["displacement"] == pytest.approx(300 / stiffness)
    assert stepped["stiffness"] == pytest.approx(stiffness, rel=1e-3)
    assert stepped["stick_ratio"] == closed["stick_ratio"] == 1
    assert stepped["true_slip"] == closed["true_slip"] == 0
    assert "edge_stress" not in entry


def test_one_rule_for_the_answer_to_slip(run_check):
    """It fails when any check that decides fails, of true slip as well; what could not be judged is no failure."""
    found, code = run_check(contact(SPHERE) + '[required]\ntrue_slip = "0.1 um"\n')
    assert (code, found["holds"], found["answers"]["slip"]) == (1, False, "fails")
    assert [c["holds"] for c in found["checks"] if c["check"] == "gross_slip.group"] == [True, True]

    def answer(*checks: tuple[str, bool, bool]) -> str:
        made = [
            Check(name, "", "", "", None, None, None, None, holds, True, "", solved) for name, holds, solved in checks
        ]
        return slip_answer(conclude(made, (), {}))

    group, missed, open_ = ("gross_slip.group", True, True), ("true_slip", False, True), ("true_slip", False, False)
    assert answer(group, missed) == "fails"
    assert answer(group, open_) == "holds"
    assert answer(group, ("standard.EN 1993-1-8", False, False)) == "not assessed"
    assert answer(("gross_slip.per_bolt", False, True), group, open_) == "fails"


def test_the_remedy_of_a_foreign_size_names_the_shapes_that_have_it(run_check):
    found, _ = run_check(contact('shape = "flat"\nflat_width = 5\nradius = 3\nnormal_force = 5'))
    (error,) = found["errors"]
    assert error["remedy"] == 'leave radius out, or write shape = "sphere" or "cylinder" or "rounded flat"'
    assert (error["key"], error["line"]) == ("contact.radius", 6)
