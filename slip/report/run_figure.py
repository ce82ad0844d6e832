"""A run as a map: its points by regime and true slip, and the face's stiffness over pressure. Nothing is computed."""

from __future__ import annotations

from typing import Any

import matplotlib
import numpy as np
from matplotlib.axes import Axes
from matplotlib.cm import ScalarMappable
from matplotlib.colors import Normalize, to_rgba
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from slip.base.units import System
from slip.report.figures import DARK, LIGHT, WIDTH, Ink, image, look
from slip.stiffness.run_found import OPEN, POINT, SLIPS, STICK, Examined
from slip.stiffness.run_points import Bin
from slip.stiffness.run_table import RunTable

Array = np.ndarray
COLOURS = "cividis"  # even in lightness, alike for readers who tell red from green and who do not
MARKERS = {"stick": "o", "stick, has slipped": "D", "slips": "s", "open": "x"}
FILLED = ("stick, has slipped", "slips")
MANY = 3000  # points beyond which they are stored as dots of a picture, not one by one
DPI = 200


def run_picture(found: Examined, system: System, step: int | None = None) -> dict[str, Any]:
    """The map of a step for light and dark, with the words in its place."""
    step = found.worst if step is None else step
    light, dark = (image(run_figure(found, system, step, ink), ink) for ink in (LIGHT, DARK))
    counts = ", ".join(f"{int((found.state[step] == i).sum())} {name}" for i, name in enumerate(POINT))
    return {"light": light, "dark": dark, "alt": f"Map of the contact. {_title(found, step)}. Points: {counts}."}


def run_figure(found: Examined, system: System, step: int | None = None, ink: Ink = LIGHT) -> Figure:
    """The points of a step, by default the one at which most of the clamp slips: shape by regime, colour by true slip."""
    step = found.worst if step is None else step
    across, up, names = _plane(found.table)
    unit = system.out(1.0, "length")
    places = np.stack([across, up], axis=1) * unit
    size = float(np.ptp(places, axis=0).max()) or 1.0
    span = np.maximum(np.ptp(places, axis=0), 0.15 * size) + 0.12 * size
    with look(ink):
        height = float(np.clip(WIDTH * span[1] / span[0], 1.2, 4.2)) + 1.5
        figure = Figure(figsize=(WIDTH, height), layout="constrained", dpi=DPI)
        axes = figure.add_subplot()
        axes.set_aspect("equal")
        middle = (places.min(axis=0) + places.max(axis=0)) / 2
        axes.set_xlim(*(float(v) for v in middle[0] + span[0] / 2 * np.array([-1, 1])))
        axes.set_ylim(*(float(v) for v in middle[1] + span[1] / 2 * np.array([-1, 1])))
        axes.set_xlabel(f"{names[0]} in {system.length}")
        axes.set_ylabel(f"{names[1]} in {system.length}")
        axes.locator_params(nbins=6)
        _plain(axes, ink)
        handles = _points(figure, axes, found, places, step, system, ink)
        axes.set_title(_title(found, step), fontsize=9)
        figure.legend(handles=handles, loc="outside lower center", ncols=3, frameon=False)
    return figure


def _plane(table: RunTable) -> tuple[Array, Array, str]:
    """The two coordinates in which the face lies; x and y unless one of them does not change and z does."""
    spans = [float(np.ptp(v)) for v in (table.x, table.y)]
    if table.z is not None and min(spans) < 1e-6 * float(np.ptp(table.z)):
        return (table.x, table.z, "xz") if spans[0] >= spans[1] else (table.y, table.z, "yz")
    return table.x, table.y, "xy"


def _title(found: Examined, step: int) -> str:
    name = found.table.steps[step]
    return f"{found.steps.share[step]:.1%} of the clamp slips" + (f", step {name}" if name else "")


def _points(
    figure: Figure, axes: Axes, found: Examined, places: Array, step: int, system: System, ink: Ink
) -> list[Line2D]:
    """Every point by its kind; those with true slip are filled by how much, open ones are crosses."""
    scale, unit = (1e3, "um") if system.length == "mm" else (1e6, "uin")
    state, moved = found.state[step], found.moved[step]
    kinds = {
        "stick": (state == STICK) & ~moved,
        "stick, has slipped": moved,
        "slips": state == SLIPS,
        "open": state == OPEN,
    }
    slip = np.zeros(len(state)) if found.slips is None else np.hypot(*found.slips.vector[:, step])
    slip = np.where(state == OPEN, 0.0, slip) * scale * system.out(1.0, "length")
    most = float(slip.max())
    shades = matplotlib.colormaps[COLOURS](slip / most) if most else np.tile(to_rgba(ink.weakest), (len(slip), 1))
    style: dict[str, Any] = {"rasterized": len(state) > MANY, "s": float(np.clip(4000 / len(state), 2, 40))}
    handles = []
    for name, here in kinds.items():
        if not here.any():
            continue
        colours = {"color": ink.faint} if name == "open" else {"edgecolors": ink.line, "facecolors": "none"}
        filled: dict[str, Any] = {"edgecolors": ink.line, "facecolors": shades[here]}
        look_of = filled if name in FILLED else colours
        axes.scatter(places[here, 0], places[here, 1], marker=MARKERS[name], linewidths=0.5, **look_of, **style)
        inside = ink.faint if name in FILLED else "none"
        own: dict[str, Any] = {"linestyle": "none", "marker": MARKERS[name], "markerfacecolor": inside}
        handles.append(Line2D([], [], color=ink.line, label=name, **own))
    if most:
        bar = figure.colorbar(
            ScalarMappable(Normalize(0.0, most), COLOURS), ax=axes, location="bottom", shrink=0.8, aspect=30
        )
        bar.set_label(f"true slip in {unit}")
    return handles


def pressure_figure(bins: tuple[Bin, ...], system: System, ink: Ink = LIGHT) -> Figure:
    """k_t over pressure: the face's law with its band, and the run's sticking points with their spread."""
    pressure, k = system.out(1.0, "pressure"), system.out(1.0, "stiffness per area")
    with look(ink):
        figure = Figure(figsize=(WIDTH, 3.4), layout="constrained", dpi=DPI)
        axes = figure.add_subplot()
        law = [(b.p * pressure, *(v * k for v in b.law)) for b in bins if b.law is not None]
        if law:
            p, low, typical, high = np.array(law).T
            axes.fill_between(p, low, high, color=ink.shear, alpha=0.2, linewidth=0, label="face's law, low to high")
            axes.plot(p, typical, color=ink.shear, linewidth=1.8, label="typical")
        own = [(b.p * pressure, *(v * k for v in b.own)) for b in bins if b.own is not None]
        if own:
            p, low, middle, high = np.array(own).T
            reach = np.stack([middle - low, high - middle])
            style: dict[str, Any] = {"linestyle": "none", "marker": "D", "markersize": 4, "capsize": 2}
            axes.errorbar(p, middle, yerr=reach, color=ink.weakest, label="run, points that stick", **style)
        axes.set_ylim(bottom=0.0)
        axes.set_xlim(left=0.0)
        axes.set_xlabel(f"pressure in {system.pressure}")
        axes.set_ylabel(f"tangential stiffness in {system.unit('stiffness per area')}")
        _plain(axes, ink)
        if law or own:
            figure.legend(loc="outside lower center", ncols=2, frameon=False)
    return figure


def _plain(axes: Axes, ink: Ink) -> None:
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(color=ink.faint)
    axes.patch.set_alpha(0.0)
