"""Imports point one way: the layers, held over the syntax trees of slip/, and what a check may load, held in a fresh process."""

import ast
import subprocess
import sys
from fnmatch import fnmatch
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "slip"
# Rooms with one number do not know each other. "" is slip/__init__.py, which anyone may ask for the version.
ORDER = {
    "base": 0,
    "joint": 1,
    "read": 2,
    "clamp": 3,
    "pressure": 4,
    "friction": 5,
    "verdict": 6,
    "assess": 7,
    "cases": 8,
    "scatter": 8,
    "stiffness": 9,  # it reads tables of a run as cases does
    "report": 10,
    "commands": 11,
    "cli": 12,
    "__main__": 13,
}
# Imports inside functions: who, what, why. Nothing else may hide there.
DEFERRED = {
    ("base.records", "inspect"): "only somebody who asks for a signature pays for it",
    ("read.*", "difflib"): "only a wrong file asks for the nearest word",
    ("read.reader", "slip.read.template"): "only a wrong file is shown a sample of its key",
    ("friction.closed.*", "scipy.special"): "heavy; a check does without these closed forms",
    ("assess", "slip.friction.pressed.stage"): "brings scipy's transforms; only a pressed contact asks for them",
    ("assess", "slip.verdict.pressed"): "it needs the former",
    ("assess", "slip.friction.known_pressure"): "only a face of known pressure asks for it",
    ("assess", "slip.verdict.pressed_face"): "it needs the former",
    ("friction.models", "slip.friction.model_strips"): "brings scipy's band solver; only a lap asks for it",
    ("friction.models", "slip.friction.model_blocks"): "brings scipy's transforms; only thick blocks do",
    ("report.words", "unicodedata"): "only a text outside ASCII has wide characters",
    ("cli", "slip.report.machine"): "only an error that is asked for as JSON needs it",
    ("commands.*", "slip.assess"): "`new`, `tables` and --version do without it",
    ("commands.*", "slip.cases.*"): "brings polars; only a table of load cases pays for it",
    ("commands.*", "slip.stiffness.*"): "only `penalty` asks for it",
    ("commands.*", "slip.report.*"): "each command loads the one report that it prints",
    ("commands.*", "slip.read.template"): "only `new` writes a file",
    ("commands.*", "concurrent.futures"): "only --workers asks for processes",
    ("commands.*", "multiprocessing"): "the same",
}
HEAVY = ("scipy", "sympy", "matplotlib", "jinja2", "polars", "pandas", "pyarrow", "rainflow", "skfem")


def name_of(path: Path) -> str:
    """Dotted name below slip: clamp.stage, base, cli, '' for the package itself."""
    parts = path.relative_to(PACKAGE).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


TREES = {name_of(path): ast.parse(path.read_text(encoding="utf-8")) for path in sorted(PACKAGE.rglob("*.py"))}


def room(module: str) -> str:
    return module.split(".")[0]


def imported(module: str, tree: ast.AST) -> set[str]:
    """Everything that a tree imports, as dotted names from the top; `from slip.base import units` counts as slip.base.units."""
    found: set[str] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{module} imports relatively: write the whole name"
            assert node.module is not None
            for alias in node.names:
                below = f"{node.module}.{alias.name}"
                found.add(below if below.removeprefix("slip.") in TREES else node.module)
    return found


def own(module: str) -> set[str]:
    """The modules of slip that a module imports, without the leading slip."""
    found = {name for name in imported(module, TREES[module]) if name.split(".")[0] == "slip"}
    return {name.removeprefix("slip").removeprefix(".") for name in found}


GRAPH = {module: own(module) for module in TREES}


def uphill(graph: dict[str, set[str]]) -> list[str]:
    """Imports that do not point down the order."""
    wrong = []
    for module, names in graph.items():
        for name in names - {""}:
            here, there = ORDER[room(module)] if module else -1, ORDER[room(name)]
            if here < there or (here == there and room(module) != room(name)):
                wrong.append(f"{module or 'slip'} imports {name}")
    return wrong


def cycles(graph: dict[str, set[str]]) -> list[str]:
    """A path back to itself for every module that has one."""
    wrong = []
    for start in graph:
        paths = [(start,)]
        seen = set()
        while paths:
            path = paths.pop()
            for name in graph.get(path[-1], ()):
                if name == start:
                    wrong.append(" -> ".join((*path, start)))
                elif name not in seen:
                    seen.add(name)
                    paths.append((*path, name))
    return wrong


def test_every_room_has_its_place():
    rooms = {room(module) for module in TREES} - {""}
    assert rooms <= set(ORDER), "a new room belongs into ORDER"
    assert len(TREES) > 50 and "clamp.stage" in TREES, "the walk over slip/ has lost the modules"


def test_imports_point_one_way():
    assert uphill(GRAPH) == []
    assert uphill({"base.units": {"joint.bolt"}}) and uphill({"cases.table": {"scatter.draw"}}), (
        "the test must see a wrong import"
    )


def test_no_module_imports_itself_round_a_corner():
    assert cycles(GRAPH) == []
    assert cycles({"a": {"b"}, "b": {"c"}, "c": {"a"}}), "the test must see a cycle"


def test_base_knows_no_bolts():
    assert [f"{m} imports {n}" for m in GRAPH if room(m) == "base" for n in GRAPH[m] if room(n) != "base"] == []


@pytest.mark.parametrize("module", TREES)
def test_no_star_import(module):
    stars = [
        n for n in ast.walk(TREES[module]) if isinstance(n, ast.ImportFrom) and any(a.name == "*" for a in n.names)
    ]
    assert stars == []


