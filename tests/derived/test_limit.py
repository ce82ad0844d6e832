"""The gross-slip load: closed forms, its proof on ten thousand patterns, second routes (a linear programme, the cone programme), laws,
relief."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from scipy.optimize import linprog

from slip.base.errors import NotConverged
from slip.friction.march import cone, frame, motions, relief
from slip.friction.march.limit import Limit, limit
from slip.friction.march.relief import limit_with_relief, relieved_factor

BRACKET = np.array([[x, y] for y in (60.0, -60.0) for x in (-80.0, 0.0, 80.0)])
SIMULATION = "limit analysis by an independent simulation"
SQUARE = np.array([[50.0, 50.0], [50.0, -50.0], [-50.0, 50.0], [-50.0, -50.0]])


def audit_tractions(bound, positions, load, answer: Limit) -> None:
    """The lower side worked out again: tractions within their bounds, in balance with factor times load."""
    b, (x, y), (vx, vy, mz) = np.asarray(bound), np.moveaxis(positions, -1, 0), np.moveaxis(np.asarray(load), -1, 0)
    tx, ty = answer.tractions[..., 0, :], answer.tractions[..., 1, :]
    t, f = np.hypot(tx, ty), answer.factor
    assert (t <= b + 1e-14 * b.max(-1)[..., None]).all()
    force_scale = t.sum(-1) + f * np.hypot(vx, vy)
    moment_scale = (t * np.hypot(x, y)).sum(-1) + f * np.abs(mz)
    assert (np.abs(tx.sum(-1) - f * vx) <= 1e-12 * force_scale).all()
    assert (np.abs(ty.sum(-1) - f * vy) <= 1e-12 * force_scale).all()
    assert (np.abs((x * ty - y * tx).sum(-1) - f * mz) <= 1e-12 * moment_scale).all()


def slips(positions, motion) -> np.ndarray:
    (x, y), (ux, uy, w) = np.moveaxis(positions, -1, 0), np.moveaxis(motion, -1, 0)[..., None]
    return np.hypot(ux - w * y, uy + w * x)


def audit(bound, positions, load, answer: Limit) -> None:
    """Both sides worked out again from bound, positions, load, tractions and motion alone, and the gap between them."""
    audit_tractions(bound, positions, load, answer)
    work = np.asarray(load) * answer.motion
    assert (np.abs(work.sum(-1) - 1.0) <= 1e-12 * np.abs(work).sum(-1)).all()
    upper = (np.asarray(bound) * slips(positions, answer.motion)).sum(-1)
    assert (upper - answer.factor <= 1e-8 * upper).all()
    assert (answer.factor - upper <= 1e-8 * upper).all()
    assert (answer.gap >= 0.0).all() and (answer.gap < 1e-8).all() and (answer.factor <= answer.upper).all()
    assert (answer.iterations <= 30).all()


# --- values known from elsewhere -----------------------------------------------------------------------------------------------------


def test_bracket_of_six(validate: Any) -> None:
    """Group safety 2.1300, centre (-93.93, 0); 1.97 and 1.84 with 6250 N axial per bolt."""
    preload, axial = 78000.0 - 4500.0 - 3000.0, (1.0 - 0.15) * 6250.0
    load = (0.0, 24000.0, 2.0e6)
    answer = limit(np.full(6, 0.18 * preload), BRACKET, load)
    audit(np.full(6, 0.18 * preload), BRACKET, load, answer)
    held = limit(np.full(6, 0.18 * (preload - axial)), BRACKET, load)
    grown = limit_with_relief(np.full(6, 0.18 * preload), np.full(6, 0.18 * axial), BRACKET, load)
    for what, printed, found in (
        ("factor", "2.1300", answer.factor),
        ("centre x [mm]", "-93.93", answer.centre[0]),
        ("factor with 6250 N axial per bolt, held", "1.97", held.factor),
        ("factor with 6250 N axial per bolt, growing", "1.84", grown.factor),
    ):
        validate(16, f"limit of the bracket: {what}", SIMULATION, "derived", printed, found)
    assert answer.centre[1] == pytest.approx(0.0, abs=5e-3)


def test_single_bolt_of_the_bracket(validate: Any) -> None:
    """Safety 2.06 with the clamp held, load factor 1.779 with all loads."""
    shear = np.hypot(4200.0, -3100.0)
    held = relieved_factor([0.18 * 59875.0], [0.0], [1.0 / shear])
    grown = relieved_factor([0.18 * 70500.0], [0.18 * 0.85 * 12500.0], [1.0 / shear])
    validate(16, "one bolt of the bracket: clamp held", "statics by hand", "derived", "2.06", held)
    validate(16, "one bolt of the bracket: all loads growing", "statics by hand", "derived", "1.779", grown)


@pytest.mark.parametrize(("arm", "force"), [(100.0, "32211.4"), (50.0, "45553.9"), (200.0, "19239.3")])
def test_four_bolts_off_centre(arm: float, force: str, validate: Any) -> None:
    """Four bolts of 15 kN, force along y at x = arm."""
    answer = limit(np.full(4, 15000.0), SQUARE, (0.0, 1.0, arm))
    validate(17, f"limit of four bolts, e {arm:.0f} mm", SIMULATION, "derived", force, answer.factor, unit="N")
    audit(np.full(4, 15000.0), SQUARE, (0.0, 1.0, arm), answer)


def test_four_bolts_torque(validate: Any) -> None:
    """4242.64 N m, all at 50 sqrt(2) mm."""
    answer = limit(np.full(4, 15000.0), SQUARE, (0.0, 0.0, 1.0))
    assert answer.factor == pytest.approx(15000.0 * 4 * 50.0 * np.sqrt(2.0), rel=1e-10)
    torque, by_hand = answer.factor / 1e3, "4 x 15 kN x 50 sqrt 2 mm"
    validate(17, "limit of four bolts, pure torque", by_hand, "derived", "4242.64", torque, unit="N m")
    assert answer.centre == pytest.approx([0.0, 0.0], abs=1e-4)


@pytest.mark.parametrize(
    ("points", "arm", "factor"),
    [
        ([(0.0, -60.0), (0.0, 60.0)], 200.0, "0.5747"),
        ([(-60.0, 0.0), (60.0, 0.0)], 200.0, "0.4615"),
        ([(0.0, y) for y in (-3.0, 0.0, 3.0)], 3.0, "1.8229"),
        ([(0.0, y) for y in (-7.5, -4.5, -1.5, 1.5, 4.5, 7.5)], 6.0, "3.7413"),
        ([(x, y) for x in (-2.75, 2.75) for y in (-3.0, 0.0, 3.0)], 8.0, "2.2353"),
    ],
)
def test_slip_factors(points: list[tuple[float, float]], arm: float, factor: str, validate: Any) -> None:
    """Load along y at x = arm, bolts of 1."""
    bound, load = np.ones(len(points)), (0.0, 1.0, arm)
    answer = limit(bound, points, load)
    what = f"slip factor of {len(points)} bolts, first at {points[0]}, e {arm:g}"
    validate(18, what, SIMULATION, "derived", factor, answer.factor)
    audit(bound, np.array(points), load, answer)


def test_centre_on_a_bolt() -> None:
    """Two rows of three at arm 8: the middle bolt of the far row is the centre and carries less. Source limit, derived."""
    points = np.array([(x, y) for x in (-2.75, 2.75) for y in (-3.0, 0.0, 3.0)])
    answer = limit(np.ones(6), points, (0.0, 1.0, 8.0))
    assert answer.centre == pytest.approx([-2.75, 0.0], abs=1e-9)
    held = np.hypot(*answer.tractions)
    assert held[1] < 0.9 and np.delete(held, 1) == pytest.approx(1.0, abs=1e-9)


@pytest.mark.parametrize("arm", [0.0, 1e-6, 0.3, 1.0, 7.0, 1e4])
@pytest.mark.parametrize("a", [1.0, 60.0])
def test_two_bolts(a: float, arm: float) -> None:
    """2a/sqrt(a^2 + e^2) for a force parallel to their line, 2a/(a + e) across it. Source limit, derived."""
    along = limit([1.0, 1.0], [(0.0, -a), (0.0, a)], (0.0, 1.0, arm))
    across = limit([1.0, 1.0], [(-a, 0.0), (a, 0.0)], (0.0, 1.0, arm))
    assert along.factor == pytest.approx(2.0 * a / np.hypot(a, arm), rel=1e-10)
    assert across.factor == pytest.approx(2.0 * a / (a + arm), rel=1e-10)


def disc(rings: int) -> tuple[np.ndarray, np.ndarray]:
    """Bounds (sum 1) and midpoints of a polar grid on the unit disc."""
    radius, angle = (np.arange(rings) + 0.5) / rings, 2.0 * np.pi * (np.arange(6 * rings) + 0.5) / (6 * rings)
    points = np.stack([np.outer(radius, np.cos(angle)).ravel(), np.outer(radius, np.sin(angle)).ravel()], -1)
    bound = np.repeat(radius, angle.size)
    return bound / bound.sum(), points


def test_disc_about_its_rim() -> None:
    """Uniform disc, centre on the rim: F = 8/(3 pi) mu P, M = 8/(9 pi) mu P R. Source limit, derived.

    Midpoint cells: second order but for the cells at the rim, where the slip has its cone; the error must fall at that pace.
    """
    load = np.array([0.0, -8.0 / (3.0 * np.pi), 8.0 / (9.0 * np.pi)])
    answers = [limit(*disc(rings), load) for rings in (10, 20, 40)]
    errors = np.array([a.factor - 1.0 for a in answers])
    orders = np.log2(errors[:-1] / errors[1:])
    assert (orders > 1.8).all() and (orders < 2.3).all()
    assert abs(errors[-1]) < 3e-4
    centre = np.array([a.centre for a in answers])
    assert centre[-1] == pytest.approx([1.0, 0.0], abs=3e-3)
    assert abs(centre[-1, 0] - 1.0) < abs(centre[0, 0] - 1.0)


def test_ten_thousand_points() -> None:
    """A pressure patch in one case, uneven bounds: the proof holds and few steps are needed."""
    rng = np.random.default_rng(5)
    positions, bound = rng.uniform(-100.0, 100.0, (10_000, 2)), rng.uniform(0.0, 3.0, 10_000)
    load = (3000.0, -4000.0, 2.0e5)
    audit(bound, positions, load, limit(bound, positions, load))


# --- the proof on ten thousand patterns ----------------------------------------------------------------------------------------------

CASES = 120
SIZES = (2, 3, 6, 17)


def turned(d: np.ndarray) -> np.ndarray:
    """Unit vectors a quarter turn ahead of d; 0 where d is."""
    size = np.hypot(d[..., 0], d[..., 1])[..., None]
    return np.stack([-d[..., 1], d[..., 0]], -1) / np.where(size > 0.0, size, 1.0)


def resultant(t: np.ndarray, r: np.ndarray) -> np.ndarray:
    moment = r[..., 0] * t[..., 1] - r[..., 1] * t[..., 0]
    return np.concatenate([t.sum(1), moment.sum(1)[:, None]], -1)


def planted(rng, b, r, centre, first: float | None = None) -> np.ndarray:
    """Half the load at which all slip about `centre`; the first point, if it is the centre, carries that share of its bound."""
    t = b[..., None] * turned(r - centre)
    if first is not None:
        angle = rng.uniform(0.0, 2.0 * np.pi, len(b))
        t[:, 0] = first * b[:, :1] * np.stack([np.cos(angle), np.sin(angle)], -1)
    return resultant(t, r) / 2.0


def pattern(name: str, n: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    rng = np.random.default_rng([n, *name.encode()])
    kind, _, variant = name.partition(" ")
    r = rng.uniform(-100.0, 100.0, (CASES, n, 2))
    b = 10.0 ** rng.uniform(-6.0, 6.0, (CASES, n)) if "wild" in variant else rng.uniform(1e3, 1e4, (CASES, n))
    c = (
        np.column_stack(
            [rng.normal(size=(CASES, 2)), 100.0 * rng.normal(size=CASES) * 10.0 ** rng.uniform(-2.0, 2.0, CASES)]
        )
        * 1e3
    )
    off = rng.normal(size=(CASES, 1, 2))
    off /= np.hypot(off[..., :1], off[..., 1:])
    if kind == "zeros":
        b *= rng.random((CASES, n)) < 0.5
    elif kind == "line":
        r[..., 1] = 0.3 * r[..., 0] + 7.0
    elif kind == "torque":
        c[:, :2] = 0.0
    elif kind == "centric":
        middle = (b[..., None] * r).sum(1) / b.sum(1)[:, None]
        c[:, 2] = middle[:, 0] * c[:, 1] - middle[:, 1] * c[:, 0]
    elif kind == "action":
        c[:, 2] = r[:, 0, 0] * c[:, 1] - r[:, 0, 1] * c[:, 0]
    elif kind == "far":
        r += 1e4
        c[:, 2] += 1e7
    elif kind == "cluster":
        r[:, 1:] = r[:, :1] + 1e-4 * r[:, 1:]
    elif kind == "twins":
        r[:, -1] = r[:, 0]
    elif kind == "grid":
        r, b, c = 50.0 * np.round(r / 50.0), 1e3 * np.round(b / 1e3), 1e3 * np.round(c / 1e3) + [0.0, 1.0, 0.0]
    elif kind == "on":
        c = planted(rng, b, r, r[:, :1], float(variant.split()[0]))
    elif kind == "near":
        c = planted(rng, b, r, r[:, :1] + float(variant.split()[0]) * off)
    elif kind == "distant":
        c = planted(rng, b, r, float(variant) * off)
    return b, r, c


NAMES = [
    *(
        "random",
        "random wild",
        "zeros",
        "zeros wild",
        "line",
        "line wild",
        "torque",
        "torque wild",
        "centric",
        "centric wild",
        "action",
    ),
    *(
        "action wild",
        "far",
        "cluster",
        "twins",
        "grid",
        "on 0",
        "on 0.5",
        "on 0.999999",
        "on 1",
        "on 0.5 wild",
        "near 1e-3",
        "near 1e-7",
    ),
    *("near 1e-10", "near 1e-3 wild", "distant 1e5", "distant 1e9"),
]


def test_patterns_are_ten_thousand() -> None:
    assert len(NAMES) * len(SIZES) * CASES > 10_000


@pytest.mark.parametrize("name", NAMES)
def test_proof(name: str) -> None:
    """Tractions within their bounds and in balance, motion of unit work, gap below 1e-8, all recomputed. Derived."""
    for n in SIZES:
        b, r, c = pattern(name, n)
        audit(b, r, c, limit(b, r, c))


@pytest.mark.parametrize("name", NAMES)
def test_proof_of_the_cone_programme(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """The same where no case is solved by descent."""
    by_cone_alone(monkeypatch)
    for n in SIZES:
        b, r, c = pattern(name, n)
        audit(b, r, c, limit(b, r, c))


@pytest.mark.parametrize("name", ["random", "random wild", "on 0.5", "on 1", "centric", "torque wild"])
def test_last_digits_do_no_harm(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """Pushed on until rounding stops it, the programme still proves its answer."""
    monkeypatch.setattr(cone, "GAP_SOUGHT", 1e-16)
    by_cone_alone(monkeypatch)
    for n in SIZES:
        b, r, c = pattern(name, n)
        answer = limit(b, r, c)
        assert (answer.gap < 1e-12).all()
        audit_tractions(b, r, c, answer)


@pytest.mark.parametrize(
    "name", [name for name in NAMES if name.split()[0] in ("on", "near", "distant") and "wild" not in name]
)
def test_planted_answer(name: str) -> None:
    """The load was half of the one at which a chosen motion has all points at their bounds: both theorems make the factor 2."""
    for n in SIZES:
        assert limit(*pattern(name, n)).factor == pytest.approx(2.0, rel=1e-9)


def test_proof_on_many() -> None:
    rng = np.random.default_rng(99)
    b, r = 10.0 ** rng.uniform(-3.0, 3.0, (100_000, 6)), rng.uniform(-100.0, 100.0, (6, 2))
    c = np.column_stack([rng.normal(size=(100_000, 2)), 100.0 * rng.normal(size=100_000)])
    audit(b, np.broadcast_to(r, (100_000, 6, 2)), c, limit(b, r, c))


# --- descent and cone programme ------------------------------------------------------------------------------------------------------


def by_cone_alone(monkeypatch: pytest.MonkeyPatch) -> None:
    """No gap is small enough for the descent: all its cases go on to the cone programme, or to the search where there is relief."""
    monkeypatch.setattr(motions, "GAP_SURE", -1.0)


@pytest.fixture
def left(monkeypatch: pytest.MonkeyPatch) -> dict[str, int]:
    """How many cases the cone programme and the search got."""
    count = {"cone": 0, "search": 0}
    solve, search = frame.largest_factor, relief._Search

    def counted(b, r, force, moment):
        count["cone"] += force.size
        return solve(b, r, force, moment)

    def searched(b, q, r, c):
        count["search"] += len(b)
        return search(b, q, r, c)

    monkeypatch.setattr(frame, "largest_factor", counted)
    monkeypatch.setattr(relief, "_Search", searched)
    return count


@pytest.mark.parametrize("name", NAMES)
def test_descent_against_the_cone_programme(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """Two solvers that share no step. Derived."""
    found = [limit(*pattern(name, n)) for n in SIZES]
    by_cone_alone(monkeypatch)
    for n, answer in zip(SIZES, found, strict=True):
        same(limit(*pattern(name, n)), answer.factor)


def six_bolts(cases: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Uneven bounds on the bracket, loads in every direction; the centre is on a bolt in every sixth case or so."""
    rng = np.random.default_rng(2024)
    load = rng.normal(size=(cases, 3)) * [2e4, 2e4, 2e6]
    return rng.uniform(2e3, 2e4, (cases, 6)), BRACKET, load


