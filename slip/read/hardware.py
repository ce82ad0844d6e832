"""Builders of the clamped parts: bolt and plates; and what the springs need of them."""

from __future__ import annotations

from functools import partial

import numpy as np

from slip.base.tables import number
from slip.joint.bolt import Bolt, Grade, Segment, Thread
from slip.joint.material import Material
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate, clamped
from slip.read import library
from slip.read.reader import Reader, nearest
from slip.read.sections import Section, many

STEEL = "steel"
# What the springs take where [bolt] is silent: key, code and words of the assumption.
SPRING_DEFAULTS = (
    ("far_end", "far-end-nut", "a nut at the far end"),
    ("material", "bolt-steel", "bolt and washers of steel"),
    ("shank_diameter", "shank-nominal", "shank as thick as the thread"),
)


def bolt(r: Reader, s: Section) -> Bolt:
    """The bolt of [bolt]; lengths stay None where neither file nor table can say."""
    thread: Thread | None = s.get("thread")
    grades, holes, shanks, segments, washers = r.every(
        [
            lambda: (_grade(s, thread),),
            lambda: (_hole(r, s, thread),),
            lambda: (s.get("shank_diameter", thread.diameter if thread else None),),
            lambda: tuple(r.every(partial(_segment, e) for e in many(r, "bolt.segment[]", s.path, s.raw))),
            lambda: _washers(s),
        ]
    )
    head = s.get("head", "heavy hexagon" if _structural(s) else "hexagon")
    return Bolt(
        thread=thread,
        grade=grades[0],
        head=head,
        bearing_diameter=_bearing(r, s, head, thread, holes[0]),
        hole_diameter=holes[0],
        shank_diameter=shanks[0],
        segments=segments,
        tapped=s.get("far_end", "nut") == "tapped",
        washers=washers,
        material=s.get("material") or steel(),
    )


def steel() -> Material:
    """The steel of bolts and washers for which the file names no material."""
    material = library.material(STEEL)
    assert material is not None
    return material


def _structural(s: Section) -> bool:
    return str(s.get("grade", "")).upper().startswith(("A325", "A490"))


def _hole(r: Reader, s: Section, thread: Thread | None) -> float | None:
    """The clearance hole, by the table when the file is silent."""
    row = library.clearance_hole(thread) if thread is not None else None
    medium = number(row, "hole[mm]") if row is not None else None
    hole: float | None = s.get("hole_diameter")
    if hole is None:
        if medium is not None:
            r.assume("hole-medium", f"hole {r.system.say(medium, 'length')}, medium fit", "bolt.hole_diameter")
        return medium
    if thread is not None and hole < thread.diameter:
        expected = f"a hole not smaller than the thread, {r.system.say(thread.diameter, 'length')}"
        remedy = f'write for instance "{r.system.say(medium or 1.1 * thread.diameter, "length")}"'
        raise s.stop_value("hole_diameter", "hole-below-thread", expected, remedy)
    return hole


def _bearing(r: Reader, s: Section, head: str, thread: Thread | None, hole: float | None) -> float | None:
    """The outer diameter of the bearing face, by the table of heads when the file is silent."""
    bearing: float | None = s.get("bearing_diameter")
    if bearing is None and thread is not None and (row := library.bearing_diameter(head, thread)):
        bearing = number(row, "bearing_diameter[mm]")
        text = f"bearing diameter {r.system.say(bearing, 'length')}, {head} head"
        r.assume("bearing-table", text, "bolt.bearing_diameter")
    if bearing is not None and hole is not None and bearing <= hole:
        found = f"bearing {r.system.say(bearing, 'length')} and hole {r.system.say(hole, 'length')}"
        key = "bearing_diameter" if s.has("bearing_diameter") else "hole_diameter"
        remedy = "correct one of them; bearing_diameter is the outer diameter of the face"
        raise s.stop(key, "bearing-below-hole", found, "a bearing face wider than the hole", remedy)
    return bearing


def _segment(s: Section) -> Segment:
    """A piece of the bolt in the grip."""
    diameter = s.need("diameter", "the diameter of the piece", 'add diameter = "16 mm"')
    return Segment(diameter, s.need("length", "the length of the piece", 'add length = "30 mm"'))


def _washers(s: Section) -> tuple[float, float]:
    """Thicknesses of the washers under head and nut."""
    washers = s.get("washer_thickness", 0.0)
    head, nut = washers if isinstance(washers, tuple) else (washers, 0.0)
    if nut and s.get("far_end", "nut") == "tapped":
        expected = "no washer under a nut, with a tapped far end"
        raise s.stop_value("washer_thickness", "washer-without-nut", expected, "write the washer under the head alone")
    return head, nut


def _grade(s: Section, thread: Thread | None) -> Grade | None:
    """Strengths of the bolt: by the table of grades, by the file, or by both."""
    low, high = s.get("yield_strength"), s.get("tensile_strength")
    tabled = _tabled_grade(s, thread) if s.has("grade") else None
    if tabled is None and low is None:
        if high is not None:
            expected = "the yield strength beside the tensile strength"
            raise s.stop("yield_strength", "missing-key", "nothing", expected, 'add yield_strength = "640 MPa"')
        return None
    if tabled is not None and low is None and high is None:
        return tabled
    low = tabled.yield_strength if low is None and tabled else low
    nominal = high if high is not None else tabled.tensile_nominal if tabled else low
    high = high if high is not None else tabled.tensile_strength if tabled else low
    if low > high:
        key = "yield_strength" if s.has("yield_strength") else "tensile_strength"
        expected = "a yield strength not above the tensile strength"
        raise s.stop_value(key, "range-upside-down", expected, "give both strengths, the lower one as yield_strength")
    return Grade(tabled.name if tabled else "given", low, high, nominal, "file", "given")


