"""The friction stage: what the faces can hold, per bolt, as a group, and for the force alone."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from slip.base.trace import Trace
from slip.clamp.stage import Clamp
from slip.clamp.working import resultant
from slip.friction import law
from slip.friction.march.limit import Limit, limit
from slip.friction.march.relief import limit_with_relief, relieved_factor
from slip.joint.joint import Joint
from slip.pressure.stage import Patch, Pressure

Array = np.ndarray


@dataclass(frozen=True, eq=False)
class Slip:
    """Gross slip over S states and n bolts. safety holds the clamp, load_factor lets the whole load grow.

    per bolt: shear [N], bolt_safety, bolt_load_factor, each (S, n); group and force only: (S,). sliding: whether the
    state has any shear, (S,); turning: whether it has a moment about the normal. group: the held limit with its proof.
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


def slip(joint: Joint, clamp: Clamp, pressure: Pressure) -> Slip:
    """The friction stage of a joint at the lowest friction and the lowest clamp."""
    trace, ledger, states = Trace(), clamp.ledger, clamp.states
    mu, m = joint.interface.friction_low, joint.interface.parallel_faces
    shear = trace("shear of the bolt", resultant, F_x=states.shear[0], F_y=states.shear[1])
    held = trace("friction capacity", law.capacity, mu=mu, m=m, clamp=ledger.clamp_low)
    bound, relief = mu * m * ledger.clamp_without_axial, mu * m * ledger.relief
    group, group_growing = _group(joint, held, bound, relief, states.load, pressure.patch, trace)
    force = np.hypot(states.load[:, 0], states.load[:, 1])
    columns = {f"F_{i + 1}": held[:, i : i + 1] for i in range(joint.pattern.count)}
    total = trace.total("capacity of all bolts together", "sum_F", columns, "N", "statics", "derived")
    force_safety = trace("safety for the force alone, clamp held", law.safety, F_max=total, F_s=force[:, None])
    if pressure.patch is not None:  # one bolt under torque: the limit of its patch is its first slip
        safety, growing = group.factor[:, None], group_growing[:, None]
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
        force_safety=force_safety[:, 0],
        force_load_factor=_force_only(bound, relief, force),
        sliding=sliding,
        turning=np.abs(states.load[:, 2]) > 0,
        trace=trace,
    )


def _group(
    joint: Joint, held: Array, bound: Array, relief: Array, load: Array, patch: Patch | None, trace: Trace
) -> tuple[Limit, Array]:
    """Limit of all bolts together with the clamp held, and the factor at which the whole load grows, (S,)."""
    points, shares = joint.pattern.arms, np.ones(joint.pattern.count)
    if patch is not None:
        points, shares = patch.points, patch.shares
    at_given = limit(held * shares, points, load)
    growing = limit_with_relief(bound * shares, relief * shares, points, load)
    factor = np.where(at_given.factor == 0, 0.0, growing.factor)
    names = ("safety of the group, clamp held", "load factor of the group, all loads")
    if patch is not None:
        trace.given(f"{names[0]} (pressure patch)", "S_group", at_given.factor[:, None], "", "limit", patch.basis)
        trace.given(f"{names[1]} (pressure patch)", "S_group_all", factor[:, None], "", "limit", patch.basis)
    else:
        left = np.maximum(bound - np.where(np.isfinite(factor), factor, 0.0)[:, None] * relief, 0.0)
        for name, symbol, forces, motion in (
            (names[0], "S_group", held, at_given.motion),
            (names[1], "S_group_all", left, growing.motion),
        ):
            travel = _travel(motion, points)
            parts = [[values[:, i : i + 1] for i in range(joint.pattern.count)] for values in (forces, travel)]
            trace.products(
                f"{name}: work of the bolts on the slip motion of unit load work", symbol, *parts, "limit", "derived"
            )
    return at_given, factor


def _travel(motion: Array, points: Array) -> Array:
    """Slip of every point, (S, n), on rigid motions (S, 3): shift of the origin and turn."""
    return np.hypot(motion[:, 0:1] - motion[:, 2:] * points[:, 1], motion[:, 1:2] + motion[:, 2:] * points[:, 0])


def _force_only(bound: Array, relief: Array, force: Array) -> Array:
    """Factor on the whole load at which all capacities together equal the resultant force, (S,); infinite without force."""
    with np.errstate(divide="ignore"):
        slide = np.where(force > 0, 1 / force, np.inf)[:, None] * np.ones_like(bound)
    factor = np.full(force.shape, np.inf)
    moving = force > 0
    factor[moving] = relieved_factor(bound[moving], relief[moving], slide[moving])
    return factor
