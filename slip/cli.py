"""The command `slip`: the only file that prints."""

from __future__ import annotations

import argparse
import contextlib
import gc
import os
import sys
import time
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, NamedTuple

import slip
from slip.base.errors import InputError, NotConverged, Problems, SlipError
from slip.base.units import SYSTEMS, System

if TYPE_CHECKING:
    from slip.assess import Assessment, FaceAssessment, PressedAssessment

INPUT_WRONG, NOT_SOLVED, FAULT, INTERRUPTED = 2, 3, 4, 130


class Outcome(NamedTuple):
    """What a command says on standard output, and its exit code."""

    text: str
    code: int = 0


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit code of the contract."""
    arguments = sys.argv[1:] if arguments is None else list(arguments)
    options = _parser(arguments).parse_args(arguments)
    as_json = getattr(options, "json", False)
    try:
        return _say(options.run(options), as_json)
    except (Problems, NotConverged) as error:
        code = INPUT_WRONG if isinstance(error, Problems) else NOT_SOLVED
        return _say_error(error, code, as_json)
    except SlipError as error:
        print(f"slip: {error}", file=sys.stderr)
        return FAULT
    except KeyboardInterrupt as interrupt:
        print(f"slip: interrupted; {interrupt or 'nothing was written'}", file=sys.stderr)
        return INTERRUPTED
    except Exception as error:  # a fault of ours must not look like one of the input
        said = f"a fault of the program, not of your input: {type(error).__name__}: {error} ({_place(error)})"
        print(f"slip: {said}", file=sys.stderr)
        return FAULT


def _say(outcome: Outcome, as_json: bool) -> int:
    """Print what a command says; the exit code is the command's own, also when nobody reads to the end."""
    if hasattr(sys.stdout, "reconfigure"):  # a terminal that lacks a character shows its code; JSON is UTF-8 everywhere
        sys.stdout.reconfigure(errors="backslashreplace", **({"encoding": "utf-8"} if as_json else {}))
    try:
        print(outcome.text, end="" if outcome.text.endswith("\n") else "\n", flush=True)
    except BrokenPipeError:  # the reader of a pipe has left; there is nobody to tell
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except OSError as error:  # a full disk behind a redirection
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        print(f"slip: {_not_written('standard output', error)}", file=sys.stderr)
        return INPUT_WRONG
    return outcome.code


def _say_error(error: Problems | NotConverged, code: int, as_json: bool) -> int:
    if as_json:
        from slip.report.machine import errors_text

        return _say(Outcome(errors_text(error), code), as_json)
    for one in error.errors if isinstance(error, Problems) else (error,):
        print(f"slip: {one}", file=sys.stderr)
    return code


def _place(error: BaseException) -> str:
    """Module and line of the last frame of a traceback, for a report of the fault."""
    trace = error.__traceback__
    while trace is not None and trace.tb_next is not None:
        trace = trace.tb_next
    return f"{Path(trace.tb_frame.f_code.co_filename).name}, line {trace.tb_lineno}" if trace else "unknown place"


# the commands


def _assess(path: str) -> Assessment | PressedAssessment | FaceAssessment:
    """The assessment of a joint file. Nothing is garbage while the modules load; looking for it costs a twentieth of the start.

    All matrices here are small: threads of the linear algebra library only cost time to start, a fifth of a check.
    """
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
    collecting = gc.isenabled()
    gc.disable()
    try:
        from slip.assess import assess
    finally:
        if collecting:
            gc.enable()
    return assess(path)


def _check(options: argparse.Namespace) -> Outcome:
    assessment = _assess(options.file)
    if assessment.pressed == "face":
        return _check_face(assessment, options)
    if assessment.pressed:
        return _check_pressed(assessment, options)
    if options.report:
        from slip.report.page import page

        _write(Path(options.report), page(assessment, _units(options)), source=Path(options.file))
    code = assessment.verdict.exit_code
    if options.json:
        from slip.report.machine import text

        return Outcome(text(assessment, _units(options)), code)
    from slip.report.terminal import check_text

    return Outcome(check_text(assessment, _units(options)), code)


def _check_pressed(assessment: PressedAssessment, options: argparse.Namespace) -> Outcome:
    if options.report:
        from slip.report.pressed_page import pressed_page

        _write(Path(options.report), pressed_page(assessment, _units(options)), source=Path(options.file))
    from slip.report.pressed import pressed_json, pressed_text

    code = assessment.verdict.exit_code
    said = pressed_json if options.json else pressed_text
    return Outcome(said(assessment, _units(options)), code)


def _check_face(assessment: FaceAssessment, options: argparse.Namespace) -> Outcome:
    if options.report:
        raise _not_of_face("--report", options.file)
    from slip.report.face import face_json, face_text

    said = face_json if options.json else face_text
    return Outcome(said(assessment, _units(options)), assessment.verdict.exit_code)


def _not_of_face(what: str, file: str) -> Problems:
    remedy = "slip check FILE --json has every number of such a face"
    return Problems([InputError("face-not-yet", what, "a face of known pressure", "a joint with bolts", remedy, file)])


def _explain(options: argparse.Namespace) -> Outcome:
    assessment = _assess_in_table(options) if options.table else _assess(options.file)
    if assessment.pressed == "face":
        raise _not_of_face("explain", options.file)
    if assessment.pressed:
        return _explain_pressed(assessment, options)
    from slip.report.equations import explain

    explanation = explain(assessment, options.case, options.bolt)
    if options.json:
        from slip.report.machine import explanation_text

        return Outcome(explanation_text(explanation))
    from slip.report.explained import explain_text

    return Outcome(explain_text(explanation, assessment))


