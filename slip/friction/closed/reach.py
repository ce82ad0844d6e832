"""How far the contact forms reach: size of a contact against the radius of its profile, pressure against first yield.

Lengths in mm, pressures in MPa; everything broadcasts.
"""

from __future__ import annotations

from slip.base.formulas import formula
from slip.friction.closed.numeric import Value

# Largest shear stress over peak pressure, inside the bodies on the axis: round at nu = 0.3, 0.48 a deep; plane at any nu, 0.79 a deep.
ROUND_SHEAR, PLANE_SHEAR = 0.31, 0.30


@formula("a/R", "a/R", unit="", source="johnson1985", basis="practice", valid="contacts up to 0.3")
def profile_share(a: Value, R: Value) -> Value:
    """Size a of a contact over the radius R of its profile (johnson1985, practice).

    The forms put the parabola r^2/(2 R) in place of the circle and take the bodies as half-spaces.
    """
    return a / R


@formula("(a - b)/R", "(a - b)/R", unit="", source="johnson1985", basis="practice", valid="contacts up to 0.3")
def rounded_share(a: Value, b: Value, R: Value) -> Value:
    """Rounded part of a contact of size a, flat up to b, over the radius R of the edge (johnson1985, practice)."""
    return (a - b) / R


@formula("p_Y", "Y/(2*0.31)", unit="MPa", source="johnson1985", basis="derived", valid="nu = 0.3, no friction")
def round_first_yield(Y: Value) -> Value:
    """Peak pressure [MPa] at which a body of yield strength Y first yields below a round contact, 1.6 Y (johnson1985, derived).

    The largest shear stress, 0.31 p_0 at nu = 0.3 (0.33 at 0.25), reaches Y/2 (Tresca). Friction makes it come earlier.
    """
    return Y / (2 * ROUND_SHEAR)


@formula("p_Y", "Y/(2*0.3)", unit="MPa", source="johnson1985", basis="derived", valid="plane strain, no friction")
def plane_first_yield(Y: Value) -> Value:
    """Peak pressure [MPa] at which a body of yield strength Y first yields below a cylinder, 1.67 Y (johnson1985, derived).

    The largest shear stress, 0.30 p_0, reaches Y/2 (Tresca). Friction makes it come earlier.
    """
    return Y / (2 * PLANE_SHEAR)
