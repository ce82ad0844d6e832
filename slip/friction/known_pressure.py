"""A face of known pressure: what it holds, and its partial slip by the model and, where one exists, by a closed form."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from slip.base.progress import Progress, told
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.working import moment_z, resultant
from slip.friction.closed import even
from slip.friction.even_lap import ClosedLap, Curves, Pulled, closed_lap, curves
from slip.friction.faces import FaceStiffness, face_stiffness, lap_of
from slip.friction.law import capacity, safety
from slip.friction.march.limit import Limit, limit
from slip.friction.model import Model
from slip.friction.models import choose_face, over
from slip.friction.partial import HIGH, LOW, NO_SHEAR, TYPICAL, End, PartialSlip, under
from slip.joint.contact import PressedFace
from slip.joint.loads import Case, Load
from slip.joint.plates import Rectangle

Array = np.ndarray
ROUNDING = 1e-12  # arms shorter than this part of the coordinates that they come from are none
MEASURES = {  # of a reading: what it is called, symbol, unit, and whether the model's own lines have it already
    "first_slip_factor": ("factor on the load at first slip", "f_on", "", True),
    "first_slip_load": ("shear at first slip", "F_on", "N", True),
    "stiffness": ("stiffness before any slip", "K", "N/mm", True),
    "elastic_slip": ("elastic slip at the place of largest motion", "g_el", "mm", True),
    "true_slip": ("true slip there", "s", "mm", True),
    "slip_share": ("share of the pressing force where it slips", "share", "", False),
    "slip_length": ("length that slips", "a", "mm", False),
    "energy_per_cycle": ("energy of a cycle", "W", "mJ", True),
}


@record(eq=False)
class FaceSlip:
    """One end of a case: load (3,) at the middle of the face [N, N mm]; limit of all faces together; factor of the force alone.

    partial: None where the file does not describe what yields (`reason`). closed, curves: of an evenly pressed lap below gross slip.
    parts: the calculation, by titles.
    """

    load: Array
    group: Limit
    force_factor: float
    partial: PartialSlip | None
    closed: ClosedLap | None
    curves: Curves | None
    reason: str
    parts: Mapping[str, Trace]

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
    loads, pressed = dict(case.ends), Trace()
    force = _pressed(face, pressed)
    load = at_middle(face, case, loads.pop(end), pressed)
    others = [at_middle(face, case, other, Trace(keep=False)) for other in loads.values()]
    gross = Trace()
    group, alone = _gross(face, force, load, pressed, gross)
    parts = {"pressure and load": pressed, "gross slip": gross}
    reason = _silent(face, stiffness)
    if not load.any():
        still = PartialSlip("", "", (), (), np.inf, None, NO_SHEAR, Trace())
        return FaceSlip(load, group, alone, still, None, None, "", parts)
    if reason or stiffness is None:
        return FaceSlip(load, group, alone, None, None, None, reason, parts)
    clamp = np.array([force])
    other: End = (others[0] if others else -load, clamp)
    model = choose_face(face, stiffness, load)
    found = under(model, face.interface.friction_low, (load, clamp), other, float(group.factor), case.alternating)
    parts |= {"stiffness of the face": _readings(stiffness), f"partial slip, {found.model}": _measured(found, model)}
    pulled = _pulled(face, stiffness, found, load, other[0])
    if pulled is None:
        return FaceSlip(load, group, alone, found, None, None, "", parts)
    lap = parts["closed form of the lap"] = Trace()
    closed, along = closed_lap(pulled, lap), curves(pulled, model, load, clamp, TYPICAL)
    return FaceSlip(load, group, alone, found, closed, along, "", parts)


def _pressed(face: PressedFace, trace: Trace) -> float:
    """Force [N] that presses each face."""
    o, name = face.overlap, "area of one face"
    if isinstance(o, Rectangle):
        area = trace(name, even.rectangle_area, l=o.x1 - o.x0, b=o.y1 - o.y0)
    else:
        area = trace(name, even.ring_area, D=o.outer_diameter, d=o.inner_diameter)
    return float(trace("force that presses each face", even.face_force, p=face.interface.pressure, A=area))


def at_middle(face: PressedFace, case: Case, load: Load, trace: Trace) -> Array:
    """Vx, Vy [N] and the moment about the normal [N mm] at the middle of the face."""
    vx, vy = load.shear
    at = case.at if case.at is not None else face.middle
    arms = [a - c if abs(a - c) > ROUNDING * (abs(a) + abs(c)) else 0.0 for a, c in zip(at, face.middle, strict=True)]
    values = {"C_z": load.moment[2], "x": arms[0], "V_y": vy, "y": arms[1], "V_x": vx}
    return np.array([vx, vy, trace("moment at the middle of the face", moment_z, **values)])


def _gross(face: PressedFace, force: float, load: Array, pressed: Trace, trace: Trace) -> tuple[Limit, float]:
    """Limit of all faces over their points, and the factor of the force alone."""
    shear = pressed("shear at this end", resultant, F_x=load[0], F_y=load[1])
    held = trace(
        "friction capacity of all faces",
        capacity,
        mu=face.interface.friction_low,
        m=face.interface.parallel_faces,
        clamp=force,
    )
    alone = float(trace("safety for the force alone", safety, F_max=held, F_s=shear))
    points = over(face)
    group = limit(held * points.areas / face.area, points.places, load)
    if not load.any():
        return group, alone
    vx, vy, w = group.motion
    travel = np.hypot(vx - w * points.places[:, 1], vy + w * points.places[:, 0])
    name = "mean slip of the points on the motion of unit load work"
    mean = trace.given(name, "s_1", float(points.areas @ travel / points.areas.sum()), "1/N", "limit", "derived")
    if np.isfinite(group.centre).all():
        for axis, middle, place in zip("xy", face.middle, group.centre, strict=True):
            said = f"centre about which the plates turn, {axis}"
            trace.given(said, f"{axis}_c", middle + float(place), "mm", "limit", "derived")
    said = "safety of the group: work of the friction on this motion"
    trace.products(said, "S_group", [held], [mean], "limit", "derived")
    if shear > 0:
        trace("shear at gross slip", even.gross_load, S=float(group.factor), F_s=shear)
    return group, alone


def _silent(face: PressedFace, stiffness: FaceStiffness | None) -> str:
    """What the file would have to say for partial slip, '' when all is there."""
    if any(plate.material is None for plate in face.plates[:2]):
        return "give the material of both plates at the face"
    return "" if stiffness is not None else "give roughness of both faces, or a measured tangential_stiffness"


def _readings(stiffness: FaceStiffness) -> Trace:
    """Where the stiffness of the face comes from, and its three readings."""
    trace = Trace(list(stiffness.trace.steps))
    name = "tangential stiffness" if stiffness.slope is None else "tangential stiffness for each MPa"
    for said, value in zip(("low", "typical", "high"), stiffness.value or stiffness.slope or (), strict=False):
        trace.given(f"{name}, {said}", "k_t", value, "N/mm^3", stiffness.source, stiffness.basis)
    return trace


def _measured(found: PartialSlip, model: Model) -> Trace:
    """The model's own lines, and what the step gives at all readings of the stiffness."""
    trace = Trace(list(found.trace.steps))
    for said, reading in (("", TYPICAL), (", low stiffness of the face", LOW), (", high stiffness of the face", HIGH)):
        for key, (name, symbol, unit, there) in MEASURES.items():
            value = getattr(found.readings[reading], key) if found.readings else None
            if value is not None and not (there and reading == TYPICAL):
                trace.given(name + said, symbol, value, unit, "step", model.basis)
    return trace


def _pulled(
    face: PressedFace, stiffness: FaceStiffness, found: PartialSlip, load: Array, other: Array
) -> Pulled | None:
    """The lap of even pressure at the typical stiffness, None where there is none or it slips wholly."""
    lap = lap_of(face, load)
    if lap is None or not found.readings:
        return None
    assert face.interface.pressure is not None
    pressure = face.interface.pressure
    cycle = found.readings[TYPICAL].energy_per_cycle is not None
    return Pulled(
        lap=lap,
        mu=face.interface.friction_low,
        pressure=pressure,
        k_t=float(stiffness.at(pressure, TYPICAL)),
        pull=float(load[lap.axis]),
        other=float(other[lap.axis]) if cycle else None,
    )
