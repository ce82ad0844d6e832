"""Wrong tables of load cases: each fault said with its line, each row that is not used counted, nothing lost."""

from __future__ import annotations

import errno
import json
from pathlib import Path
from typing import Any

import polars as pl
import pytest

from slip import cli
from slip.base.errors import InputError, Problems
from slip.cases.run import TableResult, check_table

JOINT = """\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
[tightening]
preload = [78000, 95000]
[losses]
embedding = "4500 N"
relaxation = "5 %"
[interface]
friction = [0.18, 0.25]
[pattern]
positions = [[-80, 0], [80, 0]]
[axial]
meaning = "external"
bolt_share = 0.15
"""
HEAD = "case,bolt,Fx[N],Fy[N],Fax[N]\n"
GOOD = "a,B1,100,200,300\na,B2,110,210,310\nb,B1,-100,-200,0\nb,B2,-110,-210,0\n"


def run(tmp_path: Path, data: str | bytes, joint: str = JOINT, **options: Any) -> TableResult:
    (tmp_path / "joint.toml").write_text(joint, encoding="utf-8")
    path = tmp_path / "cases.csv"
    path.write_bytes(data.encode() if isinstance(data, str) else data)
    return check_table(tmp_path / "joint.toml", path, tmp_path / "out.csv", **options)


def fault(tmp_path: Path, data: str | bytes, joint: str = JOINT) -> InputError:
    with pytest.raises(Problems) as caught:
        run(tmp_path, data, joint)
    error = caught.value.errors[0]
    assert error.file == str(tmp_path / "cases.csv") and error.found and error.expected and error.remedy
    return error


# --- the table as a whole ---------------------------------------------------------------------------------------------

WHOLE = [
    ("empty file", b"", "table-empty", 1, "empty"),
    ("blank lines only", b"\n\n \n", "table-empty", 1, "empty"),
    ("header only", HEAD.encode(), "table-empty", 2, "no rows"),
    ("no header", GOOD.encode(), "missing-column", 1, "case"),
    ("UTF-16", (HEAD + GOOD).encode("utf-16"), "file-not-utf8", 1, "UTF-8"),
    ("tabs", (HEAD + GOOD).replace(",", "\t").encode(), "table-separator", 1, "tabs"),
    ("unit missing", (HEAD.replace("Fx[N]", "Fx") + GOOD).encode(), "unit-missing", 1, "Fx[N]"),
    ("unit not of a force", (HEAD.replace("Fx[N]", "Fx[mm]") + GOOD).encode(), "unit-wrong", 1, "force"),
    ("unit with two meanings", (HEAD.replace("Fx[N]", "Fx[lb]") + GOOD).encode(), "unit-ambiguous", 1, "lbf"),
    ("column twice", (HEAD.replace("Fy[N]", "Fx[N]") + GOOD).encode(), "column-twice", 1, "Fx"),
    ("column missing", (HEAD.replace("Fy[N]", "Fq[N]") + GOOD).encode(), "missing-column", 1, '{ Fy = "Fq" }'),
    (
        "decimal commas between commas",
        (HEAD + "a,B1,100,5,200,5,300,5\na,B2,1,5,2,5,3,5\n").encode(),
        "table-cells",
        2,
        '";"',
    ),
    (
        "decimal or thousands",
        (HEAD.replace(",", ";") + "a;B1;1,500;2;3\na;B2;1,250;2;3\n").encode(),
        "table-decimal",
        2,
        "1,500",
    ),
    ("meaning of Fclamp", (HEAD.replace("Fax", "Fclamp") + GOOD).encode(), "missing-key", 1, "model_preload"),
]


@pytest.mark.parametrize(("name", "data", "code", "line", "says"), WHOLE, ids=[row[0] for row in WHOLE])
def test_a_table_that_cannot_be_read(name: str, data: bytes, code: str, line: int, says: str, tmp_path: Path) -> None:
    error = fault(tmp_path, data)
    assert (error.code, error.line) == (code, line)
    assert says in str(error)
    assert not (tmp_path / "out.csv").exists()


def test_fax_needs_its_meaning(tmp_path: Path) -> None:
    error = fault(tmp_path, HEAD + GOOD, JOINT.replace('meaning = "external"\n', ""))
    assert (error.code, error.key) == ("missing-key", "Fax") and "meaning" in error.remedy


