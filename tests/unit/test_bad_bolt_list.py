"""Wrong bolt lists: each fault with the list's own file and line, and together with those of the joint file."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from slip.base.errors import Problems
from slip.read.build import read

PRELOAD, SHEAR, FILE = "preload = [78000, 125000]", "shear = [0, 24000]", 'file = "bolts.csv"'
GOOD = f"""\
format = 1
units = "N mm"
[bolt]
thread = "M16"
[tightening]
{PRELOAD}
[losses]
embedding = 0
[interface]
friction = [0.18, 0.25]
[pattern]
{FILE}
[[case]]
acts_on = "joint"
{SHEAR}
"""
HEAD = "name,x[mm],y[mm]\n"
PRELOADS = "name,x[mm],y[mm],preload_low[N],preload_high[N]\n"
# name, the list, then code, line and key of each fault, and words of the last sentence
BAD_LISTS = [
    ("no rows", HEAD, [("bolt-list-empty", 1, "")], "add the bolts"),
    ("only separators", ",,\n,,\n", [("bolt-list-empty", 1, "")], "a header"),
    ("no header", "B1,0,0\nB2,9,9\n", [("unknown-column", 1, "")] * 3, "name, x[mm], y[mm]"),
    ("no y", "name,x[mm]\nB1,0\n", [("missing-column", 1, "")], "y[mm]"),
    ("one preload", "name,x[mm],y[mm],preload_low[N]\nB1,0,0,5\n", [("missing-column", 1, "")], "preload_high[N]"),
    ("column twice", "name,x[mm],x[in],y[mm]\nB1,0,0,0\n", [("column-twice", 1, "x")], "two columns x"),
    ("unknown column", "name,x[mm],y[mm],preload_lo[N]\nB1,0,0,5\n", [("unknown-column", 1, "")], "did you mean preload_low[N]?"),
    ("no unit", "name,x,y[mm]\nB1,0,0\n", [("unit-missing", 1, "x")], "x[mm]"),
    ("wrong unit", "name,x[N],y[mm]\nB1,0,0\n", [("unit-wrong", 1, "x")], "x[mm]"),
    ("unknown unit", "name,x[pt],y[mm]\nB1,0,0\n", [("unit-unknown", 1, "x")], "N, kN"),
    ("lb", "name,x[mm],y[mm],preload_low[lb],preload_high[lbf]\nB1,0,0,5,6\n", [("unit-ambiguous", 1, "preload_low")], "lbf"),
    ("short row", HEAD + "B1,0,0\nB2,9\n", [("wrong-count", 3, "")], "3 cells"),
    ("decimal comma between commas", HEAD + "B1,0,0\nB2,80,5,60\n", [("wrong-count", 3, "")], '";" between the cells'),
    ("empty cell", HEAD + "B1,0,\nB2,9,9\n", [("not-a-number", 2, "y")], 'found ""'),
    ("words", HEAD + "B1,0,here\nB2,9,9\n", [("not-a-number", 2, "y")], 'found "here"'),
    ("unit in the cell", HEAD + "B1,0,9 mm\nB2,9,9\n", [("not-a-number", 2, "y")], "the unit stands in the header"),
    ("not finite", HEAD + "B1,nan,0\nB2,9,inf\n", [("not-a-number", 2, "x"), ("not-a-number", 3, "y")], "inf"),
    ("absurd", HEAD + "B1,1e99,0\nB2,9,1\n", [("not-a-number", 2, "x")], "1e99"),
    ("thousands", "name;x[mm];y[mm]\nB1;1.200,5;0\n", [("not-a-number", 2, "x")], "1.200,5"),
    ("no name", HEAD + " ,0,0\nB2,9,9\n", [("bolt-without-name", 2, "name")], "name the bolt"),
    ("name twice", HEAD + "B1,0,0\n\nB1,9,9\n", [("bolt-twice", 4, "")], 'a second bolt "B1"'),
    ("same point", HEAD + "B1,0,0\nB2,9,9\nB3,9,9.0\n", [("bolts-coincide", 4, "")], "B3 at the same point as B2"),
    ("preload upside down", PRELOADS + "B1,0,0,5,6\nB2,9,9,7,6\n", [("range-upside-down", 3, "preload_low")], "7 above 6"),
    ("no preload left", PRELOADS + "B1,0,0,0,6\n", [("out-of-limits", 2, "preload_low")], "above 0"),
    ("stray quotation mark", HEAD + 'B1,0,0\n"B2,9,9' + "9" * 200_000, [("bolt-list-broken", 3, "")], "quotation marks"),
    ("too many bolts", HEAD + "".join(f"B{i},{i},0\n" for i in range(1001)), [("too-many-bolts", 0, "pattern.file")], "at most 1000"),
]  # fmt: skip


@pytest.fixture
def with_list(tmp_path: Path) -> Callable[..., Path]:
    """Writes the good file with a bolt list beside it; returns the joint file."""

    def write(data: str | bytes, text: str = GOOD) -> Path:
        (tmp_path / "bolts.csv").write_bytes(data.encode() if isinstance(data, str) else data)
        path = tmp_path / "joint.toml"
        path.write_text(text)
        return path

    return write


@pytest.mark.parametrize(("name", "data", "faults", "says"), BAD_LISTS, ids=[row[0] for row in BAD_LISTS])
def test_bolt_lists(name: str, data: str, faults: list, says: str, with_list: Callable[..., Path]) -> None:
    path = with_list(data, GOOD.replace(PRELOAD, "") if "preload_low" in data else GOOD)
    with pytest.raises(Problems) as caught:
        read(path)
    errors = caught.value.errors
    own = str(path.with_name("bolts.csv"))
    if name == "too many bolts":
        assert [(e.code, e.file, e.line, e.key) for e in errors] == [("too-many-bolts", str(path), 12, "pattern.file")]
    else:
        assert [(e.code, e.file, e.line, e.key) for e in errors] == [
            (code, own, line, key) for code, line, key in faults
        ]
    assert says in str(errors[-1])


def test_faults_of_both_files_come_together(with_list: Callable[..., Path]) -> None:
    path = with_list(HEAD + "B1,0,0\nB2,9\nB3,x,y\n", GOOD.replace(SHEAR, "shear = 24000").replace("M16", "M17"))
    with pytest.raises(Problems) as caught:
        read(path)
    places = [(Path(e.file).name, e.line) for e in caught.value.errors]
    assert places == [("joint.toml", 4), ("joint.toml", 15), ("bolts.csv", 3), ("bolts.csv", 4), ("bolts.csv", 4)]


@pytest.mark.parametrize(("data", "code"), [(b"", "file-empty"), (b"\xef\xbb\xbf", "file-empty")])
def test_a_list_that_cannot_be_read_is_a_fault_of_its_key(
    data: bytes, code: str, with_list: Callable[..., Path]
) -> None:
    path = with_list(data)
    with pytest.raises(Problems) as caught:
        read(path)
    (error,) = caught.value.errors
    assert (error.code, error.file, error.line, error.key) == (code, str(path), 12, "pattern.file")
    assert "bolts.csv" in error.found


def test_a_list_that_is_not_utf8(with_list: Callable[..., Path]) -> None:
    path = with_list(HEAD.encode() + b"B\xfc,0,0\n")
    with pytest.raises(Problems) as caught:
        read(path)
    (error,) = caught.value.errors
    assert (error.code, Path(error.file).name, error.line) == ("file-not-utf8", "bolts.csv", 2)


def test_preloads_in_list_and_file(with_list: Callable[..., Path]) -> None:
    path = with_list(PRELOADS + "B1,0,0,5,6\nB2,9,9,5,6\n")
    with pytest.raises(Problems) as caught:
        read(path)
    (error,) = caught.value.errors
    assert (error.code, error.line, error.key) == ("too-many-forms", 6, "tightening.preload")
    assert "bolt list" in error.found
