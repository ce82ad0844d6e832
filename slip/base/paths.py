"""Files that a command writes: none may be one of its inputs, no two may be one."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path

from slip.base.errors import InputError, Problems


def refuse_overwriting(written: dict[str, Path | None], inputs: Iterable[Path | None]) -> None:
    """Raise Problems where a file that is written is an input, or where two that are written are one; keys: the options."""
    taken = {path.resolve(): "an input file" for path in inputs if path is not None}
    for option, path in written.items():
        if path is None:
            continue
        if (found := taken.get(path.resolve())) is not None:
            remedy = "choose another name"
            raise Problems([InputError("report-over-input", option, found, "a path of its own", remedy, str(path))])
        taken[path.resolve()] = f"the file of {option}"
