"""The clamp ledger: for every load state and bolt the lowest clamp and the highest, with all that lies between."""

from __future__ import annotations

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp import losses as loss
from slip.clamp import thread as screw
from slip.clamp import tightening as tight
from slip.clamp import working
from slip.clamp.assembly import Assembly, assemble, stress_area
from slip.clamp.states import States, states
from slip.joint.joint import Joint

Array = np.ndarray
TORSION_FRICTION = (
    0.20  # thread friction for the torsion when the file gives none: high, since more is worse (practice)
)
FREE_THREAD = 0.01  # a piece of the bolt this near to the minor diameter is thread: its stress area counts


@record(eq=False)
class Ledger:
    """Arrays (S, n) in N over states and bolts; yield_use is a share, None without a grade; bearing_pressure in MPa, None
    where the bearing face is not known. relief: clamp taken by the axial load, negative where compression is credited."""

    preload_low: Array
    relaxation: Array
    thermal_loss: Array
    thermal_gain: Array
    relief: Array
    clamp_without_axial: Array
    clamp_low: Array
    clamp_high: Array
    bolt_force_high: Array
    yield_use: Array | None
    bearing_pressure: Array | None
    separation_factor: Array
    open: Array
    trace: Trace


@record(eq=False)
class Clamp:
    """What the clamp stage found: the bolts before load, the load states, the ledger, and what must be said."""

    assembly: Assembly
    states: States
    ledger: Ledger
    assumptions: tuple[Note, ...]
    warnings: tuple[Note, ...]


def clamp(joint: Joint, loaded: States | None = None) -> Clamp:
    """The clamp stage of a joint, under its own cases or under `loaded`.

    Raises Problems for a lowest preload that no bolt of the grade can carry.
    """
    assembly = assemble(joint)
    refuse_impossible(joint, assembly)
    loaded = states(joint) if loaded is None else loaded
    notes: list[Note] = []
    result = ledger(joint, assembly, loaded, notes)
    assumptions = (*assembly.assumptions, *notes)
    return Clamp(assembly, loaded, result, assumptions, tuple(warnings(joint, assembly, highest(result))))


def ledger(joint: Joint, assembly: Assembly, loaded: States, notes: list[Note], keep: bool = True) -> Ledger:
    """The ledger of every state and bolt; keep=False leaves the record of the calculation out."""
    trace = Trace(keep=keep)
    ones = np.ones_like(loaded.axial)
    thermal_loss, gain = _thermal(assembly, loaded)
    trace.given("thermal loss", "F_th", thermal_loss, "N", "statics", "derived")
    trace.given("thermal gain, not credited to the lowest clamp", "F_gain", gain, "N", "statics", "derived")
    preload, relaxation = _own_preload(joint, assembly, loaded, trace)
    kept = {"F_low": preload, "F_Z": assembly.embedding, "F_R": relaxation, "F_th": thermal_loss}
    without = trace("lowest clamp without the axial load", working.clamp_without_axial, **kept)
    relief, external = _relief(joint, assembly, loaded, without, trace)
    low = trace("lowest clamp", working.clamp_low, **kept, relief=relief)
    top = {"F_high": np.maximum(assembly.high, preload), "F_gain": gain}
    if joint.axial.credit_compression:
        high = trace("highest clamp, compression credited", working.clamp_high_credited, **top, relief=relief)
    else:
        high = trace("highest clamp", working.clamp_high, **top)
    force = trace(
        "highest bolt force",
        working.bolt_force_high,
        **top,
        Phi=assembly.share_high,
        F_ax=external,
    )
    return Ledger(
        preload_low=preload * ones,
        relaxation=relaxation * ones,
        thermal_loss=thermal_loss * ones,
        thermal_gain=gain * ones,
        relief=relief,
        clamp_without_axial=without * ones,
        clamp_low=low,
        clamp_high=high * ones,
        bolt_force_high=force,
        yield_use=_yield_use(joint, assembly, force, trace, notes),
        bearing_pressure=_bearing_pressure(joint, force, trace),
        separation_factor=trace("separation factor", working.separation_factor, clamp_0=without, relief=relief),
        open=low <= 0,
        trace=trace,
    )


def _thermal(assembly: Assembly, loaded: States) -> tuple[Array, Array]:
    """Thermal loss and gain of every state and bolt; a state's own loss takes the place of the file's."""
    given = ~np.isnan(loaded.thermal)
    return np.where(given, loaded.thermal, assembly.thermal_loss), np.where(given, 0.0, assembly.thermal_gain)


def _own_preload(joint: Joint, assembly: Assembly, loaded: States, trace: Trace) -> tuple[Array, Array]:
    """Lowest preload and its relaxation, of the file or, where a table has one, of the state and bolt."""
    if loaded.preload_low is None:
        return assembly.low, assembly.relaxation
    given = ~np.isnan(loaded.preload_low)
    low = np.where(given, loaded.preload_low, assembly.low)
    trace.given("lowest preload of the table", "F_low", low, "N", "file", "given")
    return low, trace("relaxation of it", loss.relaxation_loss, share=joint.losses.relaxation, F=low)


