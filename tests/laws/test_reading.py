"""The reader against mutated files: a joint of finite numbers, or faults in words; never anything else."""

from __future__ import annotations

import dataclasses
import json
import math
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from slip.base.errors import Problems
from slip.base.units import KINDS, SI
from slip.joint.joint import Joint
from slip.read.build import build, read_text
from slip.read.document import parse, read_bytes
from slip.read.schema import KEYS
from slip.read.template import template

MANY = settings(max_examples=1000, deadline=None, suppress_health_check=[HealthCheck.too_slow])

TORQUE = """\
format = 1
title = "A lever on a frame"
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
washer_thickness = [3, 2.5]
material = { youngs_modulus = "206 GPa", poissons_ratio = 0.3, expansion = "11.5e-6 1/K" }
[[bolt.segment]]
diameter = 16
length = 55.5
[tightening]
torque = "200 N m"
thread_friction = [0.10, 0.14]
head_friction = [0.10, 0.14]
prevailing_torque = [0, 0]
scatter_sigma = "8 %"
sigmas = 3
[losses]
embedding = "14.5 um"
relaxation = "5 %"
thermal = { bolt = 20, plates = [60, 20] }
[[plate]]
name = "lever"
material = "grey iron"
thickness = 20
outline = [-120, -90, 120, 90]
load_edge = "top"
[[plate]]
material = "steel"
thickness = 30
outline = { outer_diameter = 400, inner_diameter = 4 }
[interface]
friction = { pair = "steel / grey iron" }
fluid_can_reach = false
parallel_faces = 1
roughness = ["Ra 0.8 um", "Rz 6 um"]
tangential_stiffness = [8000, 20000]
[pattern]
positions = [
  [-80, -60], [0, -60], [80, -60],
  [-80, 60], [0, 60], [80, 60]  # a comment
]
[axial]
meaning = "external"
model_preload = "90 kN"
model_bolt_share = 0.15
load_introduction = 0.5
[required]
decides = "group"
decides_reason = "ductile"
true_slip = "1 um"
[[standard]]
name = "AISC 360"
edition = "2016"
filler_factor = 0.85
[[case]]
name = "given"
acts_on = "joint"
shear = [0, 24000]
axial = 300
moment = [0, 0, 2.0e6]
at = [0, 0, 10]
kind = "alternating"
ratio = -0.5
cycles = 2e6
[[case]]
acts_on = "each bolt"
shear = ["1 kN", "200 lbf"]
other_end = { shear = [0, 0], axial = 4 }
thermal = "3000 N"
[[case]]
acts_on = "joint"
shear = [1, 2]
peak = "3 sigma, unsigned"
[finite_elements]
present = { per_area = 12000 }
element_size = [4, 5]
"""
PRELOAD = """\
format = 1
units = "lbf in"
bolt.thread = "3/4-10 UNC"
bolt.yield_strength = "92 ksi"
tightening = { preload = { B2 = [20000, 28000], others = ["90 kN", "30 kipf"] } }
losses = { embedding = 0, thermal = "200 lbf" }
interface.friction = [0.3, 0.4]
pattern.grid = { columns = 3, rows = 2, pitch = [3, "4 in"] }
case = [ { name = "a", acts_on = "joint", shear = [0, 900], kind = "static" }, { acts_on = "joint", axial = 100 } ]
scatter = { target = 3.8 }
table = { units = "lbf in", decimal = "," }
"""
CIRCLE = """\
format = 1
[bolt]
thread = "M10"
[tightening]
preload = "20 kN"
method = "power driver"
[losses]
embedding = "900 N"
[interface]
friction = 0.2
[pattern]
circle = { count = 8, diameter = "160 mm" }
[[case]]
acts_on = "joint"
moment = [0, 0, "150 N m"]
"""
FILES = [TORQUE, PRELOAD, CIRCLE]


def test_the_files_are_good_before_they_are_mutated() -> None:
    for text in (*FILES, template("bolted")):
        assert_finite(read_text(text))


