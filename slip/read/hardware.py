"""Builders of the parts: pattern, bolt, plates; and what the springs need of them."""

from __future__ import annotations

import numpy as np

from slip.base.tables import number
from slip.joint.bolt import Bolt, Grade, Segment
from slip.joint.material import Material
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate, clamped
from slip.read import library
from slip.read.bolt_list import BoltList, check_bolts, read_bolt_list
from slip.read.reader import Reader, nearest
from slip.read.sections import Section, many

STEEL = "steel"


def pattern(r: Reader, section: Section) -> BoltList:
    forms = [name for name in ("positions", "grid", "circle", "file") if section.has(name)]
    if len(forms) > 1:
        raise section.stop(
            forms[1], "too-many-forms", " and ".join(forms), "one of positions, grid, circle, file", "keep one"
        )
    if not forms:
        r.assume("one-bolt", "one bolt, at the origin", "pattern.positions")
        return BoltList(Pattern(("B1",), np.zeros((1, 2))), None, None, "")
    if forms[0] == "file":
        return read_bolt_list(r, section)
    points = section.get(forms[0])
    names = section.get("names", tuple(f"B{i + 1}" for i in range(len(points))))
    check_bolts(section, forms[0], names, points)
    return BoltList(Pattern(names, np.array(points, dtype=float)), None, None, "")


def bolt(r: Reader, s: Section) -> Bolt:
    thread = s.get("thread")
    diameter = thread.diameter if thread else None
    structural = str(s.get("grade", "")).upper().startswith(("A325", "A490"))
    head = s.get("head", "heavy hexagon" if structural else "hexagon")
    hole = s.get("hole_diameter")
    if hole is None and diameter is not None and (row := library.clearance_hole(diameter)):
        hole = number(row, "hole[mm]")
        r.assume("hole-medium", f"hole {r.system.say(hole, 'length')}, medium fit", "bolt.hole_diameter")
    if hole is not None and diameter is not None and hole < diameter:
        expected = f"a hole not smaller than the thread, {r.system.say(diameter, 'length')}"
        raise s.stop_value("hole_diameter", "hole-below-thread", expected, "correct hole or thread")
    bearing = s.get("bearing_diameter")
    if bearing is None and diameter is not None and (row := library.bearing_diameter(head, diameter)):
        bearing = number(row, "bearing_diameter[mm]")
        r.assume(
            "bearing-table", f"bearing diameter {r.system.say(bearing, 'length')}, {head} head", "bolt.bearing_diameter"
        )
    if bearing is not None and hole is not None and bearing <= hole:
        found = f"bearing {r.system.say(bearing, 'length')} and hole {r.system.say(hole, 'length')}"
        key = "bearing_diameter" if s.has("bearing_diameter") else "hole_diameter"
        raise s.stop(
            key,
            "bearing-below-hole",
            found,
            "a bearing face wider than the hole",
            "correct one, or give bearing_diameter",
        )
    segments = tuple(
        Segment(e.need("diameter", "of the piece", "add it"), e.need("length", "of the piece", "add it"))
        for e in many(r, "segment", "bolt.segment[]", ("bolt",), s.raw)
    )
    washers = s.get("washer_thickness", 0.0)
    return Bolt(
        thread=thread,
        grade=_grade(r, s, diameter),
        head=head,
        bearing_diameter=bearing,
        hole_diameter=hole,
        shank_diameter=s.get("shank_diameter", diameter),
        segments=segments,
        tapped=s.get("far_end", "nut") == "tapped",
        washers=washers if isinstance(washers, tuple) else (washers, 0.0),
        material=s.get("material") or steel(),
    )


def steel() -> Material:
    material = library.material(STEEL)
    assert material is not None
    return material


def _grade(r: Reader, s: Section, diameter: float | None) -> Grade | None:
    low, high = s.get("yield_strength"), s.get("tensile_strength")
    if low is not None and high is not None and low > high:
        raise s.stop_value(
            "yield_strength", "range-upside-down", "a yield strength below the tensile strength", "swap them"
        )
    name = s.get("grade")
    if name is None:
        if low is None:
            return None
        return Grade(
            "given", low, high if high is not None else low, high if high is not None else low, "file", "given"
        )
    found = library.grade(name, diameter) if diameter is not None else None
    if found is None:
        known = library.choices("grades", "name")
        close = nearest(name, known)
        wrong_size = any(name.casefold() == k.casefold() for k in known)
        remedy = (
            f"did you mean {close}?" if close and not wrong_size else "see slip tables grades, or give yield_strength"
        )
        expected = "a grade of the table for this thread" if wrong_size else "a grade of the table"
        if diameter is None:
            expected, remedy = "a thread with the grade", "add thread"
        raise s.stop_value("grade", "unknown-grade", expected, remedy)
    if low is None and high is None:
        return found
    return Grade(
        found.name,
        low if low is not None else found.yield_strength,
        high if high is not None else found.tensile_strength,
        high if high is not None else found.tensile_nominal,
        "file",
        "given",
    )


def plates(r: Reader, pattern: Pattern | None, bolt: Bolt | None) -> tuple[Plate, ...]:
    sections = many(r, "plate", "plate[]")
    plates = [
        Plate(
            s.get("name", f"plate {i + 1}"),
            s.get("material"),
            s.need("thickness", "of each plate", 'add thickness = "20 mm"'),
            s.get("outline"),
            s.get("load_edge", ""),
        )
        for i, s in enumerate(sections)
    ]
    if len(plates) == 1:
        raise r.stop(
            ("plate",), "one-plate", "one [[plate]]", "none, or the two or more that are clamped", "add the other plate"
        )
    for plate, s in zip(plates, sections, strict=True):
        if pattern is None or plate.outline is None:
            continue
        outside = plate.outline.edge_distance(pattern.positions) < 0
        if outside.any():
            names = ", ".join(name for name, out in zip(pattern.names, outside, strict=True) if out)
            raise s.stop(
                "outline", "bolt-outside", names, "every bolt inside the outline", "correct outline or positions"
            )
    if bolt and bolt.segments and plates:
        grip = sum(p.thickness for p in clamped(tuple(plates), bolt.tapped)) + sum(bolt.washers)
        length = sum(piece.length for piece in bolt.segments)
        if abs(length - grip) > 0.01 * grip:
            found = f"pieces of {r.system.say(length, 'length')} together"
            expected = f"the grip of {r.system.say(grip, 'length')}"
            raise r.stop(("bolt", "segment"), "segments-not-grip", found, expected, "let the pieces fill the grip")
    return tuple(plates)


def need_springs(r: Reader, plates: tuple[Plate, ...], bolt: Bolt, what: str, otherwise: str) -> None:
    """What the springs of bolt and plates need; a fault names what is missing and what asks for it."""
    if not plates:
        raise r.stop(
            ("plate",),
            "missing-key",
            "no [[plate]]",
            f"the plates, for the springs that {what} needs",
            f"add them, or {otherwise}",
        )
    for i, plate in enumerate(plates):
        if plate.material is None:
            path = ("plate", i, "material")
            raise r.stop(
                path,
                "missing-key",
                "nothing",
                f"material, for the springs that {what} needs",
                f"add it, or {otherwise}",
            )
    for name in ("thread", "bearing_diameter", "hole_diameter"):
        if getattr(bolt, name) is None:
            raise r.stop(
                ("bolt", name),
                "missing-key",
                "nothing",
                f"{name}, for the springs that {what} needs",
                f"add it, or {otherwise}",
            )