def _relief(joint: Joint, assembly: Assembly, loaded: States, without: Array, trace: Trace) -> tuple[Array, Array]:
    """Clamp that the axial load takes, and the external axial force behind it, (S, n)."""
    credited = joint.axial.credit_compression
    if loaded.contact is not None:
        name = "axial relief, from the contact force" + (", compression credited" if credited else "")
        function = working.contact_relief_credited if credited else working.contact_relief
        relief = trace(name, function, F_0=joint.axial.model_preload, F_c=loaded.contact)
        behind = trace(
            "external axial force behind the relief",
            working.external_from_relief,
            relief=relief,
            Phi=assembly.share_low,
        )
        return relief, trace("larger external axial force", working.larger, F_1=behind, F_2=loaded.axial)
    if credited:
        # A bolt that has lost its clamp stays open: what presses it under the whole load did not hold it under less.
        pressing = np.where(without > 0, loaded.axial, np.maximum(loaded.axial, 0.0))
        values = {"Phi": assembly.share_low, "F_ax": pressing, "Phi_c": assembly.share_high}
        return trace("axial relief, compression credited", working.axial_relief_credited, **values), loaded.axial
    return trace("axial relief", working.axial_relief, Phi=assembly.share_low, F_ax=loaded.axial), loaded.axial


def _yield_use(joint: Joint, assembly: Assembly, force: Array, trace: Trace, notes: list[Note]) -> Array | None:
    """Use of the bolt's yield strength by the highest bolt force and the full tightening torsion; None without a grade."""
    bolt = joint.bolt
    if bolt.grade is None or bolt.thread is None:
        return None
    area = stress_area(bolt.thread, trace)
    core = screw.minor_diameter(bolt.thread.diameter, bolt.thread.pitch)
    shanks = [s.diameter for s in bolt.segments if abs(s.diameter - core) > FREE_THREAD * core]
    shanks += [bolt.shank_diameter] if bolt.shank_diameter is not None else []
    area = min(area, *(float(screw.round_area(d)) for d in shanks))
    d2 = trace("pitch diameter", screw.pitch_diameter, d=bolt.thread.diameter, P=bolt.thread.pitch)
    given = joint.tightening.thread_friction
    if given is None:
        text = f"thread friction {TORSION_FRICTION:g} for the torsion in the bolt"
        notes.append(Note("torsion-friction", text, "tightening.thread_friction"))
    friction = given[1] if given else TORSION_FRICTION
    torque = trace(
        "torsion in the bolt", tight.thread_torque, F=assembly.high, P=bolt.thread.pitch, d2=d2, mu_th=friction
    )
    shear = trace("torsional stress", tight.torsional_stress, M_G=torque, d0=float(np.sqrt(4 * area / np.pi)))
    tension = trace("axial stress", working.axial_stress, F_bolt=force, A0=area)
    both = trace("equivalent stress", tight.equivalent_stress, sigma=tension, tau=shear)
    use: Array = trace("use of yield", tight.yield_use, sigma_eq=both, R_p=bolt.grade.yield_strength)
    return use


def _bearing_pressure(joint: Joint, force: Array, trace: Trace) -> Array | None:
    """Pressure under the head at the highest bolt force; None where the bearing face is not known."""
    d_w, d_h = joint.bolt.bearing_diameter, joint.bolt.hole_diameter
    if d_w is None or d_h is None:
        return None
    pressure: Array = trace("pressure under the head", working.bearing_pressure, F_bolt=force, d_w=d_w, d_h=d_h)
    return pressure


def refuse_impossible(joint: Joint, assembly: Assembly) -> None:
    """A lowest preload above the tensile force of the bolt is a wrong input: it would hold what no bolt can hold."""
    bolt, say = joint.bolt, joint.system.say
    if bolt.grade is None or bolt.thread is None:
        return
    most, lowest = bolt.grade.tensile_strength * stress_area(bolt.thread, Trace()), float(assembly.low.max())
    if lowest > most:
        found = f"a lowest preload of {say(lowest, 'force')}"
        expected = f"at most the tensile force of the bolt, {say(most, 'force')}"
        remedy = "correct the tightening, the thread or the grade"
        raise Problems([InputError("preload-impossible", "tightening", found, expected, remedy, joint.file)])


@record
class Highest:
    """Highest use of yield and pressure under the head [MPa] of all states and bolts; None where not known."""

    yield_use: float | None
    bearing_pressure: float | None


def highest(found: Ledger) -> Highest:
    """The highest values of a ledger."""
    return Highest(*(None if v is None else float(v.max()) for v in (found.yield_use, found.bearing_pressure)))


def warnings(joint: Joint, assembly: Assembly, found: Highest) -> list[Note]:
    """What a reviewer must know about the bolt and its bearing face."""
    said = []
    if joint.bolt.grade is None:
        said.append(Note("no-grade", "no grade: the strength of the bolt is not judged", "bolt.grade"))
    bolt, say = joint.bolt, joint.system.say
    if bolt.grade is not None and bolt.thread is not None:
        limit = bolt.grade.yield_strength * stress_area(bolt.thread, Trace())
        most = float(assembly.high.max())
        if most > limit:
            text = f"highest preload {say(most, 'force')} is above the bolt's yield, {say(limit, 'force')}"
            said.append(Note("preload-above-yield", text, "tightening"))
        elif found.yield_use is not None and found.yield_use > 1:
            text = f"bolt force and tightening torsion use {found.yield_use:.3g} of yield"
            said.append(Note("yield-use", text, "tightening"))
    faces = {"head": joint.plates[:1], "nut": () if bolt.tapped else joint.plates[1:][-1:]}
    pressed = [(plate.material, name) for name, plates in faces.items() for plate in plates]
    yields = [(m.yield_strength, m.name, name) for m, name in pressed if m is not None and m.yield_strength]
    if yields and found.bearing_pressure is not None:
        pressure, (limit, material, name) = found.bearing_pressure, min(yields)
        if pressure > limit:
            text = f"pressure under the {name} {say(pressure, 'pressure')} is above the yield of {material}"
            said.append(Note("bearing-pressure", text, "bolt.bearing_diameter"))
    if float(assembly.low.min()) <= 0:
        said.append(Note("no-preload", "the lowest assembly preload is zero", "tightening"))
    return said
