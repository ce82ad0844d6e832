"""Load cases: what acts, where, and between which ends."""

from __future__ import annotations

from slip.base.records import record

Vector2 = tuple[float, float]
Vector3 = tuple[float, float, float]


@record
class Load:
    """Forces [N] on the upper plate and couples [N mm]: shear (x, y), axial (tension positive), moment (x, y, normal)."""

    shear: Vector2
    axial: float
    moment: Vector3

    def scaled(self, factor: float) -> Load:
        """All components times `factor`; adding zero keeps -0 out of results."""
        vx, vy, f, mx, my, mz = (factor * value + 0.0 for value in (*self.shear, self.axial, *self.moment))
        return Load((vx, vy), f, (mx, my, mz))


@record
class Case:
    """One load case. `ends` holds ("given", Load) and for an alternating case ("other", Load).

    at: where shear and axial act, (x, y) in mm, None for the centroid; height: z above the sliding face in mm, None when not given.
    unsigned: the components have neither sign nor phase. thermal: a loss [N] that overrides the file's, or None.
    """

    name: str
    each_bolt: bool
    ends: tuple[tuple[str, Load], ...]
    at: Vector2 | None
    height: float | None
    alternating: bool
    unsigned: bool
    cycles: float | None
    thermal: float | None

    @property
    def pulls(self) -> bool:
        """Whether any end has an axial force, a tilting moment, or a shear with a height that overturns."""
        return any(load.axial or load.moment[0] or load.moment[1] or self.height for _, load in self.ends)
