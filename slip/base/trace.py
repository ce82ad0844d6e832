"""The record of a calculation: every formula that was used, with its numbers and its result, in the order of use.

A stage calls its formulas through a Trace, so that what is shown to a reviewer is the computation itself and not a
second telling of it. Arrays are kept by reference: recording costs next to nothing.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from slip.base.formulas import Formula
from slip.base.records import record


@record(eq=False)
class Step:
    """One use of a formula. Values and result broadcast to (states, bolts); `source` and `basis` override the formula's
    own where a value came out of a table or file."""

    name: str
    formula: Formula
    values: Mapping[str, Any]
    result: Any
    source: str
    basis: str


@dataclass
class Trace:
    """Collects steps; calling it computes a formula and records it. With keep=False it computes the same and records nothing."""

    steps: list[Step] = field(default_factory=list)
    keep: bool = True

    def __call__(self, name: str, function: Callable[..., Any], **values: Any) -> Any:
        """Result of `function(**values)`, recorded under `name`; the function must carry a formula."""
        result = function(**values)
        if self.keep:
            formula: Formula = function.formula  # type: ignore[attr-defined]
            self.steps.append(Step(name, formula, values, result, formula.source, formula.basis))
        return result

    def total(self, name: str, symbol: str, terms: Mapping[str, Any], unit: str, source: str, basis: str) -> Any:
        """Sum of named terms, recorded as one step."""
        result = sum(terms.values())
        if self.keep:
            formula = Formula(symbol, " + ".join(terms), unit, source, basis, "")
            self.steps.append(Step(name, formula, terms, result, source, basis))
        return result

    def products(
        self, name: str, symbol: str, first: Sequence[Any], second: Sequence[Any], source: str, basis: str
    ) -> None:
        """Record the sum of products first_i second_i as one step."""
        if not self.keep:
            return
        values = {
            f"{letter}_{i + 1}": item for letter, items in (("F", first), ("s", second)) for i, item in enumerate(items)
        }
        text = " + ".join(f"F_{i + 1}*s_{i + 1}" for i in range(len(first)))
        result = sum(a * b for a, b in zip(first, second, strict=True))
        self.steps.append(Step(name, Formula(symbol, text, "", source, basis, ""), values, result, source, basis))

    def given(self, name: str, symbol: str, value: Any, unit: str, source: str, basis: str) -> Any:
        """A value that is looked up or typed, recorded as it is."""
        if self.keep:
            formula = Formula(symbol, "value", unit, source, basis, "")
            self.steps.append(Step(name, formula, {"value": value}, value, source, basis))
        return value
