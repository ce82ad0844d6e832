"""The bolt list of [pattern] file: CSV with name, x[mm], y[mm] and optional preload_low[N], preload_high[N]."""

from __future__ import annotations

import csv
import hashlib
import io
import re
from functools import partial
from pathlib import Path

import numpy as np

from slip.base.errors import Problems
from slip.base.records import record
from slip.base.units import KINDS, UnitError, parse_unit
from slip.joint.pattern import Pattern
from slip.read.document import cut, decode, read_bytes
from slip.read.reader import LARGEST, Place, Reader, Stop, nearest, show
from slip.read.sections import Section

COLUMNS = {"name": "", "x": "length", "y": "length", "preload_low": "force", "preload_high": "force"}
WRITTEN = {
    "name": "name",
    "x": "x[mm]",
    "y": "y[mm]",
    "preload_low": "preload_low[N]",
    "preload_high": "preload_high[N]",
}
HEADER = re.compile(r"\s*(\w+)\s*(?:[\[(]\s*([^\])]*)\s*[\])])?\s*$")


@record(eq=False)
class BoltList:
    """A pattern, and per bolt the lowest and highest preload [N], shape (n,), where a list gives them.

    places: where each bolt stands; digest of the list, '' where the joint file has the bolts.
    """

    pattern: Pattern
    preload_low: np.ndarray | None
    preload_high: np.ndarray | None
    places: tuple[Place, ...]
    digest: str


def read_bolt_list(r: Reader, s: Section) -> BoltList:
    """The bolts of the CSV file that `file` names, relative to the joint file. Every bad row is reported with its line."""
    path = Path(r.document.folder, s.get("file"))
    data = _bytes(s, path)
    sheet = _Sheet(r, str(path), decode(data, str(path)))
    columns = sheet.columns()
    rows = r.every(partial(sheet.row, line, cells, columns) for line, cells in sheet.rows)
    names = tuple(str(row["name"]) for row in rows)
    numbers = {column: np.array([row[column] for row in rows], dtype=float) for column in columns if column != "name"}
    r.assume("bolt-list-form", f"{path.name} is read with {sheet.form(columns)}", "pattern.file")
    return BoltList(
        Pattern(names, np.stack([numbers["x"], numbers["y"]], axis=1)),
        numbers.get("preload_low"),
        numbers.get("preload_high"),
        tuple((str(path), line, "") for line, _ in sheet.rows),
        hashlib.sha256(data).hexdigest(),
    )


def _bytes(s: Section, path: Path) -> bytes:
    """Contents of the list; a file that cannot be read is a fault of the key that names it."""
    try:
        return read_bytes(path)
    except Problems as problems:
        error = problems.errors[0]
        remedy = "check the path, which counts from the folder of the joint file"
        raise s.stop("file", error.code, f"{path}: {error.found}", "a bolt list (CSV)", remedy) from None


