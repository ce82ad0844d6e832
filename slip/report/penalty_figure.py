"""The window of a contact stiffness as a picture: the error of each quantity over six decades of the value. Nothing is computed."""

from __future__ import annotations

from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch
from matplotlib.ticker import FixedLocator, FuncFormatter, LogLocator, NullFormatter

from slip.base.units import System
from slip.friction.partial import HIGH, LOW, TYPICAL
from slip.report.figures import DARK, LIGHT, WIDTH, Ink, image, look
from slip.report.penalty_words import AREA, known
from slip.stiffness.stage import Penalty
from slip.stiffness.window import LEVELS, QUANTITIES, Window

PANEL, BELOW, ROW = 2.7, 0.7, 0.19  # inches: a panel, its axis, a row of the legend
FLOOR, TOP = 1e-3, 10.0  # errors below and above are not told apart
ROOM = 1.3  # of the decades on either side of the sweep, as a factor
MARKERS = ("o", "s", "^", "D", "v", "P")
DASHES: tuple[Any, ...] = ("-", (0, (6, 2)), (0, (2, 1.5)), (0, (7, 2, 1.5, 2)), (0, (1, 1.5)), (0, (4, 1, 1, 1, 1, 1)))
# A colour for each quantity, by the ground; a test holds that the colour-blind tell them apart.
LINES = {
    LIGHT: ("#1f77c9", "#a3360b", "#009e86", "#4b1d7a", "#b08d00", "#1d2327"),
    DARK: ("#3b8fe0", "#e06a40", "#4fd0a5", "#e3b0f8", "#ecd37a", "#f5f7f8"),
}
POWERS = str.maketrans("-0123456789", "\u207b\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079")
Handle = Line2D | Patch


def window_picture(found: Penalty, system: System) -> dict[str, Any]:
    """The picture for light and dark, with the words in its place and those of what it does not show."""
    light, dark = (image(window_figure(found, system, ink), ink) for ink in (LIGHT, DARK))
    panels = "; ".join(f"{w.purpose}: {', '.join(_drawn(w))}" for w in found.windows)
    alt = (
        f"Error of each quantity over the contact stiffness, both logarithmic. {panels}. "
        "The tables below hold the values at which each line crosses 10, 5 and 1 %."
    )
    return {"light": light, "dark": dark, "alt": alt, "hidden": hidden(found, system)}


