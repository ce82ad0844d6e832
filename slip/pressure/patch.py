"""The pressure patch of one bolt: how its clamp presses on the face, ring by ring, for a unit of force."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.pressure.annulus import friction_radius

Array = np.ndarray
RIM = 1e-4  # width of the ring at the rim, in parts of the patch's


@record(eq=False)
class Patch:
    """Points (m, 2) [mm] from the bolt's axis, ring after ring, with their shares (m,) of the clamp and areas (m,) [mm^2].

    radii and profile (k,): the pressure [MPa per N] along the radius, linear between, zero outside. contact_radius [mm]: where it ends.
    friction_radius [mm]: at which the whole clamp holds a torque about the axis.
    """

    points: Array
    shares: Array
    areas: Array
    radii: Array
    profile: Array
    contact_radius: float
    friction_radius: float

    @property
    def density(self) -> Array:
        """Pressure of the points for a unit of clamp, (m,) [1/mm^2]."""
        return self.shares / self.areas

    @property
    def ring_shares(self) -> Array:
        """Share of the clamp of each ring, (rings,)."""
        rings = np.unique(np.round(np.hypot(*self.points.T), 9)).size
        return self.shares.reshape(rings, -1).sum(axis=1)

    def pressure(self, distance: Array) -> Array:
        """Pressure for a unit of clamp [1/mm^2] at a distance [mm] from the axis, any shape."""
        found: Array = np.interp(distance, self.radii, self.profile, left=0.0, right=0.0)
        return found


def from_profile(radii: Array, profile: Array, rings: int, around: int) -> Patch:
    """The patch of a pressure that is linear between `radii` [mm], `profile` up to any factor, both (k,).

    Rings are as wide as Gauss weights of the radius, finer at both ends, and a hair-thin one lies at the rim, where slip begins; each
    has `around` equal points at the centre of its force, so that force and friction radius are exact. The shares add up to 1.
    """
    inner, outer = float(radii[0]), float(radii[-1])
    _, weights = np.polynomial.legendre.leggauss(rings)
    bounds = inner + (outer - inner) * np.concatenate([[0.0], (1 - RIM) * np.cumsum(weights / 2), [1.0]])
    forces, arms = _integrals(radii, profile, bounds)
    middle = (bounds[1:] + bounds[:-1]) / 2
    r = np.where(forces > 0, arms / np.where(forces > 0, forces, 1.0), middle)
    areas = np.pi * (bounds[1:] ** 2 - bounds[:-1] ** 2)
    total = forces.sum()
    return Patch(
        _around(r, around),
        np.repeat(forces / total / around, around),
        np.repeat(areas / around, around),
        radii,
        profile / total,
        outer,
        friction_radius(r, forces),
    )


def _integrals(radii: Array, profile: Array, bounds: Array) -> tuple[Array, Array]:
    """Force, and force times radius, of a piecewise linear pressure between neighbouring bounds (k + 1,), each (k,)."""
    r = np.union1d(radii, bounds)
    p = np.interp(r, radii, profile)
    middle, step = (r[1:] + r[:-1]) / 2, np.diff(r)
    start = np.searchsorted(r, bounds[:-1])

    def between(power: int) -> Array:
        ends, centre = p * r**power, (p[1:] + p[:-1]) / 2 * middle**power
        pieces = 2 * np.pi * step / 6 * (ends[1:] + 4 * centre + ends[:-1])  # Simpson's rule is exact for these
        sums: Array = np.add.reduceat(pieces, start)
        return sums

    return between(1), between(2)


def thin_ring(radius: float, around: int) -> Patch:
    """All of the clamp on one circle: the patch of a torque where nothing better is known. Its area is that of a ring 1 um wide."""
    width = 1e-3
    radii = radius + width * np.array([-0.5, 0.5])
    area = 2 * np.pi * radius * width
    shares, areas = np.full(around, 1 / around), np.full(around, area / around)
    return Patch(_around(np.array([radius]), around), shares, areas, radii, np.full(2, 1 / area), radius, radius)


def _around(radii: Array, around: int) -> Array:
    """Points on circles, (rings * around, 2)."""
    angles = 2 * np.pi * np.arange(around) / around
    circle = np.stack([np.cos(angles), np.sin(angles)], axis=-1)
    return (radii[:, None, None] * circle).reshape(-1, 2)
