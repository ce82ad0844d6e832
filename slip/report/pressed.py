"""The result for a pressed contact: terminal and JSON, the closed form and the step side by side."""

from __future__ import annotations

import json
from collections.abc import Iterator
from typing import Any

import slip
from slip.assess import PressedAssessment
from slip.base.units import System
from slip.friction.pressed import PressedSlip, Route
from slip.report.machine import FORMAT, UNITS, check_entry, friction_entry, governing_entry
from slip.report.partial import short
from slip.report.words import CAUTION, check_name, factor, plain, wrapped

WIDTH = 80
WORDS = {0: "HOLDS", 1: "FAILS"}
KINDS = {
    "displacement": "length",
    "stiffness": "stiffness",
    "stick_ratio": "number",
    "true_slip": "length",
    "elastic_slip": "length",
    "energy_per_cycle": "energy",
}


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
        "answers": {
            "slip": "holds" if verdict.holds else "fails",
            "stiffness": "not assessed",
            "cycles": "not assessed",
        },
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
    entry["routes"] = [{"model": route.name} | _route(route, system) for route in found.routes]
    if found.notes:
        entry["notes"] = list(found.notes)
    if found.reason:
        entry["reason"] = found.reason
    return entry


def _route(route: Route, system: System) -> dict[str, float]:
    values = {name: getattr(route, name) for name in KINDS}
    return {name: system.out(value, KINDS[name]) for name, value in values.items() if value is not None}


def pressed_text(assessment: PressedAssessment, units: System | None = None) -> str:
    """The assessment of a contact as lines of at most 80 columns."""
    return "\n".join(_lines(assessment, units or assessment.joint.system)) + "\n"


def _lines(assessment: PressedAssessment, system: System) -> Iterator[str]:
    contact, verdict = assessment.joint, assessment.verdict
    g = verdict.governing
    said = check_name(g.check)
    if g.required is not None:
        said = (
            f"the contact slips wholly at {factor(g.load_factor, g.required)} times the load, required {g.required:g}"
        )
    elif g.reason:
        said += f": {g.reason}"
    yield from wrapped(
        f"{WORDS.get(verdict.exit_code, 'NOT SOLVED')}: {said} ({plain(g.case, 30)}, {g.end} end)", WIDTH
    )
    yield from wrapped(f"at lowest friction {contact.interface.friction_low:g}", WIDTH, first="  ")
    title = plain(contact.title or contact.file, WIDTH - 8)
    yield f"-- {title} ".ljust(WIDTH, "-")
    length, force = system.length, system.force
    for (i, end), found in assessment.slips.items():
        size = f"{short(system.out(found.size, 'length'))} {length}"
        pressure = f"{short(system.out(found.peak_pressure, 'pressure'))} {system.pressure}"
        load = (
            f"{short(system.out(found.shear, 'force'))} of {short(system.out(found.gross_slip_load, 'force'))} {force}"
        )
        yield from wrapped(
            f"{plain(contact.cases[i].name, 24)}, {end} end: shear {load}; half size {size}, peak {pressure}", WIDTH
        )
        if found.reason:
            yield from wrapped(found.reason, WIDTH, first="  ")
        for route in found.routes:
            yield from wrapped(f"{route.name}: {_said(route, system)}", WIDTH, first="  ", later="    ")
        if found.edge_stress is not None:
            yield f"  stress at the trailing edge {short(system.out(found.edge_stress, 'pressure'))} {system.pressure}"
    for note in dict.fromkeys(note for found in assessment.slips.values() for note in found.notes):
        yield from wrapped(f"Note: {note}", WIDTH)
    if contact.assumptions:
        yield from wrapped(
            f"Assumed ({len(contact.assumptions)}): " + "; ".join(plain(n.text, 160) for n in contact.assumptions),
            WIDTH,
        )
    yield from wrapped(f"Caution: {CAUTION}", WIDTH)


def _said(route: Route, system: System) -> str:
    values = _route(route, system)
    words = {
        "displacement": "motion",
        "stick_ratio": "stick size",
        "true_slip": "true slip",
        "elastic_slip": "elastic slip",
    }
    units = {name: "" if KINDS[name] == "number" else " " + system.unit(KINDS[name]) for name in KINDS}
    names = {"energy_per_cycle": "a cycle"} | words
    return ", ".join(f"{names.get(name, name)} {short(value)}{units[name]}" for name, value in values.items())
