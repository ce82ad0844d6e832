"""Points over a pressed face: plates rigid in their plane, each point a spring of the face and of the plates' shear."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.friction.compliance.springs import Springs
from slip.friction.faces import FaceStiffness
from slip.friction.march.face import Face
from slip.friction.model import Built, Judged, Model, patch_rim
from slip.pressure.patch import Patch

Array = np.ndarray
PATCHES, FACE = "points over the pressure patches", "points over the pressed face"
WIDE = 4.0  # width of a patch over thickness from which the shear of a plate falls about linearly through it (practice)
NOWHERE = 1e-9  # share of the area that a point without contact keeps


@record(eq=False)
class Points:
    """N points (N, 2) [mm] from the origin of the load, their areas (N,) [mm^2], the bolt that each belongs to, the pressure [MPa] at
    each per newton of every bolt's clamp, (N, n), and that of a patch's rim per newton of its own, 0 where the rim counts like all else."""

    places: Array
    areas: Array
    owner: Array
    unit: Array
    rim: float


def of_patches(arms: Array, patch: Patch, without_rim: bool) -> Points:
    """The patch of one bolt round each of n bolts at arms (n, 2) [mm]."""
    n, m = len(arms), len(patch.shares)
    places = (arms[:, None, :] + patch.points).reshape(n * m, 2)
    owner = np.repeat(np.arange(n), m)
    # Pressure at every point per newton of every bolt's clamp; patches of neighbours may overlap, and pressures add.
    distance = np.hypot(*(places[:, None, :] - arms).transpose(2, 0, 1))
    unit = patch.pressure(distance)
    unit[np.arange(n * m), owner] = np.tile(patch.density, n)
    return Points(places, np.tile(patch.areas, n), owner, unit, patch_rim(patch) if without_rim else 0.0)


def points(
    name: str,
    laid: Points,
    stiffness: FaceStiffness,
    shear: float,
    faces: int,
    why: str,
    notes: tuple[str, ...],
    stretch: float,
) -> Model:
    """The model on points; shear: compliance of the plates through their thickness [mm/MPa]; stretch [mm]: in their plane, left out."""
    every = np.arange(len(laid.areas))

    def press(clamp: Array) -> Array:
        return laid.unit @ clamp

    def build(clamp: Array, reading: int) -> Built:
        pressure = press(clamp)
        own = laid.unit[every, laid.owner] * clamp[laid.owner]
        touching = own > 0
        share = np.where(
            touching, own / np.where(touching, pressure, 1.0), NOWHERE
        )  # of the area, where patches overlap
        layer = np.where(touching, stiffness.at(pressure, reading), np.inf)
        bulk = np.full(len(every), 1.0 / shear if shear else np.inf)
        compliance = Springs(bulk, laid.areas * share, components=2, layer=layer)
        seen = np.where(touching, np.maximum(pressure, laid.rim * clamp[laid.owner]), 0.0)
        yields = 1 / np.where(touching, stiffness.at(seen, reading), np.inf)
        judged = Judged(seen, 1 / layer + shear, yields + shear, yields)
        face = Face(2, laid.places.T.copy())
        return Built(compliance, face, lambda clamp: np.where(touching, press(clamp), 0.0), judged=judged)

    return Model(name, why, faces, build, lambda load: load / faces, stiffness.weakest, notes=notes, stretch=stretch)