def window_figure(found: Penalty, system: System, ink: Ink = LIGHT) -> Figure:
    """A panel for each purpose: lines of error, levels, the band of the real face, the recommended and the present value, bounds."""
    unit = system.out(1.0, AREA)
    with look(ink):
        curves, values = dict[str, Handle](), dict[str, Handle]()
        figure = Figure(layout="constrained")
        panels = figure.subplots(len(found.windows), 1, sharex=True, squeeze=False)[:, 0]
        for axes, w in zip(panels, found.windows, strict=True):
            _frame(axes, w, unit, ink)
            curves |= _curves(axes, w, unit, ink)
            values |= _values(axes, found, w.purpose, unit, ink)
        panels[-1].set_xlabel(f"stiffness per area in {system.unit(AREA)}")
        handles = [*(curves[name] for name in QUANTITIES if name in curves), *values.values()]
        rows = -(-len(handles) // 2)
        figure.set_size_inches(WIDTH, PANEL * len(panels) + BELOW + ROW * rows)
        figure.legend(handles=handles, loc="outside lower center", ncols=2, frameon=False, fontsize=8)
    return figure


def hidden(found: Penalty, system: System) -> list[str]:
    """What the picture leaves out, in sentences."""
    said = []
    for w in found.windows:
        low = [name for name in known(w) if name not in _drawn(w)]
        if low:
            said.append(f"{w.purpose}: below {FLOOR:.1%} at every value: {', '.join(low)}")
        high = [name for name in known(w) if np.nanmin(w.errors[name]) > TOP]
        if high:
            said.append(f"{w.purpose}: above {TOP:.0%} at every value: {', '.join(high)}")
    outside = [name for name, value in _marked(found) if not _inside(found.windows[0], value)]
    return [*said, f"outside the range of the picture: {', '.join(outside)}"] if outside else said


def _marked(found: Penalty) -> list[tuple[str, float]]:
    """Present value and bounds from above."""
    present = [] if found.audit is None else [("present value", found.audit.k)]
    return present + [(f"not above: {u.name}", u.value) for u in found.upper if u.value is not None]


def _inside(w: Window, value: float) -> bool:
    return bool(w.k[0] / ROOM <= value <= w.k[-1] * ROOM)


def _drawn(w: Window) -> list[str]:
    """Quantities whose line comes above the floor."""
    return [name for name in known(w) if np.nanmax(w.errors[name]) > FLOOR]


def _frame(axes: Axes, w: Window, unit: float, ink: Ink) -> None:
    """Logarithmic axes, errors in per cent, thin lines at the levels."""
    axes.set_xscale("log")
    axes.set_yscale("log")
    axes.set_xlim(w.k[0] / ROOM * unit, w.k[-1] * ROOM * unit)
    most = max((float(np.nanmax(w.errors[name])) for name in _drawn(w)), default=1.0)
    top = min(max(1.5 * most, 2 * LEVELS[0]), TOP)
    axes.set_ylim(FLOOR, top)
    axes.yaxis.set_major_locator(FixedLocator([y for y in (1e-3, 1e-2, 0.05, 0.1, 1.0, 10.0) if y <= top]))
    axes.yaxis.set_major_formatter(FuncFormatter(lambda y, _: f"{100 * y:g} %"))
    axes.yaxis.set_minor_locator(FixedLocator([]))
    axes.xaxis.set_major_locator(LogLocator(numticks=20))
    axes.xaxis.set_major_formatter(FuncFormatter(lambda x, _: f"10{str(round(np.log10(x))).translate(POWERS)}"))
    axes.xaxis.set_minor_formatter(NullFormatter())
    axes.set_ylabel("error")
    axes.set_title(w.purpose, loc="left", fontsize=9, fontweight="bold")
    for level in LEVELS:
        axes.axhline(level, color=ink.faint, linewidth=0.6, zorder=1)
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(which="both", color=ink.faint)
    axes.patch.set_alpha(0.0)


def _curves(axes: Axes, w: Window, unit: float, ink: Ink) -> dict[str, Handle]:
    """A line for each quantity, told by colour, dashes and marker; markers of neighbours stand apart."""
    handles: dict[str, Handle] = {}
    for i, name in enumerate(QUANTITIES):
        if name not in _drawn(w):
            continue
        style: dict[str, Any] = {
            "color": LINES[ink][i],
            "linestyle": DASHES[i],
            "marker": MARKERS[i],
            "markersize": 4.2,
            "markerfacecolor": "none",
            "linewidth": 1.4,
        }
        every = 4 if len(w.k) > 16 else 2
        shown = np.maximum(w.errors[name], FLOOR / 2)  # an error of nothing would pull the line straight down
        axes.plot(w.k * unit, shown, markevery=(i % every, every), zorder=3, **style)
        handles[name] = Line2D([], [], label=name, **style)
    return handles


def _values(axes: Axes, found: Penalty, purpose: str, unit: float, ink: Ink) -> dict[str, Handle]:
    """The band of the real face, and upright lines at the recommended and the present value and at the bounds."""
    handles: dict[str, Handle] = {}
    if found.interface is not None:
        k = found.interface.k_t["weighted"]
        axes.axvspan(k[LOW] * unit, k[HIGH] * unit, color=ink.faint, alpha=0.22, linewidth=0, zorder=0)
        axes.axvline(k[TYPICAL] * unit, color=ink.faint, linewidth=1.2, zorder=1)
        handles["face"] = Patch(facecolor=ink.faint, alpha=0.4, label="the real face, with its band")
    recommended: dict[str, Any] = {"color": ink.line, "linewidth": 2.0}
    axes.axvline(found.recommended[purpose] * unit, ymax=0.93, zorder=2, **recommended)
    _head(axes, found.recommended[purpose] * unit, "v", ink.line)
    handles["recommended"] = Line2D([], [], marker="v", markersize=6, label="recommended value", **recommended)
    bounds = 0
    for name, value in _marked(found):
        if not _inside(found.windows[0], value):
            continue
        colour, dashes = (ink.centre, (0, (3, 2))) if name == "present value" else (ink.weakest, (0, (1, 1 + bounds)))
        bounds += name != "present value"
        upright: dict[str, Any] = {"color": colour, "linewidth": 1.8, "linestyle": dashes}
        axes.axvline(value * unit, ymax=0.93, zorder=2, **upright)
        head = "X" if name == "present value" else "<"
        _head(axes, value * unit, head, colour)
        handles[name] = Line2D([], [], marker=head, markersize=6, label=name, **upright)
    return handles


def _head(axes: Axes, x: float, marker: str, colour: str) -> None:
    """A mark at the top of an upright line."""
    axes.plot([x], [0.95], marker, color=colour, markersize=6, transform=axes.get_xaxis_transform(), zorder=4)
