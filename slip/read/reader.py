"""What all reading shares: the place of a value, one sentence for each fault, all faults together, and what was assumed."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterable
from functools import partial
from typing import Any, TypeVar

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.units import KINDS, NONE, SI, SYSTEMS, System, UnitError, a, example, parse
from slip.read.document import Document, cut
from slip.read.lines import Path_
from slip.read.schema import Key

T = TypeVar("T")
Place = tuple[str, int, str]  # file, line, key
BARE = re.compile(r"[A-Za-z0-9_-]+")
LARGEST = 1e30  # inside units; what lies beyond is mistyped, and products of such numbers would overflow


class Stop(Exception):
    """A value that something needs is missing or wrong; the fault is already recorded."""


def nearest(word: str, known: Iterable[str]) -> str:
    """The known word closest to `word`, or ''."""
    import difflib  # only a wrong file pays for it

    folded = {k.casefold(): k for k in known}
    close = difflib.get_close_matches(word[:100].casefold(), folded, n=1, cutoff=0.5)
    return folded[close[0]] if close else ""


def show_path(path: Path_) -> str:
    """A key path as shown to a person: entries of an array count from 1, a key that is no plain word stands in quotes."""
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part + 1}]"
        else:
            text += ("." if text else "") + (part if BARE.fullmatch(part) else show(part))
    return text


def show(value: Any) -> str:
    """A found value as it would be typed, short enough for a sentence."""
    return cut(_typed(value, 3))


def _typed(value: Any, depth: int) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return '"' + "".join(c if c.isprintable() else "?" for c in value[:100]) + '"'
    if isinstance(value, int) and value.bit_length() > 100:
        return "a whole number of very many digits"
    if isinstance(value, (list, tuple, dict)) and value and not depth:
        return "[..]" if not isinstance(value, dict) else "{ .. }"
    if isinstance(value, (list, tuple)):
        return f"[{', '.join(_typed(item, depth - 1) for item in value[:20])}]"
    if isinstance(value, dict):
        inside = ", ".join(f"{show_path((key,))} = {_typed(item, depth - 1)}" for key, item in list(value.items())[:8])
        return f"{{ {inside} }}" if inside else "{ }"
    return str(value)


def is_number(value: Any) -> bool:
    """Whether a value of the file is a bare number."""
    return isinstance(value, (int, float)) and not isinstance(value, bool)


class Reader:
    """Collects faults, assumptions and warnings of one document, and turns typed values into numbers of the inside units."""

    def __init__(self, document: Document) -> None:
        self.document = document
        self.errors: list[InputError] = []
        self.assumptions: list[Note] = []
        self.warnings: list[Note] = []
        self.meant: set[Path_] = set()  # known keys that an unknown one was probably meant for
        declared = document.tree.get("units")
        # A declaration that is wrong is a fault of its own; it must not make one of every bare number.
        known = SYSTEMS.get(declared, SI) if isinstance(declared, str) else SI
        self.declared = None if declared is None else known

    @property
    def system(self) -> System:
        """The system in which results are shown: the declared one, else N mm."""
        return self.declared or SI

    # faults and notes
    def fail(self, path: Path_, code: str, found: str, expected: str, remedy: str) -> None:
        """Record one fault."""
        self.fail_at(self.place(path), code, found, expected, remedy)

    def fail_at(self, place: Place, code: str, found: str, expected: str, remedy: str) -> None:
        """Record one fault of any file."""
        file, line, key = place
        self.errors.append(InputError(code, key, found, expected, remedy, file, line))

    def place(self, path: Path_) -> Place:
        """Where a key of the document stands."""
        return self.document.file, self.document.line(path), show_path(path)

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
        """Result of `build`, or None when it stopped at a fault; faults of another file are taken over."""
        try:
            return build()
        except Stop:
            return None
        except Problems as problems:
            self.errors += problems.errors
            return None

    def every(self, builds: Iterable[Callable[[], T]]) -> list[T]:
        """Results of all builds; each is tried, so that all their faults come together, before one that stopped stops this."""
        count = len(self.errors)
        results = [self.attempt(build) for build in builds]
        if len(self.errors) > count or any(result is None for result in results):
            raise Stop
        return [result for result in results if result is not None]

    def finish(self) -> None:
        """Raise all recorded faults together, those of the joint file before those of files that it names."""
        if self.errors:
            raise Problems(sorted(self.errors, key=lambda error: error.file != self.document.file))

    # numbers
    def quantity(self, path: Path_, value: Any, kind: str) -> float:
        """A typed value of a kind of quantity in inside units."""
        if isinstance(value, str):
            try:
                number = parse(value, kind)
            except UnitError as error:
                raise self.stop(path, error.code, show(value), error.expected, error.remedy) from None
            bare_share = kind == "share" and "%" not in value
        elif is_number(value):
            number = self._bare(path, value, kind)
            bare_share = kind == "share"
        else:
            raise self.stop(path, "not-a-quantity", show(value), a(kind), f"write for instance {example(kind)}")
        self._finite(path, value, number, kind)
        if bare_share and abs(number) >= 1:
            remedy = f'write "{number:g} %" if percent is meant'
            raise self.stop(path, "share-not-below-1", show(value), "a share below 1", remedy)
        return number

    def _bare(self, path: Path_, value: float, kind: str) -> float:
        if KINDS[kind] == NONE or value == 0:
            return _float(value)
        if self.declared is None:
            remedy = f'write {example(kind)}, or declare units = "N mm" at the top'
            raise self.stop(path, "unit-missing", show(value), f"{a(kind)} with a unit", remedy)
        return _float(value) * self.declared.factor(KINDS[kind])

    def _finite(self, path: Path_, value: Any, number: float, kind: str) -> None:
        if not abs(number) <= LARGEST:
            remedy = f"write for instance {example(kind)}"
            raise self.stop(path, "not-finite", show(value), f"{a(kind)} of finite, sensible size", remedy)

    def number(self, path: Path_, value: Any, kind: str = "number") -> float:
        """A bare finite number."""
        if not is_number(value):
            remedy = "write it without quotes and without a unit"
            raise self.stop(path, "not-a-number", show(value), "a bare number", remedy)
        number = _float(value)
        self._finite(path, value, number, kind)
        return number

    def friction(self, path: Path_, value: Any) -> float:
        """A friction coefficient: bare, above 0, at most 1.5."""
        expected = "a friction coefficient above 0 and at most 1.5"
        if isinstance(value, str) and value.strip().endswith("%"):
            share = self.attempt(lambda: self.quantity(path, value, "share"))
            if share is None:
                raise Stop
            raise self.stop(path, "friction-range", show(value), expected, f"write {share:g}")
        number = self.number(path, value, "friction")
        if not 0 < number <= 1.5:
            percent = 1.5 < number <= 100
            remedy = f"write {number / 100:g} if {number:g} % is meant" if percent else "write for instance 0.15"
            raise self.stop(path, "friction-range", show(value), expected, remedy)
        return number

    def text(self, path: Path_, value: Any) -> str:
        """A text."""
        if not isinstance(value, str):
            simple = is_number(value) and abs(value) <= LARGEST
            remedy = f'write "{show(value)}"' if simple else 'write it in quotes, as in "text"'
            raise self.stop(path, "not-a-text", show(value), "a text in quotes", remedy)
        return value

    def limited(self, path: Path_, value: Any, key: Key) -> float:
        """A number of the key's kind and within its limits."""
        if key.kind == "friction":
            return self.friction(path, value)
        number = self.number(path, value) if key.kind == "number" else self.quantity(path, value, key.kind)
        if number < key.least or number > key.most or (key.above and number == key.least):
            raise self.stop(path, "out-of-limits", show(value), self._limits(key), f"write for instance {_sample(key)}")
        return number

    def _limits(self, key: Key) -> str:
        """The kind of a key's number with its limits, in the file's units."""

        def say(limit: float) -> str:
            return f"{limit:g}" if KINDS[key.kind] == NONE or limit == 0 else self.system.say(limit, key.kind)

        if math.isinf(key.most):
            return (
                f"{a(key.kind)} above {say(key.least)}" if key.above else f"{a(key.kind)} of {say(key.least)} or more"
            )
        low = f"above {say(key.least)} and at most" if key.above else f"from {say(key.least)} to"
        return f"{a(key.kind)} {low} {say(key.most)}"

    def several(self, path: Path_, value: Any, key: Key, form: str, counts: tuple[int, ...]) -> tuple[float, ...]:
        """A list of numbers whose length is one of `counts`; `form` shows it in words."""
        if not isinstance(value, list) or len(value) not in counts:
            remedy = f"write {form}, each {a(key.kind)} such as {example(key.kind)}"
            raise self.stop(path, "wrong-count", show(value), f"the list {form}", remedy)
        return tuple(self.every(partial(self.limited, (*path, i), item, key) for i, item in enumerate(value)))

    def range(self, path: Path_, value: Any, key: Key) -> tuple[float, float]:
        """A [lowest, highest] range."""
        low, high = self.several(path, value, key, "[lowest, highest]", (2,))
        if low > high:
            swapped = f"write [{show(value[1])}, {show(value[0])}]"
            raise self.stop(path, "range-upside-down", show(value), "[lowest, highest]", swapped)
        return low, high

    def table(
        self, path: Path_, value: Any, known: Iterable[str], what: str, needed: Iterable[str] = ()
    ) -> dict[str, Any]:
        """An inline table with no key but the known ones, and with all the needed ones."""
        known = list(known)
        if not isinstance(value, dict):
            form = ", ".join(f"{key} = .." for key in known)
            raise self.stop(path, "not-a-table", show(value), what, f"write {{ {form} }}")
        wrong = [key for key in value if key not in known]
        for key in wrong:
            close = nearest(key, [k for k in known if k not in value])
            remedy = f"did you mean {close}?" if close else "take it out"
            self.fail((*path, key), "unknown-key", show(key), f"one of {', '.join(known)}", remedy)
        missing = [key for key in needed if key not in value]
        if missing and not wrong:
            names = " and ".join(missing)
            write = " and ".join(f"{key} = .." for key in missing)
            self.fail(path, "missing-key", show(value), f"{names} as well", f"add {write}")
        if wrong or missing:
            raise Stop
        return value


def _float(value: float) -> float:
    """A number of the file as float; a whole number beyond all floats is infinite."""
    try:
        return float(value)
    except OverflowError:
        return math.inf


def _sample(key: Key) -> str:
    """A value of the key as one would type it."""
    from slip.read.template import sample  # only a wrong file pays for it

    return sample(key)
