"""From a document to a Joint: each table by its builder, each default listed where it is taken, all faults together."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from pathlib import Path
from typing import TypeVar

from slip.joint.joint import Joint, Required, Standard
from slip.joint.surface import Interface
from slip.read import assembly, hardware, loading
from slip.read.document import Document, load, parse
from slip.read.forms import Friction
from slip.read.pattern import pattern
from slip.read.reader import Reader
from slip.read.schema import KEYS
from slip.read.sections import Section, many, one

T = TypeVar("T")
# What is taken for a standard when its entry is silent, and how it is said.
STANDARD_DEFAULTS = {
    "EN 1993-1-8": {"hole": "normal hole"},
    "AISC 360": {"edition": "edition 2016", "hole": "normal hole", "filler_factor": "no fillers"},
    "VDI 2230": {},
    "NASA-STD-5020": {"surface": "surface not known, friction at most 0.1", "fitting_factor": "fitting factor 1", "c_min": "c_min 1"},
}
CONTACT = "pressed contacts are not assessed yet"
# Tables of keys that are checked, not used yet.
LATER = ("finite_elements", "fretting", "loosening", "scatter", "table")


def read(path: str | Path) -> Joint:
    """The joint of a TOML file. Raises Problems with every fault that could be found."""
    return build(load(path))


def read_text(text: str, file: str = "joint") -> Joint:
    """The joint of a TOML text, for scripts and tests; files that it names are looked for in the working directory."""
    return build(parse(text.encode("utf-8", "surrogatepass"), file, Path()))


def build(document: Document) -> Joint:
    """The joint of a parsed document."""
    r = Reader(document)
    top = Section(r, (), "", document.tree)
    r.attempt(lambda: top.need("format", "the version of the file format", "add format = 1 at the top"))
    for name in LATER:
        r.attempt(partial(one, r, name))
    _refuse_contact(r)
    bolts = r.attempt(lambda: pattern(r, one(r, "pattern")))
    layout = bolts.pattern if bolts else None
    bolt = r.attempt(lambda: hardware.bolt(r, one(r, "bolt")))
    plates = r.attempt(lambda: hardware.plates(r, layout, bolt))
    tightening = r.attempt(lambda: assembly.tightening(r, one(r, "tightening"), bolts, bolt))
    losses = r.attempt(lambda: assembly.losses(r, one(r, "losses"), plates, bolt))
    interface = r.attempt(lambda: _interface(r, one(r, "interface")))
    required = r.attempt(lambda: _required(r, one(r, "required")))
    cases = r.attempt(lambda: loading.cases(r, layout))
    axial = r.attempt(lambda: loading.axial(r, one(r, "axial"), plates, bolt, cases))
    standards = r.attempt(lambda: _standards(r))
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
        interface=_there(interface),
        pattern=_there(layout),
        axial=_there(axial),
        required=_there(required),
        standards=_there(standards),
        cases=_there(cases),
        loosening_limit=bool(document.tree.get("loosening", {}).get("limit", False)),
        assumptions=tuple(r.assumptions),
        warnings=tuple(r.warnings),
        digest="+".join(part for part in (document.digest, bolts.digest if bolts else "") if part),
        file=document.file,
    )


def _refuse_contact(r: Reader) -> None:
    """A pressed contact has neither bolts nor plates: its own keys are checked, and nothing else is asked for."""
    given = [name for name in ("contact", "body") if name in r.document.tree]
    if not given:
        return
    r.attempt(lambda: one(r, "contact"))
    r.attempt(lambda: many(r, "body[]"))
    r.fail((given[0],), "contact-not-yet", "a pressed contact", "a joint with bolts", CONTACT)
    r.finish()


def _there(part: T | None) -> T:
    """A part that was built; `finish` has already raised when it was not."""
    assert part is not None, "a part stopped without a recorded fault"
    return part


def _interface(r: Reader, s: Section) -> Interface:
    """[interface]; friction is never assumed."""
    write = 'add friction = [lowest, highest], or friction = { pair = "steel / steel" }'
    friction: Friction = s.need("friction", "the friction of the sliding face, which is never assumed", write)
    if s.has("pressure"):
        remedy = "a face of known pressure without bolts is not assessed yet"
        raise s.stop_value("pressure", "face-not-yet", "bolts that clamp", remedy)
    if not s.has("parallel_faces"):
        r.assume("one-face", "one sliding face carries the load", "interface.parallel_faces")
    return Interface(
        friction_low=friction.low,
        friction_high=friction.high,
        friction_source=s.get("friction_source", friction.pair or "joint file"),
        friction_basis=friction.basis or "given",
        parallel_faces=s.get("parallel_faces", 1),
        roughness=s.get("roughness"),
        tangential_stiffness=s.get("tangential_stiffness"),
        pressure=s.get("pressure"),
        run_in_friction=s.get("run_in_friction"),
        plate_shear=s.get("plate_shear", True),
    )


def _required(r: Reader, s: Section) -> Required:
    """[required]; the factors of practice where the file is silent."""
    values = {}
    for name, default in (("static", 1.2), ("alternating", 1.8)):
        if not s.has(name):
            r.assume("required-factor", f"required factor {default} for {name} cases (practice)", f"required.{name}")
        values[name] = s.get(name, default)
    decides, reason = s.get("decides", "per bolt"), s.get("decides_reason", "")
    if decides == "group" and not reason.strip():
        expected, write = "the reason why the group may decide", 'add decides_reason = ".." in your words'
        raise s.stop("decides_reason", "missing-key", "nothing", expected, write)
    grows = s.get("grows", "all loads")
    return Required(values["static"], values["alternating"], decides, reason, grows, s.get("true_slip"))


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
