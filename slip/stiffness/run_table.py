"""The contact of a model as a table: a row for each point and load step, in inside units; what cannot be used is set aside and said."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence
from pathlib import Path

import numpy as np
import polars as pl

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.base.units import KINDS, Dimension, System, UnitError, parse_unit
from slip.cases.form import COMMA, POINT, SAMPLE, THOUSANDS, Form
from slip.cases.header import HEADER
from slip.cases.parse import LINE, Broken, parse
from slip.read.document import cut, refuse
from slip.read.reader import nearest, show
from slip.stiffness.run_rows import IDENTITY, OPTIONAL, Filled, filled

Array = np.ndarray
# Columns: kind of quantity, '' for text, and the unit that messages show.
COLUMNS: dict[str, tuple[str, str]] = {
    "id": ("", ""),
    "step": ("", ""),
    "x": ("length", "mm"),
    "y": ("length", "mm"),
    "z": ("length", "mm"),
    "area": ("area", "mm^2"),
    "p": ("pressure", "MPa"),
    "tx": ("pressure", "MPa"),
    "ty": ("pressure", "MPa"),
    "gx": ("length", "um"),
    "gy": ("length", "um"),
}
DIMENSIONS: dict[str, Dimension] = KINDS | {"area": (0, 2, 0, 0)}
NEEDED = tuple(name for name in COLUMNS if name not in OPTIONAL)
HEADLINE = ", ".join(f"{name}[{unit}]" if unit else name for name, (_, unit) in COLUMNS.items() if name in NEEDED)
PARQUET = b"PAR1"
WIDEST = 100_000  # bytes of the header, and of the rows in which the decimal sign is looked for
SHOWN = 3  # refused rows that a message tells of


@record(eq=False)
class RunTable:
    """n points at S load steps. x, y, z (n,) [mm], z None where the table has none; area [mm^2] and p [MPa] (S, n); traction t [MPa]
    and motion g [mm] (2, S, n), as the table has them.

    steps: in order, ("",) for a table without that column; numbers go by size, other names as they come. count: rows of the table;
    refused: line, id, step, reason and text of those that are not used, by line. separator, comma: of a CSV. said: its form in a line.
    """

    file: str
    said: str
    separator: str
    comma: bool
    ids: tuple[str, ...]
    steps: tuple[str, ...]
    x: Array
    y: Array
    z: Array | None
    area: Array
    p: Array
    t: Array
    g: Array
    count: int
    refused: pl.DataFrame

    @property
    def force(self) -> Array:
        """Contact force of each step (S,) [N]."""
        total: Array = (self.p * self.area).sum(axis=-1)
        return total


def read_run(path: str | Path, *, units: System | None = None, decimal: str = "") -> RunTable:
    """Read the table of a run, CSV or Parquet.

    units: of columns whose header has none; None refuses them. decimal: "." or ",", '' where it is to be detected. Raises Problems for
    a file that is no such table, and for one of whose rows none can be used.
    """
    file = str(path)
    data = _bytes(Path(path), file)
    if data[:4] == PARQUET:
        form, rows, broken = _of_parquet(data, units, file)
    else:
        data = data.replace(b"\r\n", b"\n").replace(b"\r", b" ")  # a return alone ends no row
        form = _csv_form(data, units, decimal, file)
        rows, broken = parse(data[form.offset :], form, form.line)
    found = filled(rows, broken, form)
    if not found.ids:
        raise _none_left(found, file)
    return RunTable(
        file=file,
        said=form.said,
        separator=form.separator,
        comma=form.comma,
        ids=found.ids,
        steps=found.steps,
        x=found.values["x"][0],
        y=found.values["y"][0],
        z=found.values["z"][0] if "z" in found.values else None,
        area=found.values["area"],
        p=found.values["p"],
        t=np.stack([found.values["tx"], found.values["ty"]]),
        g=np.stack([found.values["gx"], found.values["gy"]]),
        count=rows.height + len(broken),
        refused=found.refused,
    )


def _bytes(path: Path, file: str) -> bytes:
    try:
        return path.read_bytes()
    except FileNotFoundError:
        raise refuse("file-missing", file, "no such table", "an existing file", "check the path") from None
    except (OSError, ValueError) as error:
        reason = str(getattr(error, "strerror", None) or error).lower()
        raise refuse("file-unreadable", file, reason, "a readable table", "check path and permissions") from None


def _of_parquet(data: bytes, units: System | None, file: str) -> tuple[Form, pl.DataFrame, list[Broken]]:
    """Form and rows of text of a Parquet table."""
    try:
        frame = pl.read_parquet(io.BytesIO(data))
    except pl.exceptions.PolarsError as error:
        reason = str(error).strip().split("\n")[0][:120]
        raise refuse("table-broken", file, reason, "a Parquet table", "write it again") from None
    if not frame.height:
        raise refuse("table-empty", file, "a header and no rows", "rows below it", "write the table again")
    names = frame.columns
    form = _form(file, names, _columns(names, units, file, 0), "", False, 0, 1, "Parquet")
    rows = frame.cast(pl.String)
    rows.columns = [str(i) for i in range(len(names))]
    lines = pl.int_range(1, rows.height + 1, dtype=pl.Int64, eager=True).alias(LINE)
    return form, rows.with_columns(pl.lit(None, dtype=pl.String).alias("extra"), lines), []


def _csv_form(data: bytes, units: System | None, decimal: str, file: str) -> Form:
    """The form of a CSV; Problems for a header that cannot be read."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        raise refuse("file-not-utf8", file, "UTF-16 text", "UTF-8 text", "save the table as CSV in UTF-8", 1)
    start = 3 if data.startswith(b"\xef\xbb\xbf") else 0
    blank = offset = 0
    while start < len(data) and not (first := data[start : _end(data, start)]).strip():
        start, blank = start + len(first), blank + 1
    if start >= len(data):
        raise refuse("table-empty", file, "an empty file", "a header and rows", "write the table again", 1)
    offset = _end(data, start)
    header = data[start:offset][:WIDEST].decode("utf-8", "replace").rstrip("\n")
    separator = ";" if header.count(";") > header.count(",") else ","
    if separator not in header and "\t" in header:
        expected = '"," or ";" between the cells'
        raise refuse("table-separator", file, "tabs between the cells", expected, "save the table as CSV", blank + 1)
    names = next(csv.reader([header], delimiter=separator))
    text = data[offset : offset + WIDEST].decode("utf-8", "replace")
    rows = [row for row, _ in zip(csv.reader(io.StringIO(text), delimiter=separator), range(SAMPLE), strict=False)]
    rows = [row for row in rows if any(cell.strip() for cell in row)]
    if not rows:
        raise refuse("table-empty", file, "a header and no rows", "rows below it", "write the table again", blank + 2)
    if len(rows) > 1 and all(len(row) > len(names) and any(c.strip() for c in row[len(names) :]) for row in rows):
        found = f"rows of {len(rows[0])} cells below a header of {len(names)}"
        write = 'write ";" between the cells where decimals have a comma' if separator == "," else "correct the header"
        raise refuse("table-cells", file, found, "as many cells in a row as in the header", write, blank + 2)
    columns = _columns(names, units, file, blank + 1)
    comma = decimal == "," if decimal else _decimal_comma(columns, rows, separator, file, blank + 2)
    between = f'"{separator}" between the cells, decimal {"comma" if comma else "point"}'
    return _form(file, names, columns, separator, comma, offset, blank + 2, between)


