"""`slip cases`: a table of load cases in, the envelope out."""

from __future__ import annotations

import argparse
import os
import signal
from contextlib import AbstractContextManager, nullcontext
from pathlib import Path
from typing import TYPE_CHECKING

from slip.base.errors import InputError, Problems
from slip.base.paths import refuse_overwriting
from slip.base.progress import Progress
from slip.commands.outcome import Outcome, report_options, units, write

if TYPE_CHECKING:
    from concurrent.futures import Executor

    from slip.cases.run import TableResult

TOP = 20  # governing rows in JSON and on the page, where nobody asks for another number


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("file", metavar="FILE", help="the joint file; its own load cases do not count")
    parser.add_argument("table", metavar="TABLE", help="CSV or Parquet: forces of each bolt, or loads of the joint")
    parser.add_argument("--out", metavar="OUT", help="write a row for each bolt and case: OUT.csv or OUT.parquet")
    parser.add_argument("--refused", metavar="OUT.csv", help="where rows that cannot be used go")
    parser.add_argument("--loads", metavar="TABLE", help="joint loads that the bolt forces are added up against")
    parser.add_argument("--top", metavar="N", type=int, help="list the N cases nearest to slip")
    parser.add_argument("--case", metavar="NAME", action="append", default=[], help="show and write this case only")
    parser.add_argument("--bolt", metavar="NAME", action="append", default=[], help="show and write this bolt only")
    parser.add_argument("--resume", action="store_true", help="go on with an interrupted run that wrote to OUT")
    parser.add_argument("--workers", metavar="N", type=int, default=1, help="processes that share the work")
    parser.add_argument("--json", action="store_true", help="the summary for programs, on standard output")
    report_options(parser)


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """Work the table, write what is asked for, and say what came out."""
    for name, value in (("--top", asked.top), ("--workers", asked.workers)):
        if value is not None and value < 1:
            write_ = f"write for instance {name} 4"
            raise Problems([InputError("out-of-limits", name, str(value), "1 or more", write_)])
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")  # the workers are processes; threads inside them only get in each other's way
    from slip.cases.run import check_table
    from slip.report.cases import cases_json, cases_text

    written = {
        name: Path(p) if p else None
        for name, p in (("--out", asked.out), ("--refused", asked.refused), ("--report", asked.report))
    }
    refuse_overwriting(written, [Path(p) for p in (asked.file, asked.table, asked.loads) if p])
    with _executor(asked.workers) as executor:
        found = check_table(
            asked.file,
            asked.table,
            asked.out,
            refused=asked.refused,
            loads=asked.loads,
            cases=asked.case,
            bolts=asked.bolt,
            units=units(asked),
            resume=asked.resume,
            executor=executor,
            ahead=2 * asked.workers,
            progress=progress,
        )
    if asked.report:
        _report(found, asked)
    chosen = asked.case, asked.bolt
    if asked.json:
        return Outcome(cases_json(found, units(asked), asked.top or TOP, *chosen), found.exit_code)
    return Outcome(cases_text(found, units(asked), asked.top, *chosen), found.exit_code)


def _executor(workers: int) -> AbstractContextManager[Executor | None]:
    """Processes that share the chunks; none for one worker."""
    if workers == 1:
        return nullcontext()
    from concurrent.futures import ProcessPoolExecutor
    from multiprocessing import get_context

    # A key press that interrupts reaches all processes; only this one answers it.
    deaf = signal.SIGINT, signal.SIG_IGN
    return ProcessPoolExecutor(workers, get_context("spawn"), initializer=signal.signal, initargs=deaf)


def _report(found: TableResult, asked: argparse.Namespace) -> None:
    from slip.report.cases_page import cases_page

    text = cases_page(found, asked.table, units(asked), asked.top or TOP, asked.case, asked.bolt)
    write(Path(asked.report), text, [Path(asked.file), Path(asked.table)])
