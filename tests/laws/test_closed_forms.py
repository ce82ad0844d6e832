"""Laws of partial slip on random input: bounds, signs, symmetry, scaling, limits; arrays equal their scalars."""

import importlib
import inspect
import pkgutil
from math import pi

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from slip.base.formulas import Formula
from slip.friction import closed
from slip.friction.closed import (
    bodies,
    cylinder,
    flat,
    iwan,
    lap,
    lap_field,
    layers,
    loops,
    powerlaw,
    rough,
    rows,
    sphere,
    strip,
    superposition,
)

EXACT = 1e-9


def between(low, high):
    return st.floats(low, high, allow_nan=False)


FORCE = between(1, 1e5)
FRICTION = between(0.05, 0.9)
SHARE = between(1e-3, 0.99)  # of the shear that slips
SIGNED = st.one_of(SHARE, SHARE.map(lambda q: -q))
RADIUS = between(0.5, 500)
MODULUS = between(2e4, 2e5)
EXPONENT = between(0.6, 8)


# Contacts: each as functions of (Q, P, mu) at a given pressing


class Contact:
    def __init__(self, profile, rho, displacement, energy, tangent, secant, traction):
        self.profile, self.rho = profile, rho
        self.displacement, self.energy, self.tangent = displacement, energy, tangent
        self.secant, self.traction = secant, traction


def as_sphere(P, R, E_star):
    a, G_star = sphere.contact_radius(P, R, E_star), 0.2 * E_star
    arguments = {"a": a, "G_star": G_star}
    return Contact(
        sphere.profile(R, E_star),
        0.8,
        *(lambda Q, P, mu, f=f: f(Q, P, mu, **arguments) for f in (sphere.displacement, sphere.energy)),
        *(lambda Q, P, mu, f=f: f(Q, P, mu, **arguments) for f in (sphere.tangent_stiffness, sphere.secant_stiffness)),
        lambda r, Q, P, mu: sphere.traction(r, Q, P, mu, a),
    )


def as_cylinder(P, R, E_star):
    a = cylinder.contact_half_width(P, R, E_star)
    far = {"a": a, "E_star": E_star, "D": 1000 * a}
    return Contact(
        cylinder.profile(R, E_star, 1000 * a),
        1.0,
        lambda Q, P, mu: cylinder.displacement(Q, P, mu, **far),
        lambda Q, P, mu: cylinder.energy(Q, P, mu, E_star),
        lambda Q, P, mu: cylinder.tangent_stiffness(Q, P, mu, **far),
        lambda Q, P, mu: cylinder.secant_stiffness(Q, P, mu, **far),
        lambda r, Q, P, mu: cylinder.traction(r, Q, P, mu, a),
    )


def by_rule(profile, rho):
    return Contact(
        profile,
        rho,
        lambda Q, P, mu: superposition.displacement(profile, Q, P, mu, rho),
        lambda Q, P, mu: superposition.energy(profile, Q, P, mu, rho),
        lambda Q, P, mu: superposition.tangent_stiffness(profile, Q, P, mu, rho),
        lambda Q, P, mu: superposition.secant_stiffness(profile, Q, P, mu, rho),
        lambda r, Q, P, mu: superposition.traction(profile, r, Q, P, mu),
    )


CONTACTS = {
    "sphere": as_sphere,
    "cylinder": as_cylinder,
    "cone": lambda P, R, E_star: by_rule(powerlaw.profile(1 / R, 1.0, E_star), 0.8),
    "blunt": lambda P, R, E_star: by_rule(powerlaw.profile(1 / R, 5.0, E_star), 0.8),
    "rounded": lambda P, R, E_star: by_rule(flat.rounded_profile(0.05 * R, R, E_star), 0.8),
    "rounded strip": lambda P, R, E_star: by_rule(strip.profile(0.02 * R, R, E_star, 100 * R), 1.0),
}


