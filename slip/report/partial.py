"""Partial slip and the face's stiffness as every report says them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np

from slip.assess import Assessment
from slip.base.units import System
from slip.friction.model import RIM_SAID
from slip.friction.partial import HIGH, LOW, TYPICAL, Motions, PartialSlip
from slip.report.words import at_most, plain, wrapped

KINDS = {
    "first_slip_load": "force",
    "stiffness": "stiffness",
    "elastic_slip": "length",
    "true_slip": "length",
    "slip_length": "length",
    "energy_per_cycle": "energy",
    "first_slip_factor": "number",
    "slip_share": "number",
}
TRIED = 5  # ends that are worked out in search of one that slips in part


def partial_entry(found: PartialSlip, system: System) -> dict[str, Any]:
    """Partial slip of one end as the contract's JSON object: the typical reading, and the band of the low and high one."""
    entry: dict[str, Any] = {}
    if found.model:
        entry |= {"model": found.model, "why": found.why}
    if found.gross_slip_load is not None:
        entry["gross_slip_load"] = system.out(found.gross_slip_load, "force")
    if math.isfinite(found.gross_slip_factor):
        entry["gross_slip_factor"] = found.gross_slip_factor
    if found.readings:
        entry |= _values(found.readings[TYPICAL], system)
        entry["band"] = {name: _values(found.readings[i], system) for name, i in (("low", LOW), ("high", HIGH))}
    if found.stretch:
        entry["stretch_left_out"] = system.out(found.stretch, "length")
    if found.outside:
        entry["outside_range"] = found.outside
    if found.notes:
        entry["notes"] = list(found.notes)
    if found.reason:
        entry["reason"] = found.reason
    return entry


def _values(motions: Motions, system: System) -> dict[str, float]:
    values = {name: getattr(motions, name) for name in KINDS}
    return {name: system.out(value, KINDS[name]) for name, value in values.items() if value is not None}


def stiffness_entry(assessment: Assessment, system: System) -> dict[str, Any]:
    """The face's tangential stiffness as the contract's JSON object, at the clamp-weighted mean pressure; empty where not known."""
    partial = assessment.partial
    if partial.stiffness is None or (partial.stiffness.value is None and not partial.mean_pressure > 0):
        return {}
    kind = "stiffness per area"
    k = [float(partial.stiffness.at(partial.mean_pressure, reading)) for reading in (LOW, TYPICAL, HIGH)]
    entry: dict[str, Any] = dict(zip(("low", "typical", "high"), (system.out(value, kind) for value in k), strict=True))
    entry |= {"unit": system.unit(kind), "basis": partial.stiffness.basis, "source": partial.stiffness.source}
    if partial.stiffness.value is None:
        entry["pressure"] = system.out(partial.mean_pressure, "pressure")
    return {"interface_tangential": entry}


def short(value: float) -> str:
    """Three digits, large numbers whole with their thousands apart."""
    return f"{value:,.0f}".replace(",", " ") if abs(value) >= 1000 else f"{value:.3g}"


def banded(found: PartialSlip, name: str, system: System, scale: float = 1.0, unit: str = "") -> str:
    """A value at the typical stiffness, and in brackets the least and the most of all three readings; '-' for none."""
    values = [getattr(reading, name) for reading in found.readings]
    if not values or any(value is None for value in values):
        return "-"
    shown = [scale * system.out(value, KINDS[name]) for value in values]
    return f"{short(shown[TYPICAL])} {unit}".rstrip() + f" ({short(min(shown))} .. {short(max(shown))})"


def partial_lines(assessment: Assessment, case: int, end: str, system: System, width: int, most: int) -> Sequence[str]:
    """A sentence on the partial slip of an end, typical reading and band, and what must be known of it, in at most so many lines; of the
    end nearest to gross slip where this one has none. [] where there is nothing to say."""
    found, place = assessment.partial.of(case, end), ""
    if found is not None and not found.readings and (other := _worst_answer(assessment)):
        index, at, found = other
        place = f" in {plain(assessment.joint.cases[index].name, 24)}, {at} end,"
    if found is None or not found.readings:
        return at_most(wrapped(said_of(found, system, place), width), most, width)
    brief, short_brief = _brief(found, system)
    full = [said_of(found, system, place, gross, f"; {found.model}") for gross in (True, False)]
    ways = [[*wrapped(said, width), *wrapped(brief, width, "  ", "    ")] for said in full]
    ways.append(wrapped(said_of(found, system, place, tail=short_brief), width))
    fitting = [lines for lines in ways if len(lines) <= most]
    return at_most([*fitting, ways[-1]][0], most, width)


def _worst_answer(assessment: Assessment) -> tuple[int, str, PartialSlip] | None:
    """The end with the largest load over gross slip of those that slip in part; a few are tried, for each takes its time."""
    states, factors = assessment.clamp.states, assessment.slip.group.factor
    rows = [row for row in np.argsort(factors) if assessment.slip.sliding[row] and factors[row] > 1]
    for case, end in list(dict.fromkeys((int(states.case[row]), str(states.end[row])) for row in rows))[:TRIED]:
        found = assessment.partial.of(case, end)
        if found is not None and found.readings:
            return case, end, found
    return None


def _brief(found: PartialSlip, system: System) -> tuple[str, str]:
    """What keeps the numbers from being taken as they are, in a few words and in the fewest; '' for nothing."""
    said, fewest = list[str](), ""
    if any("stretch" in note for note in found.notes):
        small, unit = _small(system)
        stretch = f"{short(small * system.out(found.stretch, 'length'))} {unit}"
        said.append(f"stretch of the plates left out: up to {stretch}")
        fewest = f"; + stretch up to {stretch}"
    if found.outside:
        said.append(f"outside its range: {found.outside}")
        fewest = "; outside its range"
    if RIM_SAID in found.notes:
        said.append("first slip without the last 1 % of the clamp")
    return "; ".join(said), fewest


def _small(system: System) -> tuple[float, str]:
    """The unit in which slips are said, and how many of it the system's length has."""
    return (1e3, "um") if system.length == "mm" else (1e6, "uin")


def said_of(
    found: PartialSlip | None, system: System, place: str = "", gross: bool = False, tail: str | None = None
) -> str:
    """The sentence of a partial slip that is at hand; place: which end it is of; gross: with the load at which all slips; tail: in place
    of the model."""
    if found is None or not found.model:
        return ""
    if not found.readings:
        return f"Partial slip: {found.reason}"
    middle = found.readings[TYPICAL]
    small, unit = _small(system)
    if middle.first_slip_load is not None:
        start = "from " + banded(found, "first_slip_load", system, unit=system.force)
    else:
        start = f"from {middle.first_slip_factor:.3g} of the load"
    if gross and found.gross_slip_load is not None:
        start += f", all at {short(system.out(found.gross_slip_load, 'force'))} {system.force}"
    parts = [
        start,
        "elastic " + banded(found, "elastic_slip", system, small, unit),
        "true " + banded(found, "true_slip", system, small, unit),
    ]
    if middle.energy_per_cycle is not None:
        parts.append(f"{system.out(middle.energy_per_cycle, 'energy'):.3g} {system.unit('energy')} a cycle")
    return f"Partial slip{place} {', '.join(parts)}{f'; {found.model}' if tail is None else tail}"


def remarks(found: PartialSlip | None, which: str = "") -> list[str]:
    """Model and reason for it, what must be known of the numbers, why there are none; which: the end that they are of."""
    if found is None:
        return []
    said = [f"{found.model}: {found.why}"] if found.model else []
    return [*said, *(f"{note}{which}" for note in (*found.notes, found.reason) if note)]