def _end(data: bytes, start: int) -> int:
    """Behind the line that begins at `start`."""
    return data.find(b"\n", start) + 1 or len(data)


def _form(
    file: str,
    header: Sequence[str],
    columns: dict[str, tuple[int, float]],
    separator: str,
    comma: bool,
    offset: int,
    line: int,
    between: str,
) -> Form:
    used = {position for position, _ in columns.values()}
    other = [name.strip() for i, name in enumerate(header) if i not in used and name.strip()]
    also = f"; not used: {', '.join(cut(name, 20) for name in other)}" if other else ""
    said = f"interface of a run, {between}{also}"
    return Form(file, separator, comma, columns, (), False, len(header), offset, line, said, ())


def _decimal_comma(
    columns: dict[str, tuple[int, float]], rows: list[list[str]], separator: str, file: str, line: int
) -> bool:
    """Whether most numbers of the first rows have a decimal comma."""
    places = [position for name, (position, _) in columns.items() if name not in IDENTITY]
    cells = [row[place] for row in rows for place in places if place < len(row)]
    commas = [cell.strip() for cell in cells if COMMA.match(cell)]
    points = sum(POINT.match(cell) is not None for cell in cells)
    if separator == "," or len(commas) <= points:
        return False
    if not points and all(THOUSANDS.match(cell) for cell in commas):
        found, write = f'numbers like "{commas[0]}" alone', "write more digits, or a decimal point"
        raise refuse("table-decimal", file, found, "one way to read them", write, line)
    return True


