"""Rounding in a model whose parts are joined by a stiff contact: assembled matrices against the rule for the best value."""

from math import sqrt

import numpy as np
import pytest
from scipy.linalg import eigh, solve_banded

from slip.stiffness import bounds

DOUBLE, SINGLE = bounds.PRECISION["double"], bounds.PRECISION["single"]


def test_precision_is_the_rounding_of_one_number():
    assert np.finfo(np.float64).eps / 2 == DOUBLE and np.finfo(np.float32).eps / 2 == SINGLE


def test_rule_by_hand():
    """Sum of k_e/k and n t k/k_e is least where both are equal, sqrt(n t): n = 200 in double precision 6.7e6 k_e."""
    n, k_e = 200, 50e3
    got = bounds.conditioning(200e3, 4.0, n)
    assert got.element == pytest.approx(k_e)
    assert got.best == pytest.approx(6.7e6 * k_e, rel=0.01)
    errors = [
        bounds.penalty_error(k, k_e) + bounds.rounding_error(k, k_e, n, DOUBLE)
        for k in got.best * np.array([0.9, 1, 1.1])
    ]
    assert min(errors) == errors[1] == pytest.approx(got.error_best)
    assert bounds.rounding_error(got.largest, k_e, n, DOUBLE) == pytest.approx(1e-3)
    assert got.serves


def test_single_precision_may_not_serve():
    """500000 unknowns: sqrt(n t) = .17, so no value is good to a thousandth and the bound is the best value, 5.8 k_e."""
    got = bounds.conditioning(200e3, 4.0, 500e3, "single")
    assert not got.serves
    assert got.largest == got.best == pytest.approx(5.79 * 50e3, rel=1e-3)


@pytest.mark.parametrize("wrong", [(0.0, 4.0, 10), (1.0, -1.0, 10), (1.0, 1.0, float("nan")), (1.0, 1.0, 10, "half")])
def test_bounds_that_cannot_be(wrong):
    with pytest.raises(ValueError, match="must be"):
        bounds.conditioning(*wrong)


# Two bars in a row, n unknowns in all, of unit elements; held at one end, pulled at the other

LADDER = np.logspace(2, 11, 37)


