"""A formula and what a reviewer asks of it: its text, unit, source and basis, kept beside the function that computes it.

The text is written in plain mathematics (`^` for powers) over the function's own argument names, so it can be shown, have the
numbers put in, and be evaluated again by anyone: the printed line is a second route to the number beside it.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from typing import Any, TypeVar

from slip.base.records import record
from slip.base.tables import Row, find

F = TypeVar("F", bound=Callable[..., Any])
WORD = re.compile(r"[A-Za-z_]\w*")
# What a formula's text may call; everything else in it is a name of a quantity.
FUNCTIONS: dict[str, Any] = {
    "sqrt": math.sqrt,
    "ln": math.log,
    "exp": math.exp,
    "cos": math.cos,
    "sin": math.sin,
    "tan": math.tan,
    "acos": math.acos,
    "sinh": math.sinh,
    "cosh": math.cosh,
    "tanh": math.tanh,
    "hypot": math.hypot,
    "abs": abs,
    "min": min,
    "max": max,
    "pi": math.pi,
}


@record
class Formula:
    """`symbol = text` with the unit of the result, the key of its source in data/sources.csv, the basis and the range it holds in."""

    symbol: str
    text: str
    unit: str
    source: str
    basis: str
    valid: str

    def put_in(self, values: Mapping[str, float | str]) -> str:
        """The text with numbers in place of names; a value given as text is put in as it is, in brackets."""

        def replace(match: re.Match[str]) -> str:
            name = match.group()
            if name in FUNCTIONS:
                return name
            value = values[name]
            if isinstance(value, str):
                return f"({value})"
            shown = f"{value:.8g}"
            return f"({shown})" if value < 0 else shown

        return WORD.sub(replace, self.text)


def formula(symbol: str, text: str, *, unit: str, source: str, basis: str, valid: str = "") -> Callable[[F], F]:
    """Decorator: keep a formula's text and origin on its function as `function.formula`."""

    def keep(function: F) -> F:
        function.formula = Formula(symbol, text, unit, source, basis, valid)  # type: ignore[attr-defined]
        return function

    return keep


def evaluate(text: str) -> float:
    """Value of a formula's text once every name has been replaced by a number."""
    return float(eval(text.replace("^", "**"), {"__builtins__": {}}, dict(FUNCTIONS)))  # noqa: S307


def citation(key: str) -> str:
    """The words of a source key in data/sources.csv; several keys are separated by a semicolon."""
    rows: list[Row | None] = [find("sources", "key", part) for part in key.split(";")]
    return "; ".join(row["citation"] for row in rows if row is not None)
