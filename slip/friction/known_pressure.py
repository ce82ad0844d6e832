"""A face of known pressure: what it holds, and its partial slip by the model and, where one exists, by a closed form."""

from __future__ import annotations

import numpy as np

from slip.base.progress import Progress, told
from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import lap as form
from slip.friction.closed.layers import in_series
from slip.friction.faces import FaceStiffness, Lap, face_stiffness, lap_of
from slip.friction.law import capacity
from slip.friction.march.limit import Limit, limit
from slip.friction.models import choose_face, over
from slip.friction.partial import NO_SHEAR, TYPICAL, End, PartialSlip, under
from slip.joint.contact import PressedFace
from slip.joint.loads import Case, Load

Array = np.ndarray
ROUNDING = 1e-12  # arms shorter than this part of the coordinates that they come from are none


@record
class ClosedLap:
    """The closed form of an evenly pressed lap at the typical stiffness: first slip [N], stiffness before slip [N/mm], elastic and true
    slip [mm] at the end of larger motion, length that slips [mm], energy of a cycle [N mm], None without one."""

    first_slip_load: float
    stiffness: float
    elastic_slip: float
    true_slip: float
    slip_length: float
    energy_per_cycle: float | None


@record(eq=False)
class FaceSlip:
    """One end of a case: load (3,) at the middle of the face [N, N mm]; limit of all faces together; factor of the force alone.

    partial: None where the file does not describe what yields (`reason`).
    """

    load: Array
    group: Limit
    force_factor: float
    partial: PartialSlip | None
    closed: ClosedLap | None
    reason: str

    @property
    def sliding(self) -> bool:
        """Whether there is anything to resist."""
        return bool(self.load.any())


def face_slips(face: PressedFace, progress: Progress | None = None) -> dict[tuple[int, str], FaceSlip]:
    """Both ends of every case by (case, end), at the lowest friction."""
    stiffness = face_stiffness(face)
    ends = [(i, end) for i, case in enumerate(face.cases) for end, _ in case.ends]
    return {(i, end): _end(face, stiffness, face.cases[i], end) for i, end in told(ends, progress)}


def _end(face: PressedFace, stiffness: FaceStiffness | None, case: Case, end: str) -> FaceSlip:
    loads = {name: at_middle(face, case, load) for name, load in case.ends}
    load = loads.pop(end)
    mu, m = face.interface.friction_low, face.interface.parallel_faces
    held = float(capacity(mu, m, face.force))
    points = over(face)
    group = limit(held * points.areas / face.area, points.places, load)
    force = float(np.hypot(load[0], load[1]))
    alone = held / force if force else float("inf")
    reason = _silent(face, stiffness)
    if not load.any():
        return FaceSlip(load, group, alone, PartialSlip("", "", (), (), np.inf, None, NO_SHEAR, Trace()), None, "")
    if reason or stiffness is None:
        return FaceSlip(load, group, alone, None, None, reason)
    clamp = np.array([face.force])
    other: End = (next(iter(loads.values()), -load), clamp)
    model = choose_face(face, stiffness, load)
    found = under(model, mu, (load, clamp), other, float(group.factor), case.alternating)
    lap = lap_of(face, load)
    closed = None
    if lap is not None and found.readings:
        cycle = found.readings[TYPICAL].energy_per_cycle is not None
        closed = _closed(face, stiffness, lap, load, other[0] if cycle else None)
    return FaceSlip(load, group, alone, found, closed, "")


def at_middle(face: PressedFace, case: Case, load: Load) -> Array:
    """Vx, Vy [N] and the moment about the normal [N mm] at the middle of the face."""
    (x, y), (vx, vy) = face.middle, load.shear
    at = case.at if case.at is not None else face.middle
    arms = [a - c if abs(a - c) > ROUNDING * (abs(a) + abs(c)) else 0.0 for a, c in zip(at, (x, y), strict=True)]
    return np.array([vx, vy, load.moment[2] + arms[0] * vy - arms[1] * vx])


def _silent(face: PressedFace, stiffness: FaceStiffness | None) -> str:
    """What the file would have to say for partial slip, '' when all is there."""
    if any(plate.material is None for plate in face.plates[:2]):
        return "give the material of both plates at the face"
    return "" if stiffness is not None else "give roughness of both faces, or a measured tangential_stiffness"


def _closed(
    face: PressedFace, stiffness: FaceStiffness, lap: Lap, load: Array, swing: Array | None
) -> ClosedLap | None:
    """The lap of even pressure in closed form, at the typical stiffness."""
    pressure = face.force / face.area
    k_t = float(stiffness.at(pressure, TYPICAL))
    P, first, second, L = abs(float(load[lap.axis])) / lap.halves, *lap.EA, lap.length
    k = float(in_series(k_t, lap.shear)) * lap.width
    q_l = face.interface.friction_low * pressure * lap.width
    omega = float(form.joint_decay(first, second, k, L))
    ends = [float(g) for g in form.end_motions(P, first, second, k, q_l, L)]
    carried = [min(k * g, q_l) / (k_t * lap.width) for g in ends]
    true = [max(g - q_l / k, 0.0) for g in ends]
    worst = int(np.argmax(ends))
    energy = None
    if swing is not None:
        reach = abs(float(load[lap.axis] - swing[lap.axis])) / 2 / lap.halves
        energy = lap.halves * float(form.energy(reach, first, second, k, q_l, L))
    return ClosedLap(
        first_slip_load=lap.halves * float(form.onset(q_l, k, first, second, omega, L)),
        stiffness=lap.halves * float(form.initial_stiffness(first, second, k, L)),
        elastic_slip=carried[worst],
        true_slip=true[worst],
        slip_length=float(sum(form.slip_lengths(P, first, second, k, q_l, L))),
        energy_per_cycle=energy,
    )
