"""VDI 2230 and NASA-STD-5020 against hand-made values and other routes; at the end, what holds for every standard."""

from __future__ import annotations

import inspect
import random
from collections.abc import Callable
from types import ModuleType
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from slip.base.formulas import FUNCTIONS, WORD, evaluate
from slip.base.tables import BASES, names, table
from slip.verdict.standards import aisc360, en1993, nasa5020, vdi2230
from slip.verdict.standards.common import Judgement

FORCE = st.floats(0.0, 5e4)


# --- VDI 2230 ------------------------------------------------------------------------------------------------------


def vdi(**given: Any) -> Judgement:
    usual: dict[str, Any] = {"shear": 3e3, "residual_clamp": 60e3, "n_faces": 1, "friction": 0.12, "kind": "static"}
    return vdi2230.judge(**(usual | given))


def test_vdi_by_hand(validate: Any) -> None:
    """5.22 kN over one face at mu .18 ask for 29 kN; 59.875 kN are left: S_G 2.0647."""
    left = vdi2230.residual_clamp(78000.0, 0.15, 12500.0, 4500.0, 3000.0)
    validate(16, "bracket: residual clamp", "VDI 2230 Part 1, by hand", "memory", "59875", left, rel=1e-12, unit="N")
    found = vdi(shear=5220.0, residual_clamp=left, friction=0.18)
    assert found.reserve_factor == pytest.approx(59875 / 29000 / 1.2, rel=1e-12)
    assert found.demand == pytest.approx(1.2 * 29000, rel=1e-12)


def test_vdi_friction_balances_shear_and_torque() -> None:
    """At the required clamp the friction of all faces, less what holds the torque, is just the shear [derived]."""
    F_Q, q_F, mu, M_Y, q_M, r_a = 4e3, 2, 0.15, 2.5e4, 2, 9.0
    F_KQ = vdi2230.required_clamp_torque(F_Q, q_F, mu, M_Y, q_M, r_a)
    assert mu * q_F * (F_KQ - M_Y / (q_M * mu * r_a)) == pytest.approx(F_Q, rel=1e-12)
    assert vdi2230.required_clamp_torque(F_Q, q_F, mu, 0.0, q_M, r_a) == vdi2230.required_clamp(F_Q, q_F, mu)
    judged = vdi(shear=F_Q, n_faces=2, friction=mu, torque=M_Y, friction_radius=r_a)
    assert judged.demand == pytest.approx(1.2 * F_KQ, rel=1e-12)


def test_vdi_guide_values() -> None:
    """S_G at least 1.2 for static and 1.8 for alternating loads. VDI 2230 [memory]."""
    edge = 3e3 / 0.12
    for kind, least in (("static", 1.2), ("alternating", 1.8)):
        assert vdi(kind=kind, residual_clamp=edge * least).worst == pytest.approx(1.0, rel=1e-12)
    assert vdi(kind="alternating").worst == pytest.approx(1.5 * vdi(kind="static").worst, rel=1e-12)


def test_vdi_wrong_readings_give_other_numbers() -> None:
    """The bolt's share instead of the plates' share of the axial load; one face for two; the torque left out."""
    assert vdi2230.residual_clamp(78e3, 0.15, 12.5e3, 0.0, 0.0) != pytest.approx(78e3 - 0.15 * 12.5e3, rel=0.05)
    assert vdi(n_faces=2).worst == pytest.approx(vdi().worst / 2, rel=1e-12)
    assert vdi(torque=1e4, friction_radius=10.0).worst > 1.3 * vdi().worst


def test_vdi_open_bolt_and_no_shear() -> None:
    found = vdi(shear=np.array([1e3, 0.0]), residual_clamp=np.array([60e3, -5.0]))
    assert found.worst == np.inf
    assert found.governing == 1
    assert found.reserve_factor[1] == 0.0
    idle = vdi(shear=0.0)
    assert (idle.worst, idle.reserve_factor) == (0.0, np.inf)
    assert "slip_safety" not in {function.__name__ for function, _, _ in idle.steps}


