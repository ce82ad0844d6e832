"""The page of a table of cases: whole, the same bytes every time, equal to the summary, and proof against hostile names."""

from __future__ import annotations

import base64
import importlib.util
import re
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

import polars as pl
import pytest

from slip import cli
from slip.base.units import SYSTEMS
from slip.cases.run import TableResult, check_table
from slip.report import cases_rows
from slip.report.cases import cases_text
from slip.report.cases_figure import spread_names
from slip.report.cases_page import cases_page

ROOT = Path(__file__).resolve().parents[2]
JOINT, TABLE = ROOT / "examples/jib.toml", ROOT / "examples/jib.csv"
HOSTILE = ['<script>alert("1")</script>', "\"><img src='x'>", "{{ 7 * 7 }}", "a & b", "\u202egnp.exe"]
THREE = """\
format = 1
units = "N mm"
[tightening]
preload = [18000, 26000]
[losses]
embedding = "2000 N"
relaxation = "5 %"
[interface]
friction = [0.15, 0.22]
[pattern]
positions = [[-60, 0], [0, 0], [60, 0]]
[axial]
meaning = "external"
"""
NUMBER = re.compile(r"(?<![\w.])\d+(?:\.\d+)?")


def reader() -> Any:
    """The reader of a page that the other page's test has: it fails on a tag that is closed wrongly or left open."""
    spec = importlib.util.spec_from_file_location("page_reader", Path(__file__).with_name("test_page.py"))
    assert spec and spec.loader
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module.Seen


Seen = reader()


@pytest.fixture
def found(tmp_path: Path) -> TableResult:
    return check_table(JOINT, TABLE, tmp_path / "result.csv")


def page_of(found: TableResult, top: int = 20, cases: tuple[str, ...] = (), bolts: tuple[str, ...] = ()) -> str:
    return cases_page(found, str(TABLE), None, top, cases, bolts)


def hostile(folder: Path, rows: str = "") -> TableResult:
    """A table whose cases and carried cells attack the page, with what `rows` adds."""
    names = "".join(f"[{i * 100}, {i % 2 * 80}], " for i in range(3))
    text = JOINT.read_text(encoding="utf-8")
    text = re.sub(r"(?s)\[pattern\].*?(?=\[axial\])", f"[pattern]\npositions = [{names}]\n", text)
    text = re.sub(r"(?s)\[axial\].*", '[axial]\nmeaning = "external"\n', text)
    (folder / "joint.toml").write_text(text.replace("Slewing jib", HOSTILE[0].replace('"', "'")), encoding="utf-8")
    frame = pl.DataFrame(
        {
            "case": [name for name in HOSTILE for _ in range(3)],
            "bolt": ["B1", "B2", "B3"] * len(HOSTILE),
            **{name: [1000.0 + i for i in range(3 * len(HOSTILE))] for name in ("Fx[N]", "Fy[N]", "Fax[N]")},
            HOSTILE[1]: HOSTILE[0],
        }
    )
    (folder / "table.csv").write_text(frame.write_csv() + rows, encoding="utf-8")
    return check_table(folder / "joint.toml", folder / "table.csv", folder / "result.csv")


# whole


def test_same_input_same_bytes(found: TableResult, tmp_path: Path) -> None:
    first = page_of(found)
    again = check_table(JOINT, TABLE, tmp_path / "result.csv")
    assert page_of(again).encode() == first.encode()
    code = f"""
from slip.cases.run import check_table
from slip.report.cases_page import cases_page
found = check_table({str(JOINT)!r}, {str(TABLE)!r}, {str(tmp_path / "result.csv")!r})
import sys
sys.stdout.buffer.write(cases_page(found, {str(TABLE)!r}, None, 20, (), ()).encode())
"""
    run = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, check=True)
    assert run.stdout == first.encode()


def test_it_is_whole_and_refers_to_nothing_outside(found: TableResult) -> None:
    text = page_of(found)
    seen = Seen(text)
    assert text.startswith("<!DOCTYPE html>") and "script" not in seen.tags and "link" not in seen.tags
    for address in (*seen.values("src"), *seen.values("srcset")):
        assert address.startswith("data:image/svg+xml;base64,")
        picture = base64.b64decode(address.partition(",")[2]).decode()
        assert "<svg" in picture and "dc:date" not in picture
    anchors = {value[1:] for value in seen.values("href")}
    assert anchors and all(value.startswith("#") for value in seen.values("href"))
    ids = seen.values("id")
    assert anchors <= set(ids) and len(ids) == len(set(ids))
    assert all(len(alt) > 40 for alt in seen.values("alt")) and len(seen.values("alt")) == 2


