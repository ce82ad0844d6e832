"""The inputs of a joint in words, as names and values in the reader's units."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.base.units import UNITS, System
from slip.joint.bolt import Bolt
from slip.joint.joint import Axial, Joint, Required
from slip.joint.loads import Case
from slip.joint.material import Material
from slip.joint.plates import Plate, Rectangle, Ring
from slip.joint.surface import Interface
from slip.joint.tightening import Losses, Preload, Rises, Scatter, Torque
from slip.report.words import plain

Pair = tuple[str, str]
TEXT = 300  # characters of a text that the file gives


@record
class Group:
    """One heading of the inputs with its names and values."""

    title: str
    pairs: tuple[Pair, ...]


def groups(joint: Joint, system: System) -> list[Group]:
    """Everything that the joint's records say, apart from plates, positions and load cases, which are tables."""
    found = (
        ("Sliding face", interface_pairs(joint.interface, system)),
        ("Bolt", _bolt(joint.bolt, system)),
        ("Tightening", _tightening(joint.tightening, system)),
        ("Losses", _losses(joint.losses, system)),
        ("Bolt pattern", _pattern(joint, system)),
        ("Axial load", _axial(joint.axial, system)),
        ("Required", _required(joint.required, system)),
    )
    return [Group(title, tuple(pair for pair in pairs if pair[1])) for title, pairs in found]


def share(value: float) -> str:
    """A share in per cent."""
    return f"{100 * value:.6g} %"


def between(low: str, high: str) -> str:
    """A range, or its one value."""
    return low if low == high else f"{low} to {high}"


def _range(pair: tuple[float, float] | None) -> str:
    return between(*(f"{x:g}" for x in pair)) if pair else ""


def _said(value: float | None, kind: str, system: System) -> str:
    return "" if value is None else system.say(value, kind)


def interface_pairs(face: Interface, system: System) -> list[Pair]:
    """What the sliding face says."""
    micro = "um" if system.length == "mm" else "uin"
    rough = [f"{r.label} {r.value / UNITS[micro][0]:.6g} {micro}" for r in face.roughness or ()]
    stiffness = face.tangential_stiffness
    return [
        ("friction that can be defended", _range((face.friction_low, face.friction_high))),
        ("source of the friction", plain(face.friction_source, TEXT)),
        ("basis of the friction", face.friction_basis),
        ("faces that share the load side by side", str(face.parallel_faces)),
        ("roughness of the two faces", ", ".join(rough)),
        (
            "tangential stiffness per area",
            between(*(system.say(x, "stiffness per area") for x in stiffness)) if stiffness else "",
        ),
        ("friction after running in", "" if face.run_in_friction is None else f"{face.run_in_friction:g}"),
    ]


def _bolt(bolt: Bolt, system: System) -> list[Pair]:
    thread, grade = bolt.thread, bolt.grade
    strengths = ""
    if grade:
        words = (("yield", grade.yield_strength), ("tensile", grade.tensile_strength))
        strengths = ", ".join(f"{word} {system.say(value, 'pressure')}" for word, value in words)
    pieces = [f"{system.say(s.diameter, 'length')} over {system.say(s.length, 'length')}" for s in bolt.segments]
    washers = [system.say(w, "length") for w in bolt.washers]
    return [
        (
            "thread",
            f"{thread.designation}, pitch {system.say(thread.pitch, 'length')} ({thread.basis})" if thread else "",
        ),
        ("grade", f"{plain(grade.name)} ({grade.basis})" if grade else ""),
        ("strength", strengths),
        ("head", bolt.head),
        ("bearing diameter under the head", _said(bolt.bearing_diameter, "length", system)),
        ("hole diameter", _said(bolt.hole_diameter, "length", system)),
        ("shank diameter", _said(bolt.shank_diameter, "length", system)),
        ("pieces in the grip, diameter over length", ", ".join(pieces)),
        ("far end", "tapped hole" if bolt.tapped else "nut"),
        ("washers under head and nut", ", ".join(washers) if any(bolt.washers) else ""),
        ("material of bolt and washers", material_said(bolt.material, system)),
    ]


def material_said(material: Material, system: System) -> str:
    """A material's name, modulus and basis."""
    return f"{plain(material.name)}, {system.say(material.youngs_modulus, 'pressure')} ({material.basis})"


def _scatter(scatter: Scatter | None) -> str:
    if scatter is None:
        return ""
    return f"plus and minus {share(scatter.bound)}, {plain(scatter.text, TEXT)} ({scatter.basis})"


def _tightening(given: Torque | Preload, system: System) -> list[Pair]:
    if isinstance(given, Preload):
        return [
            ("lowest preload after assembly", _spread(given.low, system)),
            ("highest preload after assembly", _spread(given.high, system)),
            ("nominal preload", _spread(given.nominal, system) if given.nominal is not None else ""),
            ("scatter", _scatter(given.scatter)),
            ("friction in the thread, for torsion", _range(given.thread_friction)),
            ("source", plain(given.source, TEXT)),
        ]
    drag = between(*(system.say(x, "moment") for x in given.prevailing)) if any(given.prevailing) else ""
    return [
        ("torque", system.say(given.torque, "moment")),
        ("friction in the thread", _range(given.thread_friction)),
        ("friction under the head", _range(given.head_friction)),
        ("nut factor", _range(given.nut_factor)),
        ("prevailing torque", drag),
        ("scatter", _scatter(given.scatter)),
        ("accuracy of the tool", share(given.tool_accuracy) if given.tool_accuracy is not None else ""),
        ("source", plain(given.source, TEXT)),
    ]


