"""What the command says: golden output of the examples, within a terminal's width and height whatever the file holds."""

import importlib.util
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from slip.cli import COMMANDS, main
from slip.report.words import columns

ROOT = Path(__file__).resolve().parents[2]
WIDTH, HEIGHT = 80, 24


def _maker():
    spec = importlib.util.spec_from_file_location("make_golden", Path(__file__).with_name("make_golden.py"))
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


MAKER = _maker()
EXAMPLES = [path.stem for path in MAKER.EXAMPLES]


def golden(name: str) -> str:
    return (MAKER.GOLDEN / name).read_text(encoding="utf-8")


def nearly(found, stored) -> bool:
    """Equal JSON, floats within 1e-9."""
    if isinstance(stored, dict):
        return (
            isinstance(found, dict) and list(found) == list(stored) and all(nearly(found[k], stored[k]) for k in stored)
        )
    if isinstance(stored, list):
        return isinstance(found, list) and len(found) == len(stored) and all(map(nearly, found, stored))
    if isinstance(stored, float) and isinstance(found, float):
        return found == pytest.approx(stored, rel=1e-9, abs=1e-9)
    return type(found) is type(stored) and found == stored


# golden


@pytest.mark.parametrize("name", [n for n in MAKER.COMMANDS if n.endswith((".txt", ".html"))])
def test_text_is_the_stored_one(name):
    assert MAKER.said(MAKER.COMMANDS[name]) == golden(name), (
        "read the difference, then python tests/shown/make_golden.py"
    )


@pytest.mark.parametrize("name", [n for n in MAKER.COMMANDS if n.endswith(".json")])
def test_json_is_the_stored_one(name):
    assert nearly(json.loads(MAKER.said(MAKER.COMMANDS[name])), json.loads(golden(name)))


def test_a_changed_digit_is_seen():
    stored = json.loads(golden("bracket.json"))
    changed = json.loads(golden("bracket.json"))
    changed["cases"][0]["ends"][0]["ledger"][2]["clamp_low"] *= 1 + 1e-8
    assert nearly(stored, stored) and not nearly(changed, stored)


def test_every_example_has_its_golden_text():
    assert {f"{name}.txt" for name in EXAMPLES} <= set(MAKER.COMMANDS)
    assert {path.name for path in MAKER.GOLDEN.iterdir()} == set(MAKER.COMMANDS)


@pytest.mark.parametrize("name", MAKER.COMMANDS)
def test_same_bytes_twice(name):
    assert MAKER.said(MAKER.COMMANDS[name]) == MAKER.said(MAKER.COMMANDS[name])


# the page of a terminal


def fits(text: str) -> None:
    lines = text.splitlines()
    assert len(lines) <= HEIGHT, f"{len(lines)} lines"
    assert [line for line in lines if columns(line) > WIDTH] == []
    assert [line for line in lines if not line.isprintable()] == []


@pytest.mark.parametrize("example", EXAMPLES)
def test_a_check_fits_into_a_terminal(example):
    fits(MAKER.said(["check", f"examples/{example}.toml"]))


def test_the_bracket_says_what_decides_first():
    first, second = golden("bracket.txt").splitlines()[:2]
    assert first.startswith("HOLDS: per bolt 1.874, required 1.8")
    assert "reel change" in first and "B3" in first
    assert "lowest friction 0.18" in second and "lowest preload" in second and "all loads growing" in second
    assert "Assumed" in golden("bracket.txt") and "Caution" in "".join(golden("bracket.txt").splitlines()[-3:])


BASE = """
format = 1
title = {title}
units = "N mm"
[bolt]
thread = "M12"
grade = "8.8"
[tightening]
preload = [30000, 45000]
[losses]
embedding = 0
relaxation = "5 %"
[interface]
friction = [0.2, 0.3]
{more}
[pattern]
{pattern}
{cases}
{standards}
"""
CASE = '[[case]]\nname = {name}\nacts_on = "joint"\nshear = [{x}, {y}]\naxial = {axial}\nkind = "{kind}"\n'
STANDARD = '[[standard]]\nname = "{name}"\n'


def quoted(text: str) -> str:
    return json.dumps(text)  # \\u escapes are the same in TOML for what is used here


