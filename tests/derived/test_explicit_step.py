"""The stable step of explicit time integration with a contact in the mesh: eigenvalues of assembled chains of bars."""

import numpy as np
import pytest
from scipy.linalg import eigh_tridiagonal

from slip.stiffness import bounds

PRINTED = {0.25: ".97", 0.5: ".91", 1: ".79", 2: ".62", 5: ".43", 10: ".31", 100: ".10"}
LONG = 60  # elements of a bar; the mode at the contact has died away long before its end


def masses(h, rho):
    """Of the nodes of a bar of unit section, half an element's at its ends."""
    m = np.zeros(len(h) + 1)
    m[:-1] += rho * h / 2
    m[1:] += rho * h / 2
    return m


def step_of(m, k):
    """2 over the highest frequency of masses m in a row, joined by springs k."""
    ends = np.r_[0.0, k, 0.0]
    diagonal, beside = (ends[:-1] + ends[1:]) / m, -k / np.sqrt(m[:-1] * m[1:])
    top = eigh_tridiagonal(diagonal, beside, eigvals_only=True, select="i", select_range=(len(m) - 1, len(m) - 1))
    return 2 / np.sqrt(top[0])


def joined(h_1, h_2, E_1, E_2, rho_1, rho_2, k_t):
    """Two bars that meet in a contact k_t."""
    m = np.r_[masses(h_1, rho_1), masses(h_2, rho_2)]
    return step_of(m, np.r_[E_1 / h_1, k_t, E_2 / h_2])


@pytest.mark.parametrize("ratio", PRINTED)
def test_check_36_step_of_bars(ratio, validate):
    """Lumped bars; the contact joins two end nodes of half an element's mass; reference h/c."""
    h, E, rho = 4.0, 210e3, 7.85e-9
    k_t = ratio * E / h
    row = np.full(LONG, h)
    got = joined(row, row, E, E, rho, rho, k_t) / (h * np.sqrt(rho / E))
    assert bounds.step_ratio(k_t, h, E) == pytest.approx(got, rel=1e-6)
    assert bounds.stiffness_at_ratio(got, h, E) == pytest.approx(k_t, rel=1e-5)
    source = "eigenvalues of assembled bars"
    validate(
        36,
        f"explicit step ratio at k h/E = {ratio}",
        source,
        "derived",
        f"0{PRINTED[ratio]}",
        bounds.step_ratio(k_t, h, E),
    )


def test_step_without_contact():
    h, E, rho = 4.0, 210e3, 7.85e-9
    chain = np.full(400, h)
    assert step_of(masses(chain, rho), E / chain) == pytest.approx(bounds.element_step(h, rho, E), rel=1e-5)
    assert bounds.element_step(4.0, 8e-9, 2e5) == pytest.approx(8e-7)  # c = 5e6 mm/s


def test_step_of_two_masses_alone():
    """Frequencies of two free masses on a spring: 0 and k (1/m_1 + 1/m_2)."""
    m, k = np.array([2e-6, 5e-6]), 3e5
    assert bounds.contact_step(k, *m) == pytest.approx(step_of(m, np.array([k])), rel=1e-12)


def test_march_grows_above_the_step_and_not_below():
    """Central differences in time, with contact, a hundredth above and below the step of the eigenvalues."""
    m, k = np.r_[masses(np.ones(5), 1.0), masses(np.ones(5), 1.0)], np.r_[np.ones(5), 3.0, np.ones(5)]
    stiffness = np.diag(np.r_[k, 0.0] + np.r_[0.0, k]) - np.diag(k, 1) - np.diag(k, -1)
    for share, grows in ((0.99, False), (1.01, True)):
        dt = share * step_of(m, k)
        old = new = np.random.default_rng(1).normal(size=len(m))
        for _ in range(600):
            old, new = new, 2 * new - old - dt**2 * (stiffness @ new) / m
        assert (np.abs(np.diff(new)).max() > 1e3) == grows


def test_bound_is_safe_and_close():
    """Never above the true step: at most 11 % below for like bars. The smaller of the two alone: up to 27 % above."""
    short, alone = [], []
    for ratio in np.logspace(-2, 3, 200):
        true = bounds.step_ratio(ratio, 1.0, 1.0)
        contact = bounds.contact_step(ratio, 0.5, 0.5)
        short.append(bounds.stable_step(1.0, contact) / true)
        alone.append(min(1.0, contact) / true)
    assert max(short) <= 1 and 0.894 < min(short) < 0.895  # sqrt(0.8) at k h/E = 2/3
    assert 1.26 < max(alone) < 1.2721  # sqrt(golden section) at 1


@pytest.mark.parametrize("seed", range(8))
def test_bound_is_safe_for_any_two_bars(seed):
    draw = np.random.default_rng(seed)
    h_1, h_2 = draw.uniform(0.5, 3, size=(2, 9))
    E_1, E_2, rho_1, rho_2 = draw.uniform(0.2, 5, 4)
    m_1, m_2 = masses(h_1, rho_1), masses(h_2, rho_2)
    apart = min(step_of(m_1, E_1 / h_1), step_of(m_2, E_2 / h_2))
    for k in np.logspace(-3, 4, 15):
        safe = bounds.stable_step(apart, bounds.contact_step(k, m_1[-1], m_2[0]))
        true = joined(h_1, h_2, E_1, E_2, rho_1, rho_2, k)
        assert 0.7 * true < safe <= true  # the two limits meet at most in sqrt(1/2)
    k = bounds.largest_node_stiffness(0.9, apart, m_1[-1], m_2[0])
    assert bounds.stable_step(apart, bounds.contact_step(k, m_1[-1], m_2[0])) == pytest.approx(0.9 * apart)
    assert joined(h_1, h_2, E_1, E_2, rho_1, rho_2, k) >= 0.9 * apart
