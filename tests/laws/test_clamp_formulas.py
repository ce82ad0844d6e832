"""Laws of the clamp formulas on random input: symmetry, monotony, inverses, and vectors that equal their scalars."""

import importlib
import inspect

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from slip.base.formulas import Formula
from slip.clamp import losses, springs, tightening

EXACT = 1e-9


def between(low, high):
    return st.floats(low, high, allow_nan=False)


FRICTION = between(0.03, 0.4)
MODULUS = between(4e4, 2.2e5)
LAYERS = st.lists(st.tuples(between(0.5, 60), MODULUS), min_size=1, max_size=5)
BEARING = between(8, 40)
HOLE_SHARE = between(0.5, 0.9)  # hole over bearing diameter
BODY_SHARE = st.one_of(between(0.95, 12), st.just(np.inf))  # body over bearing diameter


def compliance(layers, d_w, hole, body, tapped):
    thicknesses, moduli = zip(*layers, strict=True)
    return springs.plate_compliance(thicknesses, moduli, d_w, hole * d_w, body * d_w, tapped)


# Plates


@given(LAYERS, BEARING, HOLE_SHARE, BODY_SHARE)
def test_plates_of_a_nut_joint_may_be_swapped(layers, d_w, hole, body):
    swapped = compliance(layers[::-1], d_w, hole, body, tapped=False)
    assert swapped == pytest.approx(compliance(layers, d_w, hole, body, tapped=False), rel=EXACT)


@given(LAYERS, BEARING, HOLE_SHARE)
def test_frusta_of_a_nut_joint_may_be_swapped(layers, d_w, hole):
    thicknesses, moduli = map(np.array, zip(*layers, strict=True))
    swapped = springs.frustum_compliance(thicknesses[::-1], moduli[::-1], d_w, hole * d_w)
    assert swapped == pytest.approx(springs.frustum_compliance(thicknesses, moduli, d_w, hole * d_w), rel=EXACT)


@given(LAYERS, st.integers(0, 4), between(0.05, 0.95), BEARING, HOLE_SHARE, BODY_SHARE, st.booleans())
def test_a_layer_cut_in_two_is_the_same_layer(layers, which, share, d_w, hole, body, tapped):
    i = which % len(layers)
    t, E = layers[i]
    cut = [*layers[:i], (share * t, E), ((1 - share) * t, E), *layers[i + 1 :]]
    assert compliance(cut, d_w, hole, body, tapped) == pytest.approx(
        compliance(layers, d_w, hole, body, tapped), rel=EXACT
    )


@given(between(0.5, 10), between(1.01, 2), MODULUS, BEARING, HOLE_SHARE, BODY_SHARE, st.booleans())
def test_a_thicker_stack_of_one_material_is_softer(slenderness, factor, E, d_w, hole, body, tapped):
    """In the range of the slopes: beyond it the slope's growth with the grip would win over the added length."""
    assume(slenderness * factor <= 10)
    thin, thick = ([(slenderness * d_w * f, E)] for f in (1, factor))
    assert compliance(thick, d_w, hole, body, tapped) > compliance(thin, d_w, hole, body, tapped)


@given(LAYERS, between(1.01, 3), BEARING, HOLE_SHARE, between(0.95, 12), st.booleans())
def test_a_wider_body_is_never_softer(layers, factor, d_w, hole, body, tapped):
    wide, narrow = (compliance(layers, d_w, hole, b, tapped) for b in (body * factor, body))
    assert wide <= narrow * (1 + EXACT)


@given(LAYERS, between(0.1, 10), BEARING, HOLE_SHARE, BODY_SHARE, st.booleans())
def test_compliance_scales_with_size_and_modulus(layers, factor, d_w, hole, body, tapped):
    one = compliance(layers, d_w, hole, body, tapped)
    larger = [(t * factor, E) for t, E in layers]
    stiffer = [(t, E * factor) for t, E in layers]
    assert compliance(larger, d_w * factor, hole, body, tapped) == pytest.approx(one / factor, rel=EXACT)
    assert compliance(stiffer, d_w, hole, body, tapped) == pytest.approx(one / factor, rel=EXACT)


