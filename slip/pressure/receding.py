"""Contact of plates round one bolt, computed: how far the pressure spreads on each face and how it falls, for a stack of plates of any
thicknesses and materials, with a nut or with the thread in the last plate.

Axisymmetric elasticity: each plate is a ring of quadratic elements with its hole. The bolt presses on the bearing ring of the first
plate; at the far end on that of the last, or it pulls at the wall of the tapped hole. The faces between the plates are frictionless and
cannot pull. The problem is linear but for the unknown edges of contact, so they do not depend on the force (receding contact).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.errors import NotConverged
from slip.base.records import record
from slip.pressure.rings import Body, Ring, edge_loads, hat_loads

Array = np.ndarray
# Elements under the bearing ring, over each distance in which a contact ends, further out, through a plate (or the engaged thread), and
# below the thread; tests/converge holds what finer ones would change.
ACROSS, NEAR, FAR, DEEP, BELOW = 6, 12, 5, 5, 4
REACH = 4.0  # plate radius beyond the bearing ring, in thicknesses of the thickest plate; further out nothing changes
FOIL = 0.01  # of the thickest plate: a plate between others that is thinner passes the pressure on as it is
LEAST = 1e-5  # of the largest pressure: what counts as loaded
MOST_CHANGES = 1000  # of the set in contact; 10 to 30 are usual
WEDGE = float(np.tan(np.pi / 6))  # of flanks at 60 degrees


@record
class Engagement:
    """Thread in the last plate: radius [mm] of the wall that is pulled, not above the hole's, and length [mm] from the face on.

    The pull along the depth z goes with 1 - fall*z/length, fall from 0 (even) to 1; the flanks push the wall outward by wedge times
    the pull: tan of half the thread's angle, without friction.
    """

    radius: float
    length: float
    fall: float = 0.0
    wedge: float = WEDGE


@record(eq=False)
class Contact:
    """Pressure of a unit force over a face: radii (m,) [mm] and pressure (m,) [1/mm^2] there, linear between them; zero
    from contact_radius [mm] on."""

    radii: Array
    pressure: Array
    contact_radius: float


def contact(upper: Body, lower: Body, hole_radius: float, bearing_radius: float) -> Contact:
    """Contact of two plates pressed together round a bolt by equal bearing rings; the rest as `contacts`."""
    return contacts((upper, lower), hole_radius, bearing_radius)[0]


def contacts(
    plates: Sequence[Body], hole_radius: float, bearing_radius: float, thread: Engagement | None = None
) -> tuple[Contact, ...]:
    """Contact on every face of a stack of two or more plates from the head down, one less than there are plates.

    Radii in mm, 0 < hole_radius < bearing_radius. thread: in the last plate; None for an equal bearing ring on its outer face.
    Raises NotConverged when the set in contact does not settle. Source: own finite elements (derived); range: large flat plates,
    frictionless faces.
    """
    thickest = max(p.thickness for p in plates)
    kept = [i for i, p in enumerate(plates) if i in (0, len(plates) - 1) or p.thickness > FOIL * thickest]
    found = _stack([plates[i] for i in kept], hole_radius, bearing_radius, thread)
    return tuple(found[sum(i <= face for i in kept) - 1] for face in range(len(plates) - 1))


def _stack(plates: Sequence[Body], hole: float, bearing: float, thread: Engagement | None) -> list[Contact]:
    """Contact on every face of a stack without foils."""
    radii = _radii(hole, bearing, [p.thickness for p in plates], thread)
    weights = hat_loads(radii)
    area = weights.sum(axis=0)
    faces, m = len(plates) - 1, len(radii)
    work = np.zeros((faces * m + 1, faces * m + 1))  # of the pressures of all faces, face after face, and of the bolt
    for place, body in enumerate(plates):
        on = np.r_[max(place - 1, 0) * m : min(place + 1, faces) * m, faces * m]
        if 0 < place < faces:
            on = on[:-1]
            own = _between(body, radii, weights)
        elif place == faces and thread is not None:
            own = _tapped(body, radii, weights, thread)
        else:
            own = _outer(body, radii, weights, bearing)
        work[np.ix_(on, on)] += own
    first = np.tile(radii <= bearing * (1 + 1e-12), faces)
    pressure = _press(work[:-1, :-1], work[:-1, -1], np.kron(np.eye(faces), area[:, None]), first)
    return [_finish(radii, p) for p in pressure.reshape(faces, m)]


def _radii(hole: float, bearing: float, thicknesses: Sequence[float], thread: Engagement | None) -> Array:
    """Nodes along the faces, mid-side nodes included: even under the bearing ring; then, for each face, NEAR elements over the
    distance in which its contact ends (as far as the thinner side is thick); then growing."""
    ends = np.cumsum(thicknesses)
    thinner = np.unique(np.minimum(ends[:-1], ends[-1] - ends[:-1]))
    corners = [*np.linspace(0, bearing - hole, ACROSS + 1)]
    for start, stop in zip([0.0, *thinner[:-1]], thinner, strict=True):
        count = int(np.ceil(NEAR * (stop - start) / stop - 1e-9))
        corners += [*(bearing - hole + start + (stop - start) * np.arange(1, count + 1) / count)]
    step = corners[-1] - corners[-2]
    local = thicknesses if thread is None else [*thicknesses[:-1], min(thicknesses[-1], thread.length)]
    reach = REACH * max(*local, thinner[-1])
    corners += [*(corners[-1] + _growing(reach - thinner[-1], step, FAR))]
    return _with_middles(hole + np.array(corners))


def _with_middles(corners: Array) -> Array:
    """Corners and the middles between them, in order."""
    nodes = np.empty(2 * len(corners) - 1)
    nodes[::2], nodes[1::2] = corners, (corners[1:] + corners[:-1]) / 2
    return nodes


def _growing(total: float, step: float, count: int) -> Array:
    """Ends of `count` elements that fill a length, each larger than the one before by the same ratio, the first about `step` long."""
    low, high = 1.0, max(total / step, 1.0)
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if (middle ** np.arange(count)).sum() < total / step else (low, middle)
    ends = np.cumsum(low ** np.arange(count))
    return total * ends / ends[-1]


def _outer(body: Body, radii: Array, weights: Array, bearing: float) -> Array:
    """Work matrix of the first or last plate for the pressures on its inner face and the unit force on its bearing ring."""
    ring = Ring(body, radii, body.thickness * np.linspace(0, 1, 2 * DEEP + 1))
    loads = np.zeros((ring.size, len(radii) + 1))
    loads[ring.top, :-1] = weights
    pressed = radii[radii <= bearing * (1 + 1e-12)]
    loads[ring.bottom[: len(pressed)], -1] = -edge_loads(pressed, pressed)  # evenly over circles as long as their radii
    return ring.work(loads)


def _between(body: Body, radii: Array, weights: Array) -> Array:
    """Work matrix of a plate between others for the pressures on its upper face, then on its lower."""
    ring = Ring(body, radii, body.thickness * np.linspace(0, 1, 2 * DEEP + 1))
    m = len(radii)
    loads = np.zeros((ring.size, 2 * m))
    loads[ring.top, :m], loads[ring.bottom, m:] = weights, -weights
    return ring.work(loads)


def _tapped(body: Body, radii: Array, weights: Array, thread: Engagement) -> Array:
    """Work matrix of the tapped plate for the pressures on its face, outside the clearance hole, and the unit pull of the thread."""
    length = min(thread.length, body.thickness)
    step, rest = length / DEEP, body.thickness - length
    depths = step * np.arange(DEEP + 1)
    if rest > 1e-9 * length:
        depths = np.append(depths, length + _growing(rest, step, min(BELOW, int(np.ceil(rest / step)))))
    heights, engaged = _with_middles(depths), 2 * DEEP + 1
    width = radii[0] - thread.radius
    # Elements from the thread to the edge of the clearance hole, where nothing presses.
    count = int(np.ceil(width / (radii[2] - radii[0]) - 1e-9))
    collar = _with_middles(thread.radius + width * np.arange(count + 1) / max(count, 1))[: 2 * count]
    ring = Ring(body, np.concatenate([collar, radii]), heights)
    loads = np.zeros((ring.size, len(radii) + 1))
    loads[ring.top[2 * count :], :-1] = weights
    pull = edge_loads(heights[:engaged], 1 - thread.fall * heights[:engaged] / length)
    loads[ring.wall[:engaged], -1] = -pull
    loads[ring.wall[:engaged] - 1, -1] = thread.wedge * pull
    return ring.work(loads)


def _press(flexibility: Array, gap: Array, areas: Array, touching: Array) -> Array:
    """Pressures >= 0 of total force 1 on each face under which no face overlaps: flexibility p + gap + areas d >= 0, zero where p > 0.

    areas (nodes, faces) has the areas of each face's nodes in its column; `touching` is the set to begin with. Steps never leave
    p >= 0: they end where a pressure vanishes, and that node is let go; where none does, nodes that overlap are taken in.
    """
    size = areas.sum(axis=1)
    overlap = -1e-12 * size * (abs(gap) / size).max()
    touching, pressure = touching.copy(), touching * (areas @ (1 / (areas.T @ touching))) / size
    for _ in range(MOST_CHANGES):
        wanted, opening = _held(flexibility, gap, areas, touching)
        falling = touching & (wanted < 0)
        if falling.any():
            steps = np.where(falling, pressure / np.where(falling, pressure - wanted, 1.0), np.inf)
            pressure = np.maximum(pressure + steps.min() * (wanted - pressure), 0.0)
            touching &= steps > steps.min() * (1 + 1e-9)
            continue
        pressure, wrong = wanted, ~touching & (opening < overlap)
        if not wrong.any():
            return pressure
        touching |= wrong
    raise NotConverged(
        "contact-unsettled", "the contact of the plates does not settle; give plates of plainer proportions"
    )


def _held(flexibility: Array, gap: Array, areas: Array, touching: Array) -> tuple[Array, Array]:
    """Pressures that close the faces where they touch, of either sign, and the opening everywhere, times the nodes' areas."""
    n, faces = int(touching.sum()), areas.shape[1]
    system = np.zeros((n + faces, n + faces))
    system[:n, :n] = flexibility[np.ix_(touching, touching)]
    system[:n, n:] = areas[touching]
    system[n:, :n] = areas[touching].T
    solved = np.linalg.solve(system, np.append(-gap[touching], np.ones(faces)))
    pressure = np.zeros(len(gap))
    pressure[touching] = solved[:n]
    return pressure, flexibility @ pressure + gap + areas @ solved[n:]


def _finish(radii: Array, pressure: Array) -> Contact:
    """The edge of contact between the last loaded node and the next: where the falling pressure, carried on, meets zero."""
    last = int(np.flatnonzero(pressure > LEAST * pressure.max())[-1])
    inner, outer = radii[last], radii[min(last + 1, len(radii) - 1)]
    fall = (pressure[last - 1] - pressure[last]) / (radii[last] - radii[last - 1])
    edge = min(inner + pressure[last] / fall, outer) if fall > 0 else outer
    keep = slice(0, last + 1)
    return Contact(np.append(radii[keep], edge), np.append(pressure[keep], 0.0), float(edge))