def joint(*, title="joint", pattern="positions = [[-40, 0], [40, 0]]", cases=(), standards=(), more="") -> str:
    cases = cases or [CASE.format(name='"push"', x=2000, y=0, axial=0, kind="static")]
    return BASE.format(
        title=quoted(title), pattern=pattern, cases="\n".join(cases), standards="\n".join(standards), more=more
    )


def check(tmp_path: Path, text: str, capsys, *more: str) -> tuple[int, str, str]:
    path = tmp_path / "joint.toml"
    path.write_text(text, encoding="utf-8")
    code = main(["check", str(path), *more])
    out, err = capsys.readouterr()
    assert err == "" or code in (2, 4)
    return code, out, err


CONTROL = "\x1b[31mred\x07 \u202ebackwards\u202c \u2028two lines \r over \t tab"
LONG = "a very long name of a thing " * 12
WIDE = "巻取機ブラケット、三つの荷重ケース、" * 6


@pytest.mark.parametrize("title", [CONTROL, LONG, WIDE, "e\u0301" * 120, "x" * 400, "", "  "])
def test_any_title_stays_on_its_line(tmp_path, capsys, title):
    cases = [
        CASE.format(name=quoted((title + str(i)) * 2), x=2000, y=i, axial=500 * i, kind="alternating") for i in range(3)
    ]
    code, out, _ = check(tmp_path, joint(title=title, cases=cases), capsys)
    assert code == 0
    fits(out)


def test_long_names_everywhere(tmp_path, capsys):
    names = ", ".join(quoted(f"{LONG}{i}") for i in range(2))
    cases = [CASE.format(name=quoted(f"{LONG}{i}"), x=9000 + i, y=0, axial=900, kind="alternating") for i in range(12)]
    standards = [STANDARD.format(name=n) for n in ("EN 1993-1-8", "AISC 360", "VDI 2230", "NASA-STD-5020")]
    more = f'friction_source = {quoted(LONG)}\n[required]\ndecides = "group"\ndecides_reason = {quoted(LONG)}\ntrue_slip = "1 um"'
    pattern = f"positions = [[-40, 0], [40, 0]]\nnames = [{names}]"
    code, out, _ = check(
        tmp_path, joint(title=LONG, pattern=pattern, cases=cases, standards=standards, more=more), capsys
    )
    fits(out)
    assert code == 1 and out.startswith("FAILS: group")
    assert "12 more cases" not in out and "more cases:" in out, "what does not fit is counted"


def test_the_tightest_layout_fits(tmp_path, capsys):
    """All parts at once: nothing fails, much is not solved, a reason for the group, cases and checks that do not fit."""
    cases = [
        CASE.format(name=quoted(f"{LONG}{i}"), x=900 + i, y=0, axial=90, kind="alternating") + "moment = [0, 0, 1000]"
        for i in range(12)
    ]
    standards = [STANDARD.format(name=n) for n in ("EN 1993-1-8", "AISC 360", "VDI 2230", "NASA-STD-5020")]
    more = f'[required]\ndecides = "group"\ndecides_reason = {quoted(LONG)}\n[loosening]\nlimit = true'
    plates = '[[plate]]\nthickness = 10\nmaterial = "steel"\n' * 2 + more
    _, out, _ = check(tmp_path, joint(title=LONG, cases=cases, standards=standards, more=plates), capsys)
    fits(out)
    lines = out.splitlines()
    assert lines[0].startswith("NOT SOLVED: ") and lines[2].startswith("  what was solved holds: group ")
    assert any(line.startswith("  friction ") for line in lines) and "more cases: " in out and "more checks: " in out


def test_three_hundred_bolts_and_forty_cases(tmp_path, capsys):
    cases = [CASE.format(name=f'"case {i}"', x=1000 * i, y=0, axial=100 * i, kind="static") for i in range(1, 41)]
    code, out, _ = check(
        tmp_path, joint(pattern="grid = { columns = 20, rows = 15, pitch = [50, 50] }", cases=cases), capsys
    )
    fits(out)
    rows = sum(line.startswith("case ") and "B1" in line for line in out.splitlines())
    assert code == 0 and rows >= 3 and f"and {40 - rows} more cases: {40 - rows} hold" in out


