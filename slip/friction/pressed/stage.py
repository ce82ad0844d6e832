"""Partial slip of a pressed contact at one end of a case, by both routes."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from slip.base.progress import Progress, told
from slip.base.trace import Trace
from slip.friction import law
from slip.friction.closed import bodies, whole
from slip.friction.faces import FaceStiffness
from slip.friction.pressed.closed import Asked, closed_route, closed_traction, pressure
from slip.friction.pressed.pair import FAR, Pair, pair
from slip.friction.pressed.range import Range, range_of
from slip.friction.pressed.records import NO_SHEAR, Curves, PressedSlip, Route
from slip.friction.pressed.stepped import NAME, Kept, stepped_route
from slip.joint.contact import PressedContact
from slip.joint.loads import Case

Array = np.ndarray
PLACES = 401  # of a curve along the contact
INSIDE = 0.985  # of a sharp flat, whose pressure has no bound at the edge
DIGITS = 5  # of the step's numbers that its residual vouches for
LIKE = 0.2  # Dundurs' beta up to which tangential tractions hardly change the pressure
NOTHING = np.empty(0)
PARTS = ("contact", "range", "load", "gross slip", "closed form", "stiffness of the face", NAME)
STEP: dict[str, str] = {"source": "step", "basis": "derived"}
TOLD = {
    "displacement": ("motion of the bodies", "delta", "mm"),
    "stiffness": ("stiffness before slip", "k", "N/mm"),
    "stick_ratio": ("stick size over contact size", "c/a", ""),
    "stick_shift": ("shift of the stick zone", "e", "mm"),
    "true_slip": ("largest true slip", "s", "mm"),
    "elastic_slip": ("largest elastic slip", "s_e", "mm"),
    "edge_stress": ("stress at the trailing edge", "sigma", "MPa"),
    "energy_per_cycle": ("energy of a cycle", "W", "mJ"),
}


def pressed_slips(c: PressedContact, progress: Progress | None = None) -> Mapping[tuple[int, str], PressedSlip]:
    """Partial slip at every end of every case; ends that ask for the same are worked out once."""
    kept = Kept()
    ends = [(i, end) for i, case in enumerate(c.cases) for end, _ in case.ends]
    return {(i, end): pressed_slip(c, c.cases[i], end, kept) for i, end in told(ends, progress)}


def pressed_slip(c: PressedContact, case: Case, end: str, kept: Kept | None = None) -> PressedSlip:
    """Partial slip at one end of a case by both routes, at the lowest friction.

    At a constant normal force the energy of a cycle depends on the range of the shear alone, so it is that of +- half the range. The
    bulk stress is in phase with the shear and has its value at the largest shear of the case. kept: what steps of the same contact share.
    """
    parts = {title: Trace() for title in PARTS}
    load = dict(case.ends)[end].shear
    ready = pair(c, parts["contact"])
    trace = parts["load"]
    shear = float(trace("shear", whole.resultant, Q_x=float(load[0]), Q_y=float(load[1])))
    reach = [float(np.hypot(*one.shear)) * (1 if np.dot(one.shear, load) >= 0 else -1) for _, one in case.ends]
    swing = None
    if case.alternating:
        swing = float(trace("half range of the shear", whole.half_range, Q_1=max(reach), Q_2=min(reach)))
    most = max(abs(one) for one in reach)
    asked = Asked(shear, swing, c.interface.friction_low, c.bulk_stress * shear / most if most else 0.0)
    return _slip(c, ready, asked, parts, Kept() if kept is None else kept)


def _slip(c: PressedContact, ready: Pair, asked: Asked, parts: dict[str, Trace], kept: Kept) -> PressedSlip:
    trace = parts["gross slip"]
    gross = float(trace("gross-slip load", law.capacity, mu=asked.mu, m=1, clamp=c.normal_force))
    held = range_of(c, ready, parts["range"])
    held = Range((*held.notes, *_notes(c, ready)), held.beyond)
    if asked.shear == 0:
        return _without(ready, asked, gross, float("inf"), held, NO_SHEAR, parts)
    safety = float(trace("safety against gross slip", law.safety, F_max=gross, F_s=asked.shear))
    if not max(asked.shear, asked.swing or 0.0) < gross:
        reason = f"slips wholly at {c.system.say(gross, 'force')}; nothing beyond is computed"
        return _without(ready, asked, gross, safety, held, reason, parts)
    closed = closed_route(c, ready, asked, parts["closed form"])
    stepped = stepped_route(c, ready, asked, kept)
    if ready.stiffness is not None:
        parts["stiffness of the face"] = _readings(ready.stiffness)
    _record(stepped.route, parts[NAME])
    edge = closed.edge_stress if closed.edge_stress is not None else stepped.route.edge_stress
    notes = (*held.notes, *_compared(c, ready, closed, stepped.route))
    x, bound = _line(ready, asked.mu)
    curves = Curves(x, bound, closed_traction(ready, asked, x, closed.stick_shift), stepped.x, stepped.traction)
    routes = (closed, stepped.route)
    size, peak = ready.size, ready.peak
    return PressedSlip(asked.shear, gross, safety, size, peak, edge, routes, curves, notes, "", held.beyond, parts)


def _without(
    ready: Pair, asked: Asked, gross: float, safety: float, held: Range, reason: str, parts: dict[str, Trace]
) -> PressedSlip:
    """No routes, and why."""
    curves = Curves(*_line(ready, asked.mu), NOTHING, NOTHING, NOTHING)
    size, peak, notes = ready.size, ready.peak, held.notes
    return PressedSlip(asked.shear, gross, safety, size, peak, None, (), curves, notes, reason, held.beyond, parts)


def _line(ready: Pair, mu: float) -> tuple[Array, Array]:
    """Places [mm] across the contact and friction times pressure [MPa] at them."""
    x = np.linspace(-1, 1, PLACES) * ready.size * (1.0 if ready.profile is not None else INSIDE)
    return x, mu * pressure(ready, x)


def _readings(stiffness: FaceStiffness) -> Trace:
    """Where the stiffness of the face comes from, and its three readings."""
    trace = Trace(list(stiffness.trace.steps))
    name = "tangential stiffness" if stiffness.slope is None else "tangential stiffness for each MPa"
    for said, value in zip(("low", "typical", "high"), stiffness.value or stiffness.slope or (), strict=False):
        trace.given(f"{name}, {said}", "k_t", value, "N/mm^3", stiffness.source, stiffness.basis)
    return trace


def _record(route: Route, trace: Trace) -> None:
    """The step's numbers as lines: they come from a solver, and stand as given."""
    readings = ("typical", "low", "high") if route.band else ("",)
    for said, one in zip(readings, (route, *route.band), strict=True):
        reading = f", {said} stiffness of the face" if said else ""
        for key, (name, symbol, unit) in TOLD.items():
            value = getattr(one, key)
            if value is not None:
                trace.given(f"{name}{reading}", symbol, float(f"{value:.{DIGITS}g}"), unit, **STEP)


