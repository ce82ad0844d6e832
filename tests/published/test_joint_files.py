"""Printed cases written as joint files and put through `slip check --json`: the file, its units and its defaults take part.

Not as files: check 6 (a file gives dimensions, the problem prints the stiffness of each slice); check 8, fitted
stiffness (a file uses the deformation cone; the frusta are compared in tests/derived/test_joint_files.py).
"""

from __future__ import annotations

import re
from typing import Any

import pytest

FILE = """
format = 1
units = "{units}"
[bolt]
thread = "{thread}"
grade = "{grade}"
[tightening]
preload = [{preload}]
[losses]
embedding = 0
relaxation = {relaxation}
[interface]
friction = [0.2, 0.3]
parallel_faces = {faces}
[pattern]
{pattern}
[[standard]]
{standard}
to_standard_level = 1
[[case]]
acts_on = "joint"
kind = "static"
shear = [{shear}, 0]
axial = {axial}
"""
USUAL: dict[str, Any] = {
    "units": "N mm",
    "relaxation": 0,
    "faces": 1,
    "pattern": "positions = [[0, 0]]",
    "shear": 1000,
    "axial": 0,
}


def file(**given: Any) -> str:
    return FILE.format(**(USUAL | given))


def standard(result: dict[str, Any]) -> dict[str, Any]:
    return result["cases"][0]["ends"][0]["standards"][0]


SPLICE = "Steel Buildings in Europe, Single-Storey Steel Buildings, Part 5, App. A, p. 5-63"
EN_CLASS_A = 'name = "EN 1993-1-8"\ncategory = "C"\nslip_class = "A"'


@pytest.mark.parametrize(("faces", "printed"), [(1, "53.76"), (2, "107.52")])
def test_web_splice(faces: int, printed: str, run_check: Any, validate: Any) -> None:
    """M18 10.9: A_s 192 mm2, f_ub 1000; slip class A: mu .5."""
    bolt = {"thread": "M18", "grade": "10.9", "standard": EN_CLASS_A, "faces": faces}
    result, code = run_check(file(**bolt, preload="134500, 150e3"))
    what = f"joint file, web splice: slip resistance, faces {faces}"
    validate(1, what, SPLICE, "published", printed, standard(result)["resistance"] / 1e3, unit="kN")
    assert (code, result["holds"]) == (0, True)

    result, code = run_check(file(**bolt, preload="134300, 150e3"))
    (check,) = [c for c in result["checks"] if c["check"] == "standard.EN 1993-1-8"]
    presumed = re.search(r"below the (\d+) N that it presumes", check["reason"])
    assert presumed
    what = "joint file, web splice: preload F_p,C"
    validate(1, what, SPLICE, "published", "134.4", float(presumed[1]) / 1e3, unit="kN")
    assert (code, result["holds"], check["holds"]) == (1, False, False)


DESIGN_TABLES = "ArcelorMittal, design tables to EN 1993-1-8, preloaded bolts at ULS"
DESIGN_TABLE = {
    "M16": "14.1/28.1 21.1/42.2 28.1/56.3 35.2/70.3",
    "M20": "22.0/43.9 32.9/65.9 43.9/87.8 54.9/110",
    "M24": "31.6/63.3 47.4/94.9 63.3/127 79.1/158",
}


@pytest.mark.parametrize("thread", DESIGN_TABLE)
@pytest.mark.parametrize("faces", [1, 2])
@pytest.mark.parametrize("slip_class", "DCBA")
def test_design_table_class_8_8(thread: str, faces: int, slip_class: str, run_check: Any, validate: Any) -> None:
    """Nominal strength 800 MPa also above M16, where the least strength of class 8.8 is 830."""
    entry = f'name = "EN 1993-1-8"\ncategory = "C"\nslip_class = "{slip_class}"'
    given = {"thread": thread, "grade": "8.8", "preload": "100e3, 110e3", "faces": faces, "standard": entry}
    result, _ = run_check(file(**given))
    printed = DESIGN_TABLE[thread].split()["DCBA".index(slip_class)].split("/")[faces - 1]
    what = f"joint file, {thread} 8.8, class {slip_class}, faces {faces}"
    validate(2, what, DESIGN_TABLES, "published", printed, standard(result)["resistance"] / 1e3, unit="kN")


def aisc(**given: Any) -> str:
    entry = 'name = "AISC 360"\nsurface = "A"\n' + "\n".join(f'{key} = "{value}"' for key, value in given.items())
    return entry


@pytest.mark.parametrize(("method", "what", "printed"), [("LRFD", "nominal", "122"), ("ASD", "ASD", "81.2")])
def test_eleven_bolts_of_the_2005_edition(method: str, what: str, printed: str, run_check: Any, validate: Any) -> None:
    """Eleven 3/4 A325, class A (.35), slip as a limit of serviceability: phi is 1, which leaves the nominal resistance."""
    entry = aisc(edition="2005", method=method, limit="serviceability")
    eleven = "grid = { columns = 11, rows = 1, pitch = [3, 3] }"
    given = {"thread": "3/4-10 UNC", "grade": "A325", "preload": "28500, 33e3", "standard": entry, "pattern": eleven}
    result, code = run_check(file(units="lbf in", **given))
    book = "Quimby, Beginner's Guide to the Steel Construction Manual, Ex. 4.1"
    found = 11 * standard(result)["resistance"] / 1e3
    validate(3, f"joint file, eleven 3/4 A325: {what}", book, "published", printed, found, unit="kips")
    assert code == 0


