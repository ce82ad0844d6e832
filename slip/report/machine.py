"""The result for programs: the contract's JSON, numbers in the file's units and unrounded, what was not computed absent."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from typing import Any

import numpy as np

import slip
from slip.assess import Assessment
from slip.base.errors import InputError, NotConverged, Problems
from slip.base.formulas import citation
from slip.base.units import System
from slip.joint.surface import Interface
from slip.report.equations import Explanation
from slip.report.partial import partial_entry, stiffness_entry
from slip.verdict.checks import Check
from slip.verdict.gross_slip import End
from slip.verdict.stage import Verdict
from slip.verdict.standards.common import Judgement

FORMAT = 1
UNITS = ("force", "length", "pressure", "moment", "temperature rise", "stiffness per area", "energy")


def result(assessment: Assessment, units: System | None = None) -> dict[str, Any]:
    """The assessment as plain dictionaries and lists, in the units of the file or of `units`."""
    joint, verdict = assessment.joint, assessment.verdict
    system = units or joint.system
    grows = joint.required.grows
    found = {
        "format": FORMAT,
        "title": joint.title,
        "tool": {"name": "slip", "version": slip.__version__},
        "input_digest": joint.digest,
        "units": {kind.replace(" ", "_"): system.unit(kind) for kind in UNITS},
        "holds": verdict.holds,
        "decides": joint.required.decides,
        "grows": joint.required.grows,
        "friction": friction_entry(joint.interface),
        "governing": governing_entry(verdict.governing, grows),
        "answers": {"slip": slip_answer(verdict), "stiffness": "not assessed", "cycles": "not assessed"},
        "assumptions": [note.as_dict() for note in assessment.assumptions],
        "warnings": [note.as_dict() for note in assessment.warnings],
        "checks": [check_entry(check) for check in verdict.checks],
        "cases": [_case(assessment, i, system) for i in range(len(joint.cases))],
    }
    stiffness = stiffness_entry(assessment, system)
    return found | ({"stiffness": stiffness} if stiffness else {})


def text(assessment: Assessment, units: System | None = None) -> str:
    """The result as JSON text; NaN and infinity cannot occur in it."""
    return json.dumps(result(assessment, units), indent=2, ensure_ascii=False, allow_nan=False)


def explanation_text(explanation: Explanation) -> str:
    """An explanation as JSON text, with the citations of its source keys."""
    keys = dict.fromkeys(key for line in explanation.lines for key in line.source.split(";"))
    found = {
        "format": FORMAT,
        "case": explanation.case,
        "end": explanation.end,
        **({"bolt": explanation.bolt} if explanation.bolt else {}),
        "lines": [line.as_dict() for line in explanation.lines],
        "sources": {key: said for key in keys if (said := citation(key))},
    }
    return json.dumps(found, indent=2, ensure_ascii=False, allow_nan=False)


def errors_text(error: Problems | NotConverged) -> str:
    """Input errors, or an answer that could not be proven, as the contract's JSON text."""
    if isinstance(error, NotConverged):
        error = Problems([InputError(error.code, "", str(error), "an answer proven to 1e-8", "see found")])
    listed = [one.as_dict() for one in error.errors]
    return json.dumps({"format": FORMAT, "errors": listed}, indent=2, ensure_ascii=False)


def friction_entry(face: Interface) -> dict[str, Any]:
    """The friction of the sliding face that the result rests on."""
    return {
        "low": face.friction_low,
        "high": face.friction_high,
        "source": face.friction_source,
        "basis": face.friction_basis,
        "parallel_faces": face.parallel_faces,
    }


def slip_answer(verdict: Verdict) -> str:
    """The answer to the first question, for joints and contacts alike: it fails when any check that decides fails.

    A limit of true slip or loosening that could not be judged leaves it to the checks of slip itself.
    """
    deciding = [check for check in verdict.checks if check.decides]
    if any(check.solved and not check.holds for check in deciding):
        return "fails"
    held = all(check.holds for check in deciding if check.check not in ("true_slip", "loosening"))
    return "holds" if held else "not assessed"


def _put(target: dict[str, Any], **values: Any) -> dict[str, Any]:
    """Add the values that say something: not None, not empty, not infinite."""
    for name, value in values.items():
        if value is None or value == "" or (isinstance(value, float) and math.isinf(value)):
            continue
        target[name] = value
    return target


