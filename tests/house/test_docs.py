"""The documents say what the program does: made parts, shown outputs, ids of the validation table, links, marks of the README."""

import ast
import importlib.util
import re
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]


def _maker():
    spec = importlib.util.spec_from_file_location("make_docs", Path(__file__).with_name("make_docs.py"))
    module = importlib.util.module_from_spec(spec)
    sys.modules["make_docs"] = module
    spec.loader.exec_module(module)
    return module


DOCS = _maker()
PAGES = [path.relative_to(ROOT).as_posix() for path in DOCS.pages()]


@pytest.mark.parametrize("page", PAGES)
def test_made_parts_are_up_to_date(page):
    text = (ROOT / page).read_text(encoding="utf-8")
    assert DOCS.rewritten(text, DOCS.made(None)) == text, "run tests/house/make_docs.py"


@pytest.mark.parametrize(
    ("page", "name"),
    [("docs/input.md", "keys"), ("docs/messages.md", "messages"), ("docs/validation.md", "validation")],
)
def test_every_made_part_has_its_place(page, name):
    assert [n for n, _ in DOCS.MADE.findall((ROOT / page).read_text(encoding="utf-8"))] == [name]


def test_made_parts_hold_every_key_and_every_code():
    from slip.base.tables import table
    from slip.read.schema import KEYS

    assert all(f"| `{key.name}` |" in DOCS.key_table() for key in KEYS)
    assert all(f"| `{row['code']}` |" in DOCS.message_tables() for row in table("messages"))


SHOWN = list(DOCS.shown())


@pytest.mark.parametrize("one", SHOWN, ids=[f"{one.page}: {one.command}" for one in SHOWN])
def test_a_shown_output_is_the_real_one(one):
    found = DOCS.printed(one.command, one.script)
    if DOCS.LEFT_OUT not in one.text.splitlines():
        assert found == one.text, "run tests/house/make_docs.py and read what changed"
    assert DOCS.matches(found, one.text)


def test_lines_left_out_are_the_only_freedom():
    assert DOCS.matches("a\nb\nc\n", "a\n..\nc\n") and DOCS.matches("a\nc\n", "a\n..\nc\n")
    assert not DOCS.matches("a\nb\nd\n", "a\n..\nc\n") and not DOCS.matches("a\nb\n", "a\n")


@pytest.mark.parametrize("page", PAGES)
def test_every_mark_has_its_block(page):
    text = (ROOT / page).read_text(encoding="utf-8")
    opened = re.findall(r"^<!-- (?:made|file|shows):", text, re.MULTILINE)
    assert len(opened) == len(DOCS.MADE.findall(text)) + len(DOCS.BLOCK.findall(text))


def recorded_ids() -> set[str]:
    """First arguments of every call of the fixture `validate` in the tests."""
    found = set()
    for path in (ROOT / "tests").rglob("test_*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if (
                isinstance(node, ast.Call)
                and isinstance(node.func, ast.Name)
                and node.func.id == "validate"
                and node.args
            ):
                found |= {str(c.value) for c in ast.walk(node.args[0]) if isinstance(c, ast.Constant)}
    return found


def test_every_row_of_the_validation_table_has_its_test():
    """The whole comparison is made by .ci/run after the tests; here only that no row is left of a test that is gone."""
    ((_, body),) = DOCS.MADE.findall((ROOT / "docs/validation.md").read_text(encoding="utf-8"))
    rows = [line.split("|")[1].strip() for line in body.splitlines()[2:]]
    assert set(rows) <= recorded_ids()


@pytest.mark.parametrize("page", PAGES)
def test_links_lead_somewhere(page):
    text = (ROOT / page).read_text(encoding="utf-8")
    prose = re.sub(r"^```.*?^```$", "", text, flags=re.MULTILINE | re.DOTALL)
    broken = []
    for target in re.findall(r"\]\(([^)\s]+)\)", prose):
        if target.startswith(("http://", "https://", "mailto:")):
            continue
        name, _, anchor = target.partition("#")
        path = (ROOT / page).parent / name if name else ROOT / page
        if not path.exists() or (anchor and path.suffix == ".md" and anchor not in anchors(path)):
            broken.append(target)
    assert broken == []


def anchors(path: Path) -> set[str]:
    """Anchors that the headings of a page have."""
    text = re.sub(r"^```.*?^```$", "", path.read_text(encoding="utf-8"), flags=re.MULTILINE | re.DOTALL)
    heads = re.findall(r"^#+ (.+)$", text, re.MULTILINE)
    return {re.sub(r"[^\w\- ]", "", head.lower()).replace(" ", "-") for head in heads}


@pytest.mark.parametrize("mark", ["run", "test"])
def test_the_readme_marks_its_two_commands(mark):
    """.ci/run takes them from there."""
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    assert len(re.findall(rf"^<!-- {mark} -->\n```\w*\n(.+?)^```$", text, re.MULTILINE | re.DOTALL)) == 1
