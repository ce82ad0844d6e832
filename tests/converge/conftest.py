"""Two plates of half a symmetric double lap in two-dimensional finite elements, shared by the tests that put contacts between them.

The inner plate's half lies from y = 0 (symmetry) to t and reaches out to the left, the outer plate above it to the right. Plane stress,
quadratic quadrilaterals. Nothing of the package is used here.
"""

import numpy as np
import pytest
from scipy.sparse import bmat, csr_matrix
from skfem import Basis, ElementQuad2, ElementVector, MeshQuad, asm
from skfem.models.elasticity import lame_parameters, linear_elasticity

INNER, OUTER = 0, 1


class Plates:
    """Both plates t thick, E [MPa], nu, width [mm]: degrees of freedom by place, and the matrix of their stiffness.

    over: places of the corners of elements along the overlap, 0 to L; free: along the free length, from above 0; depth: through a
    plate from its far side (0) to the face (1).
    """

    def __init__(self, t, over, free, depth, E, nu, width):
        L = over[-1]
        inner = MeshQuad.init_tensor(np.concatenate([-free[::-1], over]), t * depth)
        outer = MeshQuad.init_tensor(np.concatenate([over, L + free]), t + t * (1 - depth[::-1]))
        bases = [Basis(mesh, ElementVector(ElementQuad2())) for mesh in (inner, outer)]
        self.t, self.L = t, L
        self.at = np.hstack([basis.doflocs for basis in bases])
        self.n = self.at.shape[1]
        self._vertical, self._plate = np.zeros(self.n, dtype=bool), np.arange(self.n) >= bases[0].N
        for start, basis in zip((0, bases[0].N), bases, strict=True):
            for dofs in (basis.nodal_dofs[1], basis.facet_dofs[1], basis.interior_dofs[1]):
                self._vertical[start + dofs] = True
        # plane stress by the plane-strain constants that give it
        law = linear_elasticity(*lame_parameters(E * (1 + 2 * nu) / (1 + nu) ** 2, nu / (1 + nu)))
        inner_part, outer_part = (width * asm(law, basis) for basis in bases)
        self.stiffness = bmat([[inner_part, None], [None, outer_part]]).tocsr()
        self.held = np.concatenate([self.on(1, 0.0, INNER, True), self.on(0, L + free[-1], OUTER, False)])
        self.grip = self.on(0, -free[-1], INNER, False)
        self.lower, self.upper = self.face(INNER, False), self.face(OUTER, False)

    def on(self, axis, value, plate, up):
        """Degrees of freedom along x, or y (up), on a line of one plate, in order."""
        found = np.flatnonzero((np.abs(self.at[axis] - value) < 1e-9) & (self._plate == plate) & (self._vertical == up))
        return found[np.argsort(self.at[1 - axis, found])]

    def face(self, plate, up):
        """Those of a plate on the overlap."""
        found = self.on(1, self.t, plate, up)
        return found[(self.at[0, found] > -1e-9) & (self.at[0, found] < self.L + 1e-9)]

    def tied(self, held, as_one=()):
        """All degrees of freedom from the free ones, (n, free), and the place of each among them, -1 where it is held.

        The faces are tied normally; the freedoms in as_one move together.
        """
        master = np.arange(self.n)
        master[self.face(OUTER, True)] = self.face(INNER, True)
        master[list(as_one)] = min(as_one, default=0)
        free = np.setdiff1d(np.unique(master), held)
        place = -np.ones(self.n, dtype=int)
        place[free] = np.arange(len(free))
        place = place[master]
        there = np.flatnonzero(place >= 0)
        return csr_matrix((np.ones(len(there)), (there, place[there])), shape=(self.n, len(free))), place

    def sections(self):
        """(n,): weights of the extension of the overlap, mean motion of the outer plate's section at L less the inner one's at 0."""
        weights = np.zeros(self.n)
        for dofs, sign in ((self.on(0, 0.0, INNER, False), -1.0), (self.on(0, self.L, OUTER, False), 1.0)):
            weights[dofs] = sign * along(self.at[1, dofs]) / self.t
        return weights


def along(x):
    """Weights of the integral over quadratic edges with nodes x, corners and middles in turn (Simpson)."""
    weights = np.zeros(len(x))
    for i in range(0, len(x) - 2, 2):
        weights[i : i + 3] += (x[i + 2] - x[i]) / 6 * np.array([1, 4, 1])
    return weights


@pytest.fixture(scope="session")
def lap_plates():
    """The class of both plates; a fixture, since tests share no modules."""
    return Plates


@pytest.fixture(scope="session")
def edge_weights():
    """Weights of the integral over quadratic edges."""
    return along
