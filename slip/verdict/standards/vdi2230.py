"""Safety against slipping of a bolted joint by VDI 2230 Part 1.

Forces in N, torques in N mm, radii in mm; all formula functions broadcast.
"""

from __future__ import annotations

import numpy as np

from slip.base.formulas import formula
from slip.verdict.standards.common import (
    Judgement,
    Number,
    Trail,
    check_count,
    check_finite,
    check_not_negative,
    check_positive,
    check_word,
)

GUIDE_VALUES = {"static": 1.2, "alternating": 1.8}  # of S_G


@formula("F_KQ", "F_Q/(q_F*mu)", unit="N", source="vdi2230_slip", basis="memory", valid="no torque about the bolt axis")
def required_clamp(F_Q: Number, q_F: Number, mu: Number) -> Number:
    """Clamp force [N] that just carries a shear.

    F_Q: shear of the bolt [N], >= 0; q_F: faces that share it [-]; mu: lowest friction [-], > 0; shapes broadcast.
    Source vdi2230_slip, memory.
    """
    return F_Q / (q_F * mu)


@formula("F_KQ", "F_Q/(q_F*mu) + M_Y/(q_M*r_a*mu)", unit="N", source="vdi2230_slip", basis="memory", valid="r_a > 0")
def required_clamp_torque(F_Q: Number, q_F: Number, mu: Number, M_Y: Number, q_M: Number, r_a: Number) -> Number:
    """Clamp force [N] that just carries a shear and a torque about the bolt axis.

    M_Y: torque [N mm], >= 0; q_M: faces that share it [-]; r_a: friction radius [mm], > 0; the rest as in
    `required_clamp`; shapes broadcast. Source vdi2230_slip, memory.
    """
    return F_Q / (q_F * mu) + M_Y / (q_M * r_a * mu)


@formula(
    "F_KR,min",
    "F_Mmin - (1 - Phi)*F_A - F_Z - dF_th",
    unit="N",
    source="vdi2230_slip",
    basis="memory",
    valid="0 <= Phi <= 1; above zero, else the joint is open",
)
def residual_clamp(F_Mmin: Number, Phi: Number, F_A: Number, F_Z: Number, dF_th: Number) -> Number:
    """Lowest residual clamp force [N].

    F_Mmin: lowest assembly preload [N]; Phi: the bolt's share of the axial load [-]; F_A: external axial tension [N];
    F_Z: loss by embedding [N]; dF_th: thermal loss [N], loss positive; shapes broadcast. Source vdi2230_slip, memory.
    """
    return F_Mmin - (1.0 - Phi) * F_A - F_Z - dF_th


@formula("S_G", "F_KRmin/F_KQ", unit="1", source="vdi2230_slip", basis="memory", valid="F_KQ > 0")
def slip_safety(F_KRmin: Number, F_KQ: Number) -> Number:
    """Safety against slipping [-]: residual over required clamp force [N], inf where nothing is required.

    Shapes broadcast. Source vdi2230_slip, memory.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(np.asarray(F_KQ) > 0, np.divide(F_KRmin, F_KQ), np.inf)[()]


@formula("S_min F_KQ", "S_min*F_KQ", unit="N", source="vdi2230_slip", basis="memory", valid="S_min 1.2 or 1.8")
def demanded_clamp(S_min: Number, F_KQ: Number) -> Number:
    """Clamp force [N] that keeps the least safety S_min [-] over the required clamp F_KQ [N]; shapes broadcast.

    Source vdi2230_slip, memory.
    """
    return S_min * F_KQ


def judge(
    *,
    shear: Number,
    residual_clamp: Number,
    n_faces: int,
    friction: float,
    kind: str,
    torque: Number = 0.0,
    friction_radius: float = 0.0,
) -> Judgement:
    """Every bolt's residual clamp force against the clamp that its shear requires times the guide value of the safety.

    - shear: of each bolt, its elastic share [N], shape (..., n_bolts) or scalar, >= 0, at the largest service load
    - residual_clamp: lowest clamp force left under that load [N], broadcasts with shear; axial relief, embedding and
      thermal loss are off it already, so no tension is asked for; zero or less where the bolt is open
    - n_faces: faces that share shear and torque (q_F = q_M)
    - friction: lowest friction of the face [-], > 0
    - kind: "static" or "alternating", sets the guide value; the reserve factor is S_G over it
    - torque: about each bolt's own axis [N mm], broadcasts with shear, >= 0; with it friction_radius [mm], > 0

    Raises ValueError for an unknown kind, naming the allowed ones, and for a number that is not finite or of the wrong
    sign. Source vdi2230_slip, memory.
    """
    shear, torque, clamp = (np.asarray(value, float) for value in (shear, torque, residual_clamp))
    check_word("kind", kind, GUIDE_VALUES)
    check_not_negative(shear=shear, torque=torque)
    check_finite(residual_clamp=clamp)
    check_positive(friction=friction)
    check_count(n_faces=n_faces)

    trail = Trail()
    S_min = GUIDE_VALUES[kind]
    trail.note(
        "Loads are the largest service loads.",
        f"Least safety {S_min:g}, the guide value for {kind} loads; the reserve factor is S_G over it.",
        "Clamp required for sealing or against one-sided opening is not judged here.",
    )
    given = {"F_Q": shear, "q_F": n_faces, "mu": friction}
    if np.any(torque > 0):
        check_positive(friction_radius=friction_radius)
        F_KQ = trail.use(required_clamp_torque, **given, M_Y=torque, q_M=n_faces, r_a=friction_radius)
        trail.note("Shear and torque about the bolt axis are added without regard to direction.")
    else:
        F_KQ = trail.use(required_clamp, **given)
    demand = trail.use(demanded_clamp, S_min=S_min, F_KQ=F_KQ)
    trail.use(slip_safety, F_KRmin=clamp, F_KQ=F_KQ)
    return trail.conclude(
        demand=demand,
        resistance=clamp,
        presumed_preload=None,
        edition="VDI 2230 Part 1",
        clause="R2 and R12",
    )
