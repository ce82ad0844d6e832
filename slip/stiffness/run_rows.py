"""From rows of text to the fields of a run: every number checked, every row that cannot be used refused with its reason."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import polars as pl

from slip.base.records import record
from slip.cases.form import Form
from slip.cases.parse import EXTRA, LINE, Broken
from slip.read.reader import LARGEST

Array = np.ndarray
IDENTITY, OPTIONAL = ("id", "step"), ("z", "step")
REASON = "reason"
SHOWN = 40  # characters of a wrong cell in a reason
REFUSED = {LINE: pl.Int64, "id": pl.String, "step": pl.String, REASON: pl.String, "text": pl.String}
NOISE = 1e-9  # of the largest pressure: a pressure below zero by no more is that of an open point


@record(eq=False)
class Filled:
    """Points and steps, the numeric columns in inside units (S, n), and the rows that are not used (`REFUSED`), by line."""

    ids: tuple[str, ...]
    steps: tuple[str, ...]
    values: dict[str, Array]
    refused: pl.DataFrame


def filled(rows: pl.DataFrame, broken: list[Broken], form: Form) -> Filled:
    """The fields of rows of text (columns by position, `extra`, `line`). A point that lacks a step is left out of all of them."""
    numbers = {name: factor for name, (_, factor) in form.columns.items() if name not in IDENTITY}
    cells = _typed(rows, form, numbers)
    good, late = _whole(cells.filter(pl.col(REASON) == ""), cells)
    wrong = pl.concat([cells.filter(pl.col(REASON) != ""), late])
    steps = _in_order(good["step"].unique(maintain_order=True).to_list())
    ids = good["id"].unique(maintain_order=True).to_list()
    place = {name: i for i, name in enumerate(steps)}
    point = {name: i for i, name in enumerate(ids)}
    s = np.array([place[name] for name in good["step"]], dtype=int)
    i = np.array([point[name] for name in good["id"]], dtype=int)
    values = {}
    for name in numbers:
        values[name] = np.zeros((len(steps), len(ids)))
        values[name][s, i] = good[f"={name}"].to_numpy()
    if ids:
        values["p"] = np.maximum(values["p"], 0.0)
    return Filled(tuple(ids), tuple(steps), values, _refused(form, wrong, rows, broken))


def _typed(rows: pl.DataFrame, form: Form, numbers: dict[str, float]) -> pl.DataFrame:
    """Our columns as text, as numbers (`=name`) in inside units, and `reason`: '' or what is wrong with the row."""
    text = {name: pl.col(str(position)).str.strip_chars() for name, (position, _) in form.columns.items()}
    cells = rows.select(
        pl.col(LINE), pl.col(EXTRA), *(pl.when(c == "").then(None).otherwise(c).alias(n) for n, c in text.items())
    )
    if "step" not in form.columns:
        cells = cells.with_columns(pl.lit("").alias("step"))
    cells = cells.with_columns(
        _number(name, form.comma).mul(factor).alias(f"={name}") for name, factor in numbers.items()
    )
    most = cells["=p"].abs().max()
    least = -NOISE * float(most) if isinstance(most, float) and np.isfinite(most) else 0.0
    said = pl.coalesce(
        *(pl.when(condition).then(words) for condition, words in _wrong(numbers, least)), pl.lit("")
    ).alias(REASON)
    return cells.with_columns(said)


def _number(name: str, comma: bool) -> pl.Expr:
    """A cell as number, null where it is none; a decimal comma only where the table has them."""
    cell = pl.col(name)
    if comma:
        pointed = cell.str.contains(".", literal=True)
        cell = pl.when(pointed).then(None).otherwise(cell).str.replace(",", ".", literal=True)
    return cell.cast(pl.Float64, strict=False)


def _wrong(numbers: dict[str, float], least: float) -> Iterator[tuple[pl.Expr, pl.Expr]]:
    """What can be wrong with a row, the gravest first, each with its words."""

    def shown(text: str, name: str) -> pl.Expr:
        return pl.concat_str(pl.lit(f'{text}: "'), pl.col(name).str.slice(0, SHOWN), pl.lit('"'))

    yield pl.col(EXTRA).is_not_null(), pl.lit("more cells than the header has columns")
    for name in IDENTITY:
        yield pl.col(name).is_null(), pl.lit(f"no {name}")
    for name in numbers:
        value = pl.col(f"={name}")
        yield pl.col(name).is_null(), pl.lit(f"{name} is empty, which is not zero")
        yield value.is_null(), shown(f"{name} is no number", name)
        yield (~(value.abs() <= LARGEST)).fill_null(False), shown(f"{name} is no finite number of sensible size", name)
    yield pl.col("=area") <= 0, shown("area is not above 0", "area")
    yield pl.col("=p") < least, shown("p is negative, and pressing counts as positive", "p")


def _whole(good: pl.DataFrame, cells: pl.DataFrame) -> tuple[pl.DataFrame, pl.DataFrame]:
    """Rows of the points that have one row at every step, and what is refused of the others."""
    twice = ~good.select(pl.struct("id", "step").is_first_distinct()).to_series()
    second = "a second row of this id" + (
        "" if (cells["step"] != "").any() else ": a table of several steps needs a column step"
    )
    late = [good.filter(twice).with_columns(pl.lit(second).alias(REASON))]
    good = good.filter(~twice)
    steps = cells.filter(pl.col("step").is_not_null())["step"].n_unique()
    count = good.group_by("id").len()
    short = good.join(count.filter(pl.col("len") < steps).select("id"), on="id", how="semi", maintain_order="left")
    why = "this id has no row that can be used at another step; an open point is written with p 0"
    late.append(short.with_columns(pl.lit(why).alias(REASON)))
    return good.join(short.select("id").unique(), on="id", how="anti", maintain_order="left"), pl.concat(late)


def _in_order(steps: list[str]) -> list[str]:
    """Numbers by size; other names as they come."""
    try:
        return sorted(steps, key=lambda name: float(name.replace(",", ".")))
    except ValueError:
        return steps


def _refused(form: Form, wrong: pl.DataFrame, rows: pl.DataFrame, broken: list[Broken]) -> pl.DataFrame:
    """Every row that is not used, by line."""
    lost = pl.DataFrame([(b.line, None, None, b.reason, b.text) for b in broken], schema=REFUSED, orient="row")
    if not wrong.height:
        return lost
    cells = [pl.col(str(i)).fill_null("") for i in range(form.width)]
    text = pl.concat_str(cells, separator=form.separator or ",").alias("text")
    return pl.concat([wrong.join(rows.select(LINE, text), on=LINE, how="left").select(*REFUSED), lost]).sort(LINE)