def _tabled_grade(s: Section, thread: Thread | None) -> Grade:
    name = s.get("grade")
    if thread is None:
        remedy = 'add thread = "M16", or write yield_strength in place of the grade'
        raise s.stop("grade", "missing-key", "a grade without thread", "the thread that the grade goes with", remedy)
    found = library.grade(name, thread.diameter)
    if found is None:
        known = library.choices("grades", "name")
        wrong_size = any(name.strip().casefold() == word.casefold() for word in known)
        close = "" if wrong_size else nearest(name, known)
        expected = f"a grade of the table for {thread.designation}" if wrong_size else "a grade of the table"
        remedy = f'did you mean "{close}"?' if close else "see slip tables grades, or give yield_strength"
        raise s.stop_value("grade", "unknown-grade", expected, remedy)
    return found


def plates(r: Reader, pattern: Pattern | None, bolt: Bolt | None) -> tuple[Plate, ...]:
    """The plates of all [[plate]]; none, or two and more."""
    sections = many(r, "plate[]")
    built = r.every(partial(_plate, s, i, pattern, bolt) for i, s in enumerate(sections))
    if len(built) == 1:
        expected = "no plate, or the two or more that are clamped together"
        raise r.stop(("plate",), "one-plate", "one [[plate]]", expected, "add a [[plate]] for the other plate")
    if bolt and bolt.segments and built:
        _check_grip(r, bolt, tuple(built))
    return tuple(built)


def _plate(s: Section, i: int, pattern: Pattern | None, bolt: Bolt | None) -> Plate:
    thickness = s.need("thickness", "the thickness of the plate", 'add thickness = "20 mm"')
    name, outline = s.get("name", f"plate {i + 1}"), s.get("outline")
    if pattern is not None and outline is not None:
        edge = outline.edge_distance(pattern.positions)
        hole, head = ((size or 0.0) / 2 for size in _sizes(bolt))
        if names := _nearer(pattern, edge, 0.0):
            raise s.stop(
                "outline", "bolt-outside", f"{names} outside", "all bolts inside", "correct outline or positions"
            )
        if names := _nearer(pattern, edge, hole):
            found = f"the hole of {names} over the edge"
            raise s.stop("outline", "hole-at-edge", found, "all holes inside", "correct outline, positions or hole")
        if names := _nearer(pattern, edge, head):
            s.reader.warn("head-over-edge", f"{name}: the head of {names} reaches over its edge", "plate.outline")
    return Plate(name, s.get("material"), thickness, outline, s.get("load_edge", ""))


def _sizes(bolt: Bolt | None) -> tuple[float | None, float | None]:
    """Hole and bearing diameter [mm] as far as they are known."""
    return (bolt.hole_diameter, bolt.bearing_diameter) if bolt else (None, None)


def _nearer(pattern: Pattern, edge: np.ndarray, distance: float) -> str:
    """Names of the bolts nearer to an edge than a distance [mm], the first few."""
    return ", ".join([name for name, e in zip(pattern.names, edge, strict=True) if e < distance][:8])


def _check_grip(r: Reader, bolt: Bolt, plates: tuple[Plate, ...]) -> None:
    """The pieces of a bolt must fill the grip."""
    grip = sum(plate.thickness for plate in clamped(plates, bolt.tapped)) + sum(bolt.washers)
    length = sum(piece.length for piece in bolt.segments)
    if abs(length - grip) > 0.01 * grip:
        found = f"pieces of {r.system.say(length, 'length')} together"
        expected = f"the grip of {r.system.say(grip, 'length')}"
        raise r.stop(("bolt", "segment"), "segments-not-grip", found, expected, "let the lengths add up to the grip")


def assume_springs(r: Reader, plates: tuple[Plate, ...]) -> None:
    """Say what the springs take where [bolt] is silent; without plates there are no springs."""
    given = r.document.tree.get("bolt", {})
    for key, code, text in SPRING_DEFAULTS:
        if plates and key not in given:
            r.assume(code, text, f"bolt.{key}")


def need_springs(r: Reader, plates: tuple[Plate, ...], bolt: Bolt, what: str, otherwise: str) -> None:
    """What the springs of bolt and plates need; a fault names what is missing and what asks for it."""
    if not plates:
        expected = f"the clamped plates, for the springs that {what} needs"
        raise r.stop(("plate",), "missing-key", "no [[plate]]", expected, f"add them, or {otherwise}")
    paths = [("plate", i, "material") for i, plate in enumerate(plates) if plate.material is None]
    names = ("thread", "bearing_diameter", "hole_diameter")
    for path in (*paths, *(("bolt", name) for name in names if getattr(bolt, name) is None)):
        expected = f"{path[-1]}, for the springs that {what} needs"
        raise r.stop(path, "missing-key", "nothing", expected, f"add {path[-1]}, or {otherwise}")
