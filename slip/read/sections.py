"""One table of the file after its keys were read: what is there, what is missing, what was defaulted."""

from __future__ import annotations

from typing import Any

from slip.read import forms
from slip.read.lines import Path_
from slip.read.reader import Reader, Stop, nearest, show
from slip.read.schema import BY_TABLE, TABLES


class Section:
    """Values of one table by key. A key that is present but wrong raises Stop when it is asked for: its fault is recorded already."""

    def __init__(self, reader: Reader, path: Path_, schema: str, raw: dict[str, Any]) -> None:
        self.reader, self.path, self.raw = reader, path, raw
        self.values: dict[str, Any] = {}
        self.wrong: set[str] = set()
        keys, tables = BY_TABLE[schema], _children(schema)
        for name, value in raw.items():
            if name in tables:
                continue
            if name not in keys:
                self._unknown(schema, name)
                continue
            try:
                self.values[name] = forms.read(reader, (*path, name), value, keys[name])
            except Stop:
                self.wrong.add(name)

    def _unknown(self, schema: str, name: str) -> None:
        """The fault of an unknown key. The key that it was meant for counts as present but wrong: one mistake, one sentence."""
        close = nearest(name, [key for key in (*BY_TABLE[schema], *_children(schema)) if key not in self.raw])
        elsewhere = next((show_table(table) for table, keys in BY_TABLE.items() if name in keys), "")
        if close:
            self.reader.meant.add((*self.path, close))
            remedy = f"did you mean {close}, or {elsewhere} {name}?" if elsewhere else f"did you mean {close}?"
        elif elsewhere:
            remedy = f"write it under {elsewhere}"
        else:
            remedy = "slip new PATH writes a file with all keys"
        what = f"a key of {show_table(schema)}" if schema else "a table or key of a joint file"
        self.reader.fail((*self.path, name), "unknown-key", show(name), what, remedy)

    def has(self, name: str) -> bool:
        """Whether the file gives the key, right or wrong."""
        return name in self.raw or (*self.path, name) in self.reader.meant

    def get(self, name: str, default: Any = None) -> Any:
        """The key's value, or the default when the file is silent."""
        if name in self.wrong or (*self.path, name) in self.reader.meant:
            raise Stop
        return self.values.get(name, default)

    def need(self, name: str, why: str, write: str) -> Any:
        """The key's value; a fault that says why it is needed when the file is silent."""
        if not self.has(name):
            raise self.stop(name, "missing-key", "nothing", why, write)
        return self.get(name)

    def stop(self, name: str, code: str, found: str, expected: str, remedy: str) -> Stop:
        """Record a fault of one of this table's keys; returns the exception to raise."""
        return self.reader.stop((*self.path, name), code, found, expected, remedy)

    def stop_value(self, name: str, code: str, expected: str, remedy: str) -> Stop:
        """As `stop`, for a key whose typed value is the fault; nothing more is said of a misspelt key that was meant for this one."""
        if name not in self.raw:
            return Stop()
        return self.stop(name, code, show(self.raw[name]), expected, remedy)


def show_table(schema: str) -> str:
    """A table of the schema as its header is written in the file."""
    return f"[[{schema.removesuffix('[]')}]]" if schema.endswith("[]") else f"[{schema}]"


def _children(schema: str) -> list[str]:
    """Names of the tables right inside a table of the schema."""
    prefix = f"{schema.removesuffix('[]')}." if schema else ""
    inside = [table.removeprefix(prefix).removesuffix("[]") for table in TABLES if table and table.startswith(prefix)]
    return [name for name in inside if "." not in name]


def one(reader: Reader, name: str) -> Section:
    """The table `name` of the document; an empty one when the file has none."""
    raw = _raw(reader, (name,), reader.document.tree, {})
    if not isinstance(raw, dict):
        remedy = f"write [{name}] in single brackets on a line of its own"
        raise reader.stop((name,), "not-a-table", show(raw), f"one table [{name}]", remedy)
    return Section(reader, (name,), name, raw)


def many(reader: Reader, schema: str, path: Path_ = (), tree: dict[str, Any] | None = None) -> list[Section]:
    """The entries of an array of tables, which stands in `tree` at `path`; by default at the top of the file."""
    name = schema.removesuffix("[]").rpartition(".")[2]
    path = (*path, name)
    raw = _raw(reader, path, reader.document.tree if tree is None else tree, [])
    if not isinstance(raw, list) or not all(isinstance(item, dict) for item in raw):
        header = show_table(schema)
        remedy = f"write {header} in double brackets on a line of its own"
        raise reader.stop(path, "not-a-table", show(raw), f"entries {header}", remedy)
    return [Section(reader, (*path, i), schema, item) for i, item in enumerate(raw)]


def _raw(reader: Reader, path: Path_, tree: dict[str, Any], default: Any) -> Any:
    """What the file has at a table's path, or the default; Stop when an unknown key was meant for it."""
    if path in reader.meant:
        raise Stop
    return tree.get(str(path[-1]), default)
