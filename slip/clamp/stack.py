"""The springs of the joint: the bolt at its stiffest and softest reading, the plates round every bolt."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.notes import Note
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp import springs as spring
from slip.clamp import thread as screw
from slip.joint.joint import Joint
from slip.joint.plates import clamped
from slip.joint.tightening import Rises

Array = np.ndarray
SLENDER = (0.5, 10.0)  # grip over bearing diameter in which the slope of the cone was fitted (memory)


@record(eq=False)
class Springs:
    """Compliances in mm/N: the bolt's stiffest and softest reading, the plates' per bolt (n,), the frustum's second opinion."""

    bolt_stiff: float
    bolt_soft: float
    plates: Array
    frustum: float | None


def joint_springs(joint: Joint, trace: Trace, notes: list[Note]) -> Springs | None:
    """Springs of bolt and plates, or None when no answer of this file needs them or the file does not describe them."""
    bolt, plates = joint.bolt, clamped(joint.plates, joint.bolt.tapped)
    if not _springs_needed(joint):
        return None
    known = bolt.thread and bolt.bearing_diameter and bolt.hole_diameter and all(p.material for p in joint.plates)
    if not plates or not known:
        return None
    thicknesses, moduli = _stack(joint)
    stiff, soft = _bolt_compliances(joint, float(sum(thicknesses)), trace, notes)
    d_w, d_h = bolt.bearing_diameter, bolt.hole_diameter
    assert d_w is not None and d_h is not None and bolt.thread is not None
    limits = _body_diameters(joint, trace, notes)
    body = np.maximum(limits, d_w)  # a bearing face that overhangs its edge is taken as a sleeve of its own width
    if not SLENDER[0] <= sum(thicknesses) / d_w <= SLENDER[1]:
        said = f"grip over bearing diameter {sum(thicknesses) / d_w:.3g} is outside {SLENDER[0]} to {SLENDER[1]:g}, the cone's range"
        notes.append(Note("cone-range", said, "plate.thickness"))
    compliance = _plate_compliance(thicknesses, moduli, d_w, d_h, body, bolt.tapped, trace)
    frustum = None
    if not bolt.tapped:
        frustum = float(spring.frustum_compliance(thicknesses, moduli, d_w, d_h))
        trace.given(
            "the same by 30 degree frusta, for comparison", "delta_P30", frustum, "mm/N", "shigley9", "published"
        )
    return Springs(stiff, soft, compliance * np.ones(joint.pattern.count), frustum)


def _springs_needed(joint: Joint) -> bool:
    """Whether embedding, unequal warming or the bolt's share of an axial load is to be worked out from springs."""
    losses, axial = joint.losses, joint.axial
    pulled = any(case.pulls for case in joint.cases)
    shared = axial.load_introduction is not None or (axial.bolt_share is None and pulled)
    return losses.embedding_force is None or isinstance(losses.thermal, Rises) or shared


def _plate_compliance(
    thicknesses: list[float], moduli: list[float], d_w: float, d_h: float, body: Array, tapped: bool, trace: Trace
) -> Array:
    """Compliance of the layers round each bolt, (n,), recorded slice by slice."""
    ratio = trace("body over bearing diameter", spring.body_ratio, D_A=body, d_w=d_w)
    function = spring.cone_slope_tapped if tapped else spring.cone_slope_nut
    slope = trace("slope of the deformation cone", function, beta_L=sum(thicknesses) / d_w, y=ratio)
    terms: dict[str, Any] = {}
    for piece in spring.slices(thicknesses, moduli, d_w, d_h, body, slope, tapped):
        if not np.any(np.asarray(piece.length) > 1e-9 * sum(thicknesses)):
            continue  # the layer has no slice of this kind
        name = f"{piece.kind} {len(terms) + 1}"
        if piece.kind == "cone":
            values = {"D_0": piece.diameter, "length": piece.length, "slope": slope, "d_h": d_h, "E": piece.E}
            terms[f"delta_{len(terms) + 1}"] = trace(name, spring.cone_slice, **values)
        else:
            values = {"D_A": piece.diameter, "length": piece.length, "d_h": d_h, "E": piece.E}
            terms[f"delta_{len(terms) + 1}"] = trace(name, spring.sleeve_slice, **values)
    return np.asarray(trace.total("plate compliance", "delta_P", terms, "mm/N", "vdi2230", "memory"))


