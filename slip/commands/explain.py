"""`slip explain`: every number with formula, numbers put in, source and basis."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING

from slip.base.progress import Progress
from slip.commands.check import assessed
from slip.commands.outcome import Outcome

if TYPE_CHECKING:
    from slip.assess import Assessment, FaceAssessment, PressedAssessment


def options(parser: argparse.ArgumentParser) -> None:
    """What the command takes."""
    parser.add_argument("file", metavar="FILE")
    parser.add_argument("case", metavar="CASE", nargs="?", help="default: the governing case")
    parser.add_argument("bolt", metavar="BOLT", nargs="?", help="default: the governing bolt")
    parser.add_argument("--table", metavar="TABLE", help="the case stands in this table of load cases")
    parser.add_argument("--json", action="store_true", help="the lines for programs, on standard output")


def run(asked: argparse.Namespace, progress: Progress | None) -> Outcome:
    """The lines behind one case and bolt."""
    assessment = _in_table(asked) if asked.table else assessed(asked.file, progress)
    if assessment.pressed == "face":
        return _face(assessment, asked)
    if assessment.pressed:
        return _pressed(assessment, asked)
    from slip.report.equations import explain

    explanation = explain(assessment, asked.case, asked.bolt)
    if asked.json:
        from slip.report.machine import explanation_text

        return Outcome(explanation_text(explanation))
    from slip.report.explained import explain_text

    return Outcome(explain_text(explanation, assessment))


def _in_table(asked: argparse.Namespace) -> Assessment:
    """One case of a table."""
    from slip.cases.single import assess_case

    return assess_case(asked.file, asked.table, asked.case)


def _pressed(assessment: PressedAssessment, asked: argparse.Namespace) -> Outcome:
    from slip.report.machine import explanation_text
    from slip.report.pressed_lines import explain_pressed, explain_pressed_text

    explanation = explain_pressed(assessment, asked.case, asked.bolt)
    return Outcome(explanation_text(explanation) if asked.json else explain_pressed_text(explanation, assessment))


def _face(assessment: FaceAssessment, asked: argparse.Namespace) -> Outcome:
    from slip.report.face_lines import explain_face, explain_face_text
    from slip.report.machine import explanation_text

    explanation = explain_face(assessment, asked.case, asked.bolt)
    return Outcome(explanation_text(explanation) if asked.json else explain_face_text(explanation, assessment))
