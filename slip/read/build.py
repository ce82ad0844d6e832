"""From a document to a Joint: each table by its builder, each default listed where it is taken, all faults together."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from pathlib import Path
from typing import TypeVar

from slip.joint.contact import PressedContact, PressedFace
from slip.joint.joint import Joint, Standard
from slip.read import assembly, hardware, loading
from slip.read.demands import interface, required
from slip.read.document import Document, load, parse
from slip.read.elements import elements
from slip.read.face import describes_face
from slip.read.face import face as pressed_face
from slip.read.pattern import pattern
from slip.read.pressed import pressed
from slip.read.reader import Reader
from slip.read.schema import KEYS
from slip.read.sections import Section, many, one
from slip.read.table import table

T = TypeVar("T")
# What is taken for a standard when its entry is silent, and how it is said.
STANDARD_DEFAULTS = {
    "EN 1993-1-8": {"hole": "normal hole"},
    "AISC 360": {"edition": "edition 2016", "hole": "normal hole", "filler_factor": "no fillers"},
    "VDI 2230": {},
    "NASA-STD-5020": {
        "surface": "surface not known, friction at most 0.1",
        "fitting_factor": "fitting factor 1",
        "c_min": "c_min 1",
    },
}
# Tables of keys that are checked, not used yet.
LATER = ("fretting", "loosening", "scatter")


def read(path: str | Path, cases_in_table: bool = False) -> Joint | PressedContact | PressedFace:
    """The joint, or the pressed contact, of a TOML file. Raises Problems with every fault that could be found.

    cases_in_table: the load cases stand in a table apart, so that the file needs none.
    """
    return build(load(path), cases_in_table)


def read_text(text: str, file: str = "joint") -> Joint | PressedContact | PressedFace:
    """As `read`, of a TOML text, for scripts and tests; files that it names are looked for in the working directory."""
    return build(parse(text.encode("utf-8", "surrogatepass"), file, Path()))


def build(document: Document, cases_in_table: bool = False) -> Joint | PressedContact | PressedFace:
    """The joint, the pressed contact or the face of known pressure of a parsed document."""
    r = Reader(document)
    top = Section(r, (), "", document.tree)
    r.attempt(lambda: top.need("format", "the version of the file format", "add format = 1 at the top"))
    for name in LATER:
        r.attempt(partial(one, r, name))
    if "contact" in document.tree or "body" in document.tree:
        return pressed(r, document)
    if describes_face(document):
        _say_unused(r)
        return pressed_face(r, document)
    bolts = r.attempt(lambda: pattern(r, one(r, "pattern")))
    layout = bolts.pattern if bolts else None
    bolt = r.attempt(lambda: hardware.bolt(r, one(r, "bolt")))
    plates = r.attempt(lambda: hardware.plates(r, layout, bolt))
    tightening = r.attempt(lambda: assembly.tightening(r, one(r, "tightening"), bolts, bolt))
    losses = r.attempt(lambda: assembly.losses(r, one(r, "losses"), plates, bolt))
    face = r.attempt(lambda: interface(r, one(r, "interface")))
    demands = r.attempt(lambda: required(r, one(r, "required")))
    cases = r.attempt(lambda: loading.cases(r, layout, cases_in_table))
    axial = r.attempt(lambda: loading.axial(r, one(r, "axial"), plates, bolt, cases, cases_in_table))
    form = r.attempt(lambda: table(r, one(r, "table")))
    mesh = r.attempt(lambda: elements(r, one(r, "finite_elements")))
    standards = r.attempt(lambda: _standards(r))
    if face and plates and face.parallel_faces > len(plates) - 1:
        found, most = f"{face.parallel_faces} faces between {len(plates)} plates", f"at most {len(plates) - 1}"
        r.fail(
            ("interface", "parallel_faces"),
            "faces-beyond-plates",
            found,
            most,
            "correct parallel_faces, or add the plates",
        )
    r.finish()
    assert tightening is not None
    hardware.assume_springs(r, _there(plates))
    _say_unused(r)
    return Joint(
        title=top.get("title", ""),
        system=r.system,
        bolt=_there(bolt),
        tightening=tightening,
        losses=_there(losses),
        plates=_there(plates),
        interface=_there(face),
        pattern=_there(layout),
        axial=_there(axial),
        required=_there(demands),
        standards=_there(standards),
        cases=_there(cases),
        table=_there(form),
        elements=_there(mesh),
        loosening_limit=bool(document.tree.get("loosening", {}).get("limit", False)),
        assumptions=tuple(r.assumptions),
        warnings=tuple(r.warnings),
        digest="+".join(part for part in (document.digest, bolts.digest if bolts else "") if part),
        file=document.file,
    )


def _there(part: T | None) -> T:
    """A part that was built; `finish` has already raised when it was not."""
    assert part is not None, "a part stopped without a recorded fault"
    return part


def _standards(r: Reader) -> tuple[Standard, ...]:
    """All [[standard]]; two entries of one name get a label each."""
    standards = r.every(partial(_standard, s) for s in many(r, "standard[]"))
    names = [s.name for s in standards]
    return tuple(
        replace(s, label=f"{s.name} ({i + 1})" if names.count(s.name) > 1 else s.name) for i, s in enumerate(standards)
    )


def _standard(s: Section) -> Standard:
    name = s.need("name", "the name of the standard", 'add name = "EN 1993-1-8"')
    options = {key: s.get(key) for key in s.raw if key not in ("name", "to_standard_level")}
    for key, said in STANDARD_DEFAULTS[name].items():
        if key not in options:
            s.reader.assume("standard-default", f"{name}: {said}", f"standard.{key}")
    return Standard(name, name, options, s.get("to_standard_level"))


def _say_unused(r: Reader) -> None:
    """Say once which keys were read and checked but take no part in any answer yet."""
    tree = r.document.tree
    unused = []
    for key in KEYS:
        table = key.table.removesuffix("[]")
        entries = tree.get(table, [])
        entries = entries if isinstance(entries, list) else [entries]
        if key.later and any(isinstance(entry, dict) and key.name in entry for entry in entries):
            unused.append(f"{table}.{key.name}")
    if unused:
        r.warn("not-used-yet", f"read and checked, not used yet: {', '.join(unused)}", unused[0])
