"""Load states: every end of every case as arrays, moved to the centroid and shared over the bolts."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import product

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp import working
from slip.joint.joint import Axial, Joint
from slip.joint.loads import Case, Load
from slip.joint.pattern import Pattern

Array = np.ndarray
STRAIGHT = 1e-9  # smaller over larger second moment below which the bolts stand in a line
ROUNDING = 1e-12  # an arm or a moment smaller than this part of what it is the difference of is none


@record(eq=False)
class Acting:
    """What acts in S states, before it is moved to the centroid and shared over n bolts.

    case: index of the case, (S,); end: "given" or "other" of each. shear (2, S, 1 or n), axial (S, 1 or n) [N] and couple (3, S, 1)
    [N mm], on the joint, or on each bolt where `each` (S, 1) says so. at (S, 2), height (S, 1) [mm]: where shear and axial act.
    thermal (S, 1 or n) [N]: a loss of the state's own, NaN where that of the file counts. preload_low, contact (S, n) [N]: lowest
    assembly preload and contact force round the bolt that a table gives, None where it has no such column.
    """

    case: Array
    end: tuple[str, ...]
    shear: Array
    axial: Array
    couple: Array
    at: Array
    height: Array
    each: Array
    thermal: Array
    preload_low: Array | None = None
    contact: Array | None = None


@record(eq=False)
class States:
    """S load states over n bolts. case: index of the case, (S,); end: "given" or "other" of each state.

    shear: force on each bolt, (2, S, n) in N; axial: external axial force at each bolt, (S, n) in N, tension positive;
    load: resultant shear and its moment about the centroid of the pattern, (S, 3) in N, N mm. thermal, preload_low, contact: as in
    Acting.
    """

    case: Array
    end: tuple[str, ...]
    shear: Array
    axial: Array
    load: Array
    thermal: Array
    preload_low: Array | None
    contact: Array | None
    trace: Trace


def states(joint: Joint) -> States:
    """All load states of the joint's cases; an unsigned case has one state for each combination of signs.

    Raises Problems when a tilting moment meets a pattern that cannot carry it.
    """
    acting = _acting(joint)
    wrong = not_carried(joint, acting)
    if wrong.any():
        names = dict.fromkeys(joint.cases[i].name for i in acting.case[wrong])
        raise Problems([tilting_fault(joint, f", in {', '.join(list(names)[:5])}", joint.file)])
    return shared(joint, acting, Trace())


def shared(joint: Joint, acting: Acting, trace: Trace) -> States:
    """The states of what acts: moved to the centroid and shared over the bolts; no tilting moment may be left uncarried."""
    count, each = joint.pattern.count, acting.each
    shape = len(acting.case), count
    if each.all():
        shear = np.broadcast_to(acting.shear, (2, *shape))
        tension = np.broadcast_to(_external(joint.axial, acting.axial, trace), shape)
        total = _own_resultant(joint.pattern, shear)
    else:
        total, moments = _at_centroid(joint.pattern, acting, trace)
        shear = _shared_shear(joint.pattern, acting.shear[0], acting.shear[1], moments[2], trace)
        tension = _shared_tension(joint, acting.axial, moments[0], moments[1], trace)
        if each.any():
            shear = np.where(each, acting.shear, shear)
            tension = np.where(each, _external(joint.axial, acting.axial, trace), tension)
            total = np.where(each, _own_resultant(joint.pattern, shear), total)
    own = acting.thermal, acting.preload_low, acting.contact
    return States(acting.case, acting.end, shear, tension, total, *own, trace)


def _own_resultant(pattern: Pattern, shear: Array) -> Array:
    """Resultant and moment (S, 3) of the shears (2, S, n) that each bolt has of its own."""
    arms = pattern.arms
    parts = np.stack([arms[:, 0] * shear[1], -arms[:, 1] * shear[0]])
    turning = _unless_rounding(parts.sum(axis=(0, -1)), np.abs(parts).sum(axis=(0, -1)))
    return np.stack([shear[0].sum(axis=-1), shear[1].sum(axis=-1), turning], axis=-1)


def _acting(joint: Joint) -> Acting:
    """The ends of the joint's cases as columns (S, 1), so that they broadcast over the bolts."""
    listed = [(i, end, load) for i, case in enumerate(joint.cases) for end, load in _expanded(case)]
    owners = [joint.cases[i] for i, _, _ in listed]
    loads = [load for _, _, load in listed]
    return Acting(
        case=np.array([i for i, _, _ in listed]),
        end=tuple(end for _, end, _ in listed),
        shear=np.array([[[load.shear[axis]] for load in loads] for axis in (0, 1)]),
        axial=np.array([[load.axial] for load in loads]),
        couple=np.array([[[load.moment[axis]] for load in loads] for axis in range(3)]),
        at=np.array([case.at or joint.pattern.centroid for case in owners]),
        height=np.array([[case.height or 0.0] for case in owners]),
        each=np.array([[case.each_bolt] for case in owners]),
        thermal=np.array([[np.nan if case.thermal is None else case.thermal] for case in owners]),
    )


