"""Pictures of many load cases: how their reserves spread, and the least reserve of each bolt. Nothing is computed."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch
from matplotlib.ticker import MaxNLocator

from slip.base.units import System
from slip.cases.run import TableResult
from slip.cases.summary import BINS, NEAR
from slip.report.figures import DARK, LIGHT, NAMED, WIDTH, Ink, image, look
from slip.report.words import factor, plain

HATCH = "////"  # of what fails: told apart without colour
KINDS = ("below 1: fails", f"1 to {NEAR:g}", f"{NEAR:g} and more")
MARKERS = ("s", "D", "o")


def spread_names() -> list[str]:
    """The classes of reserve in words, the lowest first."""
    edges = [f"{edge:g}" for edge in BINS]
    between = [f"{low} to {high}" for low, high in zip(edges, edges[1:], strict=False)]
    return [f"below {edges[0]}", *between, f"{edges[-1]} and more"]


def spread_picture(found: TableResult) -> dict[str, Any]:
    """How many cases lie in which class of reserve, for light and dark, with the words in its place."""
    light, dark = (image(spread_figure(found.summary.spread, ink), ink) for ink in (LIGHT, DARK))
    counts = [f"{name}: {n}" for name, n in zip(spread_names(), found.summary.spread, strict=True) if n]
    return {"light": light, "dark": dark, "alt": f"Bars: number of cases by reserve factor. {'; '.join(counts)}."}


def spread_figure(spread: Sequence[int], ink: Ink = LIGHT) -> Figure:
    """A bar for each class of reserve from the lowest to the highest that has cases; what fails is hatched."""
    used = np.flatnonzero(spread)
    first, last = (int(used[0]), int(used[-1]) + 1) if used.size else (0, len(spread))
    names, counts = spread_names()[first:last], list(spread[first:last])
    fails = [place < BINS.index(1.0) + 1 for place in range(first, last)]
    with look(ink):
        figure = Figure(figsize=(WIDTH, 1.2 + 0.28 * len(names)), layout="constrained")
        axes = figure.add_subplot()
        places = np.arange(len(names))
        bars = axes.barh(places, counts, color=[ink.weakest if bad else ink.shear for bad in fails], height=0.7)
        for bar, bad in zip(bars, fails, strict=True):
            bar.set_hatch(HATCH if bad else "")
            bar.set_edgecolor(ink.line if bad else ink.shear)
            bar.set_linewidth(0.6)
        for place, count in zip(places, counts, strict=True):
            axes.annotate(str(count), (count, place), (3, 0), textcoords="offset points", va="center")
        axes.set_yticks(places, names)
        axes.invert_yaxis()
        axes.margins(x=0.15)
        axes.set_xlim(left=0)
        axes.xaxis.set_major_locator(MaxNLocator(nbins=5, integer=True))
        axes.set_xlabel("number of cases")
        axes.set_ylabel("reserve factor")
        _plain_frame(axes, ink)
        if any(fails):
            own: list[Any] = [Patch(facecolor=ink.weakest, edgecolor=ink.line, hatch=HATCH, label="below 1: fails")]
            figure.legend(handles=own, loc="outside lower center", frameon=False)
    return figure


def bolts_picture(found: TableResult, system: System) -> dict[str, Any]:
    """The pattern with the least reserve of each bolt, for light and dark, with the words in its place."""
    light, dark = (image(bolts_figure(found, system, ink), ink) for ink in (LIGHT, DARK))
    values = [value for value, _ in found.summary.envelope["reserve"]]
    worst = plain(found.summary.bolts[int(np.argmin(values))], 60)
    alt = f"Plan of the bolts, {len(values)} in number, each marked by its least reserve. The least has bolt {worst}."
    return {"light": light, "dark": dark, "alt": alt}


def bolts_figure(found: TableResult, system: System, ink: Ink = LIGHT) -> Figure:
    """The bolts at their places, shape and colour by the least reserve; of many only the weakest bears its name."""
    unit = system.out(1.0, "length")
    places = found.joint.pattern.positions * unit
    values = [value for value, _ in found.summary.envelope["reserve"]]
    kinds = [0 if value < 1 else 1 if value < NEAR else 2 for value in values]
    colours = (ink.weakest, ink.centre, ink.shear)
    size = max(float(np.ptp(places, axis=0).max()), 1e-9)
    room = 0.22 * size if len(values) > 1 else 1.0
    span = np.ptp(places, axis=0) + 2 * room
    with look(ink):
        height = float(np.clip(WIDTH * span[1] / span[0], 2.0, 3.8)) + 1.1
        figure = Figure(figsize=(WIDTH, height), layout="constrained")
        axes = figure.add_subplot()
        axes.set_aspect("equal")
        axes.set_xlim(float(places[:, 0].min()) - room, float(places[:, 0].max()) + room)
        axes.set_ylim(float(places[:, 1].min()) - room, float(places[:, 1].max()) + room)
        few, weakest = len(values) <= NAMED, int(np.argmin(values))
        for i, (place, value, kind) in enumerate(zip(places, values, kinds, strict=True)):
            x, y = (float(v) for v in place)
            filled = colours[kind] if kind == 0 else "none"
            axes.plot([x], [y], MARKERS[kind], color=colours[kind], markerfacecolor=filled, markersize=9 if few else 5)
            if i == weakest and not few:
                axes.plot([x], [y], "o", color=ink.line, markerfacecolor="none", markersize=11)
            if few or i == weakest:
                said = f"{plain(found.summary.bolts[i], 12)}\n{factor(value, 1.0) if math.isfinite(value) else '-'}"
                axes.annotate(said, (x, y), (0, 7), textcoords="offset points", ha="center", va="bottom", fontsize=8)
        axes.set_xlabel(f"x in {system.length}")
        axes.set_ylabel(f"y in {system.length}")
        axes.locator_params(nbins=6)
        _plain_frame(axes, ink)
        handles = [_mark(kind, colours[kind]) for kind in sorted(set(kinds))]
        figure.legend(handles=handles, loc="outside lower center", ncols=3, frameon=False)
    return figure


def _plain_frame(axes: Axes, ink: Ink) -> None:
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(color=ink.faint)
    axes.patch.set_alpha(0.0)


def _mark(kind: int, colour: str) -> Line2D:
    """An entry of the legend."""
    face = colour if kind == 0 else "none"
    return Line2D([], [], linestyle="none", marker=MARKERS[kind], color=colour, markerfacecolor=face, label=KINDS[kind])