class _Sheet:
    """The cells of a bolt list: header and rows with their lines; empty rows are left out."""

    def __init__(self, r: Reader, file: str, text: str) -> None:
        self.r, self.file = r, file
        first = text.lstrip().split("\n")[0]
        self.separator = ";" if first.count(";") > first.count(",") else ","
        reader = csv.reader(io.StringIO(text, newline=""), delimiter=self.separator)
        try:
            filled = [(reader.line_num, cells) for cells in reader if any(cell.strip() for cell in cells)]
        except csv.Error as error:
            remedy = "write one row for each bolt, without stray quotation marks"
            raise self.stop_line(
                reader.line_num, "", "bolt-list-broken", str(error), "rows of a CSV file", remedy
            ) from None
        if len(filled) < 2:
            expected = "a header and one row for each bolt"
            raise self.stop_line(1, "", "bolt-list-empty", f"{len(filled)} rows", expected, "add the bolts")
        (self.line, header), self.rows = filled[0], filled[1:]
        self.header = header[: max(i for i, cell in enumerate(header, start=1) if cell.strip())]

    def stop_line(self, line: int, key: str, code: str, found: str, expected: str, remedy: str) -> Stop:
        """Record a fault of the list with its own file and line."""
        self.r.fail_at((self.file, line, key), code, found, expected, remedy)
        return Stop()

    def columns(self) -> dict[str, tuple[int, float]]:
        """Position of each known column and the factor of its unit; the faults of the header."""
        heads = self.r.every(partial(self._head, cell) for cell in self.header)
        names = [name for name, _ in heads]
        preloads = any(name.startswith("preload") for name in names)
        wanted = list(COLUMNS) if preloads else ["name", "x", "y"]
        for name in names:
            if names.count(name) > 1:
                raise self.stop_line(
                    self.line, name, "column-twice", f"two columns {name}", "one", "remove one of them"
                )
        if missing := [WRITTEN[name] for name in wanted if name not in names]:
            found, expected = cut(self.separator.join(self.header)), f"also {', '.join(missing)}"
            raise self.stop_line(self.line, "", "missing-column", found, expected, "add the column, with its unit")
        return {name: (position, factor) for position, (name, factor) in enumerate(heads)}

    def _head(self, cell: str) -> tuple[str, float]:
        """Name of a column and the factor of its unit."""
        match = HEADER.match(cell)
        name, unit = (match.group(1), match.group(2) or "") if match else (cell.strip(), "")
        if name not in COLUMNS:
            close = nearest(name, COLUMNS)
            remedy = f"did you mean {WRITTEN[close]}?" if close else "remove the column"
            raise self.stop_line(self.line, "", "unknown-column", show(cell), ", ".join(WRITTEN.values()), remedy)
        if not (kind := COLUMNS[name]):
            return name, 1.0
        try:
            factor, dimension = parse_unit(unit)
        except UnitError as error:
            raise self.stop_line(self.line, name, error.code, show(cell), error.expected, error.remedy) from None
        if dimension != KINDS[kind]:
            code = "unit-wrong" if unit else "unit-missing"
            expected, remedy = f"the unit of a {kind} in the header", f"write for instance {WRITTEN[name]}"
            raise self.stop_line(self.line, name, code, show(cell), expected, remedy)
        return name, factor

    def row(self, line: int, cells: list[str], columns: dict[str, tuple[int, float]]) -> dict[str, str | float]:
        """Name and numbers of one bolt."""
        if len(cells) < len(columns) or any(cell.strip() for cell in cells[len(columns) :]):
            remedy = 'complete the row; decimal commas need ";" between the cells'
            expected = f"{len(columns)} cells, as in the header"
            raise self.stop_line(line, "", "wrong-count", f"{len(cells)} cells", expected, remedy)
        found: dict[str, str | float] = {"name": cells[columns["name"][0]].strip()}
        if not found["name"]:
            raise self.stop_line(line, "name", "bolt-without-name", "an empty cell", "a name", "name the bolt")
        numeric = {name: at for name, at in columns.items() if name != "name"}
        values = self.r.every(partial(self._cell, line, name, cells[at], unit) for name, (at, unit) in numeric.items())
        found |= dict(zip(numeric, values, strict=True))
        if found.get("preload_low", 0.0) > found.get("preload_high", 0.0):  # type: ignore[operator]
            low, high = (cells[columns[name][0]].strip() for name in ("preload_low", "preload_high"))
            expected, remedy = "preload_low not above preload_high", "swap them"
            raise self.stop_line(line, "preload_low", "range-upside-down", f"{low} above {high}", expected, remedy)
        return found

    def _cell(self, line: int, name: str, cell: str, factor: float) -> float:
        """A number of a row in inside units."""
        try:
            value = float(cell.replace(",", ".") if self.separator == ";" else cell) * factor
        except ValueError:
            value = float("nan")
        if not abs(value) <= LARGEST:
            remedy = "write the number alone; the unit stands in the header"
            raise self.stop_line(line, name, "not-a-number", show(cell.strip()), "a finite number", remedy)
        if COLUMNS[name] == "force" and value <= 0:
            expected, remedy = "a preload above 0", "correct the cell"
            raise self.stop_line(line, name, "out-of-limits", show(cell.strip()), expected, remedy)
        return value

    def form(self, columns: dict[str, tuple[int, float]]) -> str:
        """How the cells are separated and the decimals written."""
        positions = [position for name, (position, _) in columns.items() if name != "name"]
        comma = self.separator == ";" and any("," in cells[at] for _, cells in self.rows for at in positions)
        return f'"{self.separator}" between the cells and a decimal {"comma" if comma else "point"}'
