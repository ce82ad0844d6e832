"""How a table is written: what its columns are, their units, the sign between the cells and the decimal sign."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Sequence

from slip.base.errors import Problems
from slip.base.notes import Note
from slip.base.records import record
from slip.cases.header import columns_of, fault
from slip.joint.joint import Joint
from slip.read.document import cut
from slip.read.table import COLUMNS

COMMA = re.compile(r"\s*[-+]?\d*,\d+([eE][-+]?\d+)?\s*$")
POINT = re.compile(r"\s*[-+]?\d*\.\d*([eE][-+]?\d+)?\s*$")
THOUSANDS = re.compile(r"[-+]?[1-9]\d{0,2},\d{3}$")  # may part thousands as well as decimals
SAMPLE = 400  # rows in which the decimal sign is looked for
NOTHING = {
    "Fax": "no axial force",
    "Fz": "no axial force",
    "Mx": "no moment about x",
    "My": "no moment about y",
    "Mz": "no moment about the normal",
}


@record(eq=False)
class Form:
    """The form of a table. columns: position and factor to inside units of each of ours that it has; carried: position and header of
    the others; bolts: forces of each bolt, else loads of the joint; width: cells in a row.

    separator, comma: of a CSV, '' and False for Parquet; offset [bytes] and line of its first row. said: all that in one line.
    assumptions: what is taken for columns that are not there.
    """

    file: str
    separator: str
    comma: bool
    columns: dict[str, tuple[int, float]]
    carried: tuple[tuple[int, str], ...]
    bolts: bool
    width: int
    offset: int
    line: int
    said: str
    assumptions: tuple[Note, ...]


def csv_form(head: bytes, joint: Joint, file: str) -> Form:
    """The form of a CSV from its first bytes, which hold whole lines. Raises Problems for a header that cannot be read."""
    if head[:2] in (b"\xff\xfe", b"\xfe\xff"):
        raise _fault(file, 1, "file-not-utf8", "UTF-16 text", "UTF-8 text", "save the table as CSV in UTF-8")
    start = 3 if head.startswith(b"\xef\xbb\xbf") else 0
    lines = head[start:].split(b"\n")
    blank = next((i for i, line in enumerate(lines) if line.strip()), None)
    if blank is None:
        raise _fault(file, 1, "table-empty", "an empty file", "a header and rows", "write the table again")
    try:
        text = [line.decode("utf-8") for line in lines[blank : blank + SAMPLE]]
    except UnicodeDecodeError:
        text = [line.decode("latin-1") for line in lines[blank : blank + SAMPLE]]  # its rows are refused one by one
    text = [line.rstrip("\r") for line in text]
    first = text[0]
    if "\r" in first:
        expected, write = "a line break after each row", "save the table with today's line ends"
        raise _fault(file, blank + 1, "table-line-ends", "carriage returns in place of line breaks", expected, write)
    text = [line.replace("\r", " ") for line in text]
    separator = ";" if first.count(";") > first.count(",") else ","
    if separator not in first and "\t" in first:
        expected = '"," or ";" between the cells'
        raise _fault(file, blank + 1, "table-separator", "tabs between the cells", expected, "save the table as CSV")
    header = next(csv.reader([first], delimiter=separator))
    rows = list(csv.reader(io.StringIO("\n".join(text[1:])), delimiter=separator))
    filled = [row for row in rows if any(cell.strip() for cell in row)]
    if not filled:
        raise _fault(file, blank + 2, "table-empty", "a header and no rows", "rows below it", "write the table again")
    _no_cells_beyond(header, filled, separator, file, blank + 2)
    columns = columns_of(header, joint, file, blank + 1)
    comma = _decimal_comma(columns, filled, separator, joint, file, blank + 2)
    offset = start + sum(len(line) + 1 for line in lines[: blank + 1])
    between = f'"{separator}" between the cells, decimal {"comma" if comma else "point"}'
    return _form(joint, file, header, columns, separator, comma, offset, blank + 2, between)


def parquet_form(header: Sequence[str], joint: Joint, file: str) -> Form:
    """The form of a Parquet table from the names of its columns."""
    return _form(joint, file, header, columns_of(header, joint, file, 0), "", False, 0, 1, "Parquet")


def _form(
    joint: Joint,
    file: str,
    header: Sequence[str],
    columns: dict[str, tuple[int, float]],
    separator: str,
    comma: bool,
    offset: int,
    line: int,
    between: str,
) -> Form:
    bolts = "bolt" in columns
    used = {position for position, _ in columns.values()}
    carried = _carried([(i, name.strip()) for i, name in enumerate(header) if i not in used and name.strip()])
    what = "forces of each bolt" if bolts else "loads of the joint"
    also = f"; carried through: {', '.join(cut(name, 20) for _, name in carried)}" if carried else ""
    said = f"{what}, {between}{also}"
    return Form(
        file, separator, comma, columns, carried, bolts, len(header), offset, line, said, _assumed(columns, bolts)
    )


def _carried(columns: list[tuple[int, str]]) -> tuple[tuple[int, str], ...]:
    """Columns that are carried through, each under a name of its own."""
    kept: list[tuple[int, str]] = []
    for position, name in columns:
        same = sum(other == name or other.startswith(f"{name} (") for _, other in kept)
        kept.append((position, f"{name} ({same + 1})" if same else name))
    return tuple(kept)


def _assumed(columns: dict[str, tuple[int, float]], bolts: bool) -> tuple[Note, ...]:
    """What is taken for columns that are not there."""
    wanted = ("Fax",) if bolts else ("Fz", "Mx", "My", "Mz")
    missing = [name for name in wanted if name not in columns and not (name == "Fax" and "Fclamp" in columns)]
    notes = [Note("table-column-absent", f"no column {name}: {NOTHING[name]}", "table.columns") for name in missing]
    if "kind" not in columns and "ratio" not in columns and "end" not in columns:
        notes.append(Note("ratio", "all cases of the table: alternating, ratio -1", "table.columns"))
    elif "kind" not in columns:
        notes.append(Note("ratio", "cases without ratio or second end: alternating, ratio -1", "table.columns"))
    if not bolts:
        text = "no overturning: the table's shear acts in the sliding face, all loads at the bolts' centroid"
        notes.append(Note("no-overturning", text, "table"))
    return tuple(notes)


def _no_cells_beyond(header: list[str], rows: list[list[str]], separator: str, file: str, line: int) -> None:
    """All rows longer than the header are no accident: most often decimal commas between commas."""
    if len(rows) > 1 and all(len(row) > len(header) and any(c.strip() for c in row[len(header) :]) for row in rows):
        found = f"rows of {len(rows[0])} cells below a header of {len(header)}"
        write = 'write ";" between the cells where decimals have a comma' if separator == "," else "correct the header"
        raise _fault(file, line, "table-cells", found, "as many cells in a row as in the header", write)


def _decimal_comma(
    columns: dict[str, tuple[int, float]], rows: list[list[str]], separator: str, joint: Joint, file: str, line: int
) -> bool:
    """Whether decimals have a comma: as the file says, else what most numbers of the first rows have.

    A comma between quotes in a table with commas between the cells is no decimal sign unless the file says so: it may part thousands.
    """
    if joint.table.decimal:
        return joint.table.decimal == ","
    positions = [position for name, (position, _) in columns.items() if COLUMNS[name]]
    cells = [row[position] for row in rows for position in positions if position < len(row)]
    commas = [cell.strip() for cell in cells if COMMA.match(cell)]
    points = sum(POINT.match(cell) is not None for cell in cells)
    if separator == "," or len(commas) <= points:
        pointed = [cell.strip() for cell in cells if POINT.match(cell)]
        if separator == ";" and pointed and all(THOUSANDS.match(cell.replace(".", ",")) for cell in pointed):
            found, expected = f'numbers like "{pointed[0]}" alone', "one way to read them"
            write = (
                'write [table] decimal = "." in the joint file if that is a decimal point; else leave the points out'
            )
            raise _fault(file, line, "table-decimal", found, expected, write)
        return False
    if not points and all(THOUSANDS.match(cell) for cell in commas):
        found, expected = f'numbers like "{commas[0]}" alone', "one way to read them"
        write = 'write [table] decimal = "," in the joint file if that is a decimal comma; else leave the commas out'
        raise _fault(file, line, "table-decimal", found, expected, write)
    return True


def _fault(file: str, line: int, code: str, found: str, expected: str, remedy: str) -> Problems:
    return Problems([fault(file, line, code, found, expected, remedy)])
