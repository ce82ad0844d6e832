"""Lap joints, rows of bolts and bending layers against small simulations that know only springs, bars and friction.

Basis derived, but for the numbers of the checks, whose digits are as printed.
"""

from math import inf

import numpy as np
import pytest
from scipy.integrate import quad, solve_bvp, trapezoid
from scipy.optimize import minimize
from scipy.sparse import diags_array, lil_array
from scipy.sparse.linalg import spsolve

from slip.friction.closed import lap, lap_field, lap_limits, layers, loops, rows

CLOSE = 1e-9
RIGID_BASE = inf
SIMULATION = "bars with sliders, simulated"


class Bars:
    """Two bars of n pieces with a slider behind a spring at every node; strip 2 pulled at the left, 1 at the right."""

    def __init__(self, EA_1, EA_2, k, q_l, L, n):
        self.m = n + 1
        h = L / n
        share = np.full(self.m, h)
        share[[0, -1]] = h / 2
        self.spring, self.limit = k * share, q_l * share
        self.bars = lil_array((2 * self.m, 2 * self.m))
        for strip, EA in ((0, 1e6 * EA_2 if np.isinf(EA_1) else EA_1), (1, EA_2)):  # nodes in turn: narrow bands
            at = 2 * np.arange(n) + strip
            for i, j, sign in ((at, at, 1), (at + 2, at + 2, 1), (at, at + 2, -1), (at + 2, at, -1)):
                for x, y in zip(i, j, strict=True):
                    self.bars[x, y] += sign * EA / h
        self.slip = np.zeros(self.m)
        self.lost = 0.0

    def pull(self, P):
        """Go on to the load P in one step (slip does not turn round on the way); the extension."""
        m, slipping = self.m, np.zeros(self.m)
        for _ in range(300):
            spring = np.where(slipping == 0, self.spring, 0.0)
            held = np.where(slipping == 0, -spring * self.slip, slipping * self.limit)  # force = spring g + held
            between = np.zeros(2 * m - 1)
            between[::2] = -spring
            matrix = self.bars + diags_array([between, np.repeat(spring, 2), between], offsets=[-1, 0, 1])
            right = np.stack([-held, held], axis=1).ravel()
            right[2 * m - 2] += P
            keep = np.arange(2 * m) != 1  # the left end of strip 2 is held
            u = np.zeros(2 * m)
            u[keep] = spsolve(matrix.tocsc()[keep][:, keep], right[keep])
            g = u[::2] - u[1::2]
            trial = self.spring * (g - self.slip)
            now = np.where(np.abs(trial) > self.limit * (1 + 1e-10), np.sign(trial), 0.0)
            if np.array_equal(now, slipping):
                force = np.clip(trial, -self.limit, self.limit)
                new_slip = g - force / self.spring
                self.lost += float(np.sum(np.abs(force * (new_slip - self.slip))))
                self.slip, self.slipping, self.motion, self.force = new_slip, slipping, g, force
                return u[2 * m - 2] - u[1]
            slipping = now
        raise AssertionError("no pattern of stick and slip found")


# EA_1, EA_2, k, q_l, L and a share of gross slip: which ends slip is what differs
JOINTS = {
    "equal": (8e6, 8e6, 4e3, 300.0, 80.0, 0.85),
    "equal, stuck": (8e6, 8e6, 4e3, 300.0, 80.0, 0.6),
    "equal, nearly gross": (8e6, 8e6, 4e3, 300.0, 80.0, 0.995),
    "unequal, soft end only": (9e6, 4e6, 6e3, 300.0, 90.0, 0.5),
    "unequal, other end soft": (4e6, 9e6, 6e3, 300.0, 90.0, 0.5),
    "unequal, both ends": (9e6, 4e6, 6e3, 300.0, 90.0, 0.9),
    "rigid base": (RIGID_BASE, 7e6, 5e3, 200.0, 120.0, 0.7),
    "stiff plate on a thin one": (8e7, 4e6, 6e3, 300.0, 90.0, 0.9),
}


