"""The standards that the file lists, applied to one end of a case: what each needs taken from the joint, nothing mixed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np

from slip.base.records import record
from slip.base.tables import find, number
from slip.base.trace import Trace
from slip.clamp.assembly import stress_area
from slip.clamp.stage import Clamp
from slip.friction.stage import Slip
from slip.joint.bolt import Thread
from slip.joint.joint import Joint, Standard
from slip.pressure.stage import Pressure
from slip.verdict.checks import Check, first_least
from slip.verdict.standards import aisc360, en1993, nasa5020, vdi2230
from slip.verdict.standards.common import Judgement

Array = np.ndarray
HAIR = 1e-6  # mm of clearance, or part of a preload, that is rounding


class NotComparable(Exception):
    """The file lacks something that the standard needs; the text says what to add."""


@record(eq=False)
class Entry:
    """One standard's answer for one end of a case: the judgement, or None with the reason why there is none."""

    standard: Standard
    judgement: Judgement | None
    check: Check


@record(eq=False)
class Inputs:
    """What a standard may draw on for one load state; arrays (n,) over bolts, loads already at the standard's level."""

    joint: Joint
    options: dict[str, object]
    shear: Array
    tension: Array
    force: float
    moment: float
    clamp: Array
    nominal: float
    lowest: float
    embedding: float
    relaxation: float
    thermal_loss: float
    alternating: bool
    friction_radius: float

    def need(self, key: str) -> object:
        """A value of the entry; NotComparable names the key when the file is silent."""
        if self.options.get(key) is None:
            raise NotComparable(f"add {key} to the standard's entry")
        return self.options[key]


def judge_standard(
    joint: Joint, clamp: Clamp, slip: Slip, pressure: Pressure, standard: Standard, case: int, end: str, rows: Array
) -> Entry:
    """The worst load state of one end against one standard."""
    name = joint.cases[case].name
    level = standard.to_standard_level
    if level is None:
        return _unsolved(
            standard, name, end, "not compared: give to_standard_level, the factor from your loads to its level"
        )
    judged: list[Judgement] = []
    try:
        for row in rows:
            judged.append(APPLY[standard.name](_inputs(joint, clamp, slip, pressure, standard, int(row), level)))
    except (NotComparable, ValueError) as error:
        return _unsolved(standard, name, end, f"not compared: {error}")
    reserves = np.array([float(np.min(j.reserve_factor)) for j in judged])
    worst = judged[first_least(reserves)]
    reserve = float(reserves.min())
    unmet = list(worst.unmet)
    lowest = float(clamp.ledger.preload_low[rows].min())
    if worst.presumed_preload is not None and lowest < worst.presumed_preload:
        say = joint.system.say
        unmet.append(
            f"lowest preload {say(lowest, 'force')} is below the {say(worst.presumed_preload, 'force')} that it presumes"
        )
    bolt = joint.pattern.names[worst.governing] if np.ndim(worst.utilisation) else ""
    check = Check(
        check=f"standard.{standard.label}",
        case=name,
        end=end,
        bolt=bolt,
        safety=None,
        load_factor=None,
        required=None,
        reserve_factor=reserve,
        holds=bool(reserve >= 1 and not unmet),
        decides=True,
        reason="; ".join(unmet),
    )
    return Entry(standard, worst, check)


def _unsolved(standard: Standard, case: str, end: str, reason: str) -> Entry:
    check = Check(
        f"standard.{standard.label}", case, end, "", None, None, None, None, False, True, reason, solved=False
    )
    return Entry(standard, None, check)


def _inputs(
    joint: Joint, clamp: Clamp, slip: Slip, pressure: Pressure, standard: Standard, row: int, level: float
) -> Inputs:
    """Loads of one state at the standard's level; the clamp is the lowest one under the raised axial load."""
    ledger, states = clamp.ledger, clamp.states
    raised = ledger.clamp_without_axial[row] - level * ledger.relief[row]
    return Inputs(
        joint=joint,
        options=dict(standard.options),
        shear=level * slip.shear[row],
        tension=level * np.maximum(states.axial[row], 0.0),
        force=level * float(np.hypot(states.load[row, 0], states.load[row, 1])),
        moment=level * abs(float(states.load[row, 2])),
        clamp=raised,
        nominal=float(clamp.assembly.nominal.min()),
        lowest=float(ledger.preload_low[row].min()),
        embedding=float(clamp.assembly.embedding.max()),
        relaxation=joint.losses.relaxation,
        thermal_loss=float(ledger.thermal_loss[row].max()),
        alternating=joint.cases[states.case[row]].alternating,
        friction_radius=pressure.torque_patch.friction_radius if pressure.torque_patch else 0.0,
    )


def _one_bolt_without_torque(i: Inputs) -> None:
    """Standards that share shear over bolts have no answer for a torque on a single bolt."""
    if i.joint.pattern.count == 1 and i.moment > 0:
        raise NotComparable("it has no rule for a torque on a single bolt")


def _nominal_area(thread: Thread) -> float:
    """Stress area [mm^2] as rounded in the standard of the thread, which design values are made with; else the exact one."""
    row = find("threads", "designation", thread.designation)
    return number(row, "stress_area[mm2]") if row and row["stress_area[mm2]"] else stress_area(thread, Trace())


