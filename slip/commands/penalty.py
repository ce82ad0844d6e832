"""`slip penalty`: which contact stiffness a finite-element model should have."""

from __future__ import annotations

import argparse
import os
from pathlib import Path
from typing import TYPE_CHECKING

from slip.base.errors import InputError, Problems
from slip.base.paths import refuse_overwriting
from slip.base.progress import Progress
from slip.commands.outcome import Outcome, report_options, units, write

if TYPE_CHECKING:
    from slip.stiffness.run_found import Examined
    from slip.stiffness.stage import Penalty


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("--sweep", metavar="OUT.csv", help="write the error of every stiffness that was tried")
    parser.add_argument(
        "--interface", metavar="TABLE", help="what a run of the model found on the contact, point by point"
    )
    motions = ("total", "slip", "path")
    parser.add_argument(
        "--motion", choices=motions, help="what gx, gy of that table are: elastic and true, true slip, its path"
    )
    parser.add_argument(
        "--per-point", metavar="OUT", help="write the stiffness of each of its points: OUT.csv or OUT.parquet"
    )
    parser.add_argument("--map", metavar="OUT.svg", help="draw the points of the table: which stick, which slip")
    parser.add_argument("--json", action="store_true", help="the result for programs, on standard output")
    report_options(parser)


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """The answer on the screen or as JSON; the sweep and a page where they are asked for."""
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
    from slip.report.penalty import penalty_text
    from slip.report.penalty_result import penalty_json, sweep_csv
    from slip.stiffness.stage import penalty

    outputs = {"--sweep": asked.sweep, "--report": asked.report, "--per-point": asked.per_point, "--map": asked.map}
    inputs = [Path(p) for p in (asked.file, asked.interface) if p]
    refuse_overwriting({name: Path(p) if p else None for name, p in outputs.items()}, inputs)
    if not asked.interface and (given := [n for n in ("motion", "per_point", "map") if getattr(asked, n)]):
        option = f"--{given[0].replace('_', '-')}"
        remedy = "add --interface TABLE"
        raise Problems([InputError("missing-key", option, "no --interface", "the table that it belongs to", remedy)])
    found = penalty(asked.file, progress)
    ran = examined(found, asked) if asked.interface else None
    if asked.sweep:
        write(Path(asked.sweep), sweep_csv(found, units(asked)), inputs)
    if asked.report:
        from slip.report.penalty_page import penalty_page

        write(Path(asked.report), penalty_page(found, units(asked), ran), inputs)
    if asked.json:
        return Outcome(penalty_json(found, units(asked), ran))
    return Outcome(penalty_text(found, units(asked), ran))


def examined(found: Penalty, asked: argparse.Namespace) -> Examined:
    """What the run's table says; the files that are asked of it are written."""
    from slip.stiffness.examined import examine
    from slip.stiffness.run_points import per_point, write_points
    from slip.stiffness.run_table import read_run

    form = getattr(found.joint, "table", None)  # a face of known pressure has none
    table = read_run(asked.interface, units=form.units if form else None, decimal=form.decimal if form else "")
    low, high = (float(v) for v in found.subject.clamps.sum(axis=1))
    system = units(asked) or found.joint.system
    ran = examine(
        table,
        clamp=(low, high),
        friction=found.elements.friction or found.subject.friction,
        k_t=found.audit.k if found.audit else None,
        motion=asked.motion,
        system=system,
    )
    if asked.per_point:
        if found.subject.stiffness is None:
            remedy = "add roughness of both faces, or tangential_stiffness"
            raise Problems(
                [InputError("missing-key", "--per-point", "nothing of the face", "what it is", remedy, asked.file)]
            )
        write_points(asked.per_point, per_point(table, found.subject.stiffness, system), table)
    if asked.map:
        from slip.report.figures import svg
        from slip.report.run_figure import run_figure

        write(Path(asked.map), svg(run_figure(ran, system)).decode("utf-8"), [Path(asked.file), Path(asked.interface)])
    return ran
