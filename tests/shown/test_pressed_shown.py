"""What a person sees of a pressed contact: page, screen and explanation, which say what the JSON says."""

from __future__ import annotations

import ast
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

import pytest

from slip.assess import PressedAssessment, assess
from slip.base.units import SYSTEMS
from slip.cli import main
from slip.friction.pressed import grids
from slip.read.build import read_text
from slip.report.figures import DARK, svg
from slip.report.pressed import pressed_result, pressed_text
from slip.report.pressed_figure import traction_figure
from slip.report.pressed_lines import explain_pressed, explain_pressed_text
from slip.report.pressed_page import pressed_page
from slip.report.words import CAUTION, columns

ROOT = Path(__file__).resolve().parents[2]
STEEL = "material = { youngs_modulus = 210000, poissons_ratio = 0.3 }"
ROUGH = 'roughness = ["Ra 0.4 um", "Rz 2 um"]'
SHAPES = {
    "sphere": 'shape = "sphere"\nradius = 10\nnormal_force = 100',
    "cylinder": 'shape = "cylinder"\nradius = 50\nlength = 10\nnormal_force = 2000',
    "cylinder pulled": 'shape = "cylinder"\nradius = 50\nlength = 10\nnormal_force = 2000\nbulk_stress = 60',
    "beyond": 'shape = "cylinder"\nradius = 50\nlength = 10\nnormal_force = 2000\nbulk_stress = 400',
    "flat": 'shape = "flat"\nflat_width = 10\nnormal_force = 2000',
    "flat strip": 'shape = "flat"\nflat_width = 10\nlength = 8\nnormal_force = 2000',
    "rounded": 'shape = "rounded flat"\nflat_width = 4\nradius = 20\nnormal_force = 2000',
    "rounded strip": 'shape = "rounded flat"\nflat_width = 4\nradius = 20\nlength = 10\nnormal_force = 2000',
}
FACES = {"smooth": "", "rough": ROUGH, "measured": "tangential_stiffness = [1e5, 4e5]"}
CALLS = {name: getattr(math, name) for name in ("sqrt", "acos", "hypot")} | {"ln": math.log, "abs": abs}


def written(shape: str, face: str = "", more: str = "", title: str = "Foot") -> str:
    k = 20 if "2000" in shape else 1  # two thirds of what slips
    return f"""format = 1
title = "{title}"
units = "N mm"
[contact]
{shape}
[[body]]
{STEEL}
[[body]]
material = "grey iron"
[interface]
friction = [0.3, 0.4]
{face}
[[case]]
name = "rock"
shear = [{20 * k}, {3 * k}]
ratio = -1
[[case]]
name = "lean"
shear = [0, {16 * k}]
ratio = 0.4
[[case]]
name = "rest"
shear = [0, 0]
kind = "static"
[[case]]
name = "knock"
shear = [9e3, 0]
kind = "static"
{more}
"""


@pytest.fixture(autouse=True)
def few_cells(monkeypatch: pytest.MonkeyPatch) -> None:
    """What is said does not hang on the grid."""
    monkeypatch.setattr(grids, "CELLS", 24)
    monkeypatch.setattr(grids, "PLANE_CELLS", 48)


@cache
def assessed(text: str) -> PressedAssessment:
    found = assess(read_text(text, "contact.toml"))
    assert isinstance(found, PressedAssessment)
    return found


def text_of(page: str) -> str:
    body = re.sub(r"<style>.*?</style>", "", page, flags=re.S)
    return " ".join(unescape(re.sub(r"<[^>]*>", " ", body)).split())


# the explanation


