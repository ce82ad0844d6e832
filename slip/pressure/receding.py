"""Contact of two plates round one bolt, computed: how far the pressure spreads and how it falls, for plates of any two
thicknesses and materials.

Axisymmetric elasticity: each plate is a ring of quadratic elements with the bolt's hole, pressed on its outer face over
the bearing ring; the face between the plates is frictionless and cannot pull. The problem is linear but for the unknown
edge of contact, so contact radius and shape do not depend on the force (receding contact).
"""

from __future__ import annotations

import numpy as np

from slip.base.errors import NotConverged
from slip.base.records import record

Array = np.ndarray
GAUSS = np.polynomial.legendre.leggauss(3)
# Elements under the bearing ring, where the contact ends (as far as the thinner plate is thick), further out, and through
# the thickness; tests/converge holds what finer ones would change.
ACROSS, NEAR, FAR, DEEP = 6, 12, 5, 5
REACH = 4.0  # plate radius beyond the bearing ring, in thicknesses of the thicker plate; further out nothing changes
MOST_CHANGES = 60  # of the set in contact; 5 to 15 are usual


@record
class Body:
    """One plate: thickness [mm], Young's modulus [MPa], Poisson's ratio."""

    thickness: float
    youngs_modulus: float
    poissons_ratio: float


@record(eq=False)
class Contact:
    """Pressure of a unit force over the face: radii (m,) [mm] and pressure (m,) [1/mm^2] there, linear between them; zero
    from contact_radius [mm] on."""

    radii: Array
    pressure: Array
    contact_radius: float


def contact(upper: Body, lower: Body, hole_radius: float, bearing_radius: float) -> Contact:
    """Contact of two plates pressed together round a bolt by equal bearing rings.

    Radii in mm, 0 < hole_radius < bearing_radius. Raises NotConverged when the set in contact does not settle.
    Source: own finite elements (derived); range: large plates, equal bearing rings at both ends, frictionless face.
    """
    radii = _radii(hole_radius, bearing_radius, upper.thickness, lower.thickness)
    bearing = radii <= bearing_radius * (1 + 1e-12)
    flexibility, gap = np.zeros((len(radii), len(radii))), np.zeros(len(radii))
    weights = _hat_loads(radii)
    ring = _ring_load(radii, bearing)
    for body in (upper, lower):
        c, g = _flexibility(body, radii, weights, ring)
        flexibility += c
        gap += g
    area = weights.sum(axis=0)
    pressure = _press(flexibility, gap, area)
    return _finish(radii, pressure, flexibility, gap, area)


def _radii(hole: float, bearing: float, upper: float, lower: float) -> Array:
    """Nodes along the face, mid-side nodes included: even under the bearing ring and near the edge of contact, then growing."""
    near = min(upper, lower)
    inner = np.linspace(hole, bearing, ACROSS + 1)
    middle = bearing + near * np.arange(1, NEAR + 1) / NEAR
    step = near / NEAR
    growth = _growth((REACH * max(upper, lower) - near) / step, FAR)
    outer = middle[-1] + step * np.cumsum(growth ** np.arange(FAR))
    corners = np.concatenate([inner, middle, outer])
    nodes = np.empty(2 * len(corners) - 1)
    nodes[::2], nodes[1::2] = corners, (corners[1:] + corners[:-1]) / 2
    return nodes


def _growth(total: float, count: int) -> float:
    """Ratio g of neighbours in 1 + g + .. + g^(count-1) = total."""
    low, high = 1.0, total
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if (middle ** np.arange(count)).sum() < total else (low, middle)
    return low


def _edge_shapes(s: Array) -> Array:
    """Quadratic shape functions of an edge at s in -1..1, (3, len(s)): ends, then middle is the second node in order."""
    return np.array([s * (s - 1) / 2, 1 - s**2, s * (s + 1) / 2])


def _hat_loads(radii: Array) -> Array:
    """Consistent axial loads (nodes, pressures): column j is the load of a pressure that is 1 at node j, linear between nodes."""
    loads = np.zeros((len(radii), len(radii)))
    points, weights = np.polynomial.legendre.leggauss(4)
    for first in range(0, len(radii) - 2, 2):
        nodes = radii[first : first + 3]
        for half in (0, 1):
            s = (points - 1) / 2 + half  # each half of the element, in the element's own coordinate
            r = nodes[1] + s * (nodes[2] - nodes[0]) / 2
            measure = 2 * np.pi * r * weights / 2 * (nodes[2] - nodes[0]) / 2
            hats = np.array([1 - (s - (half - 1)), s - (half - 1)])
            local = (_edge_shapes(s) * measure) @ hats.T
            loads[first : first + 3, first + half : first + half + 2] += local
    return loads


