"""The page's part on partial slip."""

from __future__ import annotations

from typing import Any

from slip.assess import Assessment
from slip.base.units import System
from slip.friction.partial import PartialSlip
from slip.report.partial import banded, remarks, short, stiffness_entry
from slip.report.rows import NAME, Row, Table
from slip.report.words import plain

FEW = 3  # cases and ends that a remark names


def partial_part(assessment: Assessment, system: System) -> dict[str, Any]:
    """The page's part on partial slip: a row for every end, the sentences below it, the face's stiffness; or why there is none."""
    partial = assessment.partial
    if partial.reason:
        return {"reason": partial.reason, "table": None, "said": [], "stiffness": ""}
    found = [(end, partial.of(end.case, end.end)) for end in assessment.verdict.ends]
    rows = [
        Row((plain(assessment.joint.cases[end.case].name, NAME), end.end, *_cells(entry, system)))
        for end, entry in found
        if entry is not None
    ]
    heads = (
        "case",
        "end",
        f"first slip [{system.force}]",
        f"gross slip [{system.force}]",
        f"stiffness [{system.unit('stiffness')}]",
        f"elastic slip [{system.length}]",
        f"true slip [{system.length}]",
        "share that slips",
        f"energy a cycle [{system.unit('energy')}]",
    )
    groups: dict[str, list[str]] = {}
    for end, entry in found:
        for said in remarks(entry):
            groups.setdefault(said, []).append(f"{plain(assessment.joint.cases[end.case].name, NAME)}, {end.end}")
    return {
        "reason": "",
        "table": Table("Partial slip of every case and end, typical stiffness of the face (low .. high)", heads, rows),
        "said": [placed(said, places, len(found)) for said, places in groups.items()],
        "stiffness": _stiffness_said(assessment, system),
    }


def _cells(found: PartialSlip, system: System) -> list[str]:
    gross = "-" if found.gross_slip_load is None else short(system.out(found.gross_slip_load, "force"))
    names = ("first_slip_load", "stiffness", "elastic_slip", "true_slip", "slip_share", "energy_per_cycle")
    cells = [banded(found, name, system) for name in names]
    return [cells[0], gross, *cells[1:]]


def placed(said: str, places: list[str], all_ends: int) -> str:
    """A remark with the cases and ends that it is of, unless it is of all."""
    if len(places) == all_ends:
        return said
    more = f" and {len(places) - FEW} more" if len(places) > FEW else ""
    return f"{said} ({'; '.join(places[:FEW])}{more})"


def _stiffness_said(assessment: Assessment, system: System) -> str:
    entry = stiffness_entry(assessment, system).get("interface_tangential")
    if entry is None:
        return ""
    values = f"{short(entry['typical'])} {entry['unit']} ({short(entry['low'])} .. {short(entry['high'])})"
    at = (
        f" at {short(entry['pressure'])} {system.pressure}, the clamp-weighted mean pressure"
        if "pressure" in entry
        else ""
    )
    return f"Tangential stiffness of the face {values}{at}; basis {entry['basis']}."
