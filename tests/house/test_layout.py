"""The clone as it is handed over: what stands at the top, no trace of the machine that it was made on, nothing that was built."""

import re
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
TOP = {"README.md", "DEVELOPERS.md", "pyproject.toml", "slip", "tests", "examples", "docs"}
HIDDEN = {".ci", ".gitignore"}
BUILT = re.compile(r"(^|/)(__pycache__|build|dist|\.venv|[^/]*\.egg-info|\.[a-z]+_cache|\.hypothesis)(/|$)|\.pyc$")
# Paths of a machine that somebody worked on; examples of paths in messages are relative.
HOMES = "home", "root", "Users", "work", "tmp"
MACHINE = re.compile(rf"(?<![\w.])(?:/(?:{'|'.join(HOMES)})/|[A-Z]:\\Users)")


def tracked() -> list[str]:
    """Files under version control; without a repository all files but built ones."""
    run = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, text=True, check=False)
    if run.returncode == 0 and run.stdout:
        return [name for name in run.stdout.split("\0") if name and (ROOT / name).exists()]
    files = (path.relative_to(ROOT).as_posix() for path in ROOT.rglob("*") if path.is_file())
    return [name for name in files if not BUILT.search(name)]


FILES = tracked()


def test_the_top_holds_what_the_design_names():
    top = {name.split("/")[0] for name in FILES}
    assert top - HIDDEN - TOP == set()
    assert {"pyproject.toml", "slip", "tests", "examples"} <= top


def test_nothing_built_is_under_version_control():
    assert [name for name in FILES if BUILT.search(name)] == []


@pytest.mark.parametrize("suffix", [".py", ".md", ".toml", ".csv", ".html", ".css", ".json", ".txt", "run"])
def test_no_path_of_a_machine(suffix):
    wrong = []
    for name in FILES:
        if name.endswith(suffix) and name != "tests/house/test_layout.py":
            text = (ROOT / name).read_text(encoding="utf-8")
            wrong += [f"{name}: {match.group()}" for match in MACHINE.finditer(text)]
    assert wrong == []


def test_a_path_of_a_machine_is_seen():
    assert MACHINE.search(f"see /{HOMES[0]}/somebody/x") and not MACHINE.search("a/home/x and N/tmp")


def test_files_are_utf8_and_end_with_one_newline():
    wrong = []
    for name in FILES:
        data = (ROOT / name).read_bytes()
        text = data.decode("utf-8")  # raises for a file that is not text
        if data and not name.endswith(".json") and (not text.endswith("\n") or text.endswith("\n\n") or "\r" in text):
            wrong.append(name)
    assert wrong == []
