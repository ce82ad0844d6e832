"""Readers of the values that have a form of their own: one function per `kind` of the schema, found by its name in FORMS."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import Any

from slip.base.records import record
from slip.base.tables import number
from slip.base.units import KINDS, UnitError, parse_unit, split
from slip.joint.bolt import Thread
from slip.joint.material import Material
from slip.joint.surface import Roughness
from slip.joint.tightening import Rises
from slip.read import library
from slip.read.layout import circle, grid, outline, positions
from slip.read.lines import Path_
from slip.read.reader import Reader, Stop, nearest, show
from slip.read.schema import BY_TABLE, Key, not_negative, positive
from slip.read.words import choice, flag, names, whole

RISE = Key("", "", "temperature rise", "")
CONSTANTS = {
    "youngs_modulus": positive("pressure"),
    "poissons_ratio": Key("", "poissons_ratio", "number", "", least=0.0, most=0.49),
    "expansion": Key("", "", "expansion", ""),
    "yield_strength": positive("pressure"),
    "density": positive("density"),
}
PRESENT = {
    "per_area": "stiffness per area",
    "per_node": "stiffness",
    "elastic_slip": "length",
    "edge_fraction": "number",
    "of_normal": "number",
}


@record
class Friction:
    """Interface friction low and high; the source and basis are those of the table row, or '' when the file gives the numbers."""

    low: float
    high: float
    source: str
    basis: str
    pair: str


@record
class PreloadForm:
    """[tightening] preload as typed: ranges by bolt name ('' for all that are not named), or one nominal."""

    ranges: dict[str, tuple[float, float]]
    nominal: float | None


def _looked_up(r: Reader, path: Path_, value: str, code: str, what: str, known: list[str], see: str) -> Stop:
    """The fault of a word that no table has."""
    close = nearest(value, known)
    return r.stop(path, code, show(value), what, f'did you mean "{close}"?' if close else see)


def thread(r: Reader, path: Path_, value: Any) -> Thread:
    """A thread designation."""
    text = r.text(path, value)
    found, known = library.thread(text), library.choices("threads", "designation")
    if found is None:
        close = library.thread_near(text) or nearest(text, known)
        remedy = f'did you mean "{close}"?' if close else "slip tables threads lists the known ones"
        expected = 'a thread such as "M16", "M16x1.5", "3/4-10 UNC"'
        raise r.stop(path, "unknown-thread", show(text), expected, remedy)
    if found.designation not in known:
        said = f"{found.designation} is not in the table of threads: taken as an ISO metric thread of that pitch"
        r.warn("thread-not-listed", said, "bolt.thread")
    return found


def material(r: Reader, path: Path_, value: Any) -> Material:
    """A material by name, or its constants."""
    what = "a material of the table, or { youngs_modulus = .., poissons_ratio = .. }"
    if isinstance(value, str):
        found = library.material(value)
        if found is None:
            known = library.choices("materials", "name")
            raise _looked_up(r, path, value, "unknown-material", what, known, f"known: {', '.join(known)}")
        return found
    typed = r.table(path, value, (*CONSTANTS, "name"), what, ("youngs_modulus", "poissons_ratio"))
    names = [name for name in CONSTANTS if name in typed]
    values = r.every(partial(r.limited, (*path, name), typed[name], CONSTANTS[name]) for name in names)
    given = dict(zip(names, values, strict=True))
    return Material(
        name=r.text((*path, "name"), typed["name"]) if "name" in typed else "given",
        youngs_modulus=given["youngs_modulus"],
        poissons_ratio=given["poissons_ratio"],
        expansion=given.get("expansion"),
        yield_strength=given.get("yield_strength"),
        density=given.get("density"),
        source="file",
        basis="given",
    )


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
    what = 'a pair of the table, { pair = "steel / steel" }'
    typed = r.table(path, value, ("pair", "preparation"), what, ("pair",))
    pair = r.text((*path, "pair"), typed["pair"])
    preparation = r.text((*path, "preparation"), typed.get("preparation", ""))
    wet = r.document.tree["interface"].get("fluid_can_reach")
    lubrication = "dry" if wet is False else "lubricated"
    row = library.friction(pair, preparation, lubrication)
    if row is None:
        known = [known for known in library.choices("friction", "pair") if library.friction(known, "", lubrication)]
        see = "give [lowest, highest]; slip tables friction lists the pairs"
        raise _looked_up(
            r, (*path, "pair"), pair, "unknown-pair", f"a pair of the table with a {lubrication} row", known, see
        )
    if wet is None:
        r.assume(
            "fluid",
            "fluid can reach the face: the lower of the dry and the lubricated row counts",
            "interface.fluid_can_reach",
        )
    if preparation and not row["preparation"]:
        text = f"the table has no {row['pair']} for preparation {show(preparation)}: its row for any preparation"
        r.assume("friction-preparation", text, "interface.friction")
    rows = [row]
    if wet is not False and (dry := library.friction(pair, preparation, "dry")):
        rows.append(dry)  # a face that fluid can reach may stay dry: the lower of both rows can be defended
    low, high = min(number(each, "low") for each in rows), max(number(each, "high") for each in rows)
    return Friction(low, high, row["source"], row["basis"], f"{row['pair']}, {lubrication}")


def roughness(r: Reader, path: Path_, value: Any) -> tuple[Roughness, Roughness]:
    """Roughness of both faces, or one text for both."""
    items = value if isinstance(value, list) else [value, value]
    if len(items) != 2:
        expected, remedy = "the roughness of the two faces", 'write ["Ra 0.8 um", "Ra 1.6 um"]'
        raise r.stop(path, "wrong-count", show(value), expected, remedy)
    if not isinstance(value, list):
        both = _roughness(r, path, value)
        return both, both
    upper, lower = r.every(partial(_roughness, r, (*path, i), item) for i, item in enumerate(items))
    return upper, lower


def _roughness(r: Reader, path: Path_, item: Any) -> Roughness:
    words = item.split(None, 1) if isinstance(item, str) else []
    if len(words) != 2 or words[0] not in ("Ra", "Rq", "Rz"):
        expected, remedy = "a label Ra, Rq or Rz before the value", 'write for instance "Ra 0.8 um"'
        raise r.stop(path, "roughness-label", show(item), expected, remedy)
    return Roughness(words[0], r.limited(path, words[1], positive("length")))


def preload(r: Reader, path: Path_, value: Any) -> PreloadForm:
    """[lowest, highest], ranges by bolt name, or a nominal."""
    if isinstance(value, dict):
        ranges = r.every(partial(r.range, (*path, name), item, positive("force")) for name, item in value.items())
        named = ("" if name == "others" else name for name in value)
        return PreloadForm(dict(zip(named, ranges, strict=True)), None)
    if isinstance(value, list):
        return PreloadForm({"": r.range(path, value, positive("force"))}, None)
    return PreloadForm({}, r.limited(path, value, positive("force")))


def _kind_of(r: Reader, path: Path_, value: Any, kinds: tuple[str, ...], code: str, expected: str, remedy: str) -> str:
    """Which of several kinds of quantity a text is."""
    try:
        dimension = parse_unit(split(value)[1])[1] if isinstance(value, str) else None
    except UnitError as error:
        if error.code != "not-a-quantity":
            raise r.stop(path, error.code, show(value), error.expected, error.remedy) from None
        dimension = None
    for kind in kinds:
        if dimension == KINDS[kind]:
            return kind
    raise r.stop(path, code, show(value), expected, remedy)


def embedding(r: Reader, path: Path_, value: Any) -> tuple[str, float]:
    """("auto", 0), ("length", mm) or ("force", N)."""
    if value == "auto":
        return "auto", 0.0
    if value == 0 and not isinstance(value, (bool, str)):
        return "force", 0.0
    expected, remedy = '"auto", a length, a force, or 0', 'write for instance "14.5 um" or "4500 N"'
    kind = _kind_of(r, path, value, ("length", "force"), "embedding-form", expected, remedy)
    return kind, r.limited(path, value, not_negative(kind))


def thermal(r: Reader, path: Path_, value: Any) -> float | Rises:
    """A loss in N, or the rises of bolt and plates."""
    expected, remedy = "a loss as a force, or the rises of bolt and plates", "write { bolt = 20, plates = [60, 20] }"
    if isinstance(value, str):
        _kind_of(r, path, value, ("force",), "thermal-form", expected, remedy)
    if not isinstance(value, dict):
        return r.limited(path, value, not_negative("force"))
    typed = r.table(path, value, ("bolt", "plates"), expected, ("bolt", "plates"))
    plates = typed["plates"]
    placed = [((*path, "bolt"), typed["bolt"])]
    if isinstance(plates, list):
        placed += [((*path, "plates", i), item) for i, item in enumerate(plates)]
    else:
        placed.append(((*path, "plates"), plates))
    bolt, *rises = r.every(partial(r.limited, place, item, RISE) for place, item in placed)
    return Rises(bolt, tuple(rises))


def other_end(r: Reader, path: Path_, value: Any) -> dict[str, Any]:
    """Components of the other end of an alternating case; what is not named stays constant."""
    typed = r.table(path, value, ("shear", "axial", "moment"), "the other end")
    keys = BY_TABLE["case[]"]
    values = r.every(partial(read, r, (*path, name), item, keys[name]) for name, item in typed.items())
    return dict(zip(typed, values, strict=True))


def present_stiffness(r: Reader, path: Path_, value: Any) -> tuple[str, float]:
    """The contact stiffness in use, in one of its forms."""
    typed = r.table(path, value, PRESENT, "one form of the present stiffness")
    if len(typed) != 1:
        raise r.stop(path, "wrong-count", show(value), "exactly one form", 'write { per_area = "12000 N/mm^3" }')
    ((name, item),) = typed.items()
    return name, r.limited((*path, name), item, positive(PRESENT[name], name))


def anything(r: Reader, path: Path_, value: Any) -> Any:
    """A value that a later capability reads."""
    return value


def lists(r: Reader, path: Path_, value: Any, key: Key) -> Any:
    """A number, or numbers, of a plain kind in the key's shape; ranges and lists as tuples."""
    ranged, paired = key.shape in ("range", "one or range"), key.shape == "one or two"
    if key.shape == "one" or (key.shape.startswith("one") and not isinstance(value, list)):
        number = r.limited(path, value, key)
        return (number, number) if ranged else number
    if ranged:
        return r.range(path, value, key)
    if paired:
        return r.several(path, value, key, "[first, second]", (2,))
    form, counts = {
        "2": ("[x, y]", (2,)),
        "3": ("[x, y, normal]", (3,)),
        "2 or 3": ("[x, y] or [x, y, z]", (2, 3)),
    }[key.shape]
    return r.several(path, value, key, form, counts)


FORMS: dict[str, Callable[[Reader, Path_, Any], Any]] = {
    "text": Reader.text,
    "flag": flag,
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
LIMITED: dict[str, Callable[[Reader, Path_, Any, Key], Any]] = {"choice": choice, "whole": whole}


def read(r: Reader, path: Path_, value: Any, key: Key) -> Any:
    """The value of a key as its kind and shape say, in inside units."""
    if key.kind in FORMS:
        return FORMS[key.kind](r, path, value)
    return LIMITED.get(key.kind, lists)(r, path, value, key)
