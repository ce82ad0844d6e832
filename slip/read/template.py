"""A commented joint file and the table of keys for the docs, both written from the schema."""

from __future__ import annotations

from collections.abc import Mapping

from slip.base.units import KINDS, NONE, example
from slip.read.schema import BY_TABLE, KEYS, TABLES, Key

Values = Mapping[str, str | list[str]]
# Values of an invented joint that passes slip check; keys that are not here are written as comments.
BOLTED: dict[str, str | list[str]] = {
    "format": "1",
    "title": '"Bearing bracket on a test bed"',
    "units": '"N mm"',
    "bolt.thread": '"M12"',
    "bolt.grade": '"8.8"',
    "tightening.torque": '"60 N m"',
    "tightening.thread_friction": "[0.10, 0.14]",
    "tightening.head_friction": "[0.10, 0.14]",
    "tightening.method": '"torque wrench, set by trials"',
    "losses.embedding": '"auto"',
    "losses.relaxation": '"5 %"',
    "plate[].name": ['"bracket"', '"bed"'],
    "plate[].material": ['"nodular iron"', '"steel"'],
    "plate[].thickness": ["18", "25"],
    "plate[].outline": ["[-70, -60, 70, 60]", "[-150, -100, 150, 100]"],
    "interface.friction": "[0.15, 0.25]",
    "interface.friction_source": '"replace this by your test or source"',
    "interface.parallel_faces": "1",
    "interface.roughness": '["Ra 1.6 um", "Ra 3.2 um"]',
    "pattern.grid": "{ columns = 2, rows = 2, pitch = [90, 70] }",
    "axial.bolt_share": "[0.1, 0.2]",
    "required.static": "1.2",
    "required.alternating": "1.8",
    "case[].name": ['"belt pull"', '"start and stop"'],
    "case[].acts_on": ['"joint"', '"joint"'],
    "case[].shear": ["[4000, 0]", "[0, 2500]"],
    "case[].axial": ["3000", "0"],
    "case[].moment": ["[0, 0, 5e4]", "[0, 0, 0]"],
    "case[].kind": ['"static"', '"alternating"'],
    "case[].ratio": ["", "-1"],
}
LAP = BOLTED | {
    "title": '"Two bars, lapped and bolted along the pull"',
    "plate[].name": ['"upper bar"', '"lower bar"'],
    "plate[].material": ['"steel"', '"steel"'],
    "plate[].thickness": ["12", "12"],
    "plate[].outline": ["[-60, -30, 260, 30]", "[-260, -30, 60, 30]"],
    "plate[].load_edge": ['"right"', '"left"'],
    "pattern.positions": "[[-30, 0], [30, 0]]",
    "case[].name": ['"pull"', '"pull and push"'],
    "case[].shear": ["[4000, 0]", "[2600, 0]"],
    "case[].axial": ["0", "0"],
    "case[].moment": ["[0, 0, 0]", "[0, 0, 0]"],
}
del LAP["pattern.grid"]
CONTACT: Values = {
    "format": "1",
    "title": '"Rest pad of a fixture"',
    "units": '"N mm"',
    "interface.friction": "[0.15, 0.25]",
    "interface.friction_source": '"replace this by your test or source"',
    "required.static": "1.2",
    "required.alternating": "1.8",
    "case[].name": ['"clamped"', '"rocking"'],
    "case[].shear": ["[40, 0]", "[25, 0]"],
    "case[].kind": ['"static"', '"alternating"'],
    "case[].ratio": ["", "-1"],
    "contact.shape": '"sphere"',
    "contact.radius": "10",
    "contact.normal_force": "400",
    "body[].material": ['"steel"', '"steel"'],
}
KINDS_OF_FILE: dict[str, Values] = {"bolted": BOLTED, "lap": LAP, "contact": CONTACT}
CONTACT_ONLY = ("contact", "body[]")
BOLTED_ONLY = (
    "bolt",
    "bolt.segment[]",
    "tightening",
    "losses",
    "plate[]",
    "pattern",
    "axial",
    "standard[]",
    "finite_elements",
    "fretting",
    "loosening",
    "scatter",
    "table",
)
# Commented keys whose kind alone would suggest an absurd value.
SAMPLES = {
    "table.columns": '{ Fx = "FX" }',
    "table.axes": '{ x = "X", y = "-Z", normal = "Y" }',
    "bolt.yield_strength": '"640 MPa"',
    "bolt.tensile_strength": '"800 MPa"',
    "bolt.bearing_diameter": '"17 mm"',
    "bolt.hole_diameter": '"13.5 mm"',
    "bolt.shank_diameter": '"12 mm"',
    "bolt.washer_thickness": '"2.5 mm"',
    "bolt.segment[].diameter": '"12 mm"',
    "bolt.segment[].length": '"43 mm"',
    "tightening.nut_factor": "[0.16, 0.22]",
    "tightening.prevailing_torque": '["0 N m", "4 N m"]',
    "tightening.scatter": '"25 %"',
    "tightening.scatter_ratio": "1.8",
    "tightening.scatter_sigma": '"8 %"',
    "tightening.sigmas": "3",
    "interface.run_in_friction": "0.6",
    "interface.tangential_stiffness": '["8000 N/mm^3", "20000 N/mm^3"]',
    "axial.model_preload": '"40 kN"',
    "axial.model_bolt_share": '"15 %"',
    "axial.load_introduction": "0.5",
    "required.decides_reason": '"ductile parts, no fretting: the group may settle"',
    "required.true_slip": '"1 um"',
    "case[].thermal": '"3000 N"',
    "case[].peak": '"3 sigma, unsigned"',
    "case[].cycles": "2e6",
    "case[].at": "[0, 40, 25]",
}
WIDTH = 46  # column of the remarks


