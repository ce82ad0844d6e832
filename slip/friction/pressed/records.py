"""What is found for a pressed contact under one shear."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field

import numpy as np

from slip.base.records import record
from slip.base.trace import Trace

Array = np.ndarray
NO_SHEAR = "no shear"


@record
class Route:
    """What one route gives for shear Q, None where it does not tell.

    displacement [mm] of the bodies; stiffness [N/mm] before slip; stick_ratio: stick size over contact size; stick_shift [mm] of
    the stick zone's middle by bulk stress, along the shear; true_slip, elastic_slip [mm]: the largest; edge_stress [MPa] of a plane
    contact's first body at the trailing edge; energy_per_cycle [N mm], None without a cycle.
    band: the same at the low and the high stiffness of the face, where it has one.
    """

    name: str
    displacement: float
    stiffness: float
    stick_ratio: float
    stick_shift: float | None
    true_slip: float | None
    elastic_slip: float | None
    edge_stress: float | None
    energy_per_cycle: float | None
    band: tuple[Route, ...] = field(default=())


@record(eq=False)
class Curves:
    """Pressure and tractions [MPa] along the line of the shear through the middle of the contact.

    x (m,), bound: friction times pressure (m,), closed (m,): the closed form's traction, empty where it has none;
    x_step (k,), stepped (k,): the step's at typical stiffness, both empty where there is no step.
    """

    x: Array
    bound: Array
    closed: Array
    x_step: Array
    stepped: Array


@record(eq=False)
class PressedSlip:
    """Partial slip under one shear [N].

    gross_slip_load [N]; safety: that over the shear, infinite without shear; size [mm] and peak_pressure [MPa] of the contact;
    edge_stress [MPa]: the first that a route tells; both routes, empty with a `reason` where the load slips wholly or is nothing;
    beyond: why the contact lies out of the range of both routes, '' where it does not;
    parts: the calculation, by titles.
    """

    shear: float
    gross_slip_load: float
    safety: float
    size: float
    peak_pressure: float
    edge_stress: float | None
    routes: tuple[Route, ...]
    curves: Curves
    notes: tuple[str, ...]
    reason: str
    beyond: str
    parts: Mapping[str, Trace]

    def difference(self, key: str) -> float | None:
        """By which part of the closed form's number the step's differs from it; None where one of them does not tell."""
        if len(self.routes) < 2:
            return None
        closed, stepped = (getattr(route, key) for route in self.routes)
        return (stepped - closed) / closed if closed and stepped is not None else None
