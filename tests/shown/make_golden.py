"""Writes tests/shown/golden: what the command says about the examples. Read the difference before you keep it.

python tests/shown/make_golden.py
"""

from __future__ import annotations

import io
import os
import sys
from contextlib import redirect_stdout
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
GOLDEN = Path(__file__).resolve().parent / "golden"
# File in golden: arguments of the command, run at the top of the project.
COMMANDS = {
    **{f"{path.stem}.txt": ["check", f"examples/{path.name}"] for path in sorted((ROOT / "examples").glob("*.toml"))},
    "tray_si.txt": ["check", "examples/tray.toml", "--units", "N mm"],
    "explain_bracket.txt": ["explain", "examples/bracket.toml"],
    "explain_splice.txt": ["explain", "examples/splice.toml", "crane at the support", "B8"],
    "tables_friction.txt": ["tables", "friction"],
    "bracket.json": ["check", "examples/bracket.toml", "--json"],
}


def said(arguments: list[str]) -> str:
    """What the command prints on standard output, run at the top of the project."""
    from slip.cli import main

    here = Path.cwd()
    os.chdir(ROOT)
    try:
        with redirect_stdout(io.StringIO()) as out:
            main(arguments)
    finally:
        os.chdir(here)
    return out.getvalue()


if __name__ == "__main__":
    sys.path.insert(0, str(ROOT))
    for old in GOLDEN.iterdir():
        if old.name not in COMMANDS:
            old.unlink()
    for name, arguments in COMMANDS.items():
        (GOLDEN / name).write_text(said(arguments), encoding="utf-8", newline="\n")
        print(f"wrote {name}: slip {' '.join(arguments)}")
