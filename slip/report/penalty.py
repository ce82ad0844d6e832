"""The contact stiffness of a model: lines of at most 80 columns for a person, and the result for programs."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator
from typing import Any

import numpy as np

import slip
from slip.base.units import SI, SYSTEMS, System
from slip.report.machine import FORMAT, UNITS
from slip.report.words import CAUTION, plain, wrapped
from slip.stiffness.interface import PLACES
from slip.stiffness.stage import Penalty
from slip.stiffness.upper import Upper
from slip.stiffness.window import LEVELS, Window

WIDTH = 80
AREA = "stiffness per area"
PURPOSES = {"stick": "a contact that only has to stick", "interface": "a contact that stands for the real faces"}


def penalty_text(found: Penalty, units: System | None = None) -> str:
    """The answer as lines."""
    return "\n".join(line.rstrip() for line in _lines(found, units or found.joint.system)) + "\n"


def _lines(found: Penalty, system: System) -> Iterator[str]:
    s = found.subject
    for purpose, k in found.recommended.items():
        yield from wrapped(f"{PURPOSES[purpose]}: {_say(k, AREA, system)} along the face", WIDTH)
        yield from _why(found, purpose, system)
    title = plain(found.joint.title or found.joint.file, WIDTH - 8)
    yield f"-- {title} ".ljust(WIDTH, "-")
    place = f"{plain(s.case, 30)}, {s.end} end: shear {_say(s.force, 'force', system)}"
    gross = f", slips wholly at {s.gross * s.force / system.factor((1, 0, 0, 0)):.4g} {system.force}" if s.force else ""
    yield from wrapped(f"Judged on {place}{gross}; {found.model}", WIDTH)
    yield from _forms(found, system)
    for w in found.windows:
        yield from _window(found, w, system)
    yield from _upper(found.upper, system)
    if found.audit is not None:
        yield from wrapped(f"Present value {_say(found.audit.k, AREA, system)}:", WIDTH)
        for text in found.audit.advice:
            yield from wrapped(text, WIDTH, first="  ", later="    ")
    yield from _card(found, system)
    for name, notes in (("Assumed", found.joint.assumptions), ("Warnings", (*found.joint.warnings, *found.notes))):
        texts = list(dict.fromkeys(plain(note.text, 300) for note in notes))
        if texts:
            yield from wrapped(f"{name} ({len(texts)}): {'; '.join(texts)}", WIDTH)
    yield from wrapped(f"Caution: {CAUTION}", WIDTH)


def _why(found: Penalty, purpose: str, system: System) -> Iterator[str]:
    """What stands behind a recommended value, and what it does not serve."""
    own = found.interface
    if purpose == "interface" and own is not None:
        pressure = found.subject.pressures
        for name in PLACES:
            low, typical, high = own.k_t[name]
            at = _say(getattr(pressure, name), "pressure", system)
            said = {"mean": "mean pressure", "weighted": "clamp-weighted", "peak": "peak"}[name]
            band = f"{_number(low, AREA, system)} .. {_number(high, AREA, system)}"
            yield f"  {said + ' ' + at:<28}{_number(typical, AREA, system):>10}  ({band})"
        low, typical, high = own.elastic_slip
        slip_ = (
            f"{_say(typical, 'length', system)} ({_number(high, 'length', system)} .. {_number(low, 'length', system)})"
        )
        yield from wrapped(
            f"elastic slip at the limit traction {slip_}, basis {own.basis}", WIDTH, first="  ", later="    "
        )
        if own.slope is not None:
            yield from wrapped(_follow(found), WIDTH, first="  ", later="    ")
    else:
        yield "  the least value that keeps stiffness, true slip, energy and sharing within 5 %"
    if found.serves_all[purpose] is None:
        yield "  no value keeps every quantity within 10 %: choose by the quantity that counts"


def _follow(found: Penalty) -> str:
    """The advice to let the stiffness follow the pressure, and what a constant does here."""
    own = found.interface
    assert own is not None
    a, b = own.own.motions, own.constant.motions
    text = "let it follow the pressure where the model can"
    false = f"a constant starts to slip at {b.first_slip_factor:.3g} of the load instead of {a.first_slip_factor:.3g}"
    if a.energy_per_cycle and b.energy_per_cycle is not None:
        false += f" and takes {b.energy_per_cycle / a.energy_per_cycle:.3g} times the energy of a cycle"
    return f"{text}: {false}"


def _forms(found: Penalty, system: System) -> Iterator[str]:
    """Every form of each recommended value, side by side."""
    names = list(found.forms)
    heads = "".join(f"{name:>14}" for name in names)
    yield f"{'The value as':<46}{heads}"
    for rows in zip(*found.forms.values(), strict=True):
        unit = f" [{system.unit(rows[0].kind)}]" if rows[0].kind else ""
        numbers = "".join(f"{_number(row.value, row.kind, system):>14}" for row in rows)
        yield f"  {rows[0].meaning + unit:<44}{numbers}"
        if rows[0].remark and "bulk" in rows[0].remark:
            yield f"    {rows[0].remark}"
    other = next(one for one in SYSTEMS.values() if one.name != system.name)
    numbers = "".join(f"{_number(k, AREA, other):>14}" for k in found.recommended.values())
    yield f"  {'the first in [' + other.unit(AREA) + ']':<44}{numbers}"
    if system is SI:
        numbers = "".join(f"{1e9 * k:>14.4g}" for k in found.recommended.values())
        yield f"  {'the first in [N/m^3]':<44}{numbers}"


def _window(found: Penalty, w: Window, system: System) -> Iterator[str]:
    """Values that keep each quantity within 10, 5 and 1 %."""
    against = "a contact that does not give" if w.purpose == "stick" else "the face's own stiffness"
    yield f"Window for {w.purpose} [{system.unit(AREA)}], error against {against}:"
    yield f"  {'error of':<14}" + "".join(f"{'within ' + format(level, '.0%'):>21}" for level in LEVELS)
    for name, errors in w.errors.items():
        if np.isnan(errors).all():
            continue
        cells = [_span(w.lowest[name][level], w.highest[name][level], w, system) for level in LEVELS]
        yield f"  {name:<14}" + "".join(f"{cell:>21}" for cell in cells)
    both = found.serves_all[w.purpose]
    if both is not None:
        yield f"  {'all of them':<14}{_span(*both, w, system):>21}"


def _span(low: float | None, high: float | None, w: Window, system: System) -> str:
    """From where to where the values serve."""
    if low is None or high is None:
        return "none"
    first = low <= w.k[0] * (1 + 1e-9)
    if first and math.isinf(high):
        return "any"
    if math.isinf(high):
        return f"from {_number(low, AREA, system)}"
    if first:
        return f"to {_number(high, AREA, system)}"
    return f"{_number(low, AREA, system)}..{_number(high, AREA, system)}"


def _upper(bounds: tuple[Upper, ...], system: System) -> Iterator[str]:
    """Bounds from above."""
    yield f"Not above [{system.unit(AREA)}]:"
    for bound in bounds:
        value = "-" if bound.value is None else _number(bound.value, AREA, system)
        yield from wrapped(f"{bound.name + ':':<29}{value}, {bound.said}", WIDTH, first="  ", later=" " * 31)


def _card(found: Penalty, system: System) -> Iterator[str]:
    """What the analyst's own run should show."""
    yield "Your own run should show:"
    for row in found.card.expected:
        unit = system.unit(row.kind)
        typical = _number(row.typical, row.kind, system)
        band = ""
        if row.high > row.low:
            band = f"  ({_number(row.low, row.kind, system)} .. {_number(row.high, row.kind, system)})"
        yield f"  {row.name + ' [' + unit + ']':<28}{typical:>12}{band}"
    for text in found.card.tests:
        yield from wrapped(text, WIDTH, first="  ", later="    ")
    yield from wrapped(
        f"Contact points on {plain(found.card.carries, 30)}: {found.card.rule}.", WIDTH, first="  ", later="    "
    )
    yield from wrapped(f"For the log: {found.card.log}", WIDTH, first="  ", later="    ")