def _expanded(case: Case) -> Iterator[tuple[str, Load]]:
    """The states of a case: its ends, or every combination of signs of an unsigned one."""
    if not case.unsigned:
        yield from case.ends
        return
    ((end, load),) = case.ends
    values = (*load.shear, load.axial, *load.moment)
    for signs in product(*((1.0, -1.0) if value else (1.0,) for value in values)):
        vx, vy, f, mx, my, mz = (sign * abs(value) for sign, value in zip(signs, values, strict=True))
        yield end, Load((vx, vy), f, (mx, my, mz))


def _at_centroid(pattern: Pattern, acting: Acting, trace: Trace) -> tuple[Array, tuple[Array, Array, Array]]:
    """Resultant (S, 3) of shear and turning moment, and the three moments (S, 1), at the centroid in the sliding face."""
    middle, at, z = pattern.centroid, acting.at, acting.height
    x, y = _unless_rounding(at - middle, np.abs(at) + np.abs(pattern.positions).max(axis=0)).T[:, :, None]
    (vx, vy), axial, (cx, cy, cz) = acting.shear, acting.axial, acting.couple
    mx = trace("tilting moment about x", working.moment_x, C_x=cx, F_z=axial, y=y, z=z, V_y=vy)
    my = trace("tilting moment about y", working.moment_y, C_y=cy, F_z=axial, x=x, z=z, V_x=vx)
    mz = trace("turning moment at the centroid", working.moment_z, C_z=cz, x=x, V_y=vy, y=y, V_x=vx)
    parts = ((cx, axial * y, z * vy), (cy, axial * x, z * vx), (cz, x * vy, y * vx))
    sizes = (sum(np.abs(part) for part in three) for three in parts)
    mx, my, mz = (_unless_rounding(moment, size) for moment, size in zip((mx, my, mz), sizes, strict=True))
    return np.concatenate([vx, vy, mz], axis=1), (mx, my, mz)


def _unless_rounding(difference: Array, size: Array) -> Array:
    """A difference of values of this size, or 0 where it is no more than their rounding: no moment may come of that."""
    return np.where(np.abs(difference) <= ROUNDING * size, 0.0, difference)


def _shared_shear(pattern: Pattern, vx: Array, vy: Array, mz: Array, trace: Trace) -> Array:
    """Shear on every bolt, (2, S, n), shared by equal springs about the centroid."""
    n, (x, y) = pattern.count, pattern.arms.T
    sum_r2 = float((pattern.arms**2).sum()) or 1.0  # one bolt: no arm, any value does
    return np.stack(
        [
            trace("shear of the bolt along x", working.bolt_shear_x, V_x=vx, n=n, M_z=mz, y=y, sum_r2=sum_r2),
            trace("shear of the bolt along y", working.bolt_shear_y, V_y=vy, n=n, M_z=mz, x=x, sum_r2=sum_r2),
        ]
    )


