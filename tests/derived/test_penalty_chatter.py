"""Stick and slip in turn: an iteration that carries the status over fails where one load step slips twice the elastic slip."""

import numpy as np
import pytest

from slip.stiffness import bounds

LIMIT, BODY = 1.0, 1.0  # of a slider behind a spring: its traction slides it at a drive of 1 either way
REPEATS = 40  # of an iteration; those that end need three for a slider and a dozen for a bar


def status(traction, bound):
    """-1, 0 or 1: slips backward, sticks, slips forward."""
    return np.where(np.abs(traction) <= bound * (1 + 1e-9), 0, np.sign(traction)).astype(int)


def march(loads, bound, k, bodies, carried):
    """Steps whose iteration does not end, and the largest slip of a step over the elastic slip at the limit.

    bodies(load, stick, spring, push): motions of bodies under the load, springs where the contact sticks, pushes from it. A
    step that does not end is repeated from sticking.
    """
    u = q = np.zeros_like(bound)
    state, failed, largest = np.zeros(len(bound), int), 0, 0.0
    for load in loads:
        for begin in (state if carried else 0 * state, 0 * state):
            now = begin
            for _ in range(REPEATS):
                stick = now == 0
                new = bodies(load, np.where(stick, k, 0.0), np.where(stick, k * u - q, -now * bound))
                trial = q + k * (new - u)
                seen = status(trial, bound)
                if np.array_equal(seen, now):
                    break
                now = seen
            else:
                failed += 1
                continue
            break
        held = np.clip(trial, -bound, bound)
        largest = max(largest, np.max(np.abs(new - u - (held - q) / k) / (bound / k)))
        u, q, state = new, held, now
    return failed, largest


def to_and_fro(amplitude, steps, cycles=3):
    """Even steps, so many of them per cycle, from nothing."""
    quarter = np.linspace(0, 1, steps // 4 + 1)[1:]
    turn = np.linspace(1, -1, steps // 2 + 1)[1:]
    return amplitude * np.r_[quarter, np.tile(np.r_[turn, -turn], cycles)]


def slider(load, spring, push):
    return (BODY * load + push) / (BODY + spring)


@pytest.mark.parametrize("times", [0.5, 1.0, 1.9, 1.99, 2.01, 2.1, 5.0, 30.0, 59.0])
def test_slider_chatters_where_a_step_slips_twice_the_elastic_slip(times):
    """Elastic slip LIMIT/k; while it slides the slip of a step is the drive's. Steps: that many times the elastic slip.

    By hand: at the turn the drive goes back by s. From slip forward the iteration goes to u = D - LIMIT/BODY, which is slip
    backward when s > 2 LIMIT/k, and from there back again as long as s < 2 LIMIT/BODY.
    """
    k = 30.0
    s = times * LIMIT / k
    steps = 4 * int(np.ceil(4 / s))  # amplitude of 4 or more: it slides at every turn
    loads = to_and_fro(s * steps / 4, steps)
    failed, largest = march(loads, np.array([LIMIT]), k, slider, carried=True)
    assert largest == pytest.approx(times)
    assert (k > bounds.chatter_stiffness(1.0, LIMIT, s)) == (times > 2)
    assert failed == (6 if times > 2 else 0)  # at every turn or never
    assert march(loads, np.array([LIMIT]), k, slider, carried=False)[0] == 0


def test_a_step_of_the_whole_swing_or_soft_contact_does_not_chatter():
    for k, s in ((30.0, 2.1 * LIMIT / BODY), (0.9 * BODY, 3 * LIMIT / BODY)):
        assert march(to_and_fro(4 * s, 16), np.array([LIMIT]), k, slider, carried=True)[0] == 0


def test_slip_per_step_of_the_slider():
    """Amplitude 4: it slides for all but 2 (LIMIT/BODY + LIMIT/k) of the 8 of a half cycle."""
    k, steps = 30.0, 800
    waits = LIMIT / BODY + LIMIT / k
    amplitude = 4.0 - waits  # of the true slip
    got = bounds.slip_per_step(amplitude, steps, 1 - waits / 4)
    assert got == pytest.approx(4 * 4.0 / steps)  # which is the drive's step
    largest = march(to_and_fro(4.0, steps), np.array([LIMIT]), k, slider, carried=True)[1]
    assert largest * LIMIT / k == pytest.approx(got)


# A bar of 30 elements on the contact, pulled at one end at 0.8 of gross slip

POINTS = 31
BAR = POINTS * (2 * np.eye(POINTS) - np.eye(POINTS, k=1) - np.eye(POINTS, k=-1))
BAR[0, 0] = BAR[-1, -1] = POINTS + 1e-9  # a trial in which all points slip needs a hold
AREA = np.r_[0.5, np.ones(POINTS - 2), 0.5] / POINTS
END = np.r_[np.zeros(POINTS - 1), 1.0]


def bar(load, spring, push):
    return np.linalg.solve(BAR + np.diag(AREA * spring), load * END + AREA * push)


@pytest.mark.parametrize("steps", [8, 16, 40])
@pytest.mark.parametrize("pressure", [np.ones(POINTS), np.linspace(0.3, 1.7, POINTS)], ids=["even", "rising"])
def test_bar_chatters_where_a_step_slips_twice_the_elastic_slip(steps, pressure):
    """Nothing is tuned to the bar: the largest slip of a step, at any point, against 2."""
    loads = to_and_fro(0.8 * AREA @ pressure, steps)
    seen = []
    for k in np.logspace(0.5, 5, 19):
        failed, largest = march(loads, pressure, k, bar, carried=True)
        seen.append((largest, failed))
        assert march(loads, pressure, k, bar, carried=False)[0] == 0, "an iteration that begins with sticking ends"
    assert all(failed == 0 for largest, failed in seen if largest < 1.95)
    assert all(failed > 0 for largest, failed in seen if largest > 2.5)
    assert any(largest < 1.95 for largest, _ in seen) and any(largest > 2.5 for largest, _ in seen)
