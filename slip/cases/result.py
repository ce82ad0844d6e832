"""The result of many cases as a table: one row for each bolt and case, then one for the group and one for the force alone."""

from __future__ import annotations

import numpy as np
import polars as pl

from slip.base.records import record
from slip.base.units import System
from slip.cases.candidates import ENDS
from slip.cases.form import Form
from slip.cases.judge import NOT_PROVEN, OVER, TILTED, Judged
from slip.cases.rows import NAMELESS, ONE_END, REFUSED_END, Block
from slip.joint.joint import Joint
from slip.verdict.stage import HOLDS

Array = np.ndarray
GROUP, FORCE = "group", "force only"


@record
class Wanted:
    """Which rows of the result are kept: of these cases and bolts, all where a list is empty. system: units of the result."""

    system: System
    cases: tuple[str, ...] = ()
    bolts: tuple[str, ...] = ()


def result(joint: Joint, form: Form, frame: pl.DataFrame, block: Block, judged: Judged, wanted: Wanted) -> pl.DataFrame:
    """Rows of the result, in the order of the cases and, inside each, of the joint's bolts; frame: the text of the table's rows."""
    names = (*joint.pattern.names, GROUP, FORCE)
    C, n, m = block.count, joint.pattern.count, len(names)
    known = known_bolts(block, judged, n)
    solved = judged.reason == ""
    wide = np.column_stack([known, solved, solved])
    unit = wanted.system.factor((1, 0, 0, 0))

    def all_rows(bolts: Array, group: Array, force: Array) -> Array:
        found: Array = np.column_stack([bolts, group, force])
        return found.ravel()

    def bolt_rows(values: Array) -> Array:
        return np.column_stack([values / unit, np.full((C, 2), np.nan)]).ravel()

    force = wanted.system.force
    reserve = all_rows(judged.bolt_reserve, judged.group_reserve, judged.force_reserve)
    cells = pl.Series(names).cast(pl.Enum(names))
    ends = pl.Series(ENDS).cast(pl.Enum(ENDS))
    nothing = np.full((C, 2), False)
    table = pl.DataFrame(
        {
            "case": block.names.gather(np.repeat(np.arange(C), m)),
            "bolt": cells.gather(np.tile(np.arange(m), C)),
            "end": ends.gather(all_rows(judged.bolt_end, judged.group_end, judged.force_end)),
            f"clamp_low[{force}]": bolt_rows(judged.clamp_low),
            f"clamp_high[{force}]": bolt_rows(judged.clamp_high),
            f"shear[{force}]": bolt_rows(judged.shear),
            "safety": all_rows(judged.bolt_safety, judged.group_safety, judged.force_safety),
            "load_factor": all_rows(judged.bolt_load_factor, judged.group_load_factor, judged.force_load_factor),
            "required": np.repeat(judged.required, m),
            "reserve_factor": reserve,
            "open": np.column_stack([judged.open, nothing]).ravel(),
            "holds": reserve >= 1,
            "separation_factor": np.column_stack([judged.separation, np.full((C, 2), np.nan)]).ravel(),
            "case_holds": np.repeat(judged.code == HOLDS, m),
        }
    )
    numbers = [name for name, kind in table.schema.items() if kind == pl.Float64]
    flags = pl.Series(np.tile(np.arange(m) < n, C))
    table = table.with_columns(pl.col(numbers).fill_nan(None), open=pl.when(flags).then(pl.col("open")))
    table = table.with_columns(_carried(form, frame, block, m, n))
    keep = wide.ravel()
    if wanted.cases:
        keep &= table["case"].is_in(list(wanted.cases)).to_numpy()
    if wanted.bolts:
        keep &= table["bolt"].cast(pl.String).is_in([*wanted.bolts, GROUP, FORCE]).to_numpy()
    return table if keep.all() else table.filter(pl.Series(keep))


def known_bolts(block: Block, judged: Judged, n: int) -> Array:
    """Which bolts of which cases have a result, (C, n): those with a row, whatever became of the others of their case."""
    there = np.broadcast_to(block.present, (block.count, n))
    whole = block.present.shape[1] == n and n > 1  # a bolt's own row suffices for its own factor
    found: Array = there & (((judged.reason == "") | (whole & ~np.isin(judged.reason, UNUSABLE)))[:, None])
    return found


UNUSABLE = (TILTED, NOT_PROVEN, OVER, REFUSED_END, NAMELESS, ONE_END)  # reasons that leave a bolt without an answer too


def _carried(form: Form, frame: pl.DataFrame, block: Block, m: int, n: int) -> list[pl.Series]:
    """The columns that are carried through, from the row of the given end; empty for the group of a table of bolts."""
    if not form.carried:
        return []
    none = np.full((block.count, m - n), -1)
    rows = np.column_stack([block.rows, none]) if form.bolts else np.broadcast_to(block.rows, (block.count, m))
    places = pl.Series(rows.ravel())
    places = pl.select(pl.when(places >= 0).then(places)).to_series()
    made: list[pl.Series] = []
    for position, name in form.carried:
        own = _free(name, {series.name for series in made})
        made.append(frame[str(position)].gather(places).alias(own))
    return made


OWN = ("end", "safety", "load_factor", "required", "reserve_factor", "open", "holds", "separation_factor", "case_holds")


def _free(name: str, taken: set[str]) -> str:
    """A carried name that is none of the result's own, and none that is taken."""
    if name in OWN or name.partition("[")[0] in ("clamp_low", "clamp_high", "shear"):
        name = f"{name} (table)"
    while name in taken:
        name = f"{name} (table)"
    return name
