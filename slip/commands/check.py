"""`slip check`: does the joint slip?"""

from __future__ import annotations

import argparse
import gc
import os
from pathlib import Path
from typing import TYPE_CHECKING

from slip.base.progress import Progress
from slip.commands.outcome import Outcome, report_options, units, write

if TYPE_CHECKING:
    from slip.assess import Assessment, FaceAssessment, PressedAssessment


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("--json", action="store_true", help="the result for programs, on standard output")
    report_options(parser)


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """The assessment of a joint file, on the screen or as JSON, and on a page where one is asked for."""
    assessment = assessed(asked.file, progress)
    if assessment.pressed == "face":
        return _face(assessment, asked)
    if assessment.pressed:
        return _pressed(assessment, asked)
    if asked.report:
        from slip.report.page import page

        write(Path(asked.report), page(assessment, units(asked)), [Path(asked.file)])
    code = assessment.verdict.exit_code
    if asked.json:
        from slip.report.machine import text

        return Outcome(text(assessment, units(asked)), code)
    from slip.report.terminal import check_text

    return Outcome(check_text(assessment, units(asked)), code)


def assessed(path: str, progress: Progress | None = None) -> Assessment | PressedAssessment | FaceAssessment:
    """The assessment of a joint file. Nothing is garbage while the modules load; looking for it costs a twentieth of the start.

    All matrices here are small: threads of the linear algebra library only cost time to start, a fifth of a check.
    """
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
    collecting = gc.isenabled()
    gc.disable()
    try:
        from slip.assess import assess
    finally:
        if collecting:
            gc.enable()
    return assess(path, progress)


def _pressed(assessment: PressedAssessment, asked: argparse.Namespace) -> Outcome:
    if asked.report:
        from slip.report.pressed_page import pressed_page

        write(Path(asked.report), pressed_page(assessment, units(asked)), [Path(asked.file)])
    from slip.report.pressed import pressed_json, pressed_text

    said = pressed_json if asked.json else pressed_text
    return Outcome(said(assessment, units(asked)), assessment.verdict.exit_code)


def _face(assessment: FaceAssessment, asked: argparse.Namespace) -> Outcome:
    if asked.report:
        from slip.report.face_page import face_page

        write(Path(asked.report), face_page(assessment, units(asked)), [Path(asked.file)])
    from slip.report.face import face_json, face_text

    said = face_json if asked.json else face_text
    return Outcome(said(assessment, units(asked)), assessment.verdict.exit_code)