@pytest.mark.parametrize("name", CONTACTS)
@settings(max_examples=25, deadline=None)
@given(SIGNED, FORCE, FRICTION, RADIUS, MODULUS)
def test_a_contact_obeys_coulomb_and_loses_energy(name, share, P, mu, R, E_star):
    contact = CONTACTS[name](P, R, E_star)
    Q = share * mu * P
    a, c = contact.profile.radius(P), superposition.stick_radius(contact.profile, Q, P, mu)
    assert 0 <= c <= a
    r = np.linspace(0, 1.3, 27) * a
    q, p = contact.traction(r, Q, P, mu), contact.profile.pressure(r, P)
    assert np.all(np.abs(q) <= mu * p * (1 + EXACT)) and np.all(q * Q >= -EXACT * mu * np.abs(Q) * p)
    assert np.all(np.isfinite(q))
    assert contact.traction(r, -Q, P, mu) == pytest.approx(-q)
    W, u = contact.energy(Q, P, mu), contact.displacement(Q, P, mu)
    assert W > 0 and contact.energy(-Q, P, mu) == pytest.approx(W)
    assert 0 < loops.energy_ratio(W, Q, u) < 1
    assert u * Q > 0 and contact.displacement(-Q, P, mu) == pytest.approx(-u)


@pytest.mark.parametrize("name", CONTACTS)
@settings(max_examples=25, deadline=None)
@given(SHARE, FORCE, FRICTION, RADIUS, MODULUS)
def test_a_contact_softens_as_it_slips(name, share, P, mu, R, E_star):
    """Tangent below secant below the initial stiffness, each the slope of the displacement."""
    contact = CONTACTS[name](P, R, E_star)
    Q = share * mu * P
    start = superposition.initial_stiffness(contact.profile, P, contact.rho)
    secant, tangent = contact.secant(Q, P, mu), contact.tangent(Q, P, mu)
    assert tangent < secant * (1 + EXACT) and secant < start * (1 + EXACT)
    assert contact.secant(0.0, P, mu) == pytest.approx(start) and contact.tangent(0.0, P, mu) == pytest.approx(start)
    step = 1e-4 * mu * P * min(share, 1 - share)
    slope = (contact.displacement(Q + step, P, mu) - contact.displacement(Q - step, P, mu)) / (2 * step)
    assert tangent == pytest.approx(1 / slope, rel=1e-6)
    # more shear moves and loses more; more friction and more clamp less
    for function in (contact.displacement, contact.energy):
        assert function(Q, P, mu) > function(0.9 * Q, P, mu)
        assert function(Q, P, 1.1 * mu) < function(Q, P, mu)
    if name not in ("sphere", "cylinder"):  # those two keep the contact radius that they were given
        assert contact.displacement(Q, 1.1 * P, mu) < contact.displacement(Q, P, mu)
        assert contact.energy(Q, 1.1 * P, mu) < contact.energy(Q, P, mu)


@pytest.mark.parametrize("name", CONTACTS)
@settings(max_examples=15, deadline=None)
@given(st.lists(SIGNED, min_size=2, max_size=4), FORCE, FRICTION, RADIUS, MODULUS)
def test_loads_in_an_array_are_the_single_loads(name, shares, P, mu, R, E_star):
    contact = CONTACTS[name](P, R, E_star)
    Q = np.array(shares) * mu * P
    for function in (contact.displacement, contact.energy, contact.tangent, contact.secant):
        single = [function(float(x), P, mu) for x in Q]
        assert function(Q, P, mu) == pytest.approx(single, rel=EXACT)
        assert all(isinstance(value, float) for value in single)
    a = contact.profile.radius(P)
    grid = contact.traction(np.array([[0.0], [0.5 * a], [2 * a]]), Q, P, mu)
    assert grid.shape == (3, len(shares))
    assert grid[1] == pytest.approx([contact.traction(0.5 * a, x, P, mu) for x in Q], rel=EXACT)


@settings(deadline=None)
@given(SHARE, FORCE, FRICTION, EXPONENT, between(1.01, 50))
def test_contacts_scale_with_the_load(share, P, mu, n, k):
    """All loads times k: radius k^(1/(n+1)), displacement and approach k^(n/(n+1)), energy their product with k."""
    E_star, G_star, A = 1e5, 2.1e4, 0.01
    kappa = powerlaw.shape_factor(n)
    a_1, a_k = (powerlaw.contact_radius(x, A, n, E_star, kappa) for x in (P, k * P))
    assert a_k / a_1 == pytest.approx(k ** (1 / (n + 1)), rel=EXACT)
    Q = share * mu * P
    u_1, u_k = (powerlaw.displacement(f * Q, f * P, mu, a, n, G_star) for f, a in ((1, a_1), (k, a_k)))
    assert u_k / u_1 == pytest.approx(k ** (n / (n + 1)), rel=EXACT)
    W_1, W_k = (powerlaw.energy(f * Q, f * P, mu, a, n, G_star) for f, a in ((1, a_1), (k, a_k)))
    assert W_k / W_1 == pytest.approx(k ** ((2 * n + 1) / (n + 1)), rel=EXACT)
    W_1, W_k = (cylinder.energy(f * Q, f * P, mu, E_star) for f in (1, k))
    assert W_k / W_1 == pytest.approx(k**2, rel=EXACT)


