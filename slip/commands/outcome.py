"""What a command hands back, and how it writes a file."""

from __future__ import annotations

import argparse
import contextlib
import os
from collections.abc import Iterable
from pathlib import Path
from typing import NamedTuple

from slip.base.errors import InputError, Problems
from slip.base.units import SYSTEMS, System


class Outcome(NamedTuple):
    """What a command says on standard output, and its exit code."""

    text: str
    code: int = 0


def report_options(parser: argparse.ArgumentParser) -> None:
    """The options of every command that can write a page."""
    parser.add_argument("--report", metavar="OUT.html", help="write one self-contained page")
    parser.add_argument("--units", choices=tuple(SYSTEMS), help="units of the result; default those of the file")


def units(asked: argparse.Namespace) -> System | None:
    """The system of units that is asked for, None for that of the file."""
    return SYSTEMS[asked.units] if asked.units else None


def write(path: Path, text: str, sources: Iterable[Path]) -> None:
    """Write beside and replace, so that a report is whole or not there."""
    if path.resolve() in [source.resolve() for source in sources]:
        remedy = "choose another name for the report"
        raise Problems(
            [InputError("report-over-input", "--report", "an input file", "another path", remedy, str(path))]
        )
    beside = path.parent / f"{path.name}.{os.getpid()}.part"
    try:
        beside.write_text(text, encoding="utf-8")
        beside.replace(path)
    except OSError as error:
        with contextlib.suppress(OSError):
            beside.unlink()
        raise not_written(str(path), error) from None


def not_written(path: str, error: OSError) -> Problems:
    """The fault of a path that cannot be written."""
    reason = (error.strerror or str(error)).lower()
    return Problems(
        [InputError("not-written", "", reason, "a path that can be written", "check folder and permissions", path)]
    )
