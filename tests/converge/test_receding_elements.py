"""Contact in a tapped joint and between three plates, in axisymmetric finite elements built here on their own, with a solver of their own.

Nine-node quadratic elements; each face is a row of forces at its nodes, which push and never pull, found by non-negative least squares.
Nothing of the package is used on this side.
"""

import numpy as np
import pytest
from scipy.optimize import nnls
from scipy.sparse.linalg import splu
from skfem import Basis, BilinearForm, ElementQuad2, ElementVector, FacetBasis, LinearForm, MeshQuad

from slip.pressure.receding import Engagement, contacts
from slip.pressure.rings import Body

HOLE, THREAD, BEARING, RIM = 5.5, 5.0, 8.0, 70.0  # mm
DEPTH, FLANK = 10.0, np.tan(np.radians(30))


class Plate:
    """A plate from z = low to high, round a hole; loads by its faces' nodes outside the clearance hole."""

    def __init__(self, radii, heights, E, nu):
        mesh = MeshQuad.init_tensor(radii, heights)
        self.basis = Basis(mesh, ElementVector(ElementQuad2()), intorder=6)
        shear, lame = E / (2 * (1 + nu)), E * nu / ((1 + nu) * (1 - 2 * nu))

        @BilinearForm
        def work(u, v, w):
            r = w.x[0]

            def strains(d):
                return d.grad[0][0], d[0] / r, d.grad[1][1], d.grad[0][1] + d.grad[1][0]

            a, b = strains(u), strains(v)
            normal = 2 * shear * (a[0] * b[0] + a[1] * b[1] + a[2] * b[2])
            return 2 * np.pi * r * (lame * sum(a[:3]) * sum(b[:3]) + normal + shear * a[3] * b[3])

        stiffness = work.assemble(self.basis).tolil()
        at = self.basis.doflocs
        vertical = np.zeros(at.shape[1], dtype=bool)
        for dofs in (self.basis.nodal_dofs[1], self.basis.facet_dofs[1], self.basis.interior_dofs[1]):
            vertical[dofs] = True
        self.at, self.vertical = at, vertical
        rim = np.flatnonzero(vertical & (at[0] > RIM - 1e-6))[0]  # holds the plate; idle, since its loads balance
        stiffness[rim, rim] += E
        self.solve = splu(stiffness.tocsc()).solve

    def face(self, z):
        found = np.flatnonzero(self.vertical & (np.abs(self.at[1] - z) < 1e-9) & (self.at[0] > HOLE - 1e-9))
        return found[np.argsort(self.at[0, found])]

    def spread(self, where, direction):
        """Unit load, even over the part of the boundary that `where` picks."""
        facets = self.basis.mesh.facets_satisfying(where, boundaries_only=True)
        edge = FacetBasis(self.basis.mesh, ElementVector(ElementQuad2()), facets=facets, intorder=6)
        load = LinearForm(lambda v, w: 2 * np.pi * w.x[0] * v[direction]).assemble(edge)
        return load / load.sum()


def pressed(plates, faces, loads):
    """Nodal forces on each face: plates from the head down, faces their heights, loads on each plate that the bolt applies."""
    m, count = len(plates[0].face(faces[0])), len(faces)
    C, g = np.zeros((m * count, m * count)), np.zeros(m * count)
    for i, (plate, load) in enumerate(zip(plates, loads, strict=True)):
        forces = np.zeros((plate.at.shape[1], m * count))
        for j, sign in ((i - 1, -1.0), (i, 1.0)):  # the face above presses down, the one below up
            if 0 <= j < count:
                forces[plate.face(faces[j]), j * m + np.arange(m)] = sign
        moved = plate.solve(np.column_stack([forces, load]))
        C += forces.T @ moved[:, :-1]
        g += forces.T @ moved[:, -1]
    factor = np.linalg.cholesky((C + C.T) / 2)
    heavy = 1e6 * np.abs(factor).max()
    system = np.vstack([factor.T, heavy * np.kron(np.eye(count), np.ones(m))])
    found, _ = nnls(system, np.concatenate([-np.linalg.solve(factor, g), heavy * np.ones(count)]), maxiter=20000)
    return plates[0].at[0, plates[0].face(faces[0])], found.reshape(count, m)


