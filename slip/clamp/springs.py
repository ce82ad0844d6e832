"""Springs of the joint: the bolt as pieces in series, the plates as cones, and how both share an axial load.

Lengths in mm, moduli in MPa, areas in mm2, compliances in mm/N; all > 0. The arguments broadcast (layers of a stack
on the last axis, everything else on the axes before), numbers in give a number out.

The plates' material works in a cone that opens by 2 slope = 2 tan(phi) per depth from each bearing face (nut joint:
the two cones meet half way through the grip; tapped joint: one cone from the head to the thread) until it is as wide
as the body round the bolt, and goes on as a sleeve. Each layer cuts its own slices out of it, so that plates of any
moduli can be stacked.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, NamedTuple

import numpy as np

from slip.base.formulas import formula

Value = Any  # a number, or an array of numbers that broadcasts with the others
END = {"unit": "mm/N", "source": "vdi2230", "basis": "memory"}


@formula("delta", "length/(E*A)", unit="mm/N", source="statics", basis="derived", valid="uniform tension")
def piece_compliance(length: Value, E: Value, A: Value) -> Value:
    """Compliance of a bolt piece: length [mm], modulus E [MPa], section A [mm2]; free thread on the core at d3.

    Source statics, derived.
    """
    return length / (E * A)


@formula("delta", "0.5*d/(E*A_N)", **END, valid="hexagon head")
def hexagon_head_compliance(d: Value, E: Value, A_N: Value) -> Value:
    """Compliance of a hexagon head: d nominal diameter, A_N its full circle, E of the bolt. Source vdi2230, memory."""
    return 0.5 * d / (E * A_N)


@formula("delta", "0.4*d/(E*A_N)", **END, valid="socket head")
def socket_head_compliance(d: Value, E: Value, A_N: Value) -> Value:
    """Compliance of a cylindrical socket head: arguments as for hexagon_head_compliance. Source vdi2230, memory."""
    return 0.4 * d / (E * A_N)


@formula("delta", "0.5*d/(E*A_d3)", **END, valid="nut or tapped hole")
def engaged_thread_compliance(d: Value, E: Value, A_d3: Value) -> Value:
    """Compliance of the engaged bolt thread: d nominal diameter, A_d3 core, E of the bolt. Source vdi2230, memory."""
    return 0.5 * d / (E * A_d3)


@formula("delta", "0.4*d/(E*A_N)", **END, valid="nut")
def nut_compliance(d: Value, E: Value, A_N: Value) -> Value:
    """Compliance of the nut: d nominal diameter, A_N its full circle, E of the nut. Source vdi2230, memory."""
    return 0.4 * d / (E * A_N)


@formula("delta", "0.33*d/(E*A_N)", **END, valid="tapped hole")
def tapped_hole_compliance(d: Value, E: Value, A_N: Value) -> Value:
    """Compliance of a tapped hole: d nominal diameter, A_N its full circle, E of its plate. Source vdi2230, memory."""
    return 0.33 * d / (E * A_N)


def series(compliances: Value) -> Value:
    """Compliance of pieces in series: their sum over the last axis, (..., pieces) -> (...)."""
    return np.sum(compliances, axis=-1)


@formula("D_A", "min(2*edge_distance, bolt_spacing)", unit="mm", source="practice", basis="practice", valid="")
def body_diameter(edge_distance: Value, bolt_spacing: Value) -> Value:
    """Diameter of the body round a bolt: the largest circle inside the plate that leaves its neighbour as much.

    edge_distance: from the bolt to the nearest edge; bolt_spacing: to the nearest bolt (inf without one). Corners
    outside the circle are left out: plates come out softer, the bolt's share larger and embedding costs less. That
    is not the safe side of the lowest clamp: compare with D_A = inf where it decides. Source practice, practice.
    """
    return np.minimum(2 * edge_distance, bolt_spacing)


@formula("y", "min(max(D_A/d_w, 1), 10)", unit="", source="vdi2230", basis="memory", valid="1 <= D_A/d_w <= 10")
def body_ratio(D_A: Value, d_w: Value) -> Value:
    """Body over bearing diameter as the cone's slope takes it: clipped to between 1 and 10.

    D_A: body diameter, inf allowed; d_w: bearing diameter. Below 1 there is no cone, only a sleeve; 10 is the end of
    the range that the slopes were fitted in. Source vdi2230, memory.
    """
    return np.clip(D_A / d_w, 1, 10)


@formula(
    "tan_phi",
    "0.362 + 0.032*ln(beta_L/2) + 0.153*ln(y)",
    unit="",
    source="vdi2230",
    basis="memory",
    valid="nut joint, 0.5 <= beta_L <= 10, 1 <= y <= 10",
)
def cone_slope_nut(beta_L: Value, y: Value) -> Value:
    """Slope of the cones of a nut joint: beta_L = grip/d_w, > 0, and y the body_ratio.

    beta_L is not clipped: it enters weakly, and 0.5 to 10 is the range to trust. Source vdi2230, memory.
    """
    return 0.362 + 0.032 * np.log(beta_L / 2) + 0.153 * np.log(y)


@formula(
    "tan_phi",
    "0.348 + 0.013*ln(beta_L) + 0.193*ln(y)",
    unit="",
    source="vdi2230",
    basis="memory",
    valid="tapped joint, 0.5 <= beta_L <= 10, 1 <= y <= 10",
)
def cone_slope_tapped(beta_L: Value, y: Value) -> Value:
    """Slope of the cone of a tapped joint: arguments as for cone_slope_nut. Source vdi2230, memory."""
    return 0.348 + 0.013 * np.log(beta_L) + 0.193 * np.log(y)


@formula(
    "delta",
    "ln(1 + 4*d_h*length*slope/((D_0 + 2*length*slope + d_h)*(D_0 - d_h)))/(E*pi*d_h*slope)",
    unit="mm/N",
    source="vdi2230;shigley9",
    basis="derived",
    valid="0 < d_h < D_0, slope > 0",
)
def cone_slice(D_0: Value, length: Value, slope: Value, d_h: Value, E: Value) -> Value:
    """Compliance of a slice of a cone with a hole: the integral of dz/(E pi/4 (D^2 - d_h^2)), D = D_0 + 2 z slope.

    D_0: smaller outer diameter; length: of the slice, 0 allowed; slope: tan of the half angle, > 0; d_h: hole, in
    0 < d_h < D_0. Slices in series make the cone exactly. Source vdi2230 and shigley9 (for 30 degrees), derived.
    """
    wider = D_0 + 2 * length * slope
    return np.log1p(4 * d_h * length * slope / ((wider + d_h) * (D_0 - d_h))) / (E * np.pi * d_h * slope)


@formula("delta", "4*length/(E*pi*(D_A^2 - d_h^2))", unit="mm/N", source="statics", basis="derived", valid="d_h < D_A")
def sleeve_slice(D_A: Value, length: Value, d_h: Value, E: Value) -> Value:
    """Compliance of a sleeve of outer diameter D_A, bore d_h < D_A and a length, 0 allowed. Source statics, derived."""
    return 4 * length / (E * np.pi * (D_A**2 - d_h**2))


class Slice(NamedTuple):
    """A slice of the deformed body: kind "cone" or "sleeve", its (smaller) diameter, length, modulus, compliance."""

    kind: str
    diameter: Value
    length: Value
    E: Value
    compliance: Value


def cone_slope(thicknesses: Value, d_w: Value, D_A: Value, tapped: bool) -> Value:
    """Slope of the joint's cone from its grip (the sum of the layers, (..., layers)), bearing and body diameter."""
    slope = cone_slope_tapped if tapped else cone_slope_nut
    return slope(series(thicknesses) / d_w, body_ratio(D_A, d_w))


