"""A table in chunks of whole cases, so that one larger than memory passes through little of it."""

from __future__ import annotations

import csv
import hashlib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np
import polars as pl

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.cases.form import Form, csv_form, parquet_form
from slip.cases.parse import EXTRA, LINE, Broken, parse
from slip.joint.joint import Joint
from slip.read.document import refuse

CHUNK = 8_000_000  # bytes of a CSV worked on together, some 150 000 rows
ROWS = 150_000  # of a Parquet table
HEAD = 1_000_000  # bytes in which the header and the first rows must stand
PARQUET = b"PAR1"
BROKEN = (pl.exceptions.PolarsError, pl.exceptions.PanicException)  # what the library says of a damaged table


@record(eq=False)
class Chunk:
    """Whole cases of a table: its bytes (CSV) or rows of text; line of the first; how far the table is read with it (bytes or rows)."""

    data: bytes | pl.DataFrame
    line: int
    until: int
    broken: tuple[Broken, ...] = ()

    def rows(self, form: Form) -> tuple[pl.DataFrame, list[Broken]]:
        """Rows of text, and what is no row."""
        return parse(self.data, form, self.line) if isinstance(self.data, bytes) else (self.data, list(self.broken))


class Table:
    """A table on disk: its form, its size, and its chunks. A file that grows is read to the size it had."""

    def __init__(self, path: Path, joint: Joint) -> None:
        self.path, self.file = path, str(path)
        self.rows = 0  # counted where they have to be gathered
        self.follow = True  # whether the digest grows as the table is read
        head = self._head()
        self.parquet = head[:4] == PARQUET
        self.size = path.stat().st_size
        self._digest = hashlib.sha256()
        if self.parquet:
            try:
                scan = pl.scan_parquet(path)
                schema = scan.collect_schema()
                _refuse_nested(schema, self.file)
                self.form = parquet_form(list(schema), joint, self.file)
                self.total = int(scan.select(pl.len()).collect().item())
            except BROKEN as error:
                raise refuse(
                    "table-broken", self.file, first_line(error), "a Parquet table", "write it again"
                ) from None
            if not self.total:
                raise refuse("table-empty", self.file, "a header and no rows", "rows below it", "write the table again")
        else:
            self.form = csv_form(head[: head.rfind(b"\n") + 1] if len(head) == HEAD else head, joint, self.file)
            self.total = self.size

    @property
    def digest(self) -> str:
        """SHA-256 of what has been read."""
        return self._digest.hexdigest()

    @property
    def grown(self) -> int:
        """Bytes by which the file has grown, or shrunk, since reading began."""
        try:
            return self.path.stat().st_size - self.size
        except OSError:
            return -self.size

    def _head(self) -> bytes:
        try:
            if self.path.exists() and not self.path.is_file():
                expected, remedy = "a file that can be read twice", "write the table to a file first"
                raise refuse("file-unreadable", self.file, "no regular file", expected, remedy)
            with open(self.path, "rb") as file:
                return file.read(HEAD)
        except FileNotFoundError:
            raise refuse("file-missing", self.file, "no such table", "an existing file", "check the path") from None
        except (OSError, ValueError) as error:
            reason = str(getattr(error, "strerror", None) or error).lower()
            raise refuse(
                "file-unreadable", self.file, reason, "a readable table", "check path and permissions"
            ) from None

    def chunks(self, start: int = 0, line: int = 0, size: int = 0) -> Iterator[Chunk]:
        """Chunks of whole cases from `start` (bytes or rows) on, whose first row is on `line`; size: of a chunk, for tests."""
        try:
            if self.parquet:
                yield from self._of_rows(start, size or ROWS)
            else:
                yield from self._of_bytes(start or self.form.offset, line or self.form.line, size or CHUNK)
        except BROKEN as error:
            raise refuse(
                "table-broken", self.file, first_line(error), "the rest of a Parquet table", "write it again"
            ) from None
        except OSError as error:
            reason = (error.strerror or str(error)).lower()
            remedy = "bring the table back and go on with --resume"
            raise Problems(
                [InputError("file-unreadable", "", reason, "the rest of the table", remedy, self.file)]
            ) from None

    def read_before(self, start: int) -> str:
        """Digest of the first `start` bytes, which are then counted as read."""
        self._digest = hashlib.sha256()
        with open(self.path, "rb") as file:
            while start > 0 and (data := file.read(min(start, CHUNK))):
                self._digest.update(data)
                start -= len(data)
        return self.digest

    def read_whole(self) -> str:
        """Digest of the whole table, for one that is read in no order that a digest could follow."""
        self.follow = False
        return self.read_before(self.size)

    def _note(self, data: bytes) -> None:
        if self.follow:
            self._digest.update(data)

    def _of_bytes(self, start: int, line: int, size: int) -> Iterator[Chunk]:
        with open(self.path, "rb") as file:
            if start <= self.form.offset:
                self._note(file.read(start))
            file.seek(start)
            kept, left = b"", self.size - start
            while left > 0:
                fresh = file.read(min(size, left))
                left = left - len(fresh) if fresh else 0
                kept += fresh
                end = len(kept) if left <= 0 else last_case(kept, self.form)
                if not end:
                    continue  # one case fills the whole chunk: read on
                data, kept = kept[:end], kept[end:]
                self._note(data)
                start += end
                yield Chunk(data, line, start)
                line += data.count(b"\n")

    def _of_rows(self, start: int, size: int) -> Iterator[Chunk]:
        names = [str(i) for i in range(self.form.width)]
        scan = pl.scan_parquet(self.path)
        position, _ = self.form.columns["case"]
        kept: pl.DataFrame | None = None
        at = start
        while at < self.total:
            fresh = scan.slice(at, size).collect().cast(pl.String)
            fresh.columns = names
            lines = pl.int_range(at + 1, at + 1 + fresh.height, dtype=pl.Int64, eager=True)
            fresh = fresh.with_columns(pl.lit(None, dtype=pl.String).alias(EXTRA), lines.alias(LINE))
            at += fresh.height
            frame = fresh if kept is None else pl.concat([kept, fresh])
            if at < self.total:
                case = frame[str(position)]
                last = int((case.ne_missing(case[-1])).arg_true()[-1] or 0) + 1 if case.n_unique() > 1 else 0
                kept, frame = frame[last:], frame[:last]
                if not frame.height:
                    continue
            yield Chunk(frame, int(frame[LINE][0]), int(frame[LINE][-1]))


