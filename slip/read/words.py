"""Readers of words and counts: choices, flags, names, whole numbers."""

from __future__ import annotations

from math import isinf
from typing import Any

from slip.read.lines import Path_
from slip.read.reader import Reader, nearest, show
from slip.read.schema import Key


def choice(r: Reader, path: Path_, value: Any, key: Key) -> str:
    """One of the words of a key."""
    if not isinstance(value, str) or value not in key.choices:
        allowed = ", ".join(f'"{word}"' for word in key.choices)
        close = nearest(value if isinstance(value, str) else show(value), key.choices)
        remedy = f'did you mean "{close}"?' if close else "choose one of them"
        raise r.stop(path, "unknown-choice", show(value), f"one of {allowed}", remedy)
    return value


def flag(r: Reader, path: Path_, value: Any) -> bool:
    """true or false."""
    if not isinstance(value, bool):
        remedy = "write true or false in small letters, without quotes"
        raise r.stop(path, "not-a-flag", show(value), "true or false", remedy)
    return value


def whole(r: Reader, path: Path_, value: Any, key: Key) -> int:
    """A whole number within the key's limits."""
    if isinstance(value, bool) or not isinstance(value, int) or not key.least <= value <= key.most:
        limits = f"of {key.least:g} or more" if isinf(key.most) else f"from {key.least:g} to {key.most:g}"
        only = key.least == key.most
        expected, write = ("", "") if only else ("a whole number " + limits, "for instance ")
        raise r.stop(
            path, "not-a-whole-number", show(value), expected or f"{key.least:g}", f"write {write}{key.least:g}"
        )
    return value


def names(r: Reader, path: Path_, value: Any) -> tuple[str, ...]:
    """Bolt names."""
    if not isinstance(value, list) or not all(isinstance(item, str) and item.strip() for item in value):
        raise r.stop(path, "not-a-text", show(value), "a list of names in quotes", 'write ["A1", "A2"]')
    return tuple(value)
