"""Checks of a face of known pressure: gross slip of the whole, the force alone, and the file's own limit of true slip."""

from __future__ import annotations

from collections.abc import Mapping

from slip.friction.known_pressure import FaceSlip
from slip.friction.partial import NO_SHEAR
from slip.joint.contact import PressedFace
from slip.verdict.checks import Check
from slip.verdict.gross_slip import LONE
from slip.verdict.stage import Verdict, conclude, judge_true_slip


def face_verdict(face: PressedFace, slips: Mapping[tuple[int, str], FaceSlip]) -> Verdict:
    """All checks of a face and what they add up to. The face slips as a whole: the group factor decides."""
    checks = []
    for (i, end), found in slips.items():
        name, alternating = face.cases[i].name, face.cases[i].alternating
        least = face.required.alternating if alternating else face.required.static
        for what, factor, decides in (
            ("gross_slip.group", float(found.group.factor), True),
            ("gross_slip.force_only", found.force_factor, False),
        ):
            reason = NO_SHEAR if not found.sliding else "" if decides else LONE
            holds, reserve = factor >= least, factor / least
            checks.append(Check(what, name, end, "", factor, factor, least, reserve, holds, decides, reason))
        if face.required.true_slip is not None:
            most = face.required.true_slip
            checks.append(judge_true_slip(name, end, most, found.partial, found.reason))
    return conclude(checks, (), {})
