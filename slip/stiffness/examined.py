"""The contact of a run examined: its force against the clamp, elastic against true slip, regimes, energy, and what its steps tell."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.units import SI, System
from slip.stiffness.run_found import FACE, MOTIONS, OPEN, PARTS, SLIPS, STICK, Examined, Peak, Slips, Steps
from slip.stiffness.run_notes import notes_of
from slip.stiffness.run_own import OwnStiffness, own_stiffness, quantiles
from slip.stiffness.run_steps import (
    NOTHING,
    Cycles,
    cycles,
    energy_at_limit,
    energy_of,
    holds,
    largest_range,
    loads_of,
    path_of,
    turns,
)
from slip.stiffness.run_table import RunTable

Array = np.ndarray
TOLERANCE = 0.01  # of mu p: a traction within it is at the limit
SMALL = 0.02  # of the elastic slip at the limit: motion within it is no true slip
LEAST_SLIP = 1e-3  # of the largest: the same where no stiffness is known


def examine(
    table: RunTable,
    *,
    clamp: tuple[float, float],
    friction: float,
    k_t: float | None,
    motion: str | None,
    tolerance: float = TOLERANCE,
    system: System = SI,
) -> Examined:
    """Examine a run. clamp: lowest and highest total [N]; friction of the model; k_t: tangential stiffness that was entered [N/mm^3], or
    None; motion: what gx, gy are, one of MOTIONS; tolerance: part of mu p within which a traction is at its limit; system: units of
    the warnings.

    Raises Problems for a motion that is not declared, a friction or stiffness that is not above 0, a face without pressure, and a path
    that falls.
    """
    motion = _declared(table, motion, friction, k_t)
    p, area, limit = table.p, table.area, friction * table.p
    closed, (t, turned) = p > 0, _driving(table, motion)
    size = np.hypot(*t)
    sticks = closed & (size < (1 - tolerance) * limit)
    state = np.where(closed, np.where(sticks, STICK, SLIPS), OPEN)
    own = None if motion == "path" else own_stiffness(t, table.g, p, area, limit, sticks)
    compliance, used = _compliance(motion, k_t, own, p)
    vector = _true_slip(table, t, motion, compliance)
    rest = _at_rest(vector, limit, compliance)
    still = np.zeros_like(closed) if vector is None else np.hypot(*vector) <= rest
    steps = _steps(table, t, state, vector)
    loads = loads_of(t, p, area, table.x, table.y)
    at = turns(loads)
    energy = at_limit = None
    if vector is not None and len(table.steps) > 1:
        energy, at_limit = energy_of(t, vector, area), energy_at_limit(limit, vector, area, rest)
    elastic = 0.0 if compliance is None else float((limit * compliance).max())
    clamp_off, clamp_step = _against(steps.force, clamp)
    found = Examined(
        table=table,
        clamp=clamp,
        off=clamp_off,
        off_step=clamp_step,
        friction=friction,
        tolerance=tolerance,
        motion=motion,
        turned=turned,
        k_t=k_t,
        used=used,
        own=own,
        beyond=float(np.divide(size, limit, out=np.zeros_like(size), where=closed).max()),
        state=state,
        at_spring=(state == SLIPS) & still,
        moved=sticks & ~still & (vector is not None),
        steps=steps,
        slips=None if vector is None else _slips(vector, area, closed, at),
        energy=energy,
        energy_at_limit=at_limit,
        holds=holds(loads, t, table.g, limit),
        cycles=None
        if energy is None or at_limit is None or vector is None
        else _cycles(at, vector, (energy, at_limit), elastic, closed),
        notes=(),
    )
    return replace(found, notes=notes_of(found, system))


def _declared(table: RunTable, motion: str | None, friction: float, k_t: float | None) -> str:
    """The meaning of the motion; Problems for what cannot be examined."""
    kinds = "; ".join(f"{name}: {said}" for name, said in MOTIONS.items())
    if motion not in MOTIONS:
        found = "no meaning of gx, gy" if motion is None else f'"{motion}"'
        raise _fault(table, "run-motion", found, "total, slip or path", f"declare the motion ({kinds})", "motion")
    for name, value in (("friction", friction), ("k_t", k_t)):
        if value is not None and not (np.isfinite(value) and value > 0):
            raise _fault(table, "out-of-limits", f"{value:g}", "a number above 0", "write the model's own value", name)
    if not (table.p > 0).any():
        remedy = "choose steps in which the joint is tightened, and check the sign of p"
        raise _fault(table, "no-clamp", "p is 0 in all rows", "pressure somewhere on the face", remedy, "p")
    return motion


def _fault(table: RunTable, code: str, found: str, expected: str, remedy: str, key: str) -> Problems:
    return Problems([InputError(code, key, found, expected, remedy, table.file)])


def _driving(table: RunTable, motion: str) -> tuple[Array, bool]:
    """Tractions that drive the motion, and whether the table's were turned round for it.

    The traction at the end of a step goes with the motion of that step, where it slips as where it springs, from the unloaded start
    on; tractions that hold the moving part back go against it. A path has no sign and tells nothing.
    """
    t, g = table.t, table.g
    if motion == "path":
        return t, False
    work = (t * np.diff(g, axis=1, prepend=0.0) * table.area).sum()
    return (-t, True) if work < 0 else (t, False)


def _compliance(motion: str, k_t: float | None, own: OwnStiffness | None, p: Array) -> tuple[Array | None, str]:
    """Elastic slip over traction (S, n) [mm/MPa], None where not known, and whose stiffness it is: declared before the run's own.

    A motion that is true slip alone needs none: its points that stick would have moved for another reason.
    """
    if k_t is not None:
        return np.full(p.shape, 1.0 / k_t), "declared" if motion == "total" else ""
    if motion == "total" and own is not None:
        return own.compliance(p), "of the run"
    return None, ""


def _true_slip(table: RunTable, t: Array, motion: str, compliance: Array | None) -> Array | None:
    """True slip (2, S, n) [mm]; None for a total motion without a stiffness."""
    if motion == "slip":
        return table.g
    if motion == "total":
        return None if compliance is None else table.g - t * compliance
    way = np.hypot(*table.g)
    falls = np.diff(way, axis=0) < -LEAST_SLIP * float(way.max())
    if falls.any():
        step, point = (int(i[0]) for i in np.nonzero(falls))
        said = f"it falls at id {table.ids[point]} from step {table.steps[step]} to {table.steps[step + 1]}"
        remedy = "declare slip or total"
        raise _fault(table, "run-path", said, "a path, which only grows", remedy, "gx, gy")
    # Coulomb: slip goes the way of the traction at its limit, which is where the step ends or begins.
    grown = np.hypot(*np.diff(table.g, axis=1, prepend=0.0))
    size = np.hypot(*t)
    use = np.divide(size, table.p, out=np.zeros_like(size), where=table.p > 0)
    before = np.concatenate([use[:1], use[:-1]]) > use
    driving = np.where(before, np.concatenate([t[:, :1], t[:, :-1]], axis=1), t)
    length = np.hypot(*driving)
    way_of = np.divide(driving, length, out=np.zeros_like(driving), where=length > 0)
    return np.cumsum(grown * way_of, axis=1)


def _at_rest(vector: Array | None, limit: Array, compliance: Array | None) -> Array:
    """Motion [mm] up to which a point has no true slip, (S, n)."""
    if vector is None:
        return np.zeros_like(limit)
    least = max(NOTHING, LEAST_SLIP * float(np.hypot(*vector).max()))
    return np.full_like(limit, least) if compliance is None else np.maximum(NOTHING, SMALL * limit * compliance)


def _steps(table: RunTable, t: Array, state: Array, vector: Array | None) -> Steps:
    pressed = table.p * table.area
    slipping = np.where(state == SLIPS, pressed, 0.0).sum(axis=1)
    force = pressed.sum(axis=1)
    share = np.divide(slipping, force, out=np.zeros_like(force), where=force > 0)
    none = np.full(len(force), np.nan)
    largest = none if vector is None else np.where(state == OPEN, 0.0, np.hypot(*vector)).max(axis=1)
    return Steps(force, np.hypot(*(t * table.area).sum(axis=-1)), share, tuple(_face(row) for row in state), largest)


def _face(state: Array) -> str:
    """The regime of a face from the states of its points."""
    slips, sticks = (state == SLIPS).any(), (state == STICK).any()
    return FACE[1 if slips and sticks else 2 if slips else 0 if sticks else 3]


def _slips(vector: Array, area: Array, closed: Array, at: tuple[int, ...]) -> Slips:
    size = np.where(closed, np.hypot(*vector), 0.0)
    step, point = (int(i) for i in np.unravel_index(int(size.argmax()), size.shape))
    here = closed[step]
    parts = tuple(quantiles(size[step][here], area[step][here], PARTS)) if here.any() else (0.0,) * len(PARTS)
    span = (at[-2], at[-1]) if len(at) > 1 else (0, len(size) - 1)
    within = vector[:, span[0] : span[1] + 1]
    amplitude = path = None
    if len(size) > 1:
        stays = closed[span[0] : span[1] + 1].all(axis=0)  # motion of an open point is no slip
        half, way = largest_range(within) / 2 * stays, path_of(within) * stays
        amplitude, path = (Peak(float(v.max()), int(v.argmax()), -1) for v in (half, way))
    return Slips(vector, Peak(float(size[step, point]), point, step), parts, amplitude, path, span)


def _cycles(
    at: tuple[int, ...], vector: Array, energies: tuple[Array, Array], elastic: float, closed: Array
) -> Cycles | None:
    """The cycles, from the points that are closed at each turn."""
    stays = closed[list(at)].all(axis=0) if at else closed.all(axis=0)
    return cycles(at, vector[:, :, stays], energies, elastic) if stays.any() else None


def _against(force: Array, clamp: tuple[float, float]) -> tuple[float, int]:
    """Of the step whose contact force is furthest outside the clamp: its distance over the nearest end, and its place. A step in which
    nothing presses, as before tightening, is left out."""
    nearest = np.clip(force, *clamp)
    off = np.where(force > 0, (force - nearest) / np.maximum(nearest, 1e-300), 0.0)
    step = int(np.abs(off).argmax())
    return float(off[step]), step
