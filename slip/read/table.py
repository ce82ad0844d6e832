"""Builder of [table]: how a table of many load cases is read."""

from __future__ import annotations

import numpy as np

from slip.base.units import SYSTEMS
from slip.joint.table import OWN_AXES, TableForm
from slip.read.reader import Reader, nearest, show
from slip.read.sections import Section

# The columns of the contract: kind of quantity, '' for text; those of bolt forces, of joint loads, and of both.
BOLT_COLUMNS = {"Fx": "force", "Fy": "force", "Fax": "force", "Fclamp": "force", "preload_low": "force"}
JOINT_COLUMNS = {"Fx": "force", "Fy": "force", "Fz": "force", "Mx": "moment", "My": "moment", "Mz": "moment"}
SHARED_COLUMNS = {"case": "", "bolt": "", "kind": "", "end": "", "ratio": "number", "thermal": "force"}
COLUMNS = SHARED_COLUMNS | BOLT_COLUMNS | JOINT_COLUMNS
AXES = {"X": (0, 1.0), "Y": (1, 1.0), "Z": (2, 1.0), "-X": (0, -1.0), "-Y": (1, -1.0), "-Z": (2, -1.0)}
OURS = ("x", "y", "normal")
EXAMPLE = '{ x = "X", y = "-Z", normal = "Y" }'


def table(r: Reader, s: Section) -> TableForm:
    """[table]; what it leaves open is detected in the table itself."""
    units = SYSTEMS[s.get("units")] if s.has("units") else None
    return TableForm(units, _columns(r, s), _axes(r, s), s.get("decimal", ""))


def _columns(r: Reader, s: Section) -> dict[str, str]:
    """Our columns under the names of the table."""
    given, path = s.get("columns", {}), (*s.path, "columns")
    if not isinstance(given, dict):
        write = 'write columns = { Fx = "FX" }'
        raise r.stop(path, "not-a-table", show(given), "our column = the table's column", write)
    for name, theirs in given.items():
        if name not in COLUMNS:
            close = nearest(name, COLUMNS)
            remedy = f"did you mean {close}?" if close else "take it out: other columns are carried through"
            raise r.stop((*path, name), "unknown-column", show(name), f"one of {', '.join(COLUMNS)}", remedy)
        r.text((*path, name), theirs)
        twice = [other for other, value in given.items() if value == theirs and other != name]
        if twice:
            found, expected = f"{show(theirs)} for {name} and {twice[0]}", "a column of its own for each"
            raise r.stop((*path, name), "column-twice", found, expected, "correct one of them")
    return dict(given)


def _axes(r: Reader, s: Section) -> tuple[tuple[int, float], ...]:
    """Axis of the table and its sign for each of ours; right-handed."""
    if not s.has("axes"):
        return OWN_AXES
    path = (*s.path, "axes")
    given = r.table(path, s.get("axes"), OURS, "the table's axis for x, y and the normal", OURS)
    for name in OURS:
        if given[name] not in AXES:
            expected, write = f"one of {', '.join(AXES)}", f"write for instance axes = {EXAMPLE}"
            raise r.stop((*path, name), "axis-unknown", show(given[name]), expected, write)
    axes = tuple(AXES[given[name]] for name in OURS)
    turn = np.zeros((3, 3))
    for row, (axis, sign) in enumerate(axes):
        turn[row, axis] = sign
    if round(float(np.linalg.det(turn))) != 1:
        twice = len({axis for axis, _ in axes}) < 3
        found = ", ".join(f"{name} = {given[name]}" for name in OURS)
        expected = "three different axes" if twice else "right-handed axes: x turned to y goes round the normal"
        remedy = f"write for instance axes = {EXAMPLE}" if twice else f"turn one sign round, as in {EXAMPLE}"
        raise r.stop(path, "axes-wrong", found, expected, remedy)
    return axes
