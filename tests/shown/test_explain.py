"""Every printed line of an explanation is worked out again from the text alone, and nothing of the result is left without a line."""

import ast
import math
import re
from pathlib import Path

import numpy as np
import pytest

from slip.assess import assess
from slip.base.units import SI
from slip.report.equations import explain
from slip.report.face_lines import explain_face
from slip.report.machine import result
from slip.report.terminal import check_text

ROOT = Path(__file__).resolve().parents[2]
JOINTS = (path for path in (ROOT / "examples").glob("*.toml") if "[[case]]" in path.read_text(encoding="utf-8"))
EXAMPLES = sorted(path.stem for path in JOINTS if "[bolt]" in path.read_text(encoding="utf-8"))
CALLS = {name: getattr(math, name) for name in ("sqrt", "exp", "cos", "sin", "tan", "hypot")}
CALLS |= {name: getattr(math, name) for name in ("sinh", "cosh", "tanh")}
CALLS |= {"ln": math.log, "abs": abs, "min": min, "max": max}


def worked_out(text: str) -> tuple[float, float]:
    """Value of plain arithmetic, and the size of its largest term: a difference is no more exact than what it is taken of."""

    def visit(node: ast.AST) -> tuple[float, float]:
        if isinstance(node, ast.Constant) and isinstance(node.value, int | float):
            return float(node.value), abs(float(node.value))
        if isinstance(node, ast.Name) and node.id == "pi":
            return math.pi, math.pi
        if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
            value, term = visit(node.operand)
            return -value, term
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and not node.keywords:
            found = [visit(argument) for argument in node.args]
            value = float(CALLS[node.func.id](*(v for v, _ in found)))
            keeps = node.func.id in ("min", "max", "abs", "hypot")
            return value, max([abs(value), *(t for _, t in found if keeps)])
        if isinstance(node, ast.BinOp):
            (a, s), (b, t) = visit(node.left), visit(node.right)
            match node.op:
                case ast.Add():
                    return a + b, max(s, t)
                case ast.Sub():
                    return a - b, max(s, t)
                case ast.Mult():
                    return a * b, max(s * abs(b), t * abs(a))
                case ast.Div():
                    return a / b, s / abs(b)
                case ast.Pow():
                    return a**b, s**b
        raise ValueError(f"not plain arithmetic: {ast.dump(node)[:80]}")

    return visit(ast.parse(text.replace("^", "**"), mode="eval").body)


def agrees(text: str, printed: float) -> bool:
    value, term = worked_out(text)
    return abs(value - printed) <= 1e-6 * max(term, abs(printed))


def test_the_reader_of_formulas_reads_them():
    assert worked_out("2*(3 + 4)^2/7 - -1") == (15.0, 14.0)
    assert worked_out("min(max(60/22.5, 1), 10) + hypot(3, 4)")[0] == pytest.approx(7.6666667)
    assert agrees("1e6 - 999999.9", 0.1001) and not agrees("2 - 1", 1.00001)
    with pytest.raises(ValueError, match="plain arithmetic"):
        worked_out("[1][0]")
    with pytest.raises(KeyError):
        worked_out("eval(1)")


@pytest.fixture(scope="module", params=EXAMPLES)
def joint_assessed(request):
    return assess(ROOT / "examples" / f"{request.param}.toml")


def every_explanation(assessment):
    for case in assessment.joint.cases:
        for bolt in assessment.joint.pattern.names:
            yield explain(assessment, case.name, bolt)


def test_every_line_is_its_own_proof(joint_assessed):
    wrong = []
    lines = 0
    for explanation in every_explanation(joint_assessed):
        for line in explanation.lines:
            lines += 1
            if not agrees(line.put_in, float(f"{line.result:.8g}")):
                wrong.append(f"{explanation.case}, {explanation.bolt}: {line.name}: {line.put_in} is not {line.result}")
    assert wrong == [] and lines > 20


def test_every_line_of_a_face_of_known_pressure_is_its_own_proof():
    lines = explain_face(assess(ROOT / "examples/bars.toml")).lines
    assert [line for line in lines if not agrees(line.put_in, float(f"{line.result:.8g}"))] == [] and len(lines) > 60
    assert all(line.source and line.basis for line in lines)