def _slip_factor(i: Inputs, word: str) -> float | str:
    """The slip factor as a number, or the class under `word`."""
    if i.options.get("slip_factor") is not None:
        return float(i.options["slip_factor"])  # type: ignore[arg-type]
    return str(i.need(word))


def _with_hole(i: Inputs, judged: Judgement, clearance: float) -> Judgement:
    """The judgement, not met where a hole that is taken for normal is wider than the standard's normal clearance [mm]."""
    bolt = i.joint.bolt
    if bolt.hole_diameter is None or bolt.thread is None or (i.options.get("hole") or "normal") != "normal":
        return judged
    found = bolt.hole_diameter - bolt.thread.diameter
    if found <= clearance + HAIR:
        return judged
    say = i.joint.system.say
    text = f"hole clearance {say(found, 'length')} is above the {say(clearance, 'length')} of a normal hole: state the hole type"
    return replace(judged, unmet=(*judged.unmet, text))


def _en1993(i: Inputs) -> Judgement:
    _one_bolt_without_torque(i)
    bolt = i.joint.bolt
    if bolt.thread is None or bolt.grade is None:
        raise NotComparable("it needs thread and grade of the bolt")
    judged = en1993.judge(
        shear=i.shear,
        tension=i.tension,
        n_faces=i.joint.interface.parallel_faces,
        tensile_strength=bolt.grade.tensile_nominal,
        stress_area=_nominal_area(bolt.thread),
        slip_factor=_slip_factor(i, "slip_class"),
        category=str(i.need("category")),
        hole=str(i.options.get("hole") or "normal"),
        slot=str(i.options.get("slot") or ""),
    )
    # EN 1090-2, Table 11 (memory): 2 mm up to M24, 3 mm from M27; M12 and M14 may have 2 mm where the design allows for it
    return _with_hole(i, judged, 2.0 if bolt.thread.diameter < 26 else 3.0)


def _aisc360(i: Inputs) -> Judgement:
    _one_bolt_without_torque(i)
    bolt = i.joint.bolt
    if bolt.thread is None or bolt.grade is None:
        raise NotComparable("it needs thread and grade of the bolt")
    group = bolt.grade.name.split("-")[0]
    if group.removesuffix("M") not in ("A325", "A490"):
        raise NotComparable(f"grade {bolt.grade.name} is not one of A325, A325M, A490, A490M")
    judged = aisc360.judge(
        shear=i.shear,
        tension=i.tension,
        n_faces=i.joint.interface.parallel_faces,
        size=bolt.thread.designation,
        group=group,
        slip_factor=_slip_factor(i, "surface"),
        method=str(i.need("method")),
        edition=str(i.options.get("edition") or "2016"),
        hole=str(i.options.get("hole") or "normal"),
        slot=str(i.options.get("slot") or ""),
        filler_factor=float(i.options.get("filler_factor") or 1.0),  # type: ignore[arg-type]
        limit=str(i.options.get("limit") or "strength"),
    )
    # AISC 360 Table J3.3 (memory): 1/16 in below 1 in, 1/8 in from there; 2 mm up to M22, 3 mm above
    small = bolt.thread.diameter < (25.4 if bolt.thread.unified else 23.0)
    wide = (1.5875, 3.175) if bolt.thread.unified else (2.0, 3.0)
    return _with_hole(i, judged, wide[0] if small else wide[1])


def _vdi2230(i: Inputs) -> Judgement:
    turning = i.moment if i.joint.pattern.count == 1 else 0.0
    return vdi2230.judge(
        shear=i.shear,
        residual_clamp=i.clamp,
        n_faces=i.joint.interface.parallel_faces,
        friction=i.joint.interface.friction_low,
        kind="alternating" if i.alternating else "static",
        torque=turning,
        friction_radius=float(i.options.get("friction_radius") or i.friction_radius),  # type: ignore[arg-type]
    )


def _nasa5020(i: Inputs) -> Judgement:
    if i.moment > 0:
        raise NotComparable("it has no rule for a moment about the normal")
    gamma, c_min = float(i.need("preload_variation")), float(i.options.get("c_min") or 1.0)  # type: ignore[arg-type]
    judged = nasa5020.judge(
        shear=i.force,
        tension=float(i.tension.sum()),
        n_faces=i.joint.interface.parallel_faces,
        n_fasteners=i.joint.pattern.count,
        nominal_preload=i.nominal,
        preload_variation=gamma,
        friction=i.joint.interface.friction_low,
        safety_factor=float(i.need("safety_factor")),  # type: ignore[arg-type]
        fitting_factor=float(i.options.get("fitting_factor") or 1.0),  # type: ignore[arg-type]
        surface=str(i.options.get("surface") or "other"),
        c_min=c_min,
        relaxation=i.relaxation,
        thermal_loss=i.thermal_loss + i.embedding,
    )
    covered = c_min * (1 - gamma) * i.nominal
    if i.lowest < covered * (1 - HAIR):
        text = f"Gamma {gamma:g} does not cover the file's own lowest preload, {i.joint.system.say(i.lowest, 'force')}"
        judged = replace(judged, unmet=(*judged.unmet, text))
    if i.embedding:
        judged = replace(judged, notes=(*judged.notes, "Embedding is taken off with the thermal loss."))
    return judged


APPLY: dict[str, Callable[[Inputs], Judgement]] = {
    "EN 1993-1-8": _en1993,
    "AISC 360": _aisc360,
    "VDI 2230": _vdi2230,
    "NASA-STD-5020": _nasa5020,
}
