"""Slip-critical bolts by AISC 360, sections J3.8 and J3.9, editions 2016 and 2005, LRFD and ASD.

The formulas hold in any one unit of force; `minimum_pretension` and `judge` are in N.
"""

from __future__ import annotations

import re

import numpy as np

from slip.base.formulas import formula
from slip.base.tables import Row, number, table
from slip.base.units import UNITS
from slip.verdict.standards.common import (
    Judgement,
    Number,
    Trail,
    check_count,
    check_not_negative,
    check_word,
    hole_text,
    pick,
)

NAME = "AISC 360"
D_U = 1.13  # mean installed over specified minimum pretension
FILLERS = {"2016": ("1", "0.85"), "2005": ("1",)}  # h_f 0.85: two or more fillers and no bolts added for them
LIMITS_2005 = {"strength": (0.85, 1.76), "serviceability": (1.00, 1.50)}  # phi, Omega
GROUPS = {"A325": "A325", "A490": "A490", "A325M": "A325", "A490M": "A490"}  # to columns of aisc_pretension
SIZE = re.compile(r"(M\d+|\d+(?:/\d+)?)(?:-\d+ UNC)?")
LOADS = {
    "LRFD": "Loads are those of the LRFD load combinations (design loads).",
    "ASD": "Loads are those of the ASD load combinations (service loads).",
}
BOTH = "aisc360_16;aisc360_05"


@formula("R_n", "mu*D_u*h_f*T_b*n_s", unit="N", source="aisc360_16", basis="memory", valid="edition 2016")
def nominal_resistance(mu: Number, D_u: Number, h_f: Number, T_b: Number, n_s: Number) -> Number:
    """Nominal slip resistance [unit of T_b] of one bolt, edition 2016.

    mu: mean slip coefficient [-]; D_u: 1.13 [-]; h_f: filler factor [-], 1 or 0.85; T_b: minimum pretension [force];
    n_s: slip planes [-]; shapes broadcast. Source aisc360_16, memory.
    """
    return mu * D_u * h_f * T_b * n_s


@formula("R_n", "mu*D_u*h_sc*T_b*n_s", unit="N", source="aisc360_05", basis="memory", valid="edition 2005")
def nominal_resistance_2005(mu: Number, D_u: Number, h_sc: Number, T_b: Number, n_s: Number) -> Number:
    """Nominal slip resistance [unit of T_b] of one bolt, edition 2005.

    h_sc: hole factor [-], 1, 0.85 or 0.70; the rest as in `nominal_resistance`; shapes broadcast. Source aisc360_05,
    memory.
    """
    return mu * D_u * h_sc * T_b * n_s


@formula("k_sc", "1 - T_u/(D_u*T_b*n_b)", unit="1", source=BOTH, basis="memory", valid="LRFD, 0 <= T_u")
def tension_factor_lrfd(T_u: Number, D_u: Number, T_b: Number, n_b: Number) -> Number:
    """Factor [-] on the slip resistance of bolts in tension, LRFD; zero or less: nothing is left.

    T_u: tension shared by n_b bolts [force], >= 0; D_u: 1.13 [-]; T_b: minimum pretension [force]; shapes broadcast.
    Source aisc360_16, aisc360_05 (there named k_s), memory.
    """
    return 1.0 - T_u / (D_u * T_b * n_b)


@formula("k_sc", "1 - 1.5*T_a/(D_u*T_b*n_b)", unit="1", source=BOTH, basis="memory", valid="ASD, 0 <= T_a")
def tension_factor_asd(T_a: Number, D_u: Number, T_b: Number, n_b: Number) -> Number:
    """As `tension_factor_lrfd`, for a tension T_a [force] of the ASD load combinations."""
    return 1.0 - 1.5 * T_a / (D_u * T_b * n_b)


@formula("phi R_n", "phi*k_sc*R_n", unit="N", source=BOTH, basis="memory", valid="LRFD")
def design_resistance(phi: Number, k_sc: Number, R_n: Number) -> Number:
    """Design slip resistance [unit of R_n], LRFD.

    phi: resistance factor [-]; k_sc: tension factor [-]; R_n: nominal resistance [force]; shapes broadcast.
    Source aisc360_16, aisc360_05, memory.
    """
    return phi * k_sc * R_n


@formula("R_n/Omega", "k_sc*R_n/Omega", unit="N", source=BOTH, basis="memory", valid="ASD")
def allowable_resistance(k_sc: Number, R_n: Number, Omega: Number) -> Number:
    """Allowable slip resistance [unit of R_n], ASD; Omega: safety factor [-]; the rest as in `design_resistance`."""
    return k_sc * R_n / Omega


