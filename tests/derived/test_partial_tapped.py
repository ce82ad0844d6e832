"""Tapped joints and stacks through `slip check --json`: partial slip by sliders summed by hand, torque by the moment of the pressure."""

import numpy as np
import pytest

from slip.pressure.patch import from_profile
from slip.pressure.receding import Engagement, contacts
from slip.pressure.rings import Body
from slip.pressure.stage import AROUND, RINGS

E, NU, MU, CLAMP, K = 210000.0, 0.3, 0.2, 40000.0, 20000.0


def joint(
    thicknesses, load, far_end="tapped", thread='thread = "M10"', outline="outline = [-60, -60, 60, 60]", face=""
):
    """One bolt M10, bearing 16, hole 11, steel plates; `load` is the shear or moment of the one case."""
    plates = "".join(
        f"[[plate]]\nmaterial = {{ youngs_modulus = {E}, poissons_ratio = {NU} }}\nthickness = {t}\n{outline}\n"
        for t in thicknesses
    )
    return f"""format = 1
units = "N mm"
[bolt]
{thread}
hole_diameter = 11
bearing_diameter = 16
far_end = "{far_end}"
[tightening]
preload = [{CLAMP}, 50000]
[losses]
embedding = 0
relaxation = 0
{plates}
[interface]
friction = [{MU}, 0.3]
tangential_stiffness = [{K}, {K}]
{face}
[pattern]
positions = [[0, 0]]
[required]
static = 1
alternating = 1
[[case]]
name = "pull"
{load}
kind = "alternating"
ratio = -1
"""


def entry(run_check, text):
    found, code = run_check(text)
    return found["cases"][0]["ends"][0], found, code


def body(t):
    return Body(t, E, NU)


@pytest.mark.parametrize(("block", "length"), [(30, 10.0), (7, 7.0)])
def test_partial_slip_of_a_tapped_joint_is_sliders_in_parallel(run_check, block, length):
    """Plates rigid in plane: every point of the patch a spring in series with the plates' shear, sliding at mu p."""
    contact = contacts((body(12), body(block)), 5.5, 8.0, Engagement(5.0, length))[0]
    patch = from_profile(contact.radii, contact.pressure, RINGS, AROUND)
    spring = patch.areas / (1 / K + (12 + block) / (3 * E / (2 * (1 + NU))))
    end, whole, _ = entry(run_check, joint((12, block), "shear = [3000, 0]"))
    found = end["partial_slip"]
    assert "points" in found["model"]
    assert found["stiffness"] == pytest.approx(spring.sum(), rel=1e-6)
    r = np.linspace(contact.radii[0], contact.contact_radius, 40001)
    p = np.interp(r, contact.radii, contact.pressure)
    order = np.argsort(p)
    below = np.cumsum((p * r)[order])
    rim = CLAMP * float(np.interp(0.01 * below[-1], below, p[order]))  # what presses less carries 1 % of the clamp
    series = 1 / K + (12 + block) / (3 * E / (2 * (1 + NU)))
    assert found["first_slip_load"] == pytest.approx(spring.sum() * MU * rim * series, rel=0.01)
    assert found["gross_slip_load"] == pytest.approx(MU * CLAMP)
    assert 0 < found["first_slip_load"] < found["gross_slip_load"]
    (said,) = [note["text"] for note in whole["assumptions"] if note["code"] == "thread-engagement"]
    assert f"{length:g} mm" in said


def test_thread_unknown_is_no_partial_slip(run_check):
    end, whole, _ = entry(run_check, joint((12, 30), "shear = [3000, 0]", thread=""))
    assert "partial_slip" not in end
    assert "thread-engagement" not in {note["code"] for note in whole["assumptions"]}


def moment_arm(contact):
    """Friction torque over friction force: the mean radius of the pressure, by fine trapezoids."""
    r = np.linspace(contact.radii[0], contact.contact_radius, 40001)
    p = np.interp(r, contact.radii, contact.pressure)
    return np.trapezoid(p * r**2, r) / np.trapezoid(p * r, r)


def torque_factor(run_check, *args, **more):
    return entry(run_check, joint(*args, **more))[1]["governing"]["factor"]


MOMENT = "moment = [0, 0, 20000]"


def test_torque_of_one_tapped_bolt_takes_the_pull_near_the_face(run_check):
    """The narrow reading of the thread's pull; more than the hole's ring, less than the nut joint's contact."""
    near = contacts((body(12), body(30)), 5.5, 8.0, Engagement(5.0, 10.0, fall=1.0))[0]
    found = torque_factor(run_check, (12, 30), MOMENT)
    assert found == pytest.approx(MU * CLAMP * moment_arm(near) / 20000, rel=1e-3)
    assert MU * CLAMP * 5.5 / 20000 < found < torque_factor(run_check, (12, 30), MOMENT, far_end="nut")


def test_torque_of_one_tapped_bolt_without_outlines_stays_at_the_hole(run_check):
    found = torque_factor(run_check, (12, 30), MOMENT, outline="")
    assert found == pytest.approx(MU * CLAMP * 5.5 / 20000, rel=1e-6)


def test_two_sliding_faces_take_the_narrower_contact(run_check):
    """Plates of 10, 6 and 4 mm: the face above the last holds the least torque and counts for both; with one face the first counts."""
    upper, lower = contacts([body(t) for t in (10, 6, 4)], 5.5, 8.0)
    assert moment_arm(lower) < 0.95 * moment_arm(upper)
    both = torque_factor(run_check, (10, 6, 4), MOMENT, far_end="nut", face="parallel_faces = 2")
    one = torque_factor(run_check, (10, 6, 4), MOMENT, far_end="nut")
    assert both == pytest.approx(2 * MU * CLAMP * moment_arm(lower) / 20000, rel=1e-3)
    assert one == pytest.approx(MU * CLAMP * moment_arm(upper) / 20000, rel=1e-3)
