"""The data tables: every row says where it comes from, every number reads, values agree with what else is known."""

from __future__ import annotations

import csv
import math
import re
from itertools import pairwise
from pathlib import Path

import pytest

from slip.base.tables import BASES, DATA, Row

FILES = sorted(path for path in DATA.glob("*.csv") if not path.name.endswith(".part.csv"))
# Numeric columns whose name carries no unit, beside those whose name begins or ends with low, typical, high.
PLAIN_NUMBERS = {"A", "B", "c", "x", "p_hole/p_mean", "p/p_hole", "thickness/bearing_radius", "hole/bearing_radius"}
PLAIN_NUMBERS |= {"poissons_ratio", "threads_per_inch"}
# What tells the rows of a table apart. A table that is not listed only has no two rows alike.
KEYS = {
    "sources": ["key"],
    "messages": ["code"],
    "threads": ["designation"],
    "grades": ["name", "diameter_from[mm]"],
    "heads": ["head", "system", "diameter[mm]"],
    "holes": ["system", "diameter[mm]", "fit"],
    "materials": ["name"],
    "friction": ["pair", "preparation", "lubrication"],
    "friction_bolt": ["condition", "where"],
    "embedding": ["rz_from[um]", "where"],
    "tightening": ["method"],
    "surfaces": ["finish"],
    "plate_fit": ["material"],
    "receding_contact": ["thickness/bearing_radius", "hole/bearing_radius"],
    "pressure_shape": ["x"],
}
# Heads that are known not to cover the medium or normal clearance hole, as (head, diameter): none in the table.
# Countersunk heads have no flat bearing face and therefore no row at all.
SMALL_HEADS: set[tuple[str, float]] = set()
# Tables of words, not of data: the sources themselves, and what each message means, which no document is the source of.
WORDS = {"sources.csv", "messages.csv"}
TABLES = [path for path in FILES if path.name not in WORDS]


def rows(path: Path) -> list[Row]:
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def data(name: str) -> list[Row]:
    return rows(DATA / f"{name}.csv")


def where(name: str, **wanted: str) -> Row:
    """The one row whose columns, units left off their names, hold the wanted texts."""
    found = [r for r in data(name) if all(value == wanted.get(k.split("[")[0], value) for k, value in r.items())]
    assert len(found) == 1, (name, wanted, len(found))
    return found[0]


def values(row: Row, *columns: str) -> tuple[float, ...]:
    return tuple(float(row[column]) for column in columns)


def is_number_column(column: str) -> bool:
    return "[" in column or column in PLAIN_NUMBERS or bool(re.fullmatch(r"(.*_)?(low|typical|high)", column))


def by_name(path: Path) -> str:
    return path.stem


def test_all_tables_are_there() -> None:
    assert set(KEYS) <= {path.stem for path in FILES}


@pytest.mark.parametrize("path", FILES, ids=by_name)
def test_file_form(path: Path) -> None:
    raw = path.read_bytes()
    assert b"\r" not in raw
    assert not raw.startswith(b"\xef\xbb\xbf")
    assert raw.endswith(b"\n")
    with path.open(encoding="utf-8", newline="") as file:
        header, *body = list(csv.reader(file))
    assert body
    assert len(set(header)) == len(header)
    for line in body:
        assert len(line) == len(header), line
        assert all(cell == cell.strip() for cell in line), line


@pytest.mark.parametrize("path", TABLES, ids=by_name)
def test_every_row_has_source_and_basis(path: Path) -> None:
    keys = {row["key"] for row in data("sources")}
    for row in rows(path):
        assert list(row)[-2:] == ["source", "basis"]
        for column in (c for c in row if c.endswith("basis")):
            assert row[column] in BASES or (column != "basis" and not row[column]), row
        assert set(row["source"].split(";")) <= keys, row


@pytest.mark.parametrize("path", TABLES, ids=by_name)
def test_numbers_read_and_ranges_are_in_order(path: Path) -> None:
    for row in rows(path):
        for column, text in row.items():
            if is_number_column(column) and text:
                assert 0.0 <= float(text) < math.inf, (column, row)
        for column in row:
            if re.match(r"(.*_)?low(\[.*\])?$", column):
                trio = [re.sub(r"low(?=$|\[)", word, column) for word in ("low", "typical", "high")]
                numbers = [float(row[c]) for c in trio if row.get(c)]
                assert numbers == sorted(numbers), row
        for start in (c for c in row if re.search(r"_from($|\[)", c)):
            end = start.replace("_from", "_to")
            if row[start] and row.get(end):
                assert float(row[start]) < float(row[end]), row


