"""Every number's own line for a pressed contact, for one case and end."""

from __future__ import annotations

from collections.abc import Iterator

from slip.assess import PressedAssessment
from slip.base.errors import InputError, Problems
from slip.joint.contact import PressedContact
from slip.report.equations import FILE, Explanation, Line, find, friction_said, picked
from slip.report.explained import told
from slip.report.pressed import WIDTH, verdict_lines
from slip.report.words import plain, wrapped

ONE = (1, 1)


def explain_pressed(assessment: PressedAssessment, case: str | None = None, bolt: str | None = None) -> Explanation:
    """Lines for a case by name, by default the governing one, at the end with the smaller factor.

    Raises Problems for a case that the file has not, and for a bolt.
    """
    contact, governing = assessment.joint, assessment.verdict.governing
    if bolt is not None:
        remedy = "leave it out"
        raise Problems(
            [InputError("unknown-bolt", "bolt", bolt, "a case alone: a contact has no bolts", remedy, contact.file)]
        )
    case = case or governing.case
    index = find(assessment, "case", case, [c.name for c in contact.cases])
    ends = [end for i, end in assessment.slips if i == index]
    worst = min(ends, key=lambda end: assessment.slips[index, end].safety)
    end = governing.end if case == governing.case else worst
    return Explanation(case, end, "", tuple(_lines(assessment, index, end)))


def _lines(assessment: PressedAssessment, case: int, end: str) -> Iterator[Line]:
    yield from _inputs(assessment.joint)
    for title, trace in assessment.slips[case, end].parts.items():
        yield from picked(title, trace.steps, ONE, 0, 0)


def _inputs(c: PressedContact) -> Iterator[Line]:
    """What the file gives, with the source of each."""

    def line(name: str, symbol: str, value: float | None, unit: str, origin: tuple[str, str] = FILE) -> Iterator[Line]:
        if value is not None:
            yield Line("inputs", name, symbol, "value", f"{value:.8g}", value, unit, *origin, "")

    face = c.interface
    name, origin = friction_said(face)
    yield from line(name, "mu", face.friction_low, "", origin)
    yield from line("force that presses", "P", c.normal_force, "N")
    yield from line("radius of the edge" if c.flat_width else "radius of the profile", "R", c.radius, "mm")
    yield from line("width of the flat part", "2 b", c.flat_width, "mm")
    yield from line("length of the contact", "l", c.length, "mm")
    yield from line("bulk stress in the first body", "s", c.bulk_stress or None, "MPa")
    for which, m in zip(("first", "second"), c.bodies, strict=True):
        name, origin = f"of the {which} body" + (f", {m.name}" if m.source != FILE[0] else ""), (m.source, m.basis)
        yield from line(f"modulus {name}", "E", m.youngs_modulus, "MPa", origin)
        yield from line(f"Poisson's ratio {name}", "nu", m.poissons_ratio, "", origin)
        yield from line(f"yield strength {name}", "Y", m.yield_strength, "MPa", origin)


def explain_pressed_text(explanation: Explanation, assessment: PressedAssessment) -> str:
    """The lines of an explanation as blocks, citations last."""
    place = f"{plain(explanation.case)}, {explanation.end} end"
    head = [f"Every number of {place}, in N, mm, MPa", *verdict_lines(assessment)]
    index = [case.name for case in assessment.joint.cases].index(explanation.case)
    for note in assessment.slips[index, explanation.end].notes:
        head += wrapped(f"Note: {note}", WIDTH)
    return told(head, explanation, assessment)
