"""The contact stiffness of a model for programs: the result as plain dictionaries, as JSON text, and the sweep as CSV."""

from __future__ import annotations

import json
import math
from typing import Any

import slip
from slip.base.units import System
from slip.report.machine import FORMAT, UNITS
from slip.report.penalty_words import AREA, known
from slip.report.run_lines import bins_entry, examined_entry
from slip.stiffness.interface import PLACES
from slip.stiffness.run_found import Examined
from slip.stiffness.run_points import over_pressure
from slip.stiffness.stage import Penalty
from slip.stiffness.window import LEVELS, Window


def penalty_result(found: Penalty, units: System | None = None) -> dict[str, Any]:
    """The answer as plain dictionaries and lists; what is not known is absent."""
    s, system = found.subject, units or found.joint.system
    entry: dict[str, Any] = {
        "format": FORMAT,
        "title": found.joint.title,
        "tool": {"name": "slip", "version": slip.__version__},
        "input_digest": found.joint.digest,
        "units": {kind.replace(" ", "_"): system.unit(kind) for kind in UNITS},
        "judged_on": {
            "case": s.case,
            "end": s.end,
            "shear": system.out(s.force, "force"),
            "gross_slip_factor": s.gross,
            "pressure": {name: system.out(getattr(s.pressures, name), "pressure") for name in PLACES},
        },
        "recommended": {purpose: system.out(k, AREA) for purpose, k in found.recommended.items()},
        "forms": {
            purpose: [
                {"meaning": f.meaning, "value": system.out(f.value, f.kind) if f.kind else f.value}
                | ({"unit": system.unit(f.kind)} if f.kind else {})
                | ({"remark": f.remark} if f.remark else {})
                for f in rows
            ]
            for purpose, rows in found.forms.items()
        },
        "windows": [_window_entry(w, system) for w in found.windows],
        "serves_all": {
            purpose: None if both is None else [system.out(both[0], AREA), _finite(both[1], system)]
            for purpose, both in found.serves_all.items()
        },
        "not_above": [
            {"name": u.name, "said": u.said} | ({} if u.value is None else {"value": system.out(u.value, AREA)})
            for u in found.upper
        ],
        "card": {
            "expected": [
                {"name": e.name, "unit": system.unit(e.kind)}
                | {key: system.out(getattr(e, key), e.kind) for key in ("low", "typical", "high")}
                for e in found.card.expected
            ],
            "tests": list(found.card.tests),
            "contact_points_on": found.card.carries,
            "rule": found.card.rule,
            "log": found.card.log,
        },
        "assumptions": [note.as_dict() for note in found.joint.assumptions],
        "warnings": [note.as_dict() for note in (*found.joint.warnings, *found.notes)],
    }
    own = found.interface
    if own is not None:
        entry["interface"] = {
            "k_t": {name: [system.out(k, AREA) for k in own.k_t[name]] for name in PLACES},
            "elastic_slip": [system.out(g, "length") for g in own.elastic_slip],
            "follows_pressure": own.slope is not None,
            "source": own.source,
            "basis": own.basis,
        }
    if found.audit is not None:
        entry["present"] = {
            "value": system.out(found.audit.k, AREA),
            "elastic_slip": system.out(found.audit.response.motions.elastic_slip, "length"),
            "true_slip": system.out(found.audit.response.motions.true_slip, "length"),
            "errors": {
                purpose: {name: e for name, e in errors.items() if not math.isnan(e)}
                for purpose, errors in found.audit.errors.items()
            },
            "advice": list(found.audit.advice),
        }
    return entry


def _finite(value: float, system: System) -> float | None:
    return None if math.isinf(value) else system.out(value, AREA)


def _window_entry(w: Window, system: System) -> dict[str, Any]:
    quantities = {name: w.errors[name] for name in known(w)}
    return {
        "purpose": w.purpose,
        "k_t": [system.out(float(k), AREA) for k in w.k],
        "errors": {name: [None if math.isnan(e) else float(e) for e in errors] for name, errors in quantities.items()},
        "within": {
            name: {
                format(level, "g"): None
                if w.lowest[name][level] is None
                else [
                    system.out(w.lowest[name][level] or 0.0, AREA),
                    _finite(w.highest[name][level] or math.inf, system),
                ]
                for level in LEVELS
            }
            for name in quantities
        },
    }


def penalty_json(found: Penalty, units: System | None = None, ran: Examined | None = None) -> str:
    """The answer as JSON text, with what a run of the model found on its contact."""
    entry = penalty_result(found, units)
    if ran is not None:
        system, bins = units or found.joint.system, over_pressure(ran, found.subject.stiffness)
        entry["run"] = examined_entry(ran, system) | {"over_pressure": bins_entry(bins, system)}
    return json.dumps(entry, indent=2, ensure_ascii=False, allow_nan=False)


def sweep_csv(found: Penalty, units: System | None = None) -> str:
    """The sweep as CSV: a row for each stiffness, a column for each purpose and quantity with its error."""
    system = units or found.joint.system
    columns = [(w, name) for w in found.windows for name in known(w)]
    head = [f"k_t[{system.unit(AREA)}]", *(f"{w.purpose}: {name}" for w, name in columns)]
    rows = [head]
    for i, k in enumerate(found.windows[0].k):
        cells = (w.errors[name][i] for w, name in columns)
        rows.append([repr(system.out(float(k), AREA)), *("" if math.isnan(e) else repr(float(e)) for e in cells)])
    return "\n".join(",".join(row) for row in rows) + "\n"
