"""Axisymmetric elements: a plate round its hole as a ring of eight-node quadratic elements, its loads and how it yields to them."""

from __future__ import annotations

import numpy as np

from slip.base.records import record

Array = np.ndarray
GAUSS = np.polynomial.legendre.leggauss(3)
# Nodes of an element, (radius, height) from its first: corners, then mid-sides.
LOCAL = np.array([(0, 0), (2, 0), (2, 2), (0, 2), (1, 0), (2, 1), (1, 2), (0, 1)])


@record
class Body:
    """One plate: thickness [mm], Young's modulus [MPa], Poisson's ratio."""

    thickness: float
    youngs_modulus: float
    poissons_ratio: float


class Ring:
    """A plate's mesh of 8-node elements, `radii` (a,) and `heights` (b,) [mm] of its nodes, mid-side nodes included: a and b are odd.

    size: number of freedoms, u_r and u_z in turn. top, bottom, wall: axial freedoms in order on the first height, on the last, and on
    the innermost radius.
    """

    def __init__(self, body: Body, radii: Array, heights: Array) -> None:
        columns, rows = len(radii) // 2, len(heights) // 2
        self._edge = 2 * rows + 1  # nodes on the edge between two columns; in the middle of a column are rows + 1
        block = self._edge + rows + 1
        self.size = 2 * (columns * block + self._edge)
        at = np.arange(columns + 1) * block
        self.top = 2 * (at[:, None] + [0, self._edge]).ravel()[:-1] + 1
        self.bottom = 2 * (at[:, None] + [self._edge - 1, block - 1]).ravel()[:-1] + 1
        self.wall = 2 * np.arange(self._edge) + 1
        self._strips = self._assemble(body, radii, heights, block)

    def _assemble(self, body: Body, radii: Array, heights: Array, block: int) -> Array:
        """Stiffness of each column of elements alone, (columns, k, k): freedoms of its inner edge, its middle, its outer edge."""
        columns, rows = len(radii) // 2, len(heights) // 2
        left, low = 2 * np.arange(columns)[:, None, None], 2 * np.arange(rows)[None, :, None]
        at_r, at_z = np.broadcast_arrays(left + LOCAL[:, 0], low + LOCAL[:, 1])
        shape = columns, rows, 16, 16
        element = _element_stiffness(body, radii[at_r].reshape(-1, 8), heights[at_z].reshape(-1, 8)).reshape(shape)
        strips = np.zeros((columns, 2 * (block + self._edge), 2 * (block + self._edge)))
        start = np.array([0, self._edge, block])[LOCAL[:, 0]]  # of the edge or middle that each node lies on
        for row in range(rows):
            nodes = start + np.where(LOCAL[:, 0] == 1, row + LOCAL[:, 1] // 2, 2 * row + LOCAL[:, 1])
            freedoms = np.stack([2 * nodes, 2 * nodes + 1], axis=-1).ravel()
            strips[:, freedoms[:, None], freedoms] += element[:, row]
        return strips

    def work(self, loads: Array) -> Array:
        """Work matrix loads^T (displacements by loads), (k, k), of loads (size, k) [N]: exact for sums of them that balance.

        The plate is held axially at one point of its rim; where the loads balance, that spring stays idle.
        """
        work: Array = loads.T @ self._moved(loads)
        return (work + work.T) / 2

    def _moved(self, loads: Array) -> Array:
        """Displacements by loads, column after column of elements, since these couple with their neighbours only (Thomas)."""
        shared = 2 * self._edge
        first = self._strips.shape[1] - shared  # freedoms of a column without its outer edge
        moved, carried, added = loads.copy(), [], np.zeros((shared, shared))
        for c, strip in enumerate(self._strips):
            here, after = slice(c * first, (c + 1) * first), slice((c + 1) * first, (c + 1) * first + shared)
            diagonal, coupling = strip[:first, :first].copy(), strip[:first, first:]
            diagonal[:shared, :shared] += added
            both = np.linalg.solve(diagonal, np.hstack([coupling, moved[here]]))
            carried.append((here, after, both[:, :shared]))
            moved[here] = both[:, shared:]
            moved[after] -= coupling.T @ moved[here]
            added = strip[first:, first:] - coupling.T @ both[:, :shared]
        added[1, 1] += self._strips[-1].max()  # the spring that holds the rim
        moved[after] = np.linalg.solve(added, moved[after])
        for here, after, inverse in reversed(carried):
            moved[here] -= inverse @ moved[after]
        return moved


def edge_shapes(s: Array) -> Array:
    """Quadratic shape functions of an edge at s in -1..1, (3, len(s)): ends, then middle is the second node in order."""
    return np.array([s * (s - 1) / 2, 1 - s**2, s * (s + 1) / 2])


def hat_loads(radii: Array) -> Array:
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
            local = (edge_shapes(s) * measure) @ hats.T
            loads[first : first + 3, first + half : first + half + 2] += local
    return loads


def edge_loads(nodes: Array, density: Array) -> Array:
    """Loads (k,) that sum to 1 along an edge with `nodes` (k,) [mm], k odd, shared as `density` (k,) per length goes: quadratic at most."""
    loads = np.zeros(len(nodes))
    points, weights = GAUSS
    shapes = edge_shapes(points)
    for first in range(0, len(nodes) - 2, 2):
        piece = slice(first, first + 3)
        loads[piece] += shapes @ (density[piece] @ shapes * weights) * (nodes[first + 2] - nodes[first])
    return loads / loads.sum()


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