def _ring_load(radii: Array, bearing: Array) -> Array:
    """Axial loads of a unit force spread evenly over the bearing ring, by nodes of the outer face."""
    loads = np.zeros(len(radii))
    points, weights = GAUSS
    inside = radii[bearing]
    area = np.pi * (inside[-1] ** 2 - inside[0] ** 2)
    for first in range(0, bearing.sum() - 2, 2):
        nodes = radii[first : first + 3]
        r = nodes[1] + points * (nodes[2] - nodes[0]) / 2
        measure = 2 * np.pi * r * weights * (nodes[2] - nodes[0]) / 2
        loads[first : first + 3] += _edge_shapes(points) @ measure / area
    return loads


def _flexibility(body: Body, radii: Array, weights: Array, ring: Array) -> tuple[Array, Array]:
    """Opening of the face by pressures on it, (m, m), and by the bearing load of a unit force, (m,); both weighted with
    the pressures' own loads, so that the matrix is symmetric. The plate is held axially at one point: a shift is free."""
    heights = body.thickness * np.linspace(0, 1, 2 * DEEP + 1)
    stiffness, number = _assemble(body, radii, heights)
    face, outer = 2 * number[:, 0] + 1, 2 * number[:, -1] + 1  # axial freedoms at z = 0 (face) and z = t
    loads = np.zeros((stiffness.shape[0], len(radii) + 1))
    loads[face, :-1] = weights
    loads[outer, -1] = -ring
    stiffness[face[-1], face[-1]] += stiffness.max()  # the loads balance, so the spring that holds the plate stays idle
    starts = np.append(2 * number[::2, 0], stiffness.shape[0])
    moved = _solve_in_blocks(stiffness, loads, starts)
    opening = weights.T @ moved[face]
    return opening[:, :-1], opening[:, -1]


def _solve_in_blocks(matrix: Array, loads: Array, starts: Array) -> Array:
    """Solution of a symmetric system whose blocks, beginning at `starts`, couple with their neighbours only (Thomas)."""
    blocks = [slice(a, b) for a, b in zip(starts[:-1], starts[1:], strict=True)]
    solved = loads.copy()
    carried = []  # for each block the inverse times its coupling to the next
    diagonal = matrix[blocks[0], blocks[0]]
    for here, after in zip(blocks[:-1], blocks[1:], strict=True):
        both = np.linalg.solve(diagonal, np.hstack([matrix[here, after], solved[here]]))
        width = after.stop - after.start
        carried.append(both[:, :width])
        solved[here] = both[:, width:]
        diagonal = matrix[after, after] - matrix[after, here] @ carried[-1]
        solved[after] -= matrix[after, here] @ solved[here]
    solved[blocks[-1]] = np.linalg.solve(diagonal, solved[blocks[-1]])
    for i in range(len(carried) - 1, -1, -1):
        solved[blocks[i]] -= carried[i] @ solved[blocks[i + 1]]
    return solved


def _assemble(body: Body, radii: Array, heights: Array) -> tuple[Array, Array]:
    """Stiffness of a ring of eight-node elements and the numbers of its nodes (radius, height), -1 where there is none."""
    number = -np.ones((len(radii), len(heights)), dtype=int)
    i, j = np.meshgrid(np.arange(len(radii)), np.arange(len(heights)), indexing="ij")
    there = ~((i % 2 == 1) & (j % 2 == 1))  # no node in the middle of an element
    number[there] = np.arange(there.sum())
    columns, rows = np.meshgrid(np.arange(0, len(radii) - 2, 2), np.arange(0, len(heights) - 2, 2), indexing="ij")
    local = np.array([(0, 0), (2, 0), (2, 2), (0, 2), (1, 0), (2, 1), (1, 2), (0, 1)])
    at_r = columns.ravel()[:, None] + local[:, 0]
    at_z = rows.ravel()[:, None] + local[:, 1]
    element = _element_stiffness(body, radii[at_r], heights[at_z])
    nodes = number[at_r, at_z]
    freedoms = np.stack([2 * nodes, 2 * nodes + 1], axis=-1).reshape(len(nodes), 16)
    stiffness = np.zeros((2 * there.sum(), 2 * there.sum()))
    np.add.at(stiffness, (freedoms[:, :, None], freedoms[:, None, :]), element)
    return stiffness, number