def test_every_line_names_source_and_basis(joint_assessed):
    bare = [
        line.name for e in every_explanation(joint_assessed) for line in e.lines if not line.source or not line.basis
    ]
    assert bare == []


def test_a_value_of_a_table_names_the_document_behind_it():
    lines = {line.symbol: line for line in explain(assess(ROOT / "examples/tray.toml")).lines if line.group == "inputs"}
    assert (lines["mu"].source, lines["mu"].basis) == ("ecss_32_23", "published")
    assert (lines["d_w"].source, lines["d_h"].source, lines["P"].source) == ("asme_b18_3", "asme_b18_2_8", "asme_b1_1")
    assert (lines["R_p"].source, lines["R_p"].basis) == ("file", "given")
    scatter = {line.symbol: line for line in explain(assess(ROOT / "examples/bracket.toml")).lines}["t"]
    assert (scatter.source, scatter.basis) == ("vdi2230_1986", "published")


def test_no_minus_zero_and_no_bare_name_is_left(joint_assessed):
    for explanation in every_explanation(joint_assessed):
        for line in explanation.lines:
            assert not re.search(r"-0(?![.\d])", line.put_in), line
            words = set(re.findall(r"[A-Za-z_]\w*", re.sub(r"\de[-+]?\d+", "", line.put_in)))
            assert words <= {*CALLS, "pi"}, line


# Key of the ledger in the JSON: how its line is called.
LEDGER = {
    "assembly_low": r"lowest preload",
    "assembly_high": r"highest preload",
    "embedding": r"embedding(, stiffest bolt)?$",
    "relaxation": r"relaxation$",
    "thermal_loss": r"thermal loss$",
    "thermal_gain": r"thermal gain",
    "axial_relief": r"axial relief",
    "clamp_low": r"lowest clamp$",
    "clamp_high": r"highest clamp$",
    "bolt_force_high": r"highest bolt force$",
    "yield_use": r"use of yield$",
    "bearing_pressure_high": r"pressure under the head$",
    "separation_factor": r"separation factor$",
    "shear": r"shear of the bolt$",
}


def has(lines, pattern: str, value: float) -> bool:
    own = [line.result for line in lines if re.match(pattern, line.name)]
    return any(found == pytest.approx(value, rel=1e-9, abs=1e-9) for found in own)


def test_every_number_of_the_ledger_has_its_line(joint_assessed):
    """The ledger of the JSON, in the units of the explanation, against the lines of each bolt."""
    found = result(joint_assessed, SI)
    seen = set()
    for case in found["cases"]:
        for bolt in joint_assessed.joint.pattern.names:
            explanation = explain(joint_assessed, case["name"], bolt)
            (end,) = (end for end in case["ends"] if end["end"] == explanation.end)
            (row,) = (row for row in end["ledger"] if row["bolt"] == bolt)
            numbers = {key: value for key, value in row.items() if key not in ("bolt", "open")}
            assert set(numbers) <= set(LEDGER), "a new number in the ledger needs its line"
            seen |= set(numbers)
            missing = [key for key, value in numbers.items() if not has(explanation.lines, LEDGER[key], value)]
            assert missing == [], (case["name"], bolt)
    assert seen >= set(LEDGER) - {"separation_factor"}


NAMES = {
    ("per_bolt", "safety"): r"safety (per bolt|of the bolt on its pressure patch), clamp held",
    ("per_bolt", "load_factor"): r"load factor (per bolt|of the bolt on its pressure patch), all loads",
    ("group", "safety"): r"safety of the group, clamp held",
    ("group", "load_factor"): r"load factor of the group, all loads",
    ("force_only", "safety"): r"safety for the force alone, clamp held",
    ("force_only", "load_factor"): r"load factor for the force alone, all loads",
}


def test_every_factor_has_its_line(joint_assessed):
    """Per bolt, group and force alone, each with the clamp held and with all loads growing, among the lines of all bolts."""
    for case in result(joint_assessed, SI)["cases"]:
        told = [explain(joint_assessed, case["name"], bolt) for bolt in joint_assessed.joint.pattern.names]
        for end in case["ends"]:
            lines = [line for explanation in told if explanation.end == end["end"] for line in explanation.lines]
            for (kind, factor), name in NAMES.items():
                if lines and factor in end["gross_slip"][kind]:
                    assert has(lines, name, end["gross_slip"][kind][factor]), (case["name"], end["end"], kind, factor)


