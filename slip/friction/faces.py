"""The sliding face: its tangential stiffness, measured or from roughness and pressure, low, typical, high; and the plates at it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.losses import ra_from_rz, rq_from_ra
from slip.friction.closed import bodies, rough
from slip.friction.closed.layers import inner_thickness_compliance, strip_stiffness, thickness_compliance
from slip.joint.contact import PressedFace
from slip.joint.joint import Joint
from slip.joint.material import Material
from slip.joint.plates import Plate, Rectangle
from slip.joint.surface import Interface, Roughness

Array = np.ndarray
Faced = Joint | PressedFace  # what has plates and a sliding face
GAMMA = 0.48  # of k_n = p/(gamma h_rms): the value commonly used (memory); 0.40 to 0.48 by boundary elements
UM = 1e-3  # mm
ALONG = 0.01  # shear across, or moment over shear times length, up to this part of the shear counts as along the plates
AXES = {"left": 0, "right": 0, "bottom": 1, "top": 1}
SCATTER = 2.0  # measured faces lie within this factor of the law, either way, unless measured themselves


@record
class Lap:
    """Two strips: axis 0 or 1 along the pull, ends of the overlap and width [mm], thickness shear [mm/MPa], shares of the load.

    strips: E [MPa], thickness and width [mm] of the strip that is pulled at the far end of the axis, then of the other.
    """

    axis: int
    start: float
    stop: float
    width: float
    strips: tuple[tuple[float, float, float], tuple[float, float, float]]
    shear: float
    thickness: float
    halves: int

    @property
    def length(self) -> float:
        """Length of the overlap [mm]."""
        return self.stop - self.start

    @property
    def EA(self) -> tuple[float, float]:
        """Stiffness [N] of both strips."""
        first, second = (float(strip_stiffness(*strip)) for strip in self.strips)
        return first, second


@record
class FaceStiffness:
    """k_t of the face as three readings (low, typical, high): `slope` [1/mm] times pressure, or `value` [N/mm^3] at any pressure."""

    slope: tuple[float, float, float] | None
    value: tuple[float, float, float] | None
    source: str
    basis: str
    trace: Trace

    @property
    def weakest(self) -> str:
        """Basis of what is computed from it: the weaker one of its own and derived."""
        return "memory" if self.basis == "memory" else "derived"

    def at(self, pressure: Array | float, reading: int) -> Array:
        """k_t [N/mm^3] at a pressure [MPa], any shape; reading 0 low, 1 typical, 2 high."""
        if self.value is not None:
            return np.full(np.shape(pressure), self.value[reading])
        assert self.slope is not None
        return np.asarray(pressure) * self.slope[reading]


def face_stiffness(joint: Faced) -> FaceStiffness | None:
    """The stiffness of the joint's sliding face, a measured one before one from roughness; None where neither is known."""
    materials = [plate.material for plate in joint.plates[:2] if plate.material is not None]
    return stiffness_between(joint.interface, materials, "plates")


def stiffness_between(face: Interface, materials: Sequence[Material], bodies_said: str) -> FaceStiffness | None:
    """The stiffness of a face between two materials, as `face_stiffness`; `bodies_said` names what they make."""
    trace = Trace()
    measured = face.tangential_stiffness
    if measured is not None:
        low, high = measured
        return FaceStiffness(None, (low, float(np.sqrt(low * high)), high), "file", "given", trace)
    if face.roughness is None or len(materials) < 2:
        return None
    first, second = (_rq(one, trace) for one in face.roughness)
    h_rms = trace("roughness of both faces together", rough.combined_roughness, Rq_1=first, Rq_2=second)
    (E_1, nu_1), (E_2, nu_2) = ((m.youngs_modulus, m.poissons_ratio) for m in materials)
    G_1, G_2 = (bodies.shear_modulus(E, nu) for E, nu in ((E_1, nu_1), (E_2, nu_2)))
    both = f"of both {bodies_said}"
    E_star = trace(f"normal modulus {both}", bodies.normal_modulus, E_1=E_1, nu_1=nu_1, E_2=E_2, nu_2=nu_2)
    G_star = trace(f"shear modulus {both}", bodies.shear_pair_modulus, G_1=G_1, nu_1=nu_1, G_2=G_2, nu_2=nu_2)
    rho = trace("tangential over normal stiffness", bodies.stiffness_ratio, G_star=G_star, E_star=E_star)
    normal = trace("normal stiffness for each MPa", rough.normal_stiffness, p=1.0, h_rms=h_rms, gamma=GAMMA)
    slope = float(trace("tangential stiffness for each MPa", rough.shear_stiffness, k_n=normal, rho=rho))
    return FaceStiffness(
        (slope / SCATTER, slope, slope * SCATTER), None, "persson2007;campana2011;paggi2014", "memory", trace
    )