def deferred() -> set[tuple[str, str]]:
    """(module, imported) of all imports inside functions."""
    found = set()
    for module, tree in TREES.items():
        functions = [n for n in ast.walk(tree) if isinstance(n, ast.FunctionDef | ast.AsyncFunctionDef)]
        found |= {(module, name) for function in functions for name in imported(module, function)}
    return found


def test_imports_inside_functions_are_listed_with_a_reason():
    found = deferred()
    allowed = {pair for pair in found for who, what in DEFERRED if fnmatch(pair[0], who) and fnmatch(pair[1], what)}
    assert found - allowed == set(), "move it to the top, or list it in DEFERRED with its reason"
    unused = [key for key in DEFERRED if not any(fnmatch(m, key[0]) and fnmatch(n, key[1]) for m, n in found)]
    assert unused == [], "no such import any more: take it out of DEFERRED"


def has_formula(tree: ast.AST) -> bool:
    functions = [n for n in ast.walk(tree) if isinstance(n, ast.FunctionDef)]
    calls = [d.func for f in functions for d in f.decorator_list if isinstance(d, ast.Call)]
    return any(isinstance(call, ast.Name) and call.id == "formula" for call in calls)


FORMULA_MODULES = [module for module, tree in TREES.items() if has_formula(tree)]


@pytest.mark.parametrize("module", FORMULA_MODULES)
def test_formulas_import_only_base_and_neighbours(module):
    """They take numbers and arrays: a notebook calls them, a published case pins them."""
    folder = module.rpartition(".")[0]
    outside = {n for n in GRAPH[module] if room(n) != "base" and n.rpartition(".")[0] != folder}
    assert outside == set()
    assert not any(name.endswith(".stage") for name in GRAPH[module]), (
        "a stage calls its formulas, not the other way round"
    )


def test_formula_modules_are_found():
    assert {"clamp.tightening", "clamp.springs", "friction.law", "verdict.standards.en1993"} <= set(FORMULA_MODULES)


@pytest.mark.parametrize("module", [m for m in TREES if m != "cli"])
def test_only_the_command_prints(module):
    said = []
    for node in ast.walk(TREES[module]):
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id in ("print", "input"):
            said.append(node.lineno)
        if isinstance(node, ast.Attribute) and node.attr in ("stdout", "stderr"):
            said.append(node.lineno)
    assert said == []


@pytest.mark.parametrize("module", [m for m in TREES if "" in GRAPH[m]])
def test_the_package_is_asked_for_its_version_only(module):
    """slip.assess and the like would resolve lazily and dodge the order."""
    asked = {
        node.attr
        for node in ast.walk(TREES[module])
        if isinstance(node, ast.Attribute) and isinstance(node.value, ast.Name) and node.value.id == "slip"
    }
    assert asked <= {"__version__"}


def names_in(tree: ast.AST) -> set[str]:
    return {node.id for node in ast.walk(tree) if isinstance(node, ast.Name)}


def test_data_files_are_read_in_one_place():
    """base.tables knows where slip/data lies and reads it; all others ask it for rows."""
    reads_csv = {m for m in TREES if "csv" in imported(m, TREES[m])}
    users = {"read.bolt_list", "cases.form", "cases.header", "cases.parse", "cases.stream", "stiffness.run_table"}
    assert reads_csv <= {"base.tables"} | users, "the others read tables of the user"
    knows_its_place = {m for m in TREES if "__file__" in names_in(TREES[m])}
    assert knows_its_place <= {"base.tables", "report.page"}, "report.page finds its templates"
    assert {m for m in TREES if "DATA" in names_in(TREES[m])} == {"base.tables"}
    by_import = {
        m
        for m in TREES
        for n in ast.walk(TREES[m])
        if isinstance(n, ast.ImportFrom) and "DATA" in {a.name for a in n.names}
    }
    assert by_import == set()
    assert {
        m for m in TREES for n in imported(m, TREES[m]) if n.startswith(("importlib.resources", "pkgutil"))
    } == set()


def loaded_by(code: str) -> set[str]:
    """Modules that a fresh process holds after running `code`."""
    tail = "\nimport sys\nsys.stdout = sys.__stdout__\nprint('\\n'.join(sys.modules))"
    run = subprocess.run([sys.executable, "-c", code + tail], capture_output=True, text=True, cwd=ROOT)
    assert run.returncode == 0, run.stderr
    return set(run.stdout.split())


def test_a_check_loads_no_heavy_library():
    code = (
        "import io, sys, slip.cli\n"
        "sys.stdout = io.StringIO()\n"
        "assert slip.cli.main(['check', 'examples/bracket.toml']) == 0\n"
        "assert 'HOLDS' in sys.stdout.getvalue()"
    )
    loaded = loaded_by(code)
    assert "slip.friction.stage" in loaded and "numpy" in loaded, "the check must have run"
    assert {name for name in loaded if name.split(".")[0] in HEAVY} == set()
    spare = {
        "difflib",
        "unittest",
        "shutil",
        "slip.report.page",
        "slip.report.machine",
        "slip.report.equations",
        "slip.read.template",
    }
    assert loaded & spare == set(), "loaded at every check, needed by none"


def test_a_command_that_only_shows_tables_does_without_numpy():
    loaded = loaded_by(
        "import io, sys, slip.cli\nsys.stdout = io.StringIO()\nassert slip.cli.main(['tables', 'friction']) == 0"
    )
    assert "numpy" not in loaded
