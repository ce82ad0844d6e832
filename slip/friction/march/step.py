"""One frictional step: tractions, slip and energy after the motion, the load or the clamp of a face has changed."""

from __future__ import annotations

import dataclasses

import numpy as np
from numpy.typing import ArrayLike, NDArray

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.friction.compliance.protocol import Compliance
from slip.friction.march.energy import Split, dissipated, split, stored
from slip.friction.march.face import Face
from slip.friction.march.levels import from_coarse
from slip.friction.march.load import carry, check_limit
from slip.friction.march.problem import Point, Problem, Tally, length, within
from slip.friction.march.settle import settle

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

# Tuning, held by tests on hundreds of random problems.
MOST_STEPS = 100  # 3 to 10 are usual
FRESH = 3  # times that C q is computed anew and the step finished from there; once is usual
STALE = 1e-3  # part of the displacements by which C q may differ from what came along
FADING = 0.1  # errors are relative to at least this part of the displacements and of the load before the step
FAINT = 1e-9  # part of what friction can displace: less is rounding, and errors are not measured by it
FAINT_WORK = 1e-8  # part of the energy that friction can store: the balance is not measured by less
SELF_STRESS = 1e-3  # part of the tractions' sum that a load's error is relative to where the load itself vanishes


@record(eq=False)
class State:
    """A face at rest between two steps; fields are (components, *field), bound (*field).

    traction [MPa]; displacement = C traction [mm], carried along since that saves an application; motion (freedoms,)
    [mm, rad]; slip: accumulated true slip [mm]; bound: Coulomb's bound that the tractions keep [MPa].
    """

    traction: Array
    displacement: Array
    motion: Array
    slip: Array
    bound: Array


@record(eq=False)
class Step:
    """A state reached, and the evidence for it.

    state: the face after the step. load (freedoms,): what its tractions carry [N, N mm].
    slipping (*field): points that slipped or stand open. slipped (components, *field): their slip in this step [mm].
    dissipation, energy, work: heat of this step, elastic energy after it, work of the load in it [mJ].
    residual: error of the friction conditions over the displacements, together with the load's error over the load.
    balance: error of 1/2 (load before + load).(change of motion) = change of energy + sum area 1/2 (traction before +
    traction).slipped, over the work that tractions and motions span; 0 where the friction conditions hold exactly.
    newton, applications, near_inverses: Newton's steps, applications of C and of its near inverse, those on coarser
    grids by their share of the points.
    """

    state: State
    load: Array
    slipping: Mask
    slipped: Array
    dissipation: float
    energy: float
    work: float
    residual: float
    balance: float
    newton: int
    applications: float
    near_inverses: float

    def split(self, compliance: Compliance, face: Face) -> Split:
        """Relative motion = true slip + elastic slip of the layer + elastic displacement of the bodies."""
        state = self.state
        return split(compliance, face, state.traction, state.motion, state.slip, state.displacement)


def at_rest(compliance: Compliance, face: Face, bound: ArrayLike) -> State:
    """A face that is clamped by `bound` [MPa] and has not been loaded yet."""
    zero = np.zeros((compliance.components, *compliance.shape))
    return State(zero, zero, np.zeros(face.freedoms), zero, _bound(bound, compliance))


def step(
    compliance: Compliance,
    bound: ArrayLike,
    face: Face,
    state: State | None = None,
    *,
    motion: ArrayLike | None = None,
    load: ArrayLike | None = None,
    tol: float = 1e-6,
) -> Step:
    """The state after bodies of `compliance` have been brought to a motion or under a load, within friction's `bound`.

    bound: friction times pressure at the end of the step [MPa], scalar or (*field), >= 0; 0 is an open point.
    face: the rigid motions. state: where the step starts, reached with the same compliance; None for a face at rest
    under the same bound.
    motion (freedoms,) [mm, rad] or load (freedoms,) [N, N mm]: at the end of the step, one of them; a number where
    there is one freedom.
    tol: of the residual, relative; 1e-6 gives five digits or more.

    Over the step friction acts at its end values (implicit): take steps that are short against what the load and the
    clamp do.
    Raises SlipsWholly where the load is more than friction carries, NotConverged where `tol` is not reached, InputError
    (no-clamp) for a face that has never been clamped, ValueError for shapes or values without meaning.
    Source: Coulomb friction at a given clamp as a convex problem. Basis: derived.
    """
    if (motion is None) == (load is None):
        raise ValueError("give either a motion or a load")
    if not 0.0 < tol < 1.0 or face.components != compliance.components:
        raise ValueError("tol must lie between 0 and 1, and the face have as many components as the compliance")
    if face.positions is not None and face.positions.shape != (2, *compliance.shape):
        raise ValueError(f"positions must be of shape {(2, *compliance.shape)}, not {face.positions.shape}")
    before = at_rest(compliance, face, bound) if state is None else state
    problem, start = _problem(compliance, _bound(bound, compliance), face, before, motion, load)
    if problem.load is not None:
        check_limit(face, problem.bound * compliance.area, problem.load)
    elif state is None and not problem.bound.any():
        check_limit(face, problem.bound, np.zeros(face.freedoms))
    return _step(problem, before, _solved(problem, start, tol))


