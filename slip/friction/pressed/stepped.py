"""The second route: the frictional step on half-spaces, with the face's own stiffness and the strain by bulk stress."""

from __future__ import annotations

import dataclasses

import numpy as np

from slip.base.records import record
from slip.friction.closed import cylinder
from slip.friction.compliance.protocol import Compliance
from slip.friction.faces import FaceStiffness
from slip.friction.march.face import Face
from slip.friction.march.problem import length
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


@record(eq=False)
class Ground:
    """What all loads on a contact share at one reading of its face's stiffness.

    bound (*field) [MPa]; scale: the grid's share of the force, with which gross slip scales; stuck: a step that nothing slips in,
    under the gross-slip load.
    """

    grid: Laid
    face: Face
    bound: Array
    scale: float
    stuck: Step

    def sticks(self, load: float) -> bool:
        """Whether nothing slips under a load along the shear [N]; the stuck answer is linear."""
        tractions = length(self.stuck.state.traction) * (load / self.stuck.load[0])
        return bool((tractions < FULL * self.bound)[self.bound > 0].all())


class Kept:
    """Grounds, routes and energies of one contact by what was asked, so that ends that share them are worked once."""

    def __init__(self) -> None:
        self.grounds: dict[int, Ground] = {}
        self.routes: dict[tuple[float | None, ...], Stepped] = {}
        self.energies: dict[tuple[float, ...], float] = {}


def stepped_route(c: PressedContact, ready: Pair, asked: Asked, kept: Kept | None = None) -> Stepped:
    """Load put on, then a whole cycle; where the face has a stiffness of its own, at its low, typical and high reading.

    kept: of the same contact and friction.
    """
    kept = Kept() if kept is None else kept
    key = (asked.shear, asked.swing, asked.bulk)
    if key not in kept.routes:
        found = _reading(c, ready, asked, TYPICAL, kept)
        if ready.stiffness is not None and spread(ready.stiffness):
            band = tuple(_reading(c, ready, asked, reading, kept).route for reading in (LOW, HIGH))
            found = Stepped(dataclasses.replace(found.route, band=band), found.x, found.traction)
        kept.routes[key] = found
    return kept.routes[key]


def spread(stiffness: FaceStiffness) -> bool:
    """Whether the readings of a stiffness differ."""
    readings = stiffness.value or stiffness.slope
    return readings is not None and readings[LOW] < readings[HIGH]


def _ground(c: PressedContact, ready: Pair, mu: float, reading: int) -> Ground:
    grid = laid(c, ready, reading)
    face, bound = Face(grid.compliance.components), mu * grid.pressure
    load = np.zeros(face.freedoms)
    load[0] = float(bound.sum() * grid.compliance.area)
    stuck = step(grid.compliance, np.where(bound > 0, STUCK * bound.max(), 0.0), face, load=load)
    return Ground(grid, face, bound, float(load[0]) / (mu * c.normal_force), stuck)


def _reading(c: PressedContact, ready: Pair, asked: Asked, reading: int, kept: Kept) -> Stepped:
    if reading not in kept.grounds:
        kept.grounds[reading] = _ground(c, ready, asked.mu, reading)
    on = kept.grounds[reading]
    body, bound = on.grid.compliance, on.bound
    load = np.zeros(on.face.freedoms)
    load[0] = asked.shear * on.scale
    strain = bulk_displacement(c, ready, asked, on.grid)
    still = not strain.any() and on.sticks(float(load[0]))
    there = on.stuck.state if still else _under(on, load, strain).state
    part = float(load[0] / on.stuck.load[0]) if still else 1.0
    traction, motion, touching = part * there.traction, part * float(there.motion[0]), bound > 0
    slip = np.zeros_like(traction) if still else there.slip - strain
    sticking = touching & (length(traction) / np.where(touching, bound, 1.0) < FULL)
    share = float(sticking.sum() / touching.sum())
    signed = traction[0] / np.where(touching, bound, 1.0)
    route = Route(
        NAME,
        motion,
        float(on.stuck.load[0] / on.stuck.state.motion[0]) / on.scale,
        share if ready.plane else float(np.sqrt(share)),
        _middle(on.grid.x[sticking], ready.size) if ready.plane and asked.bulk else None,
        float(length(slip)[touching].max()),
        float(length(body.elongation(traction))[touching].max()),
        trailing_stress(ready, signed, asked.mu, asked.bulk) if ready.plane else None,
        _energy(on, load, strain, asked, None if still else there, (kept.energies, reading)),
    )
    return Stepped(route, *_on_the_line(on.grid, traction[0], touching))


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


def _energy(
    on: Ground,
    load: Array,
    strain: Array,
    asked: Asked,
    there: State | None,
    kept: tuple[dict[tuple[float, ...], float], int],
) -> float | None:
    """Heat [N mm] of a cycle between plus and minus the half range, bulk stress in phase, after the first quarter.

    there: the state under the load, where something slips. kept: energies by what was asked, and the reading that this is of.
    """
    if asked.swing is None:
        return None
    energies, reading = kept
    part = asked.swing / asked.shear
    key = (reading, asked.swing, part * asked.bulk)
    if key not in energies:
        load, strain = part * load, part * strain
        if not strain.any() and on.sticks(float(load[0])):
            energies[key] = 0.0
        else:
            first = there if there is not None and part == 1 else _under(on, load, strain).state
            back = _under(on, -load, -strain, first, strain)
            again = _under(on, load, strain, back.state, -strain)
            energies[key] = float(back.dissipation + again.dissipation) / on.scale
    return energies[key]


def _under(on: Ground, load: Array, strain: Array, state: State | None = None, before: Array | float = 0.0) -> Step:
    return put_on(on.grid.compliance, on.bound, on.face, load, strain, state, before)


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
