"""What a person sees of a contact stiffness: lines, page, picture, sweep; and what a wrong or thin file gets."""

from __future__ import annotations

import csv
import json
import math
import os
import re
import subprocess
import sys
from functools import cache
from html import unescape
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import slip
from slip.base.units import SI, SYSTEMS, US
from slip.cli import main
from slip.read.build import read_text
from slip.report.figures import DARK, LIGHT, svg
from slip.report.penalty import penalty_text
from slip.report.penalty_figure import DASHES, LINES, MARKERS, hidden, window_figure
from slip.report.penalty_page import penalty_page
from slip.report.penalty_result import penalty_result
from slip.report.penalty_words import number, say
from slip.report.words import CAUTION, columns
from slip.stiffness.stage import Penalty, penalty
from slip.stiffness.window import QUANTITIES

ROOT = Path(__file__).resolve().parents[2]
STRAP, BRACKET = ROOT / "examples/strap.toml", ROOT / "examples/bracket.toml"
ROUGH = 'roughness = ["Ra 6.3 um", "Ra 6.3 um"]'


def strap(old: str = "", new: str = "", **more: str) -> str:
    """The example with one part exchanged, and more keys of [finite_elements] in place of its own."""
    text = STRAP.read_text(encoding="utf-8")
    assert old in text
    text = text.replace(old, new, 1) if old else text
    for key, value in more.items():
        text = re.sub(rf"^{key} = .*$", f"{key} = {value}" if value else "", text, count=1, flags=re.M)
    return text


@cache
def judged(text: str = "") -> Penalty:
    return penalty(read_text(text, "strap.toml") if text else STRAP)


@cache
def of_bracket() -> Penalty:
    return penalty(BRACKET)


@cache
def of_tray() -> Penalty:
    return penalty(ROOT / "examples/tray.toml")


EXAMPLES = {"strap": judged, "bracket": of_bracket, "tray": of_tray}


def ran(tmp_path: Path, capsys: pytest.CaptureFixture[str], text: str, *words: str) -> tuple[int, str, str]:
    path = tmp_path / "case.toml"
    path.write_text(text, encoding="utf-8")
    code = main(["penalty", str(path), *words])
    return code, *capsys.readouterr()


def cells_of(page: str) -> dict[str, list[list[str]]]:
    """Rows of the page's tables by their first cell."""
    found: dict[str, list[list[str]]] = {}
    for row in re.findall(r"<tr>(.*?)</tr>", page, re.S):
        cells = re.findall(r"<t[hd][^>]*>(.*?)</t[hd]>", row, re.S)
        first, *rest = (" ".join(unescape(re.sub(r"<[^>]*>", "", cell)).split()) for cell in cells)
        found.setdefault(first, []).append(rest)
    return found


def value_of(shown: str) -> float:
    return float(re.sub(r"(?<=\d) (?=\d{3})", "", shown))


def same(shown: str, value: float) -> bool:
    """A number of four digits stands for a value."""
    return math.isclose(value_of(shown), value, rel_tol=5.1e-4, abs_tol=1e-300)


# the rule of the numbers


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (71682.4, "71 680"),
        (999.96, "1 000"),
        (99999.7, "100 000"),
        (9999600.0, "1e7"),
        (36634000.0, "3.663e7"),
        (0.23, "0.23"),
        (0.000399, "3.99e-4"),
        (-1234.5, "-1 234"),
        (0.0, "0"),
        (26.944, "26.94"),
    ],
)
def test_a_number(value: float, shown: str) -> None:
    assert number(value) == shown


@pytest.mark.parametrize(
    ("value", "system", "shown"),
    [
        (2.297e-4, SI, "0.2297 um"),
        (0.0999, SI, "99.9 um"),
        (0.1, SI, "0.1 mm"),
        (2.54e-5, US, "1 uin"),
        (25.4, US, "1 in"),
    ],
)
def test_a_small_length(value: float, system: Any, shown: str) -> None:
    assert say(value, "length", system) == shown