def test_six_bolts_against_the_cone_programme(monkeypatch: pytest.MonkeyPatch) -> None:
    b, r, c = six_bolts(20_000)
    found = limit(b, r, c)
    on_a_bolt = np.hypot(*(found.centre[:, None] - r).T).min(0) < 1e-9
    assert on_a_bolt.mean() > 0.1
    by_cone_alone(monkeypatch)
    again = limit(b, r, c)
    same(again, found.factor)
    near = np.abs(found.centre).max(-1) < 1e3
    np.testing.assert_allclose(found.centre[near], again.centre[near], atol=2e-2)


def test_hardly_a_case_of_six_bolts_is_left(left: dict[str, int]) -> None:
    """Operations, not seconds: looks at a motion, and cases that cost a cone programme."""
    found = limit(*six_bolts(20_000))
    assert left["cone"] <= 20
    assert found.iterations.mean() < 4.5 and (found.gap < 1e-12).all()


@pytest.mark.parametrize("turn", [0.0, 0.3, np.pi / 2.0])
def test_hardly_a_row_is_left(turn: float, left: dict[str, int]) -> None:
    """Bolts in a row, force along it, at an angle and across: across it no tangent leads to the bolt that is the centre."""
    rng = np.random.default_rng(5)
    row, force = np.column_stack([[-90.0, -30.0, 30.0, 90.0], np.zeros(4)]), rng.normal(size=2000)
    load = np.column_stack([force * np.cos(turn), force * np.sin(turn), 100.0 * rng.normal(size=2000)])
    for b in (rng.uniform(1.0, 2.0, (2000, 4)), np.ones(4)):
        audit(np.broadcast_to(b, (2000, 4)), np.broadcast_to(row, (2000, 4, 2)), load, limit(b, row, load))
    assert left["cone"] <= 8


