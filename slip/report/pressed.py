"""The result for a pressed contact: terminal and JSON, the closed form and the step side by side."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator, Sequence
from typing import Any

import slip
from slip.assess import PressedAssessment
from slip.base.units import System
from slip.friction.pressed.records import PressedSlip, Route
from slip.report.machine import FORMAT, UNITS, check_entry, friction_entry, governing_entry, slip_answer
from slip.report.partial import short
from slip.report.words import CAUTION, NOT_OF_PRESSED, check_name, factor, once, plain, wrapped

WIDTH = 80
GLUE = "\N{WORD JOINER}"  # in place of a space that no line is broken at
MOST = 8  # ends that the screen shows
WORDS = {0: "HOLDS", 1: "FAILS"}
KINDS = {
    "displacement": "length",
    "stiffness": "stiffness",
    "stick_ratio": "number",
    "stick_shift": "length",
    "true_slip": "length",
    "elastic_slip": "length",
    "edge_stress": "pressure",
    "energy_per_cycle": "energy",
}
BAND = ("low", "high")


def pressed_result(assessment: PressedAssessment, units: System | None = None) -> dict[str, Any]:
    """The assessment of a contact as plain dictionaries and lists, keys as in the contract where they mean the same."""
    contact, verdict = assessment.joint, assessment.verdict
    system = units or contact.system
    return {
        "format": FORMAT,
        "title": contact.title,
        "tool": {"name": "slip", "version": slip.__version__},
        "input_digest": contact.digest,
        "units": {kind.replace(" ", "_"): system.unit(kind) for kind in UNITS},
        "holds": verdict.holds,
        "friction": friction_entry(contact.interface),
        "governing": governing_entry(verdict.governing, contact.required.grows),
        "answers": {"slip": slip_answer(verdict), "stiffness": "not assessed", "cycles": "not assessed"},
        "assumptions": [note.as_dict() for note in contact.assumptions],
        "warnings": [note.as_dict() for note in contact.warnings],
        "checks": [check_entry(check) for check in verdict.checks],
        "cases": [_case(assessment, i, system) for i in range(len(contact.cases))],
    }


def pressed_json(assessment: PressedAssessment, units: System | None = None) -> str:
    """The result as JSON text."""
    return json.dumps(pressed_result(assessment, units), indent=2, ensure_ascii=False, allow_nan=False)


def _case(assessment: PressedAssessment, i: int, system: System) -> dict[str, Any]:
    case = assessment.joint.cases[i]
    ends = []
    for end, _ in case.ends:
        found = assessment.slips[i, end]
        held = next(
            c for c in assessment.verdict.checks if (c.case, c.end, c.check) == (case.name, end, "gross_slip.group")
        )
        group = {name: check_entry(held)[name] for name in ("safety", "load_factor") if name in check_entry(held)}
        ends.append({"end": end, "gross_slip": {"group": group}, "partial_slip": _partial(found, system)})
    return {"name": case.name, "kind": "alternating" if case.alternating else "static", "ends": ends}


def _partial(found: PressedSlip, system: System) -> dict[str, Any]:
    entry: dict[str, Any] = {
        "shear": system.out(found.shear, "force"),
        "gross_slip_load": system.out(found.gross_slip_load, "force"),
        "contact_size": system.out(found.size, "length"),
        "peak_pressure": system.out(found.peak_pressure, "pressure"),
    }
    if found.edge_stress is not None:
        entry["edge_stress"] = system.out(found.edge_stress, "pressure")
    entry["routes"] = [_route(route, system) for route in found.routes]
    if found.notes:
        entry["notes"] = list(found.notes)
    if found.reason:
        entry["reason"] = found.reason
    return entry


def _route(route: Route, system: System) -> dict[str, Any]:
    entry: dict[str, Any] = {"model": route.name} | values(route, system)
    if route.band:
        entry["band"] = {name: values(one, system) for name, one in zip(BAND, route.band, strict=True)}
    return entry


def values(route: Route, system: System) -> dict[str, float]:
    """What a route tells, in the reader's units, by its key in the JSON."""
    found = {name: getattr(route, name) for name in KINDS}
    return {name: system.out(value, KINDS[name]) for name, value in found.items() if value is not None}


def pressed_text(assessment: PressedAssessment, units: System | None = None) -> str:
    """The assessment of a contact as lines of at most 80 columns."""
    return "\n".join(_lines(assessment, units or assessment.joint.system)) + "\n"


def verdict_lines(assessment: PressedAssessment) -> Iterator[str]:
    """What governs, against what, where; at which friction."""
    contact, verdict = assessment.joint, assessment.verdict
    g = verdict.governing
    yield from wrapped(
        f"{WORDS.get(verdict.exit_code, 'NOT SOLVED')}: {sentence(assessment)} ({plain(g.case, 30)}, {g.end} end)",
        WIDTH,
    )
    yield from wrapped(f"at lowest friction {contact.interface.friction_low:g}", WIDTH, first="  ")


