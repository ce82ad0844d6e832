"""The pattern's picture on the page, with the words beside it and the words in its place."""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.assess import Assessment
from slip.base.units import System
from slip.report import figures
from slip.report.rows import NAME
from slip.report.words import plain
from slip.verdict.gross_slip import End


def picture(assessment: Assessment, end: End, system: System) -> dict[str, Any]:
    """The pattern as two images, for light and dark, with the words beside it and the words in its place.

    Of an unsigned case the signs are those that give the least factor per bolt.
    """
    light, dark = (_image(assessment, end, system, ink) for ink in (figures.LIGHT, figures.DARK))
    names, shear = assessment.joint.pattern.names, assessment.slip.shear[end.state]
    longest = int(np.argmax(shear))
    vx, vy, mz = (float(x) + 0.0 for x in assessment.clamp.states.load[end.state])
    said = [
        ("largest shear", f"{system.say(float(shear[longest]), 'force')} on bolt {plain(names[longest], NAME)}"),
        ("resultant, x and y", f"{system.say(vx, 'force')}, {system.say(vy, 'force')}"),
        ("moment at the centroid", f"{system.say(mz, 'moment')} about the normal"),
        ("group limit, clamp held", _centre(assessment, end, system)),
    ]
    alt = (
        f"Plan of the bolts, {len(names)} in number, with an arrow for the shear on each. "
        f"The least factor has bolt {plain(names[end.bolt], NAME)}."
    )
    return {"light": light, "dark": dark, "alt": alt, "said": said}


def _image(assessment: Assessment, end: End, system: System, ink: figures.Ink) -> str:
    return figures.image(figures.pattern_figure(assessment, end, system, ink), ink)


def _centre(assessment: Assessment, end: End, system: System) -> str:
    if not assessment.slip.sliding[end.group_state]:
        return "no shear"
    if assessment.slip.group.factor[end.group_state] == 0:
        return "the clamp that is left cannot hold any part of the load"
    centre = figures.group_centre(assessment, end)
    if centre is None:
        return "all points slip in one direction: there is no instant centre"
    place = ", ".join(f"{round(system.out(float(x), 'length'), 6) + 0.0:.6g}" for x in centre)
    outside = "" if figures.in_view(assessment, end) else ", outside the picture"
    signs = "" if end.group_state == end.state else ", for another combination of signs than the arrows"
    return f"the plates turn about ({place}) {system.length}{outside}{signs}"