def test_hidden_cases_that_fail_are_counted(tmp_path, capsys):
    cases = [CASE.format(name=f'"case {i}"', x=100_000, y=0, axial=0, kind="static") for i in range(20)]
    cases += [CASE.format(name=f'"fine {i}"', x=10, y=0, axial=0, kind="static") for i in range(5)]
    code, out, _ = check(tmp_path, joint(cases=cases), capsys)
    fits(out)
    shown = sum("FAILS" in line and line.startswith("case ") for line in out.splitlines())
    assert code == 1 and f"{20 - shown} fail, 5 hold" in out


def test_huge_and_tiny_numbers_stay_within_the_width(tmp_path, capsys):
    text = joint(cases=[CASE.format(name='"push"', x=1e15, y=0, axial=1e14, kind="static")])
    code, out, _ = check(tmp_path, text.replace("[30000, 45000]", "[3e17, 4.5e17]"), capsys)
    fits(out)
    _, out, _ = check(tmp_path, text.replace("[30000, 45000]", "[3e-7, 4.5e-7]"), capsys)
    fits(out)


def test_a_factor_just_below_its_limit_shows_its_side(tmp_path, capsys):
    capacity = 2 * 0.2 * 30000 * 0.95
    for shear, word in ((capacity / 1.2 * (1 + 1e-7), "FAILS"), (capacity / 1.2 * (1 - 1e-7), "HOLDS")):
        text = joint(cases=[CASE.format(name='"push"', x=repr(shear), y=0, axial=0, kind="static")])
        _, out, _ = check(tmp_path, text, capsys)
        fits(out)
        first = out.splitlines()[0]
        assert first.startswith(f"{word}: per bolt 1.{'1999999' if word == 'FAILS' else '2000001'}")


def test_the_force_alone_is_flagged_where_a_moment_is_left_out(tmp_path, capsys):
    case = CASE.format(name='"turn"', x=2000, y=0, axial=0, kind="static")
    _, out, _ = check(tmp_path, joint(cases=[case + "moment = [0, 0, 1e5]"]), capsys)
    assert "5.700/5.700*" in out and "* the force alone, without the moment" in out
    _, out, _ = check(tmp_path, joint(cases=[case]), capsys)
    assert "*" not in out


def test_what_was_not_compared_is_said_and_never_a_pass(tmp_path, capsys):
    code, out, _ = check(tmp_path, joint(standards=[STANDARD.format(name="EN 1993-1-8")]), capsys)
    fits(out)
    assert code == 3 and out.startswith("NOT SOLVED")
    assert "EN 1993-1-8: unsolved (push); not compared: give to_standard_level" in out


def test_an_open_bolt_is_said(tmp_path, capsys):
    code, out, _ = check(
        tmp_path, joint(cases=[CASE.format(name='"pull"', x=1, y=0, axial=70_000, kind="static")]), capsys
    )
    fits(out)
    assert code == 1 and "FAILS: per bolt 0.000, required 1.2" in out and "the bolt is open" in out
    assert "separation 0.814, required 1.2: FAILS" in out


def test_no_shear_is_said(tmp_path, capsys):
    code, out, _ = check(tmp_path, joint(cases=[CASE.format(name='"still"', x=0, y=0, axial=0, kind="static")]), capsys)
    fits(out)
    assert code == 0 and out.startswith("HOLDS: per bolt, no shear")


# errors, pipes, encodings


def run(*arguments: str, **options) -> subprocess.CompletedProcess:
    environment = {**os.environ, **options.pop("env", {})}
    return subprocess.run(
        [sys.executable, "-m", "slip", *arguments],
        cwd=ROOT,
        capture_output=True,
        env=environment,
        check=False,
        **options,
    )


@pytest.mark.parametrize(("case", "bolt", "code"), [("no such case", None, "case"), ("paper jam", "B99", "bolt")])
def test_explain_of_an_unknown_case_or_bolt(capsys, monkeypatch, case, bolt, code):
    monkeypatch.chdir(ROOT)
    arguments = ["explain", "examples/bracket.toml", case, *([bolt] if bolt else [])]
    assert main(arguments) == 2
    out, err = capsys.readouterr()
    assert out == "" and (bolt or case) in err and "known: " in err and "Traceback" not in err
    assert main([*arguments, "--json"]) == 2
    out, err = capsys.readouterr()
    (error,) = json.loads(out)["errors"]
    assert error["code"] == f"unknown-{code}" and error["file"] == "examples/bracket.toml" and err == ""


