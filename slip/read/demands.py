"""Builders that joints and pressed contacts share: the sliding face, and what the result must reach."""

from __future__ import annotations

from slip.joint.joint import Required
from slip.joint.surface import Interface
from slip.read.forms import Friction
from slip.read.reader import Reader
from slip.read.sections import Section


def interface(r: Reader, s: Section, known: bool = False) -> Interface:
    """[interface]; friction is never assumed. known: whether its pressure is what presses."""
    write = 'add friction = [lowest, highest], or friction = { pair = "steel / steel" }'
    friction: Friction = s.need("friction", "the friction of the sliding face, which is never assumed", write)
    if s.has("pressure") and not known:
        expected = "no pressure beside bolts or a contact force, which make it"
        raise s.stop_value("pressure", "pressure-twice", expected, "remove pressure, or the tables of what presses")
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


def required(r: Reader, s: Section) -> Required:
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