def test_the_governing_bolt_is_explained_by_default(joint_assessed):
    explanation, governing = explain(joint_assessed), joint_assessed.verdict.governing
    assert explanation.case == governing.case and explanation.end == governing.end
    assert explanation.bolt == governing.bolt or not governing.bolt


def test_a_bolt_is_explained_at_its_own_worst_end(joint_assessed):
    slipping = joint_assessed.slip.bolt_load_factor
    for i, case in enumerate(joint_assessed.joint.cases):
        rows = joint_assessed.clamp.states.case == i
        for b, bolt in enumerate(joint_assessed.joint.pattern.names):
            least = float(np.min(slipping[rows, b]))
            lines = explain(joint_assessed, case.name, bolt).lines
            assert has(lines, r"load factor (per|of the) bolt", least) or math.isinf(least)


# joints whose factors are zero, infinite or unlike


ODD = """
format = 1
units = "N mm"
[bolt]
thread = "M12"
grade = "8.8"
[tightening]
preload = [30000, 45000]
[losses]
embedding = 0
relaxation = 0
[interface]
friction = 0.2
[pattern]
positions = [[-60, -40], [60, -40], [-60, 40], [70, 50]]
[axial]
bolt_share = [0.1, 0.3]
credit_compression = {credit}
[required]
decides = "{decides}"
decides_reason = "for the test"
grows = "{grows}"
[[case]]
name = "c"
acts_on = "joint"
{case}
"""
CASES = {
    "no load at all": 'shear = [0, 0]\nkind = "static"',
    "no shear, pulled": 'axial = 1000\nkind = "static"',
    "all open": 'shear = [100, 50]\naxial = 200000\nkind = "static"',
    "one bolt open": 'shear = [100, 50]\naxial = 30000\nmoment = [4e6, -2e6, 0]\nkind = "static"',
    "pressed": 'shear = [3000, 0]\naxial = -40000\nkind = "static"',
    "turned about the centroid": 'moment = [0, 0, 1e6]\nkind = "static"',
    "unlike ends": 'shear = [3000, 0]\naxial = 2000\nother_end = { shear = [-1000, 500] }\nkind = "alternating"',
    "unsigned": 'shear = [900, 700]\naxial = 3000\nmoment = [3e5, 1e5, 2e5]\nat = [10, 5, 30]\npeak = "3 sigma, unsigned"',
}


@pytest.mark.parametrize("credit", ["true", "false"])
@pytest.mark.parametrize(("decides", "grows"), [("per bolt", "all loads"), ("group", "shear")])
@pytest.mark.parametrize("case", CASES)
def test_odd_joints_are_told_truly(case, decides, grows, credit):
    """Lines evaluate; a factor that is printed is one of the assessment's; one that nothing limits is not printed."""
    from slip.read.build import read_text

    assessment = assess(read_text(ODD.format(case=CASES[case], decides=decides, grows=grows, credit=credit)))
    slipping, states = assessment.slip, assessment.clamp.states
    factors = {
        r"safety per bolt": slipping.bolt_safety,
        r"load factor per bolt": slipping.bolt_load_factor,
        r"safety of the group": slipping.group.factor,
        r"load factor of the group": slipping.group_load_factor,
        r"safety for the force alone": slipping.force_safety,
        r"load factor for the force alone": slipping.force_load_factor,
    }
    for b, bolt in enumerate(assessment.joint.pattern.names):
        explanation = explain(assessment, "c", bolt)
        wrong = [line for line in explanation.lines if not agrees(line.put_in, float(f"{line.result:.8g}"))]
        assert wrong == []
        rows = [i for i, end in enumerate(states.end) if end == explanation.end]
        for name, values in factors.items():
            own = values[rows, b] if values.ndim == 2 else values[rows]
            shown = [line.result for line in explanation.lines if line.name.startswith(name)]
            assert all(any(v == pytest.approx(s, rel=1e-8, abs=1e-12) for v in own) for s in shown), (name, shown, own)
            if np.isfinite(own).all():
                assert shown, f"{name} has no line"
            if np.isinf(own).all():
                assert shown == []
    assert len(check_text(assessment).splitlines()) <= 24