# the screen


@pytest.mark.parametrize("name", EXAMPLES)
@pytest.mark.parametrize("units", [None, *SYSTEMS])
def test_lines_fit_the_screen_and_begin_with_the_answer(name: str, units: str | None) -> None:
    lines = penalty_text(EXAMPLES[name](), SYSTEMS[units] if units else None).splitlines()
    assert max(columns(line) for line in lines) <= 80
    assert lines[0].startswith("a contact that only has to stick: ") and lines[0].endswith(" along the face")
    assert " ".join(lines[-2:]).endswith(CAUTION.split(";")[1].strip())
    assert not re.search(r"\bnan\b|\binf\b|None", "\n".join(lines))
    numbers = lines[: next(i for i, line in enumerate(lines) if line.startswith("Not above"))]
    assert not any("e+" in line for line in numbers)


def test_the_bracket_stays_within_sixty_lines() -> None:
    assert len(penalty_text(of_bracket()).splitlines()) <= 64


@pytest.mark.parametrize("name", EXAMPLES)
@pytest.mark.parametrize("units", [None, "lbf in"])
def test_every_form_of_the_result_is_on_the_screen(name: str, units: str | None) -> None:
    found, system = EXAMPLES[name](), SYSTEMS[units] if units else None
    text, result = penalty_text(found, system), penalty_result(found, system)
    for rows in zip(*result["forms"].values(), strict=True):
        (line,) = [one for one in text.splitlines() if re.match(rf"  {re.escape(rows[0]['meaning'])}\*?( \[|  )", one)]
        unit = re.search(r"\[([^]]*)\]", line)
        scale = {"um": 1e3, "uin": 1e6}.get(unit.group(1) if unit else "", 1.0)
        numbers = re.split(r"  +", re.sub(r"^.*?(\]|  )(?=  )", "", line).strip())[-len(rows) :]
        for shown, row in zip(numbers, rows, strict=True):
            assert same(shown, scale * row["value"]), line


def test_a_wide_title_and_names_of_many_signs_stay_on_the_line() -> None:
    title = "\N{CJK UNIFIED IDEOGRAPH-6A4B}" * 60
    found = judged(strap('title = "Strap under a clamp block"', f'title = "{title}"'))
    assert max(columns(line) for line in penalty_text(found).splitlines()) <= 80


# the page


@pytest.mark.parametrize("name", EXAMPLES)
@pytest.mark.parametrize("units", [None, "lbf in"])
def test_the_page_says_what_the_result_says(name: str, units: str | None) -> None:
    found, system = EXAMPLES[name](), SYSTEMS[units] if units else None
    page, result = penalty_page(found, system), penalty_result(found, system)
    assert page.startswith("<!DOCTYPE html>") and page.rstrip().endswith("</html>")
    bare = re.sub(r"data:image[^\"]*", "", page)
    assert not re.search(r"https?:|//\w|<script|url\(|@import|\bnan\b|None\b", bare.replace("None.", ""))
    ids = re.findall(r'\bid="([^"]+)"', page)
    assert len(ids) == len(set(ids)) and {v[1:] for v in re.findall(r'href="([^"]+)"', page)} <= set(ids)
    rows = cells_of(page)
    area = result["units"]["stiffness_per_area"]
    heads = re.findall(r'<span class="word">(.*?)</span>', page)
    assert [head.rpartition(" ")[2] for head in heads] == [area] * len(heads)
    for head, value in zip(heads, result["recommended"].values(), strict=True):
        assert same(head.rpartition(" ")[0], value)
    for forms in zip(*result["forms"].values(), strict=True):
        unit = forms[0].get("unit", "")
        small = {"mm": ("um", 1e3), "in": ("uin", 1e6)}.get(unit, (unit, 1.0))
        head, scale = next((f"{forms[0]['meaning']} [{u}]" if u else forms[0]["meaning"], f) for u, f in ((unit, 1.0), small)
                           if (f"{forms[0]['meaning']} [{u}]" if u else forms[0]["meaning"]) in rows)  # fmt: skip
        for shown, form in zip(rows[head][0], forms, strict=False):
            assert same(shown, scale * form["value"]), head
    for one in result["card"]["expected"]:
        typical, band = rows[f"{one['name']} [{one['unit']}]"][0]
        assert same(typical, one["typical"])
        if band != "-":
            low, high = band.split(" .. ")
            assert same(low, one["low"]) and same(high, one["high"])
        else:
            assert one["low"] == one["high"]
    said = " ".join(unescape(re.sub(r"<[^>]*>", " ", bare)).split())
    for text in (*(t.partition(": ")[2] or t for t in result["card"]["tests"]), result["card"]["rule"]):
        assert " ".join(text.split()) in said
    for text in (result["card"]["log"], result["input_digest"], f"slip {slip.__version__}", CAUTION):
        assert text in said
    for note in (*result["assumptions"], *result["warnings"]):
        assert note["text"] in said