@settings(deadline=None)
@given(between(1e-9, 1e-4), FORCE, FRICTION, between(0.01, 10))
def test_small_loads_lose_energy_with_their_cube(q, P, mu, a):
    """Each closed form keeps its digits where its terms cancel."""
    G_star, E_star, Q = 2e4, 1e5, q * mu * P
    near = {"rel": max(1e-8, 3 * q)}
    small = sphere.small_load_energy(Q, P, mu, a, G_star)
    assert sphere.energy(Q, P, mu, a, G_star) == pytest.approx(small, **near)
    assert small == pytest.approx(Q**3 / (36 * a * mu * P * G_star))
    assert cylinder.energy(Q, P, mu, E_star) == pytest.approx(4 * (mu * P) ** 2 / (pi * E_star) * q**3 / 6, **near)
    assert rough.energy(Q, P, mu, 1e-4) == pytest.approx(2 / 3 * mu * P * 1e-4 * q**3, **near)
    assert sphere.displacement(Q, P, mu, a, G_star) == pytest.approx(Q / (8 * a * G_star), **near)
    assert rough.displacement(Q, P, mu, 1e-4) == pytest.approx(q * 1e-4, **near)


@settings(deadline=None)
@given(between(0, 1), FRICTION, between(1, 3000), between(0, 0.5))
def test_edge_stress_of_a_sphere_grows_as_the_stick_zone_shrinks(s, mu, p_0, nu):
    stress = sphere.sheared_edge_stress(s, mu, p_0, nu)
    assert 0 <= stress <= mu * p_0 * pi * (4 + nu) / 8 * (1 + EXACT)
    assert sphere.sheared_edge_stress(0.9 * s, mu, p_0, nu) >= stress * (1 - EXACT)
    assert sphere.sheared_edge_stress(1.0, mu, p_0, nu) == pytest.approx(0)


@settings(deadline=None)
@given(SHARE, FRICTION, between(1, 3000), between(-1, 1))
def test_bulk_stress_and_the_edge_of_a_cylinder(q, mu, p_0, part):
    s = part * cylinder.largest_bulk_stress(q, mu, p_0) * (1 - 1e-9)
    e_a = cylinder.shift_ratio(s / 2 / 1e5, mu, p_0, 1e5)
    assert abs(e_a) <= 1 - np.sqrt(1 - q)
    alone = cylinder.edge_stress(q, mu, p_0)
    assert alone == pytest.approx(2 * mu * p_0 * np.sqrt(q))
    both = cylinder.edge_stress(q, mu, p_0, e_a, s)
    assert (both - alone) * s >= -EXACT * mu * p_0 * abs(s)  # tension in phase makes it worse, compression better


@settings(deadline=None)
@given(MODULUS, between(0, 0.49), MODULUS, between(0, 0.49))
def test_pairs_of_bodies_do_not_ask_for_an_order(E_1, nu_1, E_2, nu_2):
    assert bodies.normal_modulus(E_1, nu_1, E_2, nu_2) == pytest.approx(bodies.normal_modulus(E_2, nu_2, E_1, nu_1))
    beta = bodies.mismatch(E_1, nu_1, E_2, nu_2)
    assert bodies.mismatch(E_2, nu_2, E_1, nu_1) == pytest.approx(-beta, abs=1e-15) and abs(beta) <= 0.5
    G_1, G_2 = bodies.shear_modulus(E_1, nu_1), bodies.shear_modulus(E_2, nu_2)
    rho = bodies.stiffness_ratio(
        bodies.shear_pair_modulus(G_1, nu_1, G_2, nu_2), bodies.normal_modulus(E_1, nu_1, E_2, nu_2)
    )
    ends = sorted(bodies.like_stiffness_ratio(nu) for nu in (nu_1, nu_2))
    assert ends[0] * (1 - EXACT) <= rho <= ends[1] * (1 + EXACT)


# Lap joints

STRIP = between(1e5, 1e8)
LAP = st.fixed_dictionaries(
    {
        "EA_1": st.one_of(STRIP, st.just(np.inf)),
        "EA_2": STRIP,
        "k": st.one_of(between(1e2, 1e7), st.just(np.inf)),
        "q_l": between(1, 1e4),
        "L": between(5, 500),
    }
)


