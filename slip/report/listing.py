"""The data tables for a person at a terminal: the rows that hold a word, their notes, and the citations of their sources."""

from __future__ import annotations

from slip.base.tables import Row, columns, names, table
from slip.report.words import plain, wrapped

WIDTH = 80
LONG = ("note", "citation")  # columns of sentences: written below the rows, marked by a letter
SOURCES = "sources"


def tables_text(word: str = "") -> str:
    """Rows of the data tables whose name or any cell holds the word; without a word the list of tables; '' when none does."""
    wanted = word.strip().casefold()
    data = [name for name in names() if name == SOURCES or (table(name) and "source" in columns(name))]
    if not wanted:
        first = "slip tables WORD prints the rows that hold the word. Tables and their rows:"
        return "\n".join([first, *(f"  {name:<22}{len(table(name)):>5}" for name in data)]) + "\n"
    lines: list[str] = []
    keys: set[str] = set()
    for name in data:
        rows = [row for row in table(name) if wanted in name.casefold() or _holds(row, wanted)]
        if rows and name != SOURCES:
            lines += [name.upper(), *_rows(name, rows), ""]
            keys |= {key for row in rows for key in row["source"].split(";")}
    # a word of a citation alone is an answer only where no row has it
    cited = [
        row for row in table(SOURCES) if row["key"] in keys or wanted == SOURCES or (not lines and _holds(row, wanted))
    ]
    if cited:
        lines.append(SOURCES.upper())
        for row in cited:
            lines += wrapped(f"{row['key']}: {row['citation']}", WIDTH, "", "    ")
    return "\n".join(line.rstrip() for line in lines) + "\n" if lines else ""


def _holds(row: Row, wanted: str) -> bool:
    return any(wanted in cell.casefold() for cell in row.values())


def _rows(name: str, rows: list[Row]) -> list[str]:
    """Rows in aligned columns under their heads, empty columns left out; below them the notes that they refer to."""
    heads = [c for c in columns(name) if c not in LONG and any(row[c] for row in rows)]
    notes = list(dict.fromkeys(row["note"] for row in rows if row.get("note")))
    marks = {note: f"({i + 1})" for i, note in enumerate(notes)}
    cells = [[*heads, ""], *([*(plain(row[c], 60) for c in heads), marks.get(row.get("note", ""), "")] for row in rows)]
    widths = [max(len(row[i]) for row in cells) for i in range(len(cells[0]))]
    lines = ["  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)) for row in cells]
    for note, mark in marks.items():
        lines += wrapped(f"{mark} {note}", WIDTH, "", "    ")
    return lines
