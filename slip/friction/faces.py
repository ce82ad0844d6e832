"""The tangential stiffness of the joint's interface: measured, or from roughness and pressure; low, typical, high."""

from __future__ import annotations

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace
from slip.clamp.losses import ra_from_rz, rq_from_ra
from slip.friction.closed import bodies, rough
from slip.friction.closed.layers import inner_thickness_compliance, thickness_compliance
from slip.joint.joint import Joint
from slip.joint.surface import Roughness

Array = np.ndarray
GAMMA = 0.48  # of k_n = p/(gamma h_rms): the value commonly used (memory); 0.40 to 0.48 by boundary elements
SCATTER = 2.0  # measured faces lie within this factor of the law, either way, unless measured themselves


@record
class FaceStiffness:
    """k_t of the face as three readings (low, typical, high): `slope` [1/mm] times pressure, or `value` [N/mm^3] at any pressure."""

    slope: tuple[float, float, float] | None
    value: tuple[float, float, float] | None
    source: str
    basis: str
    trace: Trace

    def at(self, pressure: Array | float, reading: int) -> Array:
        """k_t [N/mm^3] at a pressure [MPa], any shape; reading 0 low, 1 typical, 2 high."""
        if self.value is not None:
            return np.full(np.shape(pressure), self.value[reading])
        assert self.slope is not None
        return np.asarray(pressure) * self.slope[reading]


def face_stiffness(joint: Joint) -> FaceStiffness | None:
    """The stiffness of the sliding face, a measured one before one from roughness; None where neither is known."""
    trace = Trace()
    measured = joint.interface.tangential_stiffness
    if measured is not None:
        low, high = measured
        return FaceStiffness(None, (low, float(np.sqrt(low * high)), high), "file", "given", trace)
    plates = joint.plates[:2]
    materials = [plate.material for plate in plates if plate.material is not None]
    if joint.interface.roughness is None or len(materials) < 2:
        return None
    first, second = (_rq(face, trace) for face in joint.interface.roughness)
    h_rms = trace("roughness of both faces together", rough.combined_roughness, Rq_1=first, Rq_2=second)
    (E_1, nu_1), (E_2, nu_2) = ((m.youngs_modulus, m.poissons_ratio) for m in materials)
    G_1, G_2 = (bodies.shear_modulus(E, nu) for E, nu in ((E_1, nu_1), (E_2, nu_2)))
    E_star = trace("normal modulus of both plates", bodies.normal_modulus, E_1=E_1, nu_1=nu_1, E_2=E_2, nu_2=nu_2)
    G_star = trace("shear modulus of both plates", bodies.shear_pair_modulus, G_1=G_1, nu_1=nu_1, G_2=G_2, nu_2=nu_2)
    rho = trace("tangential over normal stiffness", bodies.stiffness_ratio, G_star=G_star, E_star=E_star)
    normal = trace("normal stiffness for each MPa", rough.normal_stiffness, p=1.0, h_rms=h_rms, gamma=GAMMA)
    slope = float(trace("tangential stiffness for each MPa", rough.shear_stiffness, k_n=normal, rho=rho))
    return FaceStiffness(
        (slope / SCATTER, slope, slope * SCATTER), None, "persson2007;campana2011;paggi2014", "memory", trace
    )


def _rq(face: Roughness, trace: Trace) -> float:
    """Rq [mm] of one face, given as Rq, Ra or Rz."""
    if face.label == "Rq":
        return face.value
    ra = face.value if face.label == "Ra" else float(trace("Ra of a face", ra_from_rz, Rz=face.value))
    return float(trace("Rq of a face", rq_from_ra, Ra=ra))


def plate_shear(joint: Joint) -> float:
    """Compliance per area [mm/MPa] of the shear through the thickness of both plates at the face; 0 when the file leaves it out.

    Each plate adds t/(3G); the middle plate of a double lap, sheared on both faces, t/(6G).
    """
    if not joint.interface.plate_shear:
        return 0.0
    double = len(joint.plates) == 3 and joint.interface.parallel_faces == 2
    total = 0.0
    for plate, inner in zip(joint.plates[:2], (False, double), strict=True):
        assert plate.material is not None
        G = bodies.shear_modulus(plate.material.youngs_modulus, plate.material.poissons_ratio)
        total += float((inner_thickness_compliance if inner else thickness_compliance)(plate.thickness, G))
    return total