def test_many_points(left: dict[str, int]) -> None:
    rng = np.random.default_rng(12)
    b, r = rng.uniform(2e3, 2e4, (300, 200)), rng.uniform(-100.0, 100.0, (200, 2))
    c = rng.normal(size=(300, 3)) * [2e4, 2e4, 2e6]
    found = limit(b, r, c)
    audit(b, np.broadcast_to(r, (300, 200, 2)), c, found)
    assert left["cone"] == 0 and found.iterations.mean() < 5.0


# --- a second route ------------------------------------------------------------------------------------------------------------------


def by_polygon(b: np.ndarray, r: np.ndarray, c: np.ndarray, reach: float, sides: int = 64) -> float:
    """Largest factor with polygons in place of discs, as a linear programme; `reach` is the distance of the sides from the middle."""
    n, angle = len(b), 2.0 * np.pi * np.arange(sides) / sides
    within = np.zeros((n * sides, 2 * n + 1))
    for i in range(n):
        within[i * sides : (i + 1) * sides, 2 * i : 2 * i + 2] = np.stack([np.cos(angle), np.sin(angle)], -1)
    balance = np.zeros((3, 2 * n + 1))
    balance[0, 0:-1:2] = balance[1, 1:-1:2] = 1.0
    balance[2, 0:-1:2], balance[2, 1:-1:2] = -r[:, 1] / 100.0, r[:, 0] / 100.0
    balance[:, -1] = -c / [1.0, 1.0, 100.0]
    cost = np.zeros(2 * n + 1)
    cost[-1] = -1.0
    found = linprog(
        cost, within, np.repeat(b * reach, sides), balance, np.zeros(3), bounds=(None, None), method="highs"
    )
    assert found.status == 0
    return float(found.x[-1])