def _stack(joint: Joint) -> tuple[list[float], list[float]]:
    """Thickness and modulus of every clamped layer from the head down, washers included."""
    head, nut = joint.bolt.washers
    steel = joint.bolt.material.youngs_modulus
    layers = [(head, steel)]
    layers += [(p.thickness, p.material.youngs_modulus) for p in clamped(joint.plates, joint.bolt.tapped) if p.material]
    layers += [(nut, steel)]
    layers = [layer for layer in layers if layer[0] > 0]
    return [t for t, _ in layers], [e for _, e in layers]


def _body_diameters(joint: Joint, trace: Trace, notes: list[Note]) -> Array:
    """Diameter of the body round each bolt, (n,): the circle inside every outline and up to the neighbour's."""
    outlines = [p.outline for p in joint.plates if p.outline is not None]
    if not outlines:
        notes.append(Note("no-outline", "plates without outline: edges do not limit the springs", "plate.outline"))
        return joint.pattern.spacing
    edge = np.min([o.edge_distance(joint.pattern.positions) for o in outlines], axis=0)
    body: Array = trace(
        "body diameter round the bolt", spring.body_diameter, edge_distance=edge, bolt_spacing=joint.pattern.spacing
    )
    return body


def _bolt_compliances(joint: Joint, grip: float, trace: Trace, notes: list[Note]) -> tuple[float, float]:
    """Compliance of the bolt at its stiffest and softest reading; alike when the pieces are given."""
    bolt = joint.bolt
    thread, E = bolt.thread, bolt.material.youngs_modulus
    assert thread is not None and bolt.shank_diameter is not None
    nominal = trace("nominal area", screw.round_area, d=thread.diameter)
    d3 = trace("minor diameter", screw.minor_diameter, d=thread.diameter, P=thread.pitch)
    core = trace("core area", screw.round_area, d=d3)
    head = spring.socket_head_compliance if bolt.head == "socket" else spring.hexagon_head_compliance
    ends = {
        "delta_head": trace("head", head, d=thread.diameter, E=E, A_N=nominal),
        "delta_thread": trace("engaged thread", spring.engaged_thread_compliance, d=thread.diameter, E=E, A_d3=core),
    }
    if bolt.tapped:
        last = joint.plates[-1].material
        assert last is not None
        values = {"d": thread.diameter, "E": last.youngs_modulus, "A_N": nominal}
        ends["delta_hole"] = trace("tapped hole", spring.tapped_hole_compliance, **values)
    else:
        ends["delta_nut"] = trace("nut", spring.nut_compliance, d=thread.diameter, E=E, A_N=nominal)

    def piece(name: str, length: float, diameter: float) -> float:
        area = trace(f"{name}, area", screw.round_area, d=diameter)
        return float(trace(name, spring.piece_compliance, length=length, E=E, A=area))

    if bolt.segments:
        for i, s in enumerate(bolt.segments):
            ends[f"delta_{i + 1}"] = piece(f"piece {i + 1} in the grip", s.length, s.diameter)
        stiff = soft = float(trace.total("bolt compliance", "delta_S", ends, "mm/N", "vdi2230", "memory"))
    else:
        notes.append(
            Note("shank-unknown", "shank length open: stiffest bolt for losses, softest for its share", "bolt.segment")
        )
        readings = sorted((piece("grip all shank", grip, bolt.shank_diameter), piece("grip all thread", grip, d3)))
        stiff, soft = (
            float(
                trace.total(
                    f"bolt compliance, {word} reading",
                    "delta_S",
                    {**ends, "delta_grip": r},
                    "mm/N",
                    "vdi2230",
                    "memory",
                )
            )
            for word, r in zip(("stiffest", "softest"), readings, strict=True)
        )
    return stiff, soft
