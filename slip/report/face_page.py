"""The page of a face of known pressure. Words and rows are made ready here, templates/face.html sets them; nothing is computed."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np

from slip.assess import FaceAssessment
from slip.base.units import SI, System
from slip.friction.known_pressure import FaceSlip
from slip.friction.partial import NO_SHEAR
from slip.joint.plates import Rectangle, Ring
from slip.report import face_rows, figures
from slip.report.face import sentence
from slip.report.face_figure import along_figure, plan_figure
from slip.report.face_lines import explain_face
from slip.report.inputs import Group, Pair, interface_pairs, load_heads, load_rows, plate_row
from slip.report.page import MEANINGS, WORDS, environment, line_groups, noted, page_stamp, sources_of, unmet
from slip.report.partial import remarks, short
from slip.report.partial_rows import placed
from slip.report.rows import NAME, SHOWN, Row, Table
from slip.report.words import CAUTION, NOT_ASSESSED, factor, once, plain

LOADS = (0, 1, 2, 4, 5, 6, 10)  # columns of a load's row that a face has: case, end, kind, place, shear x and y, moment


def face_page(assessment: FaceAssessment, units: System | None = None) -> str:
    """The assessment of a face as one HTML page without script and without any reference outward; same input, same bytes."""
    face = assessment.joint
    system = units or face.system
    case, end, found = _governing(assessment)
    explanation = explain_face(assessment)
    return (
        environment()
        .get_template("face.html")
        .render(
            caution=CAUTION,
            title=plain(face.title or Path(face.file).name, 160),
            stamp=page_stamp(assessment, system),
            verdict=_verdict(assessment, system),
            assumptions=noted(assessment.assumptions),
            warnings=noted(assessment.warnings),
            cases=face_rows.case_table(assessment, system),
            place=f"{plain(face.cases[case].name, NAME)}, {end} end",
            plan=_plan(assessment, case, end, found, system),
            partial=face_rows.partial_table(assessment, system),
            said=_remarks(assessment),
            missing=once(one.reason for one in assessment.slips.values() if one.reason),
            beside=face_rows.beside(found, system),
            routes=face_rows.route_table(assessment, system),
            along=_along(found, system),
            not_assessed=NOT_ASSESSED,
            inputs=_groups(assessment, system),
            input_tables=_input_tables(assessment, system),
            explained=f"{plain(explanation.case, NAME)}, {explanation.end} end",
            lines=line_groups(explanation, system),
            converted=system.name if system != SI else "",
            sources=sources_of(explanation),
        )
    )


def _governing(assessment: FaceAssessment) -> tuple[int, str, FaceSlip]:
    """The case and end that the verdict speaks of."""
    g, cases = assessment.verdict.governing, assessment.joint.cases
    return next(
        (i, end, found) for (i, end), found in assessment.slips.items() if (cases[i].name, end) == (g.case, g.end)
    )


def _remarks(assessment: FaceAssessment) -> list[str]:
    """What must be known of partial slip, with the cases and ends that it is of."""
    cases, groups = assessment.joint.cases, dict[str, list[str]]()
    listed = [(f"{plain(cases[i].name, NAME)}, {end}", found.partial) for (i, end), found in assessment.slips.items()]
    for place, partial in listed:
        for said in remarks(partial):
            groups.setdefault(said, []).append(place)
    return [placed(said, places, len(listed)) for said, places in groups.items() if said != NO_SHEAR]


# the verdict


def _verdict(assessment: FaceAssessment, system: System) -> dict[str, Any]:
    code, g = assessment.verdict.exit_code, assessment.verdict.governing
    face = assessment.joint
    assert face.interface.pressure is not None
    facts = [
        ("governing case", plain(g.case, NAME), ""),
        ("end", g.end, ""),
        ("check", face_rows.check_said(g.check), ""),
        ("factor", "" if g.required is None else factor(g.load_factor, g.required), ""),
        ("required", "" if g.required is None else f"{g.required:g}", ""),
        ("reserve", "" if g.reserve_factor is None else factor(g.reserve_factor, 1.0), "1 or more holds"),
        ("lowest friction", f"{face.interface.friction_low:g}", plain(face.interface.friction_source, 2 * NAME)),
        ("pressure", system.say(face.interface.pressure, "pressure"), ""),
        ("force on each face", system.say(face.force, "force"), ""),
    ]
    return {
        "state": WORDS[code],
        "sentence": sentence(assessment),
        "meaning": MEANINGS[code],
        "facts": [fact for fact in facts if fact[1] not in ("", "-")],
        "unmet": [said.replace("group:", "gross slip:", 1) for said in unmet(assessment.verdict.checks)],
    }


# the pictures


def _plan(assessment: FaceAssessment, case: int, end: str, found: FaceSlip, system: System) -> dict[str, Any]:
    """The overlap under the load for light and dark, with the words beside it and the words in its place."""
    face = assessment.joint
    one = face.cases[case]
    light, dark = (
        figures.image(plan_figure(face, one, end, system, ink), ink) for ink in (figures.LIGHT, figures.DARK)
    )
    vx, vy, moment = (float(value) + 0.0 for value in found.load)
    middle = ", ".join(f"{system.out(place, 'length') + 0.0:.6g}" for place in face.middle)
    said = [
        ("shear, x and y", f"{system.say(vx, 'force')}, {system.say(vy, 'force')}"),
        ("moment at the middle", f"{system.say(moment, 'moment')} about the normal"),
        ("middle of the overlap", f"({middle}) {system.length}"),
        ("overlap", _size(face.overlap, system)),
        ("at gross slip", _turning(face.middle, found, system)),
    ]
    alt = "Plan of the plates to scale: their outlines, the overlap that is pressed, and the load on the first plate."
    return {"light": light, "dark": dark, "alt": alt, "said": said}


def _size(overlap: Rectangle | Ring, system: System) -> str:
    if isinstance(overlap, Rectangle):
        sides = (overlap.x1 - overlap.x0, overlap.y1 - overlap.y0)
        return " by ".join(system.say(side, "length") for side in sides)
    hole = f", hole {system.say(overlap.inner_diameter, 'length')}" if overlap.inner_diameter else ""
    return f"diameter {system.say(overlap.outer_diameter, 'length')}{hole}"


def _turning(middle: tuple[float, float], found: FaceSlip, system: System) -> str:
    if not found.sliding:
        return "no shear"
    if not np.isfinite(found.group.centre).all():
        return "all points slip in one direction"
    places = (system.out(a + float(b), "length") for a, b in zip(middle, found.group.centre, strict=True))
    return f"the plates turn about ({', '.join(f'{round(x, 6) + 0.0:.6g}' for x in places)}) {system.length}"


def _along(found: FaceSlip, system: System) -> dict[str, Any] | None:
    """Traction and true slip along a lap; None where there is no lap, or no partial slip of it."""
    curves, closed = found.curves, found.closed
    if curves is None or closed is None:
        return None
    light, dark = (figures.image(along_figure(curves, system, ink), ink) for ink in (figures.LIGHT, figures.DARK))
    said = [
        ("friction times pressure", system.say(curves.bound, "pressure")),
        ("length of the overlap", system.say(float(curves.x[-1] - curves.x[0]), "length")),
        ("length that slips, closed form", f"{short(system.out(closed.slip_length, 'length'))} {system.length}"),
        ("true slip there, closed form", f"{short(system.out(closed.true_slip, 'length'))} {system.length}"),
    ]
    alt = (
        "Along the overlap, by the closed form and by the step: above, the traction with friction times pressure as its "
        "bound; below, the true slip. Where the traction lies on the bound the lap slips; elsewhere it sticks."
    )
    return {"light": light, "dark": dark, "alt": alt, "said": said}


# the inputs


def _groups(assessment: FaceAssessment, system: System) -> list[Group]:
    face = assessment.joint
    assert face.interface.pressure is not None
    surface: list[Pair] = [
        ("pressure over the overlap", system.say(face.interface.pressure, "pressure")),
        *interface_pairs(face.interface, system),
        ("shear of the plates through their thickness", "counted" if face.interface.plate_shear else "left out"),
    ]
    required: list[Pair] = [
        ("factor of static cases", f"{face.required.static:g}"),
        ("factor of alternating cases", f"{face.required.alternating:g}"),
        (
            "limit of true slip",
            "" if face.required.true_slip is None else system.say(face.required.true_slip, "length"),
        ),
    ]
    found = (("Sliding face", surface), ("Required", required))
    return [Group(title, tuple(pair for pair in pairs if pair[1])) for title, pairs in found]


def _input_tables(assessment: FaceAssessment, system: System) -> list[Table]:
    face = assessment.joint
    plates = [Row([*plate_row(plate, system), plate.load_edge or "-"]) for plate in face.plates]
    heads: Sequence[str] = ("plate", "material", "modulus", "thickness", "outline", "load edge")
    loads = [Row([_middle(row[i]) for i in LOADS]) for case in face.cases for row in load_rows(case, system)]
    load_head = [load_heads(system)[i] for i in LOADS]
    return [
        Table("Plates", heads, plates, (), range(2, 4)),
        Table("Load cases", load_head, loads[:SHOWN], loads[SHOWN:], range(4, 7)),
    ]


def _middle(cell: str) -> str:
    """A face has a middle where a pattern of bolts has its centroid."""
    return "middle" if cell == "centroid" else cell
