"""Readers of values that say where things lie: outlines of plates, positions of bolts."""

from __future__ import annotations

from functools import partial
from math import cos, pi, sin
from typing import Any

from slip.joint.plates import Rectangle, Ring
from slip.read.lines import Path_
from slip.read.reader import Reader, show
from slip.read.schema import Key, not_negative, positive
from slip.read.words import whole

MOST_BOLTS = 1000
LENGTH = Key("", "", "length", "")


def outline(r: Reader, path: Path_, value: Any) -> Rectangle | Ring:
    """Corners of a rectangle, or the diameters of a ring."""
    if isinstance(value, dict):
        return _ring(r, path, value)
    x0, y0, x1, y1 = r.several(path, value, LENGTH, "[x0, y0, x1, y1]", (4,))
    if x0 >= x1 or y0 >= y1:
        expected = "[x0, y0, x1, y1] with x0 below x1 and y0 below y1"
        raise r.stop(path, "outline-empty", show(value), expected, "write the lower left corner first")
    return Rectangle(x0, y0, x1, y1)


def _ring(r: Reader, path: Path_, value: Any) -> Ring:
    typed = r.table(path, value, ("outer_diameter", "inner_diameter"), "an outline", ("outer_diameter",))
    outer = r.limited((*path, "outer_diameter"), typed["outer_diameter"], positive("length"))
    inner = r.limited((*path, "inner_diameter"), typed.get("inner_diameter", 0), not_negative("length"))
    if inner >= outer:
        raise r.stop(path, "outline-empty", show(value), "inner_diameter below outer_diameter", "correct the diameters")
    return Ring(outer, inner)


def positions(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Bolt positions [[x, y], ..]."""
    if not isinstance(value, list) or not value:
        raise r.stop(path, "wrong-count", show(value), "a list of positions", "write [[x, y], [x, y]]")
    points = r.every(partial(r.several, (*path, i), item, LENGTH, "[x, y]", (2,)) for i, item in enumerate(value))
    return tuple((x, y) for x, y in points)


def _count(r: Reader, path: Path_, value: Any) -> int:
    return whole(r, path, value, Key("", "", "whole", "", least=1, most=MOST_BOLTS))


def grid(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Rows and columns round the origin, row by row from the lowest y."""
    keys = ("columns", "rows", "pitch")
    typed = r.table(path, value, keys, "a grid", keys)
    columns, rows = r.every(partial(_count, r, (*path, name), typed[name]) for name in ("columns", "rows"))
    across, up = r.several((*path, "pitch"), typed["pitch"], positive("length"), "[across, up]", (2,))
    if columns * rows > MOST_BOLTS:
        expected = f"at most {MOST_BOLTS} bolts"
        raise r.stop(path, "too-many-bolts", f"{columns} x {rows} bolts", expected, "correct columns and rows")
    return tuple(
        (across * (column - (columns - 1) / 2), up * (row - (rows - 1) / 2))
        for row in range(rows)
        for column in range(columns)
    )


def circle(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Bolts on a circle round the origin, the first on the x axis, then anticlockwise."""
    typed = r.table(path, value, ("count", "diameter"), "a bolt circle", ("count", "diameter"))
    count = _count(r, (*path, "count"), typed["count"])
    diameter = r.limited((*path, "diameter"), typed["diameter"], positive("length"))
    angles = (2 * pi * i / count for i in range(count))
    return tuple((diameter / 2 * cos(angle), diameter / 2 * sin(angle)) for angle in angles)