@pytest.mark.parametrize("name", JOINTS)
def test_lap_against_bars_with_sliders(name):
    *joint, share = JOINTS[name]
    EA_1, EA_2, k, q_l, L = joint
    P, n = share * q_l * L, 400
    bars = Bars(*joint, n)
    u = bars.pull(P)
    assert lap.displacement(P, *joint) == pytest.approx(u, rel=2e-4)
    a_0, a_L = lap.slip_lengths(P, *joint)
    slips = bars.slipping != 0
    first, last = np.argmin(slips), np.argmin(slips[::-1])  # nodes that slip at either end
    assert a_0 == pytest.approx(first * L / n, abs=2.5 * L / n)
    assert a_L == pytest.approx(last * L / n, abs=2.5 * L / n)
    assert (a_0 == 0) == (first == 0) and (a_L == 0) == (last == 0)
    g_0, g_L = lap.end_motions(P, *joint)
    assert [g_0, g_L] == pytest.approx([bars.motion[0], bars.motion[-1]], rel=2e-3)
    x = np.linspace(0, L, n + 1)
    assert lap_field.traction(x, P, *joint) == pytest.approx(bars.force / bars.limit * q_l, abs=0.01 * q_l)
    assert lap_field.slip(x, P, *joint) == pytest.approx(bars.slip, abs=2e-3 * abs(u))
    assert lap_field.strip_force(x[1:-1], P, *joint) == pytest.approx(
        (np.cumsum(bars.force) - bars.force / 2)[1:-1], abs=2e-3 * P
    )
    assert bars.pull(-P) == pytest.approx(-u, rel=1e-9)  # Masing: the loop closes at the other corner
    bars.lost = 0.0
    bars.pull(P), bars.pull(-P)
    assert lap.energy(P, *joint) == pytest.approx(bars.lost, rel=4e-3, abs=1e-9)
    bars.pull(P)
    bars.pull(0.0), bars.pull(P)
    bars.lost = 0.0
    bars.pull(0.0), bars.pull(P)
    assert lap.energy(P / 2, *joint) == pytest.approx(bars.lost, rel=4e-3, abs=1e-9)


@pytest.mark.parametrize("name", JOINTS)
def test_lap_fields_balance(name):
    """Shear flow sums to the force within the limit; slip is the motion's excess; energy from both routes."""
    *joint, share = JOINTS[name]
    EA_1, EA_2, k, q_l, L = joint
    P = share * q_l * L
    a_0, a_L = lap.slip_lengths(P, *joint)
    inner = [x for x in (a_0, L - a_L) if 0 < x < L]
    total = quad(lambda x: lap_field.traction(x, P, *joint), 0, L, points=inner, epsrel=1e-11)[0]
    assert total == pytest.approx(P, rel=1e-8)
    assert lap_field.strip_force(np.array([0.0, L]), P, *joint) == pytest.approx([0.0, P], abs=1e-9 * P)
    part = quad(lambda x: lap_field.traction(x, P, *joint), 0, 0.3 * L, points=[x for x in inner if x < 0.3 * L])[0]
    assert lap_field.strip_force(0.3 * L, P, *joint) == pytest.approx(part, rel=1e-7)
    x = np.linspace(0, L, 301)
    assert np.all(lap_field.traction(x, P, *joint) <= q_l)
    for at, motion in zip((0.0, L), lap.end_motions(P, *joint), strict=True):
        assert lap_field.slip(at, P, *joint) == pytest.approx(max(0.0, motion - q_l / k), abs=1e-12)
    spent = quad(lambda x: 4 * q_l * lap_field.slip(x, P, *joint), 0, L, points=inner or None)[0]
    assert lap.energy(P, *joint) == pytest.approx(spent, rel=1e-8, abs=1e-12)
    masing = loops.energy(lambda force: lap.displacement(force, *joint), P)
    assert lap.energy(P, *joint) == pytest.approx(masing, rel=2e-4, abs=1e-9 * P)
    step = 1e-5 * P
    slope = (lap.displacement(P + step, *joint) - lap.displacement(P - step, *joint)) / (2 * step)
    assert lap.tangent_stiffness(P, *joint) == pytest.approx(1 / slope, rel=1e-5)
    assert lap.secant_stiffness(P, *joint) == pytest.approx(P / lap.displacement(P, *joint), rel=CLOSE)


