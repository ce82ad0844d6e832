"""Before any load: the preload of each bolt, the springs, and what is lost."""

from __future__ import annotations

import numpy as np

from slip.base.notes import Note
from slip.base.records import record
from slip.base.tables import number, table
from slip.base.trace import Trace
from slip.clamp import losses as loss
from slip.clamp import scatter as spread
from slip.clamp import springs as spring
from slip.clamp import thread as screw
from slip.clamp import tightening as tight
from slip.clamp.stack import Springs, joint_springs
from slip.joint.bolt import Bolt, Thread
from slip.joint.joint import Joint
from slip.joint.plates import clamped
from slip.joint.tightening import Preload, Rises, Torque

Array = np.ndarray


@record(eq=False)
class Assembly:
    """The bolts without load, each array (n,): assembly preload low, nominal, high [N] and which statement set its ends;
    embedding, relaxation, thermal loss and gain [N]; the bolt's share of an axial load, low and high end."""

    low: Array
    nominal: Array
    high: Array
    low_from: str
    high_from: str
    embedding: Array
    relaxation: Array
    thermal_loss: Array
    thermal_gain: Array
    share_low: Array
    share_high: Array
    springs: Springs | None
    trace: Trace
    assumptions: tuple[Note, ...]


def assemble(joint: Joint) -> Assembly:
    """Preload, springs and losses of every bolt of a joint."""
    trace, notes = Trace(), list[Note]()
    n = joint.pattern.count
    low, nominal, high, low_from, high_from = _preload(joint, trace)
    springs = joint_springs(joint, trace, notes)
    embedding = _embedding(joint, springs, trace, notes) * np.ones(n)
    relaxation = trace("relaxation", loss.relaxation_loss, share=joint.losses.relaxation, F=low)
    change = _thermal(joint, springs, trace) * np.ones(n)
    share_low, share_high = _shares(joint, springs, trace, notes)
    return Assembly(
        low=low,
        nominal=nominal,
        high=high,
        low_from=low_from,
        high_from=high_from,
        embedding=embedding,
        relaxation=relaxation,
        thermal_loss=np.maximum(change, 0.0),
        thermal_gain=np.maximum(-change, 0.0),
        share_low=share_low * np.ones(n),
        share_high=share_high * np.ones(n),
        springs=springs,
        trace=trace,
        assumptions=tuple(notes),
    )


def stress_area(thread: Thread, trace: Trace) -> float:
    """Tensile stress area [mm^2] of a metric or unified thread."""
    if thread.unified:
        return float(trace("stress area", screw.stress_area_unified, d=thread.diameter, P=thread.pitch))
    d2 = trace("pitch diameter", screw.pitch_diameter, d=thread.diameter, P=thread.pitch)
    d3 = trace("minor diameter", screw.minor_diameter, d=thread.diameter, P=thread.pitch)
    return float(trace("stress area", screw.stress_area, d2=d2, d3=d3))


def _preload(joint: Joint, trace: Trace) -> tuple[Array, Array, Array, str, str]:
    """Low, nominal and high preload of every bolt, and the words for what set low and high."""
    if isinstance(joint.tightening, Preload):
        given = joint.tightening
        nominal = (given.low + given.high) / 2 if given.nominal is None else given.nominal
        words = "preload as given" if given.scatter is None else f"nominal preload, {given.scatter.text}"
        trace.given("lowest preload", "F_low", given.low, "N", "file", "given")
        trace.given("highest preload", "F_high", given.high, "N", "file", "given")
        return given.low, nominal, given.high, words, words
    low, nominal, high, low_from, high_from = _preload_from_torque(joint.tightening, joint.bolt, trace)
    ones = np.ones(joint.pattern.count)
    return low * ones, nominal * ones, high * ones, low_from, high_from


def _preload_from_torque(t: Torque, bolt: Bolt, trace: Trace) -> tuple[float, float, float, str, str]:
    thread = bolt.thread
    assert thread is not None
    drag_low, drag_high = t.prevailing
    if t.nut_factor is not None:
        friction_low, friction_high = t.nut_factor

        def preload(name: str, torque: float, where: float) -> float:
            factor = friction_low + where * (friction_high - friction_low)
            return float(trace(name, tight.preload_from_nut_factor, T=torque, K=factor, d=thread.diameter))
    else:
        assert t.thread_friction and t.head_friction and bolt.bearing_diameter and bolt.hole_diameter
        d2 = trace("pitch diameter", screw.pitch_diameter, d=thread.diameter, P=thread.pitch)
        mean = trace(
            "friction diameter", tight.bearing_friction_diameter, d_w=bolt.bearing_diameter, d_h=bolt.hole_diameter
        )

        def preload(name: str, torque: float, where: float) -> float:
            assert t.thread_friction and t.head_friction
            th, b = ((1 - where) * low + where * high for low, high in (t.thread_friction, t.head_friction))
            return float(
                trace(name, tight.preload_from_torque, T=torque, P=thread.pitch, d2=d2, mu_th=th, D_km=mean, mu_b=b)
            )

    nominal = preload("nominal preload, middle friction", t.torque - (drag_low + drag_high) / 2, 0.5)
    if t.tool_accuracy is not None:
        a = t.tool_accuracy
        low = preload("lowest preload, tool low, friction high", t.torque * (1 - a) - drag_high, 1.0)
        high = preload("highest preload, tool high, friction low", t.torque * (1 + a) - drag_low, 0.0)
        return max(low, 0.0), nominal, high, "tool accuracy and high friction", "tool accuracy and low friction"
    scatter = t.scatter
    assert scatter is not None
    by_friction = preload("preload at high friction", t.torque - drag_high, 1.0)
    middle = preload("preload at middle friction, high drag", t.torque - drag_high, 0.5)
    by_scatter = float(trace("preload at low end of scatter", spread.lowest_of_scatter, F=middle, t=scatter.bound))
    by_friction_high = preload("preload at low friction", t.torque - drag_low, 0.0)
    middle = preload("preload at middle friction, low drag", t.torque - drag_low, 0.5)
    by_scatter_high = float(
        trace("preload at high end of scatter", spread.highest_of_scatter, F=middle, t=scatter.bound)
    )
    low = float(trace("lowest preload", spread.lower_of, F_scatter=by_scatter, F_friction=by_friction))
    high = float(trace("highest preload", spread.higher_of, F_scatter=by_scatter_high, F_friction=by_friction_high))
    said = f"scatter {scatter.bound:.0%}"
    return (
        low,
        nominal,
        high,
        said if by_scatter <= by_friction else "high friction",
        said if by_scatter_high >= by_friction_high else "low friction",
    )