def slices(
    thicknesses: Value, moduli: Value, d_w: Value, d_h: Value, D_A: Value, slope: Value, tapped: bool
) -> Iterator[Slice]:
    """The slices of every layer from the head down; a layer has up to two of each kind, absent ones have length 0.

    thicknesses, moduli: (..., layers), washers that the cone passes through included; all others (...). Raises
    ValueError when the hole is not smaller than the bearing and the body, since no material is left there.
    """
    if np.any(np.minimum(d_w, D_A) <= d_h):
        raise ValueError("the hole must be smaller than the bearing face and the body round the bolt")
    thicknesses, moduli = np.broadcast_arrays(np.asarray(thicknesses, float), moduli)
    ends = np.cumsum(thicknesses, axis=-1)
    grip = ends[..., -1]
    reach = grip if tapped else grip / 2
    full = np.maximum((D_A - d_w) / (2 * slope), 0)  # depth at which the cone is as wide as the body
    for layer in range(thicknesses.shape[-1]):
        top, bottom, E = ends[..., layer] - thicknesses[..., layer], ends[..., layer], moduli[..., layer]
        for near, far in ((top, bottom),) if tapped else ((top, bottom), (grip - bottom, grip - top)):
            near, far = np.minimum(near, reach), np.minimum(far, reach)
            turn = np.clip(full, near, far)
            D_0 = d_w + 2 * near * slope
            yield Slice("cone", D_0, turn - near, E, cone_slice(D_0, turn - near, slope, d_h, E))
            yield Slice("sleeve", D_A, far - turn, E, sleeve_slice(D_A, far - turn, d_h, E))