def _columns(header: Sequence[str], units: System | None, file: str, line: int) -> dict[str, tuple[int, float]]:
    """Position and factor to inside units of our columns; the faults of the header together."""
    found: dict[str, tuple[int, float]] = {}
    errors: list[InputError] = []
    heads = [_head(cell) for cell in header]
    for position, (name, unit) in enumerate(heads):
        if name not in COLUMNS:
            continue
        if name in found:
            code, said = "column-twice", f"two columns {name}"
            errors.append(InputError(code, name, said, "one", "remove or rename one", file, line))
            continue
        found[name] = position, 1.0
        try:
            found[name] = position, _factor(name, unit, units)
        except UnitError as error:
            errors.append(
                InputError(error.code, name, show(header[position]), error.expected, error.remedy, file, line)
            )
    absent = [name for name in NEEDED if name not in found]
    if absent:
        free = [name for name, _ in heads if name not in COLUMNS]
        pairs = [f"{theirs} as {name}" for name in absent if (theirs := nearest(name, free))]
        remedy = f"add {', '.join(absent)}" + (f"; name {', '.join(pairs)}" if pairs else "")
        remedy += "; a model in two dimensions writes 0 across" if {"ty", "gy", "y"} & set(absent) else ""
        said = cut(", ".join(header), 60)
        errors.append(InputError("missing-column", absent[0], said, f"a header with {HEADLINE}", remedy, file, line))
    if errors:
        raise Problems(errors)
    return found


def _head(cell: str) -> tuple[str, str | None]:
    """Name and unit of a column, None where the header has none."""
    match = HEADER.match(cell)
    name, unit = match.groups() if match else (cell.strip(), None)
    return name, unit


def _factor(name: str, unit: str | None, units: System | None) -> float:
    """Factor of a column to inside units; UnitError for a unit that is missing, unknown or of another kind."""
    kind, usual = COLUMNS[name]
    if not kind:
        return 1.0
    article = "an" if kind == "area" else "a"
    if unit is None:
        if units is None:
            raise UnitError(
                "unit-missing", f"the unit of {article} {kind} in the header", f"write for instance {name}[{usual}]"
            )
        return units.factor(DIMENSIONS[kind])
    factor, dimension = parse_unit(unit)
    if dimension != DIMENSIONS[kind]:
        raise UnitError("unit-wrong", f"the unit of {article} {kind}", f"write for instance {name}[{usual}]")
    return factor


def _none_left(found: Filled, file: str) -> Problems:
    """Every row is refused: the first few with their reasons."""
    rows = found.refused.head(SHOWN).iter_rows(named=True)
    told = "; ".join(f"line {row[LINE]}: {row['reason']}" for row in rows)
    more = found.refused.height - SHOWN
    said = f"no row that can be used ({told}{f'; {more} more' if more > 0 else ''})"
    line = int(found.refused[LINE][0]) if found.refused.height else 2
    return refuse("run-no-rows", file, said, "a row of numbers for each point and step", "write the table again", line)