@pytest.mark.parametrize("name", JOINTS)
def test_the_conditions_that_define_the_slip_lengths(name):
    """Put back into the formula of its state; below the onset nothing slips, above it something does."""
    *joint, share = JOINTS[name]
    EA_1, EA_2, k, q_l, L = joint
    P, D = share * q_l * L, 1 / EA_1 + 1 / EA_2
    w = np.sqrt(k * D)
    a_0, a_L = lap.slip_lengths(P, *joint)
    P_on = lap.onset(q_l, k, EA_1, EA_2, w, L)
    if a_0 and a_L:
        c = L - a_0 - a_L
        assert lap.both_ends_force(c, q_l, w, L) == pytest.approx(P, rel=CLOSE)
    elif a_0 or a_L:
        soft, stiff = min(EA_1, EA_2), max(EA_1, EA_2)
        a = max(a_0, a_L)
        assert lap.one_end_force(a, q_l, soft, stiff, w, L) == pytest.approx(P, rel=CLOSE)
        left = (q_l / k) * w * np.sinh(w * (L - a)) + (D * q_l * a - P / soft) * np.cosh(w * (L - a))
        assert left == pytest.approx(P / stiff, rel=1e-7, abs=1e-9 * P / soft)
    else:
        assert P_on > P
    assert max(lap.slip_lengths(P_on * (1 - 1e-9), *joint)) == 0
    assert max(lap.slip_lengths(P_on * (1 + 1e-6), *joint)) > 0
    assert max(lap.end_motions(P_on, *joint)) == pytest.approx(q_l / k, rel=1e-6)


@pytest.mark.parametrize(
    ("EA_1", "EA_2", "k", "L"), [(8e6, 8e6, 4e3, 80.0), (9e6, 4e6, 6e3, 90.0), (inf, 4e6, 2e2, 50.0)]
)
def test_stuck_joint_against_its_differential_equation(EA_1, EA_2, k, L):
    """g'' = k D g with the strains of the pulled ends, solved by collocation."""
    D = 1 / EA_1 + 1 / EA_2
    x = np.linspace(0, L, 200)
    found = solve_bvp(
        lambda x, y: np.array([y[1], k * D * y[0]]),
        lambda a, b: np.array([a[1] + 1 / EA_2, b[1] - 1 / EA_1]),
        x,
        np.ones((2, x.size)) * 1e-7,
        tol=1e-10,
    )
    g_0, g_L = found.sol(0)[0], found.sol(L)[0]
    passed = [quad(lambda s: k * found.sol(s)[0], 0, y)[0] for y in np.linspace(0, L, 41)]
    stretch_1 = trapezoid(passed, dx=L / 40) / EA_1
    w = lap.decay(k, D)
    assert lap.stuck_compliance(EA_1, EA_2, w, L) == pytest.approx(g_0 + stretch_1, rel=1e-4)
    assert lap.onset(100.0, k, EA_1, EA_2, w, L) == pytest.approx(100 / k / max(g_0, g_L), rel=1e-6)
    assert lap.initial_stiffness(EA_1, EA_2, k, L) == pytest.approx(1 / lap.stuck_compliance(EA_1, EA_2, w, L))
    step = 1e-4
    slope = np.log(lap.initial_stiffness(EA_1, EA_2, k * np.exp(step), L))
    slope -= np.log(lap.initial_stiffness(EA_1, EA_2, k * np.exp(-step), L))
    assert lap.interface_share(EA_1, EA_2, k, L) == pytest.approx(slope / (2 * step), rel=1e-6)