def _element_stiffness(body: Body, r: Array, z: Array) -> Array:
    """Stiffness (elements, 16, 16) of eight-node ring elements with nodes r, z (elements, 8); freedoms u_r, u_z in turn."""
    E, nu = body.youngs_modulus, body.poissons_ratio
    lame = E * nu / ((1 + nu) * (1 - 2 * nu))
    shear = E / (2 * (1 + nu))
    elastic = lame * np.array([[1, 1, 1, 0], [1, 1, 1, 0], [1, 1, 1, 0], [0, 0, 0, 0]]) + shear * np.diag(
        [2.0, 2, 2, 1]
    )
    total = np.zeros((len(r), 16, 16))
    points, weights = GAUSS
    for x, wx in zip(points, weights, strict=True):
        for y, wy in zip(points, weights, strict=True):
            shape, dx, dy = _serendipity(x, y)
            jr, js, jz, jt = r @ dx, r @ dy, z @ dx, z @ dy
            det = jr * jt - js * jz
            dr = (jt[:, None] * dx - jz[:, None] * dy) / det[:, None]
            dz = (jr[:, None] * dy - js[:, None] * dx) / det[:, None]
            radius = r @ shape
            strain = np.zeros((len(r), 4, 16))  # radial, hoop, axial, shear
            strain[:, 0, 0::2] = strain[:, 3, 1::2] = dr
            strain[:, 1, 0::2] = shape / radius[:, None]
            strain[:, 2, 1::2] = strain[:, 3, 0::2] = dz
            volume = 2 * np.pi * radius * det * wx * wy
            total += strain.transpose(0, 2, 1) @ (elastic @ strain) * volume[:, None, None]
    return total


def _serendipity(x: float, y: float) -> tuple[Array, Array, Array]:
    """Shape functions of the eight-node element and their derivatives at (x, y): corners, then mid-sides."""
    cx, cy = np.array([-1, 1, 1, -1.0]), np.array([-1, -1, 1, 1.0])
    a, b = 1 + cx * x, 1 + cy * y
    corner = a * b * (cx * x + cy * y - 1) / 4
    corner_x = cx * b * (2 * cx * x + cy * y) / 4
    corner_y = cy * a * (cx * x + 2 * cy * y) / 4
    middle = np.array([(1 - x * x) * (1 - y), (1 + x) * (1 - y * y), (1 - x * x) * (1 + y), (1 - x) * (1 - y * y)]) / 2
    middle_x = np.array([-2 * x * (1 - y), 1 - y * y, -2 * x * (1 + y), -(1 - y * y)]) / 2
    middle_y = np.array([-(1 - x * x), -2 * y * (1 + x), 1 - x * x, -2 * y * (1 - x)]) / 2
    return np.concatenate([corner, middle]), np.concatenate([corner_x, middle_x]), np.concatenate([corner_y, middle_y])


def _press(flexibility: Array, gap: Array, area: Array) -> Array:
    """Pressures >= 0 of total force 1 under which the face nowhere overlaps: flexibility p + gap + d area >= 0, zero where
    p > 0. The set in contact is changed until both hold."""
    touching = np.ones(len(gap), dtype=bool)
    for _ in range(MOST_CHANGES):
        n = int(touching.sum())
        system = np.zeros((n + 1, n + 1))
        system[:n, :n] = flexibility[np.ix_(touching, touching)]
        system[:n, n] = system[n, :n] = area[touching]
        solved = np.linalg.solve(system, np.append(-gap[touching], 1.0))
        pressure = np.zeros(len(gap))
        pressure[touching] = solved[:n]
        opening = flexibility @ pressure + gap + solved[n] * area
        changed = (touching & (pressure >= 0)) | (~touching & (opening < -1e-12 * abs(gap).max()))
        if (changed == touching).all():
            return pressure
        touching = changed
    raise NotConverged(
        "contact-unsettled", "the contact of the plates does not settle; give plates of plainer proportions"
    )


def _finish(radii: Array, pressure: Array, flexibility: Array, gap: Array, area: Array) -> Contact:
    """The edge of contact between the last loaded node and the next: where the falling pressure, carried on, meets zero."""
    last = int(np.flatnonzero(pressure > 0)[-1])
    inner, outer = radii[last], radii[min(last + 1, len(radii) - 1)]
    fall = (pressure[last - 1] - pressure[last]) / (radii[last] - radii[last - 1])
    edge = min(inner + pressure[last] / fall, outer) if fall > 0 else outer
    keep = slice(0, last + 1)
    return Contact(np.append(radii[keep], edge), np.append(pressure[keep], 0.0), float(edge))