def worked_out(text: str) -> float:
    """Value of plain arithmetic, and nothing but that."""

    def visit(node: ast.AST) -> float:
        match node:
            case ast.Constant(value=int() | float() as number):
                return float(number)
            case ast.Name(id="pi"):
                return math.pi
            case ast.UnaryOp(op=ast.USub()):
                return -visit(node.operand)
            case ast.Call(func=ast.Name(id=name), args=arguments):
                return float(CALLS[name](*map(visit, arguments)))
            case ast.BinOp():
                a, b = visit(node.left), visit(node.right)
                signs = {ast.Add: a.__add__, ast.Sub: a.__sub__, ast.Mult: a.__mul__, ast.Div: a.__truediv__}
                return float(a**b if isinstance(node.op, ast.Pow) else signs[type(node.op)](b))
        raise ValueError(f"not plain arithmetic: {ast.dump(node)[:80]}")

    return visit(ast.parse(text.replace("^", "**"), mode="eval").body)


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("shape", SHAPES)
def test_every_line_is_its_own_proof(shape: str, face: str) -> None:
    """A line evaluates to its result, from eight digits; the motion of a rounded flat is a small difference of approaches."""
    found = assessed(written(SHAPES[shape], FACES[face]))
    for case in found.joint.cases:
        lines = explain_pressed(found, case.name).lines
        assert len(lines) > 12
        for line in lines:
            assert line.source and line.basis
            assert worked_out(line.put_in) == pytest.approx(line.result, rel=2e-5), line


NAMES = {
    "displacement": "motion of the bodies",
    "stiffness": "stiffness",
    "stick_ratio": "stick size over contact size",
    "stick_shift": "shift of the stick zone",
    "true_slip": "largest true slip",
    "elastic_slip": "largest elastic slip",
    "edge_stress": "stress at the trailing edge",
    "energy_per_cycle": "energy of a cycle",
}
KNOWN = {
    ("closed form", "stick_ratio"),
    ("closed form", "true_slip"),
    ("closed form", "energy_per_cycle"),
}  # 1, 0, 0 of a flat


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("shape", SHAPES)
def test_every_number_of_the_result_has_its_line(shape: str, face: str) -> None:
    found = assessed(written(SHAPES[shape], FACES[face]))
    for i, case in enumerate(pressed_result(found)["cases"]):
        explanation = explain_pressed(found, case["name"])
        (end,) = (end for end in case["ends"] if end["end"] == explanation.end)
        entry = end["partial_slip"]
        size = found.slips[i, explanation.end].size

        def has(group: str, name: str, value: float, rel: float = 1e-9, lines: Any = explanation.lines) -> bool:
            own = [line.result for line in lines if line.group == group and line.name.startswith(name)]
            return any(result == pytest.approx(value, rel=rel) for result in own)

        for key, name in (
            ("contact_size", ("contact radius", "half-width", "radius")),
            ("peak_pressure", ("peak", "mean")),
        ):
            assert any(has("contact", one, entry[key]) for one in name), key
        assert has("gross slip", "gross-slip load", entry["gross_slip_load"])
        if "safety" in end["gross_slip"]["group"]:
            assert has("gross slip", "safety", end["gross_slip"]["group"]["safety"])
        assert has("load", "shear", entry["shear"])
        for route in entry["routes"]:
            readings = [route, *route.get("band", {}).values()]
            for key, name in NAMES.items():
                for reading in readings:
                    flat = shape.startswith("flat") and (route["model"], key) in KNOWN
                    if key not in reading or flat:
                        continue
                    value = reading[key] / (size if (route["model"], key) == ("closed form", "stick_shift") else 1.0)
                    rel = 1e-9 if route["model"] == "closed form" else 1e-4  # five digits
                    assert has(route["model"], name, value, rel), (case["name"], route["model"], key)


def test_the_governing_end_is_explained_by_default_and_the_worse_one_of_a_case() -> None:
    found = assessed(written(SHAPES["sphere"]))
    assert (explain_pressed(found).case, explain_pressed(found).end) == ("knock", "given")
    assert explain_pressed(found, "lean").end == "given"
    assert explain_pressed(found, "rest").lines