def test_one_strip_on_a_rigid_base_is_two_strips():
    EA, k, q_l, L = 7e6, 2e3, 200.0, 60.0
    beta = np.sqrt(k / EA)
    assert lap_limits.base_stiffness(EA, beta, L) == pytest.approx(lap.initial_stiffness(inf, EA, k, L), rel=CLOSE)
    assert lap_limits.base_onset(q_l, beta, L) == pytest.approx(lap.onset(q_l, k, inf, EA, beta, L), rel=CLOSE)
    assert lap_limits.base_sensitivity(beta, L) == pytest.approx(lap.interface_share(inf, EA, k, L), rel=CLOSE)
    P = 0.9 * q_l * L
    a, other = lap.slip_lengths(P, inf, EA, k, q_l, L)
    assert other == 0 and lap_limits.base_force(a, q_l, beta, L) == pytest.approx(P, rel=CLOSE)
    # its end's motion, by the strain that the slipping length adds to the elastic one
    g = q_l / k + q_l * a / (EA * beta) * np.tanh(beta * (L - a)) + q_l * a**2 / (2 * EA)
    assert lap.displacement(P, inf, EA, k, q_l, L) == pytest.approx(g, rel=CLOSE)


def test_sensitivity_of_short_and_long_joints():
    assert lap_limits.base_sensitivity(0.1, np.array([1e-3, 500.0])) == pytest.approx([1.0, 0.5], rel=1e-6)
    # two strips that stretch themselves: a long joint hardly feels its interface
    assert lap.interface_share(8e6, 8e6, 4e3, 1e-2) == pytest.approx(1.0, rel=1e-3)
    assert lap.interface_share(8e6, 8e6, 4e3, 5000.0) < 0.02
    # the end motion of two equal strips follows the one-strip form with omega L for 2 beta L
    EA, k, L = 8e6, 4e3, 80.0
    log_motion = [np.log(lap.end_motions(1.0, EA, EA, f * k, 1.0, L)[0]) for f in (np.exp(1e-4), np.exp(-1e-4))]
    expected = lap_limits.base_sensitivity(np.sqrt(2 * k / EA) / 2, L)
    assert (log_motion[1] - log_motion[0]) / 2e-4 == pytest.approx(expected, rel=1e-6)


# Checks 25 to 28 (N, mm: 1e9 N/m2 are 1e3 N/mm2, 1e5 N/m are 100 N/mm)


def test_check_25_two_equal_strips(validate):
    joint = {"EA_1": 8e6, "EA_2": 8e6, "k": 4e3, "q_l": 300.0, "L": 80.0}
    rigid = joint | {"k": inf}
    w = lap.decay(4e3, 2 / 8e6)
    for what, printed, got, unit in (
        ("first slip", "16173.39", lap.equal_onset(300.0, w, 80.0), "N"),
        ("first slip, form for any strips", "16173.39", lap.onset(300.0, 4e3, 8e6, 8e6, w, 80.0), "N"),
        ("extension at 20.4 kN", "2.008055e-4", lap.displacement(20400.0, **joint) * 1e-3, "m"),
        ("energy, +-20.4 kN", "0.29820", lap.energy(20400.0, **joint) * 1e-3, "J"),
        ("energy, 0 to 20.4 kN", "0", lap.energy(10200.0, **joint) * 1e-3, "J"),
        ("energy, +-20.4 kN, rigid stick", "1.17912", lap.energy(20400.0, **rigid) * 1e-3, "J"),
        ("energy, 0 to 20.4 kN, rigid stick", "0.14739", lap.energy(10200.0, **rigid) * 1e-3, "J"),
        ("the same in one line", "1.17912", lap_limits.rigid_energy(20400.0, 8e6, 300.0) * 1e-3, "J"),
        ("from 0, in one line", "0.14739", lap_limits.rigid_pulsating_energy(20400.0, 8e6, 300.0) * 1e-3, "J"),
    ):
        validate(25, f"two equal strips: {what}", SIMULATION, "derived", printed, got, unit=unit)
    assert lap.energy(10200.0, **joint) == 0