def test_order_of_the_page() -> None:
    said = re.findall(r'<section id="(\w+)"', penalty_page(judged()))
    assert said == ["recommended", "window", "forms", "upper", "present", "card", "assumed", "limits"]


def test_windows_and_errors_on_the_page_are_those_of_the_result() -> None:
    page, result = penalty_page(judged()), penalty_result(judged())
    tables = {
        head: cells_of(table)
        for head, table in re.findall(r'<p class="caption"[^>]*>(.*?)</p>(.*?)</table>', page, re.S)
    }
    for window in result["windows"]:
        (rows,) = (table for head, table in tables.items() if head.startswith(f"Window for {window['purpose']}"))
        for name, within in window["within"].items():
            for shown, level in zip(rows[name][0], ("0.1", "0.05", "0.01"), strict=True):
                ends = [value for value in within[level] or () if value is not None]
                told = [value_of(part) for part in re.findall(r"\d[\d ]*(?:\.\d+)?(?:e\d+)?", shown)]
                assert len(told) <= len(ends) or not ends
                assert all(any(math.isclose(t, e, rel_tol=5.1e-4) for e in ends) for t in told), (name, shown)
                assert bool(within[level]) == (shown != "none")
    for name in QUANTITIES:
        told = [e[name] for e in result["present"]["errors"].values() if name in e]
        if told:
            shown = [cell for cell in tables["Error of each quantity with the present value"][name][0] if cell != "-"]
            assert len(shown) == len(told)
            assert all(same(cell.removesuffix(" %"), 100 * e) for cell, e in zip(shown, told, strict=True)), name