def governing_entry(check: Check, grows: str) -> dict[str, Any]:
    """The governing check as the contract's JSON object."""
    found = _put({}, case=check.case, end=check.end)
    found["check"] = check.check
    return _put(
        found,
        bolt=check.bolt,
        factor=check.factor(grows),
        required=check.required,
        reserve_factor=check.reserve_factor,
        reason=check.reason,
    )


def check_entry(check: Check) -> dict[str, Any]:
    """A check as the contract's JSON object."""
    found = _put({}, case=check.case, end=check.end)
    found["check"] = check.check
    _put(
        found,
        bolt=check.bolt,
        safety=check.safety,
        load_factor=check.load_factor,
        required=check.required,
        reserve_factor=check.reserve_factor,
    )
    found |= {"holds": check.holds, "decides": check.decides}
    return _put(found, reason=check.reason)


def _case(assessment: Assessment, i: int, system: System) -> dict[str, Any]:
    case = assessment.joint.cases[i]
    ends = [end for end in assessment.verdict.ends if end.case == i]
    return {
        "name": case.name,
        "kind": "alternating" if case.alternating else "static",
        "ends": [_end(assessment, end, system) for end in ends],
    }


def _end(assessment: Assessment, end: End, system: System) -> dict[str, Any]:
    found: dict[str, Any] = {
        "end": end.end,
        "ledger": ledger(assessment, end.bolt_states, system),
        "gross_slip": _gross_slip(assessment, end, system),
    }
    partial = assessment.partial.of(end.case, end.end)
    if partial is not None:
        found["partial_slip"] = partial_entry(partial, system)
    entries = assessment.verdict.standards[end.case, end.end]
    if entries:
        found["standards"] = [
            _standard(entry.standard.label, entry.judgement, system) for entry in entries if entry.judgement is not None
        ]
    return found


def _standard(label: str, judgement: Judgement, system: System) -> dict[str, Any]:
    """A standard's answer for its governing bolt; without resistance there is no finite utilisation."""
    resistance, demand = (np.ravel(forces)[judgement.governing] for forces in (judgement.resistance, judgement.demand))
    found: dict[str, Any] = {
        "standard": label,
        "resistance": system.out(float(resistance), "force"),
        "demand": system.out(float(demand), "force"),
    }
    return _put(found, utilisation=judgement.worst, basis=judgement.basis)


def ledger(assessment: Assessment, states: int | Sequence[int], system: System) -> list[dict[str, Any]]:
    """The clamp ledger, a row for each bolt: of one load state, or of a state for each bolt."""
    clamp, slipping = assessment.clamp, assessment.slip
    a, found = clamp.assembly, clamp.ledger
    bolts = np.arange(assessment.joint.pattern.count)
    at = np.broadcast_to(states, bolts.shape), bolts
    forces = {
        "assembly_low": found.preload_low[at],
        "assembly_high": a.high,
        "embedding": a.embedding,
        "relaxation": found.relaxation[at],
        "thermal_loss": found.thermal_loss[at],
        "thermal_gain": found.thermal_gain[at],
        "axial_relief": found.relief[at],
        "clamp_low": found.clamp_low[at],
        "clamp_high": found.clamp_high[at],
        "bolt_force_high": found.bolt_force_high[at],
    }
    rows = []
    for i, name in enumerate(assessment.joint.pattern.names):
        row: dict[str, Any] = {"bolt": name}
        row |= {key: system.out(float(values[i]), "force") for key, values in forces.items()}
        if found.yield_use is not None:
            row["yield_use"] = float(found.yield_use[at][i])
        if found.bearing_pressure is not None:
            row["bearing_pressure_high"] = system.out(float(found.bearing_pressure[at][i]), "pressure")
        _put(row, separation_factor=float(found.separation_factor[at][i]))
        row["open"] = bool(found.open[at][i])
        row["shear"] = system.out(float(slipping.shear[at][i]), "force")
        rows.append(row)
    return rows


def _gross_slip(assessment: Assessment, end: End, system: System) -> dict[str, Any]:
    """The three factors of an end, each with the clamp held and with all loads growing."""
    checks = {check.check: check for check in end.checks}
    found: dict[str, Any] = {}
    for name in ("per_bolt", "group", "force_only"):
        check = checks[f"gross_slip.{name}"]
        found[name] = _put({}, safety=check.safety, load_factor=check.load_factor, bolt=check.bolt)
    centre = assessment.slip.group.centre[end.group_state] + assessment.joint.pattern.centroid
    if np.isfinite(centre).all():
        found["group"]["centre"] = [system.out(float(x), "length") for x in centre]
    return found
