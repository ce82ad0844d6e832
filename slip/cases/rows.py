"""From rows of text to cases in arrays: every number checked, every row that cannot be used refused with its reason."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import polars as pl

from slip.base.records import record
from slip.cases.agree import contradictions, second_rows
from slip.cases.form import Form
from slip.cases.parse import EXTRA, LINE, Broken
from slip.joint.joint import Joint
from slip.read.reader import LARGEST
from slip.read.table import COLUMNS

Array = np.ndarray
REASON = "reason"
SHOWN = 40  # characters of a wrong cell in a reason
REFUSED = {LINE: pl.Int64, "case": pl.String, REASON: pl.String, "text": pl.String}
NOT_NEGATIVE = ("thermal", "preload_low", "Fclamp")
# Optional numbers: an empty cell says that the joint file's own value counts.
MAY_BE_EMPTY = ("ratio", "thermal", "preload_low")


REFUSED_ROW = "a row is refused"
REFUSED_END = "a row is refused, and with it perhaps an end"
NAMELESS = "a row without a case that can be read stands beside it"
ONE_END = "a bolt force that holds the preload needs rows for both ends"


class Scattered(Exception):
    """Rows of one case lie apart: they have to be gathered before any case can be judged."""


@record(eq=False)
class Block:
    """C whole cases of a table over n bolts (n = 1 for loads of the joint).

    names (C,); lines (C,): first line of each. given: components at the given end by name, each (C, n); other: at the other end, of
    the cases `second` (k,) that have rows for it, each (k, n). present (C, n): bolts with a row at the given end; rows (C, n): its
    place in `frame`. alternating, ratio (C,); open_reason (C,): why a case cannot be judged, '' where it can.
    """

    names: pl.Series
    lines: Array
    given: dict[str, Array]
    other: dict[str, Array]
    second: Array
    present: Array
    rows: Array
    alternating: Array
    ratio: Array
    open_reason: Array
    frame: pl.DataFrame

    @property
    def count(self) -> int:
        """Number of cases."""
        return len(self.lines)


@record(eq=False)
class Read:
    """A chunk that has been read: its cases, the rows refused (line, case, reason, text), and how many rows there were."""

    block: Block
    refused: pl.DataFrame
    count: int


def read_rows(joint: Joint, form: Form, frame: pl.DataFrame, broken: list[Broken]) -> Read:
    """The cases of rows of text. Raises Scattered where the rows of a case do not stand together."""
    count = frame.height + len(broken)
    cells = _typed(joint, form, frame)
    named = cells.filter(pl.col("case").is_not_null())
    run = named["case"].rle_id().cast(pl.Int64)
    named = named.with_columns(run=run)
    names = named.filter(pl.col("run") != pl.col("run").shift(1, fill_value=-1)).select("case", LINE)
    if names["case"].n_unique() < names.height:
        raise Scattered
    lost = [*cells.filter(pl.col("case").is_null())[LINE].to_list(), *(one.line for one in broken)]
    block, late = _block(joint, form, named, names, np.array(lost, dtype=np.int64))
    wrong = pl.concat([cells.filter(pl.col(REASON) != ""), late], how="diagonal")
    refused = _refused(form, wrong.select(LINE, "case", REASON), frame, broken)
    return Read(block, refused, count)


def _typed(joint: Joint, form: Form, frame: pl.DataFrame) -> pl.DataFrame:
    """Our columns as text and numbers in inside units, with `reason`: '' or what is wrong with the row."""
    text = {name: pl.col(str(position)).str.strip_chars() for name, (position, _) in form.columns.items()}
    filled = {name: pl.when(cell == "").then(None).otherwise(cell) for name, cell in text.items()}
    cells = frame.select(
        pl.col(LINE), pl.col(EXTRA), *(cell.alias(name) for name, cell in filled.items()), place=pl.int_range(pl.len())
    )
    names = list(joint.pattern.names)
    bolts = pl.col("bolt").cast(pl.Enum(names), strict=False).to_physical().cast(pl.Int64) if form.bolts else pl.lit(0)
    numbers = {name: factor for name, (_, factor) in form.columns.items() if COLUMNS[name]}
    values = cells.with_columns(
        place_of=bolts, **{f"={name}": _number(name, form.comma) * factor for name, factor in numbers.items()}
    )
    wrong = list(_wrong(form, numbers))
    values = values.with_columns(pl.any_horizontal(condition for condition, _ in wrong).fill_null(False).alias(REASON))
    # Few rows are wrong: only theirs are put into words.
    said = pl.coalesce(pl.when(condition).then(pl.concat_str(words)) for condition, words in wrong)
    bad = values.filter(pl.col(REASON)).select("place", said.alias("said"))
    values = values.with_columns(pl.lit("").alias(REASON))
    if not bad.height:
        return values
    reasons = values.select("place").join(bad, on="place", how="left", maintain_order="left")["said"].fill_null("")
    return values.with_columns(reasons.alias(REASON))


def _number(name: str, comma: bool) -> pl.Expr:
    """A cell as number, null where it is none; a decimal comma only where the table has them."""
    cell = pl.col(name)
    if comma:
        cell = (
            pl.when(cell.str.contains(".", literal=True)).then(None).otherwise(cell).str.replace(",", ".", literal=True)
        )
    return cell.cast(pl.Float64, strict=False)


def _wrong(form: Form, numbers: dict[str, float]) -> Iterator[tuple[pl.Expr, list[pl.Expr]]]:
    """What can be wrong with a row, the gravest first, each with its words."""

    def words(text: str, shown: str = "") -> list[pl.Expr]:
        cell = [pl.lit('"'), pl.col(shown).str.slice(0, SHOWN), pl.lit('"')] if shown else []
        return [pl.lit(text), *cell]

    yield pl.col(EXTRA).is_not_null(), words("more cells than the header has columns")
    yield pl.col("case").is_null(), words("no case name")
    if form.bolts:
        yield pl.col("bolt").is_null(), words("no bolt name")
        yield pl.col("place_of").is_null(), words("no bolt of the joint file: ", "bolt")
    for name in numbers:
        if name not in MAY_BE_EMPTY:
            yield pl.col(name).is_null(), words(f"{name} is empty, which is not zero")
        value = pl.col(f"={name}")
        yield pl.col(name).is_not_null() & value.is_null(), words(f"{name} is no number: ", name)
        yield ~(value.abs() <= LARGEST), words(f"{name} is no finite number of sensible size: ", name)
        if name in NOT_NEGATIVE:
            yield value < 0, words(f"{name} is negative: ", name)
    if "ratio" in numbers:
        yield pl.col("=ratio").abs() > 1, words("ratio is not within -1 .. 1: ", "ratio")
    for name, known in (("kind", ("static", "alternating")), ("end", ("given", "other"))):
        if name in form.columns:
            yield ~pl.col(name).is_in(known), words(f"{name} is neither {' nor '.join(known)}: ", name)


def _block(
    joint: Joint, form: Form, named: pl.DataFrame, names: pl.DataFrame, lost: Array
) -> tuple[Block, pl.DataFrame]:
    """Good rows in arrays, and those that are refused since they do not fit with the other rows of their case.

    lost: lines of rows whose case cannot be read; they may belong to the cases before and behind them.
    """
    C, n = names.height, joint.pattern.count if form.bolts else 1
    reasons = np.full(C, "", dtype=object)
    bad = named.filter(pl.col(REASON) != "")
    refusal = REFUSED_END if "end" in form.columns else REFUSED_ROW
    reasons[bad["run"].to_numpy()] = refusal
    reasons[_beside(named, lost)] = NAMELESS
    good = named.filter(pl.col(REASON) == "")
    case, bolt = good["run"].to_numpy(), good["place_of"].to_numpy()
    end = (
        (good["end"] == "other").fill_null(False).to_numpy().astype(int)
        if "end" in form.columns
        else np.zeros_like(case)
    )
    late = second_rows(good, (case * 2 + end) * n + bolt) + contradictions(form, good, case, reasons)
    if late:
        refused = pl.concat([good[rows].with_columns(pl.lit(said).alias(REASON)) for rows, said in late])
        reasons[refused["run"].to_numpy()] = refusal
        keep = np.setdiff1d(np.arange(good.height), np.concatenate([rows for rows, _ in late]))
        good, case, bolt, end = good[keep], case[keep], bolt[keep], end[keep]
    else:
        refused = good.clear()
    second = np.unique(case[end == 1])
    rows = -np.ones((C, n), dtype=np.int64)
    first = end == 0
    rows[case[first], bolt[first]] = np.flatnonzero(first)
    other_rows = -np.ones((len(second), n), dtype=np.int64)
    other_rows[np.searchsorted(second, case[~first]), bolt[~first]] = np.flatnonzero(~first)
    kinds, ratio = _kinds(form, good, case, C)
    alternating = kinds | np.isin(np.arange(C), second)
    _incomplete(joint, form, reasons, rows, second, other_rows)
    if joint.axial.meaning == "bolt force" and "Fax" in form.columns:
        one_end = alternating & ~np.isin(np.arange(C), second) & (reasons == "")
        reasons[one_end] = ONE_END
    present = rows >= 0
    present[second] &= other_rows >= 0  # a bolt without a row for one of its ends has no answer
    block = Block(
        names=names["case"],
        lines=names[LINE].to_numpy(),
        given=_filled(form, good, rows),
        other=_filled(form, good, other_rows),
        second=second,
        present=present,
        rows=np.where(rows >= 0, good["place"].to_numpy()[rows] if good.height else -1, -1),
        alternating=alternating,
        ratio=ratio,
        open_reason=reasons,
        frame=good,
    )
    return block, refused


def _beside(named: pl.DataFrame, lost: Array) -> Array:
    """Cases of the rows just before and just behind some lines, by their runs."""
    if not lost.size or not named.height:
        return np.empty(0, dtype=np.int64)
    lines, runs = named[LINE].to_numpy(), named["run"].to_numpy()
    behind = np.searchsorted(lines, lost)
    return np.unique(runs[np.clip(np.concatenate([behind - 1, behind]), 0, len(runs) - 1)])


def _kinds(form: Form, good: pl.DataFrame, case: Array, C: int) -> tuple[Array, Array]:
    """Whether each case alternates, and its ratio; -1 where the table says nothing."""
    alternating, ratio = np.ones(C, dtype=bool), np.full(C, -1.0)
    starts = np.flatnonzero(np.diff(case, prepend=-1))
    if "kind" in form.columns:
        alternating[case[starts]] = ~(good["kind"] == "static").fill_null(False).to_numpy()[starts]
    if "ratio" in form.columns:
        ratio[case[starts]] = good["=ratio"].fill_null(-1.0).to_numpy()[starts]
    return alternating, ratio


def _incomplete(joint: Joint, form: Form, reasons: Array, rows: Array, second: Array, other_rows: Array) -> None:
    """Say which cases miss bolts."""
    names = joint.pattern.names if form.bolts else ("a row",)
    for missing, cases, end in ((rows < 0, np.arange(len(rows)), ""), (other_rows < 0, second, " at the other end")):
        for i in np.flatnonzero(missing.any(axis=1)):
            if not reasons[cases[i]]:
                gone = [names[b] for b in np.flatnonzero(missing[i])]
                more = f" and {len(gone) - 3} more" if len(gone) > 3 else ""
                reasons[cases[i]] = f"no row for {', '.join(gone[:3])}{more}{end}"


def _filled(form: Form, good: pl.DataFrame, rows: Array) -> dict[str, Array]:
    """Components (cases, bolts) of the numeric columns; bolts without a row have no load, NaN for what may be empty."""
    found = {}
    for name in form.columns:
        if not COLUMNS[name] or name == "ratio":
            continue
        missing = np.nan if name in MAY_BE_EMPTY else 0.0
        values = np.append(good[f"={name}"].fill_null(missing).to_numpy(), missing)
        found[name] = values[rows]
    return found


def _refused(form: Form, wrong: pl.DataFrame, frame: pl.DataFrame, broken: list[Broken]) -> pl.DataFrame:
    """Line, case, reason and text of every row that is not used, by line."""
    lost = pl.DataFrame([(b.line, None, b.reason, b.text) for b in broken], schema=REFUSED, orient="row")
    if not wrong.height:
        return lost
    cells = [pl.col(str(i)).fill_null("") for i in range(form.width)]
    text = pl.concat_str(cells, separator=form.separator or ",").alias("text")
    shown = frame.filter(pl.col(LINE).is_in(wrong[LINE].implode())).select(LINE, text)
    return pl.concat([wrong.join(shown, on=LINE, how="left").select(*REFUSED), lost]).sort(LINE)
