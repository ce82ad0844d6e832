"""A lap under an even pressure in closed form, every number through the trace; and both routes along the overlap."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import even, lap_field, whole
from slip.friction.closed import lap as form
from slip.friction.closed.layers import in_series
from slip.friction.faces import Lap
from slip.friction.march.step import step
from slip.friction.model import Model

Array = np.ndarray
PLACES = 481  # along the overlap, for the picture
ROOT = form.SLIPPING
FAR, NEAR = "far", "near"  # ends of the overlap, as the model calls them


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
class Curves:
    """Along the overlap of a lap, at the typical stiffness: places [mm] on the axis of the pull, traction [MPa] and true slip [mm].

    x (m,), traction (m,), slip (m,): the closed form; x_step (k,), traction_step (k,), slip_step (k,): the step.
    bound [MPa]: friction times pressure. axis: 0 for x, 1 for y.
    """

    axis: int
    bound: float
    x: Array
    traction: Array
    slip: Array
    x_step: Array
    traction_step: Array
    slip_step: Array


@record
class Pulled:
    """A lap and its pull: lowest friction, pressure [MPa], typical stiffness of the face [N/mm^3], pull [N] at this end and at the other
    one, None where there is no cycle between them."""

    lap: Lap
    mu: float
    pressure: float
    k_t: float
    pull: float
    other: float | None


@record
class _One:
    """One face of a lap: EA of the strip pulled at the far and at the near end [N], their D [1/N], k [N/mm^2], q_l [N/mm], decay [1/mm]."""

    far: float
    near: float
    D: float
    k: float
    q_l: float
    omega: float
    length: float


def closed_lap(given: Pulled, trace: Trace) -> ClosedLap:
    """First slip, stiffness, elastic and true slip, slip length and energy in closed form, below gross slip."""
    lap = given.lap
    one = _one(given, trace)
    P = _each("pull on each face", abs(given.pull), lap, trace)
    ends: dict[str, Any] = {"EA_1": one.far, "EA_2": one.near, "omega": one.omega, "L": one.length}
    P_on = trace("pull at first slip, each face", form.onset, q_l=one.q_l, k=one.k, **ends)
    first = trace("pull at first slip, all faces", even.whole_onset, P_on=P_on, m=lap.halves)
    C_0 = trace("extension of the stuck lap for each newton on a face", form.stuck_compliance, **ends)
    stiffness = trace("stiffness before any slip", even.whole_stiffness, C_0=C_0, m=lap.halves)
    slipping = _lengths(one, P, "", trace)
    elastic, true = _motion(given, one, P, float(P_on), slipping, trace)
    length = trace.total("length that slips", "a", {"a_L": slipping[FAR], "a_0": slipping[NEAR]}, "mm", **ROOT)
    energy = None
    if given.other is not None:
        swing = trace("half the range of the pull", whole.half_range, Q_1=given.pull, Q_2=given.other)
        reach = _each("half the range on each face", float(swing), lap, trace)
        energy = _energy(one, reach, slipping if reach == P else None, lap.halves, trace)
    return ClosedLap(float(first), float(stiffness), elastic, true, float(length), energy)


def _one(given: Pulled, trace: Trace) -> _One:
    """What one face takes; the lines are named as those of the model, which takes the same."""
    lap = given.lap
    far, near = lap.EA
    q_l = trace("friction that each mm of the lap holds", even.slip_flow, mu=given.mu, p=given.pressure, b=lap.width)
    k_A = trace("the two in series", in_series, k_t=given.k_t, C=lap.shear)
    k = trace("stiffness for each length", form.line_stiffness, k_A=k_A, b=lap.width)
    D = trace("difference of the strips' strains for each newton", form.strain_per_force, EA_1=far, EA_2=near)
    omega = trace("decay of the motion from the ends", form.decay, k=k, D=D)
    return _One(far, near, float(D), float(k), float(q_l), float(omega), lap.length)


def _each(name: str, force: float, lap: Lap, trace: Trace) -> float:
    return float(trace(name, even.face_share, F=force, m=lap.halves))


def _lengths(one: _One, P: float, said: str, trace: Trace) -> dict[str, float]:
    """Length [mm] that slips at either end under P. It is sought by halving, and the pull that it carries stands as its proof."""
    a_0, a_L = (float(a) for a in form.slip_lengths(P, one.far, one.near, one.k, one.q_l, one.length))
    if a_0 > 0 and a_L > 0:
        c = trace.given(
            f"length that sticks{said}, by halving until it carries the pull", "c", one.length - a_0 - a_L, "mm", **ROOT
        )
        decay: dict[str, Any] = {"q_l": one.q_l, "omega": one.omega}
        trace(f"pull that this length carries{said}", form.both_ends_force, c=c, L=one.length, **decay)
        return {
            end: float(
                trace(
                    f"length that slips at the {end} end{said}", form.end_slip_length, P=P, EA=EA, D=one.D, c=c, **decay
                )
            )
            for end, EA in ((FAR, one.far), (NEAR, one.near))
        }
    if a_0 > 0 or a_L > 0:
        end, a, soft, stiff = (FAR, a_L, one.far, one.near) if a_L > 0 else (NEAR, a_0, one.near, one.far)
        a = trace.given(
            f"length that slips at the {end} end{said}, by halving until it carries the pull", "a", a, "mm", **ROOT
        )
        values: dict[str, Any] = {
            "a": a,
            "q_l": one.q_l,
            "EA_a": soft,
            "EA_b": stiff,
            "omega": one.omega,
            "L": one.length,
        }
        trace(f"pull that this length carries{said}", form.one_end_force, **values)
    return {FAR: a_L, NEAR: a_0}


def _motion(
    given: Pulled, one: _One, P: float, P_on: float, slipping: dict[str, float], trace: Trace
) -> tuple[float, float]:
    """Elastic slip of the face and true slip [mm] at the end of larger motion: the softer strip's, or one that slips."""
    true, flow = 0.0, one.q_l
    if not any(slipping.values()):
        flow = trace("shear flow at the end that slips first", form.end_flow, P=P, P_on=P_on, q_l=one.q_l)
    face = trace("stiffness of the face alone for each length", form.line_stiffness, k_A=given.k_t, b=given.lap.width)
    elastic = trace("elastic slip of the face at the end of larger motion", form.elastic_slip, q_l=flow, k=face)
    for end, EA in ((FAR, one.far), (NEAR, one.near)):
        if slipping[end] > 0:
            values: dict[str, Any] = {"P": P, "a": slipping[end], "EA": EA, "D": one.D, "q_l": one.q_l}
            true = max(true, float(trace(f"true slip at the {end} end", form.end_slip, **values)))
    return float(elastic), float(trace.given("true slip at the end of larger motion", "s", true, "mm", **ROOT))


