"""What a reader of a table's result must know: values that look like another meaning, loads that do not add up, a file that grew."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from slip.base.notes import Note
from slip.cases.form import Form
from slip.cases.judge import Prepared
from slip.cases.summary import Summary
from slip.clamp.stage import warnings

CLOSE = 0.3  # axial values whose mean lies this near to the preload, in parts of it, and that spread no more, may hold it (practice)
UNBALANCED = 0.02  # part of the load by which bolt forces may miss it without a warning


def hints(ready: Prepared, form: Form, summary: Summary, grown: int, loads: bool) -> Iterator[Note]:
    """Warnings of a finished run."""
    yield from warnings(ready.joint, ready.assembly, summary.highest)
    yield from _axial(ready, summary)
    share, case = summary.balance
    if share > UNBALANCED:
        text = f"bolt forces miss the joint's load by {share:.1%} in {case}, the worst of {summary.balanced} cases compared"
        yield Note("table-unbalanced", text, "table")
    if loads and not summary.balanced:
        yield Note(
            "table-unbalanced", "no case of the loads has bolt forces that could be added up against it", "table"
        )
    if summary.refused:
        text = f"rows refused: {summary.refused}; their cases are not judged"
        yield Note("table-rows-refused", text, "table")
    if grown:
        text = f"the table changed by {grown} bytes while it was read; what came after is not judged"
        yield Note("table-grown", text, "table")


def _axial(ready: Prepared, summary: Summary) -> Iterator[Note]:
    """Axial values that look as if they had another meaning than the file says."""
    joint = ready.joint
    count, total, squares = summary.axial
    if not count:
        return
    mean = total / count
    spread = float(np.sqrt(max(squares / count - mean**2, 0.0)))
    preload, say = float(ready.assembly.nominal.mean()), joint.system.say
    if joint.axial.meaning == "bolt force":
        held = joint.axial.model_preload or preload
        if mean < (1 - CLOSE) * held:
            text = (
                f"axial values have a mean of {say(mean, 'force')}, far below the model's preload of {say(held, 'force')}: "
                'if they do not hold it, write meaning = "bolt force change" or "external"'
            )
            yield Note("axial-below-preload", text, "axial.meaning")
    elif abs(mean - preload) < CLOSE * preload and spread < CLOSE * preload:
        text = (
            f"axial values lie round the preload (mean {say(mean, 'force')}): if they are bolt forces that hold it, "
            'write meaning = "bolt force"'
        )
        yield Note("axial-near-preload", text, "axial.meaning")