def test_the_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    code = (
        "import sys, slip; from slip.report.penalty_page import penalty_page; "
        "sys.stdout.write(penalty_page(slip.penalty(sys.argv[1])))"
    )
    runs = []
    for seed in ("1", "2"):
        environment = os.environ | {"PYTHONHASHSEED": seed, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8"}
        command = [sys.executable, "-c", code, str(STRAP)]
        runs.append(subprocess.run(command, capture_output=True, env=environment, cwd=tmp_path, check=True).stdout)
    assert runs[0] == runs[1] and len(runs[0]) > 20000


@pytest.mark.parametrize(
    "words", ["<script>alert(1)</script>", "' onmouseover='alert(1)", "{{ 7 * 7 }}", "&amp; <!-- ]]>"]
)
def test_hostile_text_does_no_harm(words: str) -> None:
    text = strap('title = "Strap under a clamp block"', f'title = "{words}"')
    text = text.replace('name = "strap"', f'name = "{words}"').replace('name = "swinging"', f'name = "{words}"')
    page = penalty_page(judged(text))
    assert not set("<>&'") & set(words) or words not in page
    assert "49" not in re.findall(r"<h1>.*?</h1>", page)[0]
    assert " ".join(words.split()) in unescape(re.sub(r"<[^>]*>", "", page))


# the picture


def test_the_picture_shows_the_sweep_in_the_units_that_are_asked_for() -> None:
    found = judged()
    for system in (SI, US):
        figure = window_figure(found, system)
        assert len(figure.axes) == 2 and [axes.get_title(loc="left") for axes in figure.axes] == ["stick", "interface"]
        for axes, w in zip(figure.axes, found.windows, strict=True):
            assert (axes.get_xscale(), axes.get_yscale()) == ("log", "log")
            low, high = axes.get_xlim()
            assert low < system.out(float(w.k[0]), "stiffness per area") and high / low > 1e6
            lines = {line.get_marker(): line for line in axes.lines if len(line.get_xdata()) == len(w.k)}
            for i, name in enumerate(QUANTITIES):
                if name not in w.errors or not np.nanmax(np.nan_to_num(w.errors[name])) > 1e-3:
                    continue
                line = lines[MARKERS[i]]
                assert line.get_xdata() == pytest.approx(w.k * system.out(1.0, "stiffness per area"))
                seen = w.errors[name] > 1e-3
                assert np.asarray(line.get_ydata())[seen] == pytest.approx(w.errors[name][seen])
        assert figure.axes[-1].get_xlabel().endswith(system.unit("stiffness per area"))
    said = [text.get_text() for text in window_figure(found, SI).legends[0].get_texts()]
    assert {"recommended value", "present value", "the real face, with its band"} <= set(said)
    assert any("rounding" in text for text in hidden(found, SI)), "a bound beyond the sweep is told in words"


def test_recommended_and_present_value_stand_where_they_are() -> None:
    found = judged()
    for axes, (purpose, k) in zip(window_figure(found, SI).axes, found.recommended.items(), strict=True):
        upright = [float(line.get_xdata()[0]) for line in axes.lines if len(set(line.get_xdata())) == 1]
        assert found.audit is not None
        assert any(x == pytest.approx(k) for x in upright), purpose
        assert any(x == pytest.approx(found.audit.k) for x in upright)


def test_lines_differ_in_more_than_colour_and_in_colour_for_the_colour_blind() -> None:
    """Seen without the red or the green cones (machado2009, from memory) each pair stays 15 apart in L*a*b*."""
    assert len(set(MARKERS)) == len(QUANTITIES) and len({str(dash) for dash in DASHES}) == len(QUANTITIES)
    views = {
        "all": np.eye(3),
        "no red": [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]],
        "no green": [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]],
    }
    for ink in (LIGHT, DARK):
        for view, matrix in views.items():
            seen = [lab(np.asarray(matrix) @ linear(colour)) for colour in LINES[ink]]
            for i, a in enumerate(seen):
                for b in seen[:i]:
                    assert np.linalg.norm(a - b) > 15, (view, ink, i)


def linear(colour: str) -> np.ndarray:
    values = np.array([int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)])
    return np.where(values <= 0.04045, values / 12.92, ((values + 0.055) / 1.055) ** 2.4)


def lab(rgb: np.ndarray) -> np.ndarray:
    """L*a*b* of linear sRGB under D65."""
    to_xyz = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
    x, y, z = np.cbrt(np.clip(to_xyz @ np.clip(rgb, 0, 1) / [0.9505, 1.0, 1.089], 1e-6, None))
    return np.array([116 * y - 16, 500 * (x - y), 200 * (y - z)])


def test_pictures_are_the_same_each_time_and_differ_by_the_ground() -> None:
    found = judged()
    light, again, dark = (svg(window_figure(found, SI, ink), ink) for ink in (LIGHT, LIGHT, DARK))
    assert light == again != dark and b"<text" in light and b"date" not in light.lower()


# the sweep


