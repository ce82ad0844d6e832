"""Pictures of a face of known pressure: the plates' overlap under the load, to scale; traction and true slip along a lap."""

from __future__ import annotations

from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Circle, Patch, Rectangle, Wedge

from slip.base.units import System
from slip.friction.even_lap import Curves
from slip.joint import plates
from slip.joint.contact import PressedFace
from slip.joint.loads import Case, Load
from slip.report.figures import LIGHT, WIDTH, Ink, look

Array = np.ndarray
ROOM, FAR = 0.4, 2.5  # of the overlap's size: room round it; plates up to this size are shown whole
ARROW, TURN = 0.3, 0.2  # of the overlap's size: length of the arrow, radius of the arc of a moment
ALONG_HEIGHT = 4.2  # inches
NO_SLIP = 1e-3  # mm: height of the axis where nothing slips
MARKS = 40  # of the step's values that are shown, about
Handles = list[Line2D | Patch]


def plan_figure(face: PressedFace, case: Case, end: str, system: System, ink: Ink = LIGHT) -> Figure:
    """Outlines of the plates, the overlap that is pressed, and the load of one end: its shear where it acts, its moment."""
    unit = system.out(1.0, "length")
    box = _box(face.overlap) * unit
    size = float(np.ptp(box, axis=0).max())
    at = np.array(case.at if case.at is not None else face.middle) * unit
    low, high = _view(face, box, at, size, unit)
    with look(ink):
        span = high - low
        height = float(np.clip(WIDTH * span[1] / span[0], 1.2, 3.8)) + 1.1
        figure = Figure(figsize=(WIDTH, height), layout="constrained")
        axes = figure.add_subplot()
        _frame(axes, low, high, system, ink)
        handles = _plates(axes, face, unit, ink)
        handles += _load(axes, dict(case.ends)[end], at, size, ink)
        figure.legend(handles=handles, loc="outside lower center", ncols=2, frameon=False)
    return figure


def _box(outline: plates.Rectangle | plates.Ring | None) -> Array:
    """Corners (2, 2) of the box round an outline [mm]."""
    if isinstance(outline, plates.Rectangle):
        return np.array([[outline.x0, outline.y0], [outline.x1, outline.y1]])
    assert isinstance(outline, plates.Ring)
    return np.array([[-0.5, -0.5], [0.5, 0.5]]) * outline.outer_diameter


def _view(face: PressedFace, box: Array, at: Array, size: float, unit: float) -> tuple[Array, Array]:
    """Room for the overlap and the load; plates that are much larger are cut off."""
    corners = [box + ROOM * size * np.array([[-1], [1]]), np.stack([at - ARROW * size, at + ARROW * size])]
    boxes = [_box(plate.outline) * unit for plate in face.plates]
    corners += [one for one in boxes if float(np.ptp(one, axis=0).max()) <= FAR * size]
    whole = np.concatenate(corners)
    edge = 0.05 * size
    return whole.min(axis=0) - edge, whole.max(axis=0) + edge


def _frame(axes: Axes, low: Array, high: Array, system: System, ink: Ink) -> None:
    axes.set_aspect("equal")
    axes.set_xlim(low[0], high[0])
    axes.set_ylim(low[1], high[1])
    axes.set_xlabel(f"x in {system.length}")
    axes.set_ylabel(f"y in {system.length}")
    _plain(axes, ink)


def _plain(axes: Axes, ink: Ink) -> None:
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(color=ink.faint)
    axes.locator_params(nbins=6)
    axes.patch.set_alpha(0.0)


def _plates(axes: Axes, face: PressedFace, unit: float, ink: Ink) -> Handles:
    """The overlap filled, the outlines thin: the first plate's whole, the others' broken."""
    handles: Handles = []
    filled = _drawn(face.overlap, unit, {"facecolor": ink.faint, "alpha": 0.25, "linewidth": 0})
    handles.append(Patch(facecolor=ink.faint, alpha=0.25, label="overlap, pressed"))
    for i, plate in enumerate(face.plates[:2]):
        style: dict[str, Any] = {"linestyle": "--" if i else "-", "linewidth": 1.2}
        filled += _edges(plate.outline, unit, {"fill": False, "edgecolor": ink.line, **style})
        handles.append(Line2D([], [], color=ink.line, label="second plate" if i else "first plate", **style))
    for patch in filled:
        axes.add_patch(patch)
    return handles