@given(LAYERS, BEARING, HOLE_SHARE, st.lists(BODY_SHARE, min_size=2, max_size=4), st.booleans())
def test_bolts_in_an_array_are_the_single_bolts(layers, d_w, hole, bodies, tapped):
    together = compliance(layers, d_w, hole, np.array(bodies), tapped)
    assert together == pytest.approx([compliance(layers, d_w, hole, body, tapped) for body in bodies], rel=1e-14)


@given(LAYERS, BEARING, HOLE_SHARE, BODY_SHARE, st.booleans())
def test_stacks_in_an_array_are_the_single_stacks(layers, d_w, hole, body, tapped):
    thicknesses, moduli = map(np.array, zip(*layers, strict=True))
    factors = np.array([0.5, 1.0, 3.0])
    together = springs.plate_compliance(thicknesses * factors[:, None], moduli, d_w, hole * d_w, body * d_w, tapped)
    single = [compliance([(t * f, E) for t, E in layers], d_w, hole, body, tapped) for f in factors]
    assert together == pytest.approx(single, rel=1e-14)
    assert np.ndim(single[0]) == 0 and isinstance(single[0], float)


@given(LAYERS, BEARING, HOLE_SHARE, BODY_SHARE, st.booleans())
def test_rows_of_a_report_add_up(layers, d_w, hole, body, tapped):
    thicknesses, moduli = zip(*layers, strict=True)
    rows = springs.cone_pieces(thicknesses, moduli, d_w, hole * d_w, body * d_w, tapped)
    assert sum(row.compliance for row in rows) == pytest.approx(compliance(layers, d_w, hole, body, tapped), rel=1e-7)
    assert sum(row.length for row in rows) == pytest.approx(sum(thicknesses), rel=1e-7)


def test_rows_follow_the_stack_from_the_head():
    """A soft layer of 12 mm on a stiff one of 18 mm, the middle of the grip 3 mm into the second."""
    rows = springs.cone_pieces([12.0, 18.0], [7e4, 205e3], 14.63, 11, 20, tapped=False)
    assert [row.kind for row in rows] == ["cone", "sleeve", "sleeve", "cone", "sleeve"]
    assert [row.E for row in rows] == [7e4, 7e4, 205e3, 205e3, 205e3]
    assert [row.diameter for row in rows] == [14.63, 20, 20, 14.63, 20]
    assert rows[2].length == pytest.approx(3)
    assert all(type(value) is float for row in rows for value in row[1:])


@given(LAYERS, BEARING, between(1, 2), BODY_SHARE, st.booleans())
def test_no_material_round_the_hole_is_refused(layers, d_w, hole, body, tapped):
    with pytest.raises(ValueError, match="hole must be smaller"):
        compliance(layers, d_w, hole, body, tapped)
    with pytest.raises(ValueError, match="hole must be smaller"):
        compliance(layers, d_w, 0.7, 0.7 / hole, tapped)


@given(between(1, 100), st.one_of(between(1, 300), st.just(np.inf)))
def test_the_body_is_the_largest_circle_that_fits(edge, spacing):
    """It stays inside the edge, and it and the neighbour's like circle do not cross; a larger one does."""
    radius = springs.body_diameter(edge, spacing) / 2
    assert radius <= edge and 2 * radius <= spacing
    wider = radius * (1 + 1e-6)
    assert wider > edge or 2 * wider > spacing


@given(between(1e-7, 1e-5), between(1e-7, 1e-5), between(0, 1))
def test_the_bolt_never_takes_more_than_its_introduction(delta_S, delta_P, n):
    assert 0 <= springs.bolt_share(delta_S, delta_P, n) <= n


# Torque

TORQUE = st.fixed_dictionaries(
    {"P": between(0.3, 6), "d2": between(2, 60), "mu_th": FRICTION, "D_km": between(3, 90), "mu_b": FRICTION}
)


@given(between(1e2, 1e6), TORQUE, between(1.001, 2))
def test_preload_grows_with_torque_and_falls_with_either_friction(T, joint, more):
    F = tightening.preload_from_torque(T, **joint)
    assert tightening.preload_from_torque(T * more, **joint) > F
    for key in ("mu_th", "mu_b"):
        assert tightening.preload_from_torque(T, **{**joint, key: joint[key] * more}) < F


