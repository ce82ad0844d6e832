"""A table whose cases lie scattered, as one listed bolt by bolt: their rows are brought together, on disk where they are many."""

from __future__ import annotations

import tempfile
from collections.abc import Iterator
from pathlib import Path

import polars as pl

from slip.cases.parse import LINE, Broken
from slip.cases.stream import CHUNK, ROWS, Chunk, Table
from slip.cases.write import told

LARGEST_PART = 8 * CHUNK  # bytes of a CSV that are sorted in memory
LARGEST_ROWS = 8 * ROWS
CASE, FIRST, PART = "_case", "_first", "_part"


def gathered(table: Table, size: int = 0) -> Iterator[Chunk]:
    """Chunks of whole cases, in the order in which the cases begin; in a table too large to be sorted in memory, part by part."""
    size = size or (LARGEST_ROWS if table.parquet else LARGEST_PART)
    parts = -(-table.total // size)
    with tempfile.TemporaryDirectory(prefix="slip-") as folder:
        broken = _distribute(table, Path(folder), parts)
        number = 0
        for part in range(parts):
            files = sorted(Path(folder, str(part)).glob("*.arrow"))
            if not files:
                continue
            frame = pl.concat([pl.read_ipc(file) for file in files])
            frame = frame.with_columns(pl.col(LINE).min().over(CASE).alias(FIRST)).sort(FIRST, LINE).drop(FIRST, PART)
            for rows in _whole_cases(frame):
                number += 1
                yield Chunk(rows.drop(CASE), int(rows[LINE][0]), number, tuple(broken))
                broken = []


def _distribute(table: Table, folder: Path, parts: int) -> list[Broken]:
    """Write the rows to files, those of a case always to the same part; what is no row comes back."""
    broken: list[Broken] = []
    table.rows = 0
    position, _ = table.form.columns["case"]
    for number, chunk in enumerate(table.chunks()):
        frame, lost = chunk.rows(table.form)
        broken += lost
        table.rows += frame.height + len(lost)
        case = pl.col(str(position)).str.strip_chars()
        frame = frame.with_columns(case.alias(CASE)).with_columns((pl.col(CASE).hash() % parts).alias(PART))
        with told(folder):
            for (part,), rows in frame.group_by(PART, maintain_order=True):
                place = folder / str(part)
                place.mkdir(exist_ok=True)
                rows.write_ipc(place / f"{number:06d}.arrow")
    return broken


def _whole_cases(frame: pl.DataFrame) -> Iterator[pl.DataFrame]:
    """Slices of some ROWS rows that end with a case."""
    starts = frame.select((pl.col(CASE).ne_missing(pl.col(CASE).shift(1))).arg_true()).to_series().to_list()
    begin = 0
    for start in [*starts[1:], frame.height]:
        if start - begin >= ROWS or start == frame.height:
            yield frame[begin:start]
            begin = start
