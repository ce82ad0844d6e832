"""Writes the parts of the documents that the program makes, and checks the outputs that they show.

python tests/house/make_docs.py                          rewrites them, then checks all
python tests/house/make_docs.py --check                  changes nothing; exits with 1 where a document is out of date
... --validation FILE                                    with the table that `pytest --validation FILE` has written

In README.md, DEVELOPERS.md and docs/*.md:
<!-- made: keys|messages|validation --> .. <!-- end -->  lines written here
<!-- file: NAME -->                                      the block below is a file of that name
<!-- shows: COMMAND -->                                  the block below is what the command prints; a line of .. stands for any lines
"""

from __future__ import annotations

import argparse
import contextlib
import io
import os
import re
import shlex
import shutil
import sys
import tempfile
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import NamedTuple

ROOT = Path(__file__).resolve().parents[2]
MADE = re.compile(r"^<!-- made: (\w+) -->\n(.*?)^<!-- end -->$", re.MULTILINE | re.DOTALL)
BLOCK = re.compile(r"^<!-- (file|shows): (.+?) -->\n```\w*\n(.*?)^```$", re.MULTILINE | re.DOTALL)
SCRIPT = re.compile(r"^```python\n(.*?)^```$", re.MULTILINE | re.DOTALL)
ABOVE = "the script above"
LEFT_OUT = ".."
HEADS = {"error": "Errors of the input", "assumption": "Assumptions", "warning": "Warnings", "unproven": "Not proven"}


def pages() -> list[Path]:
    """All documents."""
    return [
        p for p in (ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").glob("*.md"))) if p.exists()
    ]


def key_table() -> str:
    """Every key of the joint file."""
    from slip.read.template import table_of_keys

    return table_of_keys().rstrip("\n") + "\n"


def message_tables() -> str:
    """Every code with its words, a table for each kind."""
    from slip.base.tables import table

    rows = table("messages")
    unknown = {row["kind"] for row in rows} - set(HEADS)
    assert not unknown, f"a heading for {unknown}"
    lines = []
    for kind, head in HEADS.items():
        own = [row for row in rows if row["kind"] == kind]
        lines += [f"## {head}", "", "| code | what it says | what to do |", "| --- | --- | --- |"]
        for row in own:
            cells = (f"`{row['code']}`", row["meaning"], row["remedy"] or "-")
            lines.append("| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |")
        lines.append("")
    return "\n".join(lines).rstrip("\n") + "\n"


def made(validation: Path | None) -> dict[str, Callable[[], str]]:
    """What writes each kind of part; validation only where its table is at hand."""
    found = {"keys": key_table, "messages": message_tables}
    if validation is not None:
        found["validation"] = lambda: validation.read_text(encoding="utf-8").rstrip("\n") + "\n"
    return found


def rewritten(text: str, makers: dict[str, Callable[[], str]]) -> str:
    """A page with its made parts as the program makes them now."""

    def again(match: re.Match[str]) -> str:
        name, body = match.groups()
        maker = makers.get(name)
        return f"<!-- made: {name} -->\n{maker() if maker else body}<!-- end -->"

    return MADE.sub(again, text)


class Shown(NamedTuple):
    """An output that a page shows: the page, the command, the text, and the script for `the script above`."""

    page: str
    command: str
    text: str
    script: str


def files() -> dict[str, str]:
    """Contents of the files that the pages hold, by name."""
    blocks = (b for p in pages() for b in BLOCK.findall(p.read_text(encoding="utf-8")))
    return {name: text for kind, name, text in blocks if kind == "file"}


def shown() -> Iterator[Shown]:
    """Every output that a page shows."""
    for path in pages():
        text = path.read_text(encoding="utf-8")
        for match in BLOCK.finditer(text):
            kind, command, output = match.groups()
            if kind == "shows":
                scripts = SCRIPT.findall(text[: match.start()])
                yield Shown(path.relative_to(ROOT).as_posix(), command, output, scripts[-1] if scripts else "")


def printed(command: str, script: str = "") -> str:
    """What a command prints in a folder that holds the examples and the files of the pages; standard error where nothing else."""
    from slip.cli import main

    out, err = io.StringIO(), io.StringIO()
    with tempfile.TemporaryDirectory() as folder, _inside(folder):
        shutil.copytree(ROOT / "examples", "examples")
        for name, text in files().items():
            Path(name).write_text(text, encoding="utf-8")
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            if command == ABOVE:
                exec(compile(script, "script", "exec"), {"__name__": "shown"})
            else:
                words = shlex.split(command)
                assert words[0] == "slip", f"{command}: only slip can be shown"
                main(words[1:])
    text = out.getvalue() or err.getvalue()
    assert "a fault of the program" not in text, f"{command}: {text}"
    return text


@contextlib.contextmanager
def _inside(folder: str) -> Iterator[None]:
    here = Path.cwd()
    os.chdir(folder)
    try:
        yield
    finally:
        os.chdir(here)


def matches(found: str, text: str) -> bool:
    """Whether a printed text is the shown one, where a line of `..` stands for any lines."""
    pattern = "".join(r"(?:.*\n)*?" if line == LEFT_OUT else re.escape(line) + r"\n" for line in text.splitlines())
    return re.fullmatch(pattern, found) is not None


def faults(validation: Path | None = None) -> list[str]:
    """What is out of date, a sentence each."""
    wrong = []
    makers = made(validation)
    for path in pages():
        text = path.read_text(encoding="utf-8")
        if rewritten(text, makers) != text:
            wrong.append(
                f"{path.relative_to(ROOT)}: a part that the program makes is out of date; run tests/house/make_docs.py"
            )
        opened = len(re.findall(r"^<!-- (?:made|file|shows):", text, re.MULTILINE))
        if opened != len(MADE.findall(text)) + len(BLOCK.findall(text)):
            wrong.append(f"{path.relative_to(ROOT)}: a mark without its block or its end")
    for one in shown():
        if not matches(printed(one.command, one.script), one.text):
            wrong.append(f"{one.page}: {one.command} prints something else")
    return wrong


def update(validation: Path | None) -> list[str]:
    """Rewrite made parts and outputs that are shown in full; the names of the pages that changed."""
    changed = []
    for path in pages():
        text = path.read_text(encoding="utf-8")
        new = rewritten(text, made(validation))

        def again(match: re.Match[str], page: str = text) -> str:
            kind, command, output = match.groups()
            if kind == "file" or LEFT_OUT in output.splitlines():
                return match.group()
            scripts = SCRIPT.findall(page[: page.index(match.group())])
            found = printed(command, scripts[-1] if scripts else "")
            return match.group().replace(f"\n{output}```", f"\n{found}```")

        new = BLOCK.sub(again, new)
        if new != text:
            path.write_text(new, encoding="utf-8", newline="\n")
            changed.append(path.relative_to(ROOT).as_posix())
    return changed


def main() -> int:
    """Rewrite, or check only; exit code 1 where something is out of date."""
    parser = argparse.ArgumentParser(description="the parts of the documents that the program makes")
    parser.add_argument("--check", action="store_true", help="change nothing")
    parser.add_argument("--validation", type=Path, metavar="FILE", help="table written by pytest --validation FILE")
    options = parser.parse_args()
    if not options.check:
        for name in update(options.validation):
            print(f"rewrote {name}")
    wrong = faults(options.validation)
    for sentence in wrong:
        print(sentence)
    print("documents up to date" if not wrong else f"{len(wrong)} to mend")
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.path.insert(0, str(ROOT))
    sys.exit(main())
