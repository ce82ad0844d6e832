"""What published and derived tests share: recorded checks, from which docs/validation.md is made, and joint files run whole."""

from __future__ import annotations

import io
import json
import re
from collections.abc import Callable
from contextlib import redirect_stdout
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest

from slip.base.tables import BASES
from slip.cli import main

COLUMNS = ("check", "what", "source", "basis", "printed", "computed", "difference")


@dataclass(frozen=True)
class Row:
    """One recorded check as it stands in the table."""

    id: str
    what: str
    source: str
    basis: str
    printed: str
    computed: str
    difference: str

    def order(self) -> tuple[list[tuple[int, str]], str, str]:
        """Sorts 2 before 10 and 16 before 16a."""
        parts = re.findall(r"\d+|\D+", self.id)
        return [(int(p), "") if p.isdigit() else (-1, p) for p in parts], self.what, self.printed

    def line(self) -> str:
        """The row in Markdown."""
        cells = (self.id, self.what, self.source, self.basis, self.printed, self.computed, self.difference)
        return "| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |"


ROWS = pytest.StashKey[dict[Row, None]]()


def pytest_addoption(parser: pytest.Parser) -> None:
    said = "write the recorded checks as a Markdown table; only when every test has passed"
    parser.addoption("--validation", metavar="FILE", default=None, help=said)


def pytest_configure(config: pytest.Config) -> None:
    config.stash[ROWS] = {}


def pytest_sessionfinish(session: pytest.Session, exitstatus: int) -> None:
    target = session.config.getoption("--validation")
    if target and exitstatus == 0:
        Path(target).write_text(table(list(session.config.stash[ROWS])), encoding="utf-8", newline="\n")


def pytest_terminal_summary(terminalreporter: Any, exitstatus: int, config: pytest.Config) -> None:
    if config.getoption("--validation") and exitstatus != 0:
        terminalreporter.write_line("--validation: not written, since a check that fails would be missing in it")


def table(rows: list[Row]) -> str:
    """Markdown table of the rows, sorted by check."""
    lines = ["| " + " | ".join(COLUMNS) + " |", "|" + " --- |" * len(COLUMNS)]
    return "\n".join([*lines, *(row.line() for row in sorted(rows, key=Row.order))]) + "\n"


def shown(value: float, digit: Decimal) -> str:
    """A value to two digits more than the printed one has."""
    rounded = Decimal(repr(float(value))).quantize(digit.scaleb(-2)) + 0  # no minus before a zero
    return f"{rounded:e}" if digit < Decimal("1e-9") else f"{rounded:f}"


@pytest.fixture
def validate(request: pytest.FixtureRequest) -> Callable[..., None]:
    """validate(id, what, source, basis, printed, computed, tolerance=None, unit="", rel=None)

    Asserts that computed is printed within the tolerance and records the row under the check's number. printed: text as
    the source has it, or a number; tolerance: absolute, `rel` in its place relative; with neither half of the last
    printed digit.
    """

    def check(
        id: str | int,
        what: str,
        source: str,
        basis: str,
        printed: str | float,
        computed: float,
        tolerance: float | None = None,
        unit: str = "",
        *,
        rel: float | None = None,
    ) -> None:
        assert basis in BASES, basis
        number, computed = Decimal(str(printed)), float(computed)
        digit = Decimal(1).scaleb(int(number.as_tuple().exponent))
        if rel is not None:
            tolerance = rel * abs(float(number))
        elif tolerance is None:
            tolerance = float(digit) * 0.5 * (1 + 1e-9)
        off = computed - float(number)
        assert abs(off) <= tolerance, f"check {id}, {what}: {computed!r}, printed {printed}, tolerance {tolerance:.3g}"
        difference = shown(off, digit)
        sign = "" if difference.startswith("-") else "+"
        words = f" {unit}" if unit else ""
        row = Row(
            str(id), what, source, basis, f"{printed}{words}", f"{shown(computed, digit)}{words}", sign + difference
        )
        request.config.stash[ROWS][row] = None

    return check


@pytest.fixture
def run_check(tmp_path: Path) -> Callable[[str], tuple[dict[str, Any], int]]:
    """run_check(text): the result of `slip check FILE --json` on a joint file of that text, and the exit code."""

    def run(text: str) -> tuple[dict[str, Any], int]:
        path = tmp_path / "joint.toml"
        path.write_text(text, encoding="utf-8")
        out = io.StringIO()
        with redirect_stdout(out):
            code = main(["check", str(path), "--json"])
        return json.loads(out.getvalue()), code

    return run
