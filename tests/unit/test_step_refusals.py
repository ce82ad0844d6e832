"""What the step refuses, and how it says so; nothing returns NaN."""

import subprocess
import sys

import numpy as np
import pytest

from slip.base.errors import InputError, NotConverged, SlipError
from slip.friction.compliance.dense import Dense
from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.springs import Springs
from slip.friction.compliance.strips import Strips
from slip.friction.march import step as stepping
from slip.friction.march.face import Face
from slip.friction.march.history import march
from slip.friction.march.load import SlipsWholly
from slip.friction.march.step import step

LINE, STEEL = Face(1), [(8e4, 0.3), (8e4, 0.3)]


def test_load_above_gross_slip_carries_the_load_at_which_it_slips():
    with pytest.raises(SlipsWholly) as caught:
        step(Springs([1e3, 1e3], 2.0), [10.0, 5.0], LINE, load=40.0)
    assert caught.value.factor == pytest.approx(0.75) and caught.value.load == pytest.approx([30.0])
    assert "0.75" in str(caught.value) and "30" in str(caught.value) and caught.value.code == "slips-wholly"
    assert isinstance(caught.value, SlipError) and not isinstance(caught.value, NotConverged)


def test_gross_slip_with_a_moment():
    """Two bolts at +-60 mm, force across their line at 200 mm: 2a/(a + e) of one bolt's strength (physics, groups)."""
    positions = np.array([[-60.0, 60.0], [0.0, 0.0]])
    body, face = Springs([1e3, 1e3], components=2), Face(2, positions)
    limit = 10.0 * 2 * 60 / (60 + 200)
    direction = np.array([0.0, 1.0, 200.0])
    with pytest.raises(SlipsWholly) as caught:
        step(body, 10.0, face, load=1.001 * limit * direction)
    assert caught.value.load == pytest.approx(limit * direction, rel=1e-6)
    assert step(body, 10.0, face, load=0.999 * limit * direction).residual <= 1e-6


def test_face_without_clamp():
    for given in ({"load": 1.0}, {"load": 0.0}, {"motion": 0.1}):
        with pytest.raises(InputError) as caught:
            step(Springs([1e3]), 0.0, LINE, **given)
        assert caught.value.code == "no-clamp"


@pytest.mark.parametrize(
    "build",
    [
        lambda: Springs([np.inf, 1e3]),
        lambda: Dense(np.diag([0.0, 1.0])),
        lambda: Strips(10.0, 1.0, 10, (np.inf, np.inf)),
        lambda: HalfSpace((4, 4), (1.0, 1.0), [(np.inf, 0.3)] * 2),
        lambda: HalfSpace((2, 2), (1.0, 1.0), [(np.inf, 0.3)] * 2, layer=[[1e3, 1e3], [1e3, np.inf]]),
    ],
)
def test_no_compliance_at_all(build):
    with pytest.raises(InputError) as caught:
        build()
    assert caught.value.code == "no-compliance" and "gross-slip load" in str(caught.value)


def test_rigid_bodies_with_a_layer_are_springs():
    layer = np.array([[1e3, 2e3], [3e3, 4e3]])
    body, face = HalfSpace((2, 2), (0.5, 2.0), [(np.inf, 0.3)] * 2, layer=layer), Face(2)
    a = step(body, 1.0, face, load=[1.5, 0.3])
    b = step(Springs(layer, 1.0, components=2), 1.0, face, load=[1.5, 0.3])
    assert np.allclose(a.state.traction, b.state.traction) and a.energy == pytest.approx(b.energy)


def test_too_fine_a_face_is_refused_with_its_size():
    with pytest.raises(InputError) as caught:
        HalfSpace((40000, 40000), (0.01, 0.01), STEEL)
    assert caught.value.code == "face-too-fine"
    assert "40000 x 40000" in str(caught.value) and "GB" in str(caught.value)


def test_strips_whose_cells_do_not_see_the_decay():
    with pytest.raises(InputError) as caught:
        Strips(100.0, 60.0, 20, (1.5e8, 1.5e8), layer=1e6)
    assert caught.value.code == "cells-too-coarse" and "cells or more" in str(caught.value)
    # Ten times the cells over the decay length, as it says.
    cells = int(str(caught.value).split("give ")[1].split(" cells")[0])
    decay = 1 / np.sqrt(1e6 * 60 * 2 / 1.5e8)
    assert 100 / cells <= decay / 10 < 100 / (cells - 1)
    with pytest.raises(InputError):
        Strips(100.0, 60.0, 20, (1.5e8, 1.5e8))