def pretension_row(size: str, group: str) -> Row:
    """Row of table aisc_pretension for a size such as "3/4", "3/4-10 UNC" or "M20"; group "A325"
    or "A490" (or "A325M", "A490M").

    Raises ValueError naming the sizes or groups that the table holds; a fine thread is not among them.
    """
    check_word("group", group, GROUPS)
    match = SIZE.fullmatch(size)
    return pick(table("aisc_pretension"), size=match.group(1) if match else size)


def minimum_pretension(size: str, group: str) -> float:
    """Specified minimum pretension T_b [N]; arguments and errors as in `pretension_row`.

    Source aisc360_05_j3_1, published.
    """
    row = pretension_row(size, group)
    return number(row, GROUPS[group]) * UNITS[row["unit"]][0]


def judge(
    *,
    shear: Number,
    tension: Number = 0.0,
    n_faces: int,
    size: str,
    group: str,
    slip_factor: float | str,
    method: str,
    edition: str = "2016",
    hole: str = "normal",
    slot: str = "",
    filler_factor: float = 1.0,
    limit: str = "strength",
) -> Judgement:
    """Every bolt's shear against its available slip resistance.

    - shear: of each bolt, its elastic share [N], shape (..., n_bolts) or scalar, >= 0
    - tension: external axial tension of each bolt [N], broadcasts with shear, >= 0; both of the load combinations of
      the method, "LRFD" or "ASD"
    - n_faces: slip planes
    - size, group: as in `pretension_row`
    - slip_factor: a mean number by test, or the surface class "A" or "B"
    - edition: "2016" or "2005"
    - hole: "normal" (standard), "oversized", "short slot", "long slot"; slot: "along" or "across" the load, "" for
      round holes
    - filler_factor: 1 or 0.85, edition 2016; limit: "strength" or "serviceability", edition 2005

    Raises ValueError for an unknown word, naming the allowed ones, and for a number that is not finite or of the wrong
    sign. Source aisc360_16 or aisc360_05, memory.
    """
    shear, tension = np.asarray(shear, float), np.asarray(tension, float)
    check_word("edition", edition, FILLERS)
    check_word("method", method, LOADS)
    check_word("limit", limit, LIMITS_2005 if edition == "2005" else ("strength",))
    check_word("filler_factor", f"{filler_factor:g}", FILLERS[edition])
    check_not_negative(shear=shear, tension=tension)
    check_count(n_faces=n_faces)

    trail = Trail()
    mu = trail.slip_factor(slip_factor, NAME, edition)
    trail.rest_on(pretension_row(size, group))
    given = {"mu": mu, "D_u": D_U, "T_b": (T_b := minimum_pretension(size, group)), "n_s": n_faces}
    holes = (row for row in table("aisc_holes") if row["edition"] == edition)
    row = trail.rest_on(pick(holes, hole=hole, slot=slot))
    if edition == "2016":
        phi, Omega = number(row, "phi"), number(row, "omega")
        R_n = trail.use(nominal_resistance, **given, h_f=filler_factor)
        trail.note("The minimum pretension is that of the 2005 table, taken to hold for its sizes in this edition.")
        factors = f"filler factor {filler_factor:g}"
    else:
        phi, Omega = LIMITS_2005[limit]
        R_n = trail.use(nominal_resistance_2005, **given, h_sc=(h_sc := number(row, "hole_factor")))
        trail.note(f"Slip is a limit of {limit}; its loads are those of the method either way.")
        factors = f"hole factor {h_sc:g}"
    if method == "LRFD":
        k_sc = trail.use(tension_factor_lrfd, T_u=tension, D_u=D_U, T_b=T_b, n_b=1)
        resistance = trail.use(design_resistance, phi=phi, k_sc=k_sc, R_n=R_n)
        factors += f", phi {phi:g}"
    else:
        k_sc = trail.use(tension_factor_asd, T_a=tension, D_u=D_U, T_b=T_b, n_b=1)
        resistance = trail.use(allowable_resistance, k_sc=k_sc, R_n=R_n, Omega=Omega)
        factors += f", Omega {Omega:g}"
    trail.note(
        LOADS[method],
        f"{hole_text(hole, slot)}: {factors}.",
        "Shear and bearing strength, required beside slip, are not judged here.",
    )
    return trail.conclude(
        demand=shear,
        resistance=resistance,
        presumed_preload=T_b,
        edition=f"{NAME}-{edition[2:]}",
        clause="J3.8 and J3.9" if np.any(tension > 0) else "J3.8",
    )
