"""What the table of a run tells: the records of an examination and its words."""

from __future__ import annotations

import numpy as np

from slip.base.notes import Note
from slip.base.records import record
from slip.stiffness.run_own import OwnStiffness
from slip.stiffness.run_steps import Cycles, Hold
from slip.stiffness.run_table import RunTable

Array = np.ndarray
MOTIONS = {"total": "elastic and true slip together", "slip": "true slip alone", "path": "true slip, its way added up"}
STICK, SLIPS, OPEN = 0, 1, 2
POINT = ("stick", "slips", "open")
FACE = ("stick", "partial slip", "gross slip", "open")
PARTS = (0.5, 0.9, 0.99)  # of the closed area, for which the true slip is given


@record(eq=False)
class Steps:
    """Of each step (S,): contact force and shear [N], part of the contact force that slips, regime of the face (one of FACE), largest
    true slip [mm], NaN where it is not known."""

    force: Array
    shear: Array
    share: Array
    face: tuple[str, ...]
    slip: Array


@record
class Peak:
    """A largest value [mm], the point and the step that have it; step -1 for a value over all steps."""

    value: float
    point: int
    step: int


@record(eq=False)
class Slips:
    """True slip, elastic slip taken out. vector [mm] (2, S, n). largest: at a point and step. parts: of the area that is closed there,
    the slip that PARTS of it do not exceed at that step [mm].

    amplitude: half the largest distance between steps; path: way from step to step; None for one step. span: steps that both count
    over, those of the last cycle where one closes.
    """

    vector: Array
    largest: Peak
    parts: tuple[float, ...]
    amplitude: Peak | None
    path: Peak | None
    span: tuple[int, int]


@record(eq=False)
class Examined:
    """What the table of a run tells. clamp (low, high) [N]; off: how far the contact force of the step that is furthest is from the
    nearest end, over that end. motion: one of MOTIONS; turned: whether tractions pointed against the motion and were turned round.

    k_t: declared [N/mm^3] or None; used: "declared", "of the run" or '' where none took part; own: the run's own, None where the
    sticking points do not tell. state (S, n): STICK, SLIPS, OPEN. at_spring: points at mu p whose motion is the elastic slip alone;
    moved: points below mu p with true slip; both (S, n). slips: None where the true slip is not known. energy (S - 1, n) [mJ] by mean
    tractions, energy_at_limit with mu p over all of the slip, which coarse steps do not blur; None likewise and for one step.
    """

    table: RunTable
    clamp: tuple[float, float]
    off: float
    off_step: int
    friction: float
    tolerance: float
    motion: str
    turned: bool
    k_t: float | None
    used: str
    own: OwnStiffness | None
    beyond: float
    state: Array
    at_spring: Array
    moved: Array
    steps: Steps
    slips: Slips | None
    energy: Array | None
    energy_at_limit: Array | None
    holds: tuple[Hold, ...]
    cycles: Cycles | None
    notes: tuple[Note, ...]

    @property
    def worst(self) -> int:
        """The step at which most of the contact force slips; of like ones the last."""
        share = self.steps.share
        return int(np.flatnonzero(share >= share.max() - 1e-12)[-1])

    @property
    def overall(self) -> Array:
        """State of each point (n,) over all steps: slips where it does at one, open where it always is."""
        slipped, closed = (self.state == SLIPS).any(axis=0), (self.state != OPEN).any(axis=0)
        return np.where(slipped, SLIPS, np.where(closed, STICK, OPEN))
