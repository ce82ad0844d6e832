"""What a stranger meets: public names, docstrings, formulas with their sources, modules of a size to read."""

import ast
import importlib
import inspect
import pkgutil
import re
import subprocess
import sys
from pathlib import Path

import pytest

import slip
from slip.base.formulas import Formula
from slip.base.tables import BASES, table
from slip.base.units import UnitError, parse_unit

PACKAGE = Path(slip.__file__).resolve().parent
LONGEST = 300
# Modules that may be longer, and why a second room would not help.
LONG = {
    "read/schema.py": "one table, a row for each key of the joint file",
}


def module_names() -> list[str]:
    found = [m.name for m in pkgutil.walk_packages(slip.__path__, "slip.") if not m.name.endswith("__main__")]
    assert len(found) > 50, "the walk over slip/ has lost the modules"
    return found


MODULES = module_names()
SOURCES = {
    path.relative_to(PACKAGE).as_posix(): path.read_text(encoding="utf-8") for path in sorted(PACKAGE.rglob("*.py"))
}


@pytest.mark.parametrize("name", slip.__all__)
def test_public_name_resolves(name):
    assert getattr(slip, name) is not None
    assert name in dir(slip)


def test_an_unknown_name_is_an_attribute_error():
    with pytest.raises(AttributeError, match="no attribute 'frobnicate'"):
        _ = slip.frobnicate


def test_importing_the_package_is_light():
    code = "import sys; before = set(sys.modules); import slip; print(' '.join(set(sys.modules) - before))"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, cwd=PACKAGE.parent, check=True)
    loaded = {name.split(".")[0] for name in run.stdout.split()}
    assert "slip" in loaded and loaded & {"numpy", "scipy", "argparse", "pathlib", "dataclasses"} == set()
    assert [name for name in run.stdout.split() if name.startswith("slip.")] == []


def is_stub(node: ast.AST) -> bool:
    """A member of a protocol that is named only: `...` for a body; the class says what it is."""
    last = node.body[-1]
    return (
        len(node.body) == 1
        and isinstance(last, ast.Expr)
        and isinstance(last.value, ast.Constant)
        and last.value.value is ...
    )


def undocumented(text: str) -> list[str]:
    """Public functions, classes and methods of a source text that have no docstring."""
    tree = ast.parse(text)
    wrong = [] if ast.get_docstring(tree) else ["the module"]
    classes = [node for node in tree.body if isinstance(node, ast.ClassDef) and not node.name.startswith("_")]
    for owner, body in (("", tree.body), *((f"{c.name}.", c.body) for c in classes)):
        for node in body:
            if (
                isinstance(node, ast.FunctionDef | ast.ClassDef)
                and not node.name.startswith("_")
                and not ast.get_docstring(node)
                and not is_stub(node)
            ):
                wrong.append(f"{owner}{node.name}, line {node.lineno}")
    return wrong


@pytest.mark.parametrize("path", [path for path in SOURCES if not path.endswith("__main__.py")])
def test_everything_public_says_what_it_is(path):
    assert undocumented(SOURCES[path]) == []


def test_a_missing_docstring_is_seen():
    text = '"""M."""\ndef f():\n    pass\nclass C:\n    """C."""\n    def m(self):\n        pass'
    assert undocumented(text) == ["f, line 2", "C.m, line 6"]


def formulas() -> dict[str, Formula]:
    """Every decorated formula under module.function."""
    found = {}
    for name in MODULES:
        for key, value in vars(importlib.import_module(name)).items():
            kept = getattr(value, "formula", None)
            if isinstance(kept, Formula) and value.__module__ == name:
                found[f"{name.removeprefix('slip.')}.{key}"] = kept
    return found


FORMULAS = formulas()


def test_no_formula_is_missed():
    written = sum(text.count("\n@formula(") for text in SOURCES.values())
    assert len(FORMULAS) == written > 60


@pytest.mark.parametrize("name", FORMULAS)
def test_formula_has_source_basis_and_unit(name):
    kept = FORMULAS[name]
    keys = {row["key"] for row in table("sources")}
    assert set(kept.source.split(";")) <= keys, "add the source to data/sources.csv"
    assert kept.basis in BASES
    if kept.unit:
        try:
            parse_unit(kept.unit)
        except UnitError as error:
            pytest.fail(f"unit {kept.unit!r}: {error}")


@pytest.mark.parametrize("name", FORMULAS)
def test_docstring_names_the_basis(name):
    """A reader of the source finds the word that a reader of the report is shown."""
    module, _, key = name.rpartition(".")
    function = getattr(importlib.import_module(f"slip.{module}"), key)
    said = inspect.getdoc(function) or ""
    assert FORMULAS[name].basis in said or re.search(r"\b[Aa]s (in )?`", said), "write the basis into the docstring"


@pytest.mark.parametrize("path", SOURCES)
def test_module_is_short_enough_to_read(path):
    lines = SOURCES[path].count("\n")
    if path in LONG:
        assert lines > LONGEST, "short again: take it out of LONG"
    else:
        assert lines <= LONGEST, "it wants a second room"


@pytest.mark.parametrize("path", SOURCES)
def test_frozen_dataclasses_are_records(path):
    """dataclasses compiles the methods of each class at every start; base.records shares them."""
    assert "@dataclass(frozen=True" not in SOURCES[path], "write @record, or @record(eq=False) where it holds arrays"
