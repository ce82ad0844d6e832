"""One table of the file after its keys were read: what is there, what is missing, what was defaulted."""

from __future__ import annotations

from typing import Any

from slip.read import forms
from slip.read.document import Path_
from slip.read.reader import Reader, Stop, nearest, show
from slip.read.schema import BY_TABLE, TABLES


class Section:
    """Values of one table by key. A key that is present but wrong raises Stop when it is asked for: its fault is recorded already."""

    def __init__(self, reader: Reader, path: Path_, schema: str, raw: dict[str, Any]) -> None:
        self.reader, self.path, self.raw = reader, path, raw
        self.values: dict[str, Any] = {}
        self.wrong: set[str] = set()
        keys = BY_TABLE[schema]
        for name, value in raw.items():
            if isinstance(value, (dict, list)) and _is_table(schema, name):
                continue
            if name not in keys:
                self._unknown(schema, name, value)
                continue
            try:
                self.values[name] = forms.read(reader, (*path, name), value, keys[name])
            except Stop:
                self.wrong.add(name)

    def _unknown(self, schema: str, name: str, value: Any) -> None:
        here = list(BY_TABLE[schema]) + [child for child in (_child(schema, table) for table in TABLES) if child]
        close = nearest(name, here)
        elsewhere = next((table for table, keys in BY_TABLE.items() if name in keys and table != schema), "")
        remedy = "slip new PATH writes a file with all keys"
        if close:
            remedy = f"did you mean {close}?"
        elif elsewhere:
            remedy = f"{name} belongs into [{elsewhere.removesuffix('[]')}]"
        what = f"a key of [{schema.removesuffix('[]')}]" if schema else "a table or key of a joint file"
        self.reader.fail((*self.path, name), "unknown-key", name, what, remedy)

    def has(self, name: str) -> bool:
        """Whether the file gives the key, right or wrong."""
        return name in self.raw

    def get(self, name: str, default: Any = None) -> Any:
        """The key's value, or the default when the file is silent."""
        if name in self.wrong:
            raise Stop
        return self.values.get(name, default)

    def need(self, name: str, why: str, write: str) -> Any:
        """The key's value; a fault that says why it is needed when the file is silent."""
        if name in self.wrong:
            raise Stop
        if name not in self.values:
            raise self.stop(name, "missing-key", "nothing", f"{name}, {why}", write)
        return self.values[name]

    def stop(self, name: str, code: str, found: str, expected: str, remedy: str) -> Stop:
        """Record a fault of one of this table's keys; returns the exception to raise."""
        return self.reader.stop((*self.path, name), code, found, expected, remedy)

    def stop_value(self, name: str, code: str, expected: str, remedy: str) -> Stop:
        """As `stop`, for a key whose typed value is the fault."""
        return self.stop(name, code, show(self.raw[name]), expected, remedy)


def _child(schema: str, table: str) -> str:
    """Name of `table` inside `schema` when it is a direct child, else ''."""
    prefix = f"{schema.removesuffix('[]')}." if schema else ""
    rest = table.removeprefix(prefix) if table.startswith(prefix) else ""
    return rest.removesuffix("[]") if rest and "." not in rest else ""


def _is_table(schema: str, name: str) -> bool:
    return any(_child(schema, table) == name for table in TABLES)


def one(reader: Reader, name: str) -> Section:
    """The table `name` of the document; an empty one when the file has none."""
    raw = reader.document.tree.get(name, {})
    if not isinstance(raw, dict):
        reader.fail((name,), "not-a-table", show(raw), f"a table [{name}]", f"write [{name}] on a line of its own")
        raw = {}
    return Section(reader, (name,), name, raw)


def many(reader: Reader, name: str, schema: str, path: Path_ = (), tree: dict[str, Any] | None = None) -> list[Section]:
    """The entries of an array of tables."""
    raw = (reader.document.tree if tree is None else tree).get(name, [])
    path = (*path, name)
    if not isinstance(raw, list) or not all(isinstance(item, dict) for item in raw):
        reader.fail(path, "not-a-table", show(raw), f"entries [[{name}]]", f"write [[{name}]] on a line of its own")
        raw = []
    return [Section(reader, (*path, i), schema, item) for i, item in enumerate(raw)]
