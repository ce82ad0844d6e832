"""Round bodies with a gap A r^n between them before pressing: n = 1 a cone, 2 a sphere, large n near a flat.

P, Q in N, mu friction, lengths in mm, A in mm^(1-n), n > 0, E_star, G_star [MPa] of both bodies. Everything
broadcasts, is odd in Q (energies even), and raises ValueError where |Q| reaches mu P.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula
from slip.friction.closed import bodies, loops
from slip.friction.closed.numeric import Value, gauss, pairs
from slip.friction.closed.superposition import Profile, shear_share, stick_force

PRESSED: dict[str, Any] = {"source": "sneddon1965", "basis": "derived"}
SHEARED: dict[str, Any] = {"source": "jaeger1998;ciavarella1998", "basis": "derived"}
MIDDLE = 1e-9  # mm, less than an atom: for n <= 1 the pressure has no limit at r = 0 and is taken there


# Pressing


def shape_factor(n: Value) -> Value:
    """Approach over the gap at the contact's edge, A a^n: pi/2 a cone, 2 a sphere (sneddon1965, derived)."""
    from scipy.special import gamma  # deferred: start-up time

    return np.sqrt(np.pi) * gamma(n / 2 + 1) / gamma((n + 1) / 2)


@formula("d_n", "kappa*A*a^n", unit="mm", **PRESSED, valid="kappa = shape_factor(n)")
def approach(a: Value, A: Value, n: Value, kappa: Value) -> Value:
    """Approach [mm] of the bodies at the contact radius a (sneddon1965, derived)."""
    return kappa * A * a**n


@formula("P", "2*E_star*a*d_n*n/(n + 1)", unit="N", **PRESSED, valid="n > 0")
def force(a: Value, d_n: Value, n: Value, E_star: Value) -> Value:
    """Force [N] at the contact radius a and its approach d_n (sneddon1965, derived)."""
    return 2 * E_star * a * d_n * n / (n + 1)


@formula("a", "(P*(n + 1)/(2*E_star*kappa*A*n))^(1/(n + 1))", unit="mm", **PRESSED, valid="kappa = shape_factor(n)")
def contact_radius(P: Value, A: Value, n: Value, E_star: Value, kappa: Value) -> Value:
    """Radius [mm] of the contact under the force P (sneddon1965, derived)."""
    return (P * (n + 1) / (2 * E_star * kappa * A * n)) ** (1 / (n + 1))


def pressure(r: Value, P: Value, a: Value, n: Value) -> Value:
    """Pressure [MPa] at distance r from the middle, 0 outside; a: contact radius. For n <= 1 it has a peak at r = 0.

    (n + 1) P/(2 pi a^(n+1)) times the integral of t^(n-1) dt/sqrt(t^2 - r^2) from r to a (sneddon1965, derived).
    """
    blunt = np.asarray(n) >= 2
    integral = np.where(blunt, _blunt(r, a, np.where(blunt, n, 2.0)), _pointed(r, a, np.where(blunt, 1.0, n)))
    return (n + 1) * P / (2 * np.pi * a**2) * integral


def _blunt(r: Value, a: Value, n: Value) -> Value:
    """The integral over a^(n-1) for n >= 2: with Gauss' F and y = 1 - r^2/a^2 it is sqrt(y) F(1 - n/2, 1; 3/2; y)."""
    from scipy.special import hyp2f1  # deferred: start-up time

    y = np.maximum(0.0, 1 - (r / a) ** 2)
    return np.sqrt(y) * hyp2f1(1 - n / 2, 1.0, 1.5, y)


def _pointed(r: Value, a: Value, n: Value) -> Value:
    """The same for n < 2, by quadrature in the angle v of t = r cosh v; arcosh(a/r) for a cone."""
    x = np.minimum(1.0, np.maximum(np.abs(r), MIDDLE) / a)
    top = np.arccosh(1 / x)
    return top * sum(w * (x * np.cosh(v * top)) ** (n - 1) for v, w in pairs(*gauss()))