def last_case(data: bytes, form: Form) -> int:
    """Where the last case of some whole and perhaps one broken row begins; 0 where there is no other before it.

    A row ends at a line break outside quotes, or at any where the quotes do not close.
    """
    ends = np.append(-1, _row_ends(data))
    position, _ = form.columns["case"]
    after, last = len(data), None
    for i in range(len(ends) - 1, 0, -1):
        row = data[ends[i - 1] + 1 : ends[i] + 1]
        cells = next(csv.reader([row.decode("utf-8", "replace").rstrip("\r\n")], delimiter=form.separator), [])
        case = cells[position].strip() if position < len(cells) else ""
        if not case:
            continue
        if last is None:
            last = case
        elif case != last:
            return after
        after = int(ends[i - 1]) + 1
    return 0


def _row_ends(data: bytes) -> np.ndarray[Any, np.dtype[np.int64]]:
    """Places of the line breaks that end rows."""
    raw = np.frombuffer(data, dtype=np.uint8)
    breaks = np.flatnonzero(raw == 10)
    if b'"' in data:
        quotes = np.flatnonzero(raw == 34)
        outside = np.searchsorted(quotes, breaks) % 2 == 0
        if outside.any():
            return breaks[outside]
    return breaks


def _refuse_nested(schema: pl.Schema, file: str) -> None:
    """Lists, structures and raw bytes have no text to be carried through."""
    for name, kind in schema.items():
        if kind.is_nested() or kind in (pl.Binary, pl.Object, pl.Duration):
            expected = "columns of numbers, texts, dates or flags"
            raise refuse(
                "table-column-kind", file, f"{name} of kind {kind}", expected, "leave the column out of the table"
            )


def first_line(error: BaseException) -> str:
    """The first line of a library's error."""
    return str(error).strip().split("\n")[0][:120]