def _drawn(outline: plates.Rectangle | plates.Ring, unit: float, style: dict[str, Any]) -> list[Patch]:
    """An outline as an area."""
    if isinstance(outline, plates.Ring):
        outer, inner = (d / 2 * unit for d in (outline.outer_diameter, outline.inner_diameter))
        return [Wedge((0.0, 0.0), outer, 0, 360, width=outer - inner, **style)]
    low, high = _box(outline) * unit
    return [Rectangle((float(low[0]), float(low[1])), *(float(x) for x in high - low), **style)]


def _edges(outline: plates.Rectangle | plates.Ring | None, unit: float, style: dict[str, Any]) -> list[Patch]:
    """An outline as lines."""
    if isinstance(outline, plates.Ring):
        diameters = (outline.outer_diameter, outline.inner_diameter)
        return [Circle((0.0, 0.0), d / 2 * unit, **style) for d in diameters if d > 0]
    assert outline is not None
    return _drawn(outline, unit, style)


def _load(axes: Axes, load: Load, at: Array, size: float, ink: Ink) -> Handles:
    """The shear as an arrow from where it acts, and the couple of the file as an arc with its sense."""
    handles: Handles = []
    shear, couple = np.array(load.shear), load.moment[2]
    force = float(np.hypot(*shear))
    if force > 0:
        way = shear / force * ARROW * size
        true_size: dict[str, Any] = {"angles": "xy", "scale_units": "xy", "scale": 1.0, "minlength": 0}
        axes.quiver(*at, *way, color=ink.shear, width=0.012, zorder=3, **true_size)
        axes.plot(*at, "o", color=ink.shear, markersize=4, zorder=3)
        handles.append(_mark(">", "shear on the first plate", ink.shear))
    if couple:
        _arc(axes, couple, at, TURN * size, ink)
        handles.append(Line2D([], [], color=ink.centre, linewidth=2.0, label="moment on it"))
    return handles


def _arc(axes: Axes, couple: float, at: Array, radius: float, ink: Ink) -> None:
    """Three quarters of a circle, with a head at the end that the moment turns to."""
    angles = np.radians(np.linspace(-60, 200, 60))[:: 1 if couple > 0 else -1]
    x, y = at[0] + radius * np.cos(angles), at[1] + radius * np.sin(angles)
    axes.plot(x, y, color=ink.centre, linewidth=2.0, zorder=3)
    style: dict[str, Any] = {"arrowstyle": "-|>", "color": ink.centre, "linewidth": 0, "mutation_scale": 16}
    axes.annotate("", (x[-1], y[-1]), (x[-4], y[-4]), arrowprops=style, zorder=3)


def _mark(marker: str, label: str, colour: str) -> Line2D:
    return Line2D([], [], linestyle="none", marker=marker, color=colour, markersize=7, label=label)


def along_figure(curves: Curves, system: System, ink: Ink = LIGHT) -> Figure:
    """Traction, with its bound, above true slip, along the overlap by both routes, in the reader's units."""
    length, pressure = (system.out(1.0, kind) for kind in ("length", "pressure"))
    bound, few = curves.bound * pressure, slice(None, None, max(1, curves.x_step.size // MARKS))
    style: dict[str, Any] = {"linestyle": "none", "marker": "o", "markersize": 3.2, "markerfacecolor": "none"}
    x, x_step = curves.x * length, curves.x_step[few] * length
    with look(ink):
        figure = Figure(figsize=(WIDTH, ALONG_HEIGHT), layout="constrained")
        above, below = figure.subplots(2, 1, sharex=True)
        above.plot(x[[0, -1]], [bound, bound], color=ink.line, linewidth=1.2, label="friction times pressure")
        above.plot(x, curves.traction * pressure, color=ink.shear, linewidth=1.8, label="closed form")
        above.plot(x_step, curves.traction_step[few] * pressure, color=ink.weakest, label="step", **style)
        above.set_ylim(0.0, 1.1 * bound)
        above.set_ylabel(f"traction in {system.pressure}")
        below.plot(x, curves.slip * length, color=ink.shear, linewidth=1.8)
        below.plot(x_step, curves.slip_step[few] * length, color=ink.weakest, **style)
        most = float(max(curves.slip.max(), curves.slip_step.max()))
        below.set_ylim(0.0, 1.1 * (most or NO_SLIP) * length)
        below.set_ylabel(f"true slip in {system.length}")
        below.set_xlabel(f"{'xy'[curves.axis]} along the overlap in {system.length}")
        for axes in (above, below):
            _plain(axes, ink)
        figure.align_ylabels([above, below])
        figure.legend(loc="outside lower center", ncols=3, frameon=False)
    return figure
