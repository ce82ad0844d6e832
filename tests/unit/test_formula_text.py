"""The printed formula is a second route to the number beside it: its text, numbers put in, against the function."""

import importlib
import inspect
import pkgutil
import random
import re
from pathlib import Path

import pytest

from slip.base import tables
from slip.base.formulas import Formula, evaluate

STAGES = ("clamp", "pressure", "friction", "verdict", "stiffness")
DRAWS = 20
USUAL = (0.1, 0.9)
SHEARED = {"Q": (1, 5), "P": (60, 90)}  # below gross slip whatever the friction
STRONG = {"F_S": (5, 9)}  # not all sliders slip
WIDE = {"a": (1, 2)}  # the contact is wider than its flat part
# Where the usual range is outside what a formula holds for: module.function -> argument -> range.
RANGES: dict[str, dict[str, tuple[float, float]]] = {
    "clamp.springs.body_ratio": {"D_A": (5, 400), "d_w": (10, 20)},
    "clamp.springs.cone_slice": {"D_0": (14, 30), "d_h": (8, 13), "length": (0.01, 40), "E": (7e4, 2.1e5)},
    "clamp.springs.sleeve_slice": {"D_A": (14, 60), "d_h": (8, 13), "length": (0.01, 40), "E": (7e4, 2.1e5)},
    "clamp.springs.cone_slope_nut": {"beta_L": (0.5, 10), "y": (1, 10)},
    "clamp.springs.cone_slope_tapped": {"beta_L": (0.5, 10), "y": (1, 10)},
    "clamp.thread.minor_diameter": {"d": (3, 42), "P": (0.5, 2)},
    "clamp.tightening.bound_from_ratio": {"alpha": (1, 4)},
    "clamp.tightening.variation": {"alpha": (1.01, 4), "z": (1, 4)},
    "friction.closed.cylinder.displacement": SHEARED,
    "friction.closed.cylinder.edge_stress": {"e_a": (0.01, 0.04)},
    "friction.closed.cylinder.energy": SHEARED,
    "friction.closed.cylinder.stick_ratio": SHEARED,
    "friction.closed.flat.rounded_approach": WIDE,
    "friction.closed.flat.rounded_force": WIDE,
    "friction.closed.layers.layers_energy": {"P": (0.1, 2)},  # on both sides of the onset
    "friction.closed.loops.slider_energy": {"u_0": (0.1, 5)},
    "friction.closed.loops.uniform_displacement": STRONG,
    "friction.closed.loops.uniform_energy": STRONG,
    "friction.closed.loops.uniform_force": STRONG,
    "friction.closed.loops.uniform_tangent_stiffness": STRONG,
    "friction.closed.powerlaw.displacement": SHEARED,
    "friction.closed.powerlaw.energy": SHEARED,
    "friction.closed.powerlaw.stick_ratio": SHEARED,
    "friction.closed.rough.displacement": SHEARED,
    "friction.closed.rough.energy": SHEARED,
    "friction.closed.rough.penalty_displacement": SHEARED,
    "friction.closed.rough.penalty_energy": SHEARED,
    "friction.closed.rough.tangent_stiffness": SHEARED,
    "friction.closed.sphere.displacement": SHEARED,
    "friction.closed.sphere.energy": SHEARED,
    "friction.closed.sphere.stick_ratio": SHEARED,
    "friction.closed.strip.force": WIDE,
    "friction.closed.superposition.shear_share": SHEARED,
    "friction.closed.superposition.stick_force": SHEARED,
    "friction.law.load_factor": {"closed": (1, 1)},  # a switch: 0 or 1
}


def modules(stage: str):
    package = importlib.import_module(f"slip.{stage}")
    for found in pkgutil.walk_packages(package.__path__, package.__name__ + "."):
        yield importlib.import_module(found.name)


def decorated() -> dict[str, object]:
    """Every function with a formula, under stage.module.function."""
    found = {}
    for stage in STAGES:
        for module in modules(stage):
            for name, function in vars(module).items():
                if isinstance(getattr(function, "formula", None), Formula) and function.__module__ == module.__name__:
                    found[f"{module.__name__.removeprefix('slip.')}.{name}"] = function
    return found


FUNCTIONS = decorated()


@pytest.mark.parametrize("name", FUNCTIONS)
def test_text_gives_the_number_of_the_function(name):
    function = FUNCTIONS[name]
    ranges = RANGES.get(name, {})
    arguments = list(inspect.signature(function).parameters)
    assert set(ranges) <= set(arguments), "a range for an argument that the function does not have"
    draw = random.Random(name)
    for _ in range(DRAWS):
        # eight digits, as the text shows them, so that what is left over is the formula's
        values = {key: float(f"{draw.uniform(*ranges.get(key, USUAL)):.8g}") for key in arguments}
        shown = function.formula.put_in(values)
        assert evaluate(shown) == pytest.approx(float(function(**values)), rel=1e-6, abs=0), shown


@pytest.mark.parametrize("name", FUNCTIONS)
def test_text_uses_every_argument(name):
    function = FUNCTIONS[name]
    assert set(inspect.signature(function).parameters) <= set(re.findall(r"[A-Za-z_]\w*", function.formula.text))


@pytest.mark.parametrize("name", FUNCTIONS)
def test_source_and_basis_are_known(name):
    kept = FUNCTIONS[name].formula
    keys = {row["key"] for table in tables.names() if table.startswith("sources") for row in tables.table(table)}
    assert kept.source and set(kept.source.split(";")) <= keys
    assert kept.basis in tables.BASES


@pytest.mark.parametrize("stage", STAGES)
def test_no_decorated_function_is_missed(stage):
    """The walk over the packages must find as many functions as the source text decorates."""
    folder = Path(tables.__file__).parents[1] / stage
    written = sum(len(re.findall(r"^\s*@formula\(", file.read_text(), re.M)) for file in folder.rglob("*.py"))
    assert sum(name.startswith(stage + ".") for name in FUNCTIONS) == written


def test_ranges_name_functions_that_exist():
    assert set(RANGES) <= set(FUNCTIONS)


def test_a_wrong_text_is_caught():
    wrong = Formula("y", "2*x", "", "practice", "practice", "")
    assert evaluate(wrong.put_in({"x": 0.5})) != pytest.approx(0.5**2, rel=1e-6)
