"""The file itself: bytes, text, TOML, and the line that each key stands on."""

from __future__ import annotations

import codecs
import hashlib
import re
import tomllib
from functools import cached_property
from pathlib import Path
from typing import Any

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.read.lines import Path_, key_lines

LARGEST = 20_000_000  # bytes; a joint file is a few kilobytes, larger inputs belong into a table


@record
class Document:
    """A parsed file: shown name, folder (for files it names), text, the TOML tree, the digest of its bytes."""

    file: str
    folder: Path
    text: str
    tree: dict[str, Any]
    digest: str

    @cached_property
    def lines(self) -> dict[Path_, int]:
        """Line of each key path; only a fault asks for it."""
        try:
            return key_lines(self.text)
        except RecursionError:  # brackets in brackets to the very limit
            return {}

    def line(self, path: Path_) -> int:
        """Line of the key, or of the nearest enclosing one; 0 when unknown."""
        while path:
            if path in self.lines:
                return self.lines[path]
            path = path[:-1]
        return 0


def refuse(code: str, file: str, found: str, expected: str, remedy: str, line: int = 0) -> Problems:
    """A file that cannot be read at all."""
    return Problems([InputError(code, "", found, expected, remedy, file, line)])


def read_bytes(path: Path) -> bytes:
    """Contents of a file; Problems in one sentence when it is missing, a directory, unreadable, empty or huge."""
    file = str(path)
    try:
        if path.is_dir():
            raise refuse("file-directory", file, "a directory", "a file", "name the file inside it")
        with path.open("rb") as stream:
            data = stream.read(LARGEST + 1)
    except FileNotFoundError:
        raise refuse("file-missing", file, "no such file", "an existing file", "check the path") from None
    except (OSError, ValueError) as error:
        reason = str(getattr(error, "strerror", None) or error).lower()
        raise refuse("file-unreadable", file, reason, "a readable file", "check path and permissions") from None
    if len(data) > LARGEST:
        most = f"at most {LARGEST // 1_000_000} MB"
        raise refuse("file-huge", file, "a larger file", most, "give many load cases as a table")
    if not data.removeprefix(codecs.BOM_UTF8).strip():
        remedy = "slip new PATH writes a joint file to start from"
        raise refuse("file-empty", file, "an empty file", "a file with text", remedy)
    return data


def decode(data: bytes, file: str) -> str:
    """Text of a UTF-8 file, a byte-order mark removed; Problems with the line of the first bad byte."""
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        found = f"a byte that is not UTF-8 (0x{data[error.start]:02x})"
        raise refuse("file-not-utf8", file, found, "UTF-8 text", "save the file as UTF-8", line) from None


def parse(data: bytes, file: str, folder: Path) -> Document:
    """A Document from the bytes of a joint file; Problems when they are not UTF-8 or not TOML."""
    text = decode(data, file)
    try:
        return Document(file, folder, text, tomllib.loads(text), hashlib.sha256(data).hexdigest())
    except RecursionError:
        remedy = "close each bracket that you open"
        raise refuse("file-not-toml", file, "too many nested brackets", "TOML", remedy) from None
    except ValueError as error:  # also raised for a whole number of thousands of digits
        raise _not_toml(text, file, str(error)) from None


def _not_toml(text: str, file: str, said: str) -> Problems:
    """The line that cannot be read, and why."""
    place = re.search(r"\(at line (\d+)", said)
    written = text.rstrip().split("\n")
    line = int(place.group(1)) if place else len(written) if "end of document" in said else 0
    reason = " ".join(re.sub(r"\s*\(at .*\)$", "", said.split(";")[0], flags=re.DOTALL).split())
    shown = written[line - 1] if 0 < line <= len(written) else ""
    found = cut(shown.strip() or ascii(shown)) if shown else "a value that cannot be read"
    expected = f"TOML ({reason[:1].lower()}{reason[1:]})"
    remedy = 'write key = value, each key once, with text and quantities in quotes as in torque = "200 N m"'
    return refuse("file-not-toml", file, found, expected, remedy, line)


def cut(text: str, width: int = 60) -> str:
    """A text of the file, short enough for a sentence."""
    return text if len(text) <= width else text[: width - 3] + "..."


def load(path: str | Path) -> Document:
    """Read and parse a joint file."""
    path = Path(path)
    return parse(read_bytes(path), str(path), path.parent)
