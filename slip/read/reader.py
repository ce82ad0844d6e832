"""What all reading shares: the place of a value, one sentence for each fault, all faults together, and what was assumed."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import Any, TypeVar

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.units import KINDS, NONE, SI, SYSTEMS, System, UnitError, example, parse
from slip.read.document import Document, Path_
from slip.read.schema import Key

T = TypeVar("T")


class Stop(Exception):
    """A value that something needs is missing or wrong; the fault is already recorded."""


def nearest(word: str, known: Iterable[str]) -> str:
    """The known word closest to `word`, or ''."""
    import difflib  # only a wrong file pays for it

    close = difflib.get_close_matches(word.casefold(), [k.casefold() for k in known], n=1, cutoff=0.5)
    return next((k for k in known if close and k.casefold() == close[0]), "")


def show_path(path: Path_) -> str:
    """A key path as shown to a person: entries of an array count from 1."""
    text = ""
    for part in path:
        text += f"[{part + 1}]" if isinstance(part, int) else f".{part}" if text else part
    return text


def show(value: Any) -> str:
    """A found value, short enough for a sentence."""
    text = {True: "true", False: "false"}.get(value, repr(value)) if isinstance(value, bool) else repr(value)
    if isinstance(value, str):
        text = '"' + "".join(c if c.isprintable() else "?" for c in value) + '"'
    return text if len(text) <= 60 else text[:57] + "..."


class Reader:
    """Collects faults, assumptions and warnings of one document, and turns typed values into numbers of the inside units."""

    def __init__(self, document: Document) -> None:
        self.document = document
        self.errors: list[InputError] = []
        self.assumptions: list[Note] = []
        self.warnings: list[Note] = []
        declared = document.tree.get("units")
        self.declared = SYSTEMS.get(declared) if isinstance(declared, str) else None

    @property
    def system(self) -> System:
        """The system in which results are shown: the declared one, else N mm."""
        return self.declared or SI

    # faults and notes
    def fail(self, path: Path_, code: str, found: str, expected: str, remedy: str) -> None:
        """Record one fault."""
        place = self.document.line(path)
        self.errors.append(InputError(code, show_path(path), found, expected, remedy, self.document.file, place))

    def stop(self, path: Path_, code: str, found: str, expected: str, remedy: str) -> Stop:
        """Record one fault and return the exception that leaves the part being built."""
        self.fail(path, code, found, expected, remedy)
        return Stop()

    def assume(self, code: str, text: str, key: str) -> None:
        """Record an assumption once."""
        note = Note(code, text, key)
        if note not in self.assumptions:
            self.assumptions.append(note)

    def warn(self, code: str, text: str, key: str) -> None:
        """Record a warning once."""
        note = Note(code, text, key)
        if note not in self.warnings:
            self.warnings.append(note)

    def attempt(self, build: Callable[[], T]) -> T | None:
        """Result of `build`, or None when it stopped at a fault that is already recorded."""
        try:
            return build()
        except Stop:
            return None

    def finish(self) -> None:
        """Raise all recorded faults together."""
        if self.errors:
            raise Problems(self.errors)

    # numbers
    def quantity(self, path: Path_, value: Any, kind: str) -> float:
        """A typed value of a kind of quantity in inside units."""
        if isinstance(value, str):
            try:
                number = parse(value, kind)
            except UnitError as error:
                code = "unit-missing" if "with a unit" in error.expected else "unit-wrong"
                raise self.stop(path, code, show(value), error.expected, error.remedy) from None
        elif isinstance(value, (int, float)) and not isinstance(value, bool):
            number = self._bare(path, value, kind)
        else:
            raise self.stop(path, "not-a-quantity", show(value), f"a {kind}", f"write for instance {example(kind)}")
        if not math.isfinite(number):
            raise self.stop(path, "not-finite", show(value), f"a finite {kind}", f"write for instance {example(kind)}")
        return number

    def _bare(self, path: Path_, value: float, kind: str) -> float:
        if kind == "share":
            if not abs(value) < 1:
                percent = f'"{value:g} %"' if math.isfinite(value) else '"5 %"'
                raise self.stop(
                    path, "share-not-below-1", show(value), "a share below 1", f"write {percent} if percent is meant"
                )
            return float(value)
        if KINDS[kind] == NONE or value == 0:
            return float(value)
        if self.declared is None:
            expected = f"a {kind} with a unit"
            raise self.stop(
                path, "unit-missing", show(value), expected, f'write {example(kind)}, or declare units = "N mm"'
            )
        return float(value) * self.declared.factor(KINDS[kind])

    def number(self, path: Path_, value: Any) -> float:
        """A bare finite number."""
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            raise self.stop(
                path, "not-a-number", show(value), "a bare number", "write it without quotes and without a unit"
            )
        if not math.isfinite(value):
            raise self.stop(path, "not-finite", show(value), "a finite number", "write a number")
        return float(value)

    def friction(self, path: Path_, value: Any) -> float:
        """A friction coefficient: bare, above 0, at most 1.5."""
        number = self.number(path, value)
        if not 0 < number <= 1.5:
            remedy = (
                f"write {number / 100:g} if {number:g} % is meant" if 1.5 < number <= 100 else "write for instance 0.15"
            )
            raise self.stop(
                path, "friction-range", show(value), "a friction coefficient above 0 and at most 1.5", remedy
            )
        return number

    def text(self, path: Path_, value: Any) -> str:
        """A text."""
        if not isinstance(value, str):
            raise self.stop(path, "not-a-text", show(value), "a text", "put it in quotes")
        return value

    def scalar(self, path: Path_, value: Any, kind: str) -> float:
        """A number of a plain kind or of a kind of quantity."""
        if kind == "friction":
            return self.friction(path, value)
        if kind == "number":
            return self.number(path, value)
        return self.quantity(path, value, kind)

    def limited(self, path: Path_, value: Any, key: Key) -> float:
        """A number within the key's limits."""
        number = self.scalar(path, value, key.kind)
        if number < key.least or number > key.most or (key.above and number == key.least):
            expected = self._limits(key)
            raise self.stop(path, "out-of-limits", show(value), expected, "correct the value")
        return number

    def _limits(self, key: Key) -> str:
        def say(limit: float) -> str:
            return f"{limit:g}" if key.kind not in KINDS or limit == 0 else self.system.say(limit, key.kind)

        least, most = math.isfinite(key.least), math.isfinite(key.most)
        low = ("above " if key.above else "at least ") + say(key.least) if least else ""
        high = "at most " + say(key.most) if most else ""
        return f"a {key.kind} {' and '.join(part for part in (low, high) if part)}"

    def several(self, path: Path_, value: Any, key: Key, counts: tuple[int, ...]) -> tuple[float, ...]:
        """A list of numbers whose length is one of `counts`."""
        if not isinstance(value, list) or len(value) not in counts:
            wanted = " or ".join(str(c) for c in counts)
            raise self.stop(
                path,
                "wrong-count",
                show(value),
                f"a list of {wanted} values",
                f"write [{', '.join('.' * counts[0])}] with {wanted} values",
            )
        return tuple(self.limited(path, item, key) for item in value)

    def range(self, path: Path_, value: Any, key: Key) -> tuple[float, float]:
        """A [low, high] range."""
        low, high = self.several(path, value, key, (2,))
        if low > high:
            raise self.stop(
                path,
                "range-upside-down",
                show(value),
                "[lowest, highest]",
                f"write [{show(value[1])}, {show(value[0])}]",
            )
        return low, high

    def table(self, path: Path_, value: Any, known: Iterable[str], what: str) -> dict[str, Any]:
        """An inline table with no key but the known ones."""
        known = list(known)
        if not isinstance(value, dict):
            raise self.stop(path, "not-a-table", show(value), what, f"write {{ {', '.join(f'{k} =' for k in known)} }}")
        wrong = [key for key in value if key not in known]
        for key in wrong:
            close = nearest(key, known)
            remedy = f"did you mean {close}?" if close else f"known here: {', '.join(known)}"
            self.fail((*path, key), "unknown-key", key, what, remedy)
        if wrong:
            raise Stop
        return value