def test_linear_programme() -> None:
    """Inscribed and circumscribed polygons of 64 sides bracket the answer, 0.12 % apart. Derived, independent solver."""
    rng = np.random.default_rng(3)
    for k in range(100):
        n = 2 + k % 6
        b, r = rng.uniform(0.1, 1.0, n), rng.uniform(-100.0, 100.0, (n, 2))
        b[1:][rng.random(n - 1) < 0.15] = 0.0 if n > 3 else 0.5
        c = np.array([*rng.normal(size=2), 100.0 * rng.normal()])
        factor = limit(b, r, c).factor
        # The solver's own tolerance is 1e-7.
        assert by_polygon(b, r, c, np.cos(np.pi / 64)) <= factor * (1.0 + 1e-6)
        assert by_polygon(b, r, c, 1.0) >= factor * (1.0 - 1e-6)


# --- laws ----------------------------------------------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def some() -> tuple[np.ndarray, np.ndarray, np.ndarray, Limit]:
    rng = np.random.default_rng(11)
    b, r = rng.uniform(0.0, 1.0, (60, 5)), rng.uniform(-100.0, 100.0, (60, 5, 2))
    c = np.column_stack([rng.normal(size=(60, 2)), 100.0 * rng.normal(size=60)])
    return b, r, c, limit(b, r, c)


