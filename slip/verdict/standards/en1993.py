"""Slip resistance of preloaded bolts by EN 1993-1-8:2005, clause 3.9 (categories B and C).

Forces in N, areas in mm^2, strengths in MPa; all formula functions broadcast.
"""

from __future__ import annotations

import numpy as np

from slip.base.formulas import formula
from slip.base.tables import number, table
from slip.verdict.standards.common import (
    Judgement,
    Number,
    Trail,
    check_count,
    check_not_negative,
    check_positive,
    check_word,
    hole_text,
    pick,
)

NAME, YEAR = "EN 1993-1-8", "2005"
GAMMA_M3 = {"B": 1.10, "C": 1.25}  # recommended values: B at serviceability loads, C at ultimate loads
CLASS_STRENGTHS = (800.0, 1000.0)  # MPa, nominal f_ub of classes 8.8 and 10.9
LOADS = {
    "B": "Category B: slip is judged at serviceability loads; shear and bearing at ultimate loads are not judged here.",
    "C": "Category C: slip is judged at ultimate (design) loads; bearing and net section are not judged here.",
}


@formula("F_p,C", "0.7*f_ub*A_s", unit="N", source="en1993_1_8", basis="published", valid="classes 8.8 and 10.9")
def preload(f_ub: Number, A_s: Number) -> Number:
    """Presumed preload [N] of a bolt after controlled tightening.

    f_ub: nominal tensile strength [MPa], 800 for class 8.8 and 1000 for 10.9 at every size; A_s: stress area [mm^2];
    shapes broadcast. Source en1993_1_8, published.
    """
    return 0.7 * f_ub * A_s


@formula("F_s,Rd", "k_s*n*mu*F_pC/gamma_M3", unit="N", source="en1993_1_8", basis="published", valid="no tension")
def slip_resistance(k_s: Number, n: Number, mu: Number, F_pC: Number, gamma_M3: Number) -> Number:
    """Design slip resistance [N] of one bolt without tension.

    k_s: hole factor [-]; n: friction faces in parallel [-]; mu: slip factor [-]; F_pC: preload [N]; gamma_M3: partial
    factor [-], 1.25, or 1.10 for category B at serviceability loads; shapes broadcast. Source en1993_1_8, published.
    """
    return k_s * n * mu * F_pC / gamma_M3


@formula(
    "F_s,Rd",
    "k_s*n*mu*(F_pC - 0.8*F_t)/gamma_M3",
    unit="N",
    source="en1993_1_8_tension",
    basis="memory",
    valid="0 <= F_t; nothing is left from F_t = 1.25 F_p,C on",
)
def slip_resistance_tension(k_s: Number, n: Number, mu: Number, F_pC: Number, F_t: Number, gamma_M3: Number) -> Number:
    """Design slip resistance [N] of one bolt under external tension; zero or less: none is left.

    F_t: external tension of the bolt [N], >= 0, at the load level of the check; the rest as in `slip_resistance`;
    shapes broadcast. Source en1993_1_8_tension, memory.
    """
    return k_s * n * mu * (F_pC - 0.8 * F_t) / gamma_M3


def judge(
    *,
    shear: Number,
    tension: Number = 0.0,
    n_faces: int,
    tensile_strength: float,
    stress_area: float,
    slip_factor: float | str,
    category: str,
    hole: str = "normal",
    slot: str = "",
) -> Judgement:
    """Every bolt's shear against its design slip resistance.

    - shear: of each bolt, its elastic share [N], shape (..., n_bolts) or scalar, >= 0
    - tension: external axial tension of each bolt [N], broadcasts with shear, >= 0; both at serviceability loads for
      category "B", at ultimate loads for "C"
    - n_faces: friction faces in parallel
    - tensile_strength, stress_area: nominal f_ub [MPa] and A_s [mm^2]; f_ub other than 800 or 1000 is `unmet`
    - slip_factor: a characteristic number by test, or the surface class "A" to "D"
    - hole: "normal", "oversized", "short slot", "long slot"; slot: "along" or "across" the load, "" for round holes

    Raises ValueError for an unknown word, naming the allowed ones, and for a number that is not finite or of the wrong
    sign. Source en1993_1_8, published; with tension memory.
    """
    shear, tension = np.asarray(shear, float), np.asarray(tension, float)
    check_word("category", category, GAMMA_M3)
    check_not_negative(shear=shear, tension=tension)
    check_positive(tensile_strength=tensile_strength, stress_area=stress_area)
    check_count(n_faces=n_faces)

    trail = Trail()
    mu = trail.slip_factor(slip_factor, NAME, YEAR)
    k_s = number(trail.rest_on(pick(table("en1993_holes"), hole=hole, slot=slot)), "k_s")
    gamma_M3 = GAMMA_M3[category]
    trail.note(
        LOADS[category],
        f"{hole_text(hole, slot)}: k_s {k_s:g}.",
        f"Partial factor {gamma_M3:g}: the recommended value; a national annex may set another.",
    )
    F_pC = trail.use(preload, f_ub=tensile_strength, A_s=stress_area)
    given = {"k_s": k_s, "n": n_faces, "mu": mu, "F_pC": F_pC, "gamma_M3": gamma_M3}
    if pulled := bool(np.any(tension > 0)):
        resistance = trail.use(slip_resistance_tension, **given, F_t=tension)
    else:
        resistance = trail.use(slip_resistance, **given)
    outside = f"The preload presumes class 8.8 (f_ub 800 MPa) or 10.9 (1000 MPa), not {tensile_strength:g} MPa."
    return trail.conclude(
        demand=shear,
        resistance=resistance,
        presumed_preload=F_pC,
        edition=f"{NAME}:{YEAR}",
        clause="3.9.2" if pulled else "3.9.1",
        unmet=() if tensile_strength in CLASS_STRENGTHS else (outside,),
    )
