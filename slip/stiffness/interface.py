"""The stiffness of the real face at the pressures of this joint, the elastic slip that belongs to it, and what a constant makes of it."""

from __future__ import annotations

from slip.base.records import record
from slip.friction.faces import FaceStiffness
from slip.friction.partial import HIGH, LOW, TYPICAL
from slip.stiffness.subject import Subject, constant
from slip.stiffness.window import Response, response

READINGS = (LOW, TYPICAL, HIGH)
PLACES = ("mean", "weighted", "peak")


@record(eq=False)
class InterfaceValues:
    """k_t [N/mm^3] low, typical, high at the mean, the clamp-weighted and the peak pressure, by those names; normal: k_n
    likewise, typical, None where the face was measured. slope [1/mm]: k_t over pressure, None for a measured constant.

    elastic_slip (low, typical, high stiffness) [mm]: motion of the face at its limit traction, at any pressure where k_t follows it.
    own: what the joint does with the face's own stiffness; constant: with the typical value at the clamp-weighted pressure.
    """

    k_t: dict[str, tuple[float, float, float]]
    slope: tuple[float, float, float] | None
    elastic_slip: tuple[float, float, float]
    normal: dict[str, float] | None
    source: str
    basis: str
    own: Response
    constant: Response

    @property
    def typical(self) -> float:
        """k_t at the clamp-weighted pressure, typical [N/mm^3]."""
        return self.k_t["weighted"][TYPICAL]


def interface_values(subject: Subject) -> InterfaceValues | None:
    """The face's own values; None where neither roughness nor a measurement is known.

    Raises NotConverged or SlipsWholly where the joint cannot be solved with them.
    """
    face = subject.stiffness
    if face is None:
        return None
    pressures = {name: getattr(subject.pressures, name) for name in PLACES}
    k_t = {
        name: (float(face.at(p, LOW)), float(face.at(p, TYPICAL)), float(face.at(p, HIGH)))
        for name, p in pressures.items()
    }
    limit = subject.friction * pressures["weighted"]
    low, typical, high = (limit / k for k in k_t["weighted"])
    return InterfaceValues(
        k_t=k_t,
        slope=face.slope,
        elastic_slip=(low, typical, high),
        normal=_normal(face, pressures),
        source=face.source,
        basis=face.basis,
        own=response(subject, face),
        constant=response(subject, constant(k_t["weighted"][TYPICAL])),
    )


def _normal(face: FaceStiffness, pressures: dict[str, float]) -> dict[str, float] | None:
    """Normal stiffness per area [N/mm^3] of a rough face: in proportion to the pressure, as the calculation of k_t found it."""
    for step in face.trace.steps:
        if step.formula.symbol == "k_n":
            return {name: float(step.result) * p for name, p in pressures.items()}
    return None