@pytest.mark.parametrize("units", [None, "lbf in"])
def test_the_sweep_has_a_row_for_each_value(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], units: str | None
) -> None:
    out = tmp_path / "sweep.csv"
    words = ["--sweep", str(out), "--json", *(["--units", units] if units else [])]
    code, said, _ = ran(tmp_path, capsys, strap(), *words)
    result = json.loads(said)
    with out.open(encoding="utf-8", newline="") as file:
        head, *rows = csv.reader(file)
    assert code == 0 and head[0] == f"k_t[{result['units']['stiffness_per_area']}]"
    assert [float(row[0]) for row in rows] == result["windows"][0]["k_t"]
    assert math.log10(float(rows[-1][0]) / float(rows[0][0])) == pytest.approx(6)
    for j, name in enumerate(head[1:], 1):
        purpose, _, quantity = name.partition(": ")
        (window,) = (w for w in result["windows"] if w["purpose"] == purpose)
        assert [float(row[j]) if row[j] else None for row in rows] == window["errors"][quantity]


# the command


def test_the_command_writes_page_and_sweep_and_never_over_its_input(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    page, sweep = tmp_path / "out.html", tmp_path / "out.csv"
    code, said, err = ran(tmp_path, capsys, strap(), "--report", str(page), "--sweep", str(sweep))
    assert (code, err) == (0, "") and said.startswith("a contact that only has to stick")
    assert page.read_text(encoding="utf-8").startswith("<!DOCTYPE html>") and sweep.exists()
    before = page.read_bytes()
    code, said, err = ran(tmp_path, capsys, strap(), "--report", str(page), "--sweep", str(page))
    assert (code, said) == (2, "") and "the file of --sweep" in err and page.read_bytes() == before
    for option in ("--report", "--sweep"):
        code, said, err = ran(tmp_path, capsys, strap(), option, str(tmp_path / "case.toml"))
        assert code == 2 and "an input file" in err and (tmp_path / "case.toml").read_text("utf-8") == strap()
    code, said, err = ran(tmp_path, capsys, strap(), "--report", str(tmp_path / "none" / "out.html"))
    assert code == 2 and err.count("\n") == 1 and said == ""


def test_one_purpose_alone() -> None:
    text = strap("[finite_elements]", '[finite_elements]\npurpose = "interface"')
    found = judged(text)
    assert list(found.recommended) == ["interface"] and len(window_figure(found, SI).axes) == 1
    assert "only has to stick" not in penalty_text(found) and penalty_page(found).count('class="word"') == 1


def test_no_roughness_says_what_to_measure_and_gives_the_stick_answer(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    code, said, err = ran(tmp_path, capsys, strap(ROUGH), "--report", str(tmp_path / "out.html"))
    assert (code, err) == (0, "") and said.startswith("a contact that only has to stick: ")
    assert "real faces:" not in said and "measure Ra of both faces" in " ".join(said.split())
    page = (tmp_path / "out.html").read_text(encoding="utf-8")
    assert "measure Ra of both faces" in page and "The real face along itself" not in page
    result = penalty_result(judged(strap(ROUGH)))
    assert "interface" not in result and list(result["recommended"]) == ["stick"]
    assert "interface-unknown" in {note["code"] for note in result["warnings"]}


def test_a_measured_stiffness_has_no_advice_to_follow_the_pressure() -> None:
    found = judged(strap(ROUGH, 'tangential_stiffness = ["10000 N/mm^3", "14000 N/mm^3"]'))
    assert "follow the pressure" not in penalty_text(found) + penalty_page(found)
    assert number(found.recommended["interface"]) in penalty_text(found).splitlines()[2]


@pytest.mark.parametrize(
    ("keys", "code", "words"),
    [
        ({"present": "{ of_normal = 0.5 }"}, "present-unknown", "normal stiffness"),
        ({"present": "{ edge_fraction = 0.01 }", "element_size": ""}, "present-unknown", "element"),
        (
            {"present": '{ per_node = "90000 N/mm" }', "element_size": "4\nelement_order = 2"},
            "present-unknown",
            "per area",
        ),
        ({"element_size": "40"}, "mesh-coarse", "1.8 elements across"),
        ({"friction": "0.15"}, None, ""),
    ],
)
def test_what_cannot_be_told_or_does_not_fit_is_warned_of(keys: dict[str, str], code: str | None, words: str) -> None:
    text = strap()
    for key, value in keys.items():
        own = f"(?s)(\\[finite_elements\\].*?^){key} = [^\n]*$"
        text = re.sub(own, rf"\g<1>{f'{key} = {value}' if value else ''}", text, count=1, flags=re.M)
    found = judged(text)
    notes = {note.code: note.text for note in found.notes}
    if code is None:
        assert "model-friction" in notes and "0.15" in notes["model-friction"]
        return
    assert words in notes[code]
    assert (found.audit is None) == (code == "present-unknown")
    assert (
        ("Present value" in penalty_text(found)) == ('id="present"' in penalty_page(found)) == (found.audit is not None)
    )


@pytest.mark.parametrize(
    ("old", "new", "code", "words"),
    [
        (
            "present = { edge_fraction = 0.01 }",
            'present = { per_area = "90000 N/mm" }',
            "unit-wrong",
            "present.per_area",
        ),
        (
            "present = { edge_fraction = 0.01 }",
            'present = { elastic_slip = "3 MPa" }',
            "unit-wrong",
            "present.elastic_slip",
        ),
        ("present = { edge_fraction = 0.01 }", 'present = { per_area = "-3 N/mm^3" }', "out-of-limits", "present"),
        ("element_depth = 2", 'element_depth = 2\nwidth = "50 mm"\ndimension = 3', "width-in-3d", "dimension = 2"),
        ("pressure = 20", "pressure = 0", "out-of-limits", "pressure"),
        ("shear = [12000, 0]", "shear = [0, 0]", "penalty-not-described", "a case with shear"),
    ],
)
def test_wrong_input_is_one_sentence(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], old: str, new: str, code: str, words: str
) -> None:
    exit_code, said, err = ran(tmp_path, capsys, strap(old, new))
    assert (exit_code, said) == (2, "") and err.count("\n") == 1 and words in err
    exit_code, said, _ = ran(tmp_path, capsys, strap(old, new), "--json")
    assert exit_code == 2 and [error["code"] for error in json.loads(said)["errors"]] == [code]


def test_no_clamp_left(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    text = BRACKET.read_text(encoding="utf-8").replace('torque = "200 N m"', 'torque = "20 N m"')
    code, said, err = ran(tmp_path, capsys, text)
    assert (code, said) == (2, "") and "tighten more, or lower the losses" in err and err.count("\n") == 1


def test_a_pressed_contact_is_sent_to_its_own_command(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["penalty", str(ROOT / "examples/pad.toml")]) == 2
    assert "slip check FILE has the stiffness of a pressed contact" in capsys.readouterr().err
    assert main(["penalty", str(ROOT / "examples/pad.toml"), "--json"]) == 2
    assert json.loads(capsys.readouterr().out)["errors"][0]["code"] == "penalty-contact"


def test_a_load_beyond_gross_slip_is_judged_below_it() -> None:
    found = judged(strap("shear = [12000, 0]", "shear = [50000, 0]"))
    assert "load-reduced" in {note.code for note in found.notes}
    assert "times gross slip" in " ".join(penalty_text(found).split())


def test_check_names_the_command_where_it_answers(capsys: pytest.CaptureFixture[str]) -> None:
    main(["check", str(BRACKET)])
    assert "contact stiffness of a model (slip penalty does)" in capsys.readouterr().out
    main(["check", str(ROOT / "examples/pad.toml")])
    assert "slip penalty" not in capsys.readouterr().out
