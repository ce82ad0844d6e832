"""Partial slip and the face's stiffness as every report says them."""

from __future__ import annotations

import math
from typing import Any

from slip.assess import Assessment
from slip.base.units import System
from slip.friction.partial import HIGH, LOW, TYPICAL, Motions, PartialSlip

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


def partial_line(assessment: Assessment, case: int, end: str, system: System) -> str:
    """One sentence on the partial slip of an end, typical reading and band; '' where there is nothing to say."""
    return said_of(assessment.partial.of(case, end), system)


def said_of(found: PartialSlip | None, system: System) -> str:
    """The same of a partial slip that is at hand."""
    if found is None or not found.model:
        return ""
    if not found.readings:
        return f"Partial slip: {found.reason}"
    low, middle, high = (found.readings[i] for i in (LOW, TYPICAL, HIGH))

    def band(name: str, kind: str, unit: str, scale: float) -> str:
        ends = sorted(scale * system.out(getattr(m, name), kind) for m in (low, high))
        value = scale * system.out(getattr(middle, name), kind)
        return f"{short(value)} {unit} ({short(ends[0])} .. {short(ends[1])})"

    small, unit = (1e3, "um") if system.length == "mm" else (1e6, "uin")
    if middle.first_slip_load is not None:
        start = "from " + band("first_slip_load", "force", system.force, 1.0)
    else:
        start = f"from {middle.first_slip_factor:.3g} of the load"
    parts = [
        start,
        "elastic " + band("elastic_slip", "length", unit, small),
        "true " + band("true_slip", "length", unit, small),
    ]
    if middle.energy_per_cycle is not None:
        parts.append(f"{system.out(middle.energy_per_cycle, 'energy'):.3g} {system.unit('energy')} a cycle")
    return f"Partial slip {', '.join(parts)}; {found.model}"
