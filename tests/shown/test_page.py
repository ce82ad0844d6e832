"""The page: whole, the same bytes every time, closed towards the world, equal to the JSON result, and proof against hostile text."""

from __future__ import annotations

import base64
import os
import re
import subprocess
import sys
import xml.etree.ElementTree as ET
from functools import cache
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest

from slip.assess import Assessment, assess
from slip.base.units import SYSTEMS
from slip.read.build import read_text
from slip.report.figures import pattern_figure
from slip.report.machine import result
from slip.report.page import page
from slip.report.rows import SHOWN
from slip.report.words import CAUTION, factor

ROOT = Path(__file__).resolve().parents[2]
VOID = {"meta", "img", "source", "br", "link", "input", "hr"}

HEAD = """
format = 1
title = "Motor foot"
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
[tightening]
preload = [60000, 90000]
[losses]
embedding = "4 kN"
relaxation = "5 %"
[interface]
friction = [0.2, 0.3]
friction_source = "project test 114"
"""
SEVERAL = """
[[plate]]
name = "foot"
material = "grey iron"
thickness = 20
outline = [-120, -90, 120, 90]
[[plate]]
name = "bed"
material = "steel"
thickness = 30
[pattern]
positions = [[-80,-60],[0,-60],[80,-60],[-80,60],[0,60],[80,60]]
[axial]
bolt_share = 0.15
"""
CASES = """
[[case]]
name = "start"
acts_on = "joint"
shear = [9000, 12000]
axial = 6000
moment = [0, 0, 1.2e6]
kind = "static"
[[case]]
name = "running"
acts_on = "joint"
shear = [5000, 0]
moment = [0, 0, 3e5]
ratio = 0.2
[[case]]
name = "idle"
acts_on = "joint"
axial = 2000
kind = "static"
"""
MANY = HEAD + SEVERAL + CASES
SINGLE = """
[[case]]
name = "twist"
shear = [2000, 0]
moment = [0, 0, 5e4]
kind = "static"
"""
EN = """
[[standard]]
name = "EN 1993-1-8"
category = "C"
slip_class = "D"
to_standard_level = 1.4
"""


class Seen(HTMLParser):
    """Tags, attributes and text of a page; fails on a tag that is closed wrongly or left open."""

    def __init__(self, text: str) -> None:
        super().__init__(convert_charrefs=True)
        self.open: list[str] = []
        self.tags: list[str] = []
        self.attributes: list[tuple[str, str]] = []
        self.cells: list[str] = []
        self.rows: list[list[str]] = []
        self.words: list[str] = []
        self.feed(text)
        self.close()
        assert self.open == []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self.attributes += [(name, value or "") for name, value in attrs]
        assert len({name for name, _ in attrs}) == len(attrs), f"an attribute twice in {tag}"
        if tag == "tr":
            self.rows.append([])
        if tag in ("td", "th"):
            self.rows[-1].append("")
        if tag not in VOID:
            self.open.append(tag)

    def handle_endtag(self, tag: str) -> None:
        assert self.open and self.open[-1] == tag, f"{tag} closes {self.open[-3:]}"
        self.open.pop()

    def handle_data(self, data: str) -> None:
        if "style" not in self.open:
            self.words.append(data)
        if "td" in self.open or "th" in self.open:
            self.rows[-1][-1] += data

    @property
    def text(self) -> str:
        return " ".join(" ".join(self.words).split()).replace(" ,", ",")

    def find_rows(self, *starts: str) -> list[list[str]]:
        """Rows whose first cells begin with the words."""
        return [
            row for row in self.rows if all(cell.strip().startswith(s) for cell, s in zip(row, starts, strict=False))
        ]

    def values(self, attribute: str) -> list[str]:
        return [value for name, value in self.attributes if name == attribute]


@cache
def assessed(text: str, file: str = "joint.toml") -> Assessment:
    return assess(read_text(text, file))


