"""Pictures as matplotlib figures and as SVG whose bytes depend on the joint alone. Nothing is computed: positions and forces come in."""

from __future__ import annotations

import base64
import io
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

import matplotlib
import numpy as np
from matplotlib import style
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Circle, Patch, Rectangle

from slip.assess import Assessment
from slip.base.records import record
from slip.base.units import System
from slip.joint import plates
from slip.report.words import plain
from slip.verdict.gross_slip import End

Array = np.ndarray
NAMED = 30  # bolts up to which each one bears its name; beyond, only the weakest
WIDTH = 4.4  # inches: text of 9 points stays readable on the narrowest screen


@record
class Ink:
    """Colours of a picture, told apart by the colour-blind and in grey; the ground is left clear."""

    line: str
    faint: str
    shear: str
    weakest: str
    centre: str


LIGHT = Ink(line="#1d2327", faint="#8a949c", shear="#0a66a8", weakest="#b3400e", centre="#6b3fa0")
DARK = Ink(line="#e3e7ea", faint="#7f8b93", shear="#6db6ee", weakest="#ff9a76", centre="#c9a6f5")


@record(eq=False)
class View:
    """What the picture shows, in the reader's unit of length: bolts (n, 2), instant centre or None, hole radius, ranges of x and y."""

    bolts: Array
    centre: Array | None
    hole: float
    low: Array
    high: Array


@contextmanager
def look(ink: Ink) -> Iterator[None]:
    """The library's own defaults, whatever the reader has set up, and ours on top."""
    ours: Any = {
        "axes.edgecolor": ink.faint,
        "axes.labelcolor": ink.line,
        "font.size": 9,
        "svg.fonttype": "none",
        "svg.hashsalt": "slip",
        "text.color": ink.line,
        "text.parse_math": False,
        "xtick.color": ink.line,
        "ytick.color": ink.line,
    }
    with style.context("default", after_reset=True), matplotlib.rc_context(ours):
        yield


def pattern_figure(assessment: Assessment, end: End, units: System | None = None, ink: Ink = LIGHT) -> Figure:
    """The bolt pattern with the shear on every bolt and, where finite, the instant centre of the group limit (clamp held).

    `end` is one of assessment.verdict.ends; axes are in the units of the file or of `units`.
    """
    system = units or assessment.joint.system
    view = _view(assessment, end, system)
    with look(ink):
        span = view.high - view.low
        height = float(np.clip(WIDTH * span[1] / span[0], 2.0, 3.8)) + 1.1
        figure = Figure(figsize=(WIDTH, height), layout="constrained")
        axes = figure.add_subplot()
        _frame(axes, view, system, ink)
        handles = _plates(axes, assessment, system, ink)
        handles += _bolts(axes, assessment, end, view, ink)
        handles += _arrows(axes, assessment, end, view, ink)
        handles += _centre(axes, view, ink)
        figure.legend(handles=handles, loc="outside lower center", ncols=2, frameon=False)
    return figure


def image(figure: Figure, ink: Ink = LIGHT) -> str:
    """The figure as the address of an image that a page holds in itself."""
    return "data:image/svg+xml;base64," + base64.b64encode(svg(figure, ink)).decode("ascii")


def svg(figure: Figure, ink: Ink = LIGHT) -> bytes:
    """The figure as SVG: same figure, same bytes. To be embedded as an image, so that ids of several cannot collide."""
    target = io.BytesIO()
    nothing = {"Date": None, "Creator": None, "Format": None, "Type": None}
    with look(ink), warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph")  # the reader's fonts draw the text, ours only measures it
        figure.savefig(target, format="svg", transparent=True, metadata=nothing)
    return target.getvalue()


def group_centre(assessment: Assessment, end: End) -> Array | None:
    """Instant centre (2,) [mm] of the group limit with the clamp held; None for a pure shift, and where nothing is held."""
    if assessment.slip.group.factor[end.group_state] == 0:
        return None
    centre: Array = assessment.slip.group.centre[end.group_state] + assessment.joint.pattern.centroid
    return centre if np.isfinite(centre).all() else None


def in_view(assessment: Assessment, end: End) -> bool:
    """Whether the instant centre is finite and stands inside the picture."""
    return _view(assessment, end, assessment.joint.system).centre is not None


def _view(assessment: Assessment, end: End, system: System) -> View:
    """Room for bolts and arrows, and for the plates and the instant centre where they are near."""
    unit, joint = system.out(1.0, "length"), assessment.joint
    bolts, hole = joint.pattern.positions * unit, (joint.bolt.hole_diameter or 0.0) / 2 * unit
    size = max(float(np.ptp(bolts, axis=0).max()), 8 * hole) or 1.0
    room = max(0.24 * size, 4 * hole)
    corners = [bolts - room, bolts + room]
    for plate in joint.plates:
        box = _box(plate.outline) * unit
        if box.size and float(np.ptp(box, axis=0).max()) <= 2.5 * size:
            corners.append(box)
    centre = group_centre(assessment, end)
    shown = None if centre is None else centre * unit
    if shown is not None and float(np.abs(shown - bolts.mean(axis=0)).max()) <= 1.5 * size:
        corners.append(shown[None, :])
    else:
        shown = None
    whole = np.concatenate(corners)
    low, high = whole.min(axis=0), whole.max(axis=0)
    edge = 0.05 * (high - low).max()
    return View(bolts, shown, hole, low - edge, high + edge)


