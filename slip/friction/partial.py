"""Partial slip of a joint: where slip starts, what is elastic and what is true, and what a cycle costs, for every case."""

from __future__ import annotations

import numpy as np

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.clamp.stage import Clamp
from slip.friction.faces import face_stiffness
from slip.friction.march.step import State, Step, step
from slip.friction.models import Built, Model, choose
from slip.friction.stage import Slip
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure

Array = np.ndarray
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


@record
class PartialSlip:
    """One end of a case: the model and why it was taken, the motions at low, typical and high stiffness; or `reason` why there are none."""

    model: str
    why: str
    notes: tuple[str, ...]
    readings: tuple[Motions, ...]
    gross_slip_factor: float
    gross_slip_load: float | None
    reason: str

    @property
    def wholly(self) -> bool:
        """Whether the load is beyond gross slip, or so near that nothing short of it can be told."""
        return self.gross_slip_factor <= 1 / BEYOND


class Partial:
    """Partial slip of a joint, each end of a case worked out when it is asked for and then kept.

    stiffness: of the face, None where neither roughness nor a measurement is known; mean_pressure [MPa]: the clamp-weighted mean that
    it is quoted at; reason: what the file would have to say, '' when all is there.
    """

    def __init__(self, joint: Joint, clamp: Clamp, pressure: Pressure, slip: Slip) -> None:
        self._joint, self._clamp, self._pressure, self._slip = joint, clamp, pressure, slip
        self._kept: dict[tuple[int, str], PartialSlip] = {}
        self.stiffness = face_stiffness(joint)
        self.mean_pressure, self.reason = 0.0, ""
        if self.stiffness is None:
            self.reason = "give roughness of both faces and the plates' materials, or a measured tangential_stiffness"
        elif pressure.patch is None:
            self.reason = (
                "give plates with material and thickness, hole and bearing diameters, and a nut at the far end"
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
        return self._kept[case, end]

    def _end(self, case: int, end: str) -> PartialSlip:
        states, ledger = self._clamp.states, self._clamp.ledger
        rows = [int(row) for row in np.flatnonzero(states.case == case)]
        own = [row for row in rows if states.end[row] == end]
        row = min(own, key=lambda r: float(self._slip.bolt_safety[r].min()))
        others = [r for r in rows if states.end[r] != end]
        if not self._slip.sliding[row]:
            return PartialSlip("", "", (), (), np.inf, None, NO_SHEAR)
        load, held = states.load[row], ledger.clamp_low[row]
        back = (states.load[others[0]], ledger.clamp_low[others[0]]) if others else (-load, held)
        assert self._pressure.patch is not None and self.stiffness is not None
        model = choose(self._joint, self._pressure.patch, self.stiffness, load, held)
        force, gross = float(np.hypot(load[0], load[1])), float(self._slip.group.factor[row])
        gross_load = force * gross if force and np.isfinite(gross) else None
        readings: tuple[Motions, ...] = ()
        reason = ""
        if not gross > 1 / BEYOND:
            reason = f"slips wholly at {gross:.4g} times this load; nothing beyond is computed"
        else:
            try:
                readings = tuple(
                    _motions(self._joint, model, reading, (load, held), back, case) for reading in (LOW, TYPICAL, HIGH)
                )
            except NotConverged as error:
                reason = str(error)
        return PartialSlip(model.name, model.why, model.notes, readings, gross, gross_load, reason)


def _motions(
    joint: Joint, model: Model, reading: int, one: tuple[Array, Array], other: tuple[Array, Array], case: int
) -> Motions:
    """One reading of the stiffness: the stuck answer, the load put on once, and a steady cycle."""
    load, held = one
    built = model.build(np.maximum(held, other[1]), reading)
    friction = joint.interface.friction_low
    bound = friction * built.press(held)
    touching = bound > 0
    wanted = model.load(load)
    stuck = step(built.compliance, np.where(touching, STUCK * bound.max(), 0.0), built.face, load=wanted)
    first = float((bound[touching] / np.maximum(_size(stuck.state.traction)[touching], TINY)).min())
    loaded = step(built.compliance, bound, built.face, load=wanted)
    true, elastic = _at_largest_motion(loaded, built, touching)
    full = touching & (_size(loaded.state.traction) >= FULL * bound)
    weight = bound * built.compliance.area
    force = float(np.hypot(load[0], load[1]))
    straight = slice(0, built.face.components)
    travel = float(stuck.state.motion[straight] @ wanted[straight])
    alternating = joint.cases[case].alternating
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


def _at_largest_motion(loaded: Step, built: Built, touching: Array) -> tuple[float, float]:
    """True slip and elastic slip [mm] at the touching point where both together are largest."""
    true = np.where(touching, _size(loaded.state.slip), 0.0)
    elastic = np.where(touching, _size(built.compliance.elongation(loaded.state.traction)), 0.0)
    most = np.unravel_index(int(np.argmax(true + elastic)), true.shape)
    return float(true[most]), float(elastic[most])


def _cycle(
    model: Model, built: Built, friction: float, one: tuple[Array, Array], other: tuple[Array, Array], start: Step
) -> float:
    """Energy [N mm] of a cycle from one end to the other and back, after it has become steady.

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
                done = step(built.compliance, bound, built.face, state, load=wanted)
                state, spent = done.state, spent + done.dissipation
        if turns == 1 and lap == 0 and np.allclose(one[0], -other[0]):
            break  # proportional loading at constant clamp: the first full cycle is the steady one
    return spent * model.faces
