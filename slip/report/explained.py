"""An explanation for a person at a terminal: every number as a block, then what was assumed, the warnings and the citations."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence

from slip.assess import Assessment, FaceAssessment, PressedAssessment
from slip.base.formulas import citation
from slip.report.checked import WIDTH
from slip.report.equations import Explanation
from slip.report.partial import remarks
from slip.report.terminal import end_of, verdict_lines
from slip.report.words import cut, plain, wrapped


def explain_text(explanation: Explanation, assessment: Assessment) -> str:
    """The lines of an explanation as blocks, each with formula, numbers put in, result, source key and basis; citations last."""
    place = ", ".join([plain(explanation.case), *end_of(assessment, explanation.case, explanation.end)])
    head = [f"Every number of {place}, bolt {plain(explanation.bolt)}, in N, mm, MPa", *verdict_lines(assessment)]
    index = [case.name for case in assessment.joint.cases].index(explanation.case)
    return told(head, explanation, assessment, remarks(assessment.partial.of(index, explanation.end)))


def told(
    head: Sequence[str],
    explanation: Explanation,
    assessment: Assessment | PressedAssessment | FaceAssessment,
    partial: Sequence[str] = (),
) -> str:
    """The first lines, then every number as a block, what is said of partial slip, assumptions, warnings and citations."""
    lines, system = [cut(line, WIDTH) for line in head], assessment.joint.system
    if system.name != "N mm":
        units = "1 lbf = 4.4482216 N, 1 in = 25.4 mm, 1 psi = 0.0068947573 MPa"
        lines += wrapped(f"The file is in {system.name}: {units}.", WIDTH)
    group = ""
    for line in explanation.lines:
        if line.group != group:
            group = line.group
            lines += ["", plain(group.upper(), WIDTH), ""]
        lines += wrapped(f"{plain(line.name, 120)} [{plain(line.source, 60)}; {line.basis}]", WIDTH)
        if line.formula != "value":
            lines += _formula(f"{line.symbol} = {line.formula}")
            lines += _formula("= " + line.put_in)
            lines.append(f"    = {line.result:.8g} {line.unit}".rstrip())
        else:
            lines.append(f"    {line.symbol} = {line.result:.8g} {line.unit}".rstrip())
        if line.valid:
            lines += wrapped(f"valid for: {line.valid}", WIDTH, "    ", "      ")
    if partial:
        lines += ["", "ON PARTIAL SLIP", ""]
        for said in partial:
            lines += wrapped(plain(said, 400), WIDTH, "", "    ")
    for title, notes in (("ASSUMED", assessment.assumptions), ("WARNINGS", assessment.warnings)):
        if notes:
            lines += ["", title, ""]
            for note in notes:
                key = f" [{note.key}]" if note.key else ""
                lines += wrapped(f"{plain(note.text, 400)}{key}", WIDTH, "", "    ")
    lines += ["", "SOURCES", ""]
    for key in dict.fromkeys(key for line in explanation.lines for key in line.source.split(";")):
        if said := citation(key):
            lines += wrapped(f"{key}: {said}", WIDTH, "", "    ")
    return "\n".join(lines) + "\n"


def _formula(text: str) -> list[str]:
    """A formula in lines broken at spaces; nothing of it may be cut."""
    return textwrap.wrap(
        text, WIDTH, initial_indent="    ", subsequent_indent="      ", break_long_words=False, break_on_hyphens=False
    )
