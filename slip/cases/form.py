"""How a table is written: what its columns are, their units, the sign between the cells and the decimal sign."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Sequence

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.records import record
from slip.base.units import KINDS, SYSTEMS, UnitError, parse_unit
from slip.joint.joint import Joint
from slip.read.document import cut
from slip.read.reader import nearest, show
from slip.read.table import BOLT_COLUMNS, COLUMNS, JOINT_COLUMNS, SHARED_COLUMNS

HEADER = re.compile(r"\s*(.*?)\s*(?:[\[(]\s*([^\[\](]*?)\s*[\])])?\s*$", re.DOTALL)
COMMA = re.compile(r"\s*[-+]?\d*,\d+([eE][-+]?\d+)?\s*$")
POINT = re.compile(r"\s*[-+]?\d*\.\d*([eE][-+]?\d+)?\s*$")
THOUSANDS = re.compile(r"[-+]?[1-9]\d{0,2},\d{3}$")  # may part thousands as well as decimals
SAMPLE = 400  # rows in which the decimal sign is looked for
UNITS = {"force": "N", "moment": "N mm", "number": ""}
AXIS = "xyz"
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
    first = text[0].rstrip("\r")
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
    columns = _columns(header, joint, file, blank + 1)
    comma = _decimal_comma(columns, filled, separator, joint, file, blank + 2)
    offset = start + sum(len(line) + 1 for line in lines[: blank + 1])
    between = f'"{separator}" between the cells, decimal {"comma" if comma else "point"}'
    return _form(joint, file, header, columns, separator, comma, offset, blank + 2, between)


def parquet_form(header: Sequence[str], joint: Joint, file: str) -> Form:
    """The form of a Parquet table from the names of its columns."""
    return _form(joint, file, header, _columns(header, joint, file, 0), "", False, 0, 1, "Parquet")


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
    carried = tuple((i, name.strip()) for i, name in enumerate(header) if i not in used and name.strip())
    what = "forces of each bolt" if bolts else "loads of the joint"
    also = f"; carried through: {', '.join(cut(name, 20) for _, name in carried)}" if carried else ""
    said = f"{what}, {between}{also}"
    return Form(
        file, separator, comma, columns, carried, bolts, len(header), offset, line, said, _assumed(columns, bolts)
    )


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
        return False
    if not points and all(THOUSANDS.match(cell) for cell in commas):
        found, expected = f'numbers like "{commas[0]}" alone', "one way to read them"
        write = 'write [table] decimal = "," in the joint file if that is a decimal comma; else leave the commas out'
        raise _fault(file, line, "table-decimal", found, expected, write)
    return True


def _columns(header: Sequence[str], joint: Joint, file: str, line: int) -> dict[str, tuple[int, float]]:
    """Position and factor of our columns; the faults of the header together."""
    theirs = {theirs: ours for ours, theirs in joint.table.columns.items()}
    found: dict[str, tuple[int, float]] = {}
    errors: list[InputError] = []
    heads = [_head(cell, theirs, joint.table.columns) for cell in header]
    bolts = any(name == "bolt" for name, _ in heads)
    known = SHARED_COLUMNS | (BOLT_COLUMNS if bolts else JOINT_COLUMNS)
    if bolts:  # of the components along the table's axes the two in the face; the third is no force that is known to pull the bolt
        shear = needed(bolts, joint)[2:]
        known = {name: kind for name, kind in known.items() if name not in ("Fx", "Fy")} | dict.fromkeys(shear, "force")
    for position, (name, unit) in enumerate(heads):
        if name not in known:
            continue
        if name in found:
            errors.append(_one(file, line, "column-twice", f"two columns {name}", "one", "remove or rename one", name))
            continue
        try:
            found[name] = position, _factor(name, known[name], unit, joint, file, line, header[position])
        except Problems as problems:
            errors += problems.errors
    errors += _missing(found, header, bolts, joint, file, line, {e.key for e in errors})
    if errors:
        raise Problems(errors)
    return found


def _head(cell: str, theirs: dict[str, str], ours: object) -> tuple[str, str | None]:
    """Our name of a column, or its own, and its unit, None where the header has none."""
    match = HEADER.match(cell)
    name, unit = match.groups() if match else (cell.strip(), None)
    if cell.strip() in theirs:
        return theirs[cell.strip()], unit
    if name in theirs:
        return theirs[name], unit
    taken = isinstance(ours, dict) and name in ours  # the file names another column for this one
    return ("" if taken else name), unit


def _factor(name: str, kind: str, unit: str | None, joint: Joint, file: str, line: int, cell: str) -> float:
    """Factor of a column to inside units."""
    if kind in ("", "number"):
        return 1.0
    system = joint.table.units
    if unit is None:
        if system is None:
            expected = f"the unit of a {kind} in the header"
            write = f'write {name}[{UNITS[kind]}], or [table] units = "N mm" or "lbf in" in the joint file'
            raise Problems([_one(file, line, "unit-missing", show(cell), expected, write, name)])
        return system.factor(KINDS[kind])
    try:
        factor, dimension = parse_unit(unit)
    except UnitError as error:
        raise Problems([_one(file, line, error.code, show(cell), error.expected, error.remedy, name)]) from None
    if dimension != KINDS[kind]:
        write = f"write for instance {name}[{UNITS[kind]}]"
        raise Problems([_one(file, line, "unit-wrong", show(cell), f"the unit of a {kind}", write, name)])
    return factor


def needed(bolts: bool, joint: Joint) -> tuple[str, ...]:
    """Columns that a table must have."""
    shear = tuple(f"F{AXIS[axis]}" for axis, _ in joint.table.axes[:2])
    return ("case", "bolt", *shear) if bolts else ("case", *shear)


def _missing(
    found: dict[str, tuple[int, float]],
    header: Sequence[str],
    bolts: bool,
    joint: Joint,
    file: str,
    line: int,
    wrong: set[str],
) -> list[InputError]:
    """Faults of columns that are needed and not there, and of what the joint file must say for those that are."""
    errors = []
    absent = [name for name in needed(bolts, joint) if name not in found and name not in wrong]
    if absent:
        taken = {position for position, _ in found.values()}
        free = [_head(cell, {}, ())[0] for i, cell in enumerate(header) if i not in taken]
        close = {name: nearest(name, free) for name in absent}
        pairs = ", ".join(f'{name} = "{theirs or ".."}"' for name, theirs in close.items())
        write = f"add it, or name it in the joint file: [table] columns = {{ {pairs} }}"
        expected = f"a header with {', '.join(absent)}"
        errors.append(_one(file, line, "missing-column", cut(", ".join(header), 60), expected, write, absent[0]))
    if bolts and not {"Fax", "Fclamp"} & found.keys():
        along = f"F{AXIS[joint.table.axes[2][0]]}"
        names = {
            _head(cell, {theirs: ours for ours, theirs in joint.table.columns.items()}, joint.table.columns)[0]
            for cell in header
        }
        if along in names:
            expected = "the axial force as Fax, tension positive, with its meaning"
            write = f'write [table] columns = {{ Fax = "{along}" }} and [axial] meaning, or take the column out'
            errors.append(
                _one(file, line, "axial-not-named", f"{along} along the bolts and no Fax", expected, write, along)
            )
    if "Fax" in found and joint.axial.meaning is None:
        write = 'add [axial] meaning = "external", "bolt force" or "bolt force change" to the joint file'
        errors.append(
            _one(file, line, "missing-key", "Fax and no [axial] meaning", "what an axial force is", write, "Fax")
        )
    if "Fclamp" in found and joint.axial.model_preload is None:
        write = 'add [axial] model_preload = "90 kN" to the joint file'
        expected = "the preload in the model that the contact force has fallen from"
        errors.append(_one(file, line, "missing-key", "Fclamp and no model_preload", expected, write, "Fclamp"))
    on_joint = joint.axial.meaning in ("bolt force", "bolt force change") and not bolts
    if on_joint and any(name in found for name in ("Fz", "Mx", "My")):
        found_, expected = f'meaning = "{joint.axial.meaning}"', "an external axial force on the joint"
        write = 'give a table of bolt forces, or meaning = "external"'
        errors.append(_one(file, line, "meaning-on-joint", found_, expected, write, "Fz"))
    return errors


def _one(file: str, line: int, code: str, found: str, expected: str, remedy: str, key: str = "") -> InputError:
    return InputError(code, key, found, expected, remedy, file, line)


def _fault(file: str, line: int, code: str, found: str, expected: str, remedy: str) -> Problems:
    return Problems([_one(file, line, code, found, expected, remedy)])


def unit_of(kind: str, name: str) -> str:
    """The unit of a kind of quantity in a system, for headers."""
    return SYSTEMS[name].unit(kind)
