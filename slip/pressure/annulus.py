"""Friction radius of ring-shaped faces: the torque that the clamp can hold about the bolt's axis is mu P r_eff."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any


@formula(
    "r_eff",
    "2/3*(R_o^3 - R_i^3)/(R_o^2 - R_i^2)",
    unit="mm",
    source="statics",
    basis="derived",
    valid="uniform pressure, R_i < R_o",
)
def uniform_friction_radius(R_o: Value, R_i: Value) -> Value:
    """Friction radius [mm] of a ring under uniform pressure, outer radius R_o, inner radius R_i (statics, derived)."""
    return 2 / 3 * (R_o**3 - R_i**3) / (R_o**2 - R_i**2)


def friction_radius(radii: np.ndarray, forces: np.ndarray) -> float:
    """Friction radius [mm] of rings of given radii [mm] and normal forces [N], both (m,): mean radius by force (derived)."""
    return float((radii * forces).sum() / forces.sum())
