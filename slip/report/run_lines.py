"""An examined run for a person at a terminal and as the result's JSON object. Nothing is computed."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np

from slip.base.units import System
from slip.report.partial import short
from slip.report.words import cut, plain, wrapped
from slip.stiffness.run_found import MOTIONS, PARTS, POINT, Examined, Peak
from slip.stiffness.run_notes import fine
from slip.stiffness.run_own import OwnStiffness
from slip.stiffness.run_points import Bin
from slip.stiffness.run_steps import COMES_BACK, ONE, SETTLES, SHAKEDOWN, WALKS

WIDTH = 80
MOST_STEPS = 8  # of a run whose steps are listed
AREA = "stiffness per area"
SAID = {
    SHAKEDOWN: "shakedown: the last cycle slips no more",
    COMES_BACK: "each cycle slips and comes back: no walking",
    WALKS: "walks: what a cycle leaves does not fall",
    SETTLES: "settles: what a cycle leaves falls from cycle to cycle",
    ONE: "one cycle alone: a second tells whether what it leaves goes on",
}


def examined_text(found: Examined, system: System) -> list[str]:
    """Lines of at most 80 columns."""
    parts = (_head, _force, _regimes, _elastic, _slip, _energy, _steps, _warnings)
    return [cut(line, WIDTH) for part in parts for line in part(found, system)]


def _lines(name: str, text: str) -> list[str]:
    """A name and what is said of it, on as many lines as it takes."""
    return wrapped(text, WIDTH, f"{name:<16} ", " " * 17)


def _head(found: Examined, system: System) -> Iterator[str]:
    table = found.table
    steps = f" at {len(table.steps)} steps" if len(table.steps) > 1 else ""
    yield from _lines("Run", f"{plain(table.file, 40)}: {len(table.ids)} points{steps}; {plain(table.said, 200)}")
    yield from _lines("motion", f"{found.motion}: {MOTIONS[found.motion]}")


def _force(found: Examined, system: System) -> Iterator[str]:
    force, (low, high) = found.steps.force, found.clamp
    own = _between(*(system.out(float(v), "force") for v in (force.min(), force.max())))
    clamp = _between(*(system.out(v, "force") for v in (low, high)))
    yield from _lines("contact force", f"{own} {system.force}; clamp {clamp} {system.force}")


def _between(low: float, high: float) -> str:
    shown = f"{low:.6g}", f"{high:.6g}"
    return shown[0] if shown[0] == shown[1] else " to ".join(shown)


def _regimes(found: Examined, system: System) -> Iterator[str]:
    step, steps = found.worst, found.steps
    counts = ", ".join(f"{int((found.state[step] == i).sum())} {name}" for i, name in enumerate(POINT))
    text = (
        f"{steps.face[step]}{_at(found, step)}: {steps.share[step]:.1%} of the clamp slips "
        f"(points: {counts}; at the limit within {found.tolerance:.1%} of mu p)"
    )
    yield from _lines("regime", text)
    if n := int(found.at_spring[step].sum()):
        text = f"of those that slip {n} at mu p with no motion but the elastic slip: true slip is about to begin there"
        yield from _lines("spring's limit", text)
    if n := int(found.moved[-1].sum()):
        text = f"of those that stick{_at(found, -1)} {n} with true slip: they slipped before, or creep"
        yield from _lines("stick, moved", text)


def _elastic(found: Examined, system: System) -> Iterator[str]:
    if found.own is not None:
        own, unit = found.own, system.unit(AREA)
        text = f"{_k(own.k, system)} {unit} by the points that stick ({_k(own.low, system)} to {_k(own.high, system)})"
        if own.slope is not None:
            text += f"; it follows the pressure, {own.slope[1] / system.out(1.0, 'length'):.4g}/{system.length} times p"
        yield from _lines("run's stiffness", text)
    if found.k_t is not None:
        taken = "; taken out of the motion" if found.used == "declared" else ""
        yield from _lines("declared", f"{_k(found.k_t, system)} {system.unit(AREA)}{taken}")
    elif found.used:
        yield from _lines("elastic slip", "taken out with the run's own stiffness")


def _k(value: float, system: System) -> str:
    return short(system.out(value, AREA)) if np.isfinite(value) else "no end"


def _slip(found: Examined, system: System) -> Iterator[str]:
    slips = found.slips
    if slips is None:
        yield from _lines("true slip", "not told apart from elastic slip")
        return
    parts = ", ".join(f"{part:.0%} within {fine(v, system)}" for part, v in zip(PARTS, slips.parts, strict=True))
    yield from _lines("true slip", f"most {_peak(found, slips.largest, system)}; of the area {parts}")
    if slips.amplitude is not None and slips.path is not None:
        a, b = (plain(found.table.steps[i], 12) for i in slips.span)
        yield from _lines("amplitude", f"{_peak(found, slips.amplitude, system)}, steps {a} to {b}")
        yield from _lines("path", f"{_peak(found, slips.path, system)}, steps {a} to {b}")


def _peak(found: Examined, peak: Peak, system: System) -> str:
    """A largest value with its point and place."""
    x, y = (f"{system.out(float(v[peak.point]), 'length'):.4g}" for v in (found.table.x, found.table.y))
    step = _at(found, peak.step) if peak.step >= 0 else ""
    return f"{fine(peak.value, system)} at id {plain(found.table.ids[peak.point], 20)} ({x}, {y}) {system.length}{step}"


def _energy(found: Examined, system: System) -> Iterator[str]:
    if found.energy is None or found.energy_at_limit is None:
        return
    unit, c = system.unit("energy"), found.cycles
    kinds = [(found.energy, c.energy if c else (), "by mean tractions")]
    if any(note.code == "run-steps-coarse" for note in found.notes):
        kinds.append((found.energy_at_limit, c.energy_at_limit if c else (), "with mu p over the slip"))
    for name, (energy, of_cycles, how) in zip(("energy", ""), kinds, strict=False):
        points = energy.sum(axis=0)
        total, most = (system.out(float(v), "energy") for v in (points.sum(), points.max()))
        where = plain(found.table.ids[int(points.argmax())], 20)
        text = f"{total:.4g} {unit} {how}, most at id {where} ({most:.3g} {unit})"
        last = f"; {system.out(of_cycles[-1], 'energy'):.4g} {unit} in the last cycle" if of_cycles else ""
        yield from _lines(name, text + last)


def _steps(found: Examined, system: System) -> Iterator[str]:
    names = found.table.steps
    if len(names) < 2:
        return
    for hold in found.holds:
        goes = "creep" if hold.creeps else "motion at rest" if hold.motion == 0 else "no creep"
        text = (
            f"steps {plain(names[hold.first], 12)} to {plain(names[hold.last], 12)}: {goes}, motion changes by "
            f"{fine(hold.motion, system)}, traction by {system.out(hold.traction, 'pressure'):.3g} {system.pressure}"
        )
        yield from _lines("load held", text)
    c = found.cycles
    if c is not None:
        left = ", ".join(fine(v, system) for v in c.net[-3:])
        way = ", ".join(fine(v, system) for v in c.path[-3:])
        count = f"{len(c.net)} cycle{'s' if len(c.net) > 1 else ''}"
        yield from _lines("cycles", f"{count}, {SAID[c.verdict]}; the last leave {left}, their path {way}")
    elif not found.holds:
        yield from _lines("cycles", "no load is held and no cycle closes: creep and walking are not told")
    if len(names) <= MOST_STEPS:
        yield f"  {'step':<12}{'force ' + system.force:>14}{'shear ' + system.force:>14}{'slips':>9}  face"
        steps = found.steps
        for i, name in enumerate(names):
            force, shear = (system.out(float(v[i]), "force") for v in (steps.force, steps.shear))
            yield f"  {plain(name, 12):<12}{force:>14.5g}{shear:>14.5g}{steps.share[i]:>9.1%}  {steps.face[i]}"


def _warnings(found: Examined, system: System) -> Iterator[str]:
    for note in found.notes:
        yield from wrapped(f"{note.text}.", WIDTH, "! ", "  ")


def _at(found: Examined, step: int) -> str:
    name = plain(found.table.steps[step], 12)
    return f" at step {name}" if name else ""


# JSON


def examined_entry(found: Examined, system: System) -> dict[str, Any]:
    """The examination as a JSON object in the system's units; what was not computed is absent."""
    table, steps = found.table, found.steps
    out = system.out
    entry: dict[str, Any] = {
        "file": table.file,
        "points": len(table.ids),
        "rows": table.count,
        "rows_refused": table.refused.height,
        "motion": found.motion,
        "tractions_turned": found.turned,
        "contact_force": [out(float(v), "force") for v in steps.force],
        "clamp": [out(v, "force") for v in found.clamp],
        "force_off": found.off,
        "regime": steps.face[found.worst],
        "slipping_share": float(steps.share[found.worst]),
        "traction_over_limit": found.beyond,
        "at_elastic_limit": int(found.at_spring[found.worst].sum()),
        "moved_below_limit": int(found.moved[-1].sum()),
        "steps": [_step_entry(found, i, system) for i in range(len(table.steps))],
        "holds": [_hold_entry(found, i, system) for i in range(len(found.holds))],
        "warnings": [note.as_dict() for note in found.notes],
    }
    if found.k_t is not None:
        entry["declared_stiffness"] = out(found.k_t, AREA)
    if found.own is not None:
        entry["own_stiffness"] = _own_entry(found.own, system)
    entry |= _slip_entry(found, system)
    return entry


