"""What takes preload away after tightening: embedding of the rough faces, relaxation, and unequal warming.

Forces in N, lengths in mm (also embedding lengths), compliances in mm/N, temperatures as rises in K. The arguments
broadcast, numbers in give a number out. Losses are positive.

The embedding table asks for Rz, drawings often give Ra or Rq. The conversion is a practice, not a law: Rz/Ra is pi
for a sine and 4 for a saw-tooth profile, some 4 to 7 for machined faces, and 4.7 to 6.3 for Gaussian heights over 20
to 100 independent points (tests/derived). Embedding grows with Rz, so the upper end of the practice, 7, errs towards
more loss and less clamp.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any  # a number, or an array of numbers that broadcasts with the others


@formula("F_Z", "f_Z/(delta_S + delta_P)", unit="N", source="vdi2230", basis="derived", valid="elastic bolt and plates")
def embedding_force(f_Z: Value, delta_S: Value, delta_P: Value) -> Value:
    """Preload [N] lost when the faces of a joint settle by a length.

    f_Z: embedding length [mm], >= 0; delta_S, delta_P: compliance of bolt and plates [mm/N], > 0. Source vdi2230,
    derived.
    """
    return f_Z / (delta_S + delta_P)


@formula(
    "f_Z",
    "n_thread*f_thread + n_bearing*f_bearing + n_inner*f_inner",
    unit="mm",
    source="vdi2230",
    basis="memory",
    valid="steel faces, settled once",
)
def embedding_length(
    n_thread: Value, f_thread: Value, n_bearing: Value, f_bearing: Value, n_inner: Value, f_inner: Value
) -> Value:
    """Embedding length [mm] of a joint: each settling face times its number.

    n_thread, n_bearing, n_inner: loaded threads, faces under head and nut, inner interfaces (washers add to these),
    >= 0; f_thread, f_bearing, f_inner: length of each [mm], from the table's shear column when the joint carries
    shear. Source vdi2230, memory.
    """
    return n_thread * f_thread + n_bearing * f_bearing + n_inner * f_inner


@formula("Rz", "7*Ra", unit="um", source="practice", basis="practice", valid="machined faces")
def rz_from_ra(Ra: Value) -> Value:
    """Height Rz from the mean deviation Ra, same unit (um), >= 0: the upper end of practice, see the module's text.

    For the embedding table only; nothing that gains from roughness may use it. Source practice, practice.
    """
    return 7 * Ra


@formula("Rz", "5.6*Rq", unit="um", source="practice", basis="practice", valid="machined faces")
def rz_from_rq(Rq: Value) -> Value:
    """Height Rz from the root mean square Rq, same unit (um), >= 0: rz_from_ra of ra_from_rq.

    For the embedding table only. Source practice, practice.
    """
    return 5.6 * Rq


@formula("Ra", "Rz/5.5", unit="um", source="practice", basis="practice", valid="machined faces")
def ra_from_rz(Rz: Value) -> Value:
    """Mean deviation Ra from the height Rz, same unit, >= 0: the middle of practice, some 4 to 7.

    For the stiffness of a face, whose own factor of two either way covers it; not for embedding. Source practice, practice.
    """
    return Rz / 5.5


@formula("Rq", "1.25*Ra", unit="um", source="practice", basis="practice", valid="Gaussian heights")
def rq_from_ra(Ra: Value) -> Value:
    """Root mean square Rq from the mean deviation Ra, same unit (um), >= 0.

    Exactly sqrt(pi/2) = 1.2533 for Gaussian heights. Source practice, practice.
    """
    return 1.25 * Ra


@formula("Ra", "Rq/1.25", unit="um", source="practice", basis="practice", valid="Gaussian heights")
def ra_from_rq(Rq: Value) -> Value:
    """Mean deviation Ra from the root mean square Rq, same unit (um), >= 0. Source practice, practice."""
    return Rq / 1.25


@formula("F_R", "share*F", unit="N", source="statics", basis="derived", valid="0 <= share < 1")
def relaxation_loss(share: Value, F: Value) -> Value:
    """Preload [N] lost with time as a share, 0 to below 1, of the assembly preload F [N]. Source statics, derived."""
    return share * F


def stack_growth(thicknesses: Value, alphas: Value, dTs: Value) -> Value:
    """Free thermal growth [mm] of the clamped layers, plates and washers: sum of l alpha dT over the last axis.

    thicknesses [mm], alphas (expansion) [1/K], dTs (rises since assembly) [K]: (..., layers), shapes broadcast.
    """
    return np.sum(np.asarray(thicknesses) * np.asarray(alphas) * np.asarray(dTs), axis=-1)


@formula(
    "dF_th",
    "(l_K*alpha_S*dT_S - stack_growth)/(delta_S + delta_P)",
    unit="N",
    source="vdi2230",
    basis="derived",
    valid="elastic; moduli and friction as at assembly",
)
def thermal_change(
    l_K: Value, alpha_S: Value, dT_S: Value, stack_growth: Value, delta_S: Value, delta_P: Value
) -> Value:
    """Preload [N] lost by unequal warming of bolt and layers; negative is a gain.

    l_K: clamped length [mm]; alpha_S: expansion of the bolt [1/K]; dT_S: its rise since assembly [K]; stack_growth:
    free growth of the layers [mm]; delta_S, delta_P: compliance of bolt and plates [mm/N], > 0. Source vdi2230,
    derived.
    """
    return (l_K * alpha_S * dT_S - stack_growth) / (delta_S + delta_P)
