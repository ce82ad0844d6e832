"""Which mechanical model serves a face under a load, and why."""

from __future__ import annotations

from functools import partial

import numpy as np

from slip.friction import model_points
from slip.friction.faces import Faced, FaceStiffness, lap_of, plate_shear, thicknesses
from slip.friction.model import Model
from slip.joint.contact import PressedFace
from slip.joint.joint import Joint
from slip.joint.plates import Rectangle
from slip.pressure.patch import Patch, from_profile

Array = np.ndarray
ACROSS = 32  # points along each side of a rectangle that is pressed evenly
RINGS, AROUND = 12, 72  # of a ring that is pressed evenly
NOT_ALONG = "load not along two lapped plates with outlines and load edges"


def choose(joint: Joint, patch: Patch, stiffness: FaceStiffness, load: Array, clamp: Array) -> Model:
    """The model for one load (Vx, Vy, Mz at the centroid) [N, N mm]; clamp (n,) [N] is only asked for what the range says.

    Strips for a lap that is pulled along, half-spaces for plates thicker than a patch is wide, points for all others.
    """
    lap = lap_of(joint, load)
    if lap is not None:
        from slip.friction import model_strips  # brings a band solver; only a lap pays for it

        laid = partial(model_strips.of_patches, joint.pattern.positions, patch, lap)
        return model_strips.strips(lap, laid, stiffness, clamp)
    width, notes = 2 * patch.contact_radius, tuple[str, ...]()
    if thick(joint, width):
        from slip.friction import model_blocks  # brings SciPy's transforms; only thick blocks pay for them

        grid = model_blocks.of_patches(joint.pattern.arms, patch)
        if grid is not None:
            return model_blocks.blocks(joint, grid, stiffness, ())
        notes = ("thick blocks, yet too many cells between far bolts: each point yields for itself",)
    points = model_points.of_patches(joint.pattern.arms, patch)
    return _points(model_points.PATCHES, joint, points, stiffness, width, notes)


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
    return _points(model_points.FACE, face, over(face), stiffness, face.width, ())


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
    return model_points.Points(places, areas, np.zeros(len(areas), dtype=int), np.full((len(areas), 1), 1 / face.area))


def _ring(face: PressedFace) -> Patch:
    """A ring-shaped face as a patch of even pressure."""
    assert not isinstance(face.overlap, Rectangle)
    radii = np.array([face.overlap.inner_diameter, face.overlap.outer_diameter]) / 2
    return from_profile(radii, np.ones(2), RINGS, AROUND)


def _points(
    name: str, joint: Faced, laid: model_points.Points, stiffness: FaceStiffness, width: float, notes: tuple[str, ...]
) -> Model:
    """Points, with what the range of t/(3G) says: meant for a face that is wide against its plates."""
    why = f"plates rigid in plane; {NOT_ALONG}"
    thickest = max(thicknesses(joint))
    if width < model_points.WIDE * thickest:
        say = joint.system.say
        patches = f"{say(thickest, 'length')} under patches {say(width, 'length')} wide"
        notes = (*notes, f"a plate of {patches}: its own give is only roughly counted")
    faces = joint.interface.parallel_faces
    return model_points.points(name, laid, stiffness, plate_shear(joint), faces, why, notes)