@pytest.mark.parametrize("path", FILES, ids=by_name)
def test_no_row_twice(path: Path) -> None:
    body = rows(path)
    columns = KEYS.get(path.stem, list(body[0]))
    keys = [tuple(row[column].casefold() for column in columns) for row in body]
    assert len(set(keys)) == len(keys)


def test_friction_pairs_are_not_given_in_both_orders() -> None:
    known = {row["name"] for row in data("materials")}
    keys = []
    for row in data("friction"):
        pair = row["pair"].split(" / ")
        assert len(pair) == 2, row
        assert set(pair) <= known, row
        keys.append((tuple(sorted(pair)), row["preparation"], row["lubrication"]))
    assert len(set(keys)) == len(keys)


def test_material_names_and_aliases_are_unique() -> None:
    words = [word for row in data("materials") for word in [row["name"], *filter(None, row["aliases"].split(";"))]]
    assert len({word.casefold() for word in words}) == len(words)


# --- threads -------------------------------------------------------------------------------------------------------


def stress_area(row: Row) -> float:
    """Metric pi/4 ((d2 + d3)/2)^2, unified pi/4 (d - 9/8 H)^2, both from the height H of the 60 degree profile."""
    d, pitch = values(row, "diameter[mm]", "pitch[mm]")
    height = math.sqrt(3.0) / 2.0 * pitch
    pitch_diameter = d - 2.0 * (3.0 / 8.0) * height
    root = d - 2.0 * (5.0 / 8.0) * height - height / 6.0
    mean = (pitch_diameter + root) / 2.0 if row["system"] == "metric" else d - 9.0 / 8.0 * height
    return math.pi / 4.0 * mean**2


def test_stress_areas_agree_with_the_profile() -> None:
    given = [row for row in data("threads") if row["stress_area[mm2]"]]
    assert len(given) > 70
    for row in given:
        assert float(row["stress_area[mm2]"]) == pytest.approx(stress_area(row), rel=0.005), row
        assert row["stress_area_basis"], row


def test_metric_stress_areas_are_the_formula_in_three_digits() -> None:
    for row in data("threads"):
        if row["system"] == "metric" and row["stress_area[mm2]"]:
            exact, printed = stress_area(row), float(row["stress_area[mm2]"])
            step = 10.0 ** (math.floor(math.log10(printed)) - 2)
            assert abs(exact - printed) <= 0.55 * step, row


def test_published_stress_areas() -> None:
    expected = {"M12": 84.3, "M16": 157.0, "M20": 245.0, "M24": 353.0, "M30": 561.0}
    found = {r["designation"]: r for r in data("threads") if r["stress_area_basis"] == "published"}
    assert {name: float(row["stress_area[mm2]"]) for name, row in found.items()} == expected


def test_metric_designation_says_diameter_and_pitch() -> None:
    for row in data("threads"):
        if row["system"] == "metric":
            d, pitch = row["diameter[mm]"], row["pitch[mm]"]
            assert row["designation"] == (f"M{d}" if row["series"] == "coarse" else f"M{d}x{pitch}")
            assert row["threads_per_inch"] == ""


def test_metric_coarse_pitch_never_falls_and_fine_is_finer() -> None:
    sizes = [values(row, "diameter[mm]", "pitch[mm]") for row in data("threads") if row["series"] == "coarse"]
    coarse = {size[0]: size[1] for size in sizes}
    assert list(coarse) == sorted(coarse)
    assert (min(coarse), max(coarse)) == (3.0, 64.0)
    assert all(p <= q for p, q in pairwise(coarse.values()))
    for row in data("threads"):
        if row["series"] == "fine":
            d, pitch = values(row, "diameter[mm]", "pitch[mm]")
            assert pitch < coarse[d], row


def test_unified_designation_says_diameter_and_threads_per_inch() -> None:
    for row in data("threads"):
        if row["system"] != "unified":
            continue
        match = re.fullmatch(r"(?:#(\d+)|(\d+)?(?: ?(\d+)/(\d+))?)-(\d+) (UNC|UNF)", row["designation"])
        assert match, row
        size, whole, over, under, threads, series = match.groups()
        inches = 0.060 + 0.013 * int(size) if size else int(whole or 0) + int(over or 0) / int(under or 1)
        assert (threads, series) == (row["threads_per_inch"], row["series"])
        d, pitch = values(row, "diameter[mm]", "pitch[mm]")
        assert d == pytest.approx(25.4 * inches, rel=1e-12)
        assert pitch == pytest.approx(25.4 / int(threads), rel=1e-8)