def same(answer: Limit, factor: np.ndarray) -> None:
    np.testing.assert_allclose(answer.factor, factor, rtol=1e-10)


def test_rotation_and_mirror(some) -> None:
    b, r, c, answer = some
    turn = np.array([[np.cos(0.7), np.sin(0.7)], [-np.sin(0.7), np.cos(0.7)]])
    rotated = limit(b, r @ turn, np.concatenate([c[:, :2] @ turn, c[:, 2:]], -1))
    same(rotated, answer.factor)
    mirrored = limit(b, r * [-1.0, 1.0], c * [-1.0, 1.0, -1.0])
    same(mirrored, answer.factor)
    near = np.abs(answer.centre).max(-1) < 1e3
    np.testing.assert_allclose(rotated.centre[near], (answer.centre @ turn)[near], atol=1e-2)
    np.testing.assert_allclose(mirrored.centre[near], (answer.centre * [-1.0, 1.0])[near], atol=1e-2)


def test_scaling(some) -> None:
    b, r, c, answer = some
    same(limit(7.0 * b, r, c), 7.0 * answer.factor)
    same(limit(b, r, c / 7.0), 7.0 * answer.factor)
    same(limit(b, 1e-3 * r, c * [1.0, 1.0, 1e-3]), answer.factor)


def test_moved_origin(some) -> None:
    b, r, c, answer = some
    moved = c + np.stack([0.0 * c[:, 0], 0.0 * c[:, 0], 30.0 * c[:, 1] + 20.0 * c[:, 0]], -1)
    same(limit(b, r + [30.0, -20.0], moved), answer.factor)


def test_order_and_open_points(some) -> None:
    b, r, c, answer = some
    order = [3, 0, 4, 2, 1]
    shuffled = limit(b[:, order], r[:, order], c)
    same(shuffled, answer.factor)
    extra = limit(np.pad(b, ((0, 0), (0, 1))), np.concatenate([r, 0.0 * r[:, :1] + 500.0], 1), c)
    same(extra, answer.factor)
    assert (extra.tractions[..., -1] == 0.0).all()


def test_a_point_split_in_two_is_the_same(some) -> None:
    b, r, c, answer = some
    split = np.concatenate([b[:, :1] * 0.3, b[:, :1] * 0.7, b[:, 1:]], 1)
    same(limit(split, np.concatenate([r[:, :1], r], 1), c), answer.factor)


def test_vector_equals_scalar(some) -> None:
    b, r, c, answer = some
    for k in range(0, 60, 7):
        one = limit(b[k], r[k], c[k])
        assert isinstance(one.factor, float) and one.factor == pytest.approx(answer.factor[k], rel=1e-10)
        assert one.motion.shape == (3,) and one.centre.shape == (2,) and one.tractions.shape == (2, 5)


def test_axes_broadcast(some) -> None:
    b, r, c, _ = some
    wide = limit(b[:4, None], r[0], c[:3])
    assert wide.factor.shape == (4, 3) and wide.tractions.shape == (4, 3, 2, 5) and wide.centre.shape == (4, 3, 2)
    assert wide.factor[2, 1] == pytest.approx(limit(b[2], r[0], c[1]).factor, rel=1e-10)


def test_more_bound_never_lowers(some) -> None:
    b, r, c, answer = some
    more = b + np.random.default_rng(2).uniform(0.0, 0.3, b.shape) * (np.random.default_rng(4).random(b.shape) < 0.5)
    assert (limit(more, r, c).factor >= answer.factor * (1.0 - 1e-11)).all()


def test_group_at_most_force_only(some) -> None:
    b, _, c, answer = some
    assert (answer.factor <= b.sum(-1) / np.hypot(c[:, 0], c[:, 1]) * (1.0 + 1e-12)).all()


# --- ends of the range ---------------------------------------------------------------------------------------------------------------


def test_no_load() -> None:
    answer = limit([1.0, 2.0], [(0.0, 0.0), (3.0, 0.0)], (0.0, 0.0, 0.0))
    assert answer.factor == answer.upper == np.inf and answer.gap == 0.0
    assert (answer.motion == 0.0).all() and (answer.centre == np.inf).all() and (answer.tractions == 0.0).all()