def test_a_table_that_is_not_there(tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_text(JOINT, encoding="utf-8")
    with pytest.raises(Problems) as caught:
        check_table(tmp_path / "joint.toml", tmp_path / "none.csv")
    assert caught.value.errors[0].code == "file-missing"
    with pytest.raises(Problems) as caught:
        check_table(tmp_path / "joint.toml", tmp_path)
    assert caught.value.errors[0].code == "file-unreadable"


TABLE_KEYS = [
    ("unknown column", 'columns = { Fq = "FX" }', "unknown-column", "Fx"),
    ("one for two", 'columns = { Fx = "F", Fy = "F" }', "column-twice", "own"),
    ("not a table", 'columns = "Fx"', "not-a-table", "Fx"),
    ("axis unknown", 'axes = { x = "X", y = "W", normal = "Z" }', "axis-unknown", "-Z"),
    ("axis missing", 'axes = { x = "X", y = "Y" }', "missing-key", "normal"),
    ("left-handed", 'axes = { x = "X", y = "Z", normal = "Y" }', "axes-wrong", "right-handed"),
    ("axis twice", 'axes = { x = "X", y = "X", normal = "Y" }', "axes-wrong", "different"),
]


@pytest.mark.parametrize(("name", "text", "code", "says"), TABLE_KEYS, ids=[row[0] for row in TABLE_KEYS])
def test_keys_of_the_table(name: str, text: str, code: str, says: str, tmp_path: Path) -> None:
    with pytest.raises(Problems) as caught:
        run(tmp_path, HEAD + GOOD, f"{JOINT}[table]\n{text}\n")
    (error,) = caught.value.errors
    assert error.code == code and says in str(error)


# --- forms that are read ----------------------------------------------------------------------------------------------

FORMS = {
    "byte-order mark": b"\xef\xbb\xbf" + (HEAD + GOOD).encode(),
    "carriage returns": (HEAD + GOOD).replace("\n", "\r\n").encode(),
    "no line break at the end": (HEAD + GOOD).rstrip().encode(),
    "blank lines": (HEAD.replace("\n", "\n\n") + GOOD.replace("b,B1", "\n,,,,\nb,B1")).encode(),
    "semicolons": (HEAD + GOOD).replace(",", ";").encode(),
    "decimal commas": (HEAD + GOOD.replace("100", "100.0")).replace(",", ";").replace(".", ",").encode(),
    "spaces": (HEAD + GOOD).replace(",", " , ").encode(),
    "units in round brackets": HEAD.replace("[N]", " (N)").encode() + GOOD.encode(),
    "other units": HEAD.replace("[N]", "[kN]").encode()
    + b"a,B1,.1,.2,.3\na,B2,.11,.21,.31\nb,B1,-.1,-.2,0\nb,B2,-.11,-.21,0\n",
    "columns in another order": b"bolt,Fax[N],case,Fy[N],Fx[N]\n"
    b"B1,300,a,200,100\nB2,310,a,210,110\nB1,0,b,-200,-100\nB2,0,b,-210,-110\n",
    "quoted cells": (HEAD + GOOD).replace("a,", '"a",').encode(),
    "scattered cases": HEAD.encode() + b"a,B1,100,200,300\nb,B1,-100,-200,0\na,B2,110,210,310\nb,B2,-110,-210,0\n",
}


def results(path: Path, separator: str = ",", comma: bool = False) -> list[tuple[Any, ...]]:
    frame = pl.read_csv(path, separator=separator, decimal_comma=comma)
    return [tuple(round(v, 9) if isinstance(v, float) else v for v in row) for row in frame.rows()]


@pytest.mark.parametrize("data", FORMS.values(), ids=FORMS)
def test_forms_that_are_read_alike(data: bytes, tmp_path: Path) -> None:
    run(tmp_path, HEAD + GOOD)
    wanted = results(tmp_path / "out.csv")
    found = run(tmp_path, data)
    assert results(tmp_path / "out.csv", found.form.separator, found.form.comma) == wanted and len(wanted) == 8
    assert (found.summary.rows, found.summary.refused, found.exit_code) == (4, 0, 0)
    assert found.refused is None and not (tmp_path / "out.refused.csv").exists()


def test_the_decimal_sign_can_be_overruled(tmp_path: Path) -> None:
    """1,5 in every cell: a comma is detected; when the file says point, no such cell is a number."""
    data = "case;bolt;Fx[N];Fy[N];Fax[N]\na;B1;1,5;2,5;3,5\na;B2;1,5;2,5;3,5\n"
    found = run(tmp_path, data)
    assert "decimal comma" in found.form.said and found.summary.refused == 0
    found = run(tmp_path, data, JOINT + '[table]\ndecimal = "."\n')
    assert "decimal point" in found.form.said and found.summary.refused == 2 and found.exit_code == 3


def test_names_and_axes_of_the_table(tmp_path: Path) -> None:
    """A model with its normal along Y: x = X, y = -Z; Fax is tension whatever the axes."""
    run(tmp_path, HEAD + GOOD)
    wanted = results(tmp_path / "out.csv")
    keys = '[table]\nunits = "N mm"\naxes = { x = "X", y = "-Z", normal = "Y" }\n'
    keys += 'columns = { case = "load case", Fx = "Force X", Fz = "Force Z", Fax = "bolt tension" }\n'
    data = "load case,bolt,Force X,Force Z,bolt tension\n"
    data += "a,B1,100,-200,300\na,B2,110,-210,310\nb,B1,-100,200,0\nb,B2,-110,210,0\n"
    run(tmp_path, data, JOINT + keys)
    assert results(tmp_path / "out.csv") == wanted


def test_a_component_along_the_bolts_is_no_axial_force_by_itself(tmp_path: Path) -> None:
    """The model's Y is the bolts' axis: its component may not be dropped unsaid, and may not be taken without its meaning."""
    keys = '[table]\naxes = { x = "X", y = "-Z", normal = "Y" }\n'
    data = "case,bolt,Fx[N],Fy[N],Fz[N]\na,B1,1,80000,2\na,B2,1,80000,2\n"
    assert fault(tmp_path, data, JOINT + keys).code == "axial-not-named"
    named = run(tmp_path, data, JOINT + keys + 'columns = { Fax = "Fy" }\n')
    assert named.exit_code == 1 and named.summary.near_count == 1


def test_axes_of_a_table_of_joint_loads(tmp_path: Path) -> None:
    head = "case,Fx[N],Fy[N],Fz[N],Mx[N mm],My[N mm],Mz[N mm]\n"
    square = JOINT.replace("[[-80, 0], [80, 0]]", "[[-80, -60], [80, -60], [-80, 60], [80, 60]]")
    run(tmp_path, head + "a,1000,2000,3000,40000,50000,60000\n", square)
    wanted = results(tmp_path / "out.csv")
    keys = '[table]\naxes = { x = "X", y = "-Z", normal = "Y" }\n'  # y = -Z, normal = Y: Z = -2000, Y = 3000
    run(tmp_path, head + "a,1000,3000,-2000,40000,60000,-50000\n", square + keys)
    assert results(tmp_path / "out.csv") == wanted


def test_other_columns_are_carried_through(tmp_path: Path) -> None:
    head = "case,step,bolt,Fx[N],Fy[N],Fax[N],safety,note\n"
    rows = 'a,1,B1,100,200,300,x,"p, q"\na,2,B2,110,210,310,,"r\ns"\nb,3,B1,1,2,0,y,\nb,4,B2,1,2,0,z,t\n'
    found = run(tmp_path, head + rows)
    frame = pl.read_csv(tmp_path / "out.csv")
    assert found.summary.refused == 0
    assert frame.columns[-3:] == ["step", "safety (table)", "note"]
    assert frame["step"].to_list() == [1, 2, None, None, 3, 4, None, None]
    assert frame["note"].to_list()[:2] == ["p, q", "r\ns"]


# --- rows that are refused --------------------------------------------------------------------------------------------

BAD_ROWS = [
    ("text in a number", "a,B1,abc,200,300", 'Fx is no number: "abc"'),
    ("empty cell", "a,B1,,200,300", "Fx is empty, which is not zero"),
    ("short row", "a,B1,100,200", "Fax is empty"),
    ("long row", "a,B1,100,200,300,7", "more cells than the header has columns"),
    ("no bolt", "a,,100,200,300", "no bolt name"),
    ("unknown bolt", "a,B9,100,200,300", 'no bolt of the joint file: "B9"'),
    ("no case", ",B1,100,200,300", "no case name"),
    ("not finite", "a,B1,nan,200,300", "Fx is no finite number"),
    ("infinite", "a,B1,1e999,200,300", "Fx is no finite number"),
    ("decimal comma", 'a,B1,"1,5",200,300', 'Fx is no number: "1,5"'),
    ("thousands", 'a,B1,"1,000.5",200,300', "Fx is no number"),
    ("not UTF-8", b"a,B1,100,200,300 \xff", "bytes that are not UTF-8"),
    ("open quotation mark", 'a,B1,"100,200,300', "a quotation mark that is not closed"),
]


@pytest.mark.parametrize(("name", "row", "reason"), BAD_ROWS, ids=[row[0] for row in BAD_ROWS])
def test_a_row_that_is_refused(name: str, row: str | bytes, reason: str, tmp_path: Path) -> None:
    """The case is not judged, the others are; the row stands with its line and reason in a file of its own."""
    raw = row.encode() if isinstance(row, str) else row
    found = run(tmp_path, HEAD.encode() + raw + b"\n" + "\n".join(GOOD.split("\n")[1:]).encode())
    summary = found.summary
    assert (summary.refused, summary.rows, summary.codes, found.exit_code) == (1, 4, {0: 1, 1: 0, 3: 1}, 3)
    assert not found.holds
    lost = pl.read_csv(tmp_path / "out.refused.csv")
    assert lost["line"].to_list() == [2] and reason in lost["reason"][0]
    assert lost["text"][0].split(",")[1] == (raw.split(b",")[1].decode())
    rows = pl.read_csv(tmp_path / "out.csv")
    # the good bolt of the spoilt case is still worked, its group is not; where the case cannot be read nobody knows whose row it was
    spoilt = [] if name in ("no case", "not UTF-8", "open quotation mark") else [("a", "B2")]
    assert rows.select("case", "bolt").rows() == [
        *spoilt,
        ("b", "B1"),
        ("b", "B2"),
        ("b", "group"),
        ("b", "force only"),
    ]
    assert rows["case_holds"].to_list() == [False] * len(spoilt) + [True] * 4
    assert summary.not_judged[0][0] == "a"


def test_missing_bolt(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD + "\n".join(GOOD.split("\n")[1:]))
    assert found.summary.not_judged == [("a", "no row for B1")]
    assert (found.summary.refused, found.exit_code, found.holds) == (0, 3, False)


def test_second_row_for_a_bolt(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD + "a,B1,1,2,3\n" + GOOD)
    lost = pl.read_csv(tmp_path / "out.refused.csv")
    assert lost["line"].to_list() == [3] and "second row" in lost["reason"][0]
    assert found.summary.codes == {0: 1, 1: 0, 3: 1}


def test_a_failing_case_goes_before_one_that_is_not_judged(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD + "c,B1,90000,0,0\nc,B2,90000,0,0\n" + "\n".join(GOOD.split("\n")[1:]))
    assert found.summary.codes == {0: 1, 1: 1, 3: 1} and found.exit_code == 1


KINDS = [
    ("kind", "staitc", "static", "kind is neither static nor alternating"),
    ("ratio", "-1.2", "-1", "ratio is not within -1 .. 1"),
    ("ratio", "0.5", "-1", "ratio is not that of the first row"),
    ("end", "both", "given", "end is neither given nor other"),
    ("thermal[N]", "-5", "5", "thermal is negative"),
    ("preload_low[N]", "-5", "5e4", "preload_low is negative"),
]


@pytest.mark.parametrize(("column", "wrong", "right", "reason"), KINDS)
def test_optional_columns(column: str, wrong: str, right: str, reason: str, tmp_path: Path) -> None:
    rows = [line for line in GOOD.split("\n") if line]
    data = "\n".join(
        [HEAD.strip() + f",{column}", *(f"{line},{wrong if i == 1 else right}" for i, line in enumerate(rows))]
    )
    found = run(tmp_path, data)
    lost = pl.read_csv(tmp_path / "out.refused.csv")
    assert lost["line"].to_list() == [3] and reason in lost["reason"][0]
    assert found.summary.codes[3] == 1


def test_a_static_case_with_another_end_is_refused(tmp_path: Path) -> None:
    rows = "".join(f"a,B{b},1,2,3,{end},static\n" for end in ("given", "other") for b in (1, 2))
    found = run(tmp_path, HEAD.strip() + ",end,kind\n" + rows)
    assert found.summary.refused == 4 and found.exit_code == 3
    assert found.summary.reasons["kind static and rows for the other end"] == 4


def test_a_bolt_force_that_holds_the_preload_needs_both_ends(tmp_path: Path) -> None:
    joint = JOINT.replace(
        'meaning = "external"', 'meaning = "bolt force"\nmodel_preload = 85000\nmodel_bolt_share = 0.2'
    )
    found = run(tmp_path, HEAD + GOOD, joint)
    assert found.exit_code == 3 and "both ends" in found.summary.not_judged[0][1]
    rows = "".join(f"a,B{b},1,2,90000,{end}\n" for end in ("given", "other") for b in (1, 2))
    assert run(tmp_path, HEAD.strip() + ",end\n" + rows, joint).exit_code == 0


def test_a_tilting_moment_that_bolts_in_a_line_cannot_carry(tmp_path: Path) -> None:
    found = run(tmp_path, "case,Fx[N],Fy[N],Mx[N mm]\na,1,2,3000\nb,1,2,0\n")
    assert found.summary.not_judged == [("a", "a tilting moment that the pattern cannot carry")]
    assert found.summary.codes == {0: 1, 1: 0, 3: 1}


# --- values with another meaning --------------------------------------------------------------------------------------


def test_axial_values_that_look_like_the_preload(tmp_path: Path) -> None:
    rows = "".join(f"c{i},B{b},10,20,{84000 + 300 * i}\n" for i in range(5) for b in (1, 2))
    assert "axial-near-preload" in {note.code for note in run(tmp_path, HEAD + rows).warnings}
    assert "axial-near-preload" not in {note.code for note in run(tmp_path, HEAD + GOOD).warnings}
    joint = JOINT.replace(
        'meaning = "external"', 'meaning = "bolt force"\nmodel_preload = 85000\nmodel_bolt_share = 0.2'
    )
    rows = "".join(f"a,B{b},1,2,500,{end}\n" for end in ("given", "other") for b in (1, 2))
    found = run(tmp_path, HEAD.strip() + ",end\n" + rows, joint)
    assert "axial-below-preload" in {note.code for note in found.warnings}


def test_bolt_forces_are_added_up_against_the_joint(tmp_path: Path) -> None:
    loads = tmp_path / "loads.csv"
    loads.write_text("case,Fx[N],Fy[N],Fz[N],Mz[N mm]\na,210,410,610,800\nb,-210,-410,0,-800\n", encoding="utf-8")
    found = run(tmp_path, HEAD + GOOD, loads=loads)
    assert found.summary.balanced == 2 and found.summary.balance[0] < 1e-12
    loads.write_text("case,Fx[N],Fy[N],Fz[N],Mz[N mm]\na,210,410,610,800\nb,-210,-210,0,-800\n", encoding="utf-8")
    found = run(tmp_path, HEAD + GOOD, loads=loads)
    share, case = found.summary.balance
    assert case == "b" and share == pytest.approx(200 / (210**2 + 410**2) ** 0.5)
    assert "table-unbalanced" in {note.code for note in found.warnings}
    case = '[[case]]\nname = "b"\nacts_on = "joint"\nshear = [-210, -410]\nmoment = [0, 0, -800]\nkind = "static"\n'
    assert run(tmp_path, HEAD + GOOD, JOINT + case).summary.balanced == 1


# --- the disk ---------------------------------------------------------------------------------------------------------


def test_no_space_left(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """What was written stays, the sentence says how to go on, and going on gives the whole."""
    rows = "".join(f"c{i},B{b},{i},20,30\n" for i in range(200) for b in (1, 2))
    run(tmp_path, HEAD + rows)
    whole = (tmp_path / "out.csv").read_bytes()
    (tmp_path / "out.csv").unlink()
    from slip.cases import write

    calls, real = [0], write.os.fsync

    def full(handle: int) -> None:
        calls[0] += 1
        if calls[0] == 4:
            raise OSError(errno.ENOSPC, "No space left on device")
        real(handle)

    monkeypatch.setattr(write.os, "fsync", full)
    with pytest.raises(Problems) as caught:
        run(tmp_path, HEAD + rows, chunk_size=800)
    assert caught.value.errors[0].code == "not-written" and "--resume" in caught.value.errors[0].remedy
    assert not (tmp_path / "out.csv").exists() and (tmp_path / "out.csv.part").stat().st_size > 0
    monkeypatch.undo()
    run(tmp_path, HEAD + rows, chunk_size=800, resume=True)
    assert (tmp_path / "out.csv").read_bytes() == whole
    assert sorted(p.name for p in tmp_path.iterdir()) == ["cases.csv", "joint.toml", "out.csv"]


def test_a_result_may_not_replace_an_input(tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_text(JOINT, encoding="utf-8")
    (tmp_path / "cases.csv").write_text(HEAD + GOOD, encoding="utf-8")
    for out, code in ((tmp_path / "cases.csv", "report-over-input"), (tmp_path / "out.xls", "out-ending")):
        with pytest.raises(Problems) as caught:
            check_table(tmp_path / "joint.toml", tmp_path / "cases.csv", out)
        assert caught.value.errors[0].code == code
    assert (tmp_path / "cases.csv").read_text(encoding="utf-8") == HEAD + GOOD


@pytest.mark.parametrize(
    ("options", "option"),
    [
        (["--refused", "cases.csv"], "--refused"),
        (["--refused", "joint.toml"], "--refused"),
        (["--out", "one.csv", "--refused", "one.csv"], "--refused"),
        (["--out", "one.csv", "--report", "one.csv"], "--report"),
        (["--loads", "loads.csv", "--out", "loads.csv"], "--out"),
        (["--report", "joint.toml"], "--report"),
    ],
)
def test_no_file_takes_the_place_of_another(
    options: list[str], option: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    files = {"joint.toml": JOINT, "cases.csv": HEAD + "a,B1,x,2,3\n" + GOOD, "loads.csv": "case,Fx[N],Fy[N]\na,1,2\n"}
    for name, text in files.items():
        Path(name).write_text(text, encoding="utf-8")
    assert cli.main(["cases", "joint.toml", "cases.csv", *options]) == 2
    assert option in capsys.readouterr().err
    assert {p.name: p.read_text(encoding="utf-8") for p in tmp_path.iterdir()} == files


def test_a_table_that_grows_is_read_to_where_it_was(tmp_path: Path) -> None:
    rows = "".join(f"c{i},B{b},{i},20,30\n" for i in range(200) for b in (1, 2))
    path = tmp_path / "cases.csv"

    def grow(done: int, total: int) -> None:
        if done < total:
            with open(path, "a", encoding="utf-8") as file:
                file.write("late,B1,1,2,3\n")

    found = run(tmp_path, HEAD + rows, chunk_size=800, progress=grow)
    assert found.summary.cases == 200 and "late" not in (tmp_path / "out.csv").read_text(encoding="utf-8")
    assert "table-grown" in {note.code for note in found.warnings} and found.exit_code == 3


# --- the command ------------------------------------------------------------------------------------------------------


def test_exit_codes_and_json(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "joint.toml").write_text(JOINT, encoding="utf-8")
    (tmp_path / "cases.csv").write_text(HEAD + GOOD, encoding="utf-8")
    assert cli.main(["cases", "joint.toml", "cases.csv", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["holds"] and found["cases"] == {"all": 2, "hold": 2, "fail": 0, "not_judged": 0}
    (tmp_path / "cases.csv").write_text(HEAD, encoding="utf-8")
    assert cli.main(["cases", "joint.toml", "cases.csv", "--json"]) == 2
    assert json.loads(capsys.readouterr().out)["errors"][0]["code"] == "table-empty"
    assert cli.main(["cases", "joint.toml", "cases.csv"]) == 2
    assert capsys.readouterr().err.count("\n") == 1
    (tmp_path / "cases.csv").write_text(HEAD + "a,B1,x,2,3\n", encoding="utf-8")
    assert cli.main(["cases", "joint.toml", "cases.csv"]) == 3
    assert "cases.refused.csv" in capsys.readouterr().out and (tmp_path / "cases.refused.csv").exists()
    for wrong in (["--top", "0"], ["--workers", "0"], ["--bolt", "B7"], ["--resume"]):
        assert cli.main(["cases", "joint.toml", "cases.csv", *wrong]) == 2
        assert capsys.readouterr().err.count("\n") == 1
    assert cli.main(["explain", "joint.toml", "a", "--table", "cases.csv"]) == 2
    assert "row is refused" in capsys.readouterr().err
    assert cli.main(["explain", "joint.toml", "q", "--table", "cases.csv"]) == 2
    assert cli.main(["explain", "joint.toml", "--table", "cases.csv"]) == 2


# --- what must not pass unseen ------------------------------------------------------------------------------------------

UNSEEN = [
    (
        "a name of [table] columns that is not there",
        HEAD + GOOD,
        '[table]\ncolumns = { thermal = "Warm" }\n',
        "column-not-there",
    ),
    ("another spelling", HEAD.replace("Fax", "fax") + GOOD, "", "column-alike"),
    ("underlined", HEAD.replace("Fax", "F_ax") + GOOD, "", "column-alike"),
    ("thermal in capitals", HEAD.strip() + ",Thermal[N]\na,B1,1,2,3,9\na,B2,1,2,3,9\n", "", "column-alike"),
    ("Bolt", HEAD.replace("bolt", "Bolt") + GOOD, "", "column-alike"),
    ("a moment in small letters", "case,Fx[N],Fy[N],mz[N mm]\na,1,2,3\n", "", "column-alike"),
    ("Fax on the joint", "case,Fx[N],Fy[N],Fax[N]\na,1,2,900000\n", "", "column-of-bolts"),
    ("preload on the joint", "case,Fx[N],Fy[N],preload_low[N]\na,1,2,100\n", "", "column-of-bolts"),
    ("thousands with points", HEAD.replace(",", ";") + "a;B1;12.000;2;3\na;B2;80.000;2;3\n", "", "table-decimal"),
    ("carriage returns alone", (HEAD + GOOD).replace("\n", "\r"), "", "table-line-ends"),
]


@pytest.mark.parametrize(("name", "data", "keys", "code"), UNSEEN, ids=[row[0] for row in UNSEEN])
def test_a_column_does_not_pass_unseen(name: str, data: str, keys: str, code: str, tmp_path: Path) -> None:
    joint = JOINT.replace("[[-80, 0], [80, 0]]", "[[-80, -60], [80, 60]]") + keys
    with pytest.raises(Problems) as caught:
        run(tmp_path, data, joint)
    assert code in {error.code for error in caught.value.errors}


def test_a_second_spelling_beside_the_right_one_is_carried(tmp_path: Path) -> None:
    run(tmp_path, HEAD.strip() + ",fx\na,B1,1,2,3,note\na,B2,1,2,3,note\n")
    assert "fx" in pl.read_csv(tmp_path / "out.csv").columns


def test_stray_quotation_marks_swallow_no_rows(tmp_path: Path) -> None:
    """Two of them in a column that is carried: each spoils its own line, and the cases beside it; no row is lost in a remark."""
    head = HEAD.strip() + ",note\n"
    rows = (
        'a,B1,1,2,3,x\na,B2,1,2,3,"flange\nbad,B1,400000,2,3,x\nbad,B2,400000,2,3,x\nc,B1,1,2,3,"flange\nc,B2,1,2,3,x\n'
    )
    found = run(tmp_path, head + rows)
    assert (found.summary.rows, found.summary.refused, found.exit_code) == (6, 2, 3)
    assert [case for case, _ in found.summary.not_judged] == ["a", "bad", "c"]


def test_empty_cells_before_one_that_is_too_much(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD + "a,B1,1,2,3,,999\n" + "\n".join(GOOD.split("\n")[1:]))
    assert found.summary.refused == 1 and found.exit_code == 3


def test_a_row_without_a_case_spoils_those_beside_it(tmp_path: Path) -> None:
    """It may be the other end of either: neither is judged, and no bolt of theirs is told."""
    rows = "a,B1,1,2,3,given\na,B2,1,2,3,given\n,B1,400000,2,3,other\nb,B1,1,2,3,given\nb,B2,1,2,3,given\n"
    found = run(tmp_path, HEAD.strip() + ",end\n" + rows + "c,B1,1,2,3,given\nc,B2,1,2,3,given\n")
    assert found.summary.codes == {0: 1, 1: 0, 3: 2} and found.exit_code == 3
    assert set(pl.read_csv(tmp_path / "out.csv")["case"]) == {"c"}


def test_a_bolt_without_its_other_end_has_no_answer(tmp_path: Path) -> None:
    rows = "a,B1,1,2,3,given\na,B2,1,2,3,given\na,B1,1,2,3,other\n"
    found = run(tmp_path, HEAD.strip() + ",end\n" + rows)
    assert found.exit_code == 3 and found.summary.not_judged == [("a", "no row for B2 at the other end")]
    assert pl.read_csv(tmp_path / "out.csv")["bolt"].to_list() == ["B1"]


def test_a_lowest_preload_above_the_highest(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD.strip() + ",preload_low[N]\na,B1,1,2,3,1e9\na,B2,1,2,3,80000\n")
    assert found.exit_code == 3 and "above the highest preload" in found.summary.not_judged[0][1]
    assert found.summary.envelope["clamp_low"][0][1] == ""


def test_numbers_of_a_case_are_compared_as_numbers(tmp_path: Path) -> None:
    found = run(tmp_path, HEAD.strip() + ",ratio\na,B1,1,2,3,0\na,B2,1,2,3,0.0\n")
    assert found.summary.refused == 0 and found.summary.cases == 1


def test_columns_of_one_name_are_both_carried(tmp_path: Path) -> None:
    run(tmp_path, HEAD.strip() + ",rem,rem,holds,holds (table)\na,B1,1,2,3,p,q,r,s\na,B2,1,2,3,p,q,r,s\n")
    frame = pl.read_csv(tmp_path / "out.csv")
    assert frame["rem"][0] == "p" and frame["rem (2)"][0] == "q" and {"r", "s"} <= set(frame.row(0))


@pytest.mark.parametrize("kind", ["list", "binary", "cut"])
def test_parquet_that_cannot_be_read(kind: str, tmp_path: Path) -> None:
    columns: dict[str, Any] = {
        "case": ["a", "a"],
        "bolt": ["B1", "B2"],
        "Fx[N]": [1, 2],
        "Fy[N]": [1.0, 2.0],
        "Fax[N]": [0, 0],
    }
    more = {"list": [[1], [2]], "binary": [b"\xff", b"\xfe"], "cut": ["x", "y"]}[kind]
    path = tmp_path / "cases.parquet"
    pl.DataFrame(columns | {"more": more}).write_parquet(path)
    if kind == "cut":
        path.write_bytes(path.read_bytes()[:-200])
    (tmp_path / "joint.toml").write_text(JOINT, encoding="utf-8")
    with pytest.raises(Problems) as caught:
        check_table(tmp_path / "joint.toml", path)
    assert caught.value.errors[0].code in ("table-column-kind", "table-broken")


def test_a_bolt_is_judged_on_the_worse_of_two_axial_forces(tmp_path: Path) -> None:
    """Whatever its neighbours in the table have: contact force and bolt force of the same bolt."""
    joint = JOINT.replace("bolt_share = 0.15", "bolt_share = 0.15\nmodel_preload = 90000")
    head = HEAD.strip() + ",Fclamp[N]\n"
    alone = run(tmp_path, head + "a,B1,1,2,0,20000\na,B2,1,2,0,20000\n", joint).summary.highest.yield_use
    beside = run(tmp_path, head + "a,B1,1,2,0,20000\na,B2,1,2,0,20000\nb,B1,1,2,1,90000\nb,B2,1,2,1,90000\n", joint)
    assert beside.summary.highest.yield_use == alone


def test_loads_of_other_cases_are_no_balance(tmp_path: Path) -> None:
    loads = tmp_path / "loads.csv"
    loads.write_text("case,Fx[N],Fy[N],Fz[N]\nq,1,2,3\n", encoding="utf-8")
    joint = JOINT.replace('"external"', '"bolt force change"').replace(
        "bolt_share = 0.15", "bolt_share = 0.15\nmodel_bolt_share = 0.2"
    )
    found = run(tmp_path, HEAD + GOOD, joint, loads=loads)
    assert found.summary.balanced == 0 and "table-unbalanced" in {note.code for note in found.warnings}


def test_refused_rows_of_an_earlier_run_do_not_stay(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    run(tmp_path, HEAD + "a,B1,x,2,3\n")
    assert (tmp_path / "out.refused.csv").exists()
    run(tmp_path, HEAD + GOOD)
    assert not (tmp_path / "out.refused.csv").exists()
    (tmp_path / "out.refused.csv").write_text("mine", encoding="utf-8")
    with pytest.raises(Problems) as caught:
        run(tmp_path, HEAD + "a,B1,x,2,3\n")
    assert caught.value.errors[0].code == "file-exists"
    assert (tmp_path / "out.refused.csv").read_text(encoding="utf-8") == "mine"
