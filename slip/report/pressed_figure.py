"""The picture of a pressed contact: friction times pressure, and the traction of both routes, along the line of the shear."""

from __future__ import annotations

from typing import Any

import numpy as np
from matplotlib.figure import Figure

from slip.base.units import System
from slip.friction.pressed.records import PressedSlip
from slip.report.figures import LIGHT, WIDTH, Ink, look

HEIGHT = 3.4  # inches
MARKS = 40  # of the step's tractions that are shown, about


def traction_figure(found: PressedSlip, system: System, ink: Ink = LIGHT) -> Figure:
    """Tractions over the place along the shear, in the reader's units; what slips lies on the bound."""
    length, pressure = (system.out(1.0, kind) for kind in ("length", "pressure"))
    curves = found.curves
    with look(ink):
        figure = Figure(figsize=(WIDTH, HEIGHT), layout="constrained")
        axes = figure.add_subplot()
        bound = curves.bound * pressure
        axes.fill_between(curves.x * length, bound, color=ink.faint, alpha=0.18, linewidth=0)
        axes.plot(curves.x * length, bound, color=ink.line, linewidth=1.2, label="friction times pressure")
        if curves.closed.size:
            axes.plot(
                curves.x * length,
                curves.closed * pressure,
                color=ink.shear,
                linewidth=1.8,
                label="traction, closed form",
            )
        if curves.stepped.size:
            few = slice(None, None, max(1, curves.x_step.size // MARKS))
            style: dict[str, Any] = {"linestyle": "none", "marker": "o", "markersize": 3.2, "markerfacecolor": "none"}
            axes.plot(
                curves.x_step[few] * length,
                curves.stepped[few] * pressure,
                color=ink.weakest,
                label="traction, step",
                **style,
            )
        axes.set_ylim(min(0.0, 1.06 * _least(found) * pressure), 1.06 * float(bound.max()))
        axes.set_xlabel(f"place along the shear in {system.length}")
        axes.set_ylabel(f"traction in {system.pressure}")
        axes.spines[["top", "right"]].set_visible(False)
        axes.tick_params(color=ink.faint)
        axes.locator_params(nbins=6)
        axes.patch.set_alpha(0.0)
        figure.legend(loc="outside lower center", ncols=2, frameon=False)
    return figure


def _least(found: PressedSlip) -> float:
    """Smallest traction [MPa]: below zero where the bulk stress turns the slip round."""
    every = np.concatenate([found.curves.closed, found.curves.stepped, [0.0]])
    return float(every.min())