@pytest.mark.parametrize(
    "arguments", [["check", "missing.toml"], ["explain", "missing.toml"], ["tables", "no such word"]]
)
def test_a_wrong_input_is_one_sentence_on_standard_error(capsys, arguments):
    assert main(arguments) == 2
    out, err = capsys.readouterr()
    assert out == "" and err.startswith("slip: ") and err.count("\n") == 1


@pytest.mark.parametrize(
    "arguments", [["chek"], [], ["check"], ["check", "x.toml", "--units", "SI"], ["new", "x", "--kind", "weld"]]
)
def test_a_wrong_command_line_is_exit_2(capsys, arguments):
    with pytest.raises(SystemExit) as left:
        main(arguments)
    assert left.value.code == 2 and "usage: slip" in capsys.readouterr().err


def test_help_names_every_command_and_the_exit_codes(capsys):
    with pytest.raises(SystemExit) as left:
        main(["--help"])
    said = capsys.readouterr().out
    assert left.value.code == 0 and all(f"\n    {name} " in said for name in COMMANDS)
    assert all(f"{code} {word}" in said for code, word in ((0, "holds"), (1, "fails"), (2, "input"), (3, "not solved")))


def test_a_numerical_answer_that_cannot_be_proven_is_not_solved(monkeypatch, capsys):
    import slip.assess
    from slip.base.errors import NotConverged

    def unproven(path, progress):
        raise NotConverged("limit-gap", "The gross-slip load could not be proven; move the origin.")

    monkeypatch.setattr(slip.assess, "assess", unproven)
    assert main(["check", "x.toml"]) == 3
    assert capsys.readouterr().err == "slip: The gross-slip load could not be proven; move the origin.\n"
    assert main(["check", "x.toml", "--json"]) == 3
    assert json.loads(capsys.readouterr().out)["errors"][0]["code"] == "limit-gap"


def test_a_fault_of_the_program_is_not_blamed_on_the_input(monkeypatch, capsys):
    import slip.assess

    monkeypatch.setattr(slip.assess, "assess", lambda path, progress: 1 / 0)
    assert main(["check", "x.toml"]) == 4
    assert "a fault of the program, not of your input: ZeroDivisionError" in capsys.readouterr().err


@pytest.mark.parametrize(
    "arguments", [["check", "examples/bracket.toml"], ["explain", "examples/bracket.toml"], ["tables", "M"]]
)
def test_a_reader_that_leaves_the_pipe_is_no_fault(arguments):
    ours, theirs = os.pipe()
    process = subprocess.Popen(
        [sys.executable, "-m", "slip", *arguments], cwd=ROOT, stdout=theirs, stderr=subprocess.PIPE
    )
    os.close(theirs)
    os.close(ours)  # nobody reads: the first write meets a closed pipe
    _, err = process.communicate()
    assert err == b"" and process.returncode == 0


def test_a_closed_pipe_does_not_turn_a_failure_into_a_pass(tmp_path):
    path = tmp_path / "joint.toml"
    path.write_text(joint(cases=[CASE.format(name='"push"', x=1e6, y=0, axial=0, kind="static")]), encoding="utf-8")
    ours, theirs = os.pipe()
    process = subprocess.Popen(
        [sys.executable, "-m", "slip", "check", str(path)], cwd=ROOT, stdout=theirs, stderr=subprocess.PIPE
    )
    os.close(theirs)
    os.close(ours)
    _, err = process.communicate()
    assert err == b"" and process.returncode == 1


def test_head_takes_what_it_wants():
    command = f"{sys.executable} -m slip explain examples/bracket.toml | head -1"
    done = subprocess.run(command, shell=True, cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.stdout.startswith("Every number of reel change") and done.stdout.count("\n") == 1 and done.stderr == ""


def test_a_terminal_without_the_letters_shows_their_codes_and_json_stays_utf8(tmp_path):
    path = tmp_path / "joint.toml"
    path.write_text(joint(title="Träger → Säule 巻"), encoding="utf-8")
    narrow = {"PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0"}
    text = run("check", str(path), env=narrow)
    assert text.returncode == 0 and b"Tr\\xe4ger" in text.stdout and text.stderr == b""
    found = run("check", str(path), "--json", env=narrow)
    assert found.returncode == 0 and json.loads(found.stdout.decode("utf-8"))["title"] == "Träger → Säule 巻"
