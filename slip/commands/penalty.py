"""`slip penalty`: which contact stiffness a finite-element model should have."""

from __future__ import annotations

import argparse
import os
from pathlib import Path

from slip.base.progress import Progress
from slip.commands.outcome import Outcome, report_options, units, write


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("--sweep", metavar="OUT.csv", help="write the error of every stiffness that was tried")
    parser.add_argument("--json", action="store_true", help="the result for programs, on standard output")
    report_options(parser)


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """The answer on the screen or as JSON; the sweep and a page where they are asked for."""
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
    from slip.report.penalty import penalty_json, penalty_text, sweep_csv
    from slip.stiffness.stage import penalty

    found = penalty(asked.file, progress)
    if asked.sweep:
        write(Path(asked.sweep), sweep_csv(found, units(asked)), [Path(asked.file)])
    said = penalty_json if asked.json else penalty_text
    return Outcome(said(found, units(asked)))