def _number(value: float, kind: str, system: System) -> str:
    """A number in the system's unit, four digits."""
    return f"{system.out(value, kind) if kind else value:.4g}"


def _say(value: float, kind: str, system: System) -> str:
    return f"{_number(value, kind, system)} {system.unit(kind)}"


# for programs


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
    quantities = {name: errors for name, errors in w.errors.items() if not np.isnan(errors).all()}
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


def penalty_json(found: Penalty, units: System | None = None) -> str:
    """The answer as JSON text."""
    return json.dumps(penalty_result(found, units), indent=2, ensure_ascii=False, allow_nan=False)


def sweep_csv(found: Penalty, units: System | None = None) -> str:
    """The sweep as CSV: a row for each stiffness, a column for each purpose and quantity with its error."""
    system = units or found.joint.system
    columns = [(w, name) for w in found.windows for name in w.errors if not np.isnan(w.errors[name]).all()]
    head = [f"k_t[{system.unit(AREA)}]", *(f"{w.purpose}: {name}" for w, name in columns)]
    rows = [head]
    for i, k in enumerate(found.windows[0].k):
        cells = (w.errors[name][i] for w, name in columns)
        rows.append([repr(system.out(float(k), AREA)), *("" if math.isnan(e) else repr(float(e)) for e in cells)])
    return "\n".join(",".join(row) for row in rows) + "\n"