def assert_finite(value: Any, path: str = "joint") -> None:
    """No number of a record is NaN or infinite."""
    if dataclasses.is_dataclass(value):
        for field in dataclasses.fields(value):
            assert_finite(getattr(value, field.name), f"{path}.{field.name}")
    elif isinstance(value, dict):
        for key, item in value.items():
            assert_finite(item, f"{path}.{key}")
    elif isinstance(value, (list, tuple, np.ndarray)):
        for i, item in enumerate(value):
            assert_finite(item, f"{path}[{i}]")
    elif isinstance(value, (int, float, np.number)):
        assert math.isfinite(value), path


def read_or_refuse(text: str) -> Joint | Problems:
    """A joint of finite numbers, or faults that each say in one line what to write."""
    try:
        joint = read_text(text)
    except Problems as problems:
        assert problems.errors
        for error in problems.errors:
            assert error.code and error.found and error.expected and error.remedy, repr(error)
            assert 0 <= error.line <= text.count("\n") + 1
            assert str(error).isprintable() and len(str(error)) < 1000
            json.dumps(error.as_dict(), allow_nan=False)
        assert [e.line for e in problems.errors] == sorted(e.line for e in problems.errors)
        return problems
    assert_finite(joint)
    return joint


# --- TOML values of every type, huge, deep, odd --------------------------------------------------------------------

WORDS = [
    quantity
    for kind in KINDS
    for quantity in (f"1e300 {SI.unit(kind)}", f"1e-300 {SI.unit(kind)}", f"-2 {SI.unit(kind)}")
]
WORDS += [
    "",
    " ",
    "auto",
    "NaN",
    "inf N",
    "1e999 N",
    "M0x1",
    "M16x1.5",
    "5 %",
    "-5 %",
    "Ra 1 um",
    "Rz -3 um",
    "steel / steel",
]
WORDS += ["3 sigma, unsigned", "each bolt", "a\0b", "../..", "others"]
SCALARS = st.one_of(
    st.integers(-5, 5).map(str),
    st.integers(-(10**30), 10**30).map(str),
    st.sampled_from(
        ["9" * 400, "-" + "9" * 400, "0x" + "f" * 5000, "1" * 5000, "1e308", "-1e308", "1e31", "1e-320", "5e-324"]
    ),
    st.sampled_from(["nan", "-nan", "inf", "-inf", "-0.0", "true", "false", "0o17", "0b1", "1_000", "1e5"]),
    st.floats(allow_nan=False, allow_infinity=False).map(
        lambda x: repr(x) if "." in repr(x) or "e" in repr(x) else f"{x}.0"
    ),
    st.sampled_from(["1979-05-27", "07:32:00", "1979-05-27T07:32:00Z", "1979-05-27 07:32:00.5"]),
    st.sampled_from(WORDS).map(json.dumps),
    st.text(st.characters(codec="utf-8"), max_size=20).map(lambda text: json.dumps(text, ensure_ascii=True)),
    st.text(max_size=12).map(lambda text: f"'{text}'"),
)
NAMES = st.sampled_from(
    sorted({key.name for key in KEYS} | {"B1", "B2", "others", "pair", "rows", "count", "pitch", "bolt", "plates"})
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.one_of(
        st.lists(inner, max_size=7).map(lambda items: f"[{', '.join(items)}]"),
        st.dictionaries(NAMES, inner, max_size=4).map(
            lambda d: f"{{ {', '.join(f'{k} = {v}' for k, v in d.items())} }}"
        ),
    ),
    max_leaves=8,
) | st.integers(1, 2000).map(lambda depth: "[" * depth + "]" * depth)
TABLES = ["", *sorted({key.table.removesuffix("[]") for key in KEYS} - {""}), "nothing", "bolt.segment.x"]
LINES = st.one_of(
    st.builds("{} = {}".format, NAMES, VALUES),
    st.builds("{} = {}".format, st.sampled_from(TABLES[1:]), VALUES),
    st.sampled_from([f"[{table}]" for table in TABLES[1:]] + [f"[[{table}]]" for table in TABLES[1:]]),
    st.builds("{}.{} = {}".format, st.sampled_from(TABLES[1:]), NAMES, VALUES),
    st.text(max_size=15),
)


def put_value(line: str, value: str) -> str:
    """The line with another value behind its equals sign."""
    key, equals, _ = line.partition("=")
    return f"{key}= {value}" if equals else line