def _rq(face: Roughness, trace: Trace) -> float:
    """Rq [mm] of one face, given as Rq, Ra or Rz; the formulas speak in um."""
    if face.label == "Rq":
        return face.value
    given = face.value / UM
    ra = given if face.label == "Ra" else float(trace("Ra of a face", ra_from_rz, Rz=given))
    return float(trace("Rq of a face", rq_from_ra, Ra=ra)) * UM


def plate_shear(joint: Faced) -> float:
    """Compliance per area [mm/MPa] of the shear through the thickness of both plates at the face; 0 when the file leaves it out.

    Each plate adds t/(3G); the middle plate of a double lap, sheared on both faces, t/(6G).
    """
    if not joint.interface.plate_shear:
        return 0.0
    total = 0.0
    for plate, inner in zip(joint.plates[:2], (False, _double(joint)), strict=True):
        assert plate.material is not None
        G = bodies.shear_modulus(plate.material.youngs_modulus, plate.material.poissons_ratio)
        total += float((inner_thickness_compliance if inner else thickness_compliance)(plate.thickness, G))
    return total


def thicknesses(joint: Faced) -> tuple[float, float]:
    """Thickness [mm] of both plates as far as the face works on them: the middle plate of a double lap is shared by two."""
    first, second = (plate.thickness for plate in joint.plates[:2])
    return first, second / 2 if _double(joint) else second


def _double(joint: Faced) -> bool:
    return len(joint.plates) == 3 and joint.interface.parallel_faces == 2


def lap_of(joint: Faced, load: Array) -> Lap | None:
    """The lap that the file describes when this load pulls along it, else None."""
    plates, faces = joint.plates, joint.interface.parallel_faces
    double = _double(joint) and _alike(plates[0], plates[2])
    if not (double or (len(plates) == 2 and faces == 1)):
        return None
    pair = plates[:2]
    if any(p.material is None or not isinstance(p.outline, Rectangle) or not p.load_edge for p in pair):
        return None
    axis = AXES[pair[0].load_edge]
    if axis != AXES[pair[1].load_edge] or pair[0].load_edge == pair[1].load_edge:
        return None
    spans = [_span(p, axis) for p in pair]
    sides = [_span(p, 1 - axis) for p in pair]
    start, stop = max(s[0] for s in spans), min(s[1] for s in spans)
    width = min(s[1] for s in sides) - max(s[0] for s in sides)
    if stop <= start or width <= 0 or abs(load[1 - axis]) > ALONG * abs(load[axis]):
        return None
    if load[axis] == 0 or abs(load[2]) > ALONG * abs(load[axis]) * (stop - start):
        return None
    one, other = (
        (p.material.youngs_modulus, t, side[1] - side[0])
        for p, t, side in zip(pair, thicknesses(joint), sides, strict=True)
        if p.material is not None
    )
    strips = (one, other) if pair[0].load_edge in ("right", "top") else (other, one)
    return Lap(axis, start, stop, width, strips, plate_shear(joint), max(thicknesses(joint)), faces)


def _alike(first: Plate, second: Plate) -> bool:
    return (first.thickness, first.material, first.outline, first.load_edge) == (
        second.thickness,
        second.material,
        second.outline,
        second.load_edge,
    )


def _span(plate: Plate, axis: int) -> tuple[float, float]:
    """Ends of a rectangular outline along an axis."""
    o = plate.outline
    assert isinstance(o, Rectangle)
    return ((o.x0, o.x1), (o.y0, o.y1))[axis]