def _bound(bound: ArrayLike, compliance: Compliance) -> Array:
    b = np.asarray(bound, dtype=float)
    if b.shape not in ((), compliance.shape) or not (np.isfinite(b).all() and (b >= 0.0).all()):
        raise ValueError(f"the bound must be finite and not negative, a number or of shape {compliance.shape}")
    return np.broadcast_to(b, compliance.shape)


def _problem(
    compliance: Compliance, bound: Array, face: Face, before: State, motion: ArrayLike | None, load: ArrayLike | None
) -> tuple[Problem, Point]:
    """The convex problem of the step, and the point that it starts from: the tractions before, within the new bound."""
    wanted = None if load is None else face.vector(load, "load")
    moved = before.motion if motion is None else face.vector(motion, "motion")
    traction, displacement = within(before.traction, bound), before.displacement
    problem = Problem(
        compliance=compliance,
        face=face,
        bound=bound,
        target=-before.slip,
        load=wanted,
        displacement_scale=0.0,
        load_scale=0.0,
        gauge=face.gauge(bound * compliance.area),
        tally=Tally(),
    )
    new, old = 0.0 if wanted is None else problem.gauge(wanted), problem.gauge(problem.carried(before.traction))
    problem = dataclasses.replace(
        problem,
        displacement_scale=max(
            FADING * problem.norm(displacement * problem.closed), FAINT * problem.norm(problem.largest * bound)
        ),
        load_scale=max(new, FADING * old, SELF_STRESS * float((compliance.area * length(before.traction)).sum())),
    )
    lost = traction - before.traction
    if lost.any():
        displacement = displacement + problem.apply(lost)
    return problem, problem.at(traction, displacement, moved)


def _solved(problem: Problem, start: Point, tol: float) -> Point:
    """The answer to `tol`, by way of the coarser grids or, where they lead astray, without."""
    solver = settle if problem.load is None else carry
    end = solver(problem, from_coarse(problem, start, tol, solver), tol, MOST_STEPS)
    if not end.residual <= tol:
        end = solver(problem, start, tol, MOST_STEPS)
    for _ in range(FRESH):
        # C q came along by its changes from step to step; what is claimed is claimed of a fresh one.
        fresh = problem.at(end.traction, problem.apply(end.traction), end.motion)
        if problem.norm(fresh.displacement - end.displacement) > STALE * fresh.scale:
            raise ValueError("the state was reached with another compliance: a march keeps to one")
        if fresh.residual <= tol:
            return fresh
        end = solver(problem, fresh, tol, MOST_STEPS)
    raise _not_converged(end, tol, problem.tally)


def _step(problem: Problem, before: State, end: Point) -> Step:
    """The new state, and the evidence."""
    # A point slips where its slip would carry the traction out of the disc; the rest of s is what the tolerance leaves.
    out = length(end.traction + end.slip / problem.largest) > problem.bound
    slipping = out | ~problem.closed
    slipped = np.where(slipping, end.slip, 0.0)
    state = State(end.traction, end.displacement, end.motion, before.slip + slipped, problem.bound)
    energy_before = stored(problem, before.traction, before.displacement)
    energy = stored(problem, end.traction, end.displacement)
    load_before, load = problem.carried(before.traction), problem.carried(end.traction)
    work = 0.5 * float((load_before + load) @ (end.motion - before.motion))
    missed = work - (energy - energy_before) - 0.5 * problem.product(before.traction + end.traction, slipped)
    spans = [
        _spanned(problem, before.traction, before.motion),
        _spanned(problem, end.traction, end.motion),
        energy,
        energy_before,
    ]
    spanned = max(*spans, FAINT_WORK * problem.product(problem.bound, problem.largest * problem.bound))
    return Step(
        state=state,
        load=load,
        slipping=slipping,
        slipped=slipped,
        dissipation=dissipated(problem, before.bound, before.traction, slipped),
        energy=energy,
        work=work,
        residual=end.residual,
        balance=abs(missed) / spanned if spanned > 0.0 else 0.0,
        newton=problem.tally.newton,
        applications=problem.tally.applications,
        near_inverses=problem.tally.near_inverses,
    )


def _spanned(problem: Problem, traction: Array, motion: Array) -> float:
    """Work of the tractions' sizes on the motion's sizes [mJ]: what an error of the balance is measured by."""
    moved = length(problem.face.spread(motion, problem.bound.shape))
    return float((problem.compliance.area * length(traction) * moved).sum())


def _not_converged(end: Point, tol: float, tally: Tally) -> NotConverged:
    return NotConverged(
        "step-residual",
        f"The frictional step did not converge: {end.residual:.2g} is left of the friction conditions where {tol:.2g} "
        f"is allowed, after {tally.newton} Newton steps and {tally.applications:.0f} applications of the compliance. "
        "Take shorter steps of load, motion or clamp; give points that hardly yield a layer; leave out bounds below "
        "1e-9 of the largest; or allow more, 1e-5 serves most figures.",
    )
