"""Results written chunk by chunk, so that what is finished is usable whatever happens later, and a run can go on from there."""

from __future__ import annotations

import io
import json
import os
import shutil
from pathlib import Path
from typing import Any

import polars as pl

from slip.base.errors import InputError, Problems
from slip.base.records import record

KINDS = {".csv": "csv", ".parquet": "parquet", ".pq": "parquet"}


@record
class Style:
    """How the result is written: "csv" or "parquet", '' for not at all; the sign between the cells and whether decimals have a comma."""

    kind: str = ""
    separator: str = ","
    comma: bool = False


def style(out: Path | None, separator: str, comma: bool) -> Style:
    """The style by the ending of a path; a CSV is written like the table that was read. Raises Problems for another ending."""
    if out is None:
        return Style()
    kind = KINDS.get(out.suffix.lower())
    if kind is None:
        remedy = "name it for instance results.csv or results.parquet"
        found = f'the ending "{out.suffix}"'
        raise Problems([InputError("out-ending", "--out", found, ".csv or .parquet", remedy, str(out))])
    return Style(kind, separator or ",", comma)


def encoded(table: pl.DataFrame, how: Style, header: bool = False) -> bytes:
    """A table as the bytes of its file, a CSV without its header unless asked for."""
    buffer = io.BytesIO()
    if how.kind == "parquet":
        table.write_parquet(buffer)
    else:
        table.write_csv(buffer, include_header=header, separator=how.separator, decimal_comma=how.comma)
    return buffer.getvalue()


class Output:
    """One file that grows: a CSV beside its final name, or Parquet pieces in a folder, which are joined at the end."""

    def __init__(self, path: Path, how: Style) -> None:
        self.path, self.how = path, how
        self.partial = path.with_name(f"{path.name}.{'pieces' if how.kind == 'parquet' else 'part'}")
        self.size = 0  # bytes, or pieces

    def begin(self, size: int = 0) -> None:
        """Start anew, or go on behind the first `size` bytes or pieces."""
        self.size = size
        with told(self.partial):
            if not size:
                self.discard()
            elif self.how.kind == "parquet":
                for piece in self.partial.glob("*.parquet"):
                    if int(piece.stem) >= size:
                        piece.unlink()
            else:
                if self.partial.stat().st_size < size:
                    raise OSError("it is shorter than what was written")
                os.truncate(self.partial, size)

    def add(self, data: bytes) -> None:
        """Write one chunk; all of it or, when that fails, none that counts."""
        with told(self.partial):
            if self.how.kind == "parquet":
                self.partial.mkdir(exist_ok=True)
                (self.partial / f"{self.size:06d}.parquet").write_bytes(data)
                self.size += 1
            elif data:
                with open(self.partial, "ab") as file:
                    file.write(data)
                    file.flush()
                    os.fsync(file.fileno())
                self.size += len(data)

    def finish(self) -> None:
        """Give the result its name."""
        with told(self.path):
            if self.how.kind != "parquet":
                self.partial.replace(self.path)
                return
            whole = self.path.with_name(f"{self.path.name}.part")
            pl.scan_parquet(sorted(self.partial.glob("*.parquet"))).sink_parquet(whole)
            whole.replace(self.path)
            shutil.rmtree(self.partial)

    def discard(self) -> None:
        """Take away what is not finished."""
        if self.how.kind == "parquet":
            shutil.rmtree(self.partial, ignore_errors=True)
        else:
            self.partial.unlink(missing_ok=True)


class Checkpoint:
    """From where a run can go on: a small file beside the result, written anew after each chunk."""

    def __init__(self, out: Path) -> None:
        self.path = out.with_name(f"{out.name}.resume")

    def save(self, state: dict[str, Any]) -> None:
        """Replace what is there by a new state."""
        beside = self.path.with_name(f"{self.path.name}.part")
        with told(self.path):
            beside.write_text(json.dumps(state), encoding="utf-8")
            beside.replace(self.path)

    def load(self) -> dict[str, Any]:
        """The state; Problems where there is none that can be read."""
        try:
            found = json.loads(self.path.read_text(encoding="utf-8"))
            if not isinstance(found, dict):
                raise ValueError
        except (OSError, ValueError):
            remedy = "leave out --resume to begin anew"
            found_, expected = "no unfinished run to go on with", f"the file {self.path.name} of an interrupted run"
            raise Problems([InputError("no-resume", "--resume", found_, expected, remedy, str(self.path))]) from None
        return found

    def remove(self) -> None:
        """Take it away when all is done."""
        self.path.unlink(missing_ok=True)


class told:
    """An error of the disk, as one sentence that says what is kept."""

    def __init__(self, path: Path) -> None:
        self.path = path

    def __enter__(self) -> None:
        pass

    def __exit__(self, kind: Any, error: BaseException | None, trace: Any) -> None:
        if isinstance(error, (OSError, pl.exceptions.PolarsError)):
            reason = (getattr(error, "strerror", None) or str(error)).strip().split("\n")[0].lower()
            remedy = "make room or choose another place; --resume goes on behind what is finished, if anything is"
            expected = "a path that can be written"
            raise Problems([InputError("not-written", "", reason, expected, remedy, str(self.path))]) from None