def mesh_radii():
    return np.concatenate(
        [np.linspace(HOLE, BEARING, 11), np.linspace(BEARING, 24, 49)[1:], np.geomspace(24, RIM, 9)[1:]]
    )


def below(contact, radius):
    """Share of the force inside a radius: the integral of a pressure that is linear between its radii."""
    r = np.union1d(contact.radii[contact.radii < radius], [radius])
    p = np.interp(r, contact.radii, contact.pressure)
    middle = (r[1:] + r[:-1]) * (p[1:] + p[:-1]) / 4
    return np.sum(2 * np.pi * np.diff(r) / 6 * (r[:-1] * p[:-1] + 4 * middle + r[1:] * p[1:]))


def mean_radius(contact):
    r = np.linspace(contact.radii[0], contact.contact_radius, 20001)
    p = np.interp(r, contact.radii, contact.pressure)
    return np.trapezoid(p * r**2, r) / np.trapezoid(p * r, r)


def compare(found, radii, forces, radius_within):
    """Contact radius, mean radius of the force, and its share inside circles at which the fine mesh has corners."""
    corners, total = radii[::2], np.cumsum(forces)
    # the corner's own force is shared between both sides as a pressure that is about even there shares it
    shares = total[::2] - forces[::2] / 2
    for radius in (6.0, 7.0, 8.0, 9.0, 11.0, 13.0):
        assert below(found, radius) == pytest.approx(np.interp(radius, corners, shares), abs=0.015), radius
    assert mean_radius(found) == pytest.approx(float(radii @ forces), rel=0.005)
    last = radii[np.flatnonzero(forces > 1e-9)[-1]]
    assert found.contact_radius == pytest.approx(last, abs=radius_within)


def test_tapped_joint():
    """12 mm of aluminium on a steel block of 30 mm, pulled evenly at its thread over 10 mm, flanks at 60 degrees."""
    aluminium, steel = (72000.0, 0.33), (206000.0, 0.3)
    radii = mesh_radii()
    upper = Plate(radii, np.linspace(0, 12, 15), *aluminium)
    deep = np.concatenate([np.linspace(-30, -10, 9), np.linspace(-10, 0, 17)[1:]])
    lower = Plate(np.concatenate([np.linspace(THREAD, HOLE, 3)[:-1], radii]), deep, *steel)
    ring = -upper.spread(lambda x: (x[1] > 12 - 1e-9) & (x[0] < BEARING), 1)

    def wall(x):
        return (x[0] < THREAD + 1e-9) & (x[1] > -DEPTH)

    pull = lower.spread(wall, 1) + FLANK * lower.spread(wall, 0)
    r, forces = pressed([upper, lower], [0.0], [ring, pull])
    (found,) = contacts((Body(12, *aluminium), Body(30, *steel)), HOLE, BEARING, Engagement(THREAD, DEPTH))
    compare(found, r, forces[0], radius_within=0.6)


def test_three_plates():
    """8 mm of steel, 5 mm of aluminium and 14 mm of steel with a nut: both faces."""
    steel, aluminium = (206000.0, 0.3), (72000.0, 0.33)
    radii = mesh_radii()
    plates = [
        Plate(radii, np.linspace(0, 8, 11), *steel),
        Plate(radii, np.linspace(-5, 0, 9), *aluminium),
        Plate(radii, np.linspace(-19, -5, 15), *steel),
    ]
    head = -plates[0].spread(lambda x: (x[1] > 8 - 1e-9) & (x[0] < BEARING), 1)
    nut = plates[2].spread(lambda x: (x[1] < -19 + 1e-9) & (x[0] < BEARING), 1)
    r, forces = pressed(plates, [0.0, -5.0], [head, np.zeros_like(plates[1].at[0]), nut])
    bodies = Body(8, *steel), Body(5, *aluminium), Body(14, *steel)
    for found, force in zip(contacts(bodies, HOLE, BEARING), forces, strict=True):
        compare(found, r, force, radius_within=0.5)