def _assess_in_table(options: argparse.Namespace) -> Assessment:
    """One case of a table."""
    from slip.cases.single import assess_case

    return assess_case(options.file, options.table, options.case)


def _explain_pressed(assessment: PressedAssessment, options: argparse.Namespace) -> Outcome:
    from slip.report.machine import explanation_text
    from slip.report.pressed_lines import explain_pressed, explain_pressed_text

    explanation = explain_pressed(assessment, options.case, options.bolt)
    return Outcome(explanation_text(explanation) if options.json else explain_pressed_text(explanation, assessment))


def _cases(options: argparse.Namespace) -> Outcome:
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
    from slip.commands.cases import cases

    return cases(options, _meter())


def _meter() -> Callable[[int, int], None] | None:
    """A line on standard error that says how far a long run has come; only for somebody who looks at a terminal."""
    if not sys.stderr.isatty():
        return None
    start, width = time.monotonic(), 30

    def show(done: int, total: int) -> None:
        share = done / total if total else 1.0
        left = (time.monotonic() - start) * (1 - share) / share if share else 0.0
        bar = ("=" * round(width * share)).ljust(width)
        end = "\r\033[K" if done >= total else ""
        print(f"\r[{bar}] {share:4.0%}, {left:.0f} s left ", end=end, file=sys.stderr, flush=True)

    return show


def _tables(options: argparse.Namespace) -> Outcome:
    from slip.report.listing import tables_text

    found = tables_text(options.word)
    if not found:
        remedy = "slip tables lists the tables"
        raise Problems([InputError("no-row", "WORD", options.word, "a word of some table", remedy)])
    return Outcome(found)


def _new(options: argparse.Namespace) -> Outcome:
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
    return Outcome(f"wrote {options.path}; next: slip check {options.path}")


def _units(options: argparse.Namespace) -> System | None:
    return SYSTEMS[options.units] if options.units else None


def _write(path: Path, text: str, source: Path) -> None:
    """Write beside and replace, so that a report is whole or not there."""
    if path.resolve() == source.resolve():
        remedy = "choose another name for the report"
        raise Problems(
            [InputError("report-over-input", "--report", "the joint file itself", "another path", remedy, str(path))]
        )
    beside = path.parent / f"{path.name}.{os.getpid()}.part"
    try:
        beside.write_text(text, encoding="utf-8")
        beside.replace(path)
    except OSError as error:
        with contextlib.suppress(OSError):
            beside.unlink()
        raise _not_written(str(path), error) from None


def _not_written(path: str, error: OSError) -> Problems:
    reason = (error.strerror or str(error)).lower()
    return Problems(
        [InputError("not-written", "", reason, "a path that can be written", "check folder and permissions", path)]
    )


# the command line


def _new_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("path", metavar="PATH")
    parser.add_argument(
        "--kind", choices=("bolted", "lap", "contact"), default="bolted", help="what is pressed together"
    )


def _check_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("--json", action="store_true", help="the result for programs, on standard output")
    parser.add_argument("--report", metavar="OUT.html", help="write one self-contained page")
    parser.add_argument("--units", choices=tuple(SYSTEMS), help="units of the result; default those of the file")


def _explain_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("case", metavar="CASE", nargs="?", help="default: the governing case")
    parser.add_argument("bolt", metavar="BOLT", nargs="?", help="default: the governing bolt")
    parser.add_argument("--table", metavar="TABLE", help="the case stands in this table of load cases")
    parser.add_argument("--json", action="store_true", help="the lines for programs, on standard output")


def _cases_options(parser: argparse.ArgumentParser) -> None:
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
    parser.add_argument("--report", metavar="OUT.html", help="write one self-contained page")
    parser.add_argument("--units", choices=tuple(SYSTEMS), help="units of the result; default those of the file")


def _tables_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("word", metavar="WORD", nargs="?", default="", help="rows that hold the word")


class Command(NamedTuple):
    """What runs, the line that describes it, and what adds its options to a parser."""

    run: Callable[[argparse.Namespace], Outcome]
    help: str
    options: Callable[[argparse.ArgumentParser], None]


COMMANDS = {
    "new": Command(_new, "write a commented joint file; never over an existing one", _new_options),
    "check": Command(_check, "does the joint slip?", _check_options),
    "cases": Command(_cases, "many load cases: a table in, the envelope out", _cases_options),
    "explain": Command(_explain, "every number with formula, numbers put in, source and basis", _explain_options),
    "tables": Command(_tables, "the data with source and basis", _tables_options),
}


class _Help(argparse.HelpFormatter):
    """Help at a fixed width: asking for the terminal's loads the archive libraries at every start."""

    def __init__(self, prog: str) -> None:
        super().__init__(prog, width=78)


def _parser(arguments: Sequence[str]) -> argparse.ArgumentParser:
    """The parser of the command that is asked for, of all where none is: building the others costs at every start."""
    parser = argparse.ArgumentParser(
        prog="slip",
        description="Proves that a bolted, friction-clamped joint does not slip, with every number traceable.",
        epilog="Exit: 0 holds, 1 fails, 2 input wrong, 3 not solved, 4 fault of the program, 130 interrupted.",
        formatter_class=_Help,
    )
    parser.add_argument("--version", action="version", version=f"slip {slip.__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND", prog="slip")
    asked = arguments[0] if arguments and arguments[0] in COMMANDS else None
    for name, command in COMMANDS.items():
        if asked is None or name == asked:
            sub = commands.add_parser(name, help=command.help, description=command.help, formatter_class=_Help)
            sub.set_defaults(run=command.run)
            command.options(sub)
    return parser