@pytest.mark.parametrize("bound", [[5.0, 0.0], [0.0, 0.0]])
def test_load_that_cannot_be_carried(bound: list[float]) -> None:
    """One point carries no moment about itself, none carries nothing: factor 0, with the motion that shows it."""
    points, load = np.array([(1.7, 0.3), (9.1, -2.0)]), np.array([0.3, -1.0, 4.0])
    answer = limit(bound, points, load)
    assert answer.factor == answer.upper == answer.gap == 0.0
    audit(bound, points, load, answer)
    if bound[0]:
        assert answer.centre == pytest.approx(points[0])


def test_one_point_in_line_with_the_force() -> None:
    """Two points in one place, the third open: the bounds add up. The moment is summed in another order, so it holds other rounding."""
    rng = np.random.default_rng(21)
    at, force = rng.uniform(-90.0, 90.0, (300, 1, 2)), rng.normal(size=(300, 2))
    points = np.concatenate([at, at, rng.uniform(-90.0, 90.0, (300, 1, 2))], 1)
    x, y = at[:, 0].T
    moment = x * (0.3 * force[:, 1]) + x * (0.7 * force[:, 1]) - y * (0.3 * force[:, 0]) - y * (0.7 * force[:, 0])
    load, bound = np.column_stack([force, moment]), np.array([2.0, 3.0, 0.0])
    answer = limit(bound, points, load)
    np.testing.assert_allclose(answer.factor, 5.0 / np.hypot(*force.T), rtol=1e-13)
    assert (answer.centre == np.inf).all()
    audit(np.broadcast_to(bound, (300, 3)), points, load, answer)


def test_pure_shift_has_its_centre_at_infinity() -> None:
    answer = limit(np.ones(4), SQUARE, (3.0, 4.0, 0.0))
    assert answer.factor == pytest.approx(4.0 / 5.0, rel=1e-12)
    assert (answer.centre == np.inf).all() and answer.motion == pytest.approx([0.12, 0.16, 0.0], abs=1e-15)
    rng = np.random.default_rng(6)
    b, r, force = rng.uniform(0.1, 1.0, (5000, 4)), rng.uniform(-100.0, 100.0, (5000, 4, 2)), rng.normal(size=(5000, 2))
    middle = (b[..., None] * r).sum(1) / b.sum(1)[:, None]
    shifted = limit(b, r, np.column_stack([force, middle[:, 0] * force[:, 1] - middle[:, 1] * force[:, 0]]))
    np.testing.assert_allclose(shifted.factor, b.sum(-1) / np.hypot(*force.T), rtol=1e-10)
    assert (shifted.centre == np.inf).all()


@pytest.mark.parametrize(
    ("bound", "positions", "load"),
    [
        ([-1.0, 1.0], SQUARE[:2], (1.0, 0.0, 0.0)),
        ([np.nan, 1.0], SQUARE[:2], (1.0, 0.0, 0.0)),
        ([1.0, 1.0], SQUARE[:2], (np.inf, 0.0, 0.0)),
        ([1.0, 1.0], SQUARE, (1.0, 0.0, 0.0)),
        ([1.0, 1.0], SQUARE[:2], (1.0, 0.0)),
        ([], np.zeros((0, 2)), (1.0, 0.0, 0.0)),
        (1.0, np.zeros((1, 2)), (1.0, 0.0, 0.0)),
    ],
)
def test_refused(bound, positions, load) -> None:
    with pytest.raises(ValueError, match="bound"):
        limit(bound, positions, load)