def test_check_26_long_strip(validate):
    beta = np.sqrt(2e3 / 7e6)
    P = 1.6 * lap_limits.base_onset(200.0, beta, 1e4)
    for what, got in (
        ("long form", lap_limits.long_base_energy(200.0, 2e3, beta, 1.6)),
        ("any length, at 10 m", lap.energy(P, inf, 7e6, 2e3, 200.0, 1e4)),
    ):
        validate(
            26,
            f"strip on a rigid base, energy at 1.6 of first slip: {what}",
            SIMULATION,
            "derived",
            "1.0223",
            got * 1e-3,
            unit="J",
        )


def test_check_27_two_layer_cantilever(validate):
    """E 210e9, b .02, h .01, L .3, mu .2, p 2e6, P 1200 in SI."""
    got = layers.layers_onset(0.2, 2.0, 20.0, 10.0)
    validate(27, "two-layer cantilever: first slip", "energy method", "derived", "106.667", got, unit="N")
    got = layers.layers_energy(1200.0, 210e3, 20.0, 10.0, 300.0, 0.2, 2.0) * 1e-3
    validate(27, "two-layer cantilever: energy per cycle", "energy method", "derived", "4.49829", got, unit="J")


BARS = {"EA_1": 210e3 * 12 * 60, "EA_2": 210e3 * 12 * 60, "L": 100.0}
THROUGH = {
    "no shear through the thickness": (0.0, ("41.616", "20.496", "6.4807")),
    "nu 0": (2 * layers.thickness_compliance(12.0, 210e3 / 2), ("22.54", "7.36", "0.874")),
    "nu 0.3": (2 * layers.thickness_compliance(12.0, 210e3 / 2.6), ("20.96", "6.58", "0.755")),
}


@pytest.mark.parametrize("name", THROUGH)
@pytest.mark.parametrize("number", range(3))
def test_check_28_compliance_error(name, number, validate):
    """Two steel bars, t 12, b 60: extension of the stuck overlap against that of rigid stick with the same t/(3 G)."""
    through, errors = THROUGH[name]
    k_t = (3000.0, 12000.0, 120000.0)[number]

    def compliance(k_t):
        return 1 / lap.initial_stiffness(BARS["EA_1"], BARS["EA_2"], 60 * layers.in_series(k_t, through), BARS["L"])

    error = 100 * (compliance(k_t) / compliance(inf) - 1)
    what = f"two steel bars, {name}, k_t {k_t:.0f} N/mm3: compliance against rigid stick"
    validate(28, what, SIMULATION, "derived", errors[number], error, unit="%")


def test_check_28_sum_of_the_plates(validate):
    for name, printed in (("nu 0", "13125"), ("nu 0.3", "10096")):
        what = f"two steel bars, {name}: 1/sum t/(3 G)"
        validate(28, what, "energy of a linear shear stress", "derived", printed, 1 / THROUGH[name][0], unit="N/mm3")


def test_check_28_motion_at_30_kN(validate):
    q_l = 0.2 * 60 * 60

    def motion(k_t):
        return lap.end_motions(30e3, **BARS, k=60.0 * k_t, q_l=q_l)[0] * 1e3

    for k_t, total, elastic, true in ((3000, "4.13", "4.00", "0.13"), (12000, "2.5677", "1.00", "1.57")):
        returned = lap.elastic_slip(q_l, 60.0 * k_t) * 1e3
        for what, printed, got in (
            ("end motion", total, motion(k_t)),
            ("elastic slip", elastic, returned),
            ("true slip", true, motion(k_t) - returned),
        ):
            validate(28, f"at 30 kN, k_t {k_t} N/mm3: {what}", SIMULATION, "derived", printed, got, unit="um")
    for name, k_t, printed in (("120000 N/mm3", 120000, "2.1168"), ("rigid", inf, "2.07")):
        validate(28, f"at 30 kN, k_t {name}: end motion", SIMULATION, "derived", printed, motion(k_t), unit="um")
    rigid = lap_limits.rigid_slip_length(30e3, BARS["EA_1"], 2 / BARS["EA_1"], q_l)
    validate(28, "at 30 kN, rigid stick: slip length", SIMULATION, "derived", "20.8", rigid, unit="mm")
    assert lap.slip_lengths(30e3, **BARS, k=inf, q_l=q_l) == pytest.approx([rigid, rigid], rel=CLOSE)


