"""Slip of a joint whose fasteners act together, by NASA-STD-5020.

The formulas hold in any one unit of force (inside: N) and broadcast.
"""

from __future__ import annotations

import numpy as np

from slip.base.formulas import formula
from slip.verdict.standards.common import (
    Judgement,
    Number,
    Trail,
    check_count,
    check_not_negative,
    check_positive,
    check_share,
    check_word,
)

RELAXATION = 0.05  # share of the initial preload, without test
FRICTION_CAPS = {"clean bare": 0.2, "other": 0.1, "tested": np.inf}
KEY = "nasa_std_5020"


@formula("mu", "min(friction, cap)", unit="1", source=KEY, basis="memory", valid="no friction test")
def capped_friction(friction: Number, cap: Number) -> Number:
    """Friction [-] that may be used without test.

    friction: the lowest expected [-]; cap: 0.2 for clean bare faces, 0.1 for others [-]; shapes broadcast.
    Source nasa_std_5020, memory.
    """
    return np.minimum(friction, cap)


@formula(
    "P_i,min", "c_min*(1 - Gamma/sqrt(n_f))*P_nom", unit="N", source=KEY, basis="memory", valid="slip of n_f together"
)
def initial_preload_low(c_min: Number, Gamma: Number, n_f: Number, P_nom: Number) -> Number:
    """Lowest initial preload [N] of a fastener, as a mean over n_f fasteners that slip together.

    c_min: lowest specified over nominal [-]; Gamma: preload variation, a bound [-], below 1; n_f: number of fasteners
    [-]; P_nom: nominal initial preload [N]; shapes broadcast. Source nasa_std_5020, memory.
    """
    return c_min * (1.0 - Gamma / np.sqrt(n_f)) * P_nom


@formula("P_min", "(1 - relaxation)*P_imin - thermal", unit="N", source=KEY, basis="memory", valid="losses >= 0")
def preload_low(relaxation: Number, P_imin: Number, thermal: Number) -> Number:
    """Lowest preload [N] of a fastener in service.

    relaxation: lost share of the initial preload [-], 0.05 without test; P_imin: lowest initial preload [N]; thermal:
    thermal loss [N]; shapes broadcast. Source nasa_std_5020, memory.
    """
    return (1.0 - relaxation) * P_imin - thermal


@formula("n_f mu P_min", "n_f*mu*P_min", unit="N", source=KEY, basis="memory", valid="one face")
def joint_resistance(n_f: Number, mu: Number, P_min: Number) -> Number:
    """Friction [N] of one face under n_f fasteners of preload P_min [N] at friction mu [-]; shapes broadcast.

    Source nasa_std_5020, memory.
    """
    return n_f * mu * P_min


@formula("FF FS (P_s + mu P_t)", "FF*FS*(P_s + mu*P_t)", unit="N", source=KEY, basis="memory", valid="P_t >= 0")
def joint_demand(FF: Number, FS: Number, P_s: Number, mu: Number, P_t: Number) -> Number:
    """Factored load [N] on the friction of one face: the shear, and the friction that the tension takes away.

    FF: fitting factor [-]; FS: factor of safety [-]; P_s, P_t: limit shear and tension of the joint [N]; mu: friction
    [-]; shapes broadcast. Source nasa_std_5020, memory.
    """
    return FF * FS * (P_s + mu * P_t)


@formula(
    "MS",
    "n_f*mu*P_min/(FF*FS*(P_s + mu*P_t)) - 1",
    unit="1",
    source=KEY,
    basis="memory",
    valid="P_t >= 0, P_s + mu P_t > 0",
)
def margin_of_safety(
    n_f: Number, mu: Number, P_min: Number, FF: Number, FS: Number, P_s: Number, P_t: Number
) -> Number:
    """Margin of safety against joint slip [-]: zero or more passes, inf without load.

    Arguments as in `joint_resistance` and `joint_demand`; shapes broadcast. Source nasa_std_5020, memory.
    """
    demand = np.asarray(joint_demand(FF, FS, P_s, mu, P_t))
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(demand > 0, joint_resistance(n_f, mu, P_min) / demand, np.inf)[()] - 1.0


def judge(
    *,
    shear: Number,
    tension: Number = 0.0,
    n_faces: int,
    n_fasteners: int,
    nominal_preload: float,
    preload_variation: float,
    friction: float,
    safety_factor: float,
    fitting_factor: float,
    surface: str = "other",
    c_min: float = 1.0,
    relaxation: float = RELAXATION,
    thermal_loss: float = 0.0,
) -> Judgement:
    """The joint's total shear and tension against the friction of all its fasteners.

    - shear, tension: totals of the joint at limit load [N], scalar or one per case, >= 0
    - n_faces: faces that share the shear equally; demand and resistance are those of one face
    - n_fasteners: fasteners that must slip together
    - nominal_preload: initial, per fastener [N]; preload_variation: Gamma [-], 0 to below 1; c_min: multiplies the
      nominal to give the lowest specified [-], > 0, 1 where they are the same
    - friction: lowest of the face [-]; surface: "clean bare" (at most 0.2), "other" (at most 0.1), "tested" (as given)
    - safety_factor, fitting_factor: FS and FF [-], > 0
    - relaxation: lost share of the initial preload; thermal_loss: per fastener [N], >= 0

    The reserve factor is the margin of safety plus one. Raises ValueError for an unknown surface, naming the allowed
    ones, and for a number that is not finite or out of range. Source nasa_std_5020, memory.
    """
    shear, tension = np.asarray(shear, float), np.asarray(tension, float)
    check_word("surface", surface, FRICTION_CAPS)
    check_not_negative(shear=shear, tension=tension, thermal_loss=thermal_loss)
    check_share(preload_variation=preload_variation, relaxation=relaxation)
    check_positive(nominal_preload=nominal_preload, friction=friction, c_min=c_min)
    check_positive(safety_factor=safety_factor, fitting_factor=fitting_factor)
    check_count(n_faces=n_faces, n_fasteners=n_fasteners)

    trail = Trail()
    trail.note(
        "Loads are limit loads; the factor of safety and the fitting factor are applied here.",
        "The joint is judged as a whole; a moment about its normal is not in this check.",
        f"The lowest specified preload is c_min {c_min:g} times the nominal.",
    )
    if n_faces > 1:
        trail.note(f"Forces are those of one of {n_faces} faces, which share the shear equally.")
    if surface == "tested":
        mu = friction
        trail.note(f"Friction {mu:g} as given, by test.")
    else:
        mu = trail.use(capped_friction, friction=friction, cap=(cap := FRICTION_CAPS[surface]))
        trail.note(f"Friction {mu:g}: {friction:g} given, at most {cap:g} for {surface} faces without test.")

    initial = trail.use(
        initial_preload_low, c_min=c_min, Gamma=preload_variation, n_f=n_fasteners, P_nom=nominal_preload
    )
    P_min = trail.use(preload_low, relaxation=relaxation, P_imin=initial, thermal=thermal_loss)
    resistance = trail.use(joint_resistance, n_f=n_fasteners, mu=mu, P_min=P_min)
    load = {"FF": fitting_factor, "FS": safety_factor, "P_s": shear / n_faces, "mu": mu, "P_t": tension}
    demand = trail.use(joint_demand, **load)
    trail.use(margin_of_safety, n_f=n_fasteners, P_min=P_min, **load)
    return trail.conclude(
        demand=demand,
        resistance=resistance,
        presumed_preload=None,
        edition="NASA-STD-5020",
        clause="joint slip",
    )
