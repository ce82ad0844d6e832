"""Single cases of a table as full assessments: for an explanation, a page, or somebody who doubts one row."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np
import polars as pl

from slip.assess import Assessment, assess_states
from slip.base.errors import InputError, Problems
from slip.base.trace import Trace
from slip.cases.acting import acting, part
from slip.cases.form import Form
from slip.cases.rows import Block, read_rows
from slip.cases.stream import Table
from slip.clamp.states import not_carried, shared, tilting_fault
from slip.joint.joint import Joint
from slip.joint.loads import Case, Load
from slip.read.build import read
from slip.read.reader import nearest


def assess_case(file: str | Path, table: str | Path, name: str | None) -> Assessment:
    """The full assessment of one case of a table, for the joint of a file. Raises Problems as `assess_cases`."""
    joint = read(file, cases_in_table=True)
    if not isinstance(joint, Joint):
        raise Problems(
            [
                InputError(
                    "table-no-bolts", "", "a file without bolts", "a joint with bolts", "use slip check", str(file)
                )
            ]
        )
    if not name:
        remedy = "write slip explain FILE CASE --table TABLE"
        raise Problems(
            [InputError("missing-key", "CASE", "nothing", "the name of a case of the table", remedy, str(table))]
        )
    return assess_cases(joint, table, (name,))[name]


def assess_cases(joint: Joint, table: str | Path, names: Sequence[str]) -> dict[str, Assessment]:
    """The full assessments of some cases of a table, by name, in the order asked for.

    Raises Problems for a case that the table has not, or that cannot be judged.
    """
    source = Table(Path(table), joint)
    rows, known = _rows_of(source, set(names))
    found = read_rows(joint, source.form, rows, []) if rows is not None else None
    listed = [] if found is None else found.block.names.to_list()
    made = {}
    for name in names:
        if found is None or name not in listed:
            close = nearest(name, known)
            remedy = f"did you mean {close}?" if close else "correct the name"
            raise Problems(
                [InputError("unknown-name", "CASE", f'"{name}"', "a case of the table", remedy, source.file)]
            )
        block = part(found.block, np.array([listed.index(name)]))
        made[name] = _assessment(joint, source.form, block)
    return made


def _rows_of(source: Table, names: set[str]) -> tuple[pl.DataFrame | None, list[str]]:
    """Rows of the named cases, case by case, and some names that the table has."""
    position, _ = source.form.columns["case"]
    case = pl.col(str(position)).str.strip_chars()
    kept, known = [], dict.fromkeys([""])
    for chunk in source.chunks():
        frame, _ = chunk.rows(source.form)
        kept.append(frame.filter(case.is_in(list(names))))
        if len(known) < 10_000:
            known |= dict.fromkeys(frame.select(case.drop_nulls().unique(maintain_order=True)).to_series().to_list())
    rows = pl.concat(kept) if kept else None
    if rows is None or not rows.height:
        return None, list(known)
    return rows.with_columns(case.alias("_")).sort("_", maintain_order=True).drop("_"), list(known)


def _assessment(joint: Joint, form: Form, block: Block) -> Assessment:
    name, reason = block.names[0], block.open_reason[0]
    if reason:
        remedy = "correct the table"
        raise Problems(
            [InputError("case-not-judged", name, str(reason), "a whole case", remedy, form.file, int(block.lines[0]))]
        )
    what = acting(joint, block, form.bolts)
    if not_carried(joint, what).any():
        raise Problems([tilting_fault(joint, f", in {name}", form.file, int(block.lines[0]))])
    states = shared(joint, what, Trace())
    ends = tuple(_ends(states.end, states.load, states.axial.sum(axis=-1)))
    case = Case(name, False, ends, None, None, bool(block.alternating[0]), False, None, None)
    return assess_states(replace(joint, cases=(case,)), states)


def _ends(names: Sequence[str], load: np.ndarray, axial: np.ndarray) -> Iterator[tuple[str, Load]]:
    """The resultant loads of a case's ends."""
    for name, (vx, vy, mz), f in zip(names, load.tolist(), axial.tolist(), strict=True):
        yield name, Load((vx, vy), f, (0.0, 0.0, mz))