def _energy(one: _One, reach: float, known: dict[str, float] | None, halves: int, trace: Trace) -> float:
    """Energy [N mm] of a cycle between -reach and reach on each face, which by Masing is that of any cycle of this range."""
    slipping = known or _lengths(one, reach, " at half the range", trace)
    lost = {FAR: 0.0, NEAR: 0.0}
    for end, EA in ((FAR, one.far), (NEAR, one.near)):
        if slipping[end] > 0:
            values: dict[str, Any] = {"P": reach, "a": slipping[end], "EA": EA, "D": one.D, "q_l": one.q_l}
            lost[end] = float(trace(f"energy lost at the {end} end, each face", form.end_energy, **values))
    return float(trace("energy of a cycle", even.whole_energy, W_0=lost[NEAR], W_L=lost[FAR], m=halves))


def curves(given: Pulled, model: Model, load: Array, clamp: Array, reading: int) -> Curves:
    """Traction and true slip along the overlap by both routes; clamp (1,) [N], below gross slip."""
    lap = given.lap
    x = np.linspace(0.0, lap.length, PLACES)
    k = float(in_series(given.k_t, lap.shear)) * lap.width
    q_l = given.mu * given.pressure * lap.width
    lag: tuple[Any, ...] = (x, abs(given.pull) / lap.halves, *lap.EA, k, q_l, lap.length)
    built = model.build(clamp, reading)
    done = step(built.compliance, given.mu * built.press(clamp), built.face, load=model.load(load)).state
    cells = done.traction.shape[-1]
    return Curves(
        axis=lap.axis,
        bound=given.mu * given.pressure,
        x=lap.start + x,
        traction=np.asarray(lap_field.traction(*lag)) / lap.width,
        slip=np.asarray(lap_field.slip(*lag)),
        x_step=lap.start + (np.arange(cells) + 0.5) / cells * lap.length,
        traction_step=np.abs(done.traction[0]),
        slip_step=np.abs(done.slip[0]),
    )
