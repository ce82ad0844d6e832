"""The result for a face of known pressure: terminal and JSON, the model and a closed form side by side."""

from __future__ import annotations

import json
from collections.abc import Iterator
from typing import Any

import slip
from slip.assess import FaceAssessment
from slip.base.units import System
from slip.friction.even_lap import ClosedLap
from slip.friction.known_pressure import FaceSlip
from slip.friction.partial import NO_SHEAR
from slip.report.machine import FORMAT, UNITS, check_entry, friction_entry, governing_entry, slip_answer
from slip.report.partial import KINDS, partial_entry, said_of, short
from slip.report.words import CAUTION, check_name, factor, plain, wrapped
from slip.verdict.checks import Check

WIDTH = 80
WORDS = {0: "HOLDS", 1: "FAILS"}
CLOSED = ("first_slip_load", "stiffness", "elastic_slip", "true_slip", "slip_length", "energy_per_cycle")


def face_result(assessment: FaceAssessment, units: System | None = None) -> dict[str, Any]:
    """The assessment of a face as plain dictionaries and lists, keys as in the contract where they mean the same."""
    face, verdict = assessment.joint, assessment.verdict
    system = units or face.system
    return {
        "format": FORMAT,
        "title": face.title,
        "tool": {"name": "slip", "version": slip.__version__},
        "input_digest": face.digest,
        "units": {kind.replace(" ", "_"): system.unit(kind) for kind in UNITS},
        "holds": verdict.holds,
        "friction": friction_entry(face.interface),
        "pressed_face": {
            "pressure": system.out(face.force / face.area, "pressure"),
            "force": system.out(face.force, "force"),
            "middle": [system.out(place, "length") for place in face.middle],
        },
        "governing": governing_entry(verdict.governing, face.required.grows),
        "answers": {
            "slip": slip_answer(verdict),
            "stiffness": "not assessed",
            "cycles": "not assessed",
        },
        "assumptions": [note.as_dict() for note in face.assumptions],
        "warnings": [note.as_dict() for note in face.warnings],
        "checks": [check_entry(check) for check in verdict.checks],
        "cases": [_case(assessment, i, system) for i in range(len(face.cases))],
    }


def face_json(assessment: FaceAssessment, units: System | None = None) -> str:
    """The result as JSON text."""
    return json.dumps(face_result(assessment, units), indent=2, ensure_ascii=False, allow_nan=False)


def _case(assessment: FaceAssessment, i: int, system: System) -> dict[str, Any]:
    case = assessment.joint.cases[i]
    ends = []
    for end, _ in case.ends:
        found = assessment.slips[i, end]
        entry: dict[str, Any] = {"end": end, "gross_slip": _gross(assessment, case.name, end)}
        if found.partial is not None:
            entry["partial_slip"] = partial_entry(found.partial, system)
            if found.closed is not None:
                entry["partial_slip"]["closed_form"] = closed_values(found.closed, system)
        ends.append(entry)
    return {"name": case.name, "kind": "alternating" if case.alternating else "static", "ends": ends}


def _gross(assessment: FaceAssessment, case: str, end: str) -> dict[str, Any]:
    """Factors of the group and of the force alone; a factor that nothing limits is left out."""
    own = [check_entry(c) for c in assessment.verdict.checks if (c.case, c.end) == (case, end)]
    return {
        name: {key: entry[key] for key in ("safety", "load_factor") if key in entry}
        for name in ("group", "force_only")
        for entry in own
        if entry["check"] == f"gross_slip.{name}"
    }


def closed_values(closed: ClosedLap, system: System) -> dict[str, float]:
    """What the closed form tells, in the reader's units, by its key in the JSON."""
    values = {name: getattr(closed, name) for name in CLOSED}
    return {name: system.out(value, KINDS[name]) for name, value in values.items() if value is not None}


def face_text(assessment: FaceAssessment, units: System | None = None) -> str:
    """The assessment of a face as lines of at most 80 columns."""
    return "\n".join(_lines(assessment, units or assessment.joint.system)) + "\n"


