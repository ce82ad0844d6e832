"""Blocks that are thick against the pressed face: half-spaces that yield together, on a grid of cells over the whole face."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.friction.closed.bodies import shear_modulus
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.faces import Faced, FaceStiffness
from slip.friction.march.face import Face
from slip.friction.model import Built, Model
from slip.joint.plates import Rectangle
from slip.pressure.patch import Patch

Array = np.ndarray
NAME = "half-spaces"
LEAST, USUAL = 24, 40  # cells across a patch; across a rectangle's shorter and longer side
MANY, MOST = 64**2, 128**2  # cells that a grid is refined up to, and that it may have
FINE = 6  # places along each side of a cell at which its pressure is taken


@record(eq=False)
class Grid:
    """Cells over the face: size [mm], centres (2, nx, ny) [mm] from the origin of the load. Each entry is a cell (flat index) with the
    force that it belongs to, and the part of that force that presses there; cover (nx, ny): part of each cell in contact."""

    cell: tuple[float, float]
    centres: Array
    index: Array
    owner: Array
    share: Array
    cover: Array


def of_patches(arms: Array, patch: Patch) -> Grid | None:
    """The patch of one bolt round each of n bolts at arms (n, 2) [mm]; None where the grid would have too many cells."""
    wide = 2 * patch.contact_radius
    low, high = arms.min(axis=0) - wide / 2, arms.max(axis=0) + wide / 2
    across = np.clip(np.floor(np.sqrt(MANY / np.prod((high - low) / wide))), LEAST, USUAL)
    cell = wide / across
    shape = np.ceil((high - low) / cell - 1e-9).astype(int)
    if shape.prod() > MOST:
        return None
    cover = np.zeros(shape)
    parts = []
    for owner, arm in enumerate(arms):
        place, pressure, part = _cells(patch, arm - low, cell, shape)
        index = np.ravel_multi_index(np.ix_(*place), tuple(shape))
        np.add.at(cover.reshape(-1), index, part)
        touched = pressure > 0
        share = pressure[touched] / pressure.sum()  # what the cells miss of the force is given back to them
        parts.append((index[touched], np.full(share.size, owner), share))
    index, owners, share = (np.concatenate(part) for part in zip(*parts, strict=True))
    return Grid((cell, cell), _centres(low, (cell, cell), shape), index, owners, share, np.minimum(cover, 1.0))


def _cells(patch: Patch, arm: Array, cell: float, shape: Array) -> tuple[list[Array], Array, Array]:
    """Rows and columns of the cells that a patch may touch, its mean pressure per newton in them, and the part that it covers."""
    first = np.maximum(np.floor((arm - patch.contact_radius) / cell).astype(int), 0)
    last = np.minimum(np.ceil((arm + patch.contact_radius) / cell).astype(int), shape)
    place = [np.arange(a, b) for a, b in zip(first, last, strict=True)]
    inside = (np.arange(FINE) + 0.5) / FINE
    x, y = (((i[:, None] + inside) * cell).ravel() - c for i, c in zip(place, arm, strict=True))
    r = np.hypot(x[:, None], y[None, :])

    def mean(fine: Array) -> Array:
        found: Array = fine.reshape(len(place[0]), FINE, len(place[1]), FINE).mean(axis=(1, 3))
        return found

    return place, mean(patch.pressure(r)), mean((patch.radii[0] <= r) & (r <= patch.radii[-1]))


def of_rectangle(face: Rectangle) -> Grid:
    """One force that presses evenly on a rectangle; its middle is the origin."""
    sides = np.array([face.x1 - face.x0, face.y1 - face.y0])
    shape = np.maximum(LEAST, np.round(USUAL * sides / sides.max())).astype(int)
    cell = (float(sides[0] / shape[0]), float(sides[1] / shape[1]))
    count = int(shape.prod())
    index, share = np.arange(count), np.full(count, 1 / count)
    return Grid(cell, _centres(-sides / 2, cell, shape), index, np.zeros(count, dtype=int), share, np.ones(shape))


def _centres(low: Array, cell: tuple[float, float], shape: Array) -> Array:
    """Centres of all cells, (2, nx, ny) [mm]."""
    x, y = (a + (np.arange(n) + 0.5) * c for a, n, c in zip(low, shape, cell, strict=True))
    return np.array(np.meshgrid(x, y, indexing="ij"))


def blocks(joint: Faced, grid: Grid, stiffness: FaceStiffness, notes: tuple[str, ...]) -> Model:
    """The model on half-spaces, the face's stiffness in series at every cell."""
    shape, faces = grid.cover.shape, joint.interface.parallel_faces
    area = grid.cell[0] * grid.cell[1]
    materials = [p.material for p in joint.plates[:2] if p.material is not None]
    pair = [(float(shear_modulus(m.youngs_modulus, m.poissons_ratio)), m.poissons_ratio) for m in materials]

    def press(clamp: Array) -> Array:
        force = np.bincount(grid.index, weights=grid.share * clamp[grid.owner], minlength=grid.cover.size)
        return force.reshape(shape) / area

    def build(clamp: Array, reading: int) -> Built:
        pressure = press(clamp)
        touching = pressure > 0
        layer = stiffness.at(pressure, reading)
        if stiffness.value is not None:  # it acts where the blocks touch, not over the whole cell
            layer = layer * np.where(touching, grid.cover, 1.0)
        half = HalfSpace((shape[0], shape[1]), grid.cell, pair, layer=np.where(touching, layer, np.inf))
        return Built(half, Face(2, grid.centres), lambda clamp: np.where(touching, press(clamp), 0.0))

    why = "both plates at the face are thicker than the pressed face is wide"
    ends = "the blocks are taken to reach on beyond the pressed face; where they end at it they yield more"
    steep = "first slip, true slip and energy have the steep traction of half-spaces under the rim, which a block that ends there has not"
    return Model(
        NAME, why, faces, build, lambda load: load / faces, stiffness.weakest, notes=(f"{ends}; {steep}", *notes)
    )