def test_the_verdict_comes_first(found: TableResult) -> None:
    words = Seen(page_of(found)).text
    head = words[words.index("fails per bolt") :]
    assert head.startswith(
        "fails per bolt 1.785, required 1.8, all loads growing governing case slew 252 end given bolt B3"
    )
    assert "At least one case fails (exit code 1)" in words
    assert 'slip explain jib.toml "slew 252" B3 --table jib.csv' in words
    assert found.digest in words and found.joint.digest in words


@pytest.mark.parametrize("units", [None, "lbf in"])
@pytest.mark.parametrize("options", [{}, {"top": 7}, {"cases": ("stop 252",)}, {"bolts": ("B3", "B8")}], ids=str)
def test_every_number_of_the_screen_is_on_the_page(
    found: TableResult, units: str | None, options: dict[str, Any]
) -> None:
    system = SYSTEMS[units] if units else None
    screen = cases_text(found, system, options.get("top"), options.get("cases", ()), options.get("bolts", ()))
    top, cases, bolts = options.get("top", 20), options.get("cases", ()), options.get("bolts", ())
    words = Seen(cases_page(found, str(TABLE), system, top, cases, bolts)).text
    on_page = set(NUMBER.findall(words))
    # the page has all notes, and no path of a folder
    screen = re.sub(r"\(\+\d+ more: --json\)|(?ms:^written .*?(?=^\w))", "", screen)
    assert len(set(NUMBER.findall(screen))) > 15 and set(NUMBER.findall(screen)) - on_page == set()


def test_numbers_of_a_large_screen_too(tmp_path: Path) -> None:
    """Refused rows, open bolts, forces that miss the load by 120 N mm at 60 mm of hypot(21, 6) N: each line of the screen is there."""
    (tmp_path / "joint.toml").write_text(THREE, encoding="utf-8")
    forces, loads = ["case,bolt,Fx[N],Fy[N],Fax[N],kind\n"], ["case,Fx[N],Fy[N],Fz[N],kind\n"]
    for i in range(120):
        pull = 150.0 * i
        forces += [f"case {i},B{b},{10 * i + 7},{b},{pull},static\n" for b in (1, 2, 3)]
        loads.append(f"case {i},{30 * i + 20},6,{3 * pull},static\n")
    forces += ["late,B1,1,2,3,static\n", "late,B9,1,2,3,static\n", "later,B2,x,2,3,static\n"]
    for name, lines in (("forces", forces), ("loads", loads)):
        (tmp_path / f"{name}.csv").write_text("".join(lines), encoding="utf-8")
    table = tmp_path / "forces.csv"
    found = check_table(tmp_path / "joint.toml", table, tmp_path / "o.csv", loads=tmp_path / "loads.csv")
    assert found.summary.refused == 2 and found.summary.near_count > 5 and found.summary.balanced == 120
    screen = re.sub(r"(?m)^(written|--|  +rows refused).*\n(?:  .*\n)*", "", cases_text(found))
    words = Seen(cases_page(found, str(table), None, 20, (), ())).text
    assert set(NUMBER.findall(screen)) - set(NUMBER.findall(words)) == set()
    for line in ("reserves", "apart", "open", "refused", "bolts", "nearest"):
        assert f"\n{line} " in screen
    assert "With both: 120 cases. The bolt forces add up to the joint's load within 9.2% (the worst, case 0)." in words


# what it shows


def test_the_ledger_is_that_of_the_explanation(found: TableResult) -> None:
    """115000 less 6000, 5 % and 0.85 x 56650; see the example's own test."""
    rows = [row for row in Seen(page_of(found)).rows if row[0].startswith("slew 252") and "115000" in row]
    ((case, end, bolt, *numbers),) = rows
    assert case == "slew 252 governs" and (end, bolt) == ("given", "B3")
    assert numbers[:7] == ["115000", "6000", "5750", "0", "48152.5", "55097.5", "1940.41"]


def test_the_envelope_is_that_of_the_result(found: TableResult, tmp_path: Path) -> None:
    rows = pl.read_csv(tmp_path / "result.csv", separator=";", decimal_comma=True)
    seen = Seen(page_of(found))
    for name in found.summary.bolts:
        own = rows.filter(pl.col("bolt") == name)
        (envelope,) = [row for row in seen.rows if row[0] == name and len(row) == 13]
        wanted = [own["clamp_low[N]"].min(), own["clamp_high[N]"].max(), own["shear[N]"].max()]
        assert [float(cell) for cell in envelope[1:6:2]] == pytest.approx(wanted, rel=1e-5)
        least = own.row(int(own["reserve_factor"].arg_min() or 0), named=True)
        assert float(envelope[11]) == pytest.approx(least["reserve_factor"], abs=5e-4)
        assert envelope[12] == least["case"]


