"""Formulas of the scatter of tightening: the ends of the preload from the scatter of the tool and from friction."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any
VDI: dict[str, Any] = {"unit": "N", "source": "vdi2230", "basis": "practice"}


@formula("F_scatter", "F*(1 - t)", **VDI, valid="0 <= t < 1")
def lowest_of_scatter(F: Value, t: Value) -> Value:
    """Low end [N] of a preload F with a scatter of plus and minus t (vdi2230, practice)."""
    return F * (1 - t)


@formula("F_scatter", "F*(1 + t)", **VDI, valid="0 <= t < 1")
def highest_of_scatter(F: Value, t: Value) -> Value:
    """High end [N] of a preload F with a scatter of plus and minus t (vdi2230, practice)."""
    return F * (1 + t)


@formula("F_low", "min(F_scatter, F_friction)", **VDI)
def lower_of(F_scatter: Value, F_friction: Value) -> Value:
    """Lowest assembly preload [N]: the wider of scatter and friction range governs (practice)."""
    return np.minimum(F_scatter, F_friction)


@formula("F_high", "max(F_scatter, F_friction)", **VDI)
def higher_of(F_scatter: Value, F_friction: Value) -> Value:
    """Highest assembly preload [N]: the wider of scatter and friction range governs (practice)."""
    return np.maximum(F_scatter, F_friction)