def template(kind: str) -> str:
    """Text of a commented joint file of a kind in KINDS_OF_FILE; a contact's file has only the tables that speak of one."""
    values = KINDS_OF_FILE[kind]
    lines = ["# A joint file. Lines with # are keys that may be given as well; an unknown key is an error.", ""]
    for table, what in TABLES.items():
        if table in (BOLTED_ONLY if kind == "contact" else CONTACT_ONLY):
            continue
        lines += _table(table, what, values) if table else _keys("", values, 0)
        lines.append("")
    return "\n".join(lines)


def _table(table: str, what: str, values: Values) -> list[str]:
    """A table with its keys; an array of tables as often as the values say; commented when it has none."""
    own = [v for path, v in values.items() if path.rpartition(".")[0] == table]
    count = max((len(v) for v in own if isinstance(v, list)), default=1)
    name = table.removesuffix("[]")
    header = f"[[{name}]]" if table.endswith("[]") else f"[{name}]"
    lines = [f"# {what}"]
    for entry in range(count):
        lines.append(header if own else f"# {header}")
        lines += _keys(table, values, entry)
    return lines


def _keys(table: str, values: Values, entry: int) -> list[str]:
    lines = []
    for key in BY_TABLE[table].values():
        given = values.get(key.path, "")
        value = str(given[entry] if isinstance(given, list) else given)
        if entry and not value:
            continue  # the first entry has shown what else may be given
        line = f"{key.name} = {value}" if value else f"# {key.name} = {sample(key)}"
        lines.append(f"{line:<{WIDTH}} # {remark(key)}")
    return lines


def sample(key: Key) -> str:
    """A value of the key as one would type it, for a commented line."""
    if key.path in SAMPLES:
        return SAMPLES[key.path]
    fixed = {
        "text": '".."',
        "thread": '"M16"',
        "material": '"steel"',
        "flag": "true",
        "whole": f"{key.least:g}",
        "number": "1.5" if key.least <= 1.5 <= key.most else f"{(key.least + key.most) / 2:g}",
        "friction": "0.15",
        "interface friction": "[0.15, 0.25]",
        "preload": "[60000, 90000]",
        "embedding": '"auto"',
        "thermal": "{ bolt = 20, plates = [60, 20] }",
        "outline": "[-50, -40, 50, 40]",
        "roughness": '["Ra 0.8 um", "Ra 1.6 um"]',
        "positions": "[[-40, 0], [40, 0]]",
        "names": '["B1", "B2"]',
        "grid": "{ columns = 3, rows = 2, pitch = [80, 60] }",
        "circle": "{ count = 8, diameter = 160 }",
        "other end": "{ shear = [0, 0] }",
        "present stiffness": '{ per_area = "12000 N/mm^3" }',
        "anything": "{ }",
    }
    if key.kind == "choice":
        return f'"{key.choices[0]}"'
    one = fixed.get(key.kind) or example(key.kind).split(" or ")[0]
    count = {"range": 2, "2": 2, "2 or 3": 2, "3": 3}.get(key.shape, 1)
    return f"[{', '.join([one] * count)}]" if count > 1 else one


def remark(key: Key) -> str:
    """What the key means, what is taken without it, which answer needs it."""
    parts = [key.help]
    if key.kind == "choice" and len(key.choices) > 1 and " or ".join(key.choices) not in key.help:
        parts.append("one of " + ", ".join(key.choices))
    if key.default:
        parts.append(f"without it {key.default}")
    if key.needed_for:
        parts.append(f"needed for {key.needed_for}")
    if key.later:
        parts.append("read and checked, not used yet")
    return "; ".join(parts)


def table_of_keys() -> str:
    """docs/input.md's reference part: every key with unit, range, default and meaning, as Markdown."""
    lines: list[str] = []
    for table, what in TABLES.items():
        name = (
            f"[[{table.removesuffix('[]')}]]" if table.endswith("[]") else f"[{table}]" if table else "Top of the file"
        )
        lines += [
            f"### {name}",
            "",
            f"{what[:1].upper()}{what[1:]}.",
            "",
            "| key | value | limits | meaning |",
            "| --- | --- | --- | --- |",
        ]
        for key in (k for k in KEYS if k.table == table):
            lines.append(f"| `{key.name}` | {_value(key)} | {_limits(key)} | {remark(key)} |".replace("|  |", "| - |"))
        lines.append("")
    return "\n".join(lines)


def _value(key: Key) -> str:
    """The form of a key's value in words."""
    shape = {
        "range": "[low, high] of ",
        "one or range": "one or [low, high] of ",
        "one or two": "one or two of ",
        "2": "[x, y] of ",
    }
    shape |= {"3": "[x, y, z] of ", "2 or 3": "[x, y] or [x, y, z] of "}
    kind = key.kind if key.kind in KINDS else {"whole": "whole number", "flag": "true or false"}.get(key.kind, key.kind)
    return f"{shape.get(key.shape, '')}{kind}"


def _limits(key: Key) -> str:
    """The limits of a key's number in inside units."""
    if key.kind == "friction":
        return "above 0, at most 1.5"
    unit = "" if KINDS.get(key.kind, NONE) == NONE or key.least == 0 else " (N, mm, MPa)"
    low = "" if key.least == float("-inf") else ("above " if key.above else "at least ") + f"{key.least:g}"
    high = "" if key.most == float("inf") else f"at most {key.most:g}"
    return ", ".join(part for part in (low, high) if part) + (unit if low or high else "")