@given(between(1e2, 1e6), TORQUE)
def test_torque_and_preload_are_inverse(T, joint):
    F = tightening.preload_from_torque(T, **joint)
    assert tightening.torque_from_preload(F, **joint) == pytest.approx(T, rel=EXACT)


@given(between(1e2, 1e6), TORQUE, between(3, 64))
def test_a_nut_factor_stands_for_both_frictions(F, joint, d):
    T = tightening.torque_from_preload(F, **joint)
    assert tightening.preload_from_nut_factor(T, T / F / d, d) == pytest.approx(F, rel=EXACT)


@given(between(1e2, 1e6), TORQUE)
def test_friction_comes_back_from_its_torques(F, joint):
    P, d2, D_km = joint["P"], joint["d2"], joint["D_km"]
    thread_part = tightening.thread_torque(F, P, d2, joint["mu_th"])
    head_part = tightening.torque_from_preload(F, **joint) - thread_part
    assert tightening.thread_friction_from_torque(thread_part, F, P, d2) == pytest.approx(joint["mu_th"], rel=1e-6)
    assert tightening.head_friction_from_torque(head_part, F, D_km) == pytest.approx(joint["mu_b"], rel=1e-6)


@given(between(0, 0.9), between(1, 5))
def test_bound_and_ratio_are_inverse(t, z):
    ratio = tightening.ratio_from_bound(t)
    assert ratio >= 1
    assert tightening.bound_from_ratio(ratio) == pytest.approx(t, abs=EXACT)
    assert tightening.variation(ratio, z) * z == pytest.approx(t, abs=EXACT)


@given(between(0.5, 1), between(200, 1200), between(5, 3000), between(0, 2), between(1e-3, 0.5))
def test_torsion_takes_preload(share, R_p, A0, k, more):
    F = tightening.preload_at_yield_share(share, R_p, A0, k)
    assert tightening.preload_at_yield_share(share, R_p, A0, k + more) < F <= share * R_p * A0


# Losses


@given(between(0, 0.99), between(0, 1e6))
def test_what_relaxes_and_what_stays_are_the_preload(share, F):
    assert losses.relaxation_loss(share, F) + (1 - share) * F == pytest.approx(F)


@given(between(-60, 60), between(1, 200), between(1e-6, 3e-5), between(1e-7, 1e-5), between(1e-7, 1e-5))
def test_like_parts_equally_warm_lose_nothing(dT, l_K, alpha, delta_S, delta_P):
    growth = losses.stack_growth([l_K / 4, 3 * l_K / 4], alpha, dT)
    assert losses.thermal_change(l_K, alpha, dT, growth, delta_S, delta_P) == pytest.approx(0, abs=1e-4)


@given(between(0, 30), between(1e-3, 100))
def test_roughness_converts_both_ways(Ra, factor):
    Rq = losses.rq_from_ra(Ra)
    assert losses.ra_from_rq(Rq) == pytest.approx(Ra)
    assert losses.rz_from_rq(Rq) == pytest.approx(losses.rz_from_ra(Ra))
    assert Ra <= Rq <= losses.rz_from_ra(Ra)


# Every formula


def formulas():
    for name in ("thread", "tightening", "springs", "losses"):
        module = importlib.import_module(f"slip.clamp.{name}")
        for function in vars(module).values():
            if isinstance(getattr(function, "formula", None), Formula):
                yield pytest.param(function, id=f"{name}.{function.__name__}")


@pytest.mark.parametrize("function", list(formulas()))
def test_vector_equals_scalar(function):
    names = list(inspect.signature(function).parameters)
    draw = np.random.default_rng(7)
    columns = {name: draw.uniform(0.1, 0.9, 5) + (name == "D_0") for name in names}
    together = function(**columns)
    single = [function(**{name: float(columns[name][i]) for name in names}) for i in range(5)]
    assert together.shape == (5,) and all(isinstance(value, float) for value in single)
    assert together == pytest.approx(single, rel=1e-14)
    first = names[0]
    grid = function(**{**columns, first: columns[first][:, None]})
    assert grid.shape == ((5, 5) if len(names) > 1 else (5, 1))
    assert np.diagonal(grid) == pytest.approx(single if len(names) > 1 else single[:1], rel=1e-14)