def _step_entry(found: Examined, i: int, system: System) -> dict[str, Any]:
    steps, out = found.steps, system.out
    force, shear = (out(float(v[i]), "force") for v in (steps.force, steps.shear))
    entry: dict[str, Any] = {"step": found.table.steps[i], "contact_force": force, "shear": shear}
    entry |= {"regime": steps.face[i], "slipping_share": float(steps.share[i])}
    if np.isfinite(steps.slip[i]):
        entry["true_slip"] = out(float(steps.slip[i]), "length")
    if found.energy is not None and i:
        entry["energy"] = out(float(found.energy[i - 1].sum()), "energy")
    return entry


def _hold_entry(found: Examined, i: int, system: System) -> dict[str, Any]:
    hold, names = found.holds[i], found.table.steps
    motion, traction = system.out(hold.motion, "length"), system.out(hold.traction, "pressure")
    steps = {"from": names[hold.first], "to": names[hold.last]}
    return steps | {"motion": motion, "traction": traction, "creep": hold.creeps}


def _own_entry(own: OwnStiffness, system: System) -> dict[str, Any]:
    entry: dict[str, Any] = {"low": system.out(own.low, AREA), "typical": system.out(own.k, AREA)}
    if np.isfinite(own.high):
        entry["high"] = system.out(own.high, AREA)
    if own.slope is not None:
        entry["over_pressure"] = own.slope[1] / system.out(1.0, "length")
    return entry | {"points": len(own.k_of), "unit": system.unit(AREA)}


