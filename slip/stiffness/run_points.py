"""The stiffness of the face's law at every point of a run, and over its pressure beside what the run itself tells."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import polars as pl

from slip.base.errors import InputError, Problems
from slip.base.records import record
from slip.base.units import System
from slip.cases.write import Output, Style, encoded, style
from slip.friction.faces import FaceStiffness
from slip.friction.partial import HIGH, LOW, TYPICAL
from slip.stiffness.run_found import Examined
from slip.stiffness.run_own import EDGES, quantiles
from slip.stiffness.run_table import RunTable

Array = np.ndarray
BINS = 8
READINGS = ("low", "typical", "high")


@record
class Bin:
    """A range of pressure: its ends and the pressure weighted with itself [MPa], points, part of the contact force.

    law, own (low, typical, high) [N/mm^3]: of the face's law at that pressure, of `pairs` sticking points of the run; None where not
    known, and a high end of inf where points do not move.
    """

    p_low: float
    p_high: float
    p: float
    points: int
    share: float
    law: tuple[float, float, float] | None
    own: tuple[float, float, float] | None
    pairs: int


def per_point(table: RunTable, face: FaceStiffness, system: System, step: int = -1) -> pl.DataFrame:
    """k_t of the face's law, low, typical, high, at each point under its pressure at a step, in the system's units."""
    length, pressure, kind = system.unit("length"), system.unit("pressure"), "stiffness per area"
    p = table.p[step]
    columns = {"id": list(table.ids), f"x[{length}]": table.x * system.out(1.0, "length")}
    columns[f"y[{length}]"] = table.y * system.out(1.0, "length")
    if table.z is not None:
        columns[f"z[{length}]"] = table.z * system.out(1.0, "length")
    columns[f"p[{pressure}]"] = p * system.out(1.0, "pressure")
    for name, reading in zip(READINGS, (LOW, TYPICAL, HIGH), strict=True):
        columns[f"k_t_{name}[{system.unit(kind)}]"] = face.at(p, reading) * system.out(1.0, kind)
    return pl.DataFrame(columns)


def write_points(out: str | Path, points: pl.DataFrame, table: RunTable) -> None:
    """Write the table of `per_point`, or another; a CSV like the one that was read, or Parquet, by the ending.

    Raises Problems for another ending, for a path that cannot be written, and for the table that was read.
    """
    path = Path(out)
    how = style(path, table.separator, table.comma)
    if path.resolve() == Path(table.file).resolve():
        remedy = "choose another name for the result"
        raise Problems([InputError("report-over-input", "", "an input file", "another path", remedy, str(path))])
    _written(path, points, how)


def write_refused(out: str | Path, table: RunTable) -> bool:
    """Write the rows that are not used as CSV: line, id, step, reason, text. False, and nothing written, where there are none."""
    if not table.refused.height:
        return False
    _written(Path(out), table.refused, Style("csv"))
    return True


def _written(path: Path, rows: pl.DataFrame, how: Style) -> None:
    output = Output(path, how)
    output.begin()
    output.add(encoded(rows, how, header=True))
    output.finish()


def over_pressure(found: Examined, face: FaceStiffness | None, bins: int = BINS, step: int = -1) -> tuple[Bin, ...]:
    """k_t over the pressure of a step, in ranges of one width from 0 to the peak; ranges without points are left out."""
    p, area = found.table.p[step], found.table.area[step]
    edges = np.linspace(0.0, float(p.max()), bins + 1)
    force = p * area
    made = []
    for low, high in zip(edges, edges[1:], strict=False):
        here = (p > low) & (p <= high)
        if here.any():
            weighted = float((force * p)[here].sum() / force[here].sum())
            share = float(force[here].sum() / force.sum())
            own, pairs = _own(found, float(low), float(high))
            made.append(
                Bin(float(low), float(high), weighted, int(here.sum()), share, _law(face, weighted), own, pairs)
            )
    return tuple(made)


def _law(face: FaceStiffness | None, p: float) -> tuple[float, float, float] | None:
    if face is None:
        return None
    low, typical, high = (float(face.at(p, reading)) for reading in (LOW, TYPICAL, HIGH))
    return low, typical, high


def _own(found: Examined, low: float, high: float) -> tuple[tuple[float, float, float] | None, int]:
    """What the run's sticking points of a range of pressure tell, and how many do."""
    own = found.own
    if own is None:
        return None, 0
    here = (own.p_of > low) & (own.p_of <= high) & (own.k_of > 0)
    if not here.any():
        return None, 0
    bottom, middle, top = quantiles(own.k_of[here], own.weight[here], EDGES)
    return (bottom, middle, top), int(here.sum())


def bins_table(bins: tuple[Bin, ...], system: System) -> pl.DataFrame:
    """The curve over pressure as a table in the system's units; null for what is not known."""
    pressure, kind = system.out(1.0, "pressure"), "stiffness per area"
    unit, k = system.unit("pressure"), system.out(1.0, kind)
    columns: dict[str, list[float | int | None]] = {
        f"p_low[{unit}]": [b.p_low * pressure for b in bins],
        f"p_high[{unit}]": [b.p_high * pressure for b in bins],
        f"p[{unit}]": [b.p * pressure for b in bins],
        "points": [b.points for b in bins],
        "share": [b.share for b in bins],
    }
    for whose, each in (("law", [b.law for b in bins]), ("run", [b.own for b in bins])):
        for i, name in enumerate(READINGS):
            columns[f"k_t_{whose}_{name}[{system.unit(kind)}]"] = [None if v is None else v[i] * k for v in each]
    columns["run_points"] = [b.pairs for b in bins]
    return pl.DataFrame(columns, schema_overrides={name: pl.Float64 for name in columns if name.startswith("k_t")})
