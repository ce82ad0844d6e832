"""What a person sees of a face of known pressure: page and explanation, which say what the JSON says."""

from __future__ import annotations

import importlib.util
import json
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
from matplotlib.patches import Rectangle

from slip.assess import FaceAssessment, assess
from slip.base.units import SI, SYSTEMS
from slip.cli import main
from slip.read.build import read_text
from slip.report.face import face_result
from slip.report.face_figure import along_figure, plan_figure
from slip.report.face_lines import explain_face
from slip.report.face_page import face_page
from slip.report.figures import DARK, svg
from slip.report.words import CAUTION, columns

ROOT = Path(__file__).resolve().parents[2]


def neighbour(name: str) -> Any:
    """A test module of this folder, whose way to work out a line serves here as well."""
    spec = importlib.util.spec_from_file_location(name, Path(__file__).with_name(f"{name}.py"))
    assert spec and spec.loader
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


agrees = neighbour("test_explain").agrees


def plate(outline: str, thickness: float, edge: str = "") -> str:
    load_edge = f'load_edge = "{edge}"' if edge else ""
    material = "material = { youngs_modulus = 210000, poissons_ratio = 0.3 }"
    return f"[[plate]]\n{material}\nthickness = {thickness}\noutline = {outline}\n{load_edge}\n"


RIGHT, LEFT = "[-50, -30, 300, 30]", "[-300, -30, 50, 30]"
BARS = plate(RIGHT, 12, "right") + plate(LEFT, 12, "left")
PLATES = {
    "bars": (BARS, 1),
    "slim": (plate(RIGHT, 6, "right") + plate(LEFT, 12, "left"), 1),
    "double": (plate(RIGHT, 6, "right") + plate(LEFT, 16, "left") + plate(RIGHT, 6, "right"), 2),
    "square": (plate("[0, 0, 50, 50]", 12) + plate("[0, 0, 50, 80]", 12), 1),
    "thick": (plate("[0, 0, 50, 50]", 60) + plate("[0, 0, 50, 80]", 60), 1),
    "rings": (plate("{ outer_diameter = 80, inner_diameter = 20 }", 12) + plate("{ outer_diameter = 60 }", 12), 1),
}
LAPS = ("bars", "slim", "double")
FACES = {
    "silent": "",
    "rough": 'roughness = ["Ra 0.8 um", "Rz 4 um"]',
    "measured": "tangential_stiffness = [3000, 48000]\nplate_shear = false",
}
SEVERAL = [(kind, face) for kind in PLATES for face in FACES]


def written(kind: str, face: str, title: str = "Pad", more: str = "") -> str:
    plates, m = PLATES[kind]
    return f"""format = 1
title = "{title}"
units = "N mm"
{plates}
[interface]
pressure = 60
friction = [0.2, 0.3]
parallel_faces = {m}
{FACES[face]}
[required]
true_slip = "3 um"
[[case]]
name = "pull"
shear = [{20000 * m}, 0]
other_end = {{ shear = [{-9000 * m}, 0] }}
[[case]]
name = "touch"
shear = [{-4000 * m}, 0]
kind = "static"
[[case]]
name = "turn"
shear = [3000, 2000]
moment = [0, 0, -100000]
at = [10, 5]
ratio = -0.5
[[case]]
name = "twist"
moment = [0, 0, 200000]
kind = "static"
[[case]]
name = "rest"
shear = [0, 0]
kind = "static"
[[case]]
name = "knock"
shear = [9e5, 0]
kind = "static"
{more}
"""


@cache
def assessed(kind: str, face: str, title: str = "Pad", more: str = "") -> FaceAssessment:
    found = assess(read_text(written(kind, face, title, more), "face.toml"))
    assert isinstance(found, FaceAssessment)
    return found


def text_of(page: str) -> str:
    body = re.sub(r"<style>.*?</style>", "", page, flags=re.S)
    return " ".join(unescape(re.sub(r"<[^>]*>", " ", body)).split())


# the explanation


