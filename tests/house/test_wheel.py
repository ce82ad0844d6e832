"""The program as a stranger gets it: a wheel, installed with what it names into an empty environment, run far from the source."""

import json
import os
import re
import shutil
import subprocess
import sys
import venv
import zipfile
from pathlib import Path

import pytest

import slip

ROOT = Path(__file__).resolve().parents[2]
# Joint files with load cases of their own.
JOINTS = [p for p in sorted((ROOT / "examples").glob("*.toml")) if "[[case]]" in p.read_text(encoding="utf-8")]
pytestmark = pytest.mark.slow
BINARIES = "Scripts" if os.name == "nt" else "bin"


def tool(*command: str, cwd: Path, code: int = 0) -> subprocess.CompletedProcess:
    """Run a command without this process's Python settings; its output in the fault when it fails."""
    environment = {key: value for key, value in os.environ.items() if not key.startswith("PYTHON")}
    done = subprocess.run(command, cwd=cwd, capture_output=True, text=True, env=environment, check=False)
    assert done.returncode == code, f"{' '.join(command)}\n{done.stdout}\n{done.stderr}"
    return done


@pytest.fixture(scope="session")
def wheel(tmp_path_factory) -> Path:
    """A wheel built from a copy of the source, so that nothing is left beside it."""
    copy, out = tmp_path_factory.mktemp("source"), tmp_path_factory.mktemp("wheel")
    for name in ("pyproject.toml", "README.md"):
        shutil.copy(ROOT / name, copy)
    shutil.copytree(ROOT / "slip", copy / "slip", ignore=shutil.ignore_patterns("__pycache__"))
    tool(sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--wheel-dir", str(out), str(copy), cwd=out)
    (found,) = out.glob("*.whl")
    return found


@pytest.fixture(scope="session")
def binaries(wheel, tmp_path_factory) -> Path:
    """The folder of commands of an empty environment into which the wheel and its dependencies are installed."""
    home = tmp_path_factory.mktemp("environment")
    venv.create(home, with_pip=True)
    python = home / BINARIES / "python"
    tool(str(python), "-m", "pip", "install", "--quiet", str(wheel), cwd=home)
    return home / BINARIES


def command(binaries: Path, *arguments: str, cwd: Path, code: int = 0) -> subprocess.CompletedProcess:
    return tool(str(binaries / "slip"), *arguments, cwd=cwd, code=code)


def test_the_wheel_holds_data_and_templates_and_no_tests(wheel):
    names = set(zipfile.ZipFile(wheel).namelist())
    data = {f"slip/data/{path.name}" for path in (ROOT / "slip/data").glob("*.csv")}
    templates = {f"slip/report/templates/{path.name}" for path in (ROOT / "slip/report/templates").iterdir()}
    modules = {path.relative_to(ROOT).as_posix() for path in (ROOT / "slip").rglob("*.py")}
    assert data and templates and data | templates | modules <= names
    assert [name for name in names if not name.startswith(("slip/", "slipproof-"))] == []


def test_it_says_its_version(binaries, tmp_path):
    for line in (
        command(binaries, "--version", cwd=tmp_path),
        tool(str(binaries / "python"), "-m", "slip", "--version", cwd=tmp_path),
    ):
        assert line.stdout == f"slip {slip.__version__}\n"


def test_it_comes_from_the_wheel(binaries, tmp_path):
    where = tool(str(binaries / "python"), "-c", "import slip; print(slip.__file__)", cwd=tmp_path).stdout
    assert "site-packages" in where and str(ROOT / "slip") not in where


@pytest.mark.parametrize("example", [path.name for path in JOINTS])
def test_an_example_far_from_the_source(binaries, tmp_path, example):
    shutil.copy(ROOT / "examples" / example, tmp_path)
    said = command(binaries, "check", example, cwd=tmp_path).stdout
    assert said == (ROOT / "tests/shown/golden" / example.replace(".toml", ".txt")).read_text(encoding="utf-8")
    found = json.loads(command(binaries, "check", example, "--json", cwd=tmp_path).stdout)
    assert found["holds"] is True and found["tool"]["version"] == slip.__version__


def test_a_table_far_from_the_source(binaries, tmp_path):
    for name in ("jib.toml", "jib.csv"):
        shutil.copy(ROOT / "examples" / name, tmp_path)
    options = ("--out", "out.parquet", "--report", "page.html", "--json")
    found = json.loads(command(binaries, "cases", "jib.toml", "jib.csv", *options, cwd=tmp_path, code=1).stdout)
    assert found["cases"] == {"all": 30, "hold": 29, "fail": 1, "not_judged": 0}
    assert {path.name for path in tmp_path.iterdir()} == {"jib.toml", "jib.csv", "out.parquet", "page.html"}


def test_the_page_is_written(binaries, tmp_path):
    shutil.copy(ROOT / "examples/bracket.toml", tmp_path)
    command(binaries, "check", "bracket.toml", "--report", "page.html", cwd=tmp_path)
    text = (tmp_path / "page.html").read_text(encoding="utf-8")
    assert "Roll bracket" in text and not re.search(r'(?:src|href)="https?://', text)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["bracket.toml", "page.html"]


@pytest.mark.parametrize("kind", ["bolted", "lap", "contact"])
def test_new_and_check(binaries, tmp_path, kind):
    assert command(binaries, "new", "mine.toml", "--kind", kind, cwd=tmp_path).stdout.startswith("wrote mine.toml")
    assert command(binaries, "check", "mine.toml", cwd=tmp_path).stdout.startswith("HOLDS")


def test_tables_and_explain(binaries, tmp_path):
    assert "friction" in command(binaries, "tables", cwd=tmp_path).stdout
    assert "steel / grey iron" in command(binaries, "tables", "friction", cwd=tmp_path).stdout
    shutil.copy(ROOT / "examples/bracket.toml", tmp_path)
    said = command(binaries, "explain", "bracket.toml", "paper jam", "B4", cwd=tmp_path).stdout
    assert said.startswith("Every number of paper jam, bolt B4") and "load factor per bolt" in said
