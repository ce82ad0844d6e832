"""Partial slip of a joint: where slip starts, what is elastic and what is true, and what a cycle costs, for every case."""

from __future__ import annotations

import numpy as np

from slip.base.errors import InputError, NotConverged
from slip.base.progress import Progress
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.stage import Clamp
from slip.friction.cycle import cycle
from slip.friction.faces import face_stiffness
from slip.friction.march.load import SlipsWholly
from slip.friction.march.step import Step, step
from slip.friction.model import Built, Model, rim_pressure
from slip.friction.models import choose
from slip.friction.stage import Slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure

Array = np.ndarray
End = tuple[Array, Array]  # shear and moment (3,) [N, N mm], clamps (n,) [N]
LOW, TYPICAL, HIGH = 0, 1, 2
NO_SHEAR = "no shear"
STRETCHED = 0.1  # of the motion of the faces; a larger stretch of the plates is told
BEYOND = 0.9999  # of gross slip; above it no partial slip is worked out
STUCK, TINY = 1e6, 1e-300  # bounds this many times the largest hold everything; smallest traction that is divided by
FULL = 1 - 1e-9  # traction over bound from which a point counts as slipping


@record
class Motions:
    """What one reading of the stiffness gives. Loads [N] are resultant shears at which the first point, and all, slip as the load grows
    with the clamp held; factors are the same over the load. stiffness [N/mm] before slip, along the shear.

    elastic_slip and true_slip [mm] at the point of largest motion under the load; slip_share: part of the clamp that slips;
    slip_length [mm] of a lap. energy_per_cycle [N mm], None for a static case, and where there is none to be told (`no_cycle`).
    First slip and largest motion take the points that carry the last 1 % of the clamp, where the pressure runs out, as pressed by
    what the others have at least (`patch_rim`).
    """

    first_slip_factor: float
    first_slip_load: float | None
    stiffness: float | None
    elastic_slip: float
    true_slip: float
    slip_share: float
    slip_length: float | None
    energy_per_cycle: float | None
    no_cycle: str = ""


@record(eq=False)
class PartialSlip:
    """One end of a case: the model and why it was taken, the motions at low, typical and high stiffness; or `reason` why there are none.

    trace: what the model takes, and what it gives at the typical stiffness. stretch [mm]: by which true slip may be more, since the
    model leaves the plates rigid in their plane; outside: how the joint lies out of the model's range, '' inside.
    """

    model: str
    why: str
    notes: tuple[str, ...]
    readings: tuple[Motions, ...]
    gross_slip_factor: float
    gross_slip_load: float | None
    reason: str
    trace: Trace
    stretch: float = 0.0
    outside: str = ""

    @property
    def largest_true_slip(self) -> float:
        """Of the three readings [mm], 0 where there are none."""
        return max((reading.true_slip for reading in self.readings), default=0.0)

    @property
    def wholly(self) -> bool:
        """Whether the load is beyond gross slip, or so near that nothing short of it can be told."""
        return self.gross_slip_factor <= 1 / BEYOND