@pytest.mark.parametrize(("kind", "face"), SEVERAL)
def test_every_line_is_its_own_proof(kind: str, face: str) -> None:
    found = assessed(kind, face)
    for case in found.joint.cases:
        lines = explain_face(found, case.name).lines
        assert len(lines) > 12
        for line in lines:
            assert line.source and line.basis
            assert agrees(line.put_in, float(f"{line.result:.8g}")), line
            assert not re.search(r"-0(?![.\d])", line.put_in), line


NAMES = {
    "first_slip_factor": "factor on the load at first slip",
    "first_slip_load": "shear at first slip",
    "stiffness": "stiffness before any slip",
    "elastic_slip": "elastic slip at the place of largest motion",
    "true_slip": "true slip there",
    "slip_share": "share of the pressing force where it slips",
    "slip_length": "length that slips",
    "energy_per_cycle": "energy of a cycle",
}
CLOSED = NAMES | {
    "first_slip_load": "pull at first slip, all faces",
    "elastic_slip": "elastic slip of the face at the end of larger motion",
    "true_slip": "true slip at the end of larger motion",
}


@pytest.mark.parametrize(("kind", "face"), SEVERAL)
def test_every_number_of_the_result_has_its_line(kind: str, face: str) -> None:
    found = assessed(kind, face)
    seen = set[str]()
    for case in face_result(found, SI)["cases"]:
        explanation = explain_face(found, case["name"])
        (end,) = (end for end in case["ends"] if end["end"] == explanation.end)
        values: Any = {(line.group.split(",")[0], line.name): line.result for line in explanation.lines}

        def check(part: str, name: str, value: float, rel: float = 1e-12, values: Any = values) -> None:
            own = [v for (group, said), v in values.items() if group == part and said.split(";")[0] == name]
            assert own == [pytest.approx(value, rel=rel)], (part, name)

        gross, partial = end["gross_slip"], end.get("partial_slip", {})
        for part, name in (
            ("group", "safety of the group: work of the friction on this motion"),
            ("force_only", "safety for the force alone"),
        ):
            if "safety" in gross.get(part, {}):
                check("gross slip", name, gross[part]["safety"], 1e-8)
        if "gross_slip_load" in partial:
            check("gross slip", "shear at gross slip", partial["gross_slip_load"], 1e-8)
        readings = {"": partial, ", low stiffness of the face": partial.get("band", {}).get("low", {})}
        readings[", high stiffness of the face"] = partial.get("band", {}).get("high", {})
        for said, reading in readings.items():
            for key in NAMES.keys() & reading.keys():
                check("partial slip", NAMES[key] + said, reading[key])
                seen.add(key)
        for key, value in partial.get("closed_form", {}).items():
            check("closed form of the lap", CLOSED[key], value)
            seen.add("closed " + key)
    if face == "silent":
        assert seen == set()
    else:
        assert seen >= NAMES.keys() - {"slip_length"} and (len(seen) == 14) == (kind in LAPS)


def test_the_governing_end_is_explained_by_default_and_the_worse_one_of_a_case() -> None:
    found = assessed("bars", "measured")
    assert (explain_face(found).case, explain_face(found).end) == ("knock", "given")
    assert explain_face(found, "pull").end == "given"
    turned = explain_face(assessed("square", "measured"), "turn")
    assert turned.end == "given" and any(line.symbol == "x_c" for line in turned.lines)


