"""Which mechanical model serves a face under a load, and why."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

import numpy as np

from slip.friction import model_points
from slip.friction.faces import ALONG, Faced, FaceStiffness, lap_of, plate_shear, thicknesses
from slip.friction.model import RIM_SAID, Model
from slip.joint.contact import PressedFace
from slip.joint.joint import Joint
from slip.joint.plates import Rectangle, Ring
from slip.pressure.patch import Patch, from_profile

Array = np.ndarray
ACROSS = 32  # points along each side of a rectangle that is pressed evenly
RINGS, AROUND = 12, 72  # of a ring that is pressed evenly
RUN_OUT = 0.1  # of the largest pressure; an edge with less is one where it runs out
NOT_ALONG = "load not along two lapped plates with outlines and load edges"


def choose(
    joint: Joint, patch: Patch, stiffness: FaceStiffness, load: Array, clamp: Array, without_rim: bool = False
) -> Model:
    """The model for one load (Vx, Vy, Mz at the centroid) [N, N mm]; clamp (n,) [N] is only asked for what the range says.

    A constant stiffness has no first slip of its own where the pressure runs out: there the rim is left out. without_rim: for any
    stiffness, so that they compare.
    Strips for a lap that is pulled along, half-spaces for plates thicker than a patch is wide, points for all others.
    """
    lap = lap_of(joint, load)
    runs_out = stiffness.value is not None and patch.profile[-1] < RUN_OUT * patch.profile.max()
    rim = (RIM_SAID,) if runs_out else ()
    runs_out = runs_out or without_rim
    if lap is not None:
        from slip.friction import model_strips  # brings a band solver; only a lap pays for it

        laid = partial(model_strips.of_patches, joint.pattern.positions, patch, lap, runs_out)
        return model_strips.strips(lap, laid, stiffness, clamp, rim)
    width, notes = 2 * patch.contact_radius, rim
    if thick(joint, width):
        from slip.friction import model_blocks  # brings SciPy's transforms; only thick blocks pay for them

        grid = model_blocks.of_patches(joint.pattern.arms, patch)
        if grid is not None:
            return model_blocks.blocks(joint, grid, stiffness, notes)
        notes = (
            *rim,
            "thick blocks, yet too many cells between far bolts: each point yields for itself",
        )
    arms = joint.pattern.arms
    points = model_points.of_patches(arms, patch, runs_out)
    stretch = _stretch(joint, points, load, lambda to: float(np.ptp(arms @ to)) + width)
    return _points(model_points.PATCHES, joint, points, stiffness, width, notes, stretch)


def choose_face(face: PressedFace, stiffness: FaceStiffness, load: Array) -> Model:
    """The model of a face that is pressed evenly; load at the middle of the face. The one clamp is the force that presses it."""
    lap = lap_of(face, load)
    if lap is not None:
        from slip.friction import model_strips  # as above

        return model_strips.strips(lap, partial(model_strips.even, lap), stiffness, np.array([face.force]))
    if thick(face, face.width):
        from slip.friction import model_blocks  # as above

        overlap = face.overlap
        if isinstance(overlap, Rectangle):
            grid = model_blocks.of_rectangle(overlap)
        else:
            found = model_blocks.of_patches(np.zeros((1, 2)), _ring(face))
            assert found is not None, "one patch has few cells"
            grid = found
        return model_blocks.blocks(face, grid, stiffness, ())
    points, o = over(face), face.overlap
    sides = np.array([o.x1 - o.x0, o.y1 - o.y0]) if isinstance(o, Rectangle) else None
    stretch = _stretch(face, points, load, lambda to: face.width if sides is None else float(np.abs(to) @ sides))
    return _points(model_points.FACE, face, points, stiffness, face.width, (), stretch)


def thick(joint: Faced, width: float) -> bool:
    """Whether both plates at the face are thicker than the face is wide [mm], and their own give counts.

    From there on a half-space yields less than t/(3G): under even traction a round one of width d yields by 0.36 d/G in the mean.
    """
    return joint.interface.plate_shear and all(t > width for t in thicknesses(joint))


def over(face: PressedFace) -> model_points.Points:
    """Points over a face that is pressed evenly, from its middle."""
    if isinstance(face.overlap, Rectangle):
        o, inside = face.overlap, (np.arange(ACROSS) + 0.5) / ACROSS - 0.5
        x, y = np.meshgrid(inside * (o.x1 - o.x0), inside * (o.y1 - o.y0), indexing="ij")
        places, areas = np.stack([x.ravel(), y.ravel()], axis=-1), np.full(x.size, face.area / x.size)
    else:
        patch = _ring(face)
        places, areas = patch.points, patch.areas * (face.area / patch.areas.sum())
    return model_points.Points(
        places, areas, np.zeros(len(areas), dtype=int), np.full((len(areas), 1), 1 / face.area), 1 / face.area
    )


def _ring(face: PressedFace) -> Patch:
    """A ring-shaped face as a patch of even pressure."""
    assert not isinstance(face.overlap, Rectangle)
    radii = np.array([face.overlap.inner_diameter, face.overlap.outer_diameter]) / 2
    return from_profile(radii, np.ones(2), RINGS, AROUND)


def _stretch(joint: Faced, laid: model_points.Points, load: Array, extent: Callable[[Array], float]) -> float:
    """The most [mm] by which the faces move at some place of real plates beyond what rigid ones do: F L/EA of the softer plate.

    F: sum of the shears of equal springs on the points, of one face. L: extent of what is pressed along the shear, extent(direction
    (2,)); its diagonal where the load turns. EA: over the plate's width across, but no more than a force spreads to on its way.
    Each plate carries no more than F at any place, and somewhere the faces move no more than rigid plates would (derived).
    """
    force = float(np.hypot(*load[:2]))
    to = load[:2] / force if force else np.array([1.0, 0.0])
    away = np.array([-to[1], to[0]])
    length, across = extent(to), extent(away)
    turns = abs(load[2]) > ALONG * force * length
    if turns:
        x, y = (extent(axis) for axis in np.eye(2))
        length, across = float(np.hypot(x, y)), min(x, y)
    around = np.stack([-laid.places[:, 1], laid.places[:, 0]], axis=-1)
    spread = load[:2] / laid.areas.sum() + load[2] * around / max(laid.areas @ (laid.places**2).sum(axis=1), 1e-300)
    F = float(laid.areas @ np.hypot(*spread.T)) / joint.interface.parallel_faces
    softest = 0.0
    for plate, t in zip(joint.plates[:2], thicknesses(joint), strict=True):
        assert plate.material is not None
        wide = across
        if plate.outline is not None:
            wide = min(_section(plate.outline, None if turns else away), across + length)
        softest = max(softest, 1 / (plate.material.youngs_modulus * t * wide))
    return F * length * softest


def _section(outline: Rectangle | Ring, along: Array | None) -> float:
    """Length [mm] of a section through the middle of an outline along a direction, the least of all for None."""
    if isinstance(outline, Ring):
        return outline.outer_diameter - outline.inner_diameter
    sides = np.array([outline.x1 - outline.x0, outline.y1 - outline.y0])
    return float(sides.min() if along is None else (sides / np.maximum(np.abs(along), 1e-12)).min())


def _points(
    name: str,
    joint: Faced,
    laid: model_points.Points,
    stiffness: FaceStiffness,
    width: float,
    notes: tuple[str, ...],
    stretch: float,
) -> Model:
    """Points, with what the range of t/(3G) says: meant for a face that is wide against its plates."""
    why = f"plates rigid in plane; {NOT_ALONG}"
    thickest = max(thicknesses(joint))
    if width < model_points.WIDE * thickest:
        say = joint.system.say
        patches = f"{say(thickest, 'length')} under patches {say(width, 'length')} wide"
        notes = (*notes, f"a plate of {patches}: its own give is only roughly counted")
    faces = joint.interface.parallel_faces
    return model_points.points(name, laid, stiffness, plate_shear(joint), faces, why, notes, stretch)