def _box(outline: plates.Rectangle | plates.Ring | None) -> Array:
    """Corners (2, 2) of the box round an outline [mm]; empty without one."""
    if isinstance(outline, plates.Rectangle):
        return np.array([[outline.x0, outline.y0], [outline.x1, outline.y1]])
    if isinstance(outline, plates.Ring):
        return np.array([[-0.5, -0.5], [0.5, 0.5]]) * outline.outer_diameter
    return np.empty((0, 2))


def _frame(axes: Axes, view: View, system: System, ink: Ink) -> None:
    axes.set_aspect("equal")
    axes.set_xlim(view.low[0], view.high[0])
    axes.set_ylim(view.low[1], view.high[1])
    axes.set_xlabel(f"x in {system.length}")
    axes.set_ylabel(f"y in {system.length}")
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(color=ink.faint)
    axes.locator_params(nbins=6)
    axes.patch.set_alpha(0.0)


def _plates(axes: Axes, assessment: Assessment, system: System, ink: Ink) -> list[Line2D | Patch]:
    """Outlines of the plates, thin, cut off at the edge of the picture."""
    unit, found = system.out(1.0, "length"), False
    for plate in assessment.joint.plates:
        drawn: list[Patch] = []
        if isinstance(plate.outline, plates.Rectangle):
            low, high = _box(plate.outline) * unit
            drawn = [Rectangle((float(low[0]), float(low[1])), *(float(x) for x in high - low))]
        elif isinstance(plate.outline, plates.Ring):
            diameters = (plate.outline.outer_diameter, plate.outline.inner_diameter)
            drawn = [Circle((0.0, 0.0), d / 2 * unit) for d in diameters if d > 0]
        for patch in drawn:
            patch.set(fill=False, edgecolor=ink.faint, linewidth=0.8)
            axes.add_patch(patch)
            found = True
    return [Line2D([], [], color=ink.faint, linewidth=0.8, label="outlines of the plates")] if found else []


def _bolts(axes: Axes, assessment: Assessment, end: End, view: View, ink: Ink) -> list[Line2D | Patch]:
    """A ring for every bolt, as wide as its hole; that of the weakest is thick, open ones are crossed."""
    names, opened = assessment.joint.pattern.names, assessment.clamp.ledger.open[end.state]
    radius = max(view.hole, 0.008 * float((view.high - view.low).max()))
    for i, (place, name) in enumerate(zip(view.bolts, names, strict=True)):
        weakest, (x, y) = i == end.bolt, (float(v) for v in place)
        colour = ink.weakest if weakest else ink.line
        axes.add_patch(Circle((x, y), radius, fill=False, edgecolor=colour, linewidth=3.0 if weakest else 1.2))
        if opened[i]:
            axes.plot([x], [y], "x", color=ink.line, markersize=9)
        if weakest or len(names) <= NAMED:
            _name(axes, assessment.clamp.states.shear[:, end.state, i], (x, y), radius, name, colour)
    handles: list[Line2D | Patch] = [_mark("o", "bolt", ink.line, edge=1.2)] if len(names) > 1 else []
    handles.append(_mark("o", "bolt with the least factor", ink.weakest, edge=3.0))
    if opened.any():
        handles.append(_mark("x", "open bolt: no clamp left", ink.line))
    return handles


def _name(axes: Axes, shear: Array, place: tuple[float, float], radius: float, name: str, colour: str) -> None:
    """The bolt's name on the side that its arrow leaves free."""
    along, across = (float(v) for v in shear)
    side = -1 if along > 0 else 1
    up = -1 if across > 0 else 1
    at = (place[0] + 0.8 * side * radius, place[1] + 0.8 * up * radius)
    align: dict[str, Any] = {"ha": "left" if side > 0 else "right", "va": "bottom" if up > 0 else "top"}
    axes.annotate(plain(name, 12), at, (2 * side, 2 * up), textcoords="offset points", color=colour, **align)


def _arrows(axes: Axes, assessment: Assessment, end: End, view: View, ink: Ink) -> list[Line2D | Patch]:
    """The shear on every bolt, all to one scale."""
    shear: Array = assessment.clamp.states.shear[:, end.state].T
    longest = float(np.hypot(*shear.T).max())
    if longest == 0:
        return []
    length = 0.16 * float((view.high - view.low).max())
    arrows = shear * length / longest
    true_size: dict[str, Any] = {"angles": "xy", "scale_units": "xy", "scale": 1.0, "minlength": 0}
    axes.quiver(*view.bolts.T, *arrows.T, color=ink.shear, width=0.008, zorder=3, **true_size)
    return [_mark(">", "shear on the bolt", ink.shear)]


def _centre(axes: Axes, view: View, ink: Ink) -> list[Line2D | Patch]:
    if view.centre is None:
        return []
    axes.plot(*view.centre[:, None], "P", color=ink.centre, markersize=9, zorder=4)
    return [_mark("P", "instant centre, group limit", ink.centre)]


def _mark(marker: str, label: str, colour: str, edge: float | None = None) -> Line2D:
    """An entry of the legend; a ring of the given line width, or a full mark."""
    shape: dict[str, Any] = {"markerfacecolor": "none", "markeredgewidth": edge} if edge else {}
    return Line2D([], [], linestyle="none", marker=marker, color=colour, markersize=7, label=label, **shape)