def test_the_explanation_on_the_screen_and_as_json(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "foot.toml"
    path.write_text(written(SHAPES["cylinder pulled"], ROUGH), encoding="utf-8")
    assert main(["explain", str(path), "rock"]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert all(columns(line) <= 80 for line in lines)
    assert any("e/a = E_star*eps/(2*mu*p_0)" in line for line in lines)
    assert main(["explain", str(path), "rock", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert "bolt" not in found and found["end"] == "given"
    assert set(found["sources"]) >= {"nowell_hills1987", "step", "persson2007"}


@pytest.mark.parametrize(
    ("words", "said"), [(["nobody"], "known: rock, lean"), (["rock", "B1"], "a contact has no bolts")]
)
def test_a_case_or_bolt_that_is_not_there(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], words: list[str], said: str
) -> None:
    path = tmp_path / "foot.toml"
    path.write_text(written(SHAPES["sphere"]), encoding="utf-8")
    assert main(["explain", str(path), *words]) == 2
    assert said in capsys.readouterr().err


def test_readings_of_the_face_are_told_with_their_source() -> None:
    lines = explain_pressed(assessed(written(SHAPES["sphere"], ROUGH)), "rock").lines
    k = {line.name: line.result for line in lines if line.name.startswith("tangential stiffness for each MPa,")}
    assert list(k.values()) == pytest.approx([k["tangential stiffness for each MPa, typical"] * x for x in (0.5, 1, 2)])
    assert {line.unit for line in lines if line.symbol in ("Ra", "Rq")} == {"um"}
    assert next(line.result for line in lines if line.symbol == "Rq") == pytest.approx(0.5)  # 1.25 x 0.4 um


# the screen


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("shape", SHAPES)
def test_the_screen_is_80_columns_wide_and_breaks_no_number(shape: str, face: str) -> None:
    text = pressed_text(assessed(written(SHAPES[shape], FACES[face])))
    lines = text.splitlines()
    assert max(map(columns, lines)) <= 80
    assert lines[0].startswith("FAILS: the contact slips wholly at 0.0")
    assert "\N{WORD JOINER}" not in text
    assert not re.search(r"\d\n +\d{3}\b", text)
    assert sum("rock, both ends" in line for line in lines) == 1
    assert ("lean, given end" in text) and ("lean, other end" in text)
    assert ("(real" in text) == (face == "rough")


def test_many_ends_are_counted() -> None:
    more = "".join(f'[[case]]\nname = "c{i}"\nshear = [{i + 1}, 0]\nkind = "static"\n' for i in range(12))
    text = pressed_text(assessed(written(SHAPES["sphere"], more=more)))
    assert "more ends with larger factors; --json has them all" in text
    assert "knock, given end" in text and "c0, given" not in text


def test_sentences_are_in_the_units_of_the_file() -> None:
    text = written(SHAPES["cylinder"]).replace('"N mm"', '"lbf in"').replace("radius = 50", "radius = 2")
    notes = [note for found in assessed(text).slips.values() for note in found.notes]
    assert any(" in;" in note for note in notes) and not any(" mm" in note for note in notes)


# the page


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("units", [None, "lbf in"])
def test_the_page_is_whole_and_says_what_the_result_says(shape: str, face: str, units: str | None) -> None:
    found = assessed(written(SHAPES[shape], FACES[face]))
    system = SYSTEMS[units] if units else None
    page = pressed_page(found, system)
    assert page.startswith("<!DOCTYPE html>") and page.rstrip().endswith("</html>")
    assert not re.search(r"https?:|//\w|<script|url\(|@import", re.sub(r"data:image[^\"]*", "", page))
    ids = re.findall(r'\bid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    assert {v[1:] for v in re.findall(r'href="([^"]+)"', page)} <= set(ids)
    said = text_of(page)
    for words in (
        "fails",
        "the contact slips wholly at 0.0",
        "closed form",
        "step on half-spaces",
        found.joint.digest,
        CAUTION,
    ):
        assert words in said
    result = pressed_result(found, system)
    for case in result["cases"]:
        for end in case["ends"]:
            assert f"{end['partial_slip']['gross_slip_load']:.6g}" in said
            for note in end["partial_slip"].get("notes", ()):
                assert note in said
    assert "bolt" not in said.lower() and "clamp" not in said.lower().replace("f_max = mu*m*clamp", "")


def test_order_of_the_page() -> None:
    said = text_of(pressed_page(assessed(written(SHAPES["cylinder"], ROUGH))))
    order = (
        "Caution:",
        "Assumed because the file is silent",
        "Gross slip, case by case",
        "Both routes at",
        "Inputs Contact",
        "Sources Basis",
    )
    places = [said.index(words) for words in order]
    assert places == sorted(places)


def test_both_routes_stand_side_by_side_with_their_difference() -> None:
    text = written(SHAPES["sphere"]).replace("9e3", "19")
    page = pressed_page(assessed(text))
    found = assessed(text).slips[0, "given"]
    off = 100 * (found.routes[1].stiffness / found.routes[0].stiffness - 1)
    row = re.search(r"stiffness before slip \[N/mm\].*?</tr>", page, re.S)
    assert row and f"{off:+.3g} %" in row.group()


def test_the_picture_shows_bound_and_tractions() -> None:
    found = assessed(written(SHAPES["sphere"])).slips[0, "given"]
    figure = traction_figure(found, SYSTEMS["N mm"])
    bound, closed, stepped = figure.axes[0].lines
    assert max(bound.get_ydata()) == pytest.approx(0.3 * found.peak_pressure, rel=1e-4)
    x, q = closed.get_data()
    middle = found.routes[0].stick_ratio * found.size
    outside = abs(x) > middle * 1.01
    assert q[outside] == pytest.approx(bound.get_ydata()[outside], abs=1e-9)  # slips
    assert (q[abs(x) < 0.99 * middle] < bound.get_ydata()[abs(x) < 0.99 * middle]).all()
    assert len(stepped.get_xdata()) > 10
    assert traction_figure(assessed(written(SHAPES["sphere"])).slips[3, "given"], SYSTEMS["N mm"], DARK).axes[0].lines
    assert svg(traction_figure(found, SYSTEMS["N mm"])) == svg(traction_figure(found, SYSTEMS["N mm"]))


def test_the_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    code = (
        "import sys; from slip.assess import assess; from slip.report.pressed_page import pressed_page; "
        "sys.stdout.write(pressed_page(assess(sys.argv[1])))"
    )
    runs = []
    for seed in ("1", "2"):
        environment = os.environ | {"PYTHONHASHSEED": seed, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8"}
        command = [sys.executable, "-c", code, str(ROOT / "examples/pad.toml")]
        runs.append(subprocess.run(command, capture_output=True, env=environment, cwd=tmp_path, check=True).stdout)
    assert runs[0] == runs[1]


@pytest.mark.parametrize(
    "words", ["<script>alert(1)</script>", "' onmouseover='alert(1)", "{{ 7 * 7 }}", "&amp; <!-- ]]>"]
)
def test_hostile_text_does_no_harm(words: str) -> None:
    text = written(SHAPES["cylinder"], f'friction_source = "{words}"', title=words).replace(
        'name = "knock"', f'name = "{words}"'
    )
    page = pressed_page(assessed(text))
    assert "<script" not in page and words in unescape(page)
    assert re.findall(r"<[^>]*onmouseover", page) == []


def test_a_report_is_written_and_the_screen_as_well(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path, out = tmp_path / "foot.toml", tmp_path / "foot.html"
    path.write_text(written(SHAPES["flat strip"]), encoding="utf-8")
    assert main(["check", str(path), "--report", str(out)]) == 1
    assert capsys.readouterr().out.startswith("FAILS") and out.read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    assert main(["check", str(path), "--report", str(path)]) == 2


def test_the_screen_of_the_explanation_names_the_verdict() -> None:
    found = assessed(written(SHAPES["sphere"]))
    text = explain_pressed_text(explain_pressed(found, "rock"), found)
    assert text.startswith("Every number of rock, given end, in N, mm, MPa\nFAILS: ")