@pytest.mark.parametrize(("EA_1", "EA_2"), [(8e6, 8e6), (9e6, 4e6), (inf, 4e6)])
def test_rigid_stick_is_the_limit_of_stiff_interfaces(EA_1, EA_2):
    P, q_l, L = 9000.0, 300.0, 80.0
    for function in (lap.displacement, lap.energy):
        rigid = function(P, EA_1, EA_2, inf, q_l, L)
        errors = [abs(function(P, EA_1, EA_2, k, q_l, L) / rigid - 1) for k in (1e8, 1e10)]
        assert errors[1] < 1.2 * errors[0] / 10 and errors[1] < 1e-3  # like 1/sqrt(k) while slip is long
    a = lap.slip_lengths(P, EA_1, EA_2, inf, q_l, L)
    D = 1 / EA_1 + 1 / EA_2
    assert a == pytest.approx([lap_limits.rigid_slip_length(P, EA, D, q_l) for EA in (EA_2, EA_1)], abs=1e-9)
    assert lap.energy(P, EA_1, EA_2, inf, q_l, L) == pytest.approx(
        2 * P**3 / (3 * q_l * D**2) * (1 / EA_1**3 + 1 / EA_2**3), rel=1e-9
    )


# Shear through the thickness


def test_thickness_compliance_from_its_energy():
    """tau (1 - z/t) stores tau^2 t/(6 G) = tau^2 C/2; in a plate sheared from both faces tau runs through to -tau."""
    t, G = 12.0, 80e3
    stored = quad(lambda z: (1 - z / t) ** 2 / (2 * G), 0, t)[0]
    assert layers.thickness_compliance(t, G) == pytest.approx(2 * stored, rel=CLOSE)
    stored = quad(lambda z: (1 - 2 * z / t) ** 2 / (2 * G), 0, t)[0]
    assert 2 * layers.inner_thickness_compliance(t, G) == pytest.approx(2 * stored, rel=CLOSE)
    C = layers.thickness_compliance(t, G)
    assert layers.in_series(2e4, 2 * C) == pytest.approx(1 / (1 / 2e4 + 2 * C), rel=CLOSE)


# Bending layers


def layers_by_energy(P, E, b, h, L, f):
    """Polynomials for the deflection and the sliding of the halves; the friction f per length resists h v' + w.

    v the deflection, w the stretch of the upper layer's axis less that of the lower. Exact once all of it slips.
    """
    I, A = b * h**3 / 12, b * h  # noqa: E741
    s = np.polynomial.legendre.leggauss(12)
    x, weight = (s[0] + 1) * L / 2, s[1] * L / 2
    powers = np.arange(3)
    v_1 = np.array([(p + 2) * x ** (p + 1) for p in powers])
    v_2 = np.array([(p + 2) * (p + 1) * x**p for p in powers])
    w_0, w_1 = np.array([x ** (p + 1) for p in powers]), np.array([(p + 1) * x**p for p in powers])
    K = np.zeros((6, 6))
    K[:3, :3] = 2 * E * I * np.einsum("ix,jx,x->ij", v_2, v_2, weight)
    K[3:, 3:] = E * A / 2 * np.einsum("ix,jx,x->ij", w_1, w_1, weight)
    load = np.concatenate([P * L ** (powers + 2) - f * h * v_1 @ weight, -f * w_0 @ weight])
    scale = 1 / np.sqrt(np.diag(K))
    found = scale * np.linalg.solve(K * np.outer(scale, scale), load * scale)
    slip = h * found[:3] @ v_1 + found[3:] @ w_0
    return found[:3] @ L ** (powers + 2), 4 * f * np.sum(weight * slip), slip


