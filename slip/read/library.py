"""Look-ups in the data tables by the words that a person types. Each returns a record or None; the caller words the fault."""

from __future__ import annotations

import re
from collections.abc import Iterable

from slip.base.tables import Row, find, number, table
from slip.joint.bolt import Grade, Thread
from slip.joint.material import Material
from slip.joint.tightening import Scatter

METRIC = re.compile(r"m\s*([0-9]{1,3}(?:\.[0-9]{1,3})?)(?:x([0-9]{1,2}(?:\.[0-9]{1,3})?))?")
PITCH_RATIO = (0.02, 0.26)  # pitch over diameter: M64x1.5 and M1.6x0.35 lie inside


def thread(designation: str) -> Thread | None:
    """Thread of the table by designation ("M16", "M16x1.5", "3/4-10 UNC", also "3/4-10"), or an ISO metric thread of another pitch."""
    wanted = re.sub(r"\s*[x×]\s*", "x", " ".join(designation.casefold().split()))
    for row in table("threads"):
        names = {row["designation"].casefold(), row["designation"].rsplit(" ", 1)[0].casefold()}
        if row["system"] == "metric" and row["series"] == "coarse":
            names.add(f"{row['designation'].casefold()}x{number(row, 'pitch[mm]'):g}")
        if wanted in names:
            unified = row["system"] == "unified"
            return Thread(
                row["designation"],
                number(row, "diameter[mm]"),
                number(row, "pitch[mm]"),
                unified,
                row["source"],
                row["basis"],
            )
    match = METRIC.fullmatch(wanted)
    if match and match.group(2):
        diameter, pitch = (float(text) for text in match.groups())
        if PITCH_RATIO[0] * diameter <= pitch <= PITCH_RATIO[1] * diameter and pitch > 0:
            return Thread(f"M{diameter:g}x{pitch:g}", diameter, pitch, False, "iso724", "memory")
    return None


def thread_near(designation: str) -> str:
    """Designation of the ISO coarse thread of nearest diameter, or '' when no metric diameter is named."""
    match = METRIC.match(designation.strip().casefold())
    if match is None:
        return ""
    coarse = [row for row in table("threads") if row["series"] == "coarse"]
    return min(coarse, key=lambda row: abs(number(row, "diameter[mm]") - float(match.group(1))))["designation"]


def grade(name: str, diameter: float) -> Grade | None:
    """Grade of the table by name, for a thread diameter in mm."""
    for row in table("grades"):
        if row["name"].casefold() == name.strip().casefold() and _between(
            row, "diameter_from[mm]", "diameter_to[mm]", diameter
        ):
            return Grade(
                row["name"],
                number(row, "yield_strength[MPa]"),
                number(row, "tensile_strength[MPa]"),
                number(row, "tensile_nominal[MPa]"),
                row["source"],
                row["basis"],
            )
    return None


def _between(row: Row, low: str, high: str, value: float) -> bool:
    return (not row[low] or number(row, low) <= value + 1e-9) and (not row[high] or value <= number(row, high) + 1e-9)


def bearing_diameter(head: str, thread: Thread) -> Row | None:
    """Row of the bearing face of a head kind for a thread."""
    return _of_thread((row for row in table("heads") if row["head"] == head), thread)


def clearance_hole(thread: Thread) -> Row | None:
    """Row of the clearance hole of medium (normal) fit for a thread."""
    return _of_thread((row for row in table("holes") if row["fit"] in ("medium", "normal")), thread)


def _of_thread(rows: Iterable[Row], thread: Thread) -> Row | None:
    """First row of the thread's system and diameter; a #6 is not an M3.5."""
    system = "unified" if thread.unified else "metric"
    own = (row for row in rows if row["system"] == system)
    return next((row for row in own if abs(number(row, "diameter[mm]") - thread.diameter) < 0.001), None)


def material(name: str) -> Material | None:
    """Material of the table by its name or an alias."""
    wanted = name.strip().casefold()
    for row in table("materials"):
        names = [row["name"], *row["aliases"].split(";")]
        if wanted in (n.strip().casefold() for n in names if n.strip()):
            return Material(
                row["name"],
                number(row, "youngs_typical[MPa]"),
                number(row, "poissons_ratio"),
                number(row, "expansion[1/K]"),
                number(row, "yield_low[MPa]") if row["yield_low[MPa]"] else None,
                number(row, "density[kg/m3]") * 1e-12 if row["density[kg/m3]"] else None,
                row["source"],
                row["basis"],
            )
    return None


def friction(pair: str, preparation: str, lubrication: str) -> Row | None:
    """Row of the interface friction of a pair, in either order of its two words; of a preparation that no row of the pair
    names, the row for any preparation."""

    def words(text: str) -> list[str]:
        return sorted(part.strip().casefold() for part in text.split("/"))

    rows = [row for row in table("friction") if words(row["pair"]) == words(pair) and row["lubrication"] == lubrication]
    wanted = preparation.strip().casefold()
    named = {row["preparation"].casefold(): row for row in rows}
    return named.get(wanted) or named.get("")


def scatter(method: str) -> Scatter | None:
    """Scatter of a tightening method: the upper end of its row."""
    row = find("tightening", "method", method)
    return _scatter(row, True) if row else None


def worst_scatter() -> Scatter:
    """The largest scatter of the table, for a torque without a method."""
    return _scatter(max(table("tightening"), key=lambda row: number(row, "high")), False)


def _scatter(row: Row, given: bool) -> Scatter:
    return Scatter(number(row, "high"), row["method"], row["source"], row["basis"], given)


def choices(name: str, column: str) -> list[str]:
    """All entries of a column of a table, each once, in file order."""
    return list(dict.fromkeys(row[column] for row in table(name)))