@cache
def seen(text: str, units: str | None = None) -> Seen:
    return Seen(page(assessed(text), SYSTEMS[units] if units else None))


def pictures(whole: Seen) -> list[ET.Element]:
    """The embedded images as XML trees."""
    sources = [value for value in whole.values("src") + whole.values("srcset") if value]
    assert all(s.startswith("data:image/svg+xml;base64,") for s in sources)
    return [ET.fromstring(base64.b64decode(s.split(",", 1)[1])) for s in sources]


def test_the_page_is_one_whole_document() -> None:
    whole = seen(MANY)
    assert whole.tags[:3] == ["html", "head", "meta"]
    assert ("lang", "en") in whole.attributes
    assert whole.tags.count("h1") == 1 and whole.tags.count("main") == 1
    assert "script" not in whole.tags and "link" not in whole.tags
    ids = whole.values("id")
    assert len(ids) == len(set(ids)) > 5
    assert {v[1:] for v in whole.values("href")} <= set(ids)  # every link ends on the page
    assert {v for v in whole.values("aria-labelledby")} <= set(ids)
    assert all(value in ("row", "col", "colgroup") for value in whole.values("scope"))


def test_nothing_points_outward() -> None:
    text = page(assessed(MANY + EN))
    assert not re.search(r"https?:|//\w", text)
    whole = Seen(text)
    assert all(v.startswith("#") for v in whole.values("href"))
    assert not [name for name, _ in whole.attributes if name.startswith("on")]
    assert not re.search(r"url\(|@import", text)