class Partial:
    """Partial slip of a joint, each end of a case worked out when it is asked for and then kept.

    stiffness: of the face, None where neither roughness nor a measurement is known; mean_pressure [MPa]: the clamp-weighted mean that
    it is quoted at; reason: what the file would have to say, '' when all is there.
    """

    def __init__(
        self, joint: Joint, clamp: Clamp, pressure: Pressure, slip: Slip, progress: Progress | None = None
    ) -> None:
        self._joint, self._clamp, self._pressure, self._slip = joint, clamp, pressure, slip
        self._progress = progress
        self._kept: dict[tuple[int, str], PartialSlip] = {}
        self.stiffness = face_stiffness(joint)
        self.mean_pressure, self.reason = 0.0, ""
        if self.stiffness is None:
            self.reason = "give roughness of both faces and the plates' materials, or a measured tangential_stiffness"
        elif pressure.patch is None:
            self.reason = pressure.reason or (
                "give plates with material and thickness, hole and bearing diameters, and the thread of a tapped hole"
            )
        else:
            weighted = float((pressure.patch.shares * pressure.patch.density).sum())
            self.mean_pressure = weighted * float(clamp.ledger.clamp_low.mean())

    def of(self, case: int, end: str) -> PartialSlip | None:
        """Partial slip of one end of a case at the lowest clamp and friction; None where the joint is not described (`reason`)."""
        if self.reason:
            return None
        if (case, end) not in self._kept:
            self._kept[case, end] = self._end(case, end)
            if self._progress is not None:
                self._progress(len(self._kept), sum(len(one.ends) for one in self._joint.cases))
        return self._kept[case, end]

    def _end(self, case: int, end: str) -> PartialSlip:
        states, ledger = self._clamp.states, self._clamp.ledger
        rows = [int(row) for row in np.flatnonzero(states.case == case)]
        own = [row for row in rows if states.end[row] == end]
        row = min(own, key=lambda r: float(self._slip.bolt_safety[r].min()))
        others = [r for r in rows if states.end[r] != end]
        if not self._slip.sliding[row]:
            return PartialSlip("", "", (), (), np.inf, None, NO_SHEAR, Trace())
        load, held = states.load[row], ledger.clamp_low[row]
        back = (states.load[others[0]], ledger.clamp_low[others[0]]) if others else (-load, held)
        assert self._pressure.patch is not None and self.stiffness is not None
        model = choose(self._joint, self._pressure.patch, self.stiffness, load, held)
        friction, alternating = self._joint.interface.friction_low, self._joint.cases[case].alternating
        return under(model, friction, (load, held), back, float(self._slip.group.factor[row]), alternating)


def under(model: Model, friction: float, one: End, other: End, gross: float, alternating: bool) -> PartialSlip:
    """Partial slip at one end of a case, the other end given for its cycle; gross: factor on the load at which all slips."""
    force = float(np.hypot(one[0][0], one[0][1]))
    gross_load = force * gross if force and np.isfinite(gross) else None
    readings: tuple[Motions, ...] = ()
    reason = ""
    if not gross > 1 / BEYOND:
        reason = f"slips wholly at {gross:.4g} times this load; nothing beyond is computed"
    else:
        try:
            readings = tuple(
                motions_of(model, friction, reading, one, other, alternating) for reading in (LOW, TYPICAL, HIGH)
            )
        except (NotConverged, InputError) as error:  # the latter where the model's cells are too few for the face
            reason = str(error)
        except SlipsWholly as error:
            reason = f"slips wholly at {error.factor:.4g} times this load on the points of the model"
    if readings:
        _said(model, readings[TYPICAL])
    return PartialSlip(
        model.name,
        model.why,
        (*model.notes, *_notes(model, readings)),
        readings,
        gross,
        gross_load,
        reason,
        model.trace,
        model.stretch,
        model.outside,
    )


def _notes(model: Model, readings: tuple[Motions, ...]) -> list[str]:
    """What a reader must know of what was found."""
    if not readings:
        return []
    moved = readings[TYPICAL].elastic_slip + readings[TYPICAL].true_slip
    notes = []
    if model.stretch > STRETCHED * moved:
        said = f"plates stretch by up to {in_um(model.stretch)} in their plane, which the model leaves out"
        notes.append(f"{said}; the faces move by {in_um(moved)}")
    silent = dict.fromkeys(reading.no_cycle for reading in readings if reading.no_cycle)
    return [*notes, *(f"{why}: no energy of a cycle" for why in silent)]


def in_um(length: float) -> str:
    """A length [mm] in micrometres."""
    return f"{1e3 * length:.3g} um"


def _said(model: Model, found: Motions) -> None:
    """Add what a model gives to its trace; no formula stands behind it but the step."""
    values = (
        ("factor on the load at first slip", "f_on", found.first_slip_factor, ""),
        ("shear at first slip", "F_on", found.first_slip_load, "N"),
        ("stiffness before any slip", "K", found.stiffness, "N/mm"),
        ("elastic slip at the place of largest motion", "g_el", found.elastic_slip, "mm"),
        ("true slip there", "s", found.true_slip, "mm"),
        ("energy of a cycle", "W", found.energy_per_cycle, "mJ"),
    )
    for name, symbol, value, unit in values:
        if value is not None:
            model.trace.given(name, symbol, value, unit, "step", model.basis)
    both = {"g_el": found.elastic_slip, "s": found.true_slip}
    model.trace.total("motion of the faces there, elastic and true slip", "g", both, "mm", "step", model.basis)