def test_the_explanation_on_the_screen_and_as_json(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "face.toml"
    path.write_text(written("slim", "rough"), encoding="utf-8")
    assert main(["explain", str(path), "pull"]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert all(columns(line) <= 80 for line in lines)
    assert lines[0] == "Every number of pull, given end, in N, mm, MPa" and lines[1].startswith("FAILS: ")
    assert any("a*P" in line or "P*a/EA" in line for line in lines)
    assert main(["explain", str(path), "pull", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert "bolt" not in found and found["end"] == "given"
    assert set(found["sources"]) >= {"metherell_diller1968", "step", "limit", "persson2007"}


@pytest.mark.parametrize(
    ("words", "said"), [(["nobody"], "known: pull, touch"), (["rest", "B1"], "a face of known pressure has no bolts")]
)
def test_a_case_or_bolt_that_is_not_there(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], words: list[str], said: str
) -> None:
    path = tmp_path / "face.toml"
    path.write_text(written("bars", "measured"), encoding="utf-8")
    assert main(["explain", str(path), *words]) == 2
    assert said in capsys.readouterr().err


# the page


@pytest.mark.parametrize(("kind", "face"), SEVERAL)
@pytest.mark.parametrize("units", [None, "lbf in"])
def test_the_page_is_whole_and_says_what_the_result_says(kind: str, face: str, units: str | None) -> None:
    found = assessed(kind, face)
    system = SYSTEMS[units] if units else None
    page = face_page(found, system)
    assert page.startswith("<!DOCTYPE html>") and page.rstrip().endswith("</html>")
    assert not re.search(r"https?:|//\w|<script|url\(|@import", re.sub(r"data:image[^\"]*", "", page))
    ids = re.findall(r'\bid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    assert {v[1:] for v in re.findall(r'href="([^"]+)"', page)} <= set(ids)
    said = text_of(page)
    for words in ("fails", "slips wholly at 0.", found.joint.digest, CAUTION):
        assert words in said
    for case in face_result(found, system)["cases"]:
        for end in case["ends"]:
            if "safety" in end["gross_slip"]["group"]:
                assert f" {end['gross_slip']['group']['safety']:.3f} " in said
            partial = end.get("partial_slip", {})
            for note in partial.get("notes", ()):
                assert note in said
            if "model" in partial and partial["model"]:
                assert f"{partial['model']}: {partial['why']}" in said
    assert ("Not worked out: give roughness" in said) == (face == "silent")
    assert ("Both routes at every end of a lap" in said) == (kind in LAPS and face != "silent")
    assert "bolt" not in said.lower() and "centroid" not in said


def test_order_of_the_page() -> None:
    said = text_of(face_page(assessed("bars", "rough")))
    order = (
        "Caution:",
        "Assumed because the file is silent",
        "Factors of every case and end",
        "The plates, to scale",
        "Partial slip of every case and end",
        "Both routes at every end",
        "Inputs Sliding face",
        "Every number of the governing end",
        "Sources Basis",
    )
    places = [said.index(words) for words in order]
    assert places == sorted(places)


def test_columns_that_say_nothing_are_left_out() -> None:
    said = text_of(face_page(assess(ROOT / "examples/bars.toml")))
    assert "moment at the middle [" not in said and "force alone, never decides" not in said and "not met" not in said
    assert "force alone, never decides" in text_of(face_page(assessed("bars", "rough")))


def test_the_example_shows_both_routes_and_their_difference() -> None:
    """The step's energy against the closed form's, 42.388 to 42.402 N mm in the explanation."""
    page = face_page(assess(ROOT / "examples/bars.toml"))
    row = re.search(r"energy of a cycle \[N mm\].*?</tr>", page, re.S)
    assert row and "42.4" in row.group() and f"{100 * (42.387762 / 42.401805 - 1):+.3g} %" in row.group()
    text = (ROOT / "examples/bars.toml").read_text(encoding="utf-8")
    limited = text.replace("alternating = 1.8\n", 'alternating = 1.8\ntrue_slip = "1 um"\n')
    assert "1.94\N{NO-BREAK SPACE}um\N{NO-BREAK SPACE}against" in face_page(assess(read_text(limited)))


def test_the_plan_is_to_scale_and_shows_the_overlap() -> None:
    found = assess(ROOT / "examples/bars.toml")
    figure = plan_figure(found.joint, found.joint.cases[0], "other", SYSTEMS["N mm"])
    (axes,) = figure.axes
    assert axes.get_aspect() == 1.0
    shown = [patch.get_bbox().extents.tolist() for patch in axes.patches if isinstance(patch, Rectangle)]
    assert shown == [[-50, -30, 50, 30], [-50, -30, 400, 30], [-400, -30, 50, 30]]
    (arrow,) = (one for one in axes.collections if hasattr(one, "U"))
    assert float(arrow.U[0]) < 0 and float(arrow.V[0]) == 0  # the other end pulls back
    low, high = axes.get_xlim()
    assert -120 < low < -50 and 50 < high < 120  # long bars are cut off


@pytest.mark.parametrize("kind", PLATES)
@pytest.mark.parametrize("case", range(6))
def test_every_plan_is_drawn_with_its_load(kind: str, case: int) -> None:
    found = assessed(kind, "measured")
    one = found.joint.cases[case]
    figure = plan_figure(found.joint, one, "given", SYSTEMS["lbf in"], DARK)
    said = [text.get_text() for text in figure.legends[0].get_texts()]
    load = dict(one.ends)["given"]
    assert ("moment on it" in said) == bool(load.moment[2])
    assert ("shear on the first plate" in said) == bool(np.hypot(*load.shear))


@pytest.mark.parametrize("kind", LAPS)
def test_traction_and_slip_along_the_overlap(kind: str) -> None:
    """In balance with the pull, within the bound, both routes alike; slip where the bound is reached."""
    found = assessed(kind, "measured")
    one, faces = found.slips[0, "given"], found.joint.interface.parallel_faces
    curves = one.curves
    assert curves is not None and one.closed is not None and one.partial is not None
    x = curves.x
    carried = np.sum((curves.traction[1:] + curves.traction[:-1]) / 2 * np.diff(x)) * 60
    assert carried == pytest.approx(abs(one.load[0]) / faces, rel=1e-3)
    assert curves.traction_step.mean() * 100 * 60 == pytest.approx(abs(one.load[0]) / faces, rel=1e-6)
    assert curves.bound == pytest.approx(12.0) and curves.traction.max() <= 12 * (1 + 1e-12)
    assert (curves.traction[curves.slip > 0] == pytest.approx(12.0)) and (x[0], x[-1]) == (-50, 50)
    assert curves.slip.max() == pytest.approx(one.closed.true_slip, rel=1e-9)
    assert np.interp(curves.x_step, x, curves.traction) == pytest.approx(curves.traction_step, abs=0.15)
    assert np.interp(curves.x_step, x, curves.slip) == pytest.approx(curves.slip_step, abs=0.02 * curves.slip.max())
    figure = along_figure(curves, SYSTEMS["N mm"])
    bound, closed, stepped = figure.axes[0].lines
    assert bound.get_ydata() == pytest.approx([12, 12]) and len(closed.get_xdata()) > 100
    assert 30 < len(stepped.get_xdata()) <= 80
    assert svg(along_figure(curves, SYSTEMS["N mm"])) == svg(figure)


def test_the_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    code = (
        "import sys; from slip.assess import assess; from slip.report.face_page import face_page; "
        "sys.stdout.write(face_page(assess(sys.argv[1])))"
    )
    runs = []
    for seed in ("1", "2"):
        environment = os.environ | {"PYTHONHASHSEED": seed, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8"}
        command = [sys.executable, "-c", code, str(ROOT / "examples/bars.toml")]
        runs.append(subprocess.run(command, capture_output=True, env=environment, cwd=tmp_path, check=True).stdout)
    assert runs[0] == runs[1]


@pytest.mark.parametrize(
    "words", ["<script>alert(1)</script>", "' onmouseover='alert(1)", "{{ 7 * 7 }}", "&amp; <!-- ]]>"]
)
def test_hostile_text_does_no_harm(words: str) -> None:
    text = written("bars", "measured", title=words).replace('name = "knock"', f'name = "{words}"')
    text = text.replace("[[plate]]", f'[[plate]]\nname = "{words}"', 1)
    found = assess(read_text(text, "face.toml"))
    assert isinstance(found, FaceAssessment)
    page = face_page(found)
    assert "<script" not in page and words in unescape(page)
    assert re.findall(r"<[^>]*onmouseover", page) == []


def test_many_ends_fold() -> None:
    more = "".join(f'[[case]]\nname = "c{i}"\nshear = [{i + 1}, 0]\nkind = "static"\n' for i in range(20))
    said = text_of(face_page(assessed("square", "silent", more=more)))
    assert "The 12 of 28 ends with the least reserve" in said and "16 more rows" in said


def test_a_report_is_written_and_the_screen_as_well(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path, out = tmp_path / "face.toml", tmp_path / "face.html"
    path.write_text(written("square", "measured"), encoding="utf-8")
    assert main(["check", str(path), "--report", str(out)]) == 1
    assert capsys.readouterr().out.startswith("FAILS") and out.read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    assert main(["check", str(path), "--report", str(path)]) == 2
