"""The data tables that ship with the program: CSV files in slip/data, every row with its source and basis."""

from __future__ import annotations

import csv
from functools import cache
from pathlib import Path

DATA = Path(__file__).resolve().parent.parent / "data"
BASES = ("published", "derived", "practice", "memory")

Row = dict[str, str]


@cache
def table(name: str) -> tuple[Row, ...]:
    """Rows of slip/data/<name>.csv in file order, as text; a missing cell is the empty string.

    The files are read on first use and kept: a command pays only for the tables that it needs.
    """
    with (DATA / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return tuple(csv.DictReader(file))


def number(row: Row, column: str) -> float:
    """The number in `column` of a row; a column that is empty there is a fault of the table and raises ValueError."""
    return float(row[column])


def names() -> list[str]:
    """Names of all data tables, sorted."""
    return sorted(path.stem for path in DATA.glob("*.csv"))


def columns(name: str) -> list[str]:
    """Column names of a table in file order."""
    return list(table(name)[0])


def find(name: str, column: str, value: str) -> Row | None:
    """First row of table `name` whose `column` equals `value` without regard to case, or None."""
    wanted = value.strip().casefold()
    return next((row for row in table(name) if row[column].casefold() == wanted), None)