@given(preload=st.floats(2e4, 1e5), more=st.floats(0.0, 1e5), tension=FORCE, pull=FORCE, share=st.floats(0.0, 1.0))
def test_vdi_laws(preload: float, more: float, tension: float, pull: float, share: float) -> None:
    """More preload never lowers the clamp left, more tension never raises it, and the verdict follows."""
    base = vdi2230.residual_clamp(preload, share, tension, 3e3, 0.0)
    tighter = vdi2230.residual_clamp(preload + more, share, tension, 3e3, 0.0)
    pulled = vdi2230.residual_clamp(preload, share, tension + pull, 3e3, 0.0)
    assert tighter >= base >= pulled
    assert vdi(residual_clamp=tighter).worst <= vdi(residual_clamp=base).worst <= vdi(residual_clamp=pulled).worst


# --- NASA-STD-5020 -------------------------------------------------------------------------------------------------


def nasa(**given: Any) -> Judgement:
    usual: dict[str, Any] = {
        "shear": 300.0,
        "tension": 400.0,
        "n_faces": 1,
        "n_fasteners": 4,
        "nominal_preload": 1200.0,
        "preload_variation": 0.35,
        "friction": 0.2,
        "surface": "clean bare",
        "safety_factor": 1.4,
        "fitting_factor": 1.0,
    }
    return nasa5020.judge(**(usual | given))


def step(judgement: Judgement, name: str) -> float:
    return next(result for function, _, result in judgement.steps if function.__name__ == name)


def test_nasa_by_hand(validate: Any) -> None:
    """n_f 4, 1200 lbf, Gamma .35, 5 % relaxation: 940.5 lbf; mu .2, FS 1.4, FF 1, 300 and 400 lbf: MS +0.414.

    The unit of force does not matter.
    """
    found, standard = nasa(), "NASA-STD-5020, by hand"
    validate(11, "lowest preload", standard, "memory", "940.5", step(found, "preload_low"), rel=1e-9, unit="lbf")
    validate(11, "margin of safety", standard, "memory", "0.414", step(found, "margin_of_safety"))
    assert found.reserve_factor == pytest.approx(1.0 + step(found, "margin_of_safety"), rel=1e-12)


def test_nasa_margin_by_another_route() -> None:
    """Factored shear equal to the friction of what the factored tension leaves: no margin [derived]."""
    shear = (0.2 * (4 * 940.5 - 1.4 * 400)) / 1.4
    assert step(nasa(shear=shear), "margin_of_safety") == pytest.approx(0.0, abs=1e-9)
    two = nasa(n_faces=2, shear=2 * shear)
    assert two.worst == pytest.approx(1.0, rel=1e-9)
    assert any("one of 2 faces" in note for note in two.notes)


@pytest.mark.parametrize(("surface", "used"), [("clean bare", 0.2), ("other", 0.1), ("tested", 0.35)])
def test_nasa_friction_cap(surface: str, used: float) -> None:
    """At most .2 for clean bare faces, else .1, without test. NASA-STD-5020 [memory]."""
    assert nasa(friction=0.35, surface=surface, tension=0.0).resistance == pytest.approx(4 * used * 940.5, rel=1e-9)
    assert nasa(friction=0.08, surface=surface, tension=0.0).resistance == pytest.approx(4 * 0.08 * 940.5, rel=1e-9)


def test_nasa_wrong_readings_give_other_numbers() -> None:
    """One fastener's variation for the group; tension left out; relaxation taken from the nominal; c_min forgotten."""
    single = (1 - 0.35) * 1200 * 0.95
    assert step(nasa(), "preload_low") > 1.2 * single
    assert nasa(tension=0.0).worst < 0.9 * nasa().worst
    assert step(nasa(), "preload_low") != pytest.approx((1 - 0.175) * 1200 - 60, rel=1e-3)
    assert step(nasa(c_min=0.9), "preload_low") == pytest.approx(0.9 * 940.5, rel=1e-9)
    assert step(nasa(thermal_loss=40.5), "preload_low") == pytest.approx(900.0, rel=1e-9)