def verdict_lines(assessment: FaceAssessment, system: System) -> Iterator[str]:
    """What governs, against what, where; at which friction and force."""
    face, g = assessment.joint, spoken_of(assessment)
    word, place = WORDS.get(assessment.verdict.exit_code, "NOT SOLVED"), f"({plain(g.case, 30)}, {g.end} end)"
    yield from wrapped(f"{word}: {sentence(assessment)} {place}", WIDTH)
    pressed = f"{short(system.out(face.force, 'force'))} {system.force} on each face"
    yield from wrapped(f"at lowest friction {face.interface.friction_low:g}, {pressed}", WIDTH, first="  ")


def _lines(assessment: FaceAssessment, system: System) -> Iterator[str]:
    face = assessment.joint
    yield from verdict_lines(assessment, system)
    yield f"-- {plain(face.title or face.file, WIDTH - 8)} ".ljust(WIDTH, "-")
    for name, said in _ends(assessment, system):
        yield from wrapped(f"{name}: {said[0]}", WIDTH)
        for more in said[1:]:
            yield from wrapped(more, WIDTH, first="  ", later="    ")
    listed = (found.partial for found in assessment.slips.values() if found.partial is not None)
    for note in dict.fromkeys(note for partial in listed for note in partial.notes):
        yield from wrapped(f"Note: {note}", WIDTH)
    for title, notes in (("Assumed", face.assumptions), ("Warnings", face.warnings)):
        if notes:
            listed_notes = "; ".join(plain(note.text, 160) for note in notes)
            yield from wrapped(f"{title} ({len(notes)}): {listed_notes}", WIDTH)
    yield from wrapped(f"Caution: {CAUTION}", WIDTH)


def _ends(assessment: FaceAssessment, system: System) -> Iterator[tuple[str, list[str]]]:
    """What is said of each end of each case, once where both ends are alike."""
    for i, case in enumerate(assessment.joint.cases):
        texts = []
        for end, _ in case.ends:
            found = assessment.slips[i, end]
            silent = f"No partial slip: {found.reason}" if found.reason else ""
            more = (said_of(found.partial, system), _closed_said(found, system), silent)
            texts.append((end, [_factors(found), *(text for text in more if text)]))
        name = plain(case.name, 24)
        if len(texts) > 1 and texts[0][1] == texts[1][1]:
            yield f"{name}, both ends", texts[0][1]
        else:
            yield from ((f"{name}, {end} end", text) for end, text in texts)


def spoken_of(assessment: FaceAssessment) -> Check:
    """The governing check; where nothing fails but something is not solved, that."""
    verdict = assessment.verdict
    unsolved = [check for check in verdict.checks if check.decides and not check.solved]
    return unsolved[0] if verdict.exit_code not in WORDS and unsolved else verdict.governing


def sentence(assessment: FaceAssessment) -> str:
    """The check that the verdict speaks of and what it is held against."""
    g = spoken_of(assessment)
    said = check_name(g.check)
    if g.required is not None and g.load_factor is not None and g.load_factor < float("inf"):
        said = f"the face slips wholly at {factor(g.load_factor, g.required)} times the load, required {g.required:g}"
    elif g.reason:
        said += f": {g.reason.removeprefix('not solved: ')}"
    return said


def _factors(found: FaceSlip) -> str:
    """Factors until slip of the whole and of the force alone."""
    if not found.sliding:
        return NO_SHEAR
    both = found.load[2] != 0 and found.force_factor < float("inf")
    alone = f", {factor(found.force_factor)} for the force alone (never decides)" if both else ""
    return f"slips wholly at {factor(float(found.group.factor))} times the load{alone}"


def _closed_said(found: FaceSlip, system: System) -> str:
    """The closed form, for the same typical stiffness."""
    if found.closed is None:
        return ""
    small, unit = (1e3, "um") if system.length == "mm" else (1e6, "uin")
    values = closed_values(found.closed, system)
    parts = [f"from {short(values['first_slip_load'])} {system.force}"]
    parts += [f"{name} {short(small * values[f'{name}_slip'])} {unit}" for name in ("elastic", "true")]
    if "energy_per_cycle" in values:
        parts.append(f"{values['energy_per_cycle']:.3g} {system.unit('energy')} a cycle")
    return f"In closed form {', '.join(parts)}"