def test_layers_against_the_energy_method():
    E, b, h, L, mu, p, P = 210e3, 20.0, 10.0, 300.0, 0.2, 2.0, 1200.0
    deflection, lost, slip = layers_by_energy(P, E, b, h, L, mu * p * b)
    assert np.all(slip > 0)
    assert layers.layers_slipping_deflection(P, E, b, h, L, mu, p) == pytest.approx(deflection, rel=1e-8)
    assert layers.layers_energy(P, E, b, h, L, mu, p) == pytest.approx(lost, rel=1e-8)
    P_on = layers.layers_onset(mu, p, b, h)
    assert layers_by_energy(P_on, E, b, h, L, mu * p * b)[2] == pytest.approx(0 * slip, abs=1e-9)  # all at once
    whole = P_on * L**3 / (3 * E * b * (2 * h) ** 3 / 12)
    assert layers.layers_stuck_deflection(P_on, E, b, h, L) == pytest.approx(whole, rel=CLOSE)
    assert layers.layers_slipping_deflection(P_on, E, b, h, L, mu, p) == pytest.approx(whole, rel=CLOSE)
    assert layers.layers_energy(0.9 * P_on, E, b, h, L, mu, p) == 0

    def backbone(force):
        if abs(force) <= P_on:
            return layers.layers_stuck_deflection(force, E, b, h, L)
        return np.sign(force) * layers.layers_slipping_deflection(abs(force), E, b, h, L, mu, p)

    area = quad(backbone, 0, P, points=[P_on])[0]
    assert layers.layers_energy(P, E, b, h, L, mu, p) == pytest.approx(
        loops.masing_energy(P, backbone(P), area), rel=1e-9
    )


# Rows of bolts


def test_check_19_five_bolts(validate):
    one = rows.gap_stiffness(1.0, 1.0)
    row = ([1.0] * 5, [one] * 4, [one] * 4)
    share = rows.shares(*row)
    for i, part in enumerate((7, 2, 1, 2, 7)):
        what = f"five bolts in a row: 19 times the share of bolt {i + 1}"
        validate(19, what, "least energy of the springs", "derived", part, 19 * share[i], 1e-9)
    first = rows.first_slip(1.0, share)
    validate(
        19,
        "five bolts in a row: first slip over one bolt's limit",
        "least energy of the springs",
        "derived",
        "2.714",
        first,
    )
    assert rows.forces(5 - 1e-6, *row, [1.0] * 5) == pytest.approx(np.ones(5), abs=1e-5)
    with pytest.raises(ValueError, match="slips wholly at 5 N"):
        rows.forces(5.0, *row, [1.0] * 5)


K_B = np.array([3.0, 2.0, 4.0, 3.0, 1.0, 3.0])
K_1, K_2 = np.array([5.0, 5.0, 4.0, 6.0, 5.0]), np.array([2.0, 2.0, 2.5, 2.0, 3.0])
LIMIT = np.array([1.0, 1.2, 0.0, 1.0, 0.7, 1.1])


def row_by_minimum(P):
    """Complementary energy of springs and plates, least over all forces within their limits that carry P."""
    n = K_B.size

    def energy(R):
        S = np.cumsum(R)[:-1]
        return np.sum(R**2 / K_B) / 2 + np.sum(S**2 / K_1) / 2 + np.sum((P - S) ** 2 / K_2) / 2

    found = minimize(
        energy,
        np.full(n, P / n) * (LIMIT > 0),
        bounds=[(-m, m) for m in LIMIT],
        constraints={"type": "eq", "fun": lambda R: R.sum() - P},
        options={"ftol": 1e-15, "maxiter": 500},
    )
    return found.x


