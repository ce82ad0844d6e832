"""Every number's own line for a face of known pressure, for one case and end."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from slip.assess import FaceAssessment
from slip.base.errors import InputError, Problems
from slip.joint.contact import PressedFace
from slip.joint.plates import Rectangle, Ring
from slip.report.equations import FILE, Explanation, Line, find, friction_said, picked
from slip.report.explained import told
from slip.report.face import verdict_lines
from slip.report.partial import remarks
from slip.report.words import plain
from slip.verdict.checks import first_least

ONE = (1, 1)


def explain_face(assessment: FaceAssessment, case: str | None = None, bolt: str | None = None) -> Explanation:
    """Lines for a case by name, by default the governing one, at the end with the smaller factor.

    Raises Problems for a case that the file has not, and for a bolt.
    """
    face, governing = assessment.joint, assessment.verdict.governing
    if bolt is not None:
        expected = "a case alone: a face of known pressure has no bolts"
        raise Problems([InputError("unknown-bolt", "bolt", bolt, expected, "leave it out", face.file)])
    case = case or governing.case
    index = find(assessment, "case", case, [c.name for c in face.cases])
    ends = [end for i, end in assessment.slips if i == index]
    worst = ends[first_least(np.array([assessment.slips[index, end].group.factor for end in ends]))]
    end = governing.end if case == governing.case else worst
    return Explanation(case, end, "", tuple(_lines(assessment, index, end)))


def _lines(assessment: FaceAssessment, case: int, end: str) -> Iterator[Line]:
    """What the file gives, then the calculation; a line that two parts share stands in the first."""
    face = assessment.joint
    yield from _inputs(face)
    yield from _load(face, case, end)
    seen = set[tuple[str, str]]()
    for title, trace in assessment.slips[case, end].parts.items():
        for line in picked(title, trace.steps, ONE, 0, 0):
            if (line.name, line.put_in) not in seen:
                seen.add((line.name, line.put_in))
                yield line


def _given(name: str, symbol: str, value: float, unit: str, origin: tuple[str, str] = FILE) -> Line:
    return Line("inputs", name, symbol, "value", f"{value:.8g}", value, unit, *origin, "")


def _inputs(face: PressedFace) -> Iterator[Line]:
    """What the file gives, with the source of each."""
    surface = face.interface
    name, origin = friction_said(surface)
    yield _given(name, "mu", surface.friction_low, "", origin)
    assert surface.pressure is not None
    yield _given("pressure on the face", "p", surface.pressure, "MPa")
    yield _given("faces that share the load side by side", "m", surface.parallel_faces, "")
    for plate in face.plates:
        called = plain(plate.name) or "a plate"
        yield _given(f"thickness of {called}", "t", plate.thickness, "mm")
        if isinstance(plate.outline, Rectangle):
            o = plate.outline
            for symbol, value in (("x_0", o.x0), ("y_0", o.y0), ("x_1", o.x1), ("y_1", o.y1)):
                yield _given(f"corner of {called}, {symbol}", symbol, value, "mm")
        elif isinstance(plate.outline, Ring):
            yield _given(f"outer diameter of {called}", "D", plate.outline.outer_diameter, "mm")
            yield _given(f"inner diameter of {called}", "d", plate.outline.inner_diameter, "mm")
        if plate.material is not None:
            m, origin = plate.material, (plate.material.source, plate.material.basis)
            said = f"of {called}" + (f", {m.name}" if m.source != FILE[0] else "")
            yield _given(f"modulus {said}", "E", m.youngs_modulus, "MPa", origin)
            yield _given(f"Poisson's ratio {said}", "nu", m.poissons_ratio, "", origin)


def _load(face: PressedFace, case: int, end: str) -> Iterator[Line]:
    """The load of the end as the file has it, and where its shear acts."""
    one = face.cases[case]
    load = dict(one.ends)[end]
    yield _given("shear along x", "V_x", load.shear[0], "N")
    yield _given("shear along y", "V_y", load.shear[1], "N")
    if load.moment[2]:
        yield _given("moment about the normal", "C_z", load.moment[2], "N mm")
    for axis, value in zip("xy", one.at or (), strict=False):
        yield _given(f"where the shear acts, {axis}", f"{axis}_P", value, "mm")


def explain_face_text(explanation: Explanation, assessment: FaceAssessment) -> str:
    """The lines of an explanation as blocks, citations last."""
    place = f"{plain(explanation.case)}, {explanation.end} end"
    head = [f"Every number of {place}, in N, mm, MPa", *verdict_lines(assessment, assessment.joint.system)]
    index = [case.name for case in assessment.joint.cases].index(explanation.case)
    return told(head, explanation, assessment, remarks(assessment.slips[index, explanation.end].partial))
