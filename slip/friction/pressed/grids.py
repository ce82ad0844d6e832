"""The contact laid out for the step: half-spaces on a square grid, or half-planes on a line of cells, and the pressure on them."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.friction.closed import bodies
from slip.friction.compliance.dense import Dense
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.protocol import Compliance
from slip.friction.pressed.closed import pressure
from slip.friction.pressed.pair import Pair
from slip.joint.contact import PressedContact

Array = np.ndarray
CELLS = 96  # across a round contact
PLANE_CELLS = 240  # across a plane contact
MARGIN = 1.04  # grid over contact size, where round
WITHIN = 0.999  # of the radius of a sharp flat, whose edge has no finite pressure
FINE = 8  # parts of a cell over which its mean pressure and the stress at the edge are summed
ROUND_FINE = 4  # the same along either side of a round contact's cells
LEAST = 1e-6  # of the largest pressure: cells without pressure carry nothing; their layer only has to be finite
TYPICAL = 1


@record(eq=False)
class Laid:
    """A contact laid out: compliance; pressure (*field) [MPa], mean over each cell; x (*field) [mm], along the shear."""

    compliance: Compliance
    pressure: Array
    x: Array


def laid(c: PressedContact, ready: Pair, reading: int = TYPICAL, cells: int | None = None) -> Laid:
    """The contact on its grid, with the face's layer at one reading of its stiffness where it has one."""
    return _plane(ready, reading, cells or PLANE_CELLS) if ready.plane else _round(c, ready, reading, cells or CELLS)


def _layer(ready: Pair, pressure: Array, reading: int) -> Array | None:
    """k_t [N/mm^3] of the face from the pressure at each point; None for a smooth face."""
    if ready.stiffness is None:
        return None
    return ready.stiffness.at(np.maximum(pressure, LEAST * pressure.max()), reading)


def _round(c: PressedContact, ready: Pair, reading: int, cells: int) -> Laid:
    reach = MARGIN * ready.size
    cell = 2 * reach / cells
    x = (np.arange(cells) + 0.5) * cell - reach
    fine = (x[:, None] + cell * (np.arange(ROUND_FINE) + 0.5 - ROUND_FINE / 2)[None, :] / ROUND_FINE).ravel()
    r = np.hypot(fine[:, None], fine[None, :])
    p = pressure(
        ready, r if ready.profile is not None else np.where(r < ready.size, np.minimum(r, WITHIN * ready.size), r)
    )
    mean = p.reshape(cells, ROUND_FINE, cells, ROUND_FINE).mean(axis=(1, 3))
    G = [(float(bodies.shear_modulus(m.youngs_modulus, m.poissons_ratio)), m.poissons_ratio) for m in c.bodies]
    compliance = HalfSpace((cells, cells), (cell, cell), G, layer=_layer(ready, mean, reading))
    return Laid(compliance, mean, np.broadcast_to(x[:, None], (cells, cells)))


def _plane(ready: Pair, reading: int, cells: int) -> Laid:
    """Plane strain: u(x) = 2/(pi E*) integral of q ln(D/|x - xi|), exact over a cell."""
    h = 2 * ready.size / cells
    x = (np.arange(cells) + 0.5) * h - ready.size
    ends = x[:, None] - x[None, :] + h * np.array([0.5, -0.5])[:, None, None]

    def primitive(s: Array) -> Array:
        return s * (1 + np.log(ready.far / np.abs(s)))

    matrix = 2 / (np.pi * ready.E_star) * (primitive(ends[0]) - primitive(ends[1]))
    if ready.profile is None:  # the mean over a cell in closed form, for the pressure has no bound at the edge
        edges = np.clip(np.append(x - h / 2, x[-1] + h / 2) / ready.size, -1, 1)
        mean = ready.force / np.pi * np.diff(np.arcsin(edges)) / h
    else:
        fine = x[:, None] + h * (np.arange(FINE) + 0.5 - FINE / 2)[None, :] / FINE
        mean = pressure(ready, fine).mean(axis=1)
    return Laid(Dense(matrix, h * ready.length, layer=_layer(ready, mean, reading)), mean, x)


def trailing_stress(ready: Pair, share: Array, mu: float, bulk: float) -> float | None:
    """Stress [MPa] of the first body at the edge that shear puts in tension; share (cells,): traction over bound, by cell.

    2/pi times the integral of q/(a + x), q = share mu p(x), in w = sqrt(a + x), which takes the root out of the edge; plus the
    bulk stress. None for a sharp flat, where it has no bound.
    """
    if ready.profile is None:
        return None
    cells, a = len(share), ready.size
    ends = np.sqrt(2 * a * np.arange(cells + 1) / cells)
    parts = (np.arange(FINE) + 0.5) / FINE
    w = ends[:-1, None] + np.diff(ends)[:, None] * parts
    each = (pressure(ready, w**2 - a) * 2 / w).mean(axis=1) * np.diff(ends)
    return float(2 / np.pi * mu * (share * each).sum() + bulk)
