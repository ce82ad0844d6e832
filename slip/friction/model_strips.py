"""Two plates in lap, pulled along their length: strips that stretch and hand the pull over through the face."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import lap as form
from slip.friction.closed.layers import in_series, strip_stiffness
from slip.friction.compliance.strips import Strips
from slip.friction.faces import FaceStiffness, Lap
from slip.friction.march.face import Face
from slip.friction.model import Built, Judged, Model, patch_rim
from slip.pressure.patch import Patch, from_profile

Array = np.ndarray
NAME = "shear-lag strips"
WHY = "two plates in lap, pulled along their length"
CELLS, MOST = 240, 7680  # along the overlap; doubled until they are short against the decay, up to the latter
SHORT = 0.2  # decay times length of a cell
FINE = 40, 360  # rings and points around a patch that is laid out over the cells
LEAST_COVER = 1e-6  # cells without contact carry nothing; their layer only has to be finite
THIN, SLENDER = (
    0.4,
    16.0,
)  # omega t up to which, and length over thickness from which, strips agree with elements (tests/converge)


@record(eq=False)
class Line:
    """Pressure in every cell, mean over the width, per newton of every bolt's clamp, (cells, n) [1/mm^2]; part of each cell's width
    that is in contact, (cells,); pressure at the rim of a patch per newton of its clamp, 0 where the rim counts like all else."""

    unit: Array
    cover: Array
    rim: float


def of_patches(positions: Array, patch: Patch, lap: Lap, without_rim: bool, cells: int) -> Line:
    """The patch of one bolt laid on the cells round each of the bolts at positions (n, 2) [mm]."""
    along = positions[:, lap.axis]
    fine = from_profile(patch.radii, patch.profile, *FINE)
    places = along[:, None] + fine.points[:, lap.axis] - lap.start
    rows = np.clip((places / lap.length * cells).astype(int), 0, cells - 1)
    unit, cover = np.zeros((cells, len(along))), np.zeros(cells)
    cell = lap.width * lap.length / cells
    for bolt, row in enumerate(rows):
        unit[:, bolt] = np.bincount(row, weights=fine.shares, minlength=cells) / cell
        cover += np.bincount(row, weights=fine.areas, minlength=cells) / cell
    return Line(unit, np.minimum(cover, 1.0), patch_rim(patch) if without_rim else 0.0)


def even(lap: Lap, cells: int) -> Line:
    """One force that presses evenly on the whole overlap."""
    each = 1 / (lap.width * lap.length)
    return Line(np.full((cells, 1), each), np.ones(cells), each)


def strips(
    lap: Lap, laid: Callable[[int], Line], stiffness: FaceStiffness, clamp: Array, notes: tuple[str, ...] = ()
) -> Model:
    """The model on strips; laid(cells): the pressure on so many; clamp (n,) [N] is asked for their number, and what the range says."""
    trace, line, cells = Trace(), laid(CELLS), CELLS
    omega = mean_decay(stiffness, lap, line, clamp, trace)
    while omega * lap.length > SHORT * cells and cells < MOST:
        cells *= 2
    line = laid(cells) if cells > CELLS else line

    EA, outside = lap.EA, _outside(lap, omega)

    def press(clamp: Array) -> Array:
        return line.unit @ clamp

    def build(clamp: Array, reading: int) -> Built:
        pressure = press(clamp)
        least = 1e-6 * pressure.max()  # cells without pressure carry nothing; their layer only has to be finite
        layer = stiffness.at(np.maximum(pressure, least), reading)
        if stiffness.value is not None:  # it acts where the plates touch, not over the whole width
            layer = layer * np.maximum(line.cover, LEAST_COVER)
        compliance = Strips(lap.length, lap.width, cells, EA, layer=layer, shear=lap.shear)
        touched = np.where(pressure > 0, line.cover, 0.0)
        inside = pressure / np.maximum(touched, LEAST_COVER)  # of what touches in a cell, not of the whole width
        seen = np.where(pressure > 0, np.maximum(inside, line.rim * clamp[np.argmax(line.unit * clamp, axis=1)]), 0.0)
        yields = 1 / np.where(pressure > 0, stiffness.at(seen, reading) * np.maximum(touched, LEAST_COVER), np.inf)
        judged = Judged(seen * touched, 1 / layer + lap.shear, yields + lap.shear, yields)
        return Built(compliance, Face(1), press, lambda q, load: _edge(lap, EA, q, load), judged)

    return Model(
        NAME,
        WHY,
        lap.halves,
        build,
        lambda load: load[lap.axis : lap.axis + 1] / lap.halves,
        stiffness.weakest,
        lap.length,
        (*notes, *([f"{outside}: true slip and energy are off by more than 10 %"] if outside else [])),
        trace,
        outside=outside,
    )


def _edge(lap: Lap, stiffness: tuple[float, float], traction: Array, load: Array) -> Array:
    """Motion [mm] of both ends of the overlap beyond the mean of their cells, 0 for all others.

    From the end inwards the motion is g = g_end - P x/EA + D q x^2/2, whose mean over the cell lacks P h/(2 EA) - D q h^2/6.
    """
    cells = traction.shape[-1]
    h = lap.length / cells
    D = 1 / stiffness[0] + 1 / stiffness[1]
    more, q, P = np.zeros(cells), np.abs(traction[0]) * lap.width, abs(float(load[0]))
    for cell, EA in ((-1, stiffness[0]), (0, stiffness[1])):
        more[cell] = P * h / (2 * EA) - D * q[cell] * h**2 / 6
    return more


def _outside(lap: Lap, omega: float) -> str:
    """How a lap lies out of the range of strips with t/(3G): slender laps whose shear decays over more than two thicknesses."""
    omega_t = omega * lap.thickness
    said = [f"omega t = {omega_t:.3g} is above {THIN:g}"] if omega_t > THIN else []
    if lap.length < SLENDER * lap.thickness:
        said.append(f"the lap is shorter than {SLENDER:g} thicknesses")
    return ", ".join(said)


def mean_decay(stiffness: FaceStiffness, lap: Lap, line: Line, clamp: Array, trace: Trace) -> float:
    """Decay of the motion from the ends [1/mm], at the mean of the face's typical stiffness over the cells in contact."""
    pressure = line.unit @ clamp
    k_t = float(stiffness.at(pressure[pressure > 0], 1).mean())
    said = "stiffness of the face, mean over the overlap in contact"
    trace.given(said, "k_t", k_t, "N/mm^3", stiffness.source, stiffness.basis)
    trace.given("shear of both plates through their thickness", "C", lap.shear, "mm^3/N", "tsai1998", "derived")
    k_A = trace("the two in series", in_series, k_t=k_t, C=lap.shear)
    k = trace("stiffness for each length", form.line_stiffness, k_A=k_A, b=lap.width)
    EA = [
        trace(f"stiffness of the strip pulled at the {end} end", strip_stiffness, E=E, t=t, b=b)
        for end, (E, t, b) in zip(("far", "near"), lap.strips, strict=True)
    ]
    D = trace("difference of the strips' strains for each newton", form.strain_per_force, EA_1=EA[0], EA_2=EA[1])
    return float(trace("decay of the motion from the ends", form.decay, k=k, D=D))
