"""Loops against sliders marched one by one, the four-parameter element against its density. Basis derived."""

import numpy as np
import pytest
from scipy.integrate import quad

from slip.friction.closed import iwan, loops

CLOSE = 1e-9


class Sliders:
    """Springs in parallel, each with a limit, moved together."""

    def __init__(self, springs, limits):
        self.springs, self.limits = springs, limits
        self.slip, self.at, self.work = np.zeros(springs.size), 0.0, 0.0

    def move(self, u):
        force = np.clip(self.springs * (u - self.slip), -self.limits, self.limits)
        slip = u - force / self.springs
        self.work += float(np.sum(np.abs(force * (slip - self.slip))))  # what friction takes
        self.slip, self.at = slip, u
        return float(np.sum(force))

    def cycle(self, u_0):
        """Energy of one steady cycle between -u_0 and u_0."""
        self.move(u_0), self.move(-u_0), self.move(u_0)
        self.work = 0.0
        self.move(-u_0), self.move(u_0)
        return self.work


@pytest.mark.parametrize("u_0", [0.3, 0.5, 0.501, 2.0])
def test_slider(u_0):
    k, f_s = 4.0, 2.0
    assert loops.slider_force(u_0, k, f_s) == pytest.approx(Sliders(np.array([k]), np.array([f_s])).move(u_0))
    assert loops.slider_energy(u_0, k, f_s) == pytest.approx(
        Sliders(np.array([k]), np.array([f_s])).cycle(u_0), abs=1e-12
    )
    assert loops.slider_energy(u_0, k, f_s) == pytest.approx(4 * f_s * max(0, u_0 - f_s / k))
    assert loops.slider_tangent_stiffness(u_0, k, f_s) == (k if u_0 < 0.5 else 0)
    assert loops.slider_displacement(-1.5, k, f_s) == -1.5 / k


@pytest.mark.parametrize("part", [0.05, 0.5, 0.97, 1.5])
def test_evenly_spread_sliders(part):
    """Limits evenly spread from 0 to 2 F_S, in total k and F_S."""
    k, F_S, n = 5.0, 3.0, 20000
    strengths = (np.arange(n) + 0.5) / n * 2 * F_S
    element = Sliders(np.full(n, k / n), strengths / n)
    u = part * loops.uniform_slip_displacement(k, F_S)
    assert loops.uniform_slip_displacement(k, F_S) == pytest.approx(2 * F_S / k)
    assert loops.uniform_force(u, k, F_S) == pytest.approx(element.move(u), rel=1e-6)
    assert loops.uniform_energy(u, k, F_S) == pytest.approx(element.cycle(u), rel=1e-5)
    step = 1e-7
    slope = (loops.uniform_force(u + step, k, F_S) - loops.uniform_force(u - step, k, F_S)) / (2 * step)
    assert loops.uniform_tangent_stiffness(u, k, F_S) == pytest.approx(slope, abs=1e-6)
    if part < 1:
        Q = loops.uniform_force(u, k, F_S)
        assert loops.uniform_displacement(Q, k, F_S) == pytest.approx(u, rel=CLOSE)
        assert loops.uniform_displacement(Q, k, F_S) == pytest.approx(
            2 * F_S / k * (1 - np.sqrt(1 - Q / F_S)), rel=CLOSE
        )
        for masing in (
            loops.energy(lambda x: loops.uniform_displacement(x, k, F_S), Q),
            loops.energy_from_stiffness(
                lambda x: loops.uniform_tangent_stiffness(loops.uniform_displacement(x, k, F_S), k, F_S), Q
            ),
        ):
            assert loops.uniform_energy(u, k, F_S) == pytest.approx(masing, rel=1e-9)


def test_masing_branches_against_the_march():
    """Unloading, reloading and an inner loop of many sliders follow the backbone doubled."""
    k, F_S, n = 5.0, 3.0, 20000
    element = Sliders(np.full(n, k / n), (np.arange(n) + 0.5) / n * 2 * F_S / n)

    def backbone(Q):
        return loops.uniform_displacement(Q, k, F_S)

    turn_u, turn_Q = 0.0, element.move(0.0)
    for target in (0.8, -0.5, 0.3, -0.2):
        Q = element.move(target)
        if turn_Q == 0:
            assert backbone(Q) == pytest.approx(target, rel=1e-6)
        else:
            assert loops.branch(backbone, Q, turn_Q, turn_u) == pytest.approx(target, abs=1e-6)
        turn_u, turn_Q = target, Q
    closed = loops.branch(backbone, -2.0, 2.0, backbone(2.0))
    assert closed == pytest.approx(-backbone(2.0), rel=1e-12)


def test_masing_energy_in_its_three_forms():
    def backbone(Q):
        return 0.1 * Q + 0.02 * Q**3

    Q, area = 2.0, 0.05 * 4 + 0.005 * 16
    W = loops.masing_energy(Q, backbone(Q), area)
    assert pytest.approx(8 * 0.005 * 16, rel=1e-12) == W  # only the cubic part makes a loop: 4 b Q^4 - 2 b Q^4
    assert loops.energy(backbone, Q) == pytest.approx(W, rel=1e-10)
    assert loops.energy_from_stiffness(lambda Q: 1 / (0.1 + 0.06 * Q**2), Q) == pytest.approx(W, rel=1e-10)
    # the area of the loop itself, along both branches
    down = quad(lambda x: loops.branch(backbone, x, Q, backbone(Q)), -Q, Q)[0]
    up = quad(lambda x: loops.branch(backbone, x, -Q, -backbone(Q)), -Q, Q)[0]
    assert down - up == pytest.approx(W, rel=1e-9)
    assert loops.energy_ratio(W, Q, backbone(Q)) == pytest.approx(W / (4 * Q * backbone(Q)))
    assert loops.secant_stiffness(np.array([0.0, Q]), np.array([0.0, backbone(Q)]), 10.0) == pytest.approx(
        [10.0, Q / backbone(Q)]
    )