def _shared_tension(joint: Joint, axial: Array, mx: Array, my: Array, trace: Trace) -> Array:
    """External axial force at every bolt, (S, n): equal parts and the tilting moments in principal axes."""
    second, axes = _principal(joint.pattern)
    u, v = axes @ joint.pattern.arms.T
    mu, mv = (
        trace(
            f"tilting moment about the pattern's axis {name}", working.principal_moment, M_x=mx, a_x=ax, M_y=my, a_y=ay
        )
        for name, (ax, ay) in zip("uv", axes, strict=True)
    )
    carried = _carried(second)
    su, sv = (float(s) if ok else 1.0 for s, ok in zip(second, carried, strict=True))
    u, v = (w if ok else np.zeros_like(w) for w, ok in zip((u, v), carried, strict=True))
    values = {"n": joint.pattern.count, "M_u": mu, "v": v, "sum_v2": sv, "M_v": mv, "u": u, "sum_u2": su}
    tension: Array = trace("external axial force at the bolt", working.bolt_tension, F_z=axial, **values)
    return tension


def _carried(second: Array) -> Array:
    """Whether the pattern has arms along its principal axes u and v, (2,)."""
    return second > STRAIGHT * max(float(second.max()), 1.0)


def _principal(pattern: Pattern) -> tuple[Array, Array]:
    """Second moments (2,) [mm^2] of the pattern along its principal axes u, v, and their directions as rows, (2, 2), right-handed.

    Where x and y are principal axes, also for a round pattern, they are u and v.
    """
    tensor = pattern.arms.T @ pattern.arms
    if abs(tensor[0, 1]) <= STRAIGHT * tensor.trace():
        return np.diagonal(tensor), np.eye(2)
    second, axes = np.linalg.eigh(tensor)
    first = axes[:, 0] if axes[0, 0] >= 0 else -axes[:, 0]
    return second, np.array([first, [-first[1], first[0]]])


def not_carried(joint: Joint, acting: Acting) -> Array:
    """Which states load the joint with a tilting moment that has no arm in the pattern, (S,)."""
    second, axes = _principal(joint.pattern)
    carried = _carried(second)
    if carried.all() or acting.each.all():
        return np.zeros(len(acting.case), dtype=bool)
    _, (mx, my, _) = _at_centroid(joint.pattern, acting, Trace(keep=False))
    least = 1e-9 * (np.abs(mx) + np.abs(my))
    about = [working.principal_moment(mx, ax, my, ay) for ax, ay in axes]
    wrong = [np.abs(moment) > least for moment, axis in zip(about, (1, 0), strict=True) if not carried[axis]]
    return (np.any(wrong, axis=0) & ~acting.each)[:, 0]  # a moment about u needs arms along v


def tilting_fault(joint: Joint, where: str, file: str, line: int = 0) -> InputError:
    """The fault of a tilting moment that the pattern cannot carry."""
    what = "one bolt" if joint.pattern.count == 1 else "bolts in a line"
    expected = "a pattern with arms across the moment's axis"
    remedy = "carry the moment by other means, or give bolt forces"
    return InputError(
        "moment-not-carried", "case.moment", f"a tilting moment on {what}{where}", expected, remedy, file, line
    )


def _external(axial: Axial, typed: Array, trace: Trace) -> Array:
    """External axial force behind the typed axial force of each bolt."""
    if axial.meaning == "bolt force":
        name, function = "external axial force behind the bolt force", working.external_from_bolt_force
        force: Array = trace(name, function, F_b=typed, F_0=axial.model_preload, Phi_m=axial.model_bolt_share)
        return force
    if axial.meaning == "bolt force change":
        name, change = "external axial force behind the change of bolt force", working.external_from_change
        force = trace(name, change, dF_b=typed, Phi_m=axial.model_bolt_share)
        return force
    return typed
