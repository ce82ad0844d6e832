"""From a document to a Joint: each table by its builder, each default listed where it is taken, all faults together."""

from __future__ import annotations

from pathlib import Path
from typing import TypeVar

from slip.base.notes import Note
from slip.joint.joint import Joint, Required, Standard
from slip.joint.surface import Interface
from slip.read import assembly, hardware, loading
from slip.read.document import Document, load, parse
from slip.read.forms import Friction
from slip.read.reader import Reader
from slip.read.schema import KEYS, TABLES
from slip.read.sections import Section, many, one

T = TypeVar("T")
CONTACT = "pressed contacts are not assessed yet"


def read(path: str | Path) -> Joint:
    """The joint of a TOML file. Raises Problems with every fault that could be found."""
    return build(load(path))


def read_text(text: str, file: str = "joint") -> Joint:
    """The joint of a TOML text, for scripts and tests; files that it names are looked for in the working directory."""
    return build(parse(text.encode(), file, Path()))


def build(document: Document) -> Joint:
    """The joint of a parsed document."""
    r = Reader(document)
    top = Section(r, (), "", document.tree)
    r.attempt(lambda: top.need("format", "the version of the file format", "add format = 1 at the top"))
    tables = {name: one(r, name) for name in TABLES if name and not name.endswith("]")}
    if "contact" in document.tree or "body" in document.tree:
        r.fail(("contact",), "contact-not-yet", "a pressed contact", "a joint with bolts", CONTACT)
        r.finish()
    bolts = r.attempt(lambda: hardware.pattern(r, tables["pattern"]))
    pattern = bolts.pattern if bolts else None
    bolt = r.attempt(lambda: hardware.bolt(r, tables["bolt"]))
    plates = r.attempt(lambda: hardware.plates(r, pattern, bolt))
    tightening = r.attempt(lambda: assembly.tightening(r, tables["tightening"], bolts, bolt))
    losses = r.attempt(lambda: assembly.losses(r, tables["losses"], plates, bolt))
    interface = r.attempt(lambda: _interface(r, tables["interface"]))
    required = r.attempt(lambda: _required(r, tables["required"]))
    cases = r.attempt(lambda: loading.cases(r, pattern))
    axial = r.attempt(lambda: loading.axial(r, tables["axial"], plates, bolt, cases))
    standards = r.attempt(lambda: _standards(r))
    r.finish()
    _say_unused(r)
    return Joint(
        title=top.get("title", ""),
        system=r.system,
        bolt=_there(bolt),
        tightening=_there(tightening),
        losses=_there(losses),
        plates=_there(plates),
        interface=_there(interface),
        pattern=_there(pattern),
        axial=_there(axial),
        required=_there(required),
        standards=_there(standards),
        cases=_there(cases),
        loosening_limit=bool(tables["loosening"].get("limit", False)),
        assumptions=tuple(r.assumptions),
        warnings=tuple(r.warnings),
        digest="+".join(part for part in (document.digest, bolts.digest if bolts else "") if part),
        file=document.file,
    )


def _there(part: T | None) -> T:
    """A part that was built; `finish` has already raised when it was not."""
    assert part is not None, "a part stopped without a recorded fault"
    return part


def _interface(r: Reader, s: Section) -> Interface:
    write = 'add friction = [lowest, highest], or { pair = "steel / steel" }'
    friction: Friction = s.need("friction", "of the sliding face; it is never assumed", write)
    if s.has("pressure"):
        expected = "bolts that clamp"
        raise s.stop_value(
            "pressure", "face-not-yet", expected, "a face of known pressure without bolts is not assessed yet"
        )
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
    values = {}
    for name, default in (("static", 1.2), ("alternating", 1.8)):
        if not s.has(name):
            r.assume(f"required-{name}", f"required factor {default} for {name} cases (practice)", f"required.{name}")
        values[name] = s.get(name, default)
    decides, reason = s.get("decides", "per bolt"), s.get("decides_reason", "")
    if decides == "group" and not reason.strip():
        raise s.stop(
            "decides_reason", "missing-key", "nothing", "a reason why the group may decide", 'add decides_reason = ".."'
        )
    return Required(
        values["static"], values["alternating"], decides, reason, s.get("grows", "all loads"), s.get("true_slip")
    )


def _standards(r: Reader) -> tuple[Standard, ...]:
    standards = []
    for s in many(r, "standard", "standard[]"):
        name = s.need("name", "of the standard", 'add name = "EN 1993-1-8"')
        options = {key: s.get(key) for key in s.raw if key not in ("name", "to_standard_level")}
        standards.append(Standard(name, "", options, s.get("to_standard_level")))
    names = [s.name for s in standards]
    return tuple(
        Standard(s.name, f"{s.name} ({i + 1})" if names.count(s.name) > 1 else s.name, s.options, s.to_standard_level)
        for i, s in enumerate(standards)
    )


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
        r.warnings.append(Note("not-used-yet", f"read and checked, not used yet: {', '.join(unused)}", unused[0]))