# Shearing


@formula("c/a", "(1 - abs(Q)/(mu*P))^(1/(n + 1))", unit="", **SHEARED, valid="|Q| < mu P")
def stick_ratio(Q: Value, P: Value, mu: Value, n: Value) -> Value:
    """Radius of the stick zone over that of the contact (jaeger1998 and ciavarella1998, derived)."""
    return (1 - shear_share(Q, P, mu)) ** (1 / (n + 1))


def traction(r: Value, Q: Value, P: Value, mu: Value, a: Value, n: Value) -> Value:
    """Shear traction [MPa] at distance r from the middle, 0 outside; a: contact radius.

    jaeger1998 and ciavarella1998, derived.
    """
    within = pressure(r, stick_force(Q, P, mu), stick_ratio(Q, P, mu, n) * a, n)
    return np.sign(Q) * mu * (pressure(r, P, a, n) - within)


@formula(
    "delta",
    "mu*P*(n + 1)/(8*n*a*G_star)*(1 - (1 - Q/(mu*P))^(n/(n + 1)))",
    unit="mm",
    **SHEARED,
    valid="0 <= Q < mu P, constant P",
)
def displacement(Q: Value, P: Value, mu: Value, a: Value, n: Value, G_star: Value) -> Value:
    """Shear displacement [mm] of the bodies on first loading; a: contact radius.

    jaeger1998 and ciavarella1998, derived.
    """
    share = -np.expm1(n / (n + 1) * np.log1p(-shear_share(Q, P, mu)))
    return np.sign(Q) * mu * P * (n + 1) / (8 * n * a * G_star) * share


def tangent_stiffness(Q: Value, P: Value, mu: Value, a: Value, n: Value, G_star: Value) -> Value:
    """Stiffness [N/mm] against further loading: 8 G* on the stick radius. Source as stick_ratio, derived."""
    return bodies.circle_shear_stiffness(stick_ratio(Q, P, mu, n) * a, G_star)


def secant_stiffness(Q: Value, P: Value, mu: Value, a: Value, n: Value, G_star: Value) -> Value:
    """Load over displacement [N/mm] on first loading. Source as stick_ratio, derived."""
    return loops.secant_stiffness(Q, displacement(Q, P, mu, a, n, G_star), bodies.circle_shear_stiffness(a, G_star))


@formula(
    "W",
    "(mu*P)^2*(n + 1)/(2*n*a*G_star)*(2*(n + 1)/(2*n + 1)*(1 - (1 - Q/(mu*P))^((2*n + 1)/(n + 1)))"
    " - Q/(mu*P)*(1 + (1 - Q/(mu*P))^(n/(n + 1))))",
    unit="mJ",
    **SHEARED,
    valid="0 <= Q < mu P, constant P",
)
def energy(Q: Value, P: Value, mu: Value, a: Value, n: Value, G_star: Value) -> Value:
    """Energy [mJ] per cycle between -Q and Q; a: contact radius. At gross slip W/(4 Q delta) is 1/(2 n + 1).

    By quadrature of the tangent stiffness, which keeps the digits at small loads. jaeger1998 and ciavarella1998,
    derived.
    """
    shear_share(Q, P, mu)
    return loops.energy_from_stiffness(lambda shear: tangent_stiffness(shear, P, mu, a, n, G_star), Q)


def profile(A: Value, n: Value, E_star: Value) -> Profile:
    """The power law for the general rule of superposition.py. Source sneddon1965, derived."""
    kappa = shape_factor(n)

    def radius(P: Value) -> Value:
        return contact_radius(P, A, n, E_star, kappa)

    def pressed(r: Value, P: Value) -> Value:
        a = radius(P)
        return pressure(r, P, np.where(a > 0, a, 1.0), n)

    return Profile(
        radius=radius,
        pressure=pressed,
        approach=lambda P: approach(radius(P), A, n, kappa),
        stiffness=lambda P: bodies.circle_normal_stiffness(radius(P), E_star),
    )
