"""The friction stage: what the faces can hold, per bolt, as a group, and for the force alone."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.stage import Ledger
from slip.clamp.states import States
from slip.clamp.working import resultant
from slip.friction import law
from slip.friction.march.limit import Limit, limit
from slip.friction.march.relief import limit_with_relief, relieved_factor
from slip.joint.joint import Joint
from slip.pressure.stage import Pressure

Array = np.ndarray


@record(eq=False)
class Slip:
    """Gross slip over S states and n bolts. safety holds the clamp, load_factor lets the whole load grow.

    per bolt: shear [N], bolt_safety, bolt_load_factor, each (S, n); group and force only: (S,). sliding: whether the
    state has any shear, (S,); turning: whether it has a moment about the normal. group: the held limit with its proof.
    The three traces are apart, since each of the three answers may come from another load state of an end.
    """

    shear: Array
    bolt_safety: Array
    bolt_load_factor: Array
    group: Limit
    group_load_factor: Array
    force_safety: Array
    force_load_factor: Array
    sliding: Array
    turning: Array
    trace: Trace
    group_trace: Trace
    force_trace: Trace


def slip(joint: Joint, states: States, ledger: Ledger, pressure: Pressure, keep: bool = True) -> Slip:
    """The friction stage of a joint at the lowest friction and the lowest clamp; keep=False leaves the record of the calculation out."""
    trace, group_trace, force_trace = Trace(keep=keep), Trace(keep=keep), Trace(keep=keep)
    mu, m = joint.interface.friction_low, joint.interface.parallel_faces
    shear = trace("shear of the bolt", resultant, F_x=states.shear[0], F_y=states.shear[1])
    held = trace("friction capacity", law.capacity, mu=mu, m=m, clamp=ledger.clamp_low)
    bound, relief = mu * m * ledger.clamp_without_axial, mu * m * ledger.relief
    group, group_growing = _group(joint, held, bound, relief, states.load, pressure, group_trace)
    force = np.hypot(states.load[:, 0], states.load[:, 1])
    force_safety, force_growing = _force_only(held, bound, relief, force, force_trace)
    if pressure.torque_patch is not None:  # one bolt under torque: the limit of its patch is its first slip
        safety, growing, basis = group.factor[:, None], group_growing[:, None], pressure.basis
        radius = pressure.torque_patch.friction_radius
        trace.given("friction radius of the bolt's pressure patch", "r_eff", radius, "mm", "plate_model", basis)
        trace.given("safety of the bolt on its pressure patch, clamp held", "S", safety, "", "limit", basis)
        trace.given("load factor of the bolt on its pressure patch, all loads", "S_all", growing, "", "limit", basis)
    else:
        closed = np.where(ledger.open, 0.0, 1.0)
        values = {"mu": mu, "m": m, "clamp_0": ledger.clamp_without_axial, "F_s": shear, "relief": ledger.relief}
        safety = trace("safety per bolt, clamp held", law.safety, F_max=held, F_s=shear)
        growing = trace("load factor per bolt, all loads", law.load_factor, closed=closed, **values)
    sliding = (shear > 0).any(axis=-1) | (np.abs(states.load[:, 2]) > 0)
    return Slip(
        shear=shear,
        bolt_safety=safety,
        bolt_load_factor=growing,
        group=group,
        group_load_factor=group_growing,
        force_safety=force_safety,
        force_load_factor=force_growing,
        sliding=sliding,
        turning=np.abs(states.load[:, 2]) > 0,
        trace=trace,
        group_trace=group_trace,
        force_trace=force_trace,
    )


def _group(
    joint: Joint, held: Array, bound: Array, relief: Array, load: Array, pressure: Pressure, trace: Trace
) -> tuple[Limit, Array]:
    """Limit of all bolts together with the clamp held, and the factor at which the whole load grows, (S,)."""
    points, shares = joint.pattern.arms, np.ones(joint.pattern.count)
    patch = pressure.torque_patch
    if patch is not None:
        points, shares = patch.points, patch.shares
    at_given = limit(held * shares, points, load)
    growing = limit_with_relief(bound * shares, relief * shares, points, load)
    stuck = at_given.factor == 0  # what is closed at the given load cannot carry any part of it
    factor = np.where(stuck, 0.0, growing.factor)
    if not trace.keep:
        return at_given, factor
    names = ("safety of the group, clamp held", "load factor of the group, all loads")
    left = np.where(stuck[:, None], held, _left(bound, relief, factor))
    grown = np.where(stuck[:, None], at_given.motion, growing.motion)
    what = "bolts" if patch is None else "rings of the pressure patch"
    for name, symbol, forces, motion, found in (
        (names[0], "S_group", held, at_given.motion, at_given.factor),
        (names[1], "S_group_all", left, grown, factor),
    ):
        # no motion bounds an infinite factor: NaN keeps its line out of the explanation
        travel = np.where(np.isfinite(found)[:, None], _travel(motion, points), np.nan)
        parts = forces, travel
        if patch is not None:  # the points of a ring carry alike: its force, and its mean slip
            parts = forces * patch.ring_shares, travel.reshape(len(travel), len(patch.ring_shares), -1).mean(axis=-1)
        said = f"{name}: work of the {what} on the slip motion of unit load work"
        basis = "derived" if patch is None else pressure.basis
        trace.products(said, symbol, _columns(parts[0]), _columns(parts[1]), "limit", basis)
    return at_given, factor


def _left(bound: Array, relief: Array, factor: Array) -> Array:
    """Capacity of every bolt when the whole load has grown by a factor, (S, n); infinite where the factor is."""
    finite = np.isfinite(factor)[:, None]
    return np.where(finite, np.maximum(bound - np.where(finite, factor[:, None], 0.0) * relief, 0.0), np.inf)


def _columns(values: Array) -> list[Array]:
    """Values (S, n) as n columns that broadcast over the bolts."""
    return [values[:, i : i + 1] for i in range(values.shape[1])]


def _travel(motion: Array, points: Array) -> Array:
    """Slip of every point, (S, n), on rigid motions (S, 3): shift of the origin and turn."""
    return np.hypot(motion[:, 0:1] - motion[:, 2:] * points[:, 1], motion[:, 1:2] + motion[:, 2:] * points[:, 0])


def _force_only(held: Array, bound: Array, relief: Array, force: Array, trace: Trace) -> tuple[Array, Array]:
    """Factors at which all capacities together equal the resultant force, clamp held and whole load growing, (S,)."""
    total = _total("capacity of all bolts together", held, trace)
    safety = trace("safety for the force alone, clamp held", law.safety, F_max=total, F_s=force[:, None])
    factor = np.full(force.shape, np.inf)
    moving = force > 0
    slide = np.ones_like(bound[moving]) / force[moving, None]
    factor[moving] = relieved_factor(bound[moving], relief[moving], slide)
    factor = np.where(total[:, 0] > 0, factor, 0.0)  # all bolts open at the given load: as the safety
    left = np.where(total > 0, _left(bound, relief, factor), 0.0)
    total = _total("capacity of all bolts together, all loads grown", left, trace)
    trace("load factor for the force alone, all loads", law.safety, F_max=total, F_s=force[:, None])
    return safety[:, 0], factor


def _total(name: str, forces: Array, trace: Trace) -> Array:
    """Sum over the bolts, (S, 1), recorded."""
    terms = {f"F_{i + 1}": column for i, column in enumerate(_columns(forces))}
    return np.asarray(trace.total(name, "sum_F", terms, "N", "statics", "derived"))
