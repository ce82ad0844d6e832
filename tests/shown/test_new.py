"""The file that `slip new` writes: it passes a check as it stands, and each key in it that is commented out can be used."""

import re

import pytest

from slip.assess import assess
from slip.base.errors import Problems
from slip.cli import main
from slip.read.build import read_text
from slip.read.schema import KEYS, TABLES
from slip.read.template import CONTACT_ONLY, template

KINDS = ("bolted", "lap")
KEY = re.compile(r"^# (\w+) = ")
HEADER = re.compile(r"^(# )?(\[\[?[\w.]+\]\]?)$")
# Keys that need or exclude another: alone they are a fault of the input, told in words. table.key -> words of the fault
COMPANIONS = {
    "case[].peak": "no static case",
    "tightening.nut_factor": "frictions",
    "tightening.tool_accuracy": "scatter",
    "tightening.scatter": "method",
    "tightening.scatter_ratio": "method",
    "tightening.scatter_sigma": "method",
    "tightening.sigmas": "scatter_sigma",
    "tightening.preload": "torque",
    "bolt.segment[].diameter": "length",
    "bolt.segment[].length": "diameter",
    "pattern.positions": "grid",
    "pattern.grid": "positions",
    "pattern.circle": "one of positions, grid, circle, file",
    "bolted pattern.names": "4 names",
    "pattern.file": "one of positions, grid, circle, file",
    "axial.load_introduction": "bolt_share",
    "interface.pressure": "bolts",
    "case[].other_end": "static",
}
# Groups of commented keys that belong together: kind, keys to use, keys to take out.
GROUPS = {
    "nut factor": ("tightening.nut_factor", ["tightening.thread_friction", "tightening.head_friction"]),
    "tool": ("tightening.tool_accuracy", ["tightening.method"]),
    "bound": ("tightening.scatter", ["tightening.method"]),
    "ratio of scatter": ("tightening.scatter_ratio", ["tightening.method"]),
    "sigma": ("tightening.scatter_sigma tightening.sigmas", ["tightening.method"]),
    "preload": ("tightening.preload", ["tightening.torque", "tightening.method"]),
    "piece": ("bolt.segment[].diameter bolt.segment[].length", []),
    "introduction": ("axial.load_introduction", ["axial.bolt_share"]),
    "other end": ("case[].other_end", ["case[].kind"]),
    "EN": (
        "standard[].name standard[].to_standard_level standard[].category standard[].slip_class standard[].hole",
        [],
    ),
}
# Groups whose sample does not fit the joint of that kind: the fault says what would.
GROUP_FAULTS = {("lap", "piece"): "the grip of 24 mm"}


def lines_of(kind: str) -> list[tuple[str, str]]:
    """Each line with the path of its key, '' where it is none."""
    found, table = [], ""
    for line in template(kind).splitlines():
        if header := HEADER.match(line):
            name = header.group(2).strip("[]")
            table = f"{name}[]" if header.group(2).startswith("[[") else name
            found.append((line, ""))
        elif key := re.match(r"^(?:# )?(\w+) = ", line):
            found.append((line, f"{table}.{key.group(1)}".strip(".")))
        else:
            found.append((line, ""))
    return found


def commented(kind: str) -> list[str]:
    """Paths of the keys that a file holds as comments only, each once."""
    lines = lines_of(kind)
    used = {path for line, path in lines if path and not line.startswith("#")}
    return [path for path in dict.fromkeys(p for line, p in lines if p and line.startswith("# ")) if path not in used]


def with_keys(kind: str, wanted: set[str], without: set[str] = frozenset()) -> str:
    """The file with some of its commented keys in use, their tables with them, and some keys taken out."""
    out, header, left = [], None, set(wanted)
    for line, path in lines_of(kind):
        if HEADER.match(line):
            header = len(out)
            out.append(line)
        elif path in left and line.startswith("# "):
            left.discard(path)
            out.append(line.removeprefix("# "))
            if header is not None and HEADER.match(out[header]):
                out[header] = out[header].removeprefix("# ")
        elif path in without and not line.startswith("#"):
            out.append("# " + line)
        else:
            out.append(line)
    assert not left, f"not in the file: {left}"
    return "\n".join(out) + "\n"