def _embedding(joint: Joint, springs: Springs | None, trace: Trace, notes: list[Note]) -> Array:
    """Force lost by embedding, per bolt or alike."""
    losses = joint.losses
    if losses.embedding_force is not None:
        return np.asarray(trace.given("embedding", "F_Z", losses.embedding_force, "N", "file", "given"))
    assert springs is not None
    length = losses.embedding_length
    if length is None:
        length = _embedding_length(joint, trace, notes)
    else:
        trace.given("embedding length", "f_Z", length, "mm", "file", "given")
    lost: Array = trace(
        "embedding, stiffest bolt", loss.embedding_force, f_Z=length, delta_S=springs.bolt_stiff, delta_P=springs.plates
    )
    return lost


def _embedding_length(joint: Joint, trace: Trace, notes: list[Note]) -> float:
    """Embedding length [mm] by the table, from the rougher face; the roughest row when no roughness is given."""
    rows = table("embedding")
    if joint.interface.roughness is None:
        rz = max(number(row, "rz_from[um]") for row in rows)
        notes.append(Note("embedding-rough", "no roughness: the roughest row of embedding", "interface.roughness"))
    else:
        rz = max(_rz(r.label, 1e3 * r.value, trace) for r in joint.interface.roughness)
    band = [r for r in rows if number(r, "rz_from[um]") <= rz < number(r, "rz_to[um]")]
    if not band:
        notes.append(
            Note("embedding-beyond", f"Rz {rz:.3g} um is rougher than the table: its last row", "interface.roughness")
        )
        band = [r for r in rows if number(r, "rz_to[um]") == max(number(q, "rz_to[um]") for q in rows)]
    values = {
        r["where"]: 1e-3 * number(r, "shear[um]") if r["shear[um]"] else 1e-3 * number(r, "axial[um]") for r in band
    }
    washers = sum(1 for w in joint.bolt.washers if w > 0)
    return float(
        trace(
            "embedding length",
            loss.embedding_length,
            n_thread=1,
            f_thread=values["thread"],
            n_bearing=1 if joint.bolt.tapped else 2,
            f_bearing=values["bearing"],
            n_inner=len(joint.plates) - 1 + washers,
            f_inner=values["inner"],
        )
    )


def _rz(label: str, value: float, trace: Trace) -> float:
    """Rz [um] of a roughness given as Ra, Rq or Rz."""
    if label == "Rz":
        return value
    if label == "Ra":
        return float(trace("Rz of a face", loss.rz_from_ra, Ra=value))
    return float(trace("Rz of a face", loss.rz_from_rq, Rq=value))


def _thermal(joint: Joint, springs: Springs | None, trace: Trace) -> Array:
    """Preload lost (positive) or gained by the rises; a given loss as it is."""
    thermal = joint.losses.thermal
    if not isinstance(thermal, Rises):
        return np.asarray(trace.given("thermal loss", "F_th", thermal or 0.0, "N", "file", "given"))
    assert springs is not None
    bolt = joint.bolt
    plates = clamped(joint.plates, bolt.tapped)
    thicknesses = [*bolt.washers, *(p.thickness for p in plates)]
    expansions = [bolt.material.expansion] * 2 + [p.material.expansion for p in plates if p.material]
    rises = [thermal.bolt] * 2 + list(thermal.plates[: len(plates)])
    growth = float(loss.stack_growth(thicknesses, expansions, rises))
    change: Array = trace(
        "thermal change, loss positive",
        loss.thermal_change,
        l_K=float(sum(thicknesses)),
        alpha_S=bolt.material.expansion,
        dT_S=thermal.bolt,
        stack_growth=growth,
        delta_S=springs.bolt_stiff,
        delta_P=springs.plates,
    )
    return change


def _shares(joint: Joint, springs: Springs | None, trace: Trace, notes: list[Note]) -> tuple[Array, Array]:
    """The bolt's share of an axial load: low end (it relieves the clamp most), high end (it loads the bolt most)."""
    axial = joint.axial
    if axial.bolt_share is not None:
        low, high = (np.asarray(share) for share in axial.bolt_share)
    elif springs is None:
        low, high = np.asarray(0.0), np.asarray(1.0)
    else:
        n = axial.load_introduction
        low = np.asarray(0.0)
        if n is not None:
            low = trace(
                "bolt share, softest bolt", spring.bolt_share, delta_S=springs.bolt_soft, delta_P=springs.plates, n=n
            )
        high = trace(
            "bolt share, stiffest bolt",
            spring.bolt_share,
            delta_S=springs.bolt_stiff,
            delta_P=springs.plates,
            n=1.0 if n is None else n,
        )
        return low, high
    source, basis = ("file", "given") if axial.bolt_share is not None else ("practice", "practice")
    trace.given("bolt share, low end", "Phi", low, "", source, basis)
    trace.given("bolt share, high end", "Phi_high", high, "", source, basis)
    return low, high
