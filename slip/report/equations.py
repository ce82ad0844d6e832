"""Every number's own line: name, formula, numbers put in, result, unit, source and basis, for one case, end and bolt."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from typing import Any

import numpy as np

from slip.assess import Assessment, FaceAssessment, PressedAssessment
from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.base.tables import Row, table
from slip.base.trace import Step
from slip.joint.joint import Joint
from slip.joint.surface import Interface
from slip.read import library
from slip.verdict.checks import first_least
from slip.verdict.gross_slip import End

FILE = "file", "given"


@record
class Line:
    """One line of the explanation. `put_in` is plain arithmetic that evaluates to `result`; `group` names its part."""

    group: str
    name: str
    symbol: str
    formula: str
    put_in: str
    result: float
    unit: str
    source: str
    basis: str
    valid: str

    def as_dict(self) -> dict[str, Any]:
        """The line as JSON object."""
        return dict(self.__dict__)


@record
class Explanation:
    """What is explained, and its lines in the order of the calculation; everything in N, mm, MPa."""

    case: str
    end: str
    bolt: str
    lines: tuple[Line, ...]


def explain(assessment: Assessment, case: str | None = None, bolt: str | None = None) -> Explanation:
    """Lines for a case and bolt by name; by default the governing ones. The end is the one with the smaller factor.

    Raises Problems for a case or bolt that the joint has not.
    """
    joint, governing = assessment.joint, assessment.verdict.governing
    case = case or governing.case or joint.cases[0].name
    index = find(assessment, "case", case, [c.name for c in joint.cases])
    which = None if bolt is None else find(assessment, "bolt", bolt, list(joint.pattern.names))
    ends = [end for end in assessment.verdict.ends if end.case == index]
    if which is None and case == governing.case:
        ends = [end for end in ends if end.end == governing.end]
        which = joint.pattern.names.index(governing.bolt) if governing.bolt else None
    slipping = assessment.slip
    factors = slipping.bolt_load_factor if joint.required.grows == "all loads" else slipping.bolt_safety
    bolts = [end.bolt if which is None else which for end in ends]
    least = [factors[end.bolt_states[b], b] for end, b in zip(ends, bolts, strict=True)]
    chosen = first_least(np.array(least))
    end, shown = ends[chosen], bolts[chosen]
    return Explanation(case, end.end, joint.pattern.names[shown], tuple(_lines(assessment, end, shown)))


def find(assessment: Assessment | PressedAssessment | FaceAssessment, what: str, name: str, names: list[str]) -> int:
    """Place of a name among those of a case or bolt; raises Problems for another, with the names that are known."""
    if name in names:
        return names.index(name)
    known = ", ".join(names[:8]) + (", .." if len(names) > 8 else "")
    raise Problems(
        [InputError(f"unknown-{what}", what, name, f"a {what} of the file", f"known: {known}", assessment.joint.file)]
    )


def _lines(assessment: Assessment, end: End, bolt: int) -> Iterator[Line]:
    clamp, slipping = assessment.clamp, assessment.slip
    yield from _inputs(assessment.joint)
    state = end.bolt_states[bolt]
    held, grown = (_worst(assessment, end, f) for f in (slipping.group.factor, slipping.group_load_factor))
    alone, alone_grown = (_worst(assessment, end, f) for f in (slipping.force_safety, slipping.force_load_factor))
    group, force = slipping.group_trace.steps, slipping.force_trace.steps
    face, partial = assessment.partial.stiffness, assessment.partial.of(end.case, end.end)
    parts = (
        ("before load", clamp.assembly.trace.steps, state),
        ("load", clamp.states.trace.steps, state),
        ("clamp", clamp.ledger.trace.steps, state),
        ("slip of the bolt", slipping.trace.steps, state),
        ("stiffness of the face", face.trace.steps if face else [], state),
        (f"partial slip, {partial.model}" if partial else "", partial.trace.steps if partial else [], state),
        ("slip of the group", group[: len(group) // 2], held),
        ("slip of the group", group[len(group) // 2 :], grown),
        ("force alone", force[: len(force) // 2], alone),
        ("force alone", force[len(force) // 2 :], alone_grown),
    )
    shape, seen = clamp.ledger.clamp_low.shape, set[tuple[str, str]]()
    for title, steps, row in parts:
        said = title if row == state else f"{title}, another combination of signs"
        for line in picked(said, steps, shape, row, bolt):
            if (line.name, line.put_in) not in seen:
                seen.add((line.name, line.put_in))
                yield line
    yield from _standards(assessment, end)


def _worst(assessment: Assessment, end: End, factors: np.ndarray) -> int:
    """The load state of an end with the smallest of factors (S,); there are several only when the case is unsigned."""
    states = assessment.clamp.states
    rows = np.flatnonzero((states.case == end.case) & (np.array(states.end) == end.end))
    return int(rows[first_least(factors[rows])])


def _inputs(joint: Joint) -> Iterator[Line]:
    """What the tables or the file give and no formula yields, with the source of each."""

    def line(name: str, symbol: str, value: float, unit: str, origin: tuple[str, str]) -> Line:
        shown = f"{value:.8g}"
        return Line("inputs", name, symbol, "value", shown, value, unit, *origin, "")

    face, bolt = joint.interface, joint.bolt
    name, origin = friction_said(face)
    yield line(name, "mu", face.friction_low, "", origin)
    if bolt.thread:
        origin = bolt.thread.source, bolt.thread.basis
        yield line(f"thread {bolt.thread.designation}, diameter", "d", bolt.thread.diameter, "mm", origin)
        yield line(f"thread {bolt.thread.designation}, pitch", "P", bolt.thread.pitch, "mm", origin)
    if bolt.grade:
        yield line(
            "yield strength of the bolt", "R_p", bolt.grade.yield_strength, "MPa", (bolt.grade.source, bolt.grade.basis)
        )
    if bolt.bearing_diameter is not None:
        row = library.bearing_diameter(bolt.head, bolt.thread) if bolt.thread else None
        origin = _origin(joint, "bolt.bearing_diameter", row)
        yield line("bearing diameter under the head", "d_w", bolt.bearing_diameter, "mm", origin)
    if bolt.hole_diameter is not None:
        row = library.clearance_hole(bolt.thread) if bolt.thread else None
        yield line("clearance hole", "d_h", bolt.hole_diameter, "mm", _origin(joint, "bolt.hole_diameter", row))
    scatter = joint.tightening.scatter
    if scatter is not None:
        yield line(f"scatter, {scatter.text}", "t", scatter.bound, "", (scatter.source, scatter.basis))
    if joint.plates:  # the springs, where they are needed, take these
        materials = {"bolt and washers": bolt.material} | {p.name: p.material for p in joint.plates if p.material}
        for name, m in materials.items():
            yield line(f"modulus of {name}, {m.name}", "E", m.youngs_modulus, "MPa", (m.source, m.basis))


def friction_said(face: Interface) -> tuple[str, tuple[str, str]]:
    """How the lowest friction is called, and its source and basis: of the table row that the file names, else of the file."""
    name, origin = "lowest friction of the sliding face", (face.friction_source, face.friction_basis)
    if row := _friction_row(face.friction_source):
        return f"{name}, {face.friction_source}", (row["source"], row["basis"])
    return name, origin


def _friction_row(words: str) -> Row | None:
    """The row of the friction table that a joint names as its source, None where the file says another."""
    return next((row for row in table("friction") if f"{row['pair']}, {row['lubrication']}" == words), None)


def _origin(joint: Joint, key: str, row: Row | None) -> tuple[str, str]:
    """Source and basis of the table row that a silent file falls back to, or the file."""
    assumed = any(note.key == key for note in joint.assumptions)
    return (row["source"], row["basis"]) if assumed and row is not None else FILE


def picked(group: str, steps: Iterable[Step], shape: tuple[int, int], state: int, bolt: int) -> Iterator[Line]:
    """Steps with the values of one state and bolt; a result that is not finite (nothing limits) has no line."""

    def pick(value: Any) -> float:
        return float(np.broadcast_to(np.asarray(value, dtype=float), shape)[state, bolt]) + 0.0  # no -0

    for step in steps:
        result, f = pick(step.result), step.formula
        if math.isfinite(result):
            shown = f.put_in({name: pick(value) for name, value in step.values.items()})
            yield Line(group, step.name, f.symbol, f.text, shown, result, f.unit, step.source, step.basis, f.valid)


def _standards(assessment: Assessment, end: End) -> Iterator[Line]:
    """The formulas of every standard that was compared, for the bolt that it judges worst."""
    for entry in assessment.verdict.standards[end.case, end.end]:
        if entry.judgement is None:
            continue
        title = f"{entry.standard.label}, bolt {entry.check.bolt}" if entry.check.bolt else entry.standard.label
        for function, values, result in entry.judgement.steps:
            f = function.formula  # type: ignore[attr-defined]
            name = function.__name__.replace("_", " ")
            shown = f.put_in({key: value + 0.0 for key, value in values.items()})
            yield Line(title, name, f.symbol, f.text, shown, result + 0.0, f.unit, f.source, f.basis, f.valid)
