"""The line that a fault names, whatever way the key is written."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from slip.base.errors import Problems
from slip.read.build import read
from slip.read.lines import key_lines

LINES = r'''# comment with [brackets] and key = value
title = """
[bolt]
thread = "no"
"""
bolt.thread = "M16"  # dotted
"bolt".'grade' = "8.8"

[pattern]  # a comment
positions = [
  [ -80, -60 ],  # first
  [80, 60]
]
names = [ "a]b",
  # between
  "c#d",
]

[[ plate ]]
outline = { outer_diameter = 90,  inner_diameter = 5 }
[[plate]]
"thick\u006eess" = 3
material = { name = QQQit's {not} [this]QQQ, youngs_modulus = 2e5 }
[[plate.hole]]
x.y = 1979-05-27 07:32:00
[[plate.hole]]
x.y = 1.5e3
[a."b.c".d]
e = """quote \""" and ""quotes"""""
f = ""
g = [[], [[1, 2],
  [3]], {h = "}", i = [
  4]}]
'''.replace("QQQ", "'" * 3)
EXPECTED_LINES = {
    ("title",): 2,
    ("bolt",): 6,
    ("bolt", "thread"): 6,
    ("bolt", "grade"): 7,
    ("pattern",): 9,
    ("pattern", "positions"): 10,
    ("pattern", "positions", 0): 11,
    ("pattern", "positions", 0, 1): 11,
    ("pattern", "positions", 1): 12,
    ("pattern", "names"): 14,
    ("pattern", "names", 0): 14,
    ("pattern", "names", 1): 16,
    ("plate",): 19,
    ("plate", 0): 19,
    ("plate", 0, "outline", "inner_diameter"): 20,
    ("plate", 1): 21,
    ("plate", 1, "thickness"): 22,
    ("plate", 1, "material", "youngs_modulus"): 23,
    ("plate", 1, "hole", 0, "x", "y"): 25,
    ("plate", 1, "hole", 1): 26,
    ("plate", 1, "hole", 1, "x"): 27,
    ("a", "b.c", "d"): 28,
    ("a", "b.c", "d", "e"): 29,
    ("a", "b.c", "d", "f"): 30,
    ("a", "b.c", "d", "g", 1, 0, 1): 31,
    ("a", "b.c", "d", "g", 1, 1): 32,
    ("a", "b.c", "d", "g", 2, "h"): 32,
    ("a", "b.c", "d", "g", 2, "i", 0): 33,
}


def paths(tree: object, here: tuple[str | int, ...] = ()) -> set[tuple[str | int, ...]]:
    """Every path of a tree."""
    inner = tree.items() if isinstance(tree, dict) else enumerate(tree) if isinstance(tree, list) else ()
    return {here} | {path for key, value in inner for path in paths(value, (*here, key))}


def test_lines_of_all_ways_to_write_a_key() -> None:
    found = key_lines(LINES)
    assert {path: found.get(path) for path in EXPECTED_LINES} == EXPECTED_LINES
    assert set(found) | {()} == paths(tomllib.loads(LINES))


WRONG = """format = 1
units = "N mm"
[pattern]
positions = [
  [-80, 0],
  [80, "9 kN"]
]
[tightening]
preload = [78000, 125000]
[losses]
embedding = 0
[interface]
friction = 0.2
[[case]]
acts_on = "joint"
shear = [1, 2]
"""


@pytest.mark.parametrize("change", ["as it is", "carriage returns", "byte-order mark", "comments above"])
def test_lines_in_a_file(change: str, tmp_path: Path) -> None:
    data = {
        "as it is": WRONG.encode(),
        "carriage returns": WRONG.replace("\n", "\r\n").encode(),
        "byte-order mark": b"\xef\xbb\xbf" + WRONG.encode(),
        "comments above": "# one\u2028two\u0085three\n".encode() + WRONG.encode(),
    }[change]
    (tmp_path / "joint.toml").write_bytes(data)
    with pytest.raises(Problems) as caught:
        read(tmp_path / "joint.toml")
    (error,) = caught.value.errors
    assert (error.line, error.key) == (6 + (change == "comments above"), "pattern.positions[2][2]")
    assert error.file == str(tmp_path / "joint.toml")
