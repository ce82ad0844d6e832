"""The contact made ready: moduli of both bodies, its profile, its size and largest pressure, stiffness of its face."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import bodies, cylinder, flat, sphere, strip, whole
from slip.friction.closed.superposition import Profile
from slip.friction.faces import FaceStiffness, stiffness_between
from slip.joint.contact import PressedContact

FAR = 20.0  # contact half-widths to the points from which motion is measured in plane strain
SAMPLES = 401  # places among which the largest pressure of a rounded flat is sought
ROOT: dict[str, str] = {"source": "sneddon1965;ciavarella1998", "basis": "derived"}


@record(eq=False)
class Pair:
    """Profile of the contact, None for a flat with a sharp edge; moduli [MPa]; rho of the rule.

    force [N]: that presses, for each mm of length where plane; length [mm], 1 where round; size [mm]: radius or half-width;
    far [mm]: to the points from which the motion of a plane contact is measured; peak [MPa]: largest pressure, of a sharp flat
    the mean. stiffness: of the face, None where it is smooth.
    """

    shape: str
    plane: bool
    profile: Profile | None
    E_star: float
    G_star: float
    rho: float
    force: float
    length: float
    size: float
    far: float
    peak: float
    stiffness: FaceStiffness | None


def pair(c: PressedContact, trace: Trace) -> Pair:
    """The contact made ready, every formula through the trace."""
    E_star, G_star, rho = _moduli(c, trace)
    plane = c.length is not None
    length = c.length if c.length is not None else 1.0
    force = c.normal_force
    if plane:
        force = float(trace("normal force for each mm of length", whole.line_load, F=force, l=length))
    size = (_half_width if plane else _radius)(c, force, E_star, trace)
    far = FAR * size
    profile = _profile(c, E_star, far)
    return Pair(
        c.shape,
        plane,
        profile,
        E_star,
        G_star,
        1.0 if plane else rho,
        force,
        length,
        size,
        far,
        _peak(c.shape, plane, profile, force, size, trace),
        stiffness_between(c.interface, c.bodies, "bodies"),
    )


def _moduli(c: PressedContact, trace: Trace) -> tuple[float, float, float]:
    (E_1, nu_1), (E_2, nu_2) = ((m.youngs_modulus, m.poissons_ratio) for m in c.bodies)
    E_star = trace("normal modulus of both bodies", bodies.normal_modulus, E_1=E_1, nu_1=nu_1, E_2=E_2, nu_2=nu_2)
    if c.length is not None:  # in plane strain shear is as stiff as pressing
        return float(E_star), float(E_star), 1.0
    G_1 = trace("shear modulus of the first body", bodies.shear_modulus, E=E_1, nu=nu_1)
    G_2 = trace("shear modulus of the second body", bodies.shear_modulus, E=E_2, nu=nu_2)
    G_star = trace("shear modulus of both bodies", bodies.shear_pair_modulus, G_1=G_1, nu_1=nu_1, G_2=G_2, nu_2=nu_2)
    rho = trace("tangential over normal stiffness", bodies.stiffness_ratio, G_star=G_star, E_star=E_star)
    return float(E_star), float(G_star), float(rho)


def _radius(c: PressedContact, force: float, E_star: float, trace: Trace) -> float:
    """Contact radius [mm]."""
    if c.shape == "sphere":
        return float(trace("contact radius", sphere.contact_radius, P=force, R=c.radius, E_star=E_star))
    assert c.flat_width is not None
    half = c.flat_width / 2
    if c.shape == "flat":
        return float(trace.given("radius of the flat", "a", half, "mm", "file", "given"))
    values: dict[str, Any] = {"b": half, "R": c.radius, "E_star": E_star}
    a = float(flat.rounded_radius(force, **values))
    trace.given("contact radius, by halving until it bears the force", "a", a, "mm", **ROOT)
    trace("force that presses to this radius", flat.rounded_force, a=a, **values)
    return a


def _half_width(c: PressedContact, force: float, E_star: float, trace: Trace) -> float:
    """Half-width [mm] of a plane contact."""
    if c.shape == "cylinder":
        name = "half-width of the contact"
        return float(trace(name, cylinder.contact_half_width, P=force, R=c.radius, E_star=E_star))
    assert c.flat_width is not None
    half = c.flat_width / 2
    if c.shape == "flat":
        return float(trace.given("half-width of the flat", "a", half, "mm", "file", "given"))
    values: dict[str, Any] = {"b": half, "R": c.radius, "E_star": E_star}
    a = float(strip.half_width(force, **values))
    trace.given("half-width of the contact, by halving until it bears the force", "a", a, "mm", **ROOT)
    trace("force for each mm that presses to this half-width", strip.force, a=a, **values)
    return a


def _profile(c: PressedContact, E_star: float, far: float) -> Profile | None:
    if c.shape == "flat":
        return None
    assert c.radius is not None
    if c.shape == "sphere":
        return sphere.profile(c.radius, E_star)
    if c.shape == "cylinder":
        return cylinder.profile(c.radius, E_star, far)
    assert c.flat_width is not None
    half = c.flat_width / 2
    return strip.profile(half, c.radius, E_star, far) if c.length else flat.rounded_profile(half, c.radius, E_star)


def _peak(shape: str, plane: bool, profile: Profile | None, force: float, size: float, trace: Trace) -> float:
    """Largest pressure [MPa]; for a sharp flat the mean, since its edge has no finite one."""
    if shape == "sphere":
        return float(trace("peak pressure", sphere.peak_pressure, P=force, a=size))
    if shape == "cylinder":
        return float(trace("peak pressure", cylinder.peak_pressure, P=force, a=size))
    if profile is None:
        return float(trace("mean pressure", whole.strip_pressure if plane else whole.disc_pressure, P=force, a=size))
    most = float(np.max(profile.pressure(np.linspace(0, size, SAMPLES), force)))
    return float(trace.given("peak pressure, the largest over the contact", "p_0", most, "MPa", **ROOT))