@settings(max_examples=150, deadline=None)
@given(SIGNED, LAP)
def test_a_lap_obeys_coulomb_and_loses_energy(share, joint):
    P = share * joint["q_l"] * joint["L"]
    a_0, a_L = lap.slip_lengths(P, **joint)
    assert a_0 >= 0 and a_L >= 0 and a_0 + a_L < joint["L"]
    assert lap.slip_lengths(-P, **joint) == (a_0, a_L)
    W, u = lap.energy(P, **joint), lap.displacement(P, **joint)
    assert W >= 0 and u * P > 0
    assert 4 * abs(P * u) >= W
    assert lap.displacement(-P, **joint) == -u and lap.energy(-P, **joint) == W
    x = np.linspace(0, joint["L"], 41)
    flow, slip = lap_field.traction(x, P, **joint), lap_field.slip(x, P, **joint)
    assert np.all(np.isfinite(flow)) and np.all(np.abs(flow) <= joint["q_l"])
    assert np.all(slip * P >= 0)
    assert np.all((slip == 0) | (np.abs(flow) == joint["q_l"]))
    inside = lap_field.strip_force(x, P, **joint) / P
    assert np.all(inside >= -1e-9) and np.all(inside <= 1 + 1e-9) and np.all(np.diff(inside) >= -1e-9)


@settings(max_examples=100, deadline=None)
@given(SHARE, LAP)
def test_a_lap_softens_as_it_slips(share, joint):
    P = share * joint["q_l"] * joint["L"]
    start = lap.initial_stiffness(*(joint[key] for key in ("EA_1", "EA_2", "k", "L")))
    secant, tangent = lap.secant_stiffness(P, **joint), lap.tangent_stiffness(P, **joint)
    assert 0 < tangent <= secant * (1 + 1e-6) and secant <= start * (1 + 1e-6)
    assert sum(lap.slip_lengths(0.9 * P, **joint)) <= sum(lap.slip_lengths(P, **joint)) * (1 + EXACT)
    more = joint | {"q_l": 1.1 * joint["q_l"]}
    assert lap.displacement(P, **more) <= lap.displacement(P, **joint) * (1 + EXACT)
    stiffer = joint | {"k": 1.5 * joint["k"]}
    assert lap.displacement(P, **stiffer) <= lap.displacement(P, **joint) * (1 + EXACT)


@settings(deadline=None)
@given(SHARE, LAP, between(1.01, 100))
def test_a_lap_turned_round_and_scaled(share, joint, factor):
    """Seen from the other side nothing changes; loads times f give f times the motion and f^2 the energy."""
    assume(np.isfinite(joint["EA_1"]))
    P = share * joint["q_l"] * joint["L"]
    turned = joint | {"EA_1": joint["EA_2"], "EA_2": joint["EA_1"]}
    assert lap.slip_lengths(P, **turned) == pytest.approx(lap.slip_lengths(P, **joint)[::-1], abs=1e-9 * joint["L"])
    assert lap.displacement(P, **turned) == pytest.approx(lap.displacement(P, **joint))
    assert lap.energy(P, **turned) == pytest.approx(lap.energy(P, **joint), abs=1e-12)
    larger = joint | {"q_l": factor * joint["q_l"]}
    u, W = lap.displacement(P, **joint), lap.energy(P, **joint)
    assert lap.displacement(factor * P, **larger) == pytest.approx(factor * u)
    assert lap.energy(factor * P, **larger) == pytest.approx(factor**2 * W, rel=1e-6, abs=1e-9 * P * u)


@settings(max_examples=25, deadline=None)
@given(st.lists(SIGNED, min_size=2, max_size=4), LAP)
def test_lap_loads_in_an_array_are_the_single_loads(shares, joint):
    P = np.array(shares) * joint["q_l"] * joint["L"]
    for function in (lap.displacement, lap.energy, lap.tangent_stiffness, lap.secant_stiffness):
        single = [function(float(x), **joint) for x in P]
        assert function(P, **joint) == pytest.approx(single, rel=EXACT)
        assert all(isinstance(value, float) for value in single)
    x = np.array([[0.0], [0.3], [1.0]]) * joint["L"]
    for field in (lap_field.traction, lap_field.slip, lap_field.strip_force):
        grid = field(x, P, **joint)
        assert grid.shape == (3, len(shares))
        assert grid[1] == pytest.approx([field(float(x[1, 0]), float(load), **joint) for load in P], rel=EXACT)


