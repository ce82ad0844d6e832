"""How far the pressure spreads between two equal plates round a bolt, and its shape: the table of a computed contact.

The contact of frictionless plates recedes to a radius that does not depend on the force. The table holds for a hole of
about 0.69 of the bearing radius; outside it nothing is said.
"""

from __future__ import annotations

import numpy as np

from slip.base.tables import number, table

Array = np.ndarray
HOLE_RATIO = (0.66, 0.72)  # hole over bearing radius: the table's 0.69 and what rounds to it


def in_range(thickness: float, bearing_radius: float, hole_radius: float) -> bool:
    """Whether two plates of equal thickness [mm] with this bearing and hole radius [mm] lie inside the table."""
    ratios = [number(row, "thickness/bearing_radius") for row in table("receding_contact")]
    ratio = thickness / bearing_radius
    return min(ratios) <= ratio <= max(ratios) and HOLE_RATIO[0] <= hole_radius / bearing_radius <= HOLE_RATIO[1]


def contact_radius(thickness: float, bearing_radius: float) -> float:
    """Outer radius [mm] of the contact of two equal plates: bearing radius + c thickness, c by linear interpolation.

    Source: the table receding_contact (derived by a finite-element model).
    """
    rows = table("receding_contact")
    ratios = [number(row, "thickness/bearing_radius") for row in rows]
    spread = np.interp(thickness / bearing_radius, ratios, [number(row, "c") for row in rows])
    return float(bearing_radius + spread * thickness)


def ring_forces(hole_radius: float, outer_radius: float, rings: int) -> tuple[Array, Array]:
    """Radii [mm] and shares of the clamp, both (rings,), of rings under the pressure shape of the table (derived).

    Gauss points in radius; the shares add up to 1.
    """
    points, weights = np.polynomial.legendre.leggauss(rings)
    x = (points + 1) / 2
    rows = table("pressure_shape")
    shape = np.interp(x, [number(row, "x") for row in rows], [number(row, "p/p_hole") for row in rows])
    radii = hole_radius + x * (outer_radius - hole_radius)
    forces = shape * radii * weights
    return radii, forces / forces.sum()
