"""Writes tests/shown/golden: what the command says about the examples. Read the difference before you keep it.

python tests/shown/make_golden.py
"""

from __future__ import annotations

import io
import os
import re
import sys
from contextlib import redirect_stdout
from pathlib import Path
from tempfile import TemporaryDirectory

ROOT = Path(__file__).resolve().parents[2]
GOLDEN = Path(__file__).resolve().parent / "golden"
PICTURE = re.compile(r"data:image[^\"]*")  # its bytes hang on the version of the library that draws
# Joint files with load cases of their own; the others need a table.
EXAMPLES = [p for p in sorted((ROOT / "examples").glob("*.toml")) if "[[case]]" in p.read_text(encoding="utf-8")]
# File in golden: arguments of the command, run at the top of the project.
COMMANDS = {
    **{f"{path.stem}.txt": ["check", f"examples/{path.name}"] for path in EXAMPLES},
    "jib.txt": ["cases", "examples/jib.toml", "examples/jib.csv", "--top", "5"],
    "tray_si.txt": ["check", "examples/tray.toml", "--units", "N mm"],
    "penalty_bracket.txt": ["penalty", "examples/bracket.toml"],
    "explain_bracket.txt": ["explain", "examples/bracket.toml"],
    "explain_bars.txt": ["explain", "examples/bars.toml"],
    "explain_pad.txt": ["explain", "examples/pad.toml"],
    "page_bars.html": ["check", "examples/bars.toml", "--report"],
    "page_pad.html": ["check", "examples/pad.toml", "--report"],
    "explain_splice.txt": ["explain", "examples/splice.toml", "crane at the support", "B8"],
    "tables_friction.txt": ["tables", "friction"],
    "bracket.json": ["check", "examples/bracket.toml", "--json"],
}


def said(arguments: list[str]) -> str:
    """What the command prints on standard output, run at the top of the project; of a page what it writes, without pictures."""
    from slip.cli import main

    if arguments[-1] == "--report":
        with TemporaryDirectory() as folder:
            said([*arguments, str(Path(folder) / "page.html")])
            return PICTURE.sub("data:", (Path(folder) / "page.html").read_text(encoding="utf-8")).rstrip() + "\n"
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
