"""The energy of a steady cycle between both ends of a case, on any model of a face."""

from __future__ import annotations

import numpy as np

from slip.friction.march.load import SlipsWholly
from slip.friction.march.step import State, step
from slip.friction.model import Built, Model

Array = np.ndarray
End = tuple[Array, Array]  # shear and moment (3,) [N, N mm], clamps (n,) [N]
TURNS = 20  # increments between the ends of a case whose clamp changes; 80 change the energy by less than 3 %
LAPS, STEADY = 12, 0.01  # cycles at most until two lose the same within this part
ON_THE_WAY = "the face slips wholly on the way to the other end"
UNSTEADY = f"after {LAPS} cycles the energy still changes"


def cycle(model: Model, reading: int, friction: float, one: End, other: End) -> tuple[float | None, str]:
    """Energy [N mm] of a cycle from one end to the other and back, after it has become steady; or None and why there is none.

    The layer keeps the stiffness of the larger clamp; the bound follows the clamp.
    """
    built = model.build(np.maximum(one[1], other[1]), reading)
    turns = 1 if np.array_equal(one[1], other[1]) else TURNS
    reversal = turns == 1 and np.allclose(one[0], -other[0])  # its first full cycle is steady (Masing)
    before = np.inf
    try:
        state = step(built.compliance, friction * built.press(one[1]), built.face, load=model.load(one[0])).state
        for _ in range(LAPS):
            state, spent = _lap(model, built, friction, (one, other), state, turns)
            if reversal or abs(spent - before) <= STEADY * spent:
                return spent * model.faces, ""
            before = spent
    except SlipsWholly:
        return None, ON_THE_WAY
    return None, UNSTEADY


def _lap(
    model: Model, built: Built, friction: float, ends: tuple[End, End], state: State, turns: int
) -> tuple[State, float]:
    """The state after a way to the other end and back, and the energy [N mm] lost on one face."""
    spent = 0.0
    for (load_a, clamp_a), (load_b, clamp_b) in (ends, ends[::-1]):
        for part in np.arange(1, turns + 1) / turns:
            bound = friction * built.press(clamp_a + part * (clamp_b - clamp_a))
            wanted = model.load(load_a + part * (load_b - load_a))
            done = step(built.compliance, bound, built.face, state, load=wanted)
            state, spent = done.state, spent + done.dissipation
    return state, spent