@pytest.mark.parametrize(("coarse", "fine"), [("3/4-10 UNC", "3/4-16 UNF"), ("#10-24 UNC", "#10-32 UNF")])
def test_unified_fine_has_the_larger_area(coarse: str, fine: str) -> None:
    areas = [float(where("threads", designation=name)["stress_area[mm2]"]) for name in (coarse, fine)]
    assert areas[0] < areas[1]


# --- grades --------------------------------------------------------------------------------------------------------


def grade(name: str, d: float) -> tuple[float, ...]:
    """Yield, least and nominal tensile strength of the first row whose range, ends included, holds d [mm]."""
    for row in data("grades"):
        low, high = values(row, "diameter_from[mm]", "diameter_to[mm]")
        if row["name"] == name and low <= d <= high:
            return values(row, "yield_strength[MPa]", "tensile_strength[MPa]", "tensile_nominal[MPa]")
    raise AssertionError((name, d))


def test_class_8_8_breaks_at_16_mm() -> None:
    # Yield: behind the preload tables of VDI 2230:2001 as reprinted (published). Tensile strength: from memory.
    assert grade("8.8", 16.0) == (640.0, 800.0, 800.0)
    assert grade("8.8", 16.001) == (660.0, 830.0, 800.0)
    assert grade("10.9", 24.0) == (940.0, 1040.0, 1000.0)
    assert grade("12.9", 24.0) == (1100.0, 1220.0, 1200.0)


def test_property_class_numbers_mean_what_they_say() -> None:
    for row in data("grades"):
        if row["kind"] == "property class":
            first, second = row["name"].split(".")
            low, tensile, nominal = grade(row["name"], float(row["diameter_to[mm]"]))
            assert nominal == 100.0 * int(first) <= tensile
            assert low >= nominal * int(second) / 10.0


def test_inch_grades_are_whole_ksi() -> None:
    for name, d, ksi in [("A325", 25.4, (92, 120)), ("A490", 25.4, (130, 150)), ("A325-14", 30.0, (81, 105))]:
        found = [strength / 6.894757 for strength in grade(name, d)[:2]]
        assert found == pytest.approx(ksi, rel=1e-5)
    assert grade("SAE grade 5", 25.4) > grade("SAE grade 5", 25.5)


def test_yield_is_below_tensile_and_ranges_of_a_grade_meet() -> None:
    for row in data("grades"):
        low, high = values(row, "yield_strength[MPa]", "tensile_strength[MPa]")
        assert low < high, row
    for first, second in pairwise(data("grades")):
        if first["name"] == second["name"]:
            assert first["diameter_to[mm]"] == second["diameter_from[mm]"]


# --- heads and holes -----------------------------------------------------------------------------------------------


def hole(system: str, diameter: str, fit: str) -> float | None:
    for row in data("holes"):
        if (row["system"], row["diameter[mm]"], row["fit"]) == (system, diameter, fit):
            return float(row["hole[mm]"])
    return None


def test_holes_clear_the_thread_and_grow_with_the_fit() -> None:
    order = {"metric": ("fine", "medium", "coarse"), "unified": ("close", "normal", "loose")}
    threads = {(row["system"], row["diameter[mm]"]) for row in data("threads")}
    for system, d in {(row["system"], row["diameter[mm]"]) for row in data("holes")}:
        assert (system, d) in threads
        sizes = [float(d), *(size for fit in order[system] if (size := hole(system, d, fit)) is not None)]
        assert len(sizes) == 4
        assert sizes == sorted(set(sizes)), (system, d)


def test_every_metric_thread_has_a_hole_and_a_hexagon() -> None:
    hexagons = {row["diameter[mm]"] for row in data("heads") if row["head"] == "hexagon"}
    for row in data("threads"):
        if row["system"] == "metric":
            assert hole("metric", row["diameter[mm]"], "medium") is not None, row
            assert row["diameter[mm]"] in hexagons, row


