"""The tests see what they are for: every dangerous one-character change of tests/house/mutations.py turns a quick test red."""

import importlib.util
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
SCRIPT = Path(__file__).with_name("mutations.py")


@pytest.fixture
def mutations():
    spec = importlib.util.spec_from_file_location("mutations", SCRIPT)
    module = importlib.util.module_from_spec(spec)
    sys.modules["mutations"] = module
    spec.loader.exec_module(module)
    yield module
    del sys.modules["mutations"]


def test_every_change_stands_where_it_is_said_to(mutations, tmp_path):
    """Quick: a formula that was rewritten takes its mutation along."""
    assert len({m.name for m in mutations.MUTATIONS}) == len(mutations.MUTATIONS) >= 12
    for mutation in mutations.MUTATIONS:
        assert (ROOT / mutation.test.partition("::")[0]).exists()
        text = (ROOT / "slip" / mutation.file).read_text(encoding="utf-8")
        assert text.count(mutation.before) == 1, f"{mutation.name}: adapt it in {SCRIPT.name}"
        assert mutation.before != mutation.after


@pytest.mark.slow
def test_every_dangerous_change_is_seen():
    done = subprocess.run([sys.executable, str(SCRIPT)], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


@pytest.mark.slow
def test_a_change_that_no_test_sees_is_reported(mutations, monkeypatch, capsys):
    harmless = mutations.Mutation(
        "a word", "clamp/scatter.py", "Formulas of the scatter", "formulas of the scatter", "tests/unit/test_units.py"
    )
    monkeypatch.setattr(mutations, "MUTATIONS", (harmless,))
    assert mutations.main() == 1
    assert "GREEN  a word: slip/clamp/scatter.py" in capsys.readouterr().out