def _notes(c: PressedContact, ready: Pair) -> Iterator[str]:
    """What the range of both routes says."""
    (E_1, nu_1), (E_2, nu_2) = ((m.youngs_modulus, m.poissons_ratio) for m in c.bodies)
    beta = float(bodies.mismatch(E_1, nu_1, E_2, nu_2))
    if abs(beta) >= LIKE:
        yield f"the bodies differ by beta = {beta:.2g}: tangential tractions change the pressure, which both routes neglect"
    if ready.plane:
        far = f"{FAR:g} half-widths away, {c.system.say(ready.far, 'length')}"
        yield f"motion is measured from points {far}; slip and energy do not depend on it"
    if c.bulk_stress and not ready.plane:
        yield "the bulk stress is not modelled for a round contact: nothing here is with it"
    if c.bulk_stress and ready.plane:
        yield "the bulk stress acts in phase with the shear, in the step; the closed form's motion and energy are without it"


def _compared(c: PressedContact, ready: Pair, closed: Route, stepped: Route) -> Iterator[str]:
    """Where the two routes may differ, and by how much they do."""
    if c.bulk_stress and ready.shape == "cylinder" and closed.edge_stress is None:
        yield "the bulk stress moves the stick zone to the edge, where the closed form ends: the edge stress is the step's"
    if ready.stiffness is None:
        return
    if ready.stiffness.value is None:
        yield "roughness gives the face a stiffness in proportion to the pressure (real contact 0.1 % to 15 % of the area)"
    shares = sorted(route.stiffness / closed.stiffness for route in (stepped, *stepped.band))
    band = f" ({shares[0]:.3g} .. {shares[-1]:.3g})" if stepped.band else ""
    yield (
        f"the face's own give is in the step alone: its stiffness is {stepped.stiffness / closed.stiffness:.3g}{band} "
        "times that of the smooth closed form, and it is the route to take"
    )