@settings(deadline=None)
@given(STRIP, STRIP, between(1e2, 1e7), between(5, 500))
def test_the_interface_holds_a_share_of_the_energy(EA_1, EA_2, k, L):
    assert 0 < lap.interface_share(EA_1, EA_2, k, L) < 1


@settings(deadline=None)
@given(
    between(0, 1e5), between(1e3, 3e5), between(5, 100), between(1, 50), between(10, 500), FRICTION, between(0.1, 50)
)
def test_layers_lose_nothing_before_the_onset(P, E, b, h, L, mu, p):
    W, P_on = layers.layers_energy(P, E, b, h, L, mu, p), layers.layers_onset(mu, p, b, h)
    assert (W > 0) == (P_on < P) and W >= 0
    stuck = layers.layers_stuck_deflection(P, E, b, h, L)
    assert P_on > P or layers.layers_slipping_deflection(P, E, b, h, L, mu, p) >= stuck * (1 - EXACT)


# Rows of bolts


@st.composite
def bolt_row(draw):
    n = draw(st.integers(1, 7))
    positive = between(0.1, 10)
    several = st.lists(positive, min_size=n, max_size=n).map(np.array)
    plates = st.lists(positive, min_size=n - 1, max_size=n - 1).map(lambda k: np.array(k, dtype=float))
    return {"k_b": draw(several), "k_1": draw(plates), "k_2": draw(plates), "limit": draw(several)}


def followed(function, P, row):
    """A result, unless the row is one of the few in which a bolt that has slipped sticks again."""
    try:
        return function(P, **row)
    except ValueError as error:
        assert "stick again" in str(error)
        assume(False)


@settings(deadline=None)
@given(bolt_row(), SIGNED)
def test_a_row_obeys_coulomb_and_loses_energy(row, share):
    P = share * row["limit"].sum()
    R, slip = followed(rows.forces, P, row), rows.slips(P, **row)
    assert R.sum() == pytest.approx(P, rel=1e-9)
    assert np.all(np.abs(R) <= row["limit"] * (1 + 1e-9)) and np.all(slip * R >= 0)
    assert np.all((slip == 0) | (np.abs(R) == row["limit"]))
    W, u = rows.energy(P, **row), rows.displacement(P, **row)
    assert 0 <= W <= 4 * abs(P * u) and u * P > 0
    assert rows.displacement(-P, **row) == pytest.approx(-u)
    first = rows.first_slip(row["limit"], rows.shares(row["k_b"], row["k_1"], row["k_2"]))
    assert (W > 0) == np.any(slip) and (abs(P) > first * (1 + 1e-9)) >= np.any(slip)


@settings(deadline=None)
@given(bolt_row(), SHARE)
def test_a_row_turned_round(row, share):
    """Bolts from the other end, plates changed over: the same forces in the other order."""
    P = share * row["limit"].sum()
    followed(rows.forces, P, row)
    turned = {
        "k_b": row["k_b"][::-1],
        "k_1": row["k_2"][::-1],
        "k_2": row["k_1"][::-1],
        "limit": row["limit"][::-1],
    }
    assert rows.forces(P, **turned)[::-1] == pytest.approx(rows.forces(P, **row), rel=1e-7, abs=1e-9 * P)
    assert rows.displacement(P, **turned) == pytest.approx(rows.displacement(P, **row), rel=1e-7)
    tangent, secant = rows.tangent_stiffness(P, **row), rows.secant_stiffness(P, **row)
    start = rows.initial_stiffness(row["k_b"], row["k_1"], row["k_2"])
    assert tangent <= secant * (1 + EXACT) and secant <= start * (1 + EXACT)


@settings(deadline=None)
@given(bolt_row(), st.lists(SIGNED, min_size=2, max_size=4))
def test_row_loads_in_an_array_are_the_single_loads(row, shares):
    P = np.array(shares) * row["limit"].sum()
    followed(rows.forces, P, row)
    for function in (rows.forces, rows.slips, rows.displacement, rows.energy, rows.tangent_stiffness):
        assert function(P, **row) == pytest.approx(np.array([function(x, **row) for x in P]), rel=1e-9, abs=1e-12)


# Loops


@settings(deadline=None)
@given(between(-5, 5), between(0.1, 10), between(0.1, 10))
def test_sliders_lose_energy_and_stay_within_their_force(u, k, F_S):
    for force, energy, slope in (
        (loops.slider_force, loops.slider_energy, loops.slider_tangent_stiffness),
        (loops.uniform_force, loops.uniform_energy, loops.uniform_tangent_stiffness),
    ):
        Q, W = force(u, k, F_S), energy(u, k, F_S)
        assert abs(Q) <= F_S * (1 + EXACT) and Q * u >= 0 and force(-u, k, F_S) == -Q
        assert 0 <= W <= 4 * abs(Q * u) and energy(-u, k, F_S) == W
        assert 0 <= slope(u, k, F_S) <= k


