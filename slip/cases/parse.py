"""From the bytes of a CSV to rows of text, each with its line. What is no row is set aside, not lost."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterator

import polars as pl

from slip.base.records import record
from slip.cases.form import Form

EXTRA, LINE = "extra", "line"
BEYOND = 8  # cells after those of the header that are looked at
LONGEST_ROW = 50  # lines that one row may take through line breaks between quotes
NOT_UTF8, NOT_CSV = "bytes that are not UTF-8", "a quotation mark that is not closed"


@record
class Broken:
    """A line that is no row: its number, why, and its text."""

    line: int
    reason: str
    text: str


def parse(data: bytes, form: Form, line: int) -> tuple[pl.DataFrame, list[Broken]]:
    """Rows as text: columns "0", "1", .. of the header, `extra` for cells beyond it, `line`; empty rows are left out.

    data: whole lines of the table without its header, the first at `line`. A cell that is empty is null.
    """
    names = [*(str(i) for i in range(form.width)), EXTRA]
    more = [f"{EXTRA}{i}" for i in range(BEYOND)]
    head = form.separator.join([*names[:-1], *more]).encode() + b"\n"
    try:
        frame = pl.read_csv(
            io.BytesIO(head + data),
            separator=form.separator,
            infer_schema=False,
            truncate_ragged_lines=True,
            raise_if_empty=False,
        )
        if b'"' in data and _swallowed(frame, form):
            raise pl.exceptions.ComputeError("a quotation mark swallows rows")
        broken: list[Broken] = []
        lines = _lines(frame, data, line)
        frame = frame.select(*names[:-1], pl.coalesce(more).alias(EXTRA)).with_columns(lines)
    except (pl.exceptions.ComputeError, pl.exceptions.SchemaError):
        frame, broken = _by_hand(data, form, line, names)
    return frame.filter(~pl.all_horizontal(pl.col(names).is_null())), broken


def _swallowed(frame: pl.DataFrame, form: Form) -> bool:
    """Whether any cell holds what looks like a whole row: two stray quotation marks take all between them for one cell."""
    many = f"\n(?:[^\n]*{re.escape(form.separator)}){{{max(form.width - 1, 1)}}}"
    found = frame.select(pl.any_horizontal(pl.all().str.contains(many).fill_null(False).any())).item()
    return bool(found)


def _lines(frame: pl.DataFrame, data: bytes, line: int) -> pl.Series:
    """Line on which each row begins: quoted cells may hold line breaks."""
    lines = pl.Series(LINE, range(line, line + frame.height), dtype=pl.Int64)
    if b'"' not in data:
        return lines
    breaks = frame.select(pl.sum_horizontal(pl.all().str.count_matches("\n", literal=True).fill_null(0))).to_series()
    return (lines + breaks.cast(pl.Int64).cum_sum().shift(1, fill_value=0)).alias(LINE)


def _by_hand(data: bytes, form: Form, line: int, names: list[str]) -> tuple[pl.DataFrame, list[Broken]]:
    """As `parse`, line by line, where the quick way gives up on the whole."""
    rows: list[tuple[str | None, ...]] = []
    lines: list[int] = []
    broken: list[Broken] = []
    for at, text, reason in _records(data, line, form.separator.encode(), form.width):
        cells = None if reason else next(csv.reader(io.StringIO(text, newline=""), delimiter=form.separator), [])
        if cells is None:
            broken.append(Broken(at, reason, text))
            continue
        beyond = "".join(cells[form.width :]).strip()
        filled = [cell or None for cell in cells[: form.width]]
        rows.append((*filled, *[None] * (form.width - len(filled)), beyond or None))
        lines.append(at)
    frame = pl.DataFrame(rows, schema=dict.fromkeys(names, pl.String), orient="row")
    return frame.with_columns(pl.Series(LINE, lines, dtype=pl.Int64)), broken


def _records(data: bytes, line: int, separator: bytes, width: int) -> Iterator[tuple[int, str, str]]:
    """Line, text and fault ('' for none) of each row; a quotation mark that is never closed spoils its own line alone."""
    pending = data.split(b"\n")
    at = 0
    while at < len(pending):
        taken = next((n for n in range(1, LONGEST_ROW) if b"\n".join(pending[at : at + n]).count(b'"') % 2 == 0), None)
        if taken and any(row.count(separator) >= width - 1 for row in pending[at + 1 : at + taken]):
            taken = None  # whole rows between two quotation marks: the first of them is astray
        raw = b"\n".join(pending[at : at + (taken or 1)])
        try:
            text, reason = raw.decode("utf-8").rstrip("\r"), "" if taken else NOT_CSV
        except UnicodeDecodeError:
            text, reason = raw.decode("utf-8", "backslashreplace"), NOT_UTF8
        if text.strip():
            yield line + at, text, reason
        at += taken or 1