@pytest.mark.parametrize("P", [0.5, 2.0, 3.5, 4.6, 4.97])
def test_row_with_slip_against_least_energy(P):
    R = rows.forces(P, K_B, K_1, K_2, LIMIT)
    assert pytest.approx(P, rel=1e-12) == R.sum()
    assert np.all(np.abs(R) <= LIMIT * (1 + 1e-12))
    assert pytest.approx(row_by_minimum(P), abs=2e-4) == R
    # compatibility, slip included: what the springs and slips differ by is what the plates stretch
    motion = R / K_B + rows.slips(P, K_B, K_1, K_2, LIMIT)
    S = np.cumsum(R)[:-1]
    assert np.diff(motion) == pytest.approx(S / K_1 - (P - S) / K_2, rel=1e-9, abs=1e-12)
    assert rows.displacement(P, K_B, K_1, K_2, LIMIT) == pytest.approx(motion[0] + np.sum(S / K_1), rel=1e-12)
    assert rows.displacement(P, K_B, K_1, K_2, LIMIT) == pytest.approx(motion[-1] + np.sum((P - S) / K_2), rel=1e-12)
    step = 1e-6
    slope = (rows.displacement(P + step, K_B, K_1, K_2, LIMIT) - rows.displacement(P, K_B, K_1, K_2, LIMIT)) / step
    assert rows.tangent_stiffness(P, K_B, K_1, K_2, LIMIT) == pytest.approx(1 / slope, rel=1e-6)


def test_row_energy_by_masing():
    P = 4.6
    places = np.linspace(0, P, 4001)
    area = trapezoid(rows.displacement(places, K_B, K_1, K_2, LIMIT), places)
    masing = loops.masing_energy(P, rows.displacement(P, K_B, K_1, K_2, LIMIT), area)
    assert rows.energy(P, K_B, K_1, K_2, LIMIT) == pytest.approx(masing, rel=1e-5)
    assert rows.energy(0.5, K_B, K_1, K_2, LIMIT + 1) == 0


def test_many_bolts_are_a_lap_joint():
    """A pitch of 1/n of the overlap, every bolt with its part of k and q_l: the error falls like 1/n."""
    EA_1, EA_2, k, q_l, L = 9e6, 4e6, 6e3, 300.0, 90.0
    P, found = 0.9 * q_l * L, []
    for n in (40, 80):
        h = L / n
        plates = [rows.gap_stiffness(EA, h) * np.ones(n - 1) for EA in (EA_1, EA_2)]
        row = (k * h * np.ones(n), *plates)
        found.append([rows.energy(P, *row, q_l * h * np.ones(n)), rows.initial_stiffness(*row)])
    joint = np.array([lap.energy(P, EA_1, EA_2, k, q_l, L), lap.initial_stiffness(EA_1, EA_2, k, L)])
    first, second = np.array(found)
    assert 2 * second - first == pytest.approx(joint, rel=5e-3)
    assert np.all(np.abs(second - joint) < 0.6 * np.abs(first - joint))


def test_rigid_plates_share_by_stiffness_and_one_bolt_takes_all():
    assert rows.shares(K_B, [inf] * 5, [inf] * 5) == pytest.approx(K_B / K_B.sum(), rel=1e-12)
    assert rows.shares([2.0], [], []) == pytest.approx([1.0])
    assert rows.initial_stiffness([2.0], [], []) == pytest.approx(2.0)


# The limit


@pytest.mark.parametrize("P", [24000.0, -24000.0, 3e4, [1.0, 3e4], np.nan])
@pytest.mark.parametrize(
    "function", [lap.slip_lengths, lap.displacement, lap.energy, lap.tangent_stiffness, lap.secant_stiffness]
)
def test_gross_slip_is_said(function, P):
    with pytest.raises(ValueError, match="slips wholly at 24000 N"):
        function(np.array(P), 8e6, 8e6, 4e3, 300.0, 80.0)
