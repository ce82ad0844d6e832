"""Whether the bolt forces of a case add up to the load of the joint, where both are known."""

from __future__ import annotations

import hashlib
from dataclasses import replace
from pathlib import Path

import numpy as np
import polars as pl

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.base.trace import Trace
from slip.cases.acting import acting
from slip.cases.form import Form
from slip.cases.rows import Block, read_rows
from slip.cases.stream import Table
from slip.clamp.states import shared, states
from slip.joint.joint import Joint

Array = np.ndarray


@record(eq=False)
class Loads:
    """Resultant shear, its moment about the centroid and the axial force [N, N mm] of cases by name, (k, 4); digest of where they stand."""

    names: pl.Series
    values: Array
    digest: str
    asked: bool = False  # whether a table was named for it

    @classmethod
    def of(cls, joint: Joint, table: str | Path | None) -> Loads | None:
        """The loads of a table of joint loads, or of the file's own cases on the joint; None where there are none."""
        if table is not None:
            return _of_table(joint, Path(table))
        cases = tuple(case for case in joint.cases if not case.each_bolt and not case.unsigned)
        if not cases:
            return None
        found = states(replace(joint, cases=cases))
        given = np.array([end == "given" for end in found.end])
        values = np.column_stack([found.load, found.axial.sum(axis=-1)])[given]
        return cls(pl.Series([case.name for case in cases]), values, joint.digest)


def _of_table(joint: Joint, path: Path) -> Loads:
    on_joint = replace(joint, axial=replace(joint.axial, meaning="external"))  # what acts on the joint is external
    table = Table(path, on_joint)
    if table.form.bolts:
        expected, remedy = "a table of joint loads", "give the bolt forces as TABLE"
        raise Problems(
            [InputError("table-of-bolts", "--loads", "a table with a column bolt", expected, remedy, str(path))]
        )
    names, values = [], []
    for chunk in table.chunks():
        frame, broken = chunk.rows(table.form)
        found = read_rows(on_joint, table.form, frame, broken)
        good = np.flatnonzero(found.block.open_reason == "")
        names.append(found.block.names.gather(good))
        values.append(_sums(on_joint, found.block, False)[good])
    digest = hashlib.sha256(path.read_bytes()).hexdigest()
    return Loads(pl.concat(names), np.concatenate(values), digest, asked=True)


def imbalance(joint: Joint, form: Form, block: Block, loads: Loads) -> tuple[tuple[float, str], int]:
    """Largest part of a case's load by which its bolt forces miss it, the case, and how many were compared.

    Shear by the larger of both resultants, the moment by that and the pattern's reach, the axial force by the larger of both.
    """
    if not form.bolts:
        return (0.0, ""), 0
    places = pl.DataFrame({"case": loads.names, "at": np.arange(len(loads.names))})
    at = pl.DataFrame({"case": block.names}).join(places, on="case", how="left", maintain_order="left")["at"]
    both = np.flatnonzero(at.is_not_null().to_numpy() & (block.open_reason == ""))
    if not both.size:
        return (0.0, ""), 0
    ours, theirs = _sums(joint, block, True)[both], loads.values[at.gather(both).to_numpy()]
    reach = float(np.hypot(*joint.pattern.arms.T).max()) or 1.0
    shear = np.maximum(np.hypot(*ours[:, :2].T), np.hypot(*theirs[:, :2].T))
    turning = np.maximum(np.abs(ours[:, 2]), np.abs(theirs[:, 2])) / reach
    size = np.maximum(np.maximum(shear, turning), 1e-9)
    axial = np.maximum(np.maximum(np.abs(ours[:, 3]), np.abs(theirs[:, 3])), size * 1e-3)
    missed = np.abs(ours - theirs)
    parts = np.stack([np.hypot(missed[:, 0], missed[:, 1]) / size, missed[:, 2] / reach / size, missed[:, 3] / axial])
    worst = int(parts.max(axis=0).argmax())
    return (float(parts[:, worst].max()), block.names[int(both[worst])]), int(both.size)


def _sums(joint: Joint, block: Block, bolts: bool) -> Array:
    """Resultant shear, moment and axial force of the given ends, (C, 4)."""
    found = shared(joint, acting(joint, block, bolts), Trace(keep=False))
    return np.column_stack([found.load, found.axial.sum(axis=-1)])[: block.count]