def bars_error(n, k):
    """Largest error of the motions against bars that are joined rigidly; both ends of the contact are unknowns."""
    springs = np.ones(n)
    springs[n // 2] = k
    banded = np.zeros((3, n))
    banded[1] = springs + np.r_[springs[1:], 0.0]
    banded[0, 1:] = banded[2, :-1] = -springs[1:]
    motions = solve_banded((1, 1), banded, np.r_[np.zeros(n - 1), 1.0])
    rigid = np.arange(1.0, n + 1) - (np.arange(n) >= n // 2)
    return np.abs(motions - rigid).max() / rigid.max()


def best_of(error, ladder):
    """Where the mean of the errors' logarithms, over five neighbours on the ladder, is least: rounding is erratic."""
    logs = np.log([error(k) for k in ladder])
    return ladder[2:-2][np.argmin(np.convolve(logs, np.ones(5) / 5, "valid"))]


def test_two_bars_have_their_best_value_within_a_decade_of_the_rule():
    n = 200
    best = best_of(lambda k: np.mean([bars_error(m, k) for m in range(n - 8, n + 9, 2)]), LADDER)
    assert 3e5 < best < 3e6  # 1e6: what the bars themselves show
    assert 0.1 < best / bounds.best_stiffness(1.0, n, DOUBLE) < 10


def test_two_bars_stay_within_the_rule():
    """The contact adds one spring to n in a row, k_e/(n k) of error; rounding stays below the rule, but not by far."""
    for k in np.logspace(3, 12, 19):
        rounding = bounds.rounding_error(k, 1.0, 200, DOUBLE)
        assert bars_error(200, k) < bounds.penalty_error(k, 1.0) + rounding
        if k > 1e8:
            assert max(bars_error(n, k) for n in range(180, 221, 4)) > rounding / 100


# Two blocks of four-node elements with unit modulus and edge, plane stress; one held below, the other sheared above

NU = 0.3
LAW = np.array([[1, NU, 0], [NU, 1, 0], [0, 0, (1 - NU) / 2]]) / (1 - NU**2)


def element():
    """Stiffness of one square element, 2 x 2 Gauss points."""
    K = np.zeros((8, 8))
    signs = np.array([[-1, 1, 1, -1], [-1, -1, 1, 1]])
    for x in (-1, 1):
        for y in (-1, 1):
            dx = signs[0] * (1 + signs[1] * y / sqrt(3)) / 2
            dy = signs[1] * (1 + signs[0] * x / sqrt(3)) / 2
            B = np.zeros((3, 8))
            B[0, ::2], B[1, 1::2], B[2, ::2], B[2, 1::2] = dx, dy, dy, dx
            K += B.T @ LAW @ B / 4
    return K


def blocks(wide, high):
    """Stiffness without contact, contact of unit stiffness per area at the nodes, load, and the tie of the joined nodes."""
    row, unit = wide + 1, element()
    count = row * (high + 1)

    def node(block, i, j):
        return block * count + j * row + i

    K, contact, load, tie = (
        np.zeros((4 * count,) * 2),
        np.zeros((4 * count,) * 2),
        np.zeros(4 * count),
        np.eye(4 * count),
    )
    for block in (0, 1):
        for i in range(wide):
            for j in range(high):
                at = [node(block, i, j), node(block, i + 1, j), node(block, i + 1, j + 1), node(block, i, j + 1)]
                both = np.ravel([[2 * a, 2 * a + 1] for a in at])
                K[np.ix_(both, both)] += unit
    for i in range(row):
        area = 0.5 if i in (0, wide) else 1.0
        load[2 * node(1, i, high)] = area
        for part in (0, 1):
            pair = [2 * node(0, i, high) + part, 2 * node(1, i, 0) + part]
            contact[np.ix_(pair, pair)] += area * np.array([[1, -1], [-1, 1]])
            tie[pair[1], pair[0]], tie[pair[1], pair[1]] = 1, 0
    free = np.arange(2 * row, 4 * count)  # the lowest row is held
    own = np.flatnonzero(tie.any(axis=0) & (np.arange(4 * count) >= 2 * row))
    return K[np.ix_(free, free)], contact[np.ix_(free, free)], load[free], tie[np.ix_(free, own)]


def test_condition_number_of_blocks_grows_linearly(validate):
    K, contact, _, tie = blocks(10, 5)
    largest = np.linalg.eigvalsh(K)[-1]
    smallest = eigh(tie.T @ K @ tie, tie.T @ tie, eigvals_only=True)[0]
    for k in (1e2, 1e3, 1e4, 1e6, 1e8):
        assembled = np.linalg.cond(K + k * contact)
        rule = bounds.condition_number(k, largest, smallest)
        assert rule == pytest.approx(assembled, rel=2 * largest / k + 1e-6 + 1e-14 * assembled)
    growth = np.linalg.cond(K + 1e6 * contact) / np.linalg.cond(K + 1e4 * contact)
    source = "assembled blocks of four-node elements"
    validate("29a", "condition number, contact 100 times stiffer", source, "derived", "100", growth)


def blocks_error(K, contact, load, rigid, k, kind):
    """Largest error of the motions, solved in numbers of that kind."""
    motions = np.linalg.solve(K.astype(kind) + kind(k) * contact.astype(kind), load.astype(kind))
    return np.abs(motions - rigid).max() / np.abs(rigid).max()


@pytest.mark.parametrize(("kind", "t"), [(np.float64, DOUBLE), (np.float32, SINGLE)], ids=["double", "single"])
def test_blocks_have_their_best_value_within_a_decade_of_the_rule(kind, t):
    models = []
    for wide, high in ((8, 4), (9, 5), (10, 5), (11, 4), (12, 5)):
        K, contact, load, tie = blocks(wide, high)
        models.append((K, contact, load, tie @ np.linalg.solve(tie.T @ K @ tie, tie.T @ load)))
    n = float(np.mean([len(load) for *_, load, _ in models]))
    rule = bounds.best_stiffness(1.0, n, t)
    best = best_of(
        lambda k: np.mean([blocks_error(*model, k, kind) for model in models]), rule * np.logspace(-2, 2, 25)
    )
    assert 0.1 < best / rule < 10
    for (
        model
    ) in models:  # rounding stays within the rule up to the largest value, and the error by compliance falls as 1/k
        top = bounds.largest_stiffness(1.0, len(model[2]), t, bounds.ALLOWED)
        assert blocks_error(*model, top, kind) < bounds.ALLOWED
        low = [blocks_error(*model, k, kind) for k in (10.0, 20.0)]
        assert low[0] / low[1] == pytest.approx(2, rel=0.02)