def turn_header(line: str) -> str:
    """A table made an array of tables, or the other way round."""
    return line[1:-1] if line.startswith("[[") else f"[{line}]" if line.startswith("[") else line


@st.composite
def mutated(draw: st.DrawFn) -> str:
    """A good file after a few mutations of its lines."""
    lines = draw(st.sampled_from(FILES)).splitlines()
    for _ in range(draw(st.integers(1, 4))):
        at = draw(st.integers(0, len(lines) - 1))
        kind = draw(
            st.sampled_from(
                ["drop", "twice", "value", "value", "value", "header", "insert", "insert", "swap", "letters"]
            )
        )
        if kind == "drop" and len(lines) > 1:
            del lines[at]
        elif kind == "twice":
            lines.insert(draw(st.integers(0, len(lines))), lines[at])
        elif kind == "value":
            lines[at] = put_value(lines[at], draw(VALUES))
        elif kind == "header":
            lines[at] = turn_header(lines[at])
        elif kind == "insert":
            lines.insert(at, draw(LINES))
        elif kind == "swap":
            other = draw(st.integers(0, len(lines) - 1))
            lines[at], lines[other] = lines[other], lines[at]
        elif kind == "letters":
            start = draw(st.integers(0, len(lines[at])))
            lines[at] = lines[at][:start] + draw(st.text(max_size=3)) + lines[at][start + draw(st.integers(0, 3)) :]
    return draw(st.sampled_from(["\n", "\n", "\r\n"])).join(lines)


@MANY
@given(mutated())
def test_a_mutated_file_is_read_or_refused_in_words(text: str) -> None:
    read_or_refuse(text)


@MANY
@given(st.sampled_from(FILES), st.data())
def test_any_value_of_any_key_is_read_or_refused_in_words(text: str, data: st.DataObject) -> None:
    lines = text.splitlines()
    at = data.draw(st.sampled_from([i for i, line in enumerate(lines) if "=" in line]))
    lines[at] = put_value(lines[at], data.draw(VALUES))
    read_or_refuse("\n".join(lines))


@settings(MANY, max_examples=500)
@given(st.lists(LINES, max_size=12))
def test_any_lines_are_read_or_refused_in_words(lines: list[str]) -> None:
    assert isinstance(read_or_refuse("\n".join(["format = 1", *lines])), Problems)


@settings(max_examples=300, deadline=None)
@given(st.binary(max_size=200))
def test_any_bytes_are_refused_in_words(data: bytes) -> None:
    from pathlib import Path

    with pytest.raises(Problems):
        build(parse(data, "joint", Path()))


CELLS = st.sampled_from(
    ["B1", "B2", "0", "9", "-80,5", "1e308", "nan", "inf", "", " ", '"', "x", "1_0", "\0", "\r", "1e400"]
) | st.text(max_size=4)
HEADS = st.sampled_from(
    ["name", "x[mm]", "y[mm]", "x[in]", "preload_low[N]", "preload_high[kN]", "x", "y[N]", "z[mm]"]
) | st.text(max_size=4)


@settings(max_examples=600, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    st.lists(HEADS, max_size=3).map(lambda more: ["name", "x[mm]", "y[mm]", *more]) | st.lists(HEADS, max_size=5),
    st.lists(st.lists(CELLS, min_size=2, max_size=5), max_size=4),
    st.sampled_from([",", ";"]),
)
def test_any_bolt_list_is_read_or_refused_in_words(
    tmp_path, head: list[str], rows: list[list[str]], separator: str
) -> None:
    data = "\n".join(separator.join(cells) for cells in (head, *rows)).encode("utf-8", "surrogatepass")
    (tmp_path / "bolts.csv").write_bytes(data)
    text = CIRCLE.replace('circle = { count = 8, diameter = "160 mm" }', 'file = "bolts.csv"')
    (tmp_path / "joint.toml").write_text(text)
    try:
        joint = build(parse(read_bytes(tmp_path / "joint.toml"), "joint", tmp_path))
    except Problems as problems:
        for error in problems.errors:
            assert error.code and error.found and error.expected and error.remedy, repr(error)
            assert str(error).isprintable()
    else:
        assert_finite(joint)
        assert joint.pattern.count <= len(rows)