# Four-parameter Iwan element

ELEMENTS = [(4000.0, 1.5e4, -0.5, 0.1), (4000.0, 1.5e4, -0.2, 0.0), (900.0, 3e4, -0.9, 2.0), (900.0, 3e4, 0.0, 0.5)]


def test_check_35(validate):
    """F_S 4000 N, K_T 1.5e7 N/m, chi -.5, b .1."""
    element = (4000.0, 1.5e4, -0.5, 0.1)
    phi_max, source = iwan.slip_displacement(*element), "sliders, marched"
    validate(35, "four-parameter Iwan: phi_max", source, "derived", "6.7692e-4", phi_max * 1e-3, unit="m")
    energy = iwan.energy(0.3 * phi_max, *element) * 1e-3
    validate(35, "four-parameter Iwan: energy at .3 phi_max", source, "derived", "0.16428", energy, unit="J")


@pytest.mark.parametrize("element", ELEMENTS)
def test_density_carries_the_parameters(element):
    """Sliders of stiffness R phi^chi dphi and a last one of S at phi_max: all stick at first, all slip in the end."""
    F_S, K_T, chi, beta = element
    phi_max = iwan.slip_displacement(*element)
    R, S = iwan.power_strength(F_S, chi, beta, phi_max), iwan.jump_stiffness(F_S, chi, beta, phi_max)
    stuck = quad(lambda x: R, 0, phi_max, weight="alg", wvar=(chi, 0))[0] + S
    assert stuck == pytest.approx(K_T, rel=1e-8)
    slipping = quad(lambda x: R, 0, phi_max, weight="alg", wvar=(chi + 1, 0))[0] + S * phi_max
    assert slipping == pytest.approx(F_S, rel=1e-8)
    assert beta == pytest.approx(S / (K_T - S), rel=1e-9)


@pytest.mark.parametrize("element", ELEMENTS)
@pytest.mark.parametrize("part", [0.02, 0.3, 0.9, 1.3])
def test_four_parameter_element_against_the_march(element, part):
    F_S, K_T, chi, beta = element
    phi_max = iwan.slip_displacement(*element)
    R, S = iwan.power_strength(F_S, chi, beta, phi_max), iwan.jump_stiffness(F_S, chi, beta, phi_max)
    n = 40000
    ends = phi_max * (np.arange(n + 1) / n) ** 3  # finer where the density is singular
    springs = np.append(R * np.diff(ends ** (chi + 1)) / (chi + 1), S)
    middles = np.diff(ends ** (chi + 2)) / (chi + 2) / (np.diff(ends ** (chi + 1)) / (chi + 1))
    limits = springs * np.append(middles, phi_max)
    if S == 0:
        springs, limits = springs[:-1], limits[:-1]
    sliders, u = Sliders(springs, limits), part * phi_max
    Q = sliders.move(u)
    assert iwan.force(u, *element) == pytest.approx(Q, rel=1e-6)
    assert iwan.force(-u, *element) == -iwan.force(u, *element)
    assert iwan.secant_stiffness(u, *element) == pytest.approx(Q / u, rel=1e-6)
    assert iwan.energy(u, *element) == pytest.approx(sliders.cycle(u), rel=1e-5)
    step = 1e-6 * phi_max
    slope = (iwan.force(u + step, *element) - iwan.force(u - step, *element)) / (2 * step)
    assert iwan.tangent_stiffness(u, *element) == pytest.approx(slope, abs=1e-5 * K_T)
    if part < 1:
        assert iwan.displacement(iwan.force(u, *element), *element) == pytest.approx(u, rel=1e-9)
        masing = loops.energy(lambda x: iwan.displacement(x, *element), iwan.force(u, *element))
        assert iwan.energy(u, *element) == pytest.approx(masing, rel=1e-6)


def test_uniform_element_is_an_iwan_element():
    """chi = 0 without a jump spreads the limits evenly."""
    u = np.linspace(-1.5, 1.5, 7)
    assert iwan.force(u, 3.0, 5.0, 0.0, 0.0) == pytest.approx(loops.uniform_force(u, 5.0, 3.0), rel=1e-12)
    assert iwan.energy(u, 3.0, 5.0, 0.0, 0.0) == pytest.approx(loops.uniform_energy(u, 5.0, 3.0), rel=1e-12)


def test_small_cycles_grow_with_the_exponent():
    for chi in (-0.8, -0.3):
        W = [iwan.energy(u, 4000.0, 1.5e4, chi, 0.2) for u in (1e-6, 2e-6)]
        assert np.log2(W[1] / W[0]) == pytest.approx(3 + chi, rel=1e-9)


def test_gross_slip_is_said():
    for function, arguments in (
        (loops.slider_displacement, (4.0, 3.0)),
        (loops.uniform_displacement, (4.0, 3.0)),
        (iwan.displacement, (3.0, 5.0, -0.5, 0.1)),
    ):
        for Q in (3.0, -3.5, np.nan, np.array([1.0, 4.0])):
            with pytest.raises(ValueError, match="slips wholly at 3 N"):
                function(Q, *arguments)
    for chi, beta in ((-1.0, 0.1), (-0.5, -0.1), (np.nan, 0.1)):
        with pytest.raises(ValueError, match="chi must be above -1"):
            iwan.force(0.1, 3.0, 5.0, chi, beta)