def _slip_entry(found: Examined, system: System) -> dict[str, Any]:
    """True slip, energy and cycles, as far as they are known."""
    out, slips, c = system.out, found.slips, found.cycles
    if slips is None:
        return {}
    names = [f"{part:.0%}" for part in PARTS]
    parts = {name: out(v, "length") for name, v in zip(names, slips.parts, strict=True)}
    entry: dict[str, Any] = {"true_slip": _peak_entry(found, slips.largest, system) | {"of_area": parts}}
    for name, peak in (("amplitude", slips.amplitude), ("path", slips.path)):
        if peak is not None:
            entry[name] = _peak_entry(found, peak, system)
    if found.energy is not None and found.energy_at_limit is not None:
        entry["energy"] = out(float(found.energy.sum()), "energy")
        entry["energy_at_limit"] = out(float(found.energy_at_limit.sum()), "energy")
    if c is not None:
        kinds = [("left", c.net, "length"), ("path", c.path, "length"), ("energy", c.energy, "energy")]
        kinds.append(("energy_at_limit", c.energy_at_limit, "energy"))
        entry["cycles"] = {name: [out(v, kind) for v in values] for name, values, kind in kinds}
        entry["cycles"] |= {"turns": [found.table.steps[i] for i in c.turns], "verdict": c.verdict}
    return entry


def _peak_entry(found: Examined, peak: Peak, system: System) -> dict[str, Any]:
    table, out = found.table, system.out
    entry: dict[str, Any] = {"value": out(peak.value, "length"), "id": table.ids[peak.point]}
    entry |= {"x": out(float(table.x[peak.point]), "length"), "y": out(float(table.y[peak.point]), "length")}
    return entry | ({"step": table.steps[peak.step]} if peak.step >= 0 and table.steps[peak.step] else {})


def bins_text(bins: tuple[Bin, ...], system: System) -> list[str]:
    """The curve of the stiffness over pressure as a small table."""
    k, p = system.unit(AREA), system.pressure
    lines = [f"Stiffness over pressure [{k}]: the face's law; the run's points that stick"]
    lines.append(
        f"  {'p [' + p + ']':>12}{'points':>8}{'clamp':>8}{'law: low':>11}{'typical':>10}{'high':>10}{'run':>10}{'pairs':>7}"
    )
    for b in bins:
        law = ["-"] * 3 if b.law is None else [_k(v, system) for v in b.law]
        own = "-" if b.own is None else _k(b.own[1], system)
        first = f"  {system.out(b.p, 'pressure'):>12.4g}{b.points:>8}{b.share:>8.1%}"
        lines.append(f"{first}{law[0]:>11}{law[1]:>10}{law[2]:>10}{own:>10}{b.pairs:>7}")
    return [cut(line, WIDTH) for line in lines]


def bins_entry(bins: tuple[Bin, ...], system: System) -> list[dict[str, Any]]:
    """The same as JSON objects."""
    made = []
    for b in bins:
        p = {name: system.out(v, "pressure") for name, v in (("p_low", b.p_low), ("p_high", b.p_high), ("p", b.p))}
        entry: dict[str, Any] = p | {"points": b.points, "share": b.share}
        for name, values in (("law", b.law), ("run", b.own)):
            if values is not None:
                named = zip(("low", "typical", "high"), values, strict=True)
                entry[name] = {which: system.out(v, AREA) for which, v in named if np.isfinite(v)}
        made.append(entry | ({"run_points": b.pairs} if b.pairs else {}))
    return made