def test_bearing_faces_are_wider_than_the_hole() -> None:
    compared = 0
    for row in data("heads"):
        d, bearing = values(row, "diameter[mm]", "bearing_diameter[mm]")
        size = hole(row["system"], row["diameter[mm]"], {"metric": "medium", "unified": "normal"}[row["system"]])
        if size is not None:
            compared += 1
            assert (bearing > size) == ((row["head"], d) not in SMALL_HEADS), row
    assert compared > 70


@pytest.mark.parametrize(("head", "system"), [(h, s) for h in ("hexagon", "socket") for s in ("metric", "unified")])
def test_bearing_faces_grow_with_the_thread(head: str, system: str) -> None:
    found = [r for r in data("heads") if (r["head"], r["system"]) == (head, system)]
    sizes = [values(r, "diameter[mm]", "bearing_diameter[mm]") for r in found]
    assert len(sizes) > 10
    assert sizes == sorted(sizes)
    assert all(p[1] < q[1] for p, q in pairwise(sizes))


def test_published_bearing_faces_and_holes() -> None:
    # VDI 2230:2001 as reprinted: M10, M16, M24.
    for d, bearing, clearance in [("10", 14.63, 11.0), ("16", 22.49, 17.5), ("24", 33.61, 26.0)]:
        face = where("heads", head="hexagon", system="metric", diameter=d)
        size = where("holes", system="metric", diameter=d, fit="medium")
        assert (float(face["bearing_diameter[mm]"]), face["basis"]) == (bearing, "published")
        assert (float(size["hole[mm]"]), size["basis"]) == (clearance, "published")
    for name in ("heads", "holes"):
        assert len([r for r in data(name) if r["basis"] == "published"]) == 3


# --- friction, tightening, embedding -------------------------------------------------------------------------------


def test_published_interface_friction() -> None:
    # ECSS-E-HB-32-23A, Table C-2.
    expected = {
        ("steel / steel", "dry"): (0.10, 0.23),
        ("steel / steel", "lubricated"): (0.07, 0.12),
        ("steel / grey iron", "dry"): (0.12, 0.24),
        ("steel / grey iron", "lubricated"): (0.06, 0.10),
        ("grey iron / grey iron", "dry"): (0.15, 0.30),
        ("grey iron / grey iron", "lubricated"): (0.20, 0.20),
        ("steel / bronze", "dry"): (0.12, 0.28),
        ("steel / bronze", "lubricated"): (0.18, 0.18),
        ("steel / aluminium", "dry"): (0.10, 0.28),
        ("steel / aluminium", "lubricated"): (0.05, 0.18),
        ("aluminium / aluminium", "dry"): (0.21, 0.21),
        ("steel / copper alloy", "dry"): (0.07, 0.07),
    }
    rows_read = [row for row in data("friction") if row["source"] == "ecss_32_23"]
    assert {(row["pair"], row["lubrication"]): values(row, "low", "high") for row in rows_read} == expected
    assert {row["basis"] for row in rows_read} == {"published"}


@pytest.mark.parametrize("name", ["friction", "friction_bolt", "tightening"])
def test_typical_is_the_middle(name: str) -> None:
    for row in data(name):
        low, typical, high = values(row, "low", "typical", "high")
        assert typical == pytest.approx((low + high) / 2.0, rel=1e-12), row


def test_bolt_friction_classes() -> None:
    expected = {"A": (0.04, 0.10), "B": (0.08, 0.16), "C": (0.14, 0.24), "D": (0.20, 0.35)}
    seen = set()
    for row in data("friction_bolt"):
        assert row["where"] in ("thread", "head", "both")
        assert row["basis"] in ("memory", "practice")
        if row["class"] in expected:
            seen.add(row["class"])
            assert values(row, "low", "high") == expected[row["class"]], row
    assert seen == set(expected)


def test_published_tightening_scatter() -> None:
    expected = {
        "yield or angle control": (0.05, 0.12),
        "hydraulic tensioning": (0.09, 0.23),
        "torque wrench, set by trials": (0.17, 0.23),
        "torque wrench, friction estimated": (0.23, 0.28),
        "power driver": (0.26, 0.43),
        "torque, dry (space hardware practice)": (0.35, 0.35),
        "torque, lubricated (space hardware practice)": (0.25, 0.25),
    }
    assert {row["method"]: values(row, "low", "high") for row in data("tightening")} == expected
    assert {row["friction_included"] for row in data("tightening")} <= {"yes", "no"}
    assert {row["basis"] for row in data("tightening")} == {"published"}