CATALOGUE = {  # thread, friction: (class, preload [kN], torque [N m])
    ("M10x1.25", 0.12): [("8.8", 31.6, 51), ("10.9", 46.4, 75), ("12.9", 54.3, 87)],
    ("M16x1.5", 0.12): [("8.8", 87.6, 218), ("10.9", 128.7, 320), ("12.9", 150.6, 374)],
    ("M24x2", 0.10): [("8.8", 213, 666), ("10.9", 304, 949), ("12.9", 355, 1110)],
}
ROWS = [(*joint, *row) for joint, rows in CATALOGUE.items() for row in rows]


@pytest.mark.parametrize(("thread", "friction", "grade", "preload", "torque"), ROWS)
def test_preload_of_the_printed_torque(
    thread: str, friction: float, grade: str, preload: float, torque: float, run_check: Any, validate: Any
) -> None:
    """Hole and bearing face by default, friction of one value, no scatter: 1 %, half a digit of the smallest torque."""
    text = f"""
format = 1
units = "N mm"
[bolt]
thread = "{thread}"
grade = "{grade}"
[tightening]
torque = "{torque} N m"
thread_friction = {friction}
head_friction = {friction}
scatter = 0
[losses]
embedding = 0
relaxation = 0
[interface]
friction = [0.2, 0.3]
[[case]]
shear = [1000, 0]
kind = "static"
"""
    result, _ = run_check(text)
    row = result["cases"][0]["ends"][0]["ledger"][0]
    assert row["assembly_low"] == row["assembly_high"]
    book = "VDI 2230:2001 table as reprinted in a fastener supplier's catalogue, fine threads"
    what = f"joint file, {thread} {grade}: preload of {torque} N m"
    validate(4, what, book, "published", preload, row["assembly_low"] / 1e3, rel=0.01, unit="kN")


def test_eccentric_shear(run_check: Any, validate: Any) -> None:
    """Four bolts at (+-75, +-60) mm, 16 kN along y at x = 425 mm: 21.0 kN on the near, 14.8 kN on the far bolts."""
    text = """
format = 1
units = "N mm"
[tightening]
preload = [150e3, 160e3]
[losses]
embedding = 0
relaxation = 0
[interface]
friction = [0.2, 0.3]
[pattern]
positions = [[-75, -60], [-75, 60], [75, -60], [75, 60]]
[[case]]
acts_on = "joint"
kind = "static"
shear = [0, 16000]
at = [425, 0]
"""
    result, _ = run_check(text)
    end = result["cases"][0]["ends"][0]
    far, _, near, other = (row["shear"] / 1e3 for row in end["ledger"])
    for what, printed, found in (("near", "21.0", near), ("far", "14.8", far)):
        said = f"joint file, shear of the {what} bolts"
        validate(5, said, "Shigley, 9th ed., Ex. 8-7", "published", printed, found, unit="kN")
    assert near == pytest.approx(other, rel=1e-12)
    assert end["gross_slip"]["per_bolt"]["bolt"] == "B3"


@pytest.mark.parametrize(("category", "printed"), [("C", "49.40"), ("B", "56.14")])
def test_combined_tension(category: str, printed: str, run_check: Any, validate: Any) -> None:
    """M20 10.9 with 60 kN of external tension, mu .5, one face."""
    entry = f'name = "EN 1993-1-8"\ncategory = "{category}"\nslip_class = "A"'
    given = {"thread": "M20", "grade": "10.9", "preload": "172e3, 190e3", "standard": entry, "axial": 60000}
    result, _ = run_check(file(**given))
    what = f"joint file, M20 10.9 with 60 kN tension, category {category}"
    validate(9, what, "EN 1993-1-8:2005, 3.9.2", "memory", printed, standard(result)["resistance"] / 1e3, unit="kN")


AISC_ROWS = [("3/4-10 UNC", 2, "18.98"), ("5/8-11 UNC", 1, "6.44"), ("3/4-10 UNC", 1, "9.49"), ("7/8-9 UNC", 1, "13.2")]


@pytest.mark.parametrize(("thread", "faces", "printed"), [*AISC_ROWS, ("1-8 UNC", 1, "17.3")])
def test_class_a_of_the_2016_edition(thread: str, faces: int, printed: str, run_check: Any, validate: Any) -> None:
    given = {"thread": thread, "grade": "A325", "preload": "20e3, 21e3", "standard": aisc(method="LRFD")}
    result, _ = run_check(file(units="lbf in", faces=faces, **given))
    what, source = f"joint file, {thread} A325, class A, faces {faces}", "AISC 360-10 and later, J3.8, by hand"
    validate(10, what, source, "memory", printed, standard(result)["resistance"] / 1e3, unit="kips")


def test_fasteners_that_slip_together(run_check: Any, validate: Any) -> None:
    """n_f 4, nominal 1200 lbf, Gamma .35, 5 % relaxation; mu .2, FS 1.4, FF 1, shear 300 and tension 400 lbf."""
    entry = 'name = "NASA-STD-5020"\nsafety_factor = 1.4\npreload_variation = 0.35\nsurface = "clean bare"'
    four = "grid = { columns = 2, rows = 2, pitch = [3, 3] }"
    given = {"thread": "1/4-28 UNF", "grade": "SAE grade 8", "preload": "", "standard": entry, "pattern": four}
    text = file(units="lbf in", relaxation=0.05, shear=300, axial=400, **given)
    result, _ = run_check(text.replace("preload = []", 'preload = 1200\nscatter = "35 %"'))
    found, source = standard(result), "NASA-STD-5020, by hand"
    per_bolt = found["resistance"] / (4 * 0.2)
    validate(11, "joint file, lowest preload", source, "memory", "940.5", per_bolt, rel=1e-9, unit="lbf")
    validate(11, "joint file, margin of safety", source, "memory", "0.414", 1 / found["utilisation"] - 1)
