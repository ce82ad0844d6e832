"""The command `slip`: the only file that prints."""

from __future__ import annotations

import argparse
import os
import sys
import time
from collections.abc import Sequence
from importlib import import_module
from pathlib import Path

import slip
from slip.base.errors import NotConverged, Problems, SlipError
from slip.commands.outcome import Outcome, not_written

INPUT_WRONG, NOT_SOLVED, FAULT, INTERRUPTED = 2, 3, 4, 130


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit code of the contract."""
    arguments = sys.argv[1:] if arguments is None else list(arguments)
    options = _parser(arguments).parse_args(arguments)
    as_json = getattr(options, "json", False)
    meter = _Meter() if sys.stderr.isatty() else None
    try:
        try:
            outcome = options.run(options, meter)
        finally:
            if meter is not None:
                meter.clear()
        return _say(outcome, as_json)
    except (Problems, NotConverged) as error:
        code = INPUT_WRONG if isinstance(error, Problems) else NOT_SOLVED
        return _say_error(error, code, as_json)
    except SlipError as error:
        print(f"slip: {error}", file=sys.stderr)
        return FAULT
    except KeyboardInterrupt as interrupt:
        print(f"slip: interrupted; {str(interrupt) or 'nothing was written'}", file=sys.stderr)
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
        print(f"slip: {not_written('standard output', error)}", file=sys.stderr)
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


class _Meter:
    """A line on standard error that says how far a long run has come; only for somebody who waits at a terminal."""

    PATIENCE, WIDTH = 1.0, 30  # seconds before it shows; columns of the bar

    def __init__(self) -> None:
        self.start, self.shown = time.monotonic(), False

    def __call__(self, done: int, total: int) -> None:
        """Show how much is done, once the run has taken a while."""
        spent = time.monotonic() - self.start
        if spent < self.PATIENCE or not total:
            return
        share = done / total
        left = f", {spent * (1 - share) / share:.0f} s left" if share else ""
        bar = ("=" * round(self.WIDTH * share)).ljust(self.WIDTH)
        print(f"\r[{bar}] {share:4.0%}{left}\033[K", end="", file=sys.stderr, flush=True)
        self.shown = True

    def clear(self) -> None:
        """Take the line away."""
        if self.shown:
            print("\r\033[K", end="", file=sys.stderr, flush=True)


# the command line


# Command and the line that describes it. Its module in slip.commands is loaded when it is asked for, or for the help of all.
COMMANDS = {
    "new": "write a commented joint file; never over an existing one",
    "check": "does the joint slip?",
    "cases": "many load cases: a table in, the envelope out",
    "penalty": "the contact stiffness that a finite-element model should have",
    "explain": "every number with formula, numbers put in, source and basis",
    "tables": "the data with source and basis",
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
    for name, said in COMMANDS.items():
        if asked is None or name == asked:
            command = import_module(f"slip.commands.{name}")
            sub = commands.add_parser(name, help=said, description=said, formatter_class=_Help)
            sub.set_defaults(run=command.run)
            command.options(sub)
    return parser
