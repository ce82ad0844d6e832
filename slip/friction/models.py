"""Which mechanical model serves a joint under a load, and the model itself: points over the pressure patches, or strips in lap."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import field

import numpy as np

from slip.base.records import record
from slip.friction.compliance.protocol import Compliance
from slip.friction.compliance.springs import Springs
from slip.friction.faces import FaceStiffness, plate_shear
from slip.friction.march.face import Face
from slip.joint.joint import Joint
from slip.joint.plates import Plate, Rectangle
from slip.pressure.patch import Patch, from_profile

Array = np.ndarray
ALONG = 0.01  # shear across, or moment over shear times length, up to this part of the shear counts as along the strips
CELLS = 240  # of a strip model along the overlap
FINE = 40, 360  # rings and points around a patch that is laid out over the cells
LEAST_COVER = 1e-6  # cells without contact carry nothing; their layer only has to be finite
AXES = {"left": 0, "right": 0, "bottom": 1, "top": 1}
THIN, SLENDER = (
    0.4,
    16.0,
)  # omega t up to which, and length over thickness from which, strips agree with elements (tests/converge)
WIDE = 4.0  # patch diameter over thickness from which the shear of a plate falls about linearly through it (practice)


@record(eq=False)
class Built:
    """A model at given clamps: compliance, the face's rigid motions, and press(clamp (n,) [N]) -> pressure (*field) [MPa] on its points."""

    compliance: Compliance
    face: Face
    press: Callable[[Array], Array]


@record(eq=False)
class Model:
    """A model by name, why it was chosen and what its range says; `faces` shares the load between parallel faces.

    build(clamp (n,), reading): the model at clamps [N] and one reading of the face's stiffness.
    load(shear and moment (3,)): the model's load.
    """

    name: str
    why: str
    faces: int
    build: Callable[[Array, int], Built]
    load: Callable[[Array], Array]
    length: float = 0.0
    notes: tuple[str, ...] = field(default=())


def choose(joint: Joint, patch: Patch, stiffness: FaceStiffness, load: Array, clamp: Array) -> Model:
    """The model for one load (Vx, Vy, Mz at the centroid) [N, N mm]; clamp (n,) [N] is only asked for what the range says."""
    lap = _lap(joint, load)
    if lap is not None:
        return _strips(joint, patch, stiffness, lap, clamp)
    return _points(joint, patch, stiffness)


# Points over the pressure patches: plates rigid in their plane


def _points(joint: Joint, patch: Patch, stiffness: FaceStiffness) -> Model:
    arms, n, m = joint.pattern.arms, joint.pattern.count, len(patch.shares)
    points = (arms[:, None, :] + patch.points).reshape(n * m, 2)
    owner = np.repeat(np.arange(n), m)
    # Pressure at every point per newton of every bolt's clamp; patches of neighbours may overlap, and pressures add.
    distance = np.hypot(*(points[:, None, :] - arms).transpose(2, 0, 1))
    unit = patch.pressure(distance)
    unit[np.arange(n * m), owner] = np.tile(patch.density, n)
    area = np.tile(patch.areas, n)
    faces = joint.interface.parallel_faces
    shear = plate_shear(joint)

    def press(clamp: Array) -> Array:
        return unit @ clamp

    def build(clamp: Array, reading: int) -> Built:
        pressure = press(clamp)
        own = unit[np.arange(n * m), owner] * clamp[owner]
        touching = own > 0
        share = np.where(touching, own / np.where(touching, pressure, 1.0), 1e-9)  # of the area, where patches overlap
        layer = np.where(touching, stiffness.at(pressure, reading), np.inf)
        bulk = np.full(n * m, 1.0 / shear if shear else np.inf)
        compliance = Springs(bulk, area * share, components=2, layer=layer)
        return Built(compliance, Face(2, points.T.copy()), lambda clamp: np.where(touching, press(clamp), 0.0))

    return Model(
        "points over the pressure patches",
        "plates rigid in plane; load not along two lapped plates with outlines and load edges",
        faces,
        build,
        lambda load: load / faces,
        notes=_patch_range(joint, patch),
    )


def _patch_range(joint: Joint, patch: Patch) -> tuple[str, ...]:
    """What the range of t/(3G) says for patches: meant for a face that is wide against its plates."""
    thickest = max(plate.thickness for plate in joint.plates[:2])
    if 2 * patch.contact_radius >= WIDE * thickest:
        return ()
    wide, say = 2 * patch.contact_radius, joint.system.say
    return (
        f"a plate of {say(thickest, 'length')} under patches {say(wide, 'length')} wide: its own give is only roughly counted",
    )


# Two plates in lap, pulled along their length


@record
class Lap:
    """Two strips: axis 0 or 1 along the pull, ends of the overlap and width [mm], EA [N], thickness shear [mm/MPa], shares of the load."""

    axis: int
    start: float
    stop: float
    width: float
    EA: tuple[float, float]
    shear: float
    thickness: float
    halves: int