def outcome(text: str) -> str:
    """'' for a file that reads, else the faults in words; any other exception fails the test."""
    try:
        read_text(text)
    except Problems as problems:
        for error in problems.errors:
            assert error.code and error.found and error.expected and error.remedy, error
        return str(problems)
    return ""


@pytest.mark.parametrize("kind", KINDS)
def test_it_passes_a_check_and_shows_every_key(kind, tmp_path, capsys):
    path = tmp_path / f"{kind}.toml"
    assert main(["new", str(path), "--kind", kind]) == 0
    assert main(["check", str(path)]) == 0
    assert "HOLDS" in capsys.readouterr().out
    shown = {p for _, p in lines_of(kind) if p}
    assert shown == {key.path for key in KEYS if key.table not in CONTACT_ONLY}
    headers = {HEADER.match(line).group(2).strip("[]") for line, _ in lines_of(kind) if HEADER.match(line)}
    assert headers == {name.removesuffix("[]") for name in TABLES if name and name not in CONTACT_ONLY}


def test_it_never_writes_over_a_file(tmp_path, capsys):
    path = tmp_path / "mine.toml"
    path.write_text("mine", encoding="utf-8")
    assert main(["new", str(path)]) == 2
    assert path.read_text(encoding="utf-8") == "mine" and "choose another name" in capsys.readouterr().err


@pytest.mark.parametrize("path", ["no such folder/x.toml", "."])
def test_a_path_that_cannot_be_written_is_an_input_fault(path, tmp_path, capsys, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert main(["new", path]) == 2
    assert "Traceback" not in capsys.readouterr().err


def test_a_contact_speaks_of_no_bolts_and_passes(tmp_path, capsys):
    path = tmp_path / "x.toml"
    assert main(["new", str(path), "--kind", "contact"]) == 0
    assert "[bolt]" not in path.read_text(encoding="utf-8")
    assert main(["check", str(path)]) == 0 and "slips wholly" in capsys.readouterr().out


def fault_of(kind: str, path: str) -> str:
    """Words of the fault that a key alone makes, '' when it needs nobody."""
    if special := COMPANIONS.get(f"{kind} {path}"):
        return special
    table = path.rpartition(".")[0]
    return COMPANIONS.get(
        path, COMPANIONS.get(table, "name" if table == "standard[]" and path != "standard[].name" else "")
    )


@pytest.mark.parametrize(("kind", "path"), [(kind, path) for kind in KINDS for path in commented(kind)])
def test_each_commented_key_alone(kind, path):
    said, fault = outcome(with_keys(kind, {path})), fault_of(kind, path)
    if fault:
        assert fault in said
    else:
        assert said == ""


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("group", GROUPS)
def test_keys_that_belong_together(kind, group):
    keys, without = GROUPS[group]
    wanted = set(keys.split())
    text = with_keys(kind, wanted & set(commented(kind)), set(without))
    if fault := GROUP_FAULTS.get((kind, group)):
        assert fault in outcome(text)
        return
    assert outcome(text) == ""
    assert assess(read_text(text)).verdict.exit_code in (0, 1, 3)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("table", ["finite_elements", "fretting", "loosening", "scatter", "table"])
def test_whole_tables(kind, table):
    """All keys of a table that stands alone, at once."""
    wanted = {path for path in commented(kind) if path.rpartition(".")[0] == table}
    assert wanted and outcome(with_keys(kind, wanted)) == ""


def test_every_companion_is_a_commented_key():
    paths = {path for kind in KINDS for path in commented(kind)}
    assert {path.split()[-1] for path in COMPANIONS} - paths - set(TABLES) == set()
