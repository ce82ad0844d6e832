"""The bolt list of [pattern] file: CSV with name, x[mm], y[mm] and optional preload_low[N], preload_high[N]."""

from __future__ import annotations

import csv
import hashlib
import io
import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.units import KINDS, UnitError, parse_unit
from slip.joint.pattern import Pattern
from slip.read.document import decode, read_bytes
from slip.read.reader import Reader, nearest, show
from slip.read.sections import Section

CLOSEST = 1e-6  # mm; bolts nearer than this are the same bolt
COLUMNS = {"name": "", "x": "length", "y": "length", "preload_low": "force", "preload_high": "force"}
HEADER = re.compile(r"\s*(\w+)\s*(?:[\[(]\s*([^\])]*)\s*[\])])?\s*$")


@dataclass(frozen=True, eq=False)
class BoltList:
    """A pattern, and per bolt the lowest and highest preload [N], shape (n,), where a list gives them; digest of the list."""

    pattern: Pattern
    preload_low: np.ndarray | None
    preload_high: np.ndarray | None
    digest: str


def read_bolt_list(r: Reader, section: Section) -> BoltList:
    """The bolts of the CSV file that `file` names, relative to the joint file. Every bad row is reported with its line."""
    path = Path(r.document.folder, section.get("file"))
    file = str(path)
    data = read_bytes(path)
    text = decode(data, file)
    first = text.splitlines()[0]
    semicolon = first.count(";") > first.count(",")
    rows = list(csv.reader(io.StringIO(text), delimiter=";" if semicolon else ","))
    columns = _header(file, rows[0])
    errors: list[InputError] = []
    names: list[str] = []
    numbers: list[list[float]] = []
    for line, row in enumerate(rows[1:], start=2):
        if any(cell.strip() for cell in row):
            _row(file, line, row, columns, semicolon, names, numbers, errors)
    if not errors and not names:
        errors.append(InputError("bolt-list-empty", "", "no rows", "one row for each bolt", "add the bolts", file, 1))
    if errors:
        raise Problems(errors)
    values = np.array(numbers)
    order = [name for name in columns if name != "name"]
    check_bolts(section, "file", tuple(names), values[:, :2])
    low = values[:, order.index("preload_low")] if "preload_low" in order else None
    high = values[:, order.index("preload_high")] if "preload_high" in order else None
    if low is not None and high is not None and (low > high).any():
        name = names[int(np.argmax(low > high))]
        raise section.stop(
            "file", "range-upside-down", f"preload_low above preload_high for {name}", "lowest, highest", "swap them"
        )
    digest = hashlib.sha256(data).hexdigest()
    return BoltList(Pattern(tuple(names), values[:, [order.index("x"), order.index("y")]]), low, high, digest)


def check_bolts(section: Section, key: str, names: tuple[str, ...], points: Any) -> None:
    """Names must fit the positions and be different; no two bolts may stand on one point."""
    if len(names) != len(points):
        raise section.stop(
            "names", "wrong-count", f"{len(names)} names", f"{len(points)} names, one for each bolt", "name each bolt"
        )
    doubles = sorted({name for name in names if names.count(name) > 1})
    if doubles:
        raise section.stop("names", "bolt-twice", ", ".join(doubles), "different bolt names", "rename one")
    places: dict[tuple[int, int], str] = {}
    for name, (x, y) in zip(names, points, strict=True):
        other = places.setdefault((round(x / CLOSEST), round(y / CLOSEST)), name)
        if other != name:
            found = f"{other} and {name} at the same point"
            raise section.stop(key, "bolts-coincide", found, "one bolt at each point", "remove or move one")


def _header(file: str, cells: list[str]) -> dict[str, tuple[int, float]]:
    """Column name to its position and the factor of its unit; x, y first."""
    found: dict[str, tuple[int, float]] = {}
    for position, cell in enumerate(cells):
        match = HEADER.match(cell)
        name, unit = (match.group(1), match.group(2)) if match else (cell, None)
        if name not in COLUMNS:
            close = nearest(name, COLUMNS)
            remedy = f"did you mean {close}?" if close else "remove the column"
            raise Problems(
                [
                    InputError(
                        "unknown-column",
                        "",
                        show(cell),
                        "name, x[mm], y[mm], preload_low[N], preload_high[N]",
                        remedy,
                        file,
                        1,
                    )
                ]
            )
        factor = 1.0
        if kind := COLUMNS[name]:
            try:
                factor, dimension = parse_unit(unit or "")
                if dimension != KINDS[kind]:
                    raise UnitError(
                        f"a {kind} unit in the header", f"write {name}[{'mm' if kind == 'length' else 'N'}]"
                    )
            except UnitError as error:
                raise Problems(
                    [InputError("unit-wrong", "", show(cell), error.expected, error.remedy, file, 1)]
                ) from None
        found[name] = (position, factor)
    missing = [name for name in ("name", "x", "y") if name not in found]
    if ("preload_low" in found) != ("preload_high" in found):
        missing.append("preload_high" if "preload_low" in found else "preload_low")
    if missing:
        raise Problems(
            [InputError("missing-column", "", ", ".join(cells), ", ".join(missing), "add the column", file, 1)]
        )
    return found


def _row(
    file: str,
    line: int,
    row: list[str],
    columns: dict[str, tuple[int, float]],
    semicolon: bool,
    names: list[str],
    numbers: list[list[float]],
    errors: list[InputError],
) -> None:
    values = []
    if len(row) <= max(position for position, _ in columns.values()):
        errors.append(
            InputError("wrong-count", "", f"{len(row)} cells", f"{len(columns)} cells", "complete the row", file, line)
        )
        return
    for name, (position, factor) in columns.items():
        cell = row[position].strip()
        if name == "name":
            names.append(cell)
            continue
        try:
            value = float(cell.replace(",", ".") if semicolon else cell) * factor
            if not np.isfinite(value):
                raise ValueError
        except ValueError:
            errors.append(
                InputError("not-a-number", name, show(cell), "a finite number", "correct the cell", file, line)
            )
            continue
        values.append(value)
    numbers.append(values)
