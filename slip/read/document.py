"""The file itself: bytes, text, TOML, and the line that each key stands on."""

from __future__ import annotations

import hashlib
import re
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from slip.base.errors import InputError, Problems

LARGEST = 20_000_000  # bytes; a joint file is a few kilobytes, larger inputs belong into a table
Path_ = tuple[str | int, ...]
HEADER = re.compile(r"^\s*(\[\[?)\s*([^\[\]]+?)\s*\]\]?\s*(?:#.*)?$")
ASSIGNMENT = re.compile(r"""^\s*((?:[\w-]+|"[^"]*"|'[^']*')(?:\s*\.\s*(?:[\w-]+|"[^"]*"|'[^']*'))*)\s*=""")


@dataclass(frozen=True)
class Document:
    """A parsed file: shown name, folder (for files it names), the TOML tree, the line of each key path, the digest of its bytes."""

    file: str
    folder: Path
    tree: dict[str, Any]
    lines: dict[Path_, int]
    digest: str

    def line(self, path: Path_) -> int:
        """Line of the key, or of the nearest enclosing one that stands on a line of its own; 0 when unknown."""
        while path:
            if path in self.lines:
                return self.lines[path]
            path = path[:-1]
        return 0


def _refuse(code: str, file: str, found: str, expected: str, remedy: str, line: int = 0) -> Problems:
    return Problems([InputError(code, "", found, expected, remedy, file, line)])


def read_bytes(path: Path) -> bytes:
    """Contents of a file; Problems in one sentence when it is missing, a directory, unreadable, empty or huge."""
    file = str(path)
    try:
        if path.is_dir():
            raise _refuse("file-directory", file, "a directory", "a file", "name the file inside it")
        if path.stat().st_size > LARGEST:
            size = f"{path.stat().st_size / 1e6:.0f} MB"
            raise _refuse(
                "file-huge", file, size, f"at most {LARGEST // 1_000_000} MB", "give many load cases as a table"
            )
        data = path.read_bytes()
    except FileNotFoundError:
        raise _refuse("file-missing", file, "no such file", "an existing file", "check the path") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise _refuse(
            "file-unreadable", file, reason.lower(), "a readable file", "check path and permissions"
        ) from None
    if not data.strip():
        raise _refuse("file-empty", file, "an empty file", "a joint file", "slip new PATH writes one to start from")
    return data


def decode(data: bytes, file: str) -> str:
    """Text of a UTF-8 file, a byte-order mark removed; Problems with the line of the first bad byte."""
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        found = f"a byte that is not UTF-8 (0x{data[error.start]:02x})"
        raise _refuse("file-not-utf8", file, found, "UTF-8 text", "save the file as UTF-8", line) from None


def _lines(text: str) -> dict[Path_, int]:
    """Line numbers of tables and keys by path. Arrays of tables count from 0; keys inside inline tables have no line of their own."""
    found: dict[Path_, int] = {}
    counts: dict[Path_, int] = {}
    table: Path_ = ()
    for number, line in enumerate(text.splitlines(), start=1):
        if header := HEADER.match(line):
            table = ()
            names = [name.strip().strip("\"'") for name in header.group(2).split(".")]
            for position, name in enumerate(names):
                table = (*table, name)
                last = position == len(names) - 1
                if last and header.group(1) == "[[":
                    counts[table] = counts.get(table, -1) + 1
                if table in counts:
                    table = (*table, counts[table])
            found.setdefault(table, number)
        elif key := ASSIGNMENT.match(line):
            names = [name.strip().strip("\"'") for name in key.group(1).split(".")]
            for length in range(1, len(names) + 1):
                found.setdefault((*table, *names[:length]), number)
    return found


def parse(data: bytes, file: str, folder: Path) -> Document:
    """A Document from the bytes of a joint file; Problems when they are not UTF-8 or not TOML."""
    text = decode(data, file)
    try:
        tree = tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        place = re.search(r"\(at line (\d+)", str(error))
        end = text.count("\n") + 1
        line = int(place.group(1)) if place else end if "end of document" in str(error) else 0
        what = re.sub(r"\s*\(at .*\)$", "", str(error)).replace("\n", " ")
        what = what[:1].lower() + what[1:] or "too many nested brackets"
        raise _refuse("file-not-toml", file, what, "TOML", 'write key = value, text in "quotes"', line) from None
    return Document(file, folder, tree, _lines(text), hashlib.sha256(data).hexdigest())


def load(path: str | Path) -> Document:
    """Read and parse a joint file."""
    path = Path(path)
    return parse(read_bytes(path), str(path), path.parent)
