"""What the standards share: the judgement, the trail of formulas behind it, look-ups that name what is allowed.

Everything is in N, mm, MPa. Arrays run over bolts on the last axis (cases on leading axes); a scalar is one bolt or
one joint.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any

import numpy as np
from numpy.typing import NDArray

from slip.base.records import record
from slip.base.tables import BASES, Row, number, table

Number = float | NDArray[np.float64]
Step = tuple[Callable[..., Any], dict[str, float], float]
TIE = 1e-9  # relative: utilisations closer than this are equal, and the first bolt governs


@record(eq=False)
class Judgement:
    """Verdict of one standard on one load case.

    `demand`, `resistance`, `utilisation` = demand/resistance are arrays over bolts, or scalars where the standard
    judges the joint as a whole; utilisation is inf where there is no resistance, whatever the demand. `governing` is
    the (flat) index of the worst bolt and `steps` its formulas as (function, arguments, result), numbers only.
    `presumed_preload` [N] is what the standard takes for granted, to be compared with the lowest preload after
    tightening; None where it presumes none. A verdict with an `unmet` precondition is not a pass. `basis` is the
    weakest of all formulas and table values used.
    """

    demand: Number
    resistance: Number
    utilisation: Number
    governing: int
    presumed_preload: float | None
    steps: tuple[Step, ...]
    edition: str
    clause: str
    basis: str
    notes: tuple[str, ...]
    unmet: tuple[str, ...] = ()
    resistance_unit: str = "force"  # kind of quantity in base.units

    @property
    def reserve_factor(self) -> Number:
        """1/utilisation, shape of utilisation: inf without demand, 0 without resistance; below 1 the check fails."""
        with np.errstate(divide="ignore"):
            return 1.0 / np.asarray(self.utilisation)

    @property
    def worst(self) -> float:
        """Largest utilisation, that of the governing bolt."""
        return float(np.ravel(self.utilisation)[self.governing])


class Trail:
    """Collects formulas, bases and notes while a standard is applied, then concludes."""

    def __init__(self) -> None:
        self.steps: list[tuple[Callable[..., Any], dict[str, Any], Any]] = []
        self.bases: list[str] = []
        self.notes: list[str] = []

    def use(self, function: Callable[..., Any], **values: Any) -> Any:
        """Value of a formula function, kept as a step."""
        result = function(**values)
        self.steps.append((function, values, result))
        self.bases.append(function.formula.basis)  # type: ignore[attr-defined]
        return result

    def rest_on(self, row: Row) -> Row:
        """The same table row, its basis kept."""
        self.bases.append(row["basis"])
        return row

    def note(self, *sentences: str) -> None:
        """Keep sentences for the reader of the judgement."""
        self.notes.extend(sentences)

    def slip_factor(self, value: float | str, standard: str, edition: str) -> float:
        """A slip factor given as a number (> 0, by test), or as the class whose value the table slip_factors holds."""
        if not isinstance(value, str):
            check_positive(slip_factor=value)
            self.note(f"Slip factor {value:g} as given: a characteristic value for these surfaces.")
            return value
        rows = [row for row in table("slip_factors") if (row["standard"], row["edition"]) == (standard, edition)]
        mu = number(self.rest_on(pick(rows, surface_class=value)), "typical")
        self.note(f"Slip factor {mu:g} of surface class {value}.")
        for row in rows:
            if row["surface_class"] == value and row["low"]:
                self.note(f"{row['preparation'].capitalize()}: tests on site have given values as low as {row['low']}.")
        return mu

    def conclude(
        self,
        *,
        demand: Any,
        resistance: Any,
        presumed_preload: float | None,
        edition: str,
        clause: str,
        unmet: Iterable[str] = (),
    ) -> Judgement:
        """The judgement; steps are those of the governing bolt, without the ones that have no finite result there."""
        demand, resistance = np.broadcast_arrays(np.asarray(demand, float), np.maximum(resistance, 0.0))
        utilisation = np.full(demand.shape, np.inf)
        np.divide(demand, resistance, out=utilisation, where=resistance > 0)
        governing = int(np.argmax(utilisation >= utilisation.max() * (1 - TIE)))

        def here(value: Any) -> float:
            return float(np.broadcast_to(value, demand.shape).flat[governing])

        steps = tuple((f, {k: here(v) for k, v in values.items()}, here(result)) for f, values, result in self.steps)
        basis = max(self.bases, key=BASES.index)
        doubt = ("From memory, check the printed clause.",) if basis == "memory" else ()
        return Judgement(
            demand=demand[()],
            resistance=resistance[()],
            utilisation=utilisation[()],
            governing=governing,
            presumed_preload=presumed_preload,
            steps=tuple(step for step in steps if np.isfinite(step[2])),
            edition=edition,
            clause=clause,
            basis=basis,
            notes=(*self.notes, *doubt),
            unmet=tuple(unmet),
        )


def pick(rows: Iterable[Row], **wanted: str) -> Row:
    """First row whose columns hold the wanted words; ValueError names the words that the rows allow."""
    rows = list(rows)
    for row in rows:
        if all(row[column] == word for column, word in wanted.items()):
            return row
    found = ", ".join(f"{column} {word!r}" for column, word in wanted.items())
    allowed = dict.fromkeys(", ".join(row[column] for column in wanted if row[column]) for row in rows)
    raise ValueError(f"{found} is unknown; allowed: {'; '.join(allowed)}")


def hole_text(hole: str, slot: str) -> str:
    """Hole type as the beginning of a sentence."""
    return (f"{hole} {slot} the load" if slot else f"{hole} hole").capitalize()


def check_word(what: str, word: str, allowed: Iterable[str]) -> None:
    """ValueError naming the allowed words unless `word` is one of them."""
    if word not in (words := list(allowed)):
        raise ValueError(f"{what} {word!r} is unknown; allowed: {', '.join(words)}")


def check_finite(**values: Any) -> None:
    """ValueError unless every value is finite."""
    _check(values, np.isfinite, "finite")


def check_positive(**values: Any) -> None:
    """ValueError unless every value is finite and above zero."""
    _check(values, lambda value: np.isfinite(value) & (value > 0), "finite and above zero")


def check_not_negative(**values: Any) -> None:
    """ValueError unless every value is finite and zero or more."""
    _check(values, lambda value: np.isfinite(value) & (value >= 0), "finite and zero or more")


def check_share(**values: Any) -> None:
    """ValueError unless every value is zero or more and below one."""
    _check(values, lambda value: (value >= 0) & (value < 1), "at least 0 and below 1")


def check_count(**values: Any) -> None:
    """ValueError unless every value is a whole number of at least one."""
    _check(
        values, lambda value: np.isfinite(value) & (value >= 1) & (value == np.floor(value)), "a whole number from 1"
    )


def _check(values: dict[str, Any], good: Callable[[NDArray[np.float64]], Any], words: str) -> None:
    for name, value in values.items():
        if not np.all(good(np.asarray(value, float))):
            raise ValueError(f"{name} must be {words}, found {value}")
