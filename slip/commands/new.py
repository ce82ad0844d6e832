"""`slip new`: a commented joint file to start from."""

from __future__ import annotations

import argparse

from slip.base.errors import InputError, Problems
from slip.base.progress import Progress
from slip.commands.outcome import Outcome, not_written


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    kinds = ("bolted", "lap", "contact")
    parser.add_argument("path", metavar="PATH")
    parser.add_argument("--kind", choices=kinds, default="bolted", help="what is pressed together")


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """Write the file; never over an existing one."""
    from slip.read.template import template

    text = template(asked.kind)
    try:
        with open(asked.path, "x", encoding="utf-8") as file:
            file.write(text)
    except FileExistsError:
        raise Problems(
            [InputError("file-exists", "", "an existing file", "a new path", "choose another name", asked.path)]
        ) from None
    except OSError as error:
        raise not_written(asked.path, error) from None
    return Outcome(f"wrote {asked.path}; next: slip check {asked.path}")
