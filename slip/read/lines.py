"""The line of every key of a TOML text that is known to parse: tables, dotted and quoted keys, inline tables, entries of lists."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator

Path_ = tuple[str | int, ...]
TOKEN = re.compile(
    r'''(?P<skip>[ \t\r]+|\#[^\n]*)
      | (?P<newline>\n)
      | (?P<text>"""(?:\\.|[^\\])*?"{3,5} | \'{3}.*?\'{3,5} | "(?:\\.|[^"\\])*" | '[^']*')
      | (?P<mark>[][{}=,.])
      | (?P<word>[^\s\#\]\[{}=,."']+)''',
    re.VERBOSE | re.DOTALL,
)
Token = tuple[str, str, int]  # kind, text, line


def key_lines(text: str) -> dict[Path_, int]:
    """Line, from 1, of each key path and of each path that leads to one; entries of arrays count from 0."""
    return _Lines(text).found


def _tokens(text: str) -> Iterator[Token]:
    line = 1
    for match in TOKEN.finditer(text):
        kind = str(match.lastgroup)
        if kind != "skip":
            yield kind, match.group(), line
        line += match.group().count("\n")
    yield "end", "", line


class _Lines:
    """One walk over the tokens; each method eats what it is named for."""

    def __init__(self, text: str) -> None:
        self.found: dict[Path_, int] = {}
        self.counts: dict[Path_, int] = {}
        self.tokens = _tokens(text)
        self.kind, self.text, self.line = next(self.tokens)
        table: Path_ = ()
        while self.kind != "end":
            if self.kind == "newline":
                self._next()
            elif self.text == "[":
                table = self._header()
            else:
                self._assignment(table)

    def _next(self) -> None:
        self.kind, self.text, self.line = next(self.tokens, ("end", "", self.line))

    def _blank(self) -> None:
        while self.kind == "newline":
            self._next()

    def _note(self, table: Path_, key: Path_, line: int) -> None:
        """The key inside a table that is noted already, and the tables between them."""
        for length in range(1, len(key) + 1):
            self.found.setdefault((*table, *key[:length]), line)

    def _header(self) -> Path_:
        """[a.b] or [[a.b]]: the path of the table that it opens."""
        self._next()
        array = self.text == "["
        if array:
            self._next()
        table: Path_ = ()
        names = self._key()
        for position, name in enumerate(names):
            table = (*table, name)
            if array and position == len(names) - 1:
                self.counts[table] = self.counts.get(table, -1) + 1
            if table in self.counts:
                table = (*table, self.counts[table])
        self._note((), table, self.line)
        while self.kind not in ("newline", "end"):
            self._next()
        return table

    def _key(self) -> list[str]:
        """Parts of a dotted key; the token after it stands next."""
        names = []
        while self.kind in ("word", "text") or self.text == ".":
            if self.kind != "mark":
                names.append(tomllib.loads(f"key = {self.text}")["key"] if self.kind == "text" else self.text)
            self._next()
        return names

    def _assignment(self, table: Path_) -> None:
        """key = value."""
        line = self.line
        key = tuple(self._key())
        self._note(table, key, line)
        self._next()
        self._value((*table, *key))

    def _value(self, path: Path_) -> None:
        if self.text == "[":
            self._entries(path, "]")
        elif self.text == "{":
            self._entries(path, "}")
        else:
            while self.kind not in ("newline", "end") and self.text not in (",", "]", "}"):
                self._next()

    def _entries(self, path: Path_, closing: str) -> None:
        """The values of a list, or the assignments of an inline table."""
        index = 0
        self._next()
        self._blank()
        while self.text != closing and self.kind != "end":
            if closing == "}":
                self._assignment(path)
            else:
                self._note(path, (index,), self.line)
                self._value((*path, index))
            self._blank()
            if self.text == ",":
                self._next()
                self._blank()
            index += 1
        self._next()