def test_not_converged_says_what_to_try(monkeypatch):
    monkeypatch.setattr(stepping, "MOST_STEPS", 1)
    body = Springs(np.geomspace(1, 1e4, 30), components=2)
    face = Face(2, np.random.default_rng(0).normal(size=(2, 30)))
    with pytest.raises(NotConverged) as caught:
        step(body, 1.0, face, load=[15.0, 5.0, 3.0])
    assert caught.value.code == "step-residual"
    assert "shorter steps" in str(caught.value) and "Newton" in str(caught.value) and "nan" not in str(caught.value)


@pytest.mark.parametrize(
    ("bound", "given"),
    [
        (-1.0, {"load": 1.0}),
        (np.nan, {"load": 1.0}),
        (np.inf, {"load": 1.0}),
        ([1.0, 1.0, 1.0], {"load": 1.0}),
        (1.0, {"load": np.nan}),
        (1.0, {"load": [1.0, 0.0]}),
        (1.0, {"motion": np.inf}),
        (1.0, {}),
        (1.0, {"motion": 0.0, "load": 0.0}),
        (1.0, {"load": 1.0, "tol": 0.0}),
    ],
)
def test_numbers_without_meaning(bound, given):
    with pytest.raises(ValueError, match=r"\w"):
        step(Springs([1e3, 1e3]), bound, LINE, **given)


@pytest.mark.parametrize(
    "build",
    [
        lambda: Springs([1e3, -1.0]),
        lambda: Springs([1e3, 1e3], [1.0, 0.0]),
        lambda: Springs([1e3], components=3),
        lambda: Springs([1e3], layer=0.0),
        lambda: Springs([1e3], layer=[1.0, 2.0]),
        lambda: Dense([[1.0, 2.0]]),
        lambda: Dense([[1.0, 0.5], [0.0, 1.0]]),
        lambda: Strips(0.0, 1.0, 10, (1e6, 1e6), layer=1.0),
        lambda: Strips(10.0, 1.0, 10, (1e6, -1e6), layer=1.0),
        lambda: HalfSpace((0, 4), (1.0, 1.0), STEEL),
        lambda: HalfSpace((4, 4), (1.0, 0.0), STEEL),
        lambda: HalfSpace((4, 4), (1.0, 1.0), STEEL[:1]),
        lambda: HalfSpace((4, 4), (1.0, 1.0), [(8e4, 0.6), (8e4, 0.3)]),
        lambda: Face(1, np.zeros((2, 3))),
        lambda: Face(3),
        lambda: next(march(Springs([1e3]), 1.0, LINE)),
        lambda: next(march(Springs([1e3]), [], LINE, loads=[1.0])),
        lambda: step(Springs([1e3]), 1.0, Face(2), load=[1.0, 0.0]),
        lambda: step(Springs([1e3], components=2), 1.0, Face(2, np.zeros((2, 3))), load=[1.0, 0.0, 0.0]),
    ],
)
def test_shapes_and_values_without_meaning(build):
    with pytest.raises(ValueError, match=r"\w"):
        build()


def test_state_of_another_compliance_is_refused():
    """C q comes along with the state; taken to stiffer bodies it would be wrong without a sign of it."""
    made = step(Springs([1e3, 1e3]), 1.0, LINE, load=1.0)
    assert step(Springs([1e3, 1e3]), 1.0, LINE, made.state, load=1.5).state.motion == pytest.approx([0.75e-3])
    with pytest.raises(ValueError, match="another compliance"):
        step(Springs([2e3, 1e3]), 1.0, LINE, made.state, load=1.5)


def test_one_point_at_the_origin_cannot_be_turned():
    """A face of one closed point: its rotation is free and stays where it is; a moment is more than it carries."""
    body, face = Springs([1e3, 1e3], components=2), Face(2, np.array([[0.0, 5.0], [0.0, 0.0]]))
    made = step(body, [1.0, 0.0], face, load=[0.3, 0.4, 0.0])
    assert made.state.motion == pytest.approx([0.3e-3, 0.4e-3, 0.0])
    with pytest.raises(SlipsWholly):
        step(body, [1.0, 0.0], face, load=[0.3, 0.4, 0.1])


def test_nothing_to_do_gives_numbers():
    for given in ({"load": 0.0}, {"motion": 0.0}):
        made = step(Springs([1e3, 1e3]), [1.0, 0.0], LINE, **given)
        assert made.dissipation == made.energy == made.balance == made.residual == 0.0
        assert not made.state.traction.any() and np.isfinite(made.state.motion).all()
        assert made.slipping.tolist() == [False, True]  # an open point holds nothing


def test_the_limit_alone_needs_no_scipy():
    """`import slip.friction.march.limit` and the step itself stay light; the half-space and the strips bring scipy."""
    code = (
        "import sys, slip.friction.march.limit, slip.friction.march.history; "
        "sys.exit(any(m.startswith('scipy') for m in sys.modules))"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
