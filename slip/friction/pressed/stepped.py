"""The second route: the frictional step on half-spaces, with the face's own stiffness and the strain by bulk stress."""

from __future__ import annotations

import dataclasses

import numpy as np

from slip.base.records import record
from slip.friction.closed import cylinder
from slip.friction.compliance.protocol import Compliance
from slip.friction.faces import FaceStiffness
from slip.friction.march.face import Face
from slip.friction.march.step import State, Step, at_rest, step
from slip.friction.pressed.closed import Asked
from slip.friction.pressed.grids import TYPICAL, Laid, laid, trailing_stress
from slip.friction.pressed.pair import Pair
from slip.friction.pressed.records import Route
from slip.joint.contact import PressedContact

Array = np.ndarray
NAME = "step on half-spaces"
LOW, HIGH = 0, 2
FULL = 1 - 1e-9  # traction over bound from which a point counts as slipping
ROUNDING = 1e-9  # of the half-width: a stick zone that is off by less is in the middle
STUCK = 1e6  # bounds this many times the largest hold everything


@record(eq=False)
class Stepped:
    """The route at typical stiffness with its band, and the traction [MPa] at places x [mm] on the line of the shear."""

    route: Route
    x: Array
    traction: Array


def stepped_route(c: PressedContact, ready: Pair, asked: Asked) -> Stepped:
    """Load put on, then a whole cycle; where the face has a stiffness of its own, at its low, typical and high reading."""
    found = _reading(c, ready, asked, TYPICAL)
    if ready.stiffness is None or not spread(ready.stiffness):
        return found
    band = tuple(_reading(c, ready, asked, reading).route for reading in (LOW, HIGH))
    return Stepped(dataclasses.replace(found.route, band=band), found.x, found.traction)


def spread(stiffness: FaceStiffness) -> bool:
    """Whether the readings of a stiffness differ."""
    readings = stiffness.value or stiffness.slope
    return readings is not None and readings[LOW] < readings[HIGH]


def _reading(c: PressedContact, ready: Pair, asked: Asked, reading: int) -> Stepped:
    grid = laid(c, ready, reading)
    body, bound = grid.compliance, asked.mu * grid.pressure
    face = Face(body.components)
    # the grid's share of the force; gross slip scales with it
    scale = float((grid.pressure * body.area).sum()) / c.normal_force
    load = np.zeros(face.freedoms)
    load[0] = asked.shear * scale
    stuck = step(body, np.where(bound > 0, STUCK * bound.max(), 0.0), face, load=load)
    strain = bulk_displacement(c, ready, asked, grid)
    there = put_on(body, bound, face, load, strain)
    touching = bound > 0
    share = np.sqrt((there.state.traction**2).sum(axis=0)) / np.where(touching, bound, 1.0)
    sticking = touching & (share < FULL)
    part = float(sticking.sum() / touching.sum())
    true = np.sqrt(((there.state.slip - strain) ** 2).sum(axis=0))
    elastic = np.sqrt((body.elongation(there.state.traction) ** 2).sum(axis=0))
    signed = there.state.traction[0] / np.where(touching, bound, 1.0)
    route = Route(
        NAME,
        float(there.state.motion[0]),
        float(load[0] / stuck.state.motion[0]) / scale,
        part if ready.plane else float(np.sqrt(part)),
        _middle(grid.x[sticking], ready.size) if ready.plane and asked.bulk else None,
        float(true[touching].max()),
        float(elastic[touching].max()),
        trailing_stress(ready, signed, asked.mu, asked.bulk) if ready.plane else None,
        _energy(body, bound, face, load, strain, asked) / scale if asked.swing is not None else None,
    )
    return Stepped(route, *_on_the_line(grid, there.state.traction[0], touching))


def bulk_displacement(c: PressedContact, ready: Pair, asked: Asked, grid: Laid) -> Array:
    """Displacement [mm] of the points by the bulk strain of the first body, (components, *field); 0 for a round contact."""
    moved = np.zeros((grid.compliance.components, *grid.x.shape))
    if ready.plane:
        first = c.bodies[0]
        moved[0] = float(cylinder.bulk_strain(asked.bulk, first.youngs_modulus, first.poissons_ratio)) * grid.x
    return moved


def put_on(
    body: Compliance,
    bound: Array,
    face: Face,
    load: Array,
    strain: Array,
    state: State | None = None,
    before: Array | float = 0.0,
) -> Step:
    """A step to a load while the points' free displacement goes from `before` to `strain` [mm].

    What a body moves by itself the traction need not bring about, as with slip: it is added to the slip of the state that the step
    starts from, and the state that it ends in still holds it.
    """
    start = state or at_rest(body, face, bound)
    return step(body, bound, face, dataclasses.replace(start, slip=start.slip + strain - before), load=load)


def _energy(body: Compliance, bound: Array, face: Face, load: Array, strain: Array, asked: Asked) -> float:
    """Heat [N mm] of a cycle between plus and minus the half range, bulk stress in phase, after the first quarter."""
    assert asked.swing is not None
    load, strain = asked.swing / asked.shear * load, asked.swing / asked.shear * strain
    first = put_on(body, bound, face, load, strain)
    back = put_on(body, bound, face, -load, -strain, first.state, strain)
    again = put_on(body, bound, face, load, strain, back.state, -strain)
    return float(back.dissipation + again.dissipation)


def _middle(x: Array, size: float) -> float | None:
    """Middle [mm] of the stick zone along the shear, in a contact of half-width `size`; None where nothing sticks."""
    middle = float(x.min() + x.max()) / 2 if x.size else None
    return 0.0 if middle is not None and abs(middle) < ROUNDING * size else middle


def _on_the_line(grid: Laid, traction: Array, touching: Array) -> tuple[Array, Array]:
    """Places [mm] and tractions [MPa] along the shear; of a round contact those of the cells beside the line."""
    if grid.x.ndim == 1:
        return grid.x, traction
    row = grid.x.shape[1] // 2
    inside = touching[:, row]
    return grid.x[inside, row], traction[inside, row]