def _spread(values: np.ndarray, system: System) -> str:
    return between(*(system.say(float(x), "force") for x in (values.min(), values.max())))


def _losses(losses: Losses, system: System) -> list[Pair]:
    embedding = "by the table"
    if losses.embedding_force is not None:
        embedding = system.say(losses.embedding_force, "force")
    elif losses.embedding_length is not None:
        embedding = system.say(losses.embedding_length, "length")
    thermal = "none"
    if isinstance(losses.thermal, Rises):
        rises = ", ".join(system.say(x, "temperature rise") for x in losses.thermal.plates)
        thermal = f"rise of the bolt {system.say(losses.thermal.bolt, 'temperature rise')}, of the plates {rises}"
    elif losses.thermal:
        thermal = system.say(losses.thermal, "force")
    return [
        ("embedding", embedding),
        ("relaxation", f"{share(losses.relaxation)} of the preload"),
        ("thermal", thermal),
    ]


def _pattern(joint: Joint, system: System) -> list[Pair]:
    pattern = joint.pattern
    size = " by ".join(system.say(float(x), "length") for x in np.ptp(pattern.positions, axis=0))
    centroid = ", ".join(system.say(float(x) + 0.0, "length") for x in pattern.centroid)
    return [("bolts", str(pattern.count)), ("size, x by y", size if pattern.count > 1 else ""), ("centroid", centroid)]


def _axial(axial: Axial, system: System) -> list[Pair]:
    model = axial.model_bolt_share
    return [
        ("what an axial force is", axial.meaning or "external"),
        ("the bolt's share of it", between(*(share(x) for x in axial.bolt_share)) if axial.bolt_share else ""),
        ("load introduction", "" if axial.load_introduction is None else f"{axial.load_introduction:g}"),
        ("compression credited", "yes" if axial.credit_compression else "no"),
        ("preload in the model", _said(axial.model_preload, "force", system)),
        ("bolt share in the model", "" if model is None else share(model)),
    ]


def _required(required: Required, system: System) -> list[Pair]:
    grows = "all loads, axial included" if required.grows == "all loads" else "the shear, with the clamp held"
    return [
        ("factor of static cases", f"{required.static:g}"),
        ("factor of alternating cases", f"{required.alternating:g}"),
        ("which factor decides", required.decides),
        ("what the factor multiplies", grows),
        ("limit of true slip", _said(required.true_slip, "length", system)),
    ]


def plate_row(plate: Plate, system: System) -> list[str]:
    """Name, material, modulus, thickness, outline of a plate, units in each cell."""
    material = plate.material
    return [
        plain(plate.name) or "-",
        f"{plain(material.name)} ({material.basis})" if material else "-",
        system.say(material.youngs_modulus, "pressure") if material else "-",
        system.say(plate.thickness, "length"),
        _outline(plate.outline, system),
    ]


def _outline(outline: Rectangle | Ring | None, system: System) -> str:
    def say(value: float) -> str:
        return f"{system.out(value, 'length'):.6g}"

    if isinstance(outline, Rectangle):
        return f"({say(outline.x0)}, {say(outline.y0)}) to ({say(outline.x1)}, {say(outline.y1)}) {system.length}"
    if isinstance(outline, Ring):
        hole = f", hole {say(outline.inner_diameter)}" if outline.inner_diameter else ""
        return f"diameter {say(outline.outer_diameter)}{hole} {system.length}"
    return "-"


def load_heads(system: System) -> list[str]:
    """Heads of the rows that `load_rows` makes."""
    force, moment = f"[{system.force}]", f"[{system.unit('moment')}]"
    heads = ["case", "end", "kind", "acts on", f"at x, y [{system.length}]"]
    heads += [f"{word} {force}" for word in ("shear x", "shear y", "axial")]
    heads += [f"{word} {moment}" for word in ("moment x", "moment y", "moment normal")]
    return [*heads, f"own thermal loss {force}"]


def load_rows(case: Case, system: System) -> list[list[str]]:
    """A row for each end of a case: case, kind, end, what it acts on, where, shear x y, axial, couples x y z, thermal loss."""
    kind = "static" if not case.alternating else "alternating, unsigned" if case.unsigned else "alternating"
    at = "centroid" if case.at is None else ", ".join(f"{system.out(x, 'length'):.6g}" for x in case.at)
    if case.height is not None:
        at += f", z {system.out(case.height, 'length'):.6g}"
    thermal = "-" if case.thermal is None else f"{system.out(case.thermal, 'force'):.6g}"
    where = ["each bolt", "-"] if case.each_bolt else ["joint", at]
    rows = []
    for end, load in case.ends:
        forces = [f"{system.out(x, 'force') + 0.0:.6g}" for x in (*load.shear, load.axial)]
        couples = [f"{system.out(x, 'moment') + 0.0:.6g}" for x in load.moment]
        rows.append([plain(case.name), end, kind, *where, *forces, *couples, thermal])
    return rows