def test_the_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    file = tmp_path / "joint.toml"
    file.write_text(MANY, encoding="utf-8")
    code = "import sys; from slip.assess import assess; from slip.report.page import page; sys.stdout.write(page(assess(sys.argv[1])))"
    runs = []
    for seed in ("1", "2"):
        (tmp_path / seed).mkdir()
        (tmp_path / seed / "matplotlibrc").write_text(f"font.size: {seed}\naxes.grid: {seed == '1'}\n")
        environment = os.environ | {"PYTHONHASHSEED": seed, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8"}
        run = subprocess.run(
            [sys.executable, "-c", code, str(file)],
            capture_output=True,
            env=environment,
            cwd=tmp_path / seed,
            check=True,
        )
        runs.append(run.stdout)
    assert runs[0] == runs[1]
    assert runs[0].decode() == page(assess(read_text(MANY, "joint.toml")))  # the folder leaves no trace


@pytest.mark.parametrize("units", [None, "N mm", "lbf in"])
def test_every_factor_of_the_result_stands_in_its_row(units: str | None) -> None:
    found = result(assessed(MANY), SYSTEMS[units] if units else None)
    whole = seen(MANY, units)
    assert len(found["checks"]) > 12
    for check in found["checks"]:
        (row,) = [r for r in whole.find_rows(check["case"], check["end"]) if len(r) in (13, 14)]
        for key in ("safety", "load_factor"):
            if key in check:
                assert factor(check[key], check["required"]) in row, (check, row)
    governing = found["governing"]
    for key in ("factor", "reserve_factor"):
        assert factor(governing[key], governing["required"] if key == "factor" else 1.0) in whole.text


@pytest.mark.parametrize("units", ["N mm", "lbf in"])
def test_the_ledger_of_the_governing_end_is_that_of_the_result(units: str) -> None:
    found = result(assessed(MANY), SYSTEMS[units])
    g, whole = found["governing"], seen(MANY, units)
    case = next(c for c in found["cases"] if c["name"] == g["case"])
    end = next(e for e in case["ends"] if e["end"] == g["end"])
    assert len(end["ledger"]) == 6
    for bolt in end["ledger"]:
        cells = [cell for row in whole.find_rows(bolt["bolt"]) for cell in row]
        for key in (
            "assembly_low",
            "embedding",
            "axial_relief",
            "clamp_low",
            "shear",
            "assembly_high",
            "bolt_force_high",
        ):
            assert f"{bolt[key]:.6g}" in cells, (bolt["bolt"], key)
        assert f"{100 * bolt['yield_use']:.6g}" in cells
    assert f"lowest clamp [{SYSTEMS[units].force}]" in whole.text


def test_verdict_and_assumptions_come_before_the_results() -> None:
    text = seen(MANY).text
    order = [
        "Caution:",
        "Assumed because the file is silent",
        "Slip and separation",
        "The clamp, bolt by bolt",
        "Inputs",
        "Sources",
    ]
    places = [text.index(words, text.index("Caution:")) for words in order]
    assert places == sorted(places)
    assert CAUTION in text
    for note in assessed(MANY).assumptions:
        assert text.index(note.text) < text.index("Slip and separation")
        assert note.key in text
    assert assessed(MANY).joint.digest in text


def test_many_assumptions_of_one_kind_fold_and_none_is_lost() -> None:
    more = "".join(f'[[case]]\nname = "case {i}"\nacts_on = "joint"\nshear = [{1000 + i}, 0]\n' for i in range(9))
    text = page(assessed(HEAD + SEVERAL + more))
    assert text.index("case 0: alternating") < text.index("and 8 more like it") < text.index("case 8: alternating")
    whole = Seen(text).text
    assert all(note.text in whole for note in assessed(HEAD + SEVERAL + more).assumptions)


def test_each_line_has_formula_numbers_source_and_basis() -> None:
    whole = seen(MANY)
    for words in ("F_max = mu*m*clamp", "S_all", "project test 114, given", "derived"):
        assert words in whole.text
    assert "source-statics" in whole.values("id") and "#source-statics" in whole.values("href")


def test_the_reader_of_another_system_sees_results_in_it() -> None:
    assert "(13488.5 lbf)" in seen(MANY, "lbf in").text  # lowest preload 60000 N
    assert "lbf" not in seen(MANY).text


def test_the_group_decides_with_its_reason_in_the_verdict() -> None:
    asked = '[required]\ndecides = "group"\ndecides_reason = "holes let the bolts share, test 9"\n'
    text = seen(MANY + asked).text
    assert "The group factor decides" in text and "holes let the bolts share, test 9" in text
    assert "The factor per bolt decides" in seen(MANY).text


@pytest.mark.parametrize(("required", "state", "code"), [("1.2", "holds", 0), ("9", "fails", 1)])
def test_the_word_of_the_verdict_is_that_of_the_exit_code(required: str, state: str, code: int) -> None:
    text = MANY + f"[required]\nstatic = {required}\nalternating = {required}\n"
    assert assessed(text).verdict.exit_code == code
    whole = seen(text)
    assert whole.text.startswith(f"{state}: Motor foot")
    assert f"(exit code {code})" in whole.text


def test_a_joint_that_is_not_solved_says_so_and_why() -> None:
    text = MANY + '[required]\ntrue_slip = "1 um"\n'
    assert assessed(text).verdict.exit_code == 3
    whole = seen(text)
    assert whole.text.startswith("not solved")
    assert "this is not a pass" in whole.text
    assert "not solved: give" in whole.text
    standard = MANY + '[[standard]]\nname = "AISC 360"\nmethod = "LRFD"\nsurface = "A"\n'
    assert "not compared: give to_standard_level" in seen(standard).text


def test_a_standard_that_governs_is_named_with_clause_and_numbers() -> None:
    text = MANY + EN
    verdict = assessed(text).verdict
    assert verdict.governing.check == "standard.EN 1993-1-8"
    whole = seen(text)
    assert re.search(
        r"fails EN 1993-1-8: .*reserve " + re.escape(factor(verdict.governing.reserve_factor, 1.0)), whole.text
    )
    assert "EN 1993-1-8:2005, 3.9" in whole.text
    assert "that it presumes" in whole.text  # the preload is below the one that the standard presumes
    listed = [s for case in result(assessed(text))["cases"] for end in case["ends"] for s in end["standards"]]
    assert listed
    cells = {cell for row in whole.rows for cell in row}
    for entry in listed:
        assert {f"{entry['demand']:.6g}", f"{entry['resistance']:.6g}", factor(entry["utilisation"], 1.0)} <= cells


def test_a_single_bolt_under_torque_has_a_page() -> None:
    whole = seen(HEAD + SINGLE)
    assert "torque on one bolt is held at the hole radius" in whole.text
    held = assessed(HEAD + SINGLE).verdict.checks[0]
    assert factor(held.load_factor, held.required) in whole.text
    assert len(pictures(whole)) == 2


def test_many_cases_fold_and_the_worst_stands_open() -> None:
    more = "".join(
        f'[[case]]\nname = "case {i:02d}"\nacts_on = "joint"\nshear = [{1000 + 100 * i}, 0]\nkind = "static"\n'
        for i in range(40)
    )
    text = page(assessed(HEAD + SEVERAL + more))
    whole = Seen(text)
    assert (
        text.index('<th scope="row"><bdi>case 39')
        < text.index("<details>")
        < text.index('<th scope="row"><bdi>case 00')
    )
    rows = [row[0] for row in whole.rows if len(row) in (13, 14) and row[0].startswith("case ")]
    assert len(rows) == len(set(rows)) == 40 > SHOWN


HOSTILE = [
    "<script>alert(1)</script>",
    "\"><img src=x onerror='alert(1)'>",
    "' onmouseover='alert(1)",
    "\u202egnihton\u2066 \x07",
    "A" * 10_000,
    "{{ 7 * 7 }}{% raw %}",
    "$\\q$",
    "$\\frac{1}{0}$ & &amp; <!-- ]]>",
    "\u05d0\u05d1\u05d2 \u4e2d\u6587 \u0e44\u0e17\u0e22",
]


def quoted(text: str) -> str:
    """A basic string of the file's language."""
    plain = "".join(
        c if c.isprintable() else f"\\u{ord(c):04x}" for c in text.replace("\\", "\\\\").replace('"', '\\"')
    )
    return f'"{plain}"'


@pytest.mark.parametrize("words", HOSTILE)
def test_hostile_text_does_no_harm(words: str) -> None:
    said = quoted(words)
    text = (
        MANY.replace('title = "Motor foot"', f"title = {said}")
        .replace('name = "start"', f"name = {said}")
        .replace('name = "foot"', f"name = {said}")
        .replace('"project test 114"', said)
        .replace("[pattern]\n", f'[pattern]\nnames = [{said}, "b", "c", "d", "e", "f"]\n')
    )
    text += f'[required]\ndecides = "group"\ndecides_reason = {said}\n'
    made = page(assess(read_text(text, words)))
    whole = Seen(made)
    usual = seen(MANY)
    assert {name for name, _ in whole.attributes} == {name for name, _ in usual.attributes}
    assert set(whole.tags) - set(usual.tags) <= {"h4"}
    assert "\u202e" not in made and "\u2066" not in made and "\x07" not in made
    assert "A" * 700 not in made
    for picture in pictures(whole):
        assert not [e.tag for e in picture.iter() if e.tag.endswith(("script", "foreignObject"))]
    if words.startswith("<script"):
        assert words in whole.text  # shown as what it is
    if "7 * 7" in words:
        assert "{{ 7 * 7 }}" in whole.text


@pytest.mark.parametrize(("units", "label"), [("N mm", "x in mm"), ("lbf in", "x in in")])
def test_pictures_bear_units_and_words_in_their_place(units: str, label: str) -> None:
    whole = seen(MANY, units)
    drawn = pictures(whole)
    assert len(drawn) == 2  # light and dark
    for picture in drawn:
        text = " ".join("".join(e.itertext()) for e in picture.iter() if e.tag.endswith("}text"))
        assert label in text and "B3" in text
    assert all(len(alt) > 30 for alt in whole.values("alt")) and whole.values("alt")


def test_the_picture_shows_arrows_and_a_finite_centre_only() -> None:
    turning, (end, *_) = assessed(MANY), assessed(MANY).verdict.ends
    axes = pattern_figure(turning, end).axes[0]
    (arrows,) = [c for c in axes.collections if hasattr(c, "U")]
    shear = turning.clamp.states.shear[:, end.state]
    assert arrows.U / arrows.U.max() == pytest.approx(shear[0] / shear[0].max())
    assert [line.get_marker() for line in axes.lines] == ["P"]
    assert axes.lines[0].get_xydata()[0] == pytest.approx(
        turning.slip.group.centre[end.group_state]
    )  # centroid at the origin
    straight = assessed(HEAD + SEVERAL + '[[case]]\nname = "push"\nacts_on = "joint"\nshear = [5000, 0]\n')
    assert list(pattern_figure(straight, straight.verdict.ends[0]).axes[0].lines) == []
    assert "there is no instant centre" in Seen(page(straight)).text


def test_a_joint_that_opens_has_no_instant_centre_and_marks_its_bolts() -> None:
    gaping = assessed(MANY.replace("axial = 6000", "axial = 500000"))
    (end, *_) = gaping.verdict.ends
    assert gaping.clamp.ledger.open[end.state].all()
    assert [line.get_marker() for line in pattern_figure(gaping, end).axes[0].lines] == ["x"] * 6
    whole = Seen(page(gaping)).text
    assert "cannot hold any part of the load" in whole and "the bolt is open" in whole


def test_plain_check_loads_neither_templates_nor_drawing(tmp_path: Path) -> None:
    file = tmp_path / "joint.toml"
    file.write_text(MANY, encoding="utf-8")
    code = (
        "import sys; from slip.cli import main; main(['check', sys.argv[1]]); "
        "sys.exit([m for m in ('jinja2', 'matplotlib') if m in sys.modules] or 0)"
    )
    run = subprocess.run(
        [sys.executable, "-c", code, str(file)],
        capture_output=True,
        text=True,
        env=os.environ | {"PYTHONPATH": str(ROOT)},
    )
    assert run.returncode == 0, run.stderr


def test_drawing_leaves_no_state_behind() -> None:
    code = (
        "import sys, matplotlib; matplotlib.rcParams['font.size'] = 31\n"
        "from slip.assess import assess; from slip.read.build import read_text; from slip.report.page import page\n"
        "page(assess(read_text(sys.stdin.read())))\n"
        "assert 'matplotlib.pyplot' not in sys.modules and matplotlib.rcParams['font.size'] == 31"
    )
    run = subprocess.run(
        [sys.executable, "-c", code],
        input=MANY,
        capture_output=True,
        text=True,
        env=os.environ | {"PYTHONPATH": str(ROOT)},
    )
    assert run.returncode == 0 and run.stderr == "", run.stderr


def luminance(colour: str) -> float:
    parts = [int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    r, g, b = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def contrast(one: str, two: str) -> float:
    low, high = sorted((luminance(one), luminance(two)))
    return (high + 0.05) / (low + 0.05)


def test_text_stands_out_from_its_ground_in_light_and_dark() -> None:
    """Contrast of at least 4.5, the level AA of accessible text."""
    css = (ROOT / "slip/report/templates/page.css").read_text(encoding="utf-8")
    blocks: list[dict[str, Any]] = [
        dict(re.findall(r"--(\w+): (#[0-9a-f]{6})", b)) for b in re.findall(r":root \{(.*?)\}", css, re.S)
    ]
    assert len(blocks) == 2
    for ink in blocks:
        for ground in ("ground", "sheet", "band"):
            for word in ("ink", "soft", "link", "holds", "fails", "open"):
                assert contrast(ink[word], ink[ground]) >= 4.5, (word, ground, ink)