def motions_of(model: Model, friction: float, reading: int, one: End, other: End, alternating: bool) -> Motions:
    """One reading of the stiffness: the stuck answer, the load put on once, and a steady cycle.

    The face has the stiffness that the clamp of `one` gives it; over the cycle that of the larger clamp of both ends.
    """
    load, held = one
    built = model.build(held, reading)
    bound = friction * built.press(held)
    touching = bound > 0
    wanted = model.load(load)
    stuck = step(built.compliance, np.where(touching, STUCK * bound.max(), 0.0), built.face, load=wanted)
    first = _first_slip(stuck, built, wanted, bound, friction)
    loaded = step(built.compliance, bound, built.face, load=wanted)
    full = touching & (_size(loaded.state.traction) >= FULL * bound)
    true, elastic = _at_largest_motion(loaded, built, wanted, bound, friction)
    weight = bound * built.compliance.area
    force = float(np.hypot(load[0], load[1]))
    straight = slice(0, built.face.components)
    travel = float(stuck.state.motion[straight] @ wanted[straight])
    energy, no_cycle = cycle(model, reading, friction, one, other) if alternating else (None, "")
    return Motions(
        first_slip_factor=first,
        first_slip_load=first * force if force else None,
        stiffness=model.faces * float(wanted[straight] @ wanted[straight]) / travel if force else None,
        elastic_slip=elastic,
        true_slip=true,
        slip_share=float((weight * full).sum() / weight.sum()),
        slip_length=float(full.sum() * model.length / full.size) if model.length else None,
        energy_per_cycle=energy,
        no_cycle=no_cycle,
    )


def _size(field: Array) -> Array:
    """Length of the vectors of a field (c, *field)."""
    return np.sqrt((field**2).sum(axis=0))


def _first_slip(stuck: Step, built: Built, load: Array, bound: Array, friction: float) -> float:
    """Factor on the load at which the first point would slip, from the answer where none does."""
    carried, judged = _size(stuck.state.traction), built.judged
    if judged is None:
        counted = _inside_rim(built, bound)
        return float((bound[counted] / np.maximum(carried[counted], TINY)).min())
    touching = bound > 0
    motion = (judged.own * carried + _beyond(built, stuck, load))[touching]
    return float((friction * (judged.pressure * judged.local)[touching] / np.maximum(motion, TINY)).min())


def _inside_rim(built: Built, bound: Array) -> Array:
    """Points (*field) whose pressure is not below that of the rim; bound: friction times pressure."""
    return (bound > 0) & (bound >= FULL * rim_pressure(bound, bound * built.compliance.area))


def _beyond(built: Built, done: Step, load: Array) -> Array:
    """By how much the outer edges of points move more than the points in their mean [mm]; 0 where a model has no such edges."""
    return np.zeros(built.compliance.shape) if built.edge is None else built.edge(done.state.traction, load)


def _at_largest_motion(loaded: Step, built: Built, load: Array, bound: Array, friction: float) -> tuple[float, float]:
    """True slip and elastic slip [mm] at the touching point where both together are largest."""
    true, carried, judged = _size(loaded.state.slip), _size(loaded.state.traction), built.judged
    if judged is None:
        counted, elastic = _inside_rim(built, bound), _size(built.compliance.elongation(carried[None]))
    else:
        counted = bound > 0
        motion = true + judged.own * carried + _beyond(built, loaded, load)
        carried = np.minimum(motion / np.where(counted, judged.local, 1.0), friction * judged.pressure)
        true, elastic = np.maximum(motion - carried * judged.local, 0.0), carried * judged.face
    both = np.where(counted, true + elastic, 0.0)
    most = np.unravel_index(int(np.argmax(both)), both.shape)
    return float(true[most]), float(elastic[most])
