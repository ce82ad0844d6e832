"""A march through many steps of motion, load and clamp, one state after the other."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from itertools import repeat

import numpy as np
from numpy.typing import ArrayLike

from slip.friction.compliance.protocol import Compliance
from slip.friction.march.face import Face
from slip.friction.march.step import State, Step, step


def march(
    compliance: Compliance,
    bounds: ArrayLike | Iterable[ArrayLike],
    face: Face,
    *,
    motions: Iterable[ArrayLike] | None = None,
    loads: Iterable[ArrayLike] | None = None,
    state: State | None = None,
    tol: float = 1e-6,
    progress: Callable[[int, Step], None] | None = None,
) -> Iterator[Step]:
    """Steps along `motions` or `loads`, each from where the last one ended; only the current state is kept.

    bounds: one bound for all steps, a number or an array of the compliance's shape [MPa]; or one of these for each
    step, in a list, generator or array with the steps on its first axis.
    motions or loads, one of them: at the end of each step, as `step` takes them. They may go on forever.
    state: where the march starts; None for a face at rest under the first bound. tol: as in `step`.
    progress: called after each step with its number, from 1 on, and the step.

    Friction acts at the end of each step: a cycle wants some forty steps for three digits of its energy, and steps that
    end where load and clamp turn.
    Raises what `step` raises, and ValueError where the bounds run out before the steps do.
    """
    each = _each(bounds, compliance)
    for number, (motion, load) in enumerate(_targets(motions, loads), 1):
        bound = next(each, None)
        if bound is None:
            raise ValueError(f"the bounds ran out before step {number}")
        made = step(compliance, bound, face, state, motion=motion, load=load, tol=tol)
        state = made.state
        if progress is not None:
            progress(number, made)
        yield made


def _targets(
    motions: Iterable[ArrayLike] | None, loads: Iterable[ArrayLike] | None
) -> Iterator[tuple[ArrayLike | None, ArrayLike | None]]:
    """Motion and load of each step; one of the two is None."""
    if motions is not None and loads is None:
        return ((motion, None) for motion in motions)
    if loads is not None and motions is None:
        return ((None, load) for load in loads)
    raise ValueError("give either motions or loads")


def _each(bounds: ArrayLike | Iterable[ArrayLike], compliance: Compliance) -> Iterator[ArrayLike]:
    """The bound of each step."""
    if isinstance(bounds, (int, float)) or (isinstance(bounds, np.ndarray) and bounds.shape in ((), compliance.shape)):
        return repeat(bounds)
    return iter(bounds)  # type: ignore[arg-type]