def sentence(assessment: PressedAssessment) -> str:
    """The governing check and what it is held against."""
    g = assessment.verdict.governing
    if g.required is not None and g.load_factor is not None and math.isfinite(g.load_factor):
        return (
            f"the contact slips wholly at {factor(g.load_factor, g.required)} times the load, required {g.required:g}"
        )
    return f"{check_name(g.check)}: {g.reason}" if g.reason else check_name(g.check)


def alike(assessment: PressedAssessment) -> list[tuple[int, str, PressedSlip]]:
    """Case, words for the end, and what was found: one entry for both ends of a case where they are the same."""
    entries: list[tuple[int, str, PressedSlip]] = []
    for (i, end), found in assessment.slips.items():
        last = entries[-1] if entries else None
        if last and last[0] == i and (found.shear, found.routes) == (last[2].shear, last[2].routes):
            entries[-1] = (i, "both ends", last[2])
        else:
            entries.append((i, f"{end} end", found))
    return entries


def _lines(assessment: PressedAssessment, system: System) -> Iterator[str]:
    contact = assessment.joint
    yield from verdict_lines(assessment)
    title = plain(contact.title or contact.file, WIDTH - 8)
    yield f"-- {title} ".ljust(WIDTH, "-")
    entries = sorted(alike(assessment), key=lambda entry: entry[2].safety)[:MOST]
    hidden = len(alike(assessment)) - len(entries)
    for i, end, found in alike(assessment) if not hidden else entries:
        yield from _end_lines(assessment, contact.cases[i].name, end, found, system)
    if hidden:
        yield f"and {hidden} more ends with larger factors; --json has them all"
    for note in once(note for found in assessment.slips.values() for note in found.notes):
        yield from wrapped(f"Note: {note}", WIDTH)
    for said, notes in (("Assumed", assessment.assumptions), ("Warnings", assessment.warnings)):
        if notes:
            yield from wrapped(f"{said} ({len(notes)}): " + "; ".join(plain(n.text, 160) for n in notes), WIDTH)
    yield from wrapped(f"Not assessed: {NOT_OF_PRESSED}. Caution: {CAUTION}", WIDTH)


def _end_lines(assessment: PressedAssessment, case: str, end: str, found: PressedSlip, system: System) -> Iterator[str]:
    """One end: load, size and pressure, then the routes, or why there are none."""
    length, force = system.length, system.force
    size = f"{short(system.out(found.size, 'length'))} {length}"
    pressure = f"{pressure_word(assessment)} {short(system.out(found.peak_pressure, 'pressure'))} {system.pressure}"
    load = f"{short(system.out(found.shear, 'force'))} of {short(system.out(found.gross_slip_load, 'force'))} {force}"
    yield from wrapped(f"{plain(case, 24)}, {end}: shear {load}; half size {size}, {pressure}", WIDTH)
    if found.reason:
        yield from wrapped(found.reason, WIDTH, first="  ")
    for route in found.routes:
        lines = wrapped(f"{route.name}: {_said(route, system)}", WIDTH, first="  ", later="    ")
        yield from (line.replace(GLUE, " ") for line in lines)


def pressure_word(assessment: PressedAssessment) -> str:
    """What the pressure of the result is: the peak, or of a sharp flat the mean."""
    return "mean pressure" if assessment.joint.shape == "flat" else "peak"


def _said(route: Route, system: System) -> str:
    names = {
        "displacement": "motion",
        "stick_ratio": "stick size",
        "stick_shift": "stick zone shifted by",
        "true_slip": "true slip",
        "elastic_slip": "elastic slip",
        "edge_stress": "stress at the trailing edge",
        "energy_per_cycle": "a cycle",
    }
    said = []
    for name, value in values(route, system).items():
        unit = "" if KINDS[name] == "number" else " " + system.unit(KINDS[name])
        parts = (names.get(name, name), _glued(f"{short(value)}{unit}"), _glued(band_said(route, name, system)))
        said.append(" ".join(part for part in parts if part))
    return ", ".join(said)


def _glued(text: str) -> str:
    """A number with its unit, or a range, that no line breaks."""
    return text.replace(" ", GLUE)


def band_said(route: Route, name: str, system: System) -> str:
    """The values at low and high stiffness of the face, the smaller first; '' where there are none or they are the same."""
    ends: Sequence[float] = sorted(values(one, system).get(name, math.nan) for one in route.band)
    if not ends or math.isnan(sum(ends)) or ends[0] == ends[-1]:
        return ""
    return f"({short(ends[0])} .. {short(ends[-1])})"