def test_unproven_raises(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(cone, "MOST_ITERATIONS", 3)
    by_cone_alone(monkeypatch)
    with pytest.raises(NotConverged, match="lies between") as caught:
        limit(np.ones(4), SQUARE, (0.0, 1.0, 100.0))
    assert caught.value.code == "limit-gap"


# --- bounds that change with the load ------------------------------------------------------------------------------------------------


def random_relief(kind: str) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    rng = np.random.default_rng([7, *kind.encode()])
    b, r = rng.uniform(0.1, 1.0, (200, 6)) * 1e4, rng.uniform(-100.0, 100.0, (200, 6, 2))
    c = np.column_stack([rng.normal(size=(200, 2)) * 1e4, rng.normal(size=200) * 1e6])
    relief = rng.uniform(0.0, 1.0, (200, 6)) * 10.0 ** rng.uniform(2.0, 5.0, (200, 1))
    if kind == "mixed":
        relief *= rng.choice([-0.3, 1.0], (200, 6))
    if kind in ("open", "pressed"):
        b[:, :2] = 0.0
    if kind == "pressed":
        relief[:, :2] *= -0.05
    return b, relief, r, c


def bisected(b: np.ndarray, relief: np.ndarray, r: np.ndarray, c: np.ndarray) -> np.ndarray:
    """The root of limit(bound(f)).factor = f by halving alone."""
    low, high = np.full(len(b), 1e-6), np.full(len(b), 1e6)
    for _ in range(64):
        middle = np.sqrt(low * high)
        carried = limit(np.maximum(0.0, b - middle[:, None] * relief), r, c).factor >= middle
        low, high = np.where(carried, middle, low), np.where(carried, high, middle)
    return low


@pytest.mark.parametrize("kind", ["plain", "mixed", "open", "pressed"])
def test_relief_by_bisection(kind: str) -> None:
    """Two hundred cases, some of whose bolts open on the way. Derived, independent route on limit()."""
    b, relief, r, c = random_relief(kind)
    answer = limit_with_relief(b, relief, r, c)
    finite = np.isfinite(answer.factor)
    np.testing.assert_allclose(answer.factor[finite], bisected(b, relief, r, c)[finite], rtol=1e-9)
    assert finite.all() or kind in ("mixed", "pressed")
    assert (answer.gap < 2e-9).all()
    left = b - np.where(finite, answer.factor, 0.0)[:, None] * relief
    assert (left < 0.0).sum() > 20
    bound = np.maximum(0.0, left)
    audit_tractions(bound[finite], r[finite], c[finite], Limit(**{k: v[finite] for k, v in vars(answer).items()}))
    # From `upper` on the work of the bounds on the motion falls behind the load.
    beyond = answer.upper[finite, None] * (1.0 + 1e-6)
    work = np.maximum(0.0, b[finite] - beyond * relief[finite]) * slips(r, answer.motion)[finite]
    assert (work.sum(-1) < beyond[:, 0]).all()


@pytest.mark.parametrize("kind", ["plain", "mixed", "open", "pressed"])
def test_relief_against_the_search(kind: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """The descent against limits of fixed bounds by the cone programme. Derived."""
    cases = random_relief(kind)
    found = limit_with_relief(*cases)
    by_cone_alone(monkeypatch)
    np.testing.assert_allclose(limit_with_relief(*cases).factor, found.factor, rtol=1e-10)


@pytest.mark.parametrize("n", [2, 3, 6, 30])
@pytest.mark.parametrize("signs", [(1.0,), (-0.3, 0.0, 1.0)])
def test_hardly_a_relief_is_searched(n: int, signs: tuple[float, ...], left: dict[str, int]) -> None:
    """All but the loads that pressing alone carries, and cases in which a single point is closed without it."""
    rng = np.random.default_rng([n, len(signs)])
    b, r = rng.uniform(1e3, 1e4, (2000, n)) * (rng.random((2000, n)) < 0.9), rng.uniform(-100.0, 100.0, (2000, n, 2))
    relieved = (
        rng.uniform(0.0, 1.0, (2000, n)) * 10.0 ** rng.uniform(2.0, 4.5, (2000, 1)) * rng.choice(signs, (2000, n))
    )
    c = rng.normal(size=(2000, 3)) * [1e4, 1e4, 1e6]
    answer = limit_with_relief(b, relieved, r, c)
    finite = np.isfinite(answer.factor)
    assert left["search"] <= 20 + (~finite | ((b > 0.0).sum(-1) < 2)).sum() and left["cone"] <= 20
    assert finite.all() or len(signs) > 1
    bound = np.maximum(0.0, b - np.where(finite, answer.factor, 0.0)[:, None] * relieved)
    audit_tractions(bound[finite], r[finite], c[finite], Limit(**{k: v[finite] for k, v in vars(answer).items()}))


def test_no_relief_is_not_solved_twice(some, monkeypatch: pytest.MonkeyPatch) -> None:
    """A case without relief is one of `limit`, digit for digit, and so is such a row among others."""
    b, r, c, answer = some
    monkeypatch.setattr(relief, "least_work", None)
    assert (limit_with_relief(b, 0.0 * b, r, c).factor == answer.factor).all()
    monkeypatch.undo()
    rows = np.where(np.arange(60) % 2, 0.3, 0.0)[:, None]
    c = np.where(np.arange(60)[:, None] % 5, c, 0.0)
    mixed, plain = limit_with_relief(b, rows * b, r, c), limit(b, r, c)
    assert (mixed.factor[::2] == plain.factor[::2]).all() and (mixed.factor[::5] == np.inf).all()
    np.testing.assert_allclose(
        mixed.factor, plain.factor / (1.0 + rows[:, 0] * np.minimum(plain.factor, 1e300)), rtol=1e-10
    )


def test_one_bolt_with_relief() -> None:
    """b/(V + q) in line with the force; 0 with a moment about it; infinite where pressing outgrows the shear. Derived."""
    load = [(3.0, 4.0, 7.0 * 4.0), (3.0, 4.0, 99.0), (3.0, 4.0, 7.0 * 4.0)]
    answer = limit_with_relief([[10.0]], [[2.0], [2.0], [-6.0]], [(7.0, 0.0)], load)
    assert answer.factor == pytest.approx([10.0 / 7.0, 0.0, np.inf], rel=1e-14)
    assert answer.tractions[0, :, 0] == pytest.approx([30.0 / 7.0, 40.0 / 7.0], rel=1e-14)


@pytest.mark.parametrize("heavy", [1.0, 1e4, 1e8, 1e12])
def test_relief_far_above_the_shear(heavy: float) -> None:
    """Bounds that fall in proportion, (1 - k f) of themselves: f = F/(1 + k F) with F their limit. Derived.

    Nearly all of the bounds is gone when the load has grown that far, and what is left holds few digits.
    """
    b, _, r, c = random_relief("plain")
    alone = limit(b, r, c)
    answer = limit_with_relief(b, heavy * b, r, c)
    np.testing.assert_allclose(answer.factor, alone.factor / (1.0 + heavy * alone.factor), rtol=1e-10)
    assert (answer.gap < 1e-10).all() and (answer.gap >= 0.0).all() and (answer.factor <= answer.upper).all()
    t = np.hypot(answer.tractions[:, 0], answer.tractions[:, 1])
    assert (t <= b - answer.factor[:, None] * heavy * b + 1e-14 * b).all()
    total = answer.tractions.sum(-1) - answer.factor[:, None] * c[:, :2]
    assert (np.abs(total) <= 1e-12 * t.sum(-1)[:, None]).all()


def test_work_and_load_level_over_a_stretch() -> None:
    """Two points, a torque: the pressed one keeps pace with it exactly, until the relieved one is too weak to react. Derived."""
    arm, pressing, relief = 0.7, 3.3, 71.0
    answer = limit_with_relief([100.0, 0.0], [relief, -pressing], [(0.0, 0.0), (arm, 0.0)], (0.0, 0.0, pressing * arm))
    assert answer.factor == pytest.approx(100.0 / (relief + pressing), rel=1e-9)


def test_level_and_tangent() -> None:
    """Force (2, 2) through the pressed point, whose bound 2 f is just what its y part asks; the x part goes to the other: 2 f = 1 - 2 f.

    At any lower factor nothing is to spare, and past the answer the shortfall grows with the square: half of the digits. Derived.
    """
    points = [(-0.3, 0.0), (-0.6, 0.0)]
    answer = limit_with_relief([0.0, 1.0], [-2.0, 2.0], points, (-2.0, 2.0, -0.6))
    assert answer.factor == pytest.approx(0.25, rel=1e-6)


def test_no_relief_is_the_limit(some) -> None:
    b, r, c, answer = some
    same(limit_with_relief(b, 0.0 * b, r, c), answer.factor)


def test_more_relief_never_raises() -> None:
    b, relief, r, c = random_relief("plain")
    less = limit_with_relief(b, 0.8 * relief, r, c).factor
    assert (limit_with_relief(b, relief, r, c).factor <= less * (1.0 + 1e-11)).all()


@pytest.mark.parametrize(
    ("relief", "factor"),
    [
        (0.0, 6.0 / 10.0),
        (1.0, 6.0 / 11.0),
        (100.0, 3.0 / 10.0),
        (-4.0, 6.0 / 6.0),
        (-9.9, 6.0 / 0.1),
        (-10.5, np.inf),
    ],
)
def test_force_along_a_line_of_three(relief: float, factor: float) -> None:
    """Bounds 1, 3, 2 in line with a force of 10; the middle one is relieved: 6/(10 + relief), or 3/10 once it has opened. Derived."""
    points, load = [(-5.0, 2.0), (0.0, 2.0), (9.0, 2.0)], (10.0, 0.0, -20.0)
    answer = limit_with_relief([1.0, 3.0, 2.0], [0.0, relief, 0.0], points, load)
    assert answer.factor == pytest.approx(factor, rel=1e-9)
    assert relieved_factor([1.0, 3.0, 2.0], [0.0, relief, 0.0], [0.1, 0.1, 0.1]) == pytest.approx(factor, rel=1e-12)
    if factor == np.inf:
        assert np.hypot(*answer.tractions) == pytest.approx([0.0, 10.0, 0.0]) and answer.gap == 0.0


def test_pressing_that_carries_every_load() -> None:
    """Per unit of factor the pressing brings more than the load asks: infinite, with tractions for the load itself within it."""
    points, load, relief = SQUARE, np.array([0.0, 1000.0, 3.0e4]), np.full(4, -600.0)
    assert limit(-relief, points, load).factor > 1.0
    answer = limit_with_relief(np.full(4, 5.0), relief, points, load)
    assert answer.factor == answer.upper == np.inf
    assert (np.hypot(*answer.tractions) <= -relief).all()
    tx, ty = answer.tractions
    balance = [tx.sum(), ty.sum(), (points[:, 0] * ty - points[:, 1] * tx).sum()]
    assert balance == pytest.approx(load, abs=1e-6)


def test_relief_ends() -> None:
    assert limit_with_relief([1.0, 1.0], [9.0, 9.0], SQUARE[:2], (0.0, 0.0, 0.0)).factor == np.inf
    assert limit_with_relief([1.0, 0.0], [0.1, 0.1], SQUARE[:2], (0.0, 0.0, 1.0)).factor == 0.0
    with pytest.raises(ValueError, match="relief must"):
        limit_with_relief([1.0, 1.0], [np.nan, 0.0], SQUARE[:2], (0.0, 0.0, 1.0))


def test_relieved_factor_by_halving() -> None:
    """Root of sum max(0, b - f r) s = f for random motions, signs and open points; by halving. Derived."""
    rng = np.random.default_rng(8)
    b = rng.uniform(0.0, 1.0, (500, 7)) * (rng.random((500, 7)) < 0.8)
    relief, slip = rng.normal(size=(500, 7)) + 0.4, rng.uniform(0.0, 0.4, (500, 7))
    found = relieved_factor(b, relief, slip)
    low, high = np.zeros(500), np.full(500, 1e6)
    for _ in range(120):
        middle = 0.5 * (low + high)
        ahead = (np.maximum(0.0, b - middle[:, None] * relief) * slip).sum(-1) >= middle
        low, high = np.where(ahead, middle, low), np.where(ahead, high, middle)
    endless = low > 0.99e6
    assert (np.isinf(found) == endless).all() and 5 < endless.sum() < 100
    np.testing.assert_allclose(found[~endless], low[~endless], rtol=1e-10, atol=1e-12)


def test_relieved_factor_alone() -> None:
    assert relieved_factor([10.0], [0.0], [0.5]) == 5.0
    assert relieved_factor([10.0], [4.0], [0.5]) == pytest.approx(5.0 / 3.0, rel=1e-15)
    assert relieved_factor([10.0], [-2.0], [0.5]) == np.inf
    assert relieved_factor([0.0], [4.0], [0.5]) == 0.0
    assert isinstance(relieved_factor([10.0], [0.0], [0.5]), float)
    with pytest.raises(ValueError, match="finite"):
        relieved_factor([1.0], [0.0], [np.inf])