def _lap(joint: Joint, load: Array) -> Lap | None:
    """The lap that the file describes when this load pulls along it, else None."""
    plates, faces = joint.plates, joint.interface.parallel_faces
    double = len(plates) == 3 and faces == 2 and _alike(plates[0], plates[2])
    if not (double or (len(plates) == 2 and faces == 1)):
        return None
    pair = plates[:2]
    if any(p.material is None or not isinstance(p.outline, Rectangle) or not p.load_edge for p in pair):
        return None
    axis = AXES[pair[0].load_edge]
    if axis != AXES[pair[1].load_edge] or pair[0].load_edge == pair[1].load_edge:
        return None
    spans = [_span(p, axis) for p in pair]
    sides = [_span(p, 1 - axis) for p in pair]
    start, stop = max(s[0] for s in spans), min(s[1] for s in spans)
    width = min(s[1] for s in sides) - max(s[0] for s in sides)
    if stop <= start or width <= 0 or abs(load[1 - axis]) > ALONG * abs(load[axis]):
        return None
    if load[axis] == 0 or abs(load[2]) > ALONG * abs(load[axis]) * (stop - start):
        return None
    half = 0.5 if double else 1.0  # the middle plate of a double lap works half for either face
    inner = half * pair[1].thickness
    EA = tuple(
        p.material.youngs_modulus * t * (side[1] - side[0])
        for p, t, side in zip(pair, (pair[0].thickness, inner), sides, strict=True)
        if p.material is not None
    )
    first, second = (EA[0], EA[1]) if pair[0].load_edge in ("right", "top") else (EA[1], EA[0])
    return Lap(axis, start, stop, width, (first, second), plate_shear(joint), max(pair[0].thickness, inner), faces)


def _alike(first: Plate, second: Plate) -> bool:
    return (first.thickness, first.material, first.outline, first.load_edge) == (
        second.thickness,
        second.material,
        second.outline,
        second.load_edge,
    )


def _span(plate: Plate, axis: int) -> tuple[float, float]:
    """Ends of a rectangular outline along an axis."""
    o = plate.outline
    assert isinstance(o, Rectangle)
    return ((o.x0, o.x1), (o.y0, o.y1))[axis]


def _strips(joint: Joint, patch: Patch, stiffness: FaceStiffness, lap: Lap, clamp: Array) -> Model:
    from slip.friction.compliance.strips import Strips  # brings a band solver; only a lap pays for it

    length = lap.stop - lap.start
    along = joint.pattern.positions[:, lap.axis]
    unit, cover = _line_density(along, patch, lap, length)

    def press(clamp: Array) -> Array:
        return unit @ clamp

    def build(clamp: Array, reading: int) -> Built:
        pressure = press(clamp)
        least = 1e-6 * pressure.max()  # cells without pressure carry nothing; their layer only has to be finite
        layer = stiffness.at(np.maximum(pressure, least), reading)
        if stiffness.value is not None:  # it acts where the plates touch, not over the whole width
            layer = layer * np.maximum(cover, LEAST_COVER)
        shear = lap.shear
        compliance = Strips(length, lap.width, CELLS, lap.EA, layer=layer, shear=shear)
        return Built(compliance, Face(1), press)

    return Model(
        "shear-lag strips",
        "two plates in lap, pulled along their length",
        lap.halves,
        build,
        lambda load: load[lap.axis : lap.axis + 1] / lap.halves,
        length,
        _lap_range(stiffness, lap, unit, clamp),
    )


def _line_density(along: Array, patch: Patch, lap: Lap, length: float) -> tuple[Array, Array]:
    """Pressure [MPa] in every cell, mean over the width, per newton of every bolt's clamp: (CELLS, n); part of each cell's width that
    the patches cover, (CELLS,)."""
    fine = from_profile(patch.radii, patch.profile, *FINE)
    places = along[:, None] + fine.points[:, lap.axis] - lap.start
    cells = np.clip((places / length * CELLS).astype(int), 0, CELLS - 1)
    unit, cover = np.zeros((CELLS, len(along))), np.zeros(CELLS)
    cell = lap.width * length / CELLS
    for bolt, row in enumerate(cells):
        unit[:, bolt] = np.bincount(row, weights=fine.shares, minlength=CELLS) / cell
        cover += np.bincount(row, weights=fine.areas, minlength=CELLS) / cell
    return unit, np.minimum(cover, 1.0)


def _lap_range(stiffness: FaceStiffness, lap: Lap, unit: Array, clamp: Array) -> tuple[str, ...]:
    """What the range of strips with t/(3G) says: slender laps whose shear decays over more than two thicknesses."""
    pressure = unit @ clamp
    k_t = float(stiffness.at(pressure[pressure > 0], 1).mean())
    k = k_t / (1 + k_t * lap.shear) * lap.width
    omega_t = float(np.sqrt(k * (1 / lap.EA[0] + 1 / lap.EA[1]))) * lap.thickness
    notes = []
    if omega_t > THIN:
        notes.append(f"omega t = {omega_t:.2g} is above {THIN:g}: true slip and energy are off by more than 10 %")
    if lap.stop - lap.start < SLENDER * lap.thickness:
        notes.append(f"the lap is shorter than {SLENDER:g} thicknesses: true slip and energy are off by more than 10 %")
    return tuple(notes)
