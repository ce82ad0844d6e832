"""Coulomb's law for one bolt: the shear that its clamp can hold, and the factors on the load that follow from it.

mu: friction of the face; m: faces in parallel; forces in N; everything broadcasts.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any
STATICS: dict[str, Any] = {"source": "statics", "basis": "derived"}


@formula("F_max", "mu*m*clamp", unit="N", **STATICS, valid="Coulomb friction")
def capacity(mu: Value, m: Value, clamp: Value) -> Value:
    """Shear [N] that friction holds at one bolt (statics, derived)."""
    return mu * m * clamp


@formula("S", "F_max/F_s", unit="", **STATICS, valid="F_s > 0")
def safety(F_max: Value, F_s: Value) -> Value:
    """Factor on the shear with the clamp held; infinite without shear, zero without clamp (statics, derived)."""
    F_max, F_s = np.asarray(F_max, dtype=float), np.asarray(F_s, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(F_max > 0, np.where(F_s > 0, F_max / F_s, np.inf), 0.0)[()]


@formula("S_all", "closed*mu*m*clamp_0/(F_s + mu*m*relief)", unit="", **STATICS, valid="F_s + mu m relief > 0")
def load_factor(closed: Value, mu: Value, m: Value, clamp_0: Value, F_s: Value, relief: Value) -> Value:
    """Factor on the whole load, axial included: clamp_0 is the clamp without the axial load, relief what that takes.

    closed: 1, or 0 for a bolt that is open at the given load. Infinite where the credited compression adds friction
    faster than the shear grows (statics, derived).
    """
    held, needed = np.asarray(mu * m * clamp_0, dtype=float), np.asarray(F_s + mu * m * relief, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(np.asarray(closed) > 0, np.where(needed > 0, held / needed, np.inf), 0.0)[()]