IWAN = st.fixed_dictionaries(
    {"F_S": between(10, 1e5), "K_T": between(1e2, 1e6), "chi": between(-0.95, 0), "beta": between(0, 5)}
)


@settings(deadline=None)
@given(between(1e-3, 2), IWAN)
def test_iwan_elements(part, element):
    phi_max = iwan.slip_displacement(**element)
    u = part * phi_max
    Q, W = iwan.force(u, **element), iwan.energy(u, **element)
    assert 0 < Q <= element["F_S"] * (1 + EXACT) and iwan.force(-u, **element) == -Q
    assert 0 < W < 4 * Q * u and iwan.energy(0.9 * u, **element) < W
    assert 0 <= iwan.tangent_stiffness(u, **element) <= element["K_T"]
    assert iwan.secant_stiffness(u, **element) <= element["K_T"] * (1 + EXACT)
    assert iwan.force(phi_max, **element) == pytest.approx(element["F_S"])
    if part < 0.95:
        assert iwan.displacement(Q, **element) == pytest.approx(u, rel=1e-7)
        assert iwan.displacement(-Q, **element) == pytest.approx(-u, rel=1e-7)
    together = iwan.force(np.array([u, -u]), **element)
    assert together == pytest.approx([Q, -Q], rel=EXACT)


@settings(deadline=None)
@given(SIGNED, FORCE, FRICTION, between(1e-6, 1e-2), between(1.01, 30))
def test_the_rough_law_does_not_know_the_pressure(share, P, mu, d_e, k):
    """The displacement depends on Q/(mu P) alone; the energy grows with the load."""
    Q = share * mu * P
    assert rough.displacement(k * Q, k * P, mu, d_e) == pytest.approx(rough.displacement(Q, P, mu, d_e))
    assert rough.energy(k * Q, k * P, mu, d_e) == pytest.approx(k * rough.energy(Q, P, mu, d_e))
    W, u = rough.energy(Q, P, mu, d_e), rough.displacement(Q, P, mu, d_e)
    assert 0 < W < 4 * Q * u
    p_0 = 50.0
    W, u = (f(Q, P, mu, p_0, 1e4) for f in (rough.penalty_energy, rough.penalty_displacement))
    assert 0 < W < 4 * Q * u


@settings(deadline=None)
@given(between(-3, 60))
def test_gaussian_summits_stiffen_with_the_separation(h):
    """k_n sigma/p, 1 for exponential tails, rises with the separation h and nears it, as tails fall faster."""
    low, high = rough.gaussian_summits(np.array([h, h + 0.1]))
    assert low < high and max(0.0, h) < low < max(0.0, h) + 2.0
    assert rough.gaussian_summits(h) == pytest.approx(low, rel=EXACT)


# Every formula


def formulas():
    for found in pkgutil.iter_modules(closed.__path__):
        module = importlib.import_module(f"{closed.__name__}.{found.name}")
        for function in vars(module).values():
            if isinstance(getattr(function, "formula", None), Formula) and function.__module__ == module.__name__:
                yield pytest.param(function, id=f"{found.name}.{function.__name__}")


LIFT = {"P": 60.0, "F_S": 5.0, "a": 1.0}  # below gross slip; wider than the flat part
SHRINK = {"e_a": 0.04}


@pytest.mark.parametrize("function", list(formulas()))
def test_vector_equals_scalar(function):
    names = list(inspect.signature(function).parameters)
    draw = np.random.default_rng(7)
    columns = {name: draw.uniform(0.1, 0.9, 5) * SHRINK.get(name, 1.0) + LIFT.get(name, 0.0) for name in names}
    together = function(**columns)
    single = [function(**{name: float(columns[name][i]) for name in names}) for i in range(5)]
    assert together.shape == (5,) and all(isinstance(value, float) for value in single)
    assert together == pytest.approx(single, rel=1e-13)
    first = names[0]
    grid = function(**{**columns, first: columns[first][:, None]})
    assert grid.shape == ((5, 5) if len(names) > 1 else (5, 1))
    assert np.diagonal(grid) == pytest.approx(single if len(names) > 1 else single[:1], rel=1e-13)
