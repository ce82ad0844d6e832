"""`slip tables`: the data with source and basis."""

from __future__ import annotations

import argparse

from slip.base.errors import InputError, Problems
from slip.base.progress import Progress
from slip.commands.outcome import Outcome


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("word", metavar="WORD", nargs="?", default="", help="rows that hold the word")


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """The tables, or the rows that hold a word."""
    from slip.report.listing import tables_text

    found = tables_text(asked.word)
    if not found:
        remedy = "slip tables lists the tables"
        raise Problems([InputError("no-row", "WORD", asked.word, "a word of some table", remedy)])
    return Outcome(found)
