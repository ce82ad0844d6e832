"""The header of a table: which of our columns it has, in which units, and what must not pass unseen."""

from __future__ import annotations

import re
from collections.abc import Sequence

from slip.base.errors import InputError, Problems
from slip.base.units import KINDS, UnitError, parse_unit
from slip.joint.joint import Joint
from slip.read.document import cut
from slip.read.reader import nearest, show
from slip.read.table import BOLT_COLUMNS, COLUMNS, JOINT_COLUMNS, SHARED_COLUMNS

HEADER = re.compile(r"\s*(.*?)\s*(?:[\[(]\s*([^\[\](]*?)\s*[\])])?\s*$", re.DOTALL)
UNITS = {"force": "N", "moment": "N mm", "number": ""}
AXIS = "xyz"
JOINT_ONLY = ("Fax", "Fclamp", "preload_low")  # columns that only bolts have


def columns_of(header: Sequence[str], joint: Joint, file: str, line: int) -> dict[str, tuple[int, float]]:
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
            errors.append(fault(file, line, "column-twice", f"two columns {name}", "one", "remove or rename one", name))
            continue
        try:
            found[name] = position, _factor(name, known[name], unit, joint, file, line, header[position])
        except Problems as problems:
            errors += problems.errors
    errors += _missing(found, header, bolts, joint, file, line, {e.key for e in errors})
    errors += _mistaken(found, heads, bolts, joint, file, line)
    if errors:
        raise Problems(errors)
    return found


def _mistaken(
    found: dict[str, tuple[int, float]],
    heads: list[tuple[str, str | None]],
    bolts: bool,
    joint: Joint,
    file: str,
    line: int,
) -> list[InputError]:
    """Columns that would pass unseen: named in the joint file and not there, ours but for their spelling, of the other kind of table."""
    errors = []
    names = [name for name, _ in heads]
    for ours, theirs in joint.table.columns.items():
        if ours not in names:
            expected, write = f"the column {theirs} that [table] columns names for {ours}", "correct the name there"
            errors.append(fault(file, line, "column-not-there", f"no column {theirs}", expected, write, ours))
    plain = {_letters(name): name for name in COLUMNS}
    other = JOINT_ONLY if not bolts else ()
    for name in dict.fromkeys(names):
        ours = plain.get(_letters(name), "")
        if ours and name != ours and ours not in found and ours not in names:
            write = f'write {ours}, or [table] columns = {{ {ours} = "{name}" }} in the joint file; rename a column that is another'
            errors.append(fault(file, line, "column-alike", show(name), f"{ours} by its exact name", write, ours))
        if name in other:
            expected = "columns of one kind of table"
            write = "add the column bolt for forces of each bolt, or take this one out"
            errors.append(
                fault(file, line, "column-of-bolts", f"{name} in a table of joint loads", expected, write, name)
            )
    return errors


def _letters(name: str) -> str:
    """A name without what spelling varies: case, spaces, marks."""
    return "".join(c for c in name.casefold() if c.isalnum())


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
            raise Problems([fault(file, line, "unit-missing", show(cell), expected, write, name)])
        return system.factor(KINDS[kind])
    try:
        factor, dimension = parse_unit(unit)
    except UnitError as error:
        raise Problems([fault(file, line, error.code, show(cell), error.expected, error.remedy, name)]) from None
    if dimension != KINDS[kind]:
        write = f"write for instance {name}[{UNITS[kind]}]"
        raise Problems([fault(file, line, "unit-wrong", show(cell), f"the unit of a {kind}", write, name)])
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
        errors.append(fault(file, line, "missing-column", cut(", ".join(header), 60), expected, write, absent[0]))
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
                fault(file, line, "axial-not-named", f"{along} along the bolts and no Fax", expected, write, along)
            )
    if "Fax" in found and joint.axial.meaning is None:
        write = 'add [axial] meaning = "external", "bolt force" or "bolt force change" to the joint file'
        errors.append(
            fault(file, line, "missing-key", "Fax and no [axial] meaning", "what an axial force is", write, "Fax")
        )
    if "Fclamp" in found and joint.axial.model_preload is None:
        write = 'add [axial] model_preload = "90 kN" to the joint file'
        expected = "the preload in the model that the contact force has fallen from"
        errors.append(fault(file, line, "missing-key", "Fclamp and no model_preload", expected, write, "Fclamp"))
    on_joint = joint.axial.meaning in ("bolt force", "bolt force change") and not bolts
    if on_joint and any(name in found for name in ("Fz", "Mx", "My")):
        found_, expected = f'meaning = "{joint.axial.meaning}"', "an external axial force on the joint"
        write = 'give a table of bolt forces, or meaning = "external"'
        errors.append(fault(file, line, "meaning-on-joint", found_, expected, write, "Fz"))
    return errors


def fault(file: str, line: int, code: str, found: str, expected: str, remedy: str, key: str = "") -> InputError:
    """A fault of a table, at a line and a column."""
    return InputError(code, key, found, expected, remedy, file, line)
