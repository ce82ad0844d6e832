"""`slip cases`: a table of load cases in, the envelope out."""

from __future__ import annotations

import argparse
from concurrent.futures import Executor, ProcessPoolExecutor
from contextlib import AbstractContextManager, nullcontext
from multiprocessing import get_context
from pathlib import Path

from slip.base.errors import InputError, Problems
from slip.cases.run import Progress, TableResult, check_table
from slip.commands.outcome import Outcome, units, write
from slip.report.cases import cases_json, cases_text

TOP = 20  # governing rows in JSON and on the page, where nobody asks for another number


def cases(options: argparse.Namespace, progress: Progress | None) -> Outcome:
    """Work the table, write what is asked for, and say what came out."""
    if options.top is not None and options.top < 1:
        raise Problems(
            [InputError("out-of-limits", "--top", str(options.top), "1 or more", "write for instance --top 20")]
        )
    with _executor(options.workers) as executor:
        found = check_table(
            options.file,
            options.table,
            options.out,
            refused=options.refused,
            loads=options.loads,
            cases=options.case,
            bolts=options.bolt,
            units=units(options),
            resume=options.resume,
            executor=executor,
            ahead=2 * options.workers,
            progress=progress,
        )
    if options.report:
        _report(found, options)
    asked = options.case, options.bolt
    if options.json:
        return Outcome(cases_json(found, units(options), options.top or TOP, *asked), found.exit_code)
    return Outcome(cases_text(found, units(options), options.top, *asked), found.exit_code)


def _executor(workers: int) -> AbstractContextManager[Executor | None]:
    """Processes that share the chunks; none for one worker."""
    if workers < 1:
        raise Problems(
            [InputError("out-of-limits", "--workers", str(workers), "1 or more", "write for instance --workers 4")]
        )
    return nullcontext() if workers == 1 else ProcessPoolExecutor(workers, mp_context=get_context("spawn"))


def _report(found: TableResult, options: argparse.Namespace) -> None:
    from slip.report.cases_page import cases_page

    text = cases_page(found, options.table, units(options), options.top or TOP, options.case, options.bolt)
    write(Path(options.report), text, (Path(options.file), Path(options.table)))
