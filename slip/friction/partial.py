"""Partial slip of a joint: where slip starts, what is elastic and what is true, and what a cycle costs, for every case."""

from __future__ import annotations

import numpy as np

from slip.base.errors import InputError, NotConverged
from slip.base.progress import Progress
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.stage import Clamp
from slip.friction.faces import face_stiffness
from slip.friction.march.load import SlipsWholly
from slip.friction.march.step import State, Step, step
from slip.friction.model import Built, Model
from slip.friction.models import choose
from slip.friction.stage import Slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure

Array = np.ndarray
End = tuple[Array, Array]  # shear and moment (3,) [N, N mm], clamps (n,) [N]
LOW, TYPICAL, HIGH = 0, 1, 2
NO_SHEAR = "no shear"
TURNS = 6  # increments between the ends of a case whose clamp changes on the way
BEYOND = 0.9999  # of gross slip; above it no partial slip is worked out
STUCK, TINY = 1e6, 1e-300  # bounds this many times the largest hold everything; smallest traction that is divided by
FULL = 1 - 1e-9  # traction over bound from which a point counts as slipping


@record
class Motions:
    """What one reading of the stiffness gives. Loads [N] are resultant shears at which the first point, and all, slip as the load grows
    with the clamp held; factors are the same over the load. stiffness [N/mm] before slip, along the shear.

    elastic_slip and true_slip [mm] at the point of largest motion under the load; slip_share: part of the clamp that slips;
    slip_length [mm] of a lap. energy_per_cycle [N mm], None for a static case.
    """

    first_slip_factor: float
    first_slip_load: float | None
    stiffness: float | None
    elastic_slip: float
    true_slip: float
    slip_share: float
    slip_length: float | None
    energy_per_cycle: float | None


@record(eq=False)
class PartialSlip:
    """One end of a case: the model and why it was taken, the motions at low, typical and high stiffness; or `reason` why there are none.

    trace: what the model takes, and what it gives at the typical stiffness.
    """

    model: str
    why: str
    notes: tuple[str, ...]
    readings: tuple[Motions, ...]
    gross_slip_factor: float
    gross_slip_load: float | None
    reason: str
    trace: Trace

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
            self.reason = (
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
    notes = model.notes
    if alternating and any(reading.energy_per_cycle is None for reading in readings):
        notes = (*notes, "the face slips wholly on the way to the other end: no energy of a cycle")
    return PartialSlip(model.name, model.why, notes, readings, gross, gross_load, reason, model.trace)


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
            said = f"{name}; {model.why}" if symbol == "f_on" else name
            model.trace.given(said, symbol, value, unit, "step", model.basis)
    both = {"g_el": found.elastic_slip, "s": found.true_slip}
    model.trace.total("motion of the faces there, elastic and true slip", "g", both, "mm", "step", model.basis)


def motions_of(model: Model, friction: float, reading: int, one: End, other: End, alternating: bool) -> Motions:
    """One reading of the stiffness: the stuck answer, the load put on once, and a steady cycle."""
    load, held = one
    built = model.build(np.maximum(held, other[1]), reading)
    bound = friction * built.press(held)
    touching = bound > 0
    wanted = model.load(load)
    stuck = step(built.compliance, np.where(touching, STUCK * bound.max(), 0.0), built.face, load=wanted)
    carried = _size(stuck.state.traction) + _beyond(built, stuck, wanted)[1]
    first = float((bound[touching] / np.maximum(carried[touching], TINY)).min())
    loaded = step(built.compliance, bound, built.face, load=wanted)
    full = touching & (_size(loaded.state.traction) >= FULL * bound)
    true, elastic = _at_largest_motion(loaded, built, wanted, touching, full)
    weight = bound * built.compliance.area
    force = float(np.hypot(load[0], load[1]))
    straight = slice(0, built.face.components)
    travel = float(stuck.state.motion[straight] @ wanted[straight])
    return Motions(
        first_slip_factor=first,
        first_slip_load=first * force if force else None,
        stiffness=model.faces * float(wanted[straight] @ wanted[straight]) / travel if force else None,
        elastic_slip=elastic,
        true_slip=true,
        slip_share=float((weight * full).sum() / weight.sum()),
        slip_length=float(full.sum() * model.length / full.size) if model.length else None,
        energy_per_cycle=_cycle(model, built, friction, one, other, loaded) if alternating else None,
    )


def _size(field: Array) -> Array:
    """Length of the vectors of a field (c, *field)."""
    return np.sqrt((field**2).sum(axis=0))


def _beyond(built: Built, done: Step, load: Array) -> tuple[Array, Array]:
    """By how much the outer edges of points move more than the points in their mean [mm], and the traction that is for a stuck one
    [MPa]; both 0 where a model has no such edges."""
    if built.edge is None or built.local is None:
        return np.zeros(built.compliance.shape), np.zeros(built.compliance.shape)
    more = built.edge(done.state.traction, load)
    return more, more / built.local


def _at_largest_motion(loaded: Step, built: Built, load: Array, touching: Array, full: Array) -> tuple[float, float]:
    """True slip and elastic slip [mm] at the touching point where both together are largest; full: the points that slip."""
    motion, traction = _beyond(built, loaded, load)
    true = np.where(touching, _size(loaded.state.slip) + np.where(full, motion, 0.0), 0.0)
    carried = _size(loaded.state.traction) + np.where(full, 0.0, traction)
    elastic = np.where(touching, _size(built.compliance.elongation(carried[None])), 0.0)
    most = np.unravel_index(int(np.argmax(true + elastic)), true.shape)
    return float(true[most]), float(elastic[most])


def _cycle(model: Model, built: Built, friction: float, one: End, other: End, start: Step) -> float | None:
    """Energy [N mm] of a cycle from one end to the other and back, after it has become steady; None where all slips on the way.

    The layer keeps the stiffness it was built with; the bound follows the clamp.
    """
    state: State = start.state
    spent = 0.0
    turns = 1 if np.array_equal(one[1], other[1]) else TURNS
    for lap in range(2):
        spent = 0.0
        for (load_a, clamp_a), (load_b, clamp_b) in ((one, other), (other, one)):
            for part in np.arange(1, turns + 1) / turns:
                bound = friction * built.press(clamp_a + part * (clamp_b - clamp_a))
                wanted = model.load(load_a + part * (load_b - load_a))
                try:
                    done = step(built.compliance, bound, built.face, state, load=wanted)
                except SlipsWholly:
                    return None
                state, spent = done.state, spent + done.dissipation
        if turns == 1 and lap == 0 and np.allclose(one[0], -other[0]):
            break  # proportional loading at constant clamp: the first full cycle is the steady one
    return spent * model.faces
