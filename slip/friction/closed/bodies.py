"""Two bodies as one: moduli of a pair of half-spaces, their mismatch, the stiffness of a circular contact.

Moduli in MPa, Poisson's ratios in 0 <= nu <= 0.5, lengths in mm; everything broadcasts. A rigid body has an infinite
modulus.
"""

from __future__ import annotations

from typing import Any

from slip.base.formulas import formula
from slip.friction.closed.numeric import Value

PAIR: dict[str, Any] = {"source": "johnson1985", "basis": "derived"}


@formula("G", "E/(2*(1 + nu))", unit="MPa", source="statics", basis="derived", valid="isotropic")
def shear_modulus(E: Value, nu: Value) -> Value:
    """Shear modulus [MPa] of a material (statics, derived)."""
    return E / (2 * (1 + nu))


@formula("E*", "1/((1 - nu_1^2)/E_1 + (1 - nu_2^2)/E_2)", unit="MPa", **PAIR, valid="elastic half-spaces")
def normal_modulus(E_1: Value, nu_1: Value, E_2: Value, nu_2: Value) -> Value:
    """Modulus E* [MPa] of both bodies for pressing: E, nu of each (johnson1985, derived)."""
    return 1 / ((1 - nu_1**2) / E_1 + (1 - nu_2**2) / E_2)


@formula("G*", "1/((2 - nu_1)/G_1 + (2 - nu_2)/G_2)", unit="MPa", source="mindlin1949", basis="derived", valid="3-D")
def shear_pair_modulus(G_1: Value, nu_1: Value, G_2: Value, nu_2: Value) -> Value:
    """Modulus G* [MPa] of both bodies for shearing: shear modulus and nu of each (mindlin1949, derived)."""
    return 1 / ((2 - nu_1) / G_1 + (2 - nu_2) / G_2)


@formula("rho", "4*G_star/E_star", unit="", source="mindlin1949", basis="derived", valid="3-D; 1 in plane strain")
def stiffness_ratio(G_star: Value, E_star: Value) -> Value:
    """Shear stiffness over normal stiffness of a stuck contact in 3-D; in plane strain it is 1 (mindlin1949, derived).

    It is the same for every contact area, a rough face included, since both follow from the same areas.
    """
    return 4 * G_star / E_star


@formula("rho", "2*(1 - nu)/(2 - nu)", unit="", source="mindlin1949", basis="derived", valid="like bodies, 3-D")
def like_stiffness_ratio(nu: Value) -> Value:
    """The stiffness ratio of two bodies of one material, 0.82 for nu = 0.3 (mindlin1949, derived)."""
    return 2 * (1 - nu) / (2 - nu)


@formula(
    "beta",
    "((1 + nu_1)*(1 - 2*nu_1)/E_1 - (1 + nu_2)*(1 - 2*nu_2)/E_2)/(2*((1 - nu_1^2)/E_1 + (1 - nu_2^2)/E_2))",
    unit="",
    source="dundurs1969",
    basis="derived",
    valid="plane strain and 3-D, 0 <= nu <= 0.5",
)
def mismatch(E_1: Value, nu_1: Value, E_2: Value, nu_2: Value) -> Value:
    """Dundurs' beta, by which pressing alone shears the face: 0 for like bodies, never beyond 0.5.

    The closed forms of this folder neglect it; that is fine for design while |beta| < 0.2 (dundurs1969, derived).
    """
    difference = (1 + nu_1) * (1 - 2 * nu_1) / E_1 - (1 + nu_2) * (1 - 2 * nu_2) / E_2
    return difference / 2 * normal_modulus(E_1, nu_1, E_2, nu_2)


@formula("k_n", "2*a*E_star", unit="N/mm", **PAIR, valid="circular contact area")
def circle_normal_stiffness(a: Value, E_star: Value) -> Value:
    """Normal stiffness [N/mm] of a circular contact of radius a: of any round profile at that radius, and of a punch.

    johnson1985, derived.
    """
    return 2 * a * E_star


@formula("k_t", "8*a*G_star", unit="N/mm", source="mindlin1949", basis="derived", valid="circular area, full stick")
def circle_shear_stiffness(a: Value, G_star: Value) -> Value:
    """Shear stiffness [N/mm] of a circular contact of radius a that sticks all over (mindlin1949, derived).

    With the stick radius c for a it is the tangent stiffness in partial slip.
    """
    return 8 * a * G_star
