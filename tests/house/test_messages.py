"""Every code of an error, assumption or warning has its words in data/messages.csv, and every word there its code in the source."""

from __future__ import annotations

import ast
import csv
import re
from pathlib import Path
from typing import Any

import pytest

import slip
from slip.base.tables import DATA

SOURCE = Path(slip.__file__).resolve().parent
CODE = re.compile(r"[a-z][a-z0-9]*(-[a-z0-9]+)*")
KINDS = ("error", "assumption", "warning", "unproven")
# What a call with a code says, and at which argument, or which of several, its code stands; in any other call a code is only
# handed on.
CALLS: dict[str, tuple[Any, ...]] = {
    "InputError": ("error", 0),
    "UnitError": ("error", 0),
    "refuse": ("error", 0),
    "stop": ("error", 1),
    "stop_value": ("error", 1),
    "fail": ("error", 1),
    "fail_at": ("error", 1),
    "stop_line": ("error", 2),
    "_one": ("error", 2),
    "_fault": ("error", 1, 2),
    "_looked_up": ("error", 3),
    "_kind_of": ("error", 4),
    "assume": ("assumption", 0),
    "warn": ("warning", 0),
    "Note": ("note", 0),
    "NotConverged": ("unproven", 0),
}


def rows() -> list[dict[str, str]]:
    with (DATA / "messages.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def constants(node: ast.expr) -> list[str]:
    """Texts that an expression may be: a literal, either branch of a condition, a pattern with * for what is put in."""
    if isinstance(node, ast.Constant) and isinstance(node.value, str):
        return [node.value]
    if isinstance(node, ast.IfExp):
        return constants(node.body) + constants(node.orelse)
    if isinstance(node, ast.JoinedStr):
        return ["".join(part.value if isinstance(part, ast.Constant) else "*" for part in node.values)]
    return []


def variables(function: ast.AST, module: ast.AST) -> dict[str, list[str]]:
    """Texts that the names of a function can hold: by assignment, and by a loop over a table of literals."""
    found: dict[str, list[str]] = {}
    tables = {
        t.id: n.value
        for n in ast.walk(module)
        if isinstance(n, ast.Assign)
        for t in n.targets
        if isinstance(t, ast.Name)
    }

    def put(target: ast.expr, value: ast.expr) -> None:
        if isinstance(target, ast.Tuple):
            for inner, item in zip(target.elts, getattr(value, "elts", []), strict=False):
                put(inner, item)
        elif isinstance(target, ast.Name):
            found.setdefault(target.id, []).extend(constants(value))

    for node in ast.walk(function):
        if isinstance(node, ast.Assign):
            for target in node.targets:
                put(target, node.value)
        elif isinstance(node, ast.For):
            table = tables.get(node.iter.id) if isinstance(node.iter, ast.Name) else node.iter
            for row in getattr(table, "elts", []):
                put(node.target, row)
    return found


def called(node: ast.Call) -> str:
    return node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")


def used(text: str) -> set[tuple[str, str]]:
    """Kind and code of every message of a module."""
    module, found = ast.parse(text), set()
    for function in (node for node in ast.walk(module) if isinstance(node, ast.FunctionDef)):
        names = variables(function, module)
        for node in ast.walk(function):
            if not isinstance(node, ast.Call) or called(node) not in CALLS:
                continue
            kind, *places = CALLS[called(node)]
            given = [keyword.value for keyword in node.keywords if keyword.arg == "code"]
            given = given or [node.args[i] for i in places if i < len(node.args)]
            for argument in given:
                texts = names.get(argument.id, []) if isinstance(argument, ast.Name) else constants(argument)
                found |= {(kind, code) for code in texts if CODE.fullmatch(code.replace("*", "x"))}
    return found


def in_source() -> dict[tuple[str, str], str]:
    """The module where each kind and code of the program first stands."""
    found: dict[tuple[str, str], str] = {}
    for path in sorted(SOURCE.rglob("*.py")):
        for kind, code in used(path.read_text(encoding="utf-8")):
            found.setdefault((kind, code), str(path.relative_to(SOURCE)))
    return found


def test_the_walk_finds_codes() -> None:
    text = """
SAID = (("a", "one-code", 1), ("b", "two-code", 2))
def said(r):
    for key, code, text in SAID:
        r.assume(code, text, key)
def f(r, s, wet):
    code, other = "three-code" if wet else "four-code", "Not a code"
    raise s.stop("key", code, "found", "expected", "remedy")
    InputError(code="five-code", key="")
    InputError(f"unknown-{wet}", "")
    r.warn("fluid", "text", "key")
    r.attempt("six-code")
    UnitError(error.code, "x", "y")
"""
    assert used(text) == {
        ("assumption", "one-code"),
        ("assumption", "two-code"),
        ("error", "five-code"),
        ("error", "four-code"),
        ("error", "three-code"),
        ("error", "unknown-*"),
        ("warning", "fluid"),
    }


def test_every_code_of_the_source_has_its_words() -> None:
    words = {(row["kind"], row["code"]) for row in rows()}
    missing = {}
    for (kind, code), place in in_source().items():
        pattern = re.compile(re.escape(code).replace(r"\*", "[a-z0-9-]+"))
        kinds = ("assumption", "warning") if kind == "note" else (kind,)
        if not any(known in kinds and pattern.fullmatch(word) for known, word in words):
            missing[kind, code] = place
    assert not missing


def test_every_word_has_its_code_in_the_source() -> None:
    patterns = [(kind, re.compile(re.escape(code).replace(r"\*", "[a-z0-9-]+"))) for kind, code in in_source()]
    idle = [
        row["code"]
        for row in rows()
        if not any(
            pattern.fullmatch(row["code"])
            and (kind == row["kind"] or (kind == "note" and row["kind"] in ("assumption", "warning")))
            for kind, pattern in patterns
        )
    ]
    assert not idle


def test_every_error_of_the_reader_and_the_command_is_shown_in_a_test() -> None:
    tests = "".join(path.read_text(encoding="utf-8") for path in Path(__file__).parents[1].glob("*/test_*.py"))
    own = [
        code
        for (kind, code), place in in_source().items()
        if kind == "error" and place.startswith(("read", "base", "cli"))
    ]
    assert len(own) > 60
    assert not [code for code in own if "*" not in code and f'"{code}"' not in tests]


@pytest.mark.parametrize("row", rows(), ids=[row["code"] for row in rows()])
def test_meaning_and_remedy_are_plain_sentences(row: dict[str, str]) -> None:
    assert list(row) == ["kind", "code", "meaning", "remedy"]
    assert row["kind"] in KINDS and CODE.fullmatch(row["code"])
    for text in (row["meaning"], row["remedy"]):
        assert 15 <= len(text) <= 220 and text[0].isupper() and text.endswith(".")


def test_codes_are_told_apart_and_sorted() -> None:
    keys = [(KINDS.index(row["kind"]), row["code"]) for row in rows()]
    assert keys == sorted(keys)
    codes = [row["code"] for row in rows()]
    assert len(set(codes)) == len(codes)