def test_nasa_without_preload_or_load() -> None:
    gone = nasa(thermal_loss=2000.0)
    assert (gone.worst, gone.reserve_factor) == (np.inf, 0.0)
    idle = nasa(shear=0.0, tension=0.0)
    assert (idle.worst, idle.reserve_factor) == (0.0, np.inf)


@given(preload=st.floats(100.0, 1e4), more=st.floats(1.0, 3.0), tension=FORCE, pull=FORCE, n_f=st.integers(1, 20))
def test_nasa_laws(preload: float, more: float, tension: float, pull: float, n_f: int) -> None:
    """More preload never raises the utilisation, more tension never lowers it; more fasteners help."""
    base = nasa(nominal_preload=preload, tension=tension, n_fasteners=n_f)
    assert nasa(nominal_preload=preload * more, tension=tension, n_fasteners=n_f).resistance >= base.resistance
    assert nasa(nominal_preload=preload, tension=tension + pull, n_fasteners=n_f).worst >= base.worst
    assert nasa(nominal_preload=preload, tension=tension, n_fasteners=n_f + 1).worst < base.worst


@pytest.mark.parametrize(
    ("judge", "wrong", "named"),
    [
        (vdi, {"kind": "shock"}, "static, alternating"),
        (vdi, {"friction": 0.0}, "friction"),
        (vdi, {"residual_clamp": np.nan}, "residual_clamp"),
        (vdi, {"torque": 1.0}, "friction_radius"),
        (vdi, {"torque": -1.0, "friction_radius": 9.0}, "torque"),
        (vdi, {"n_faces": 0}, "n_faces"),
        (nasa, {"surface": "polished"}, "clean bare, other, tested"),
        (nasa, {"preload_variation": 1.0}, "preload_variation"),
        (nasa, {"relaxation": 5.0}, "relaxation"),
        (nasa, {"n_fasteners": 2.5}, "n_fasteners"),
        (nasa, {"tension": -1.0}, "tension"),
        (nasa, {"safety_factor": np.nan}, "safety_factor"),
    ],
)
def test_wrong_input(judge: Callable[..., Judgement], wrong: dict[str, Any], named: str) -> None:
    with pytest.raises(ValueError, match=named):
        judge(**wrong)


# --- every standard ------------------------------------------------------------------------------------------------

MODULES = (en1993, aisc360, vdi2230, nasa5020)


def formulas(module: ModuleType) -> list[Callable[..., Any]]:
    own = (member for _, member in inspect.getmembers(module, inspect.isfunction))
    return [f for f in own if hasattr(f, "formula") and f.__module__ == module.__name__]


FORMULAS = [f for module in MODULES for f in formulas(module)]
JUDGED = {
    "EN without tension": en1993.judge(
        shear=np.array([10e3, 30e3]),
        n_faces=1,
        tensile_strength=800.0,
        stress_area=157.0,
        slip_factor="B",
        category="B",
    ),
    "EN with tension": en1993.judge(
        shear=np.array([10e3, 30e3, 20e3]),
        tension=np.array([0.0, 5e3, 60e3]),
        n_faces=2,
        tensile_strength=1000.0,
        stress_area=157.0,
        slip_factor=0.45,
        category="C",
        hole="long slot",
        slot="along",
    ),
    "AISC LRFD": aisc360.judge(
        shear=np.array([10e3, 30e3]), tension=8e3, n_faces=1, size="7/8", group="A490", slip_factor="B", method="LRFD"
    ),
    "AISC ASD 2005": aisc360.judge(
        shear=10e3, tension=8e3, n_faces=1, size="M20", group="A325", slip_factor="A", method="ASD", edition="2005"
    ),
    "VDI": vdi(shear=np.array([1e3, 2e3]), torque=np.array([3e4, 1e4]), friction_radius=9.5, kind="alternating"),
    "NASA": nasa(shear=np.array([300.0, 350.0]), friction=0.3),
}


def test_there_are_formulas_in_every_module() -> None:
    assert [len(formulas(module)) for module in MODULES] == [3, 6, 5, 6]


