"""Words and numbers as every report says them."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

CAUTION = (
    "an aid to a qualified engineer. Back friction and preload by test or record; "
    "local codes, tests and licensed practice decide."
)
NOT_ASSESSED = "contact stiffness of a model (slip penalty does), cycling"
NOT_OF_PRESSED = "contact stiffness of a model, cycling"  # of a pressed contact, which slip penalty does not take
CHECKS = {
    "gross_slip.per_bolt": "per bolt",
    "gross_slip.group": "group",
    "gross_slip.force_only": "force only",
    "separation": "separation",
    "true_slip": "true slip",
    "loosening": "loosening",
}


def check_name(check: str) -> str:
    """A check's name as a person reads it."""
    return CHECKS.get(check, check.removeprefix("standard."))


def plain(text: str, width: int = 60) -> str:
    """Text on one line without control or direction characters, cut to a width in columns."""
    if not text.isprintable():
        text = "".join(c if c.isprintable() else " " for c in text)
    return cut(" ".join(text.split()), width)


def cut(line: str, width: int) -> str:
    """A line of at most `width` columns; what had to go is marked by dots."""
    if columns(line) <= width:
        return line
    kept = ""
    for c in line:
        if columns(kept + c) > width - 3:
            break
        kept += c
    return kept + "..."


def columns(text: str) -> int:
    """Columns that a text takes at a terminal: wide characters take two, combining ones none."""
    if text.isascii():
        return len(text)
    from unicodedata import combining, east_asian_width  # only such a text pays for it

    return sum(0 if combining(c) else 2 if east_asian_width(c) in "WF" else 1 for c in text)


def wrapped(text: str, width: int, first: str = "", later: str = "  ") -> list[str]:
    """Lines of at most `width` columns, broken at spaces; a word that is longer than a line is cut."""
    lines, line, used = list[str](), first, columns(first)
    empty = True
    for word in text.split():
        more = columns(word)
        if not empty and used + 1 + more > width:
            lines.append(line)
            line, used, empty = later, columns(later), True
        if used + more + (not empty) > width:
            word = cut(word, width - used)
            more = columns(word)
        line, used = (line + word, used + more) if empty else (f"{line} {word}", used + 1 + more)
        empty = False
    return lines if empty else [*lines, line]


def once(texts: Iterable[str]) -> list[str]:
    """Each text once, in the order of its first use."""
    return list(dict.fromkeys(texts))


def at_most(lines: Sequence[str], most: int, width: int) -> Sequence[str]:
    """The lines, or the first of them with dots at the end of the last."""
    if len(lines) <= most:
        return lines
    return [*lines[: most - 1], cut(f"{lines[most - 1]} ....", width).rstrip(".").rstrip() + " ..."]


def factor(value: float | None, limit: float | None = None) -> str:
    """A factor with three decimals, or as many as show on which side of its limit it is; '-' for none."""
    if value is None or math.isinf(value):
        return "-"
    for digits in range(3, 16):
        shown = f"{value:.{digits}f}"
        if limit is None or value == limit or float(shown) != float(f"{limit:.{digits}f}"):
            return shown
    return repr(value)
