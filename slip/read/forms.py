"""Readers of the values that have a form of their own: one function per `kind` of the schema, found by its name in FORMS."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from slip.base.tables import number
from slip.base.units import KINDS, UnitError, parse_unit, split
from slip.joint.bolt import Thread
from slip.joint.material import Material
from slip.joint.plates import Rectangle, Ring
from slip.joint.surface import Roughness
from slip.joint.tightening import Rises
from slip.read import library
from slip.read.document import Path_
from slip.read.reader import Reader, Stop, nearest, show
from slip.read.schema import BY_TABLE, Key

POSITIVE = {kind: Key("", "", kind, "", least=0.0, above=True) for kind in ("length", "pressure", "force", "number")}
PLAIN = {kind: Key("", "", kind, "") for kind in ("length", "force", "temperature rise")}
LOAD = ("shear", "axial", "moment")
MATERIAL = ("youngs_modulus", "poissons_ratio", "expansion", "yield_strength", "density", "name")


@dataclass(frozen=True)
class Friction:
    """Interface friction low and high; the source and basis are those of the table row, or '' when the file gives the numbers."""

    low: float
    high: float
    source: str
    basis: str
    pair: str


@dataclass(frozen=True)
class PreloadForm:
    """[tightening] preload as typed: ranges by bolt name ('' for all that are not named), or one nominal."""

    ranges: dict[str, tuple[float, float]]
    nominal: float | None


def thread(r: Reader, path: Path_, value: Any) -> Thread:
    """A thread designation."""
    text = r.text(path, value)
    found = library.thread(text)
    if found is None:
        close = nearest(text, library.choices("threads", "designation"))
        remedy = f"did you mean {close}?" if close else "slip tables threads lists the known ones"
        raise r.stop(path, "unknown-thread", show(text), 'a thread such as "M16", "M16x1.5", "3/4-10 UNC"', remedy)
    return found


def material(r: Reader, path: Path_, value: Any) -> Material:
    """A material by name, or its constants."""
    if isinstance(value, str):
        found = library.material(value)
        if found is None:
            known = library.choices("materials", "name")
            close = nearest(value, known)
            remedy = f"did you mean {close}?" if close else f"known: {', '.join(known)}"
            raise r.stop(
                path, "unknown-material", show(value), "a material of the table, or { youngs_modulus =, .. }", remedy
            )
        return found
    typed = r.table(path, value, MATERIAL, "a material")
    for needed in ("youngs_modulus", "poissons_ratio"):
        if needed not in typed:
            raise r.stop(path, "missing-key", f"no {needed}", "youngs_modulus and poissons_ratio", f"add {needed}")
    ratio = r.number((*path, "poissons_ratio"), typed["poissons_ratio"])
    if not 0 <= ratio < 0.5:
        raise r.stop(
            (*path, "poissons_ratio"), "out-of-limits", show(ratio), "a ratio from 0 to below 0.5", "correct the value"
        )

    def positive(name: str, kind: str) -> float | None:
        if name not in typed:
            return None
        return r.limited((*path, name), typed[name], POSITIVE.get(kind, Key("", name, kind, "", least=0.0, above=True)))

    modulus = positive("youngs_modulus", "pressure")
    assert modulus is not None
    expansion = r.quantity((*path, "expansion"), typed["expansion"], "expansion") if "expansion" in typed else None
    name = r.text((*path, "name"), typed["name"]) if "name" in typed else "given"
    return Material(
        name,
        modulus,
        ratio,
        expansion,
        positive("yield_strength", "pressure"),
        positive("density", "density"),
        "file",
        "given",
    )


def outline(r: Reader, path: Path_, value: Any) -> Rectangle | Ring:
    """Corners of a rectangle, or the diameters of a ring."""
    if isinstance(value, list):
        x0, y0, x1, y1 = r.several(path, value, PLAIN["length"], (4,))
        if x0 >= x1 or y0 >= y1:
            raise r.stop(
                path, "outline-empty", show(value), "[x0, y0, x1, y1] with x0 < x1 and y0 < y1", "swap the corners"
            )
        return Rectangle(x0, y0, x1, y1)
    typed = r.table(path, value, ("outer_diameter", "inner_diameter"), "an outline")
    if "outer_diameter" not in typed:
        raise r.stop(path, "missing-key", "no outer_diameter", "an outline", "add outer_diameter")
    outer = r.limited((*path, "outer_diameter"), typed["outer_diameter"], POSITIVE["length"])
    inner = r.quantity((*path, "inner_diameter"), typed.get("inner_diameter", 0), "length")
    if not 0 <= inner < outer:
        raise r.stop(path, "outline-empty", show(value), "an inner diameter below the outer", "correct the diameters")
    return Ring(outer, inner)


def interface_friction(r: Reader, path: Path_, value: Any) -> Friction:
    """A range of interface friction, or a pair of the table."""
    if isinstance(value, dict):
        return _tabled_friction(r, path, value)
    if isinstance(value, list):
        low, high = r.range(path, value, Key("", "friction", "friction", ""))
        return Friction(low, high, "", "", "")
    single = r.friction(path, value)
    r.assume("friction-single", "interface friction is one value: lowest and highest alike", "interface.friction")
    return Friction(single, single, "", "", "")


def _tabled_friction(r: Reader, path: Path_, value: Any) -> Friction:
    typed = r.table(path, value, ("pair", "preparation"), "a friction pair")
    if "pair" not in typed:
        raise r.stop(path, "missing-key", "no pair", "a friction pair", 'add pair = "steel / steel"')
    pair = r.text((*path, "pair"), typed["pair"])
    preparation = r.text((*path, "preparation"), typed.get("preparation", ""))
    wet = r.document.tree.get("interface", {}).get("fluid_can_reach", True)
    lubrication = "lubricated" if wet else "dry"
    row = library.friction(pair, preparation, lubrication)
    if row is None:
        known = [p for p in library.choices("friction", "pair")]
        close = nearest(pair, known)
        remedy = (
            f"did you mean {close}?"
            if close and close != pair
            else "give [lowest, highest], or see slip tables friction"
        )
        raise r.stop(path, "unknown-pair", show(value), f"a pair of the table with a {lubrication} row", remedy)
    if wet and "fluid_can_reach" not in r.document.tree.get("interface", {}):
        r.assume("fluid", "fluid can reach the face: the lubricated row counts", "interface.fluid_can_reach")
    text = f"{row['pair']}, {lubrication}"
    return Friction(number(row, "low"), number(row, "high"), row["source"], row["basis"], text)


def roughness(r: Reader, path: Path_, value: Any) -> tuple[Roughness, Roughness]:
    """Roughness of both faces, or one text for both."""
    items = value if isinstance(value, list) else [value, value]
    if len(items) != 2:
        raise r.stop(
            path, "wrong-count", show(value), "the roughness of the two faces", 'write ["Ra 0.8 um", "Ra 1.6 um"]'
        )
    upper, lower = (_roughness(r, path, item) for item in items)
    return upper, lower


def _roughness(r: Reader, path: Path_, item: Any) -> Roughness:
    words = item.split(None, 1) if isinstance(item, str) else []
    if len(words) != 2 or words[0] not in ("Ra", "Rq", "Rz"):
        raise r.stop(
            path,
            "roughness-label",
            show(item),
            "a label Ra, Rq or Rz before the value",
            'write for instance "Ra 0.8 um"',
        )
    return Roughness(words[0], r.limited(path, words[1], POSITIVE["length"]))


def positions(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Bolt positions [[x, y], ..]."""
    if not isinstance(value, list) or not value:
        raise r.stop(path, "wrong-count", show(value), "a list of positions", "write [[x, y], [x, y]]")
    points = [r.attempt(lambda item=item: r.several(path, item, PLAIN["length"], (2,))) for item in value]  # type: ignore[misc]
    if any(point is None for point in points):
        raise Stop
    return tuple((p[0], p[1]) for p in points if p is not None)