@pytest.mark.parametrize("function", FORMULAS, ids=lambda f: f"{f.__module__.rpartition('.')[2]}.{f.__name__}")
def test_text_with_numbers_put_in_is_the_function(function: Any) -> None:
    """The printed line, evaluated again, is the number; it names the function's arguments and nothing else."""
    text = function.formula.text
    arguments = list(inspect.signature(function).parameters)
    assert set(WORD.findall(text)) - set(FUNCTIONS) == set(arguments)
    draw = random.Random(text)
    for _ in range(20):
        values = {name: float(f"{draw.uniform(0.1, 9.0):.6g}") for name in arguments}
        result = float(function(**values))
        assert evaluate(function.formula.put_in(values)) == pytest.approx(result, rel=1e-9, abs=1e-12)
        many = function(**{name: np.full(3, value) for name, value in values.items()})
        assert np.asarray(many) == pytest.approx(np.full(3, result), rel=1e-12)


@pytest.mark.parametrize("judgement", JUDGED.values(), ids=list(JUDGED))
def test_steps_are_the_governing_bolts_numbers(judgement: Judgement) -> None:
    """Each step evaluates to its result, and some step ends in the demand or the resistance of the governing bolt."""
    assert len(judgement.steps) >= 2
    for function, values, result in judgement.steps:
        assert evaluate(function.formula.put_in(values)) == pytest.approx(result, rel=1e-6)
    ends = [float(np.ravel(force)[judgement.governing]) for force in (judgement.demand, judgement.resistance)]
    assert any(result == end for _, _, result in judgement.steps for end in ends)
    assert judgement.worst == np.max(judgement.utilisation) == ends[0] / ends[1]


@pytest.mark.parametrize("judgement", JUDGED.values(), ids=list(JUDGED))
def test_judgement_is_complete(judgement: Judgement) -> None:
    assert judgement.basis in BASES
    assert judgement.basis == max((f.formula.basis for f, _, _ in judgement.steps), key=BASES.index)
    assert judgement.resistance_unit == "force"
    assert judgement.edition
    assert judgement.clause
    assert any(" loads" in note for note in judgement.notes)
    assert all(note.endswith(".") and note[0].isupper() for note in judgement.notes)
    assert ("From memory, check the printed clause." in judgement.notes) == (judgement.basis == "memory")
    assert np.shape(judgement.demand) == np.shape(judgement.resistance) == np.shape(judgement.utilisation)


def test_the_first_of_equal_bolts_governs() -> None:
    assert vdi(shear=np.array([1e3, 2e3, 2e3 * (1 + 1e-12)])).governing == 1
    assert vdi(shear=np.array([1e3, 2e3, 2e3 * (1 + 1e-6)])).governing == 2


def test_every_source_key_has_its_citation() -> None:
    citations = {row["key"]: row["citation"] for name in names() if name.startswith("sources") for row in table(name)}
    used = {(f.formula.source, f.formula.basis) for f in FORMULAS}
    for name in ("slip_factors", "en1993_holes", "aisc_holes", "aisc_pretension"):
        used |= {(row["source"], row["basis"]) for row in table(name)}
    for source, basis in used:
        assert basis in BASES
        for key in source.split(";"):
            assert ("from memory" in citations[key]) == (basis == "memory"), key


def test_numbers_of_the_tables() -> None:
    """EN 1090-2, Table 18 [published]; AISC classes by edition [memory]; low of class B from SCI AD 383 [published]."""
    rows = table("slip_factors")
    found = {(r["standard"], r["edition"], r["surface_class"]): float(r["typical"]) for r in rows}
    en = {("EN 1993-1-8", "2005", letter): mu for letter, mu in zip("ABCD", (0.5, 0.4, 0.3, 0.2), strict=True)}
    new, old = ("AISC 360", "2016"), ("AISC 360", "2005")
    assert found == en | {(*new, "A"): 0.30, (*new, "B"): 0.50, (*old, "A"): 0.35, (*old, "B"): 0.50}
    lows = [(r["surface_class"], float(r["low"])) for r in rows if r["low"]]
    assert lows == [("B", 0.20)]