def plate_compliance(thicknesses: Value, moduli: Value, d_w: Value, d_h: Value, D_A: Value, tapped: bool) -> Value:
    """Compliance [mm/N] of the clamped layers by deformation cones, (..., layers) -> (...).

    thicknesses, moduli: of the layers from the head down; d_w: bearing diameter (the same at both ends); d_h: hole;
    D_A: body diameter, one per bolt if an array, inf allowed; tapped: one cone instead of two. ValueError as slices.
    Source vdi2230, memory.
    """
    slope = cone_slope(thicknesses, d_w, D_A, tapped)
    return sum(s.compliance for s in slices(thicknesses, moduli, d_w, d_h, D_A, slope, tapped))


def cone_pieces(thicknesses: Value, moduli: Value, d_w: float, d_h: float, D_A: float, tapped: bool) -> list[Slice]:
    """The slices that plate_compliance sums for one bolt, as rows of numbers, those of length 0 left out.

    thicknesses, moduli: (layers,); the others one number each. ValueError as slices.
    """
    slope = cone_slope(thicknesses, d_w, D_A, tapped)
    rows = (Slice(s.kind, *map(float, s[1:])) for s in slices(thicknesses, moduli, d_w, d_h, D_A, slope, tapped))
    return [row for row in rows if row.length > 1e-9 * series(thicknesses)]  # less is rounding of the sums


def frustum_compliance(thicknesses: Value, moduli: Value, d_w: Value, d_hole: Value) -> Value:
    """Second route to plate_compliance of a nut joint: cones of 30 degrees without a limit.

    Arguments as there; the source puts the bolt's diameter for d_hole. Both routes are models: their difference
    belongs in the answer. Source shigley9, published.
    """
    slope = np.tan(np.pi / 6)
    return sum(s.compliance for s in slices(thicknesses, moduli, d_w, d_hole, np.inf, slope, tapped=False))


@formula(
    "k_m",
    "E*d*A*exp(B*d/l_K)",
    unit="N/mm",
    source="wileman1991;shigley9",
    basis="published",
    valid="one material, bearing diameter 1.5 d",
)
def fitted_stiffness(E: Value, d: Value, l_K: Value, A: Value, B: Value) -> Value:
    """Third route: stiffness [N/mm] of plates of one material, fitted to finite elements.

    E: modulus [MPa]; d: bolt diameter; l_K: grip; A, B: the material's constants. Source wileman1991 and shigley9,
    published.
    """
    return E * d * A * np.exp(B * d / l_K)


@formula(
    "Phi", "n*delta_P/(delta_S + delta_P)", unit="", source="vdi2230", basis="derived", valid="concentric clamping"
)
def bolt_share(delta_S: Value, delta_P: Value, n: Value) -> Value:
    """Share of an external axial load that the bolt takes.

    delta_S, delta_P: compliance of bolt and plates [mm/N]; n: load introduction, from 0 (the load enters at the
    interface) to 1 (under head and nut). Source vdi2230, derived.
    """
    return n * delta_P / (delta_S + delta_P)