def test_rows_of_the_result_fold_and_are_capped(
    found: TableResult, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = page_of(found)
    assert "<summary>All 300 rows of result.csv</summary>" in text
    rows = Seen(text).find_rows("slew 252", "B3", "given")
    assert ["55097.5", "152000", "1940.41"] in [row[3:6] for row in rows]
    assert any(row[-1] == "1,2" for row in rows), "what is carried through stays as it was"
    monkeypatch.setattr(cases_rows, "MOST", 40)
    assert "<summary>The first 40 of 300 rows of result.csv</summary>" in page_of(found)
    (tmp_path / "result.csv").unlink()
    assert "result.csv could not be read again" in page_of(found)


def test_rows_from_parquet_are_the_same(found: TableResult, tmp_path: Path) -> None:
    other = check_table(JOINT, TABLE, tmp_path / "result.parquet")
    wanted = page_of(found).replace("result.csv", "result.parquet")
    assert page_of(other) == wanted


def test_without_a_result_it_says_what_to_do() -> None:
    text = page_of(check_table(JOINT, TABLE))
    assert "<details>" not in text and "With --out RESULT.csv" in text


def test_filters_are_said_and_kept(found: TableResult) -> None:
    seen = Seen(page_of(found, cases=("stop 252",), bolts=("B3",)))
    assert "The lists below show case stop 252 and bolt B3 only." in seen.text
    assert [row[0] for row in seen.rows if len(row) == 8][1:] == ["stop 252"]
    assert [row[0] for row in seen.rows if len(row) == 13][1:] == ["B3"]
    assert "none of these cases and bolts governs" in Seen(page_of(found, cases=("lift 0",), bolts=("B1",))).text


def test_many_rows_fold(found: TableResult) -> None:
    assert page_of(found, top=30).count("<summary>10 more rows</summary>") == 1


# hostile text, refused rows


def test_hostile_names_stay_text(tmp_path: Path) -> None:
    found = hostile(tmp_path)
    text = cases_page(found, str(tmp_path / "table.csv"), None, 20, (), ())
    seen = Seen(text)
    assert "script" not in seen.tags and seen.tags.count("img") == 2
    assert "<script>alert" not in text and "&lt;script&gt;" in text and "{{ 7 * 7 }}" in text and "\u202e" not in text
    for name in HOSTILE[:4]:
        assert seen.find_rows(name), name


def test_what_was_refused_and_not_judged_is_said(tmp_path: Path) -> None:
    found = hostile(tmp_path, "late,B1,1,2,3,\nlate,B9,1,2,3,\n<b>,B1,x,2,3,\n")
    seen = Seen(cases_page(found, str(tmp_path / "table.csv"), None, 20, (), ()))
    assert found.summary.refused == 2 and "2 rows were refused" in seen.text
    assert "result.refused.csv" in seen.text
    assert any(row[0] == "late" and "refused" in row[1] for row in seen.rows)
    assert any(row[0] == "<b>" for row in seen.rows)
    assert "b" not in seen.tags


def test_where_no_case_could_be_judged(tmp_path: Path) -> None:
    shutil.copy(JOINT, tmp_path)
    head, row = TABLE.read_text(encoding="utf-8").splitlines()[:2]
    (tmp_path / "one.csv").write_text(f"{head}\n{row}\n", encoding="utf-8")
    found = check_table(tmp_path / "jib.toml", tmp_path / "one.csv", tmp_path / "out.csv")
    seen = Seen(cases_page(found, str(tmp_path / "one.csv"), None, 20, (), ()))
    assert "not judged no case could be judged" in seen.text and "img" not in seen.tags
    assert "this is not a pass (exit code 3)" in seen.text


def test_the_command_writes_it(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    where = tmp_path / "page.html"
    code = cli.main(["cases", str(JOINT), str(TABLE), "--report", str(where), "--case", "stop 252", "--top", "3"])
    assert code == 1 and "FAILS" in capsys.readouterr().out
    assert "show case stop 252 only" in Seen(where.read_text(encoding="utf-8")).text


def test_it_prints(found: TableResult) -> None:
    style = page_of(found).partition("<style>")[2].partition("</style>")[0]
    assert "@media print" in style and "details-content" in style


def test_classes_of_the_spread() -> None:
    assert spread_names()[0] == "below 0.5" and spread_names()[-1] == "5 and more" and "0.8 to 1" in spread_names()
