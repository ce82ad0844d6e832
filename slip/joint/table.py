"""How a table of many load cases is read."""

from __future__ import annotations

from collections.abc import Mapping

from slip.base.records import record
from slip.base.units import System


@record(eq=False)
class TableForm:
    """What the file says of its tables; what it leaves open is detected.

    units: of columns whose header has none, or None. columns: name in the table of one of our columns. axes: for x, y and the normal
    of the joint the axis of the table, 0 to 2, and its sign. decimal: "." or ",", '' where it is detected.
    """

    units: System | None
    columns: Mapping[str, str]
    axes: tuple[tuple[int, float], ...]
    decimal: str


OWN_AXES = ((0, 1.0), (1, 1.0), (2, 1.0))
