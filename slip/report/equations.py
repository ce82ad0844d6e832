"""Every number's own line: name, formula, numbers put in, result, unit, source and basis, for one case, end and bolt."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np

from slip.assess import Assessment
from slip.base.errors import InputError, Problems
from slip.base.trace import Step
from slip.verdict.checks import first_least


@dataclass(frozen=True)
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


@dataclass(frozen=True)
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
    joint, verdict = assessment.joint, assessment.verdict
    case = case or verdict.governing.case or joint.cases[0].name
    index = _find(assessment, "case", case, [c.name for c in joint.cases])
    ends = [end for end in verdict.ends if end.case == index]
    slipping = assessment.slip
    factors = slipping.bolt_load_factor if joint.required.grows == "all loads" else slipping.bolt_safety
    if bolt is None:
        own = [end for end in ends if case == verdict.governing.case and end.end == verdict.governing.end]
        end = own[0] if own else ends[first_least(np.array([factors[e.state, e.bolt] for e in ends]))]
        state, which = end.state, end.bolt
    else:
        which = _find(assessment, "bolt", bolt, list(joint.pattern.names))
        rows = np.flatnonzero(assessment.clamp.states.case == index)
        state = int(rows[first_least(factors[rows, which])])
    end_name = assessment.clamp.states.end[state]
    lines = tuple(_lines(assessment, index, end_name, state, which))
    return Explanation(case, end_name, joint.pattern.names[which], lines)


def _find(assessment: Assessment, what: str, name: str, names: list[str]) -> int:
    if name in names:
        return names.index(name)
    known = ", ".join(names[:8]) + (", .." if len(names) > 8 else "")
    raise Problems(
        [InputError(f"unknown-{what}", what, name, f"a {what} of the file", f"known: {known}", assessment.joint.file)]
    )


def _lines(assessment: Assessment, case: int, end: str, state: int, bolt: int) -> Iterator[Line]:
    clamp, seen = assessment.clamp, set[tuple[str, str]]()
    joint = assessment.joint
    friction = joint.interface
    yield Line(
        "friction",
        "lowest friction of the sliding face",
        "mu",
        "value",
        f"{friction.friction_low:.8g}",
        friction.friction_low,
        "",
        f"{friction.friction_source}",
        friction.friction_basis,
        "",
    )
    groups = (
        ("before load", clamp.assembly.trace.steps),
        ("load", clamp.states.trace.steps),
        ("clamp", clamp.ledger.trace.steps),
        ("slip", assessment.slip.trace.steps),
    )
    shape = clamp.ledger.clamp_low.shape
    for group, steps in groups:
        for line in _picked(group, steps, shape, state, bolt):
            if (line.name, line.put_in) not in seen:
                seen.add((line.name, line.put_in))
                yield line
    for entry in assessment.verdict.standards[case, end]:
        if entry.judgement is None:
            continue
        for function, values, result in entry.judgement.steps:
            f = function.formula  # type: ignore[attr-defined]
            name = function.__name__.replace("_", " ")
            yield Line(
                entry.standard.label,
                name,
                f.symbol,
                f.text,
                f.put_in(values),
                result,
                f.unit,
                f.source,
                f.basis,
                f.valid,
            )


def _picked(group: str, steps: Iterable[Step], shape: tuple[int, int], state: int, bolt: int) -> Iterator[Line]:
    """Steps with the values of one state and bolt; a result that is not finite (nothing limits) has no line."""

    def pick(value: Any) -> float:
        return float(np.broadcast_to(np.asarray(value, dtype=float), shape)[state, bolt])

    for step in steps:
        result, f = pick(step.result), step.formula
        if math.isfinite(result):
            values = {name: pick(value) for name, value in step.values.items()}
            yield Line(
                group, step.name, f.symbol, f.text, f.put_in(values), result, f.unit, step.source, step.basis, f.valid
            )
