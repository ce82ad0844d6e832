"""The sliding face."""

from __future__ import annotations

from slip.base.records import record


@record
class Roughness:
    """Roughness of one face as the file gives it: label Ra, Rq or Rz, value in mm."""

    label: str
    value: float


@record
class Interface:
    """The face that must not slip. Friction low and high with their source and basis; `parallel_faces` share the load side by side.

    tangential_stiffness [N/mm^3] as (low, high) or None; pressure [MPa] of a face without bolts or None.
    """

    friction_low: float
    friction_high: float
    friction_source: str
    friction_basis: str
    parallel_faces: int
    roughness: tuple[Roughness, Roughness] | None
    tangential_stiffness: tuple[float, float] | None
    pressure: float | None
    run_in_friction: float | None
    plate_shear: bool