def test_embedding_grows_with_roughness_and_with_shear() -> None:
    # VDI 2230 Part 1, Table 5 (from memory): axial and shear in um by the lower end of the Rz band.
    expected = {
        ("0", "thread"): (3.0, 3.0),
        ("0", "bearing"): (2.5, 3.0),
        ("0", "inner"): (1.5, 2.0),
        ("10", "thread"): (3.0, 3.0),
        ("10", "bearing"): (3.0, 4.5),
        ("10", "inner"): (2.0, 2.5),
        ("40", "thread"): (3.0, 3.0),
        ("40", "bearing"): (4.0, 6.5),
        ("40", "inner"): (3.0, 3.5),
    }
    found = {(r["rz_from[um]"], r["where"]): values(r, "axial[um]", "shear[um]") for r in data("embedding")}
    assert found == expected
    assert all(axial <= shear for axial, shear in found.values())


# --- plates and pressure -------------------------------------------------------------------------------------------


def test_plate_fit_gives_the_published_springs() -> None:
    # Shigley, 9th ed., Table 8-8, problem 8-20: d 12, l 40 mm; MN/m = N/um.
    for material, published in [("steel", 2361.0), ("grey iron", 1124.0)]:
        row = where("plate_fit", material=material)
        modulus, a, b = values(row, "youngs_modulus[MPa]", "A", "B")
        assert row["basis"] == "published"
        assert modulus * 12.0 * a * math.exp(b * 12.0 / 40.0) / 1000.0 == pytest.approx(published, abs=0.5)
    assert {r["basis"] for r in data("plate_fit") if r["material"] not in ("steel", "grey iron")} == {"memory"}


def test_receding_contact_and_its_shape_tell_the_same_mean_pressure() -> None:
    """p_hole/p_mean from the shape row, integrated over the annulus, is the table's within the shape row's claim."""
    shape = [values(row, "x", "p/p_hole") for row in data("pressure_shape")]
    assert (shape[0], shape[-1]) == ((0.0, 1.0), (1.0, 0.0))
    assert shape == sorted(shape, key=lambda point: (point[0], -point[1]))
    for row in data("receding_contact"):
        t, inner, c, ratio = values(row, "thickness/bearing_radius", "hole/bearing_radius", "c", "p_hole/p_mean")
        width = 1.0 + c * t - inner
        force = 0.0
        for (x0, p0), (x1, p1) in pairwise(shape):  # Simpson's rule is exact for linear p times r
            middle = (p0 + p1) / 2.0 * (inner + width * (x0 + x1) / 2.0)
            force += (x1 - x0) * width / 6.0 * (p0 * (inner + width * x0) + 4.0 * middle + p1 * (inner + width * x1))
        mean = force / (((inner + width) ** 2 - inner**2) / 2.0)
        assert 1.0 / mean == pytest.approx(ratio, rel=0.02 if 1.2 < t < 2.6 else 0.06), row


def test_receding_contact_rows() -> None:
    rows_ = [values(r, "thickness/bearing_radius", "c", "p_hole/p_mean") for r in data("receding_contact")]
    assert [8.0 * r[0] for r in rows_] == [2.5, 5.0, 10.0, 15.0, 20.0, 30.0]
    assert [r[1] for r in rows_] == [0.37, 0.35, 0.50, 0.62, 0.69, 0.80]
    assert [r[2] for r in rows_] == [1.85, 2.03, 2.06, 2.13, 2.21, 2.40]


def test_materials_are_plausible_solids() -> None:
    for row in data("materials"):
        modulus, ratio, expansion, density = values(
            row, "youngs_typical[MPa]", "poissons_ratio", "expansion[1/K]", "density[kg/m3]"
        )
        assert 4e4 < modulus < 2.2e5, row
        assert 0.2 < ratio < 0.4, row
        assert 5e-6 < expansion < 3e-5, row
        assert 1500.0 < density < 9000.0, row


@pytest.mark.parametrize("name", sorted(set(KEYS) - {"sources", "messages"}))
def test_a_row_on_memory_says_so_in_its_citation(name: str) -> None:
    words = {row["key"]: row["citation"] for row in data("sources")}
    for row in data(name):
        if row["basis"] == "memory":
            assert any("from memory, check" in words[key] for key in row["source"].split(";")), row


def test_sources_have_words() -> None:
    assert all(row["citation"] for row in data("sources"))
