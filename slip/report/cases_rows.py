"""Rows of a result that was written, read back for the page: as many as a page can hold, numbers as a person reads them."""

from __future__ import annotations

from pathlib import Path

import polars as pl

from slip.cases.write import Style
from slip.report.rows import NAME, Row, Table
from slip.report.words import factor, plain

MOST = 2000  # rows of the result on the page
WORDS = ("case", "bolt", "end")
TRUTHS = {"true": "yes", "false": "no"}
HEADS = {"open": "open", "holds": "holds", "case_holds": "case holds"}


def result_rows(path: Path, how: Style) -> tuple[Table, int]:
    """The first rows of a result as a table, and how many it has in all.

    Raises OSError, or an error of polars, where it cannot be read.
    """
    parquet = how.kind == "parquet"
    scan = pl.scan_parquet(path) if parquet else pl.scan_csv(path, separator=how.separator, infer_schema=False)
    total = int(scan.select(pl.len()).collect().item())
    frame = scan.head(MOST).collect().cast(pl.String)
    heads = [_head(name) for name in frame.columns]
    numbers = [name not in WORDS and name not in HEADS for name in frame.columns]
    limits = "required" if "required" in frame.columns else ""
    rows = []
    for cells in frame.iter_rows(named=True):
        required = _number(cells[limits], how.comma) if limits else None
        rows.append(Row([_cell(name, cells[name], required, how.comma) for name in frame.columns]))
    return Table(_caption(len(rows), total, path), heads, rows, (), _span(numbers)), total


def _caption(shown: int, total: int, path: Path) -> str:
    said = f"All {total} rows" if shown == total else f"The first {shown} of {total} rows"
    return f"{said} of {plain(path.name, NAME)}"


def _span(numbers: list[bool]) -> range:
    """The columns of the result's own numbers, which stand side by side."""
    last = numbers.index(False, 3) if False in numbers[3:] else len(numbers)
    return range(3, last)


def _head(name: str) -> str:
    own, bracket, unit = name.partition("[")
    return plain(f"{own.replace('_', ' ')} {bracket}{unit}".strip(), NAME)


def _cell(name: str, text: str | None, required: float | None, comma: bool) -> str:
    """A cell as the page shows it: factors as everywhere, forces to six digits, what was carried through as it is."""
    if text is None:
        return ""
    if name in HEADS:
        return TRUTHS.get(text, text)
    own = name.partition("[")[0]
    if own in ("clamp_low", "clamp_high", "shear", "required") and (value := _number(text, comma)) is not None:
        return f"{value:.6g}"
    if own in ("safety", "load_factor", "reserve_factor", "separation_factor"):
        limit = 1.0 if own == "reserve_factor" else required
        return factor(_number(text, comma), limit)
    return plain(text, NAME)


def _number(text: str | None, comma: bool) -> float | None:
    try:
        return float((text or "").replace(",", ".") if comma else text or "")
    except ValueError:
        return None
