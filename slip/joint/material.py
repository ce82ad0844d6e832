"""Materials of plates and bolts."""

from __future__ import annotations

from slip.base.records import record


@record
class Material:
    """Elastic constants of a material; `None` where neither the file nor the table gives a value.

    youngs_modulus [MPa], poissons_ratio [-], expansion [1/K], yield_strength [MPa], density [t/mm^3].
    """

    name: str
    youngs_modulus: float
    poissons_ratio: float
    expansion: float | None
    yield_strength: float | None
    density: float | None
    source: str
    basis: str