def names(r: Reader, path: Path_, value: Any) -> tuple[str, ...]:
    """Bolt names."""
    if not isinstance(value, list) or not all(isinstance(item, str) and item.strip() for item in value):
        raise r.stop(path, "not-a-text", show(value), "a list of names", 'write ["A1", "A2"]')
    return tuple(value)


def _whole(r: Reader, path: Path_, value: Any) -> int:
    if isinstance(value, bool) or not isinstance(value, int) or not 1 <= value <= 10_000:
        raise r.stop(path, "not-a-whole-number", show(value), "a whole number from 1 to 10000", "write for instance 3")
    return value


def grid(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Rows and columns round the origin, row by row from the lowest y."""
    typed = r.table(path, value, ("columns", "rows", "pitch"), "a grid")
    columns, rows = (_whole(r, (*path, name), typed.get(name)) for name in ("columns", "rows"))
    across, up = r.several((*path, "pitch"), typed.get("pitch"), POSITIVE["length"], (2,))
    return tuple(
        (across * (column - (columns - 1) / 2), up * (row - (rows - 1) / 2))
        for row in range(rows)
        for column in range(columns)
    )


def circle(r: Reader, path: Path_, value: Any) -> tuple[tuple[float, float], ...]:
    """Bolts on a circle round the origin, the first on the x axis, then anticlockwise."""
    from math import cos, pi, sin

    typed = r.table(path, value, ("count", "diameter"), "a bolt circle")
    count = _whole(r, (*path, "count"), typed.get("count"))
    diameter = r.limited((*path, "diameter"), typed.get("diameter"), POSITIVE["length"])
    angles = (2 * pi * i / count for i in range(count))
    return tuple((diameter / 2 * cos(a), diameter / 2 * sin(a)) for a in angles)


def preload(r: Reader, path: Path_, value: Any) -> PreloadForm:
    """[lowest, highest], ranges by bolt name, or a nominal."""
    if isinstance(value, dict):
        ranges = {name: r.range((*path, name), item, POSITIVE["force"]) for name, item in value.items()}
        return PreloadForm({("" if name == "others" else name): item for name, item in ranges.items()}, None)
    if isinstance(value, list):
        return PreloadForm({"": r.range(path, value, POSITIVE["force"])}, None)
    return PreloadForm({}, r.limited(path, value, POSITIVE["force"]))


def embedding(r: Reader, path: Path_, value: Any) -> tuple[str, float]:
    """("auto", 0), ("length", mm) or ("force", N)."""
    if value == "auto":
        return "auto", 0.0
    if value == 0 and not isinstance(value, (bool, str)):
        return "force", 0.0
    try:
        dimension = parse_unit(split(value)[1])[1] if isinstance(value, str) else None
    except UnitError:
        dimension = None
    for kind in ("length", "force"):
        if dimension == KINDS[kind]:
            size = r.limited(path, value, Key("", "embedding", kind, "", least=0.0))
            return kind, size
    raise r.stop(
        path,
        "embedding-form",
        show(value),
        '"auto", a length, a force, or 0',
        'write for instance "14.5 um" or "4500 N"',
    )


def thermal(r: Reader, path: Path_, value: Any) -> float | Rises:
    """A loss in N, or the rises of bolt and plates."""
    if not isinstance(value, dict):
        return r.limited(path, value, Key("", "thermal", "force", "", least=0.0))
    typed = r.table(path, value, ("bolt", "plates"), "temperature rises")
    if set(typed) != {"bolt", "plates"}:
        raise r.stop(
            path, "missing-key", show(value), "the rises of bolt and plates", "write { bolt = 20, plates = [60, 20] }"
        )
    bolt = r.quantity((*path, "bolt"), typed["bolt"], "temperature rise")
    plates = typed["plates"] if isinstance(typed["plates"], list) else [typed["plates"]]
    rises = [r.quantity((*path, "plates"), item, "temperature rise") for item in plates]
    return Rises(bolt, tuple(rises))


def other_end(r: Reader, path: Path_, value: Any) -> dict[str, Any]:
    """Components of the other end of an alternating case; what is not named stays constant."""
    typed = r.table(path, value, LOAD, "the other end")
    keys = BY_TABLE["case[]"]
    return {name: read(r, (*path, name), item, keys[name]) for name, item in typed.items()}


def present_stiffness(r: Reader, path: Path_, value: Any) -> tuple[str, float]:
    """The contact stiffness in use, in one of its forms."""
    kinds = {
        "per_area": "stiffness per area",
        "per_node": "stiffness",
        "elastic_slip": "length",
        "edge_fraction": "number",
        "of_normal": "number",
    }
    typed = r.table(path, value, kinds, "one form of the present stiffness")
    if len(typed) != 1:
        raise r.stop(path, "wrong-count", show(value), "exactly one form", "write for instance { per_area = 12000 }")
    ((name, item),) = typed.items()
    return name, r.limited((*path, name), item, Key("", name, kinds[name], "", least=0.0, above=True))


def anything(r: Reader, path: Path_, value: Any) -> Any:
    """A value that a later capability reads."""
    return value


FORMS: dict[str, Callable[[Reader, Path_, Any], Any]] = {
    "thread": thread,
    "material": material,
    "outline": outline,
    "interface friction": interface_friction,
    "roughness": roughness,
    "positions": positions,
    "names": names,
    "grid": grid,
    "circle": circle,
    "preload": preload,
    "embedding": embedding,
    "thermal": thermal,
    "other end": other_end,
    "present stiffness": present_stiffness,
    "anything": anything,
}


def read(r: Reader, path: Path_, value: Any, key: Key) -> Any:
    """The value of a key as its kind and shape say, in inside units; ranges and lists as tuples."""
    if key.kind in FORMS:
        return FORMS[key.kind](r, path, value)
    if key.kind == "text":
        return r.text(path, value)
    if key.kind == "choice":
        if value not in key.choices or isinstance(value, bool):
            close = nearest(str(value), key.choices)
            allowed = ", ".join(f'"{choice}"' for choice in key.choices)
            remedy = f'did you mean "{close}"?' if close else "choose one of them"
            raise r.stop(path, "unknown-choice", show(value), f"one of {allowed}", remedy)
        return value
    if key.kind == "flag":
        if not isinstance(value, bool):
            raise r.stop(path, "not-a-flag", show(value), "true or false", "write it without quotes")
        return value
    if key.kind == "whole":
        if isinstance(value, bool) or not isinstance(value, int) or not key.least <= value <= key.most:
            raise r.stop(
                path,
                "not-a-whole-number",
                show(value),
                f"a whole number from {key.least:g} to {key.most:g}",
                "write it as 1",
            )
        return value
    if key.shape == "range":
        return r.range(path, value, key)
    if key.shape == "one or range":
        return r.range(path, value, key) if isinstance(value, list) else (r.limited(path, value, key),) * 2
    if key.shape == "one or two":
        return r.several(path, value, key, (2,)) if isinstance(value, list) else r.limited(path, value, key)
    if key.shape == "2 or 3":
        return r.several(path, value, key, (2, 3))
    if key.shape.isdigit():
        return r.several(path, value, key, (int(key.shape),))
    return r.limited(path, value, key)
