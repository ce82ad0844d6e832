"""The command `slip`: the only file that prints."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

import slip
from slip.base.errors import InputError, Problems, SlipError
from slip.base.units import SYSTEMS, System

INPUT_WRONG, FAULT, INTERRUPTED = 2, 4, 130


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit code of the contract."""
    options = _parser().parse_args(arguments)
    try:
        code = int(options.run(options))
        sys.stdout.flush()
        return code
    except Problems as problems:
        return _say_problems(problems, getattr(options, "json", False))
    except SlipError as error:
        print(f"slip: {error}", file=sys.stderr)
        return FAULT
    except KeyboardInterrupt:
        print("slip: interrupted; nothing was written", file=sys.stderr)
        return INTERRUPTED
    except BrokenPipeError:  # the reader of a pipe has left; there is nobody to tell
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except Exception as error:  # a fault of ours must not look like one of the input
        place = _place(error)
        print(
            f"slip: a fault of the program, not of your input: {type(error).__name__}: {error} ({place})",
            file=sys.stderr,
        )
        return FAULT


def _place(error: BaseException) -> str:
    """Module and line of the last frame of a traceback, for a report of the fault."""
    trace = error.__traceback__
    while trace is not None and trace.tb_next is not None:
        trace = trace.tb_next
    return f"{Path(trace.tb_frame.f_code.co_filename).name}, line {trace.tb_lineno}" if trace else "unknown place"


def _say_problems(problems: Problems, as_json: bool) -> int:
    if as_json:
        from slip.report.machine import errors_text

        print(errors_text(problems))
    else:
        for error in problems.errors:
            print(f"slip: {error}", file=sys.stderr)
    return INPUT_WRONG


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="slip",
        description="Proves that a bolted, friction-clamped joint does not slip, with every number traceable.",
        epilog="Exit: 0 holds, 1 fails, 2 input wrong, 3 not solved, 4 fault of the program, 130 interrupted.",
    )
    parser.add_argument("--version", action="version", version=f"slip {slip.__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")

    def command(name: str, run: Callable[[argparse.Namespace], int], help: str) -> argparse.ArgumentParser:
        sub = commands.add_parser(name, help=help, description=help)
        sub.set_defaults(run=run)
        return sub

    new = command("new", _new, "write a commented joint file; never over an existing one")
    new.add_argument("path", metavar="PATH")
    new.add_argument("--kind", choices=("bolted", "lap", "contact"), default="bolted", help="what is pressed together")
    check = command("check", _check, "does the joint slip?")
    check.add_argument("file", metavar="FILE")
    check.add_argument("--json", action="store_true", help="the result for programs, on standard output")
    check.add_argument("--report", metavar="OUT.html", help="write one self-contained page")
    check.add_argument("--units", choices=tuple(SYSTEMS), help="units of the result; default those of the file")
    explain = command("explain", _explain, "every number with formula, numbers put in, source and basis")
    explain.add_argument("file", metavar="FILE")
    explain.add_argument("case", metavar="CASE", nargs="?", help="default: the governing case")
    explain.add_argument("bolt", metavar="BOLT", nargs="?", help="default: the governing bolt")
    explain.add_argument("--json", action="store_true", help="the lines for programs, on standard output")
    tables = command("tables", _tables, "the data with source and basis")
    tables.add_argument("word", metavar="WORD", nargs="?", default="", help="rows that hold the word")
    return parser


def _units(options: argparse.Namespace) -> System | None:
    return SYSTEMS[options.units] if options.units else None


def _check(options: argparse.Namespace) -> int:
    from slip.assess import assess

    assessment = assess(options.file)
    if options.report:
        from slip.report.page import page

        _write(Path(options.report), page(assessment, _units(options)), source=Path(options.file))
    if options.json:
        from slip.report.machine import text

        print(text(assessment, _units(options)))
    else:
        from slip.report.terminal import check_text

        print(check_text(assessment, _units(options)), end="")
    return assessment.verdict.exit_code


def _explain(options: argparse.Namespace) -> int:
    from slip.assess import assess
    from slip.report.equations import explain

    assessment = assess(options.file)
    explanation = explain(assessment, options.case, options.bolt)
    if options.json:
        from slip.report.machine import explanation_text

        print(explanation_text(explanation))
    else:
        from slip.report.terminal import explain_text

        print(explain_text(explanation, assessment.joint.system), end="")
    return 0


def _tables(options: argparse.Namespace) -> int:
    from slip.report.terminal import tables_text

    found = tables_text(options.word)
    if not found:
        raise Problems(
            [InputError("no-row", "WORD", options.word, "a word of some table", "slip tables lists the tables")]
        )
    print(found, end="")
    return 0


def _new(options: argparse.Namespace) -> int:
    from slip.read.template import template

    text = template(options.kind)
    try:
        with open(options.path, "x", encoding="utf-8") as file:
            file.write(text)
    except FileExistsError:
        raise Problems(
            [InputError("file-exists", "", "an existing file", "a new path", "choose another name", options.path)]
        ) from None
    except OSError as error:
        raise _not_written(options.path, error) from None
    print(f"wrote {options.path}; next: slip check {options.path}")
    return 0


def _write(path: Path, text: str, source: Path) -> None:
    """Write beside and replace, so that a report is whole or not there."""
    if path.resolve() == source.resolve():
        remedy = "choose another name for the report"
        raise Problems(
            [InputError("report-over-input", "--report", "the joint file itself", "another path", remedy, str(path))]
        )
    beside = path.with_name(path.name + ".part")
    try:
        beside.write_text(text, encoding="utf-8")
        beside.replace(path)
    except OSError as error:
        beside.unlink(missing_ok=True)
        raise _not_written(str(path), error) from None


def _not_written(path: str, error: OSError) -> Problems:
    reason = (error.strerror or str(error)).lower()
    return Problems(
        [InputError("not-written", "", reason, "a path that can be written", "check folder and permissions", path)]
    )
