"""Wrong input: one sentence for each fault, with file, line and key, what was found, what was expected, what to write instead."""

from __future__ import annotations

import argparse
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from slip import cli
from slip.assess import assess
from slip.base.errors import InputError, Problems
from slip.commands import tables
from slip.read.build import read, read_text

GOOD = """\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
[tightening]
preload = [78000, 125000]
[losses]
embedding = "4500 N"
relaxation = "5 %"
thermal = "3000 N"
[[plate]]
material = "grey iron"
thickness = 20
[[plate]]
material = "steel"
thickness = 30
[interface]
friction = [0.18, 0.25]
[pattern]
positions = [[-80, 0], [80, 0]]
[[case]]
acts_on = "joint"
shear = [0, 24000]
"""
PRELOAD, SHEAR, FRICTION = "preload = [78000, 125000]", "shear = [0, 24000]", "friction = [0.18, 0.25]"
POSITIONS, THERMAL, HOLE = "positions = [[-80, 0], [80, 0]]", 'thermal = "3000 N"', "hole_diameter = 17.5"
TORQUE = 'torque = "200 N m"\nthread_friction = [0.1, 0.14]\nhead_friction = [0.1, 0.14]'
EMBEDDING, THREAD, FIRST = 'embedding = "4500 N"', 'thread = "M16"', 'material = "grey iron"\nthickness = 20'
CUT = GOOD[GOOD.index('relaxation = "5 %"') : GOOD.index("[interface]")]
# name, what stands in the good file, what takes its place, code, line, key, words of the sentence
BAD = [
    # keys
    ("unknown key", "thread =", "thraed =", "unknown-key", 4, "bolt.thraed", ["did you mean thread?"]),
    ("unknown key far from all", "grade =", "zzz =", "unknown-key", 5, "bolt.zzz", ["a key of [bolt]"]),
    ("unknown table", "[losses]", "[loses]", "unknown-key", 9, "loses", ["did you mean losses?"]),
    ("unknown array", "[[case]]", "[[cases]]", "unknown-key", 23, "cases", ["did you mean case?"]),
    (
        "key of another table",
        "grade =",
        "parallel_faces = 2\ngrade =",
        "unknown-key",
        5,
        "bolt.parallel_faces",
        ["[interface]"],
    ),
    (
        "unknown key of an inline table",
        POSITIONS,
        "grid = { colums = 2, rows = 1, pitch = [9, 9] }",
        "unknown-key",
        22,
        "pattern.grid.colums",
        ["did you mean columns?"],
    ),
    ("key that is no plain word", "grade =", '"a\\u001b[31m b" =', "unknown-key", 5, 'bolt."a?[31m b"', ["found"]),
    ("no format", "format = 1\n", "", "missing-key", 0, "format", ["add format = 1"]),
    ("other format", "format = 1", "format = 2", "not-a-whole-number", 1, "format", ["expected 1;"]),
    ("units in other words", '"N mm"', '"SI"', "unknown-choice", 2, "units", ['"N mm", "lbf in"']),
    ("units as a huge number", '"N mm"', "0x" + "f" * 5000, "unknown-choice", 2, "units", ["very many digits"]),
    ("table that is a number", "[bolt]", "required = 3\n[bolt]", "not-a-table", 3, "required", ["write [required]"]),
    ("table in double brackets", "[bolt]", "[[bolt]]", "not-a-table", 3, "bolt", ["[bolt] in single brackets"]),
    ("array in single brackets", "[[case]]", "[case]", "not-a-table", 23, "case", ["[[case]] in double brackets"]),
    # quantities
    ("text without unit", SHEAR, 'shear = [0, "24000"]', "unit-missing", 25, "case[1].shear[2]", ['"12 kN"']),
    ("wrong dimension", HOLE, 'hole_diameter = "17.5 N"', "unit-wrong", 6, "bolt.hole_diameter", ["a length", '"8 mm"']),
    ("lb for a force", SHEAR, 'shear = [0, "5400 lb"]', "unit-ambiguous", 25, "case[1].shear[2]", ["write lbf"]),
    ("kip for a force", SHEAR, 'shear = ["5 kip", 0]', "unit-ambiguous", 25, "case[1].shear[1]", ["write kipf"]),
    ("lb for an embedding", EMBEDDING, 'embedding = "900 lb"', "unit-ambiguous", 10, "losses.embedding", ["write lbf"]),
    ("unknown unit", SHEAR, 'shear = [0, "24 kNewton"]', "unit-unknown", 25, "case[1].shear[2]", ["N, kN, lbf"]),
    ("decimal comma", SHEAR, 'shear = [0, "2,5 kN"]', "not-a-quantity", 25, "case[1].shear[2]", ["a point for decimals"]),
    ("words for a force", SHEAR, 'shear = [0, "lots"]', "not-a-quantity", 25, "case[1].shear[2]", ['"12 kN"']),
    ("flag for a force", SHEAR, "shear = [0, true]", "not-a-quantity", 25, "case[1].shear[2]", ["found true", "a force"]),
    ("date for a force", SHEAR, "shear = [0, 2024-01-02]", "not-a-quantity", 25, "case[1].shear[2]", ["found 2024-01-02"]),
    ("not a number", SHEAR, "shear = [0, nan]", "not-finite", 25, "case[1].shear[2]", ["found nan"]),
    ("infinity", "thickness = 20", "thickness = inf", "not-finite", 15, "plate[1].thickness", ["found inf"]),
    ("infinite friction", FRICTION, "friction = [0.1, inf]", "not-finite", 20, "interface.friction[2]", ["found inf"]),
    ("too many digits", SHEAR, f"shear = [0, 1{'0' * 400}]", "not-finite", 25, "case[1].shear[2]", ["very many digits"]),
    ("too large", SHEAR, 'shear = [0, "1e300 kN"]', "not-finite", 25, "case[1].shear[2]", ["finite, sensible size"]),
    ("negative thickness", "thickness = 20", "thickness = -20", "out-of-limits", 15, "plate[1].thickness", ["0.001 mm or more"]),
    ("no thickness", "thickness = 30", "thickness = 0", "out-of-limits", 18, "plate[2].thickness", ["a length of 0.001 mm or more"]),
    ("no foil is that thin", "thickness = 30", "thickness = 1e-9", "out-of-limits", 18, "plate[2].thickness", ["0.001 mm"]),
    ("quoted number", FRICTION, 'friction = ["0.18", 0.25]', "not-a-number", 20, "interface.friction[1]", ["without quotes"]),
    ("grade as number", 'grade = "8.8"', "grade = 8.8", "not-a-text", 5, "bolt.grade", ['write "8.8"']),
    ("list for a text", 'thread = "M16"', 'thread = ["M16"]', "not-a-text", 4, "bolt.thread", ["in quotes"]),
    (
        "words for a flag",
        FRICTION,
        f'{FRICTION}\nfluid_can_reach = "no"',
        "not-a-flag",
        21,
        "interface.fluid_can_reach",
        ["true or false"],
    ),
    (
        "half a face",
        FRICTION,
        f"{FRICTION}\nparallel_faces = 1.5",
        "not-a-whole-number",
        21,
        "interface.parallel_faces",
        ["from 1 to 100"],
    ),
    ("one number for two", SHEAR, "shear = 24000", "wrong-count", 25, "case[1].shear", ["[x, y]", '"12 kN"']),
    ("three for two", SHEAR, "shear = [0, 0, 1]", "wrong-count", 25, "case[1].shear", ["[x, y]"]),
    # shares, friction, ranges
    ("percent as a share", 'relaxation = "5 %"', "relaxation = 5", "share-not-below-1", 11, "losses.relaxation", ['"5 %"']),
    ("quoted percent", 'relaxation = "5 %"', 'relaxation = "5"', "share-not-below-1", 11, "losses.relaxation", ['"5 %"']),
    ("share above one", 'relaxation = "5 %"', 'relaxation = "150 %"', "out-of-limits", 11, "losses.relaxation", ["from 0 to 1"]),
    ("percent as friction", FRICTION, "friction = [0.1, 15]", "friction-range", 20, "interface.friction[2]", ["write 0.15 if 15 %"]),
    ("friction in percent", FRICTION, 'friction = "15 %"', "friction-range", 20, "interface.friction", ["write 0.15"]),
    ("friction above 1.5", FRICTION, "friction = [0.2, 1.6]", "friction-range", 20, "interface.friction[2]", ["at most 1.5"]),
    ("no friction at all", FRICTION, "friction = [0, 0.2]", "friction-range", 20, "interface.friction[1]", ["above 0"]),
    ("range upside down", FRICTION, "friction = [0.25, 0.18]", "range-upside-down", 20, "interface.friction", ["[0.18, 0.25]"]),
    (
        "preload upside down",
        PRELOAD,
        'preload = ["125 kN", "78 kN"]',
        "range-upside-down",
        8,
        "tightening.preload",
        ['["78 kN", "125 kN"]'],
    ),
    ("no friction given", FRICTION + "\n", "", "missing-key", 19, "interface.friction", ["never assumed", "add friction ="]),
    (
        "pair that no table has",
        FRICTION,
        'friction = { pair = "steel / cheese" }',
        "unknown-pair",
        20,
        "interface.friction.pair",
        ['did you mean "steel / steel"?'],
    ),
    (
        "pair without that row",
        FRICTION,
        'friction = { pair = "aluminium / aluminium" }',
        "unknown-pair",
        20,
        "interface.friction.pair",
        ["with a lubricated row"],
    ),
    ("friction table without pair", FRICTION, "friction = { }", "missing-key", 20, "interface.friction", ["add pair"]),
    (
        "roughness without label",
        FRICTION,
        f'{FRICTION}\nroughness = ["0.8 um", "Ra 1.6 um"]',
        "roughness-label",
        21,
        "interface.roughness[1]",
        ["Ra, Rq or Rz", '"Ra 0.8 um"'],
    ),
    (
        "roughness as number",
        FRICTION,
        f"{FRICTION}\nroughness = 0.8",
        "roughness-label",
        21,
        "interface.roughness",
        ['"Ra 0.8 um"'],
    ),
    (
        "roughness of three faces",
        FRICTION,
        f'{FRICTION}\nroughness = ["Ra 1 um", "Ra 1 um", "Ra 1 um"]',
        "wrong-count",
        21,
        "interface.roughness",
        ["of the two faces"],
    ),
    (
        "pressure beside bolts",
        FRICTION,
        f"{FRICTION}\npressure = 60",
        "pressure-twice",
        21,
        "interface.pressure",
        ["no pressure beside bolts", "remove pressure"],
    ),
    # bolt
    ("thread that is not made", THREAD, 'thread = "M17"', "unknown-thread", 4, "bolt.thread", ['did you mean "M16"?']),
    ("grade that no table has", '"8.8"', '"9.9"', "unknown-grade", 5, "bolt.grade", ["did you mean"]),
    (
        "grade of other sizes",
        f'{THREAD}\ngrade = "8.8"\n{HOLE}',
        'thread = "M48"\ngrade = "8.8"',
        "unknown-grade",
        5,
        "bolt.grade",
        ["for M48", "yield_strength"],
    ),
    ("grade without thread", THREAD + "\n", "", "missing-key", 4, "bolt.grade", ["add thread"]),
    ("hole smaller than thread", HOLE, "hole_diameter = 15", "hole-below-thread", 6, "bolt.hole_diameter", ["16 mm", '"17.5 mm"']),
    ("bearing inside the hole", HOLE, "bearing_diameter = 17", "bearing-below-hole", 6, "bolt.bearing_diameter", ["17 mm", "17.5 mm"]),
    ("hole outside the bearing", HOLE, "hole_diameter = 23", "bearing-below-hole", 6, "bolt.hole_diameter", ["22.49 mm"]),
    (
        "strengths upside down",
        'grade = "8.8"',
        "yield_strength = 800\ntensile_strength = 640",
        "range-upside-down",
        5,
        "bolt.yield_strength",
        ["not above the tensile"],
    ),
    (
        "yield above the grade's tensile",
        HOLE,
        'yield_strength = "900 MPa"',
        "range-upside-down",
        6,
        "bolt.yield_strength",
        ["not above the tensile"],
    ),
    (
        "tensile strength alone",
        'grade = "8.8"',
        "tensile_strength = 800",
        "missing-key",
        3,
        "bolt.yield_strength",
        ["add yield_strength"],
    ),
    (
        "washer under no nut",
        HOLE,
        'far_end = "tapped"\nwasher_thickness = [3, 3]',
        "washer-without-nut",
        7,
        "bolt.washer_thickness",
        ["under the head alone"],
    ),
    (
        "pieces shorter than the grip",
        HOLE,
        "segment = [{ diameter = 16, length = 40 }]",
        "segments-not-grip",
        6,
        "bolt.segment",
        ["40 mm", "50 mm"],
    ),
    ("piece without length", HOLE, "segment = [{ diameter = 16 }]", "missing-key", 6, "bolt.segment[1].length", ["add length"]),
    (
        "material that no table has",
        '"grey iron"',
        '"gray irn"',
        "unknown-material",
        14,
        "plate[1].material",
        ['did you mean "grey iron"?'],
    ),
    (
        "material without modulus",
        '"grey iron"',
        "{ poissons_ratio = 0.3 }",
        "missing-key",
        14,
        "plate[1].material",
        ["add youngs_modulus"],
    ),
    (
        "impossible ratio",
        '"grey iron"',
        '{ youngs_modulus = "2e5 MPa", poissons_ratio = 0.5 }',
        "out-of-limits",
        14,
        "plate[1].material.poissons_ratio",
        ["from 0 to 0.49"],
    ),
    # plates
    ("one plate", f"[[plate]]\n{FIRST}\n", "", "one-plate", 13, "plate", ["add a [[plate]]"]),
    ("plate without thickness", "thickness = 30\n", "", "missing-key", 16, "plate[2].thickness", ["add thickness"]),
    ("no plates for the springs", f"{EMBEDDING}\n{CUT}", f"{CUT.split('[[plate]]')[0]}", "missing-key", 0, "plate", ["0 or a force"]),
    (
        "no material for the springs",
        f"{EMBEDDING}\n{CUT}",
        CUT.replace('material = "steel"\n', ""),
        "missing-key",
        15,
        "plate[2].material",
        ["add material"],
    ),
    (
        "empty outline",
        "thickness = 20",
        "thickness = 20\noutline = [120, -90, -120, 90]",
        "outline-empty",
        16,
        "plate[1].outline",
        ["lower left corner first"],
    ),
    (
        "ring inside out",
        "thickness = 20",
        "thickness = 20\noutline = { outer_diameter = 40, inner_diameter = 60 }",
        "outline-empty",
        16,
        "plate[1].outline",
        ["inner_diameter below outer_diameter"],
    ),
    (
        "bolt outside the plate",
        "thickness = 20",
        "thickness = 20\noutline = [-90, -90, 70, 90]",
        "bolt-outside",
        16,
        "plate[1].outline",
        ["B2 outside"],
    ),
    # tightening
    ("neither torque nor preload", PRELOAD + "\n", "", "missing-key", 7, "tightening.torque", ["add torque =", "preload ="]),
    ("both torque and preload", PRELOAD, f"{PRELOAD}\n{TORQUE}", "too-many-forms", 8, "tightening.preload", ["torque and preload"]),
    ("a single preload", PRELOAD, "preload = 100000", "preload-without-scatter", 8, "tightening.preload", ['add scatter = "25 %"']),
    (
        "range and scatter",
        PRELOAD,
        f'{PRELOAD}\nscatter = "25 %"',
        "too-many-forms",
        9,
        "tightening.scatter",
        ["remove scatter"],
    ),
    (
        "range and tool accuracy",
        PRELOAD,
        f'{PRELOAD}\ntool_accuracy = "4 %"',
        "too-many-forms",
        9,
        "tightening.tool_accuracy",
        ["remove tool_accuracy"],
    ),
    (
        "preload of an unknown bolt",
        PRELOAD,
        "preload = { B3 = [1, 2], others = [3, 4] }",
        "unknown-bolt",
        8,
        "tightening.preload.B3",
        ["B3", "did you mean"],
    ),
    (
        "bolt without preload",
        PRELOAD,
        "preload = { B1 = [1, 2] }",
        "bolt-without-preload",
        8,
        "tightening.preload",
        ["B2", "others = [low, high]"],
    ),
    ("torque without friction", PRELOAD, 'torque = "200 N m"', "missing-key", 7, "tightening.thread_friction", ["nut_factor"]),
    (
        "friction and nut factor",
        PRELOAD,
        f"{TORQUE}\nnut_factor = 0.2",
        "too-many-forms",
        11,
        "tightening.nut_factor",
        ["keep one"],
    ),
    (
        "torque without thread",
        f'{THREAD}\ngrade = "8.8"\n{HOLE}\n[tightening]\n{PRELOAD}',
        f"[tightening]\n{TORQUE}",
        "missing-key",
        3,
        "bolt.thread",
        ['add thread = "M16"'],
    ),
    (
        "torque without bearing face",
        f'grade = "8.8"\n{HOLE}\n[tightening]\n{PRELOAD}',
        f'head = "countersunk"\n[tightening]\n{TORQUE}',
        "missing-key",
        3,
        "bolt.bearing_diameter",
        ["no table has it", "add bearing_diameter"],
    ),
    (
        "two scatters",
        PRELOAD,
        f'{TORQUE}\nscatter = "25 %"\nmethod = "power driver"',
        "too-many-forms",
        11,
        "tightening.scatter",
        ["method and scatter"],
    ),
    (
        "accuracy and method",
        PRELOAD,
        f'{TORQUE}\nmethod = "power driver"\ntool_accuracy = "4 %"',
        "too-many-forms",
        12,
        "tightening.tool_accuracy",
        ["method and tool_accuracy"],
    ),
    (
        "sigma without count",
        PRELOAD,
        f'{TORQUE}\nscatter_sigma = "8 %"',
        "missing-key",
        7,
        "tightening.sigmas",
        ["add sigmas = 3"],
    ),
    ("count without sigma", PRELOAD, f"{TORQUE}\nsigmas = 3", "missing-key", 7, "tightening.scatter_sigma", ["add scatter_sigma"]),
    (
        "scatter that leaves nothing",
        PRELOAD,
        f'{TORQUE}\nscatter_sigma = "50 %"\nsigmas = 3',
        "scatter-too-wide",
        11,
        "tightening.scatter_sigma",
        ["150%"],
    ),
    (
        "scatter of all",
        PRELOAD,
        f'{TORQUE}\nscatter = "100 %"',
        "scatter-too-wide",
        11,
        "tightening.scatter",
        ["below 100 %"],
    ),
    (
        "method in other words",
        PRELOAD,
        f'{TORQUE}\nmethod = "torque wrench, friction guessed"',
        "unknown-method",
        11,
        "tightening.method",
        ['did you mean "torque wrench, friction estimated"?'],
    ),
    (
        "locking torque above the torque",
        PRELOAD,
        f'{TORQUE}\nprevailing_torque = ["1 N m", "200 N m"]',
        "prevailing-above-torque",
        11,
        "tightening.prevailing_torque",
        ["200000 N mm"],
    ),
    # losses
    ("embedding as bare number", EMBEDDING, "embedding = 4500", "embedding-form", 10, "losses.embedding", ['"14.5 um" or "4500 N"']),
    ("embedding in kelvin", EMBEDDING, 'embedding = "4 K"', "embedding-form", 10, "losses.embedding", ["a length, a force"]),
    ("thermal as one rise", THERMAL, 'thermal = "40 K"', "thermal-form", 12, "losses.thermal", ["{ bolt = 20, plates = [60, 20] }"]),
    (
        "degC for a rise",
        THERMAL,
        'thermal = { bolt = "20 degC", plates = 40 }',
        "unit-ambiguous",
        12,
        "losses.thermal.bolt",
        ["rise since assembly", '"40 K"'],
    ),
    ("rise of the bolt alone", THERMAL, "thermal = { bolt = 20 }", "missing-key", 12, "losses.thermal", ["add plates"]),
    (
        "rises of three plates",
        THERMAL,
        "thermal = { bolt = 20, plates = [1, 2, 3] }",
        "wrong-count",
        12,
        "losses.thermal",
        ["one for each plate"],
    ),
    ("negative loss", THERMAL, "thermal = -3000", "out-of-limits", 12, "losses.thermal", ["of 0 or more"]),
    # pattern
    ("coincident bolts", POSITIONS, "positions = [[8, 0], [8.0, 0]]", "bolts-coincide", 22, "pattern.positions[2]", ["B2", "B1"]),
    (
        "bolts a hair apart",
        POSITIONS,
        "positions = [[8, 0], [8.0000005, 0]]",
        "bolts-coincide",
        22,
        "pattern.positions[2]",
        ["B2", "B1"],
    ),
    (
        "name twice",
        POSITIONS,
        f'{POSITIONS}\nnames = ["A", "A"]',
        "bolt-twice",
        22,
        "pattern.positions[2]",
        ['a second bolt "A"'],
    ),
    ("too few names", POSITIONS, f'{POSITIONS}\nnames = ["A"]', "wrong-count", 23, "pattern.names", ["2 names"]),
    ("empty name", POSITIONS, f'{POSITIONS}\nnames = ["A", " "]', "not-a-text", 23, "pattern.names", ['["A1", "A2"]']),
    ("names alone", POSITIONS, 'names = ["A"]', "missing-key", 21, "pattern.positions", ["add positions"]),
    ("no position", POSITIONS, "positions = []", "wrong-count", 22, "pattern.positions", ["[[x, y], [x, y]]"]),
    ("flat position", POSITIONS, "positions = [[1, 2], 3]", "wrong-count", 22, "pattern.positions[2]", ["[x, y]"]),
    (
        "two forms",
        POSITIONS,
        f"{POSITIONS}\ncircle = {{ count = 2, diameter = 9 }}",
        "too-many-forms",
        23,
        "pattern.circle",
        ["positions and circle"],
    ),
    ("grid without rows", POSITIONS, "grid = { columns = 2, pitch = [9, 9] }", "missing-key", 22, "pattern.grid", ["add rows"]),
    (
        "far too many bolts",
        POSITIONS,
        "grid = { columns = 100, rows = 100, pitch = [9, 9] }",
        "too-many-bolts",
        22,
        "pattern.grid",
        ["at most 1000"],
    ),
    ("list that is not there", POSITIONS, 'file = "no.csv"', "file-missing", 22, "pattern.file", ["no.csv", "no such file"]),
    (
        "list with names beside",
        POSITIONS,
        'file = "no.csv"\nnames = ["A"]',
        "too-many-forms",
        23,
        "pattern.names",
        ["remove names"],
    ),
    # cases
    ("no case", GOOD[GOOD.index("[[case]]") :], "", "missing-key", 0, "case", ["add [[case]]"]),
    ("acts_on missing", 'acts_on = "joint"\n', "", "missing-key", 23, "case[1].acts_on", ["2 bolts", 'acts_on = "each bolt"']),
    ("acts_on in other words", '"joint"', '"all bolts"', "unknown-choice", 24, "case[1].acts_on", ['did you mean "each bolt"?']),
    ("case without load", SHEAR + "\n", "", "missing-key", 23, "case[1].shear", ["shear, axial or moment"]),
    (
        "case twice",
        SHEAR,
        f'{SHEAR}\nname = "a"\n[[case]]\nacts_on = "joint"\nshear = [1, 0]\nname = "a"',
        "case-twice",
        30,
        "case[2].name",
        ['a second case "a"'],
    ),
    (
        "ratio of a static case",
        SHEAR,
        f'{SHEAR}\nkind = "static"\nratio = 0',
        "static-with-ratio",
        27,
        "case[1].ratio",
        ["remove ratio"],
    ),
    ("ratio beyond", SHEAR, f"{SHEAR}\nratio = -2", "out-of-limits", 26, "case[1].ratio", ["from -1 to 1"]),
    (
        "ratio and other end",
        SHEAR,
        f"{SHEAR}\nratio = 0\nother_end = {{ axial = 3 }}",
        "too-many-forms",
        27,
        "case[1].other_end",
        ["keep one"],
    ),
    ("signed peak", SHEAR, f'{SHEAR}\npeak = "3 sigma"', "peak-form", 26, "case[1].peak", ["without this key"]),
    (
        "peak with ratio",
        SHEAR,
        f'{SHEAR}\npeak = "3 sigma, unsigned"\nratio = 0.5',
        "too-many-forms",
        27,
        "case[1].ratio",
        ["remove ratio"],
    ),
    (
        "moment on each bolt",
        'acts_on = "joint"',
        'acts_on = "each bolt"\nmoment = [0, 0, 5]',
        "each-bolt-with-moment",
        25,
        "case[1].moment",
        ['acts_on = "joint"'],
    ),
    (
        "moment on each bolt, other end",
        'acts_on = "joint"',
        'acts_on = "each bolt"\nother_end = { moment = [0, 0, 5] }',
        "each-bolt-with-moment",
        25,
        "case[1].other_end",
        ['acts_on = "joint"'],
    ),
    (
        "axial without meaning",
        'acts_on = "joint"',
        'acts_on = "each bolt"\naxial = 5',
        "missing-key",
        0,
        "axial.meaning",
        ["bolt force change"],
    ),
    (
        "meaning without share",
        "[[case]]",
        '[axial]\nmeaning = "bolt force change"\n[[case]]',
        "missing-key",
        23,
        "axial.model_bolt_share",
        ["add model_bolt_share"],
    ),
    (
        "meaning without preload",
        "[[case]]",
        '[axial]\nmeaning = "bolt force"\nmodel_bolt_share = 0.1\n[[case]]',
        "missing-key",
        23,
        "axial.model_preload",
        ["add model_preload"],
    ),
    (
        "two bolt shares",
        "[[case]]",
        "[axial]\nbolt_share = 0.1\nload_introduction = 0.5\n[[case]]",
        "too-many-forms",
        25,
        "axial.load_introduction",
        ["keep one"],
    ),
    # required, standards, contact
    (
        "group without reason",
        "[[case]]",
        '[required]\ndecides = "group"\n[[case]]',
        "missing-key",
        23,
        "required.decides_reason",
        ["add decides_reason"],
    ),
    ("factor below one", "[[case]]", "[required]\nstatic = 0.9\n[[case]]", "out-of-limits", 24, "required.static", ["of 1 or more"]),
    (
        "force only decides",
        "[[case]]",
        '[required]\ndecides = "force only"\n[[case]]',
        "unknown-choice",
        24,
        "required.decides",
        ['"per bolt", "group"'],
    ),
    (
        "standard in other words",
        "[[case]]",
        '[[standard]]\nname = "EN 1993"\n[[case]]',
        "unknown-choice",
        24,
        "standard[1].name",
        ['did you mean "EN 1993-1-8"?'],
    ),
    ("standard without name", "[[case]]", '[[standard]]\nhole = "normal"\n[[case]]', "missing-key", 23, "standard[1].name", ["add name"]),
    (
        "class in other words",
        "[[case]]",
        '[[standard]]\nname = "EN 1993-1-8"\nslip_class = "E"\n[[case]]',
        "unknown-choice",
        25,
        "standard[1].slip_class",
        ['"A", "B", "C", "D"'],
    ),
    (
        "edition as number",
        "[[case]]",
        '[[standard]]\nname = "AISC 360"\nedition = 2016\n[[case]]',
        "unknown-choice",
        25,
        "standard[1].edition",
        ['did you mean "2016"?'],
    ),
]  # fmt: skip


def problems(text: str) -> list[InputError]:
    with pytest.raises(Problems) as caught:
        read_text(text, "a.toml")
    return caught.value.errors


def test_the_good_file_is_good() -> None:
    assert read_text(GOOD).pattern.names == ("B1", "B2")


@pytest.mark.parametrize(("name", "old", "new", "code", "line", "key", "says"), BAD, ids=[row[0] for row in BAD])
def test_one_fault_one_sentence(name: str, old: str, new: str, code: str, line: int, key: str, says: list[str]) -> None:
    assert GOOD.count(old) == 1
    (error,) = problems(GOOD.replace(old, new))
    assert (error.file, error.code, error.line, error.key) == ("a.toml", code, line, key)
    assert error.found and error.expected and error.remedy
    sentence = str(error)
    assert sentence.startswith(f"a.toml, line {line}: {key}: found " if line else f"a.toml: {key}: found ")
    assert ", expected " in sentence and sentence[-1] in ".?" and sentence.isprintable()
    for words in says:
        assert words in sentence


def test_a_file_without_units_names_each_bare_number_but_zero() -> None:
    errors = problems(GOOD.replace('units = "N mm"\n', ""))
    assert {error.code for error in errors} == {"unit-missing"}
    found = [(error.line, error.found) for error in errors]
    expected = [
        (5, "17.5"),
        (7, "78000"),
        (7, "125000"),
        (14, "20"),
        (17, "30"),
        (21, "-80"),
        (21, "80"),
        (24, "24000"),
    ]
    assert found == expected
    assert all('declare units = "N mm"' in error.remedy for error in errors)


def test_a_wrong_declaration_is_one_fault_and_not_one_for_each_number() -> None:
    assert len(problems(GOOD.replace('"N mm"', '"mm N"'))) == 1


def test_a_misspelt_key_is_not_also_missing() -> None:
    assert [error.key for error in problems(GOOD.replace("friction =", "frictoin ="))] == ["interface.frictoin"]
    assert [error.key for error in problems(GOOD.replace("[tightening]", "[tighening]"))] == ["tighening"]
    assert [error.key for error in problems(GOOD.replace("[[plate]]", "[[plates]]").replace(EMBEDDING, ""))] == [
        "plates"
    ]


def test_several_faults_come_together_in_file_order() -> None:
    text = GOOD
    for old, new in (
        (SHEAR, "shear = 24000"),
        ("thickness = 20", "thickness = -20"),
        ("thickness = 30", ""),
        ('"M16"', '"M17"'),
        ("grade", "garde"),
        (FRICTION, "friction = [0.3, 0.2]"),
        ("relaxation =", "relaxation = 9 #"),
        ("[-80, 0]", "[-80]"),
    ):
        text = text.replace(old, new)
    errors = problems(text)
    keys = ["bolt.thread", "bolt.garde", "losses.relaxation", "plate[1].thickness", "plate[2].thickness"]
    keys += ["interface.friction", "pattern.positions[1]", "case[1].shear"]
    assert [error.key for error in errors] == keys
    assert [error.line for error in errors] == [4, 5, 11, 15, 16, 20, 22, 25]


def test_faults_of_one_part_come_together() -> None:
    text = GOOD.replace('grade = "8.8"', 'grade = "9.9"').replace("17.5", "15")
    assert [error.key for error in problems(text)] == ["bolt.grade", "bolt.hole_diameter"]


def test_a_preload_above_the_bolts_yield_is_a_warning_with_the_number() -> None:
    joint = read_text(GOOD.replace("125000", "110000"))
    (note,) = assess(joint).warnings  # M16, 157 mm2 x 640 MPa = 100.3 kN
    assert (note.code, note.key) == ("preload-above-yield", "tightening")
    assert "110000 N" in note.text and "100" in note.text
    assert "preload-above-yield" not in {n.code for n in assess(read_text(GOOD.replace("125000", "100000"))).warnings}


# --- files ---------------------------------------------------------------------------------------------------------

BROKEN = [
    ("unquoted", b"format = 1\n[bolt]\nthread = M16\n", 3, "thread = M16"),
    ("quantity without quotes", b"format = 1\ntorque = 200 N m\n", 2, "in quotes"),
    ("no equals sign", b"format = 1\n\nthread\n", 3, "key = value"),
    ("key twice", b"[bolt]\nthread = 1\nthread = 2\n", 3, "each key once"),
    ("table twice", b"[bolt]\n[losses]\n[bolt]\n", 3, "[bolt]"),
    ("open text", b'format = 1\ntitle = "abc\nthread = 1\n', 2, 'title = "abc'),
    ("open list", b"format = 1\nshear = [1, 2\n\n\n", 2, "shear = [1, 2"),
    ("control character alone", b"format = 1\n\x1f\nkind = 1\n", 2, r"'\x1f'"),
    ("number of many digits", b"format = " + b"1" * 5000, 0, "cannot be read"),
    ("nested too deep", b"format = " + b"[" * 5000, 0, "nested brackets"),
]


@pytest.mark.parametrize(("name", "data", "line", "says"), BROKEN, ids=[row[0] for row in BROKEN])
def test_what_is_not_toml(name: str, data: bytes, line: int, says: str, tmp_path: Path) -> None:
    path = tmp_path / "joint.toml"
    path.write_bytes(data)
    error = file_fault(path, "file-not-toml", line)
    assert says in str(error) and len(str(error)) < 400 + len(str(path))


def file_fault(path: Path, code: str, line: int = 0) -> InputError:
    with pytest.raises(Problems) as caught:
        read(path)
    (error,) = caught.value.errors
    assert (error.code, error.file, error.line, error.key) == (code, str(path), line, "")
    assert error.found and error.expected and error.remedy
    return error


@pytest.mark.parametrize("data", [b"", b"  \n\t\n", b"\xef\xbb\xbf\n"])
def test_an_empty_file(data: bytes, tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_bytes(data)
    assert "slip new" in file_fault(tmp_path / "joint.toml", "file-empty").remedy


def test_a_huge_file(tmp_path: Path) -> None:
    with (tmp_path / "joint.toml").open("wb") as file:
        file.seek(10**9)
        file.write(b"\n")
    assert "table" in file_fault(tmp_path / "joint.toml", "file-huge").remedy


def test_a_file_without_end() -> None:
    endless = Path("/dev/zero")
    if not endless.exists():
        pytest.skip("no endless file here")
    file_fault(endless, "file-huge")


def test_a_file_that_is_not_utf8(tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_bytes(b'format = 1\ntitle = "Tr\xe4ger"\n')
    assert "0xe4" in file_fault(tmp_path / "joint.toml", "file-not-utf8", 2).found


def test_a_missing_file(tmp_path: Path) -> None:
    assert "check the path" in file_fault(tmp_path / "joint.toml", "file-missing").remedy


def test_a_directory(tmp_path: Path) -> None:
    file_fault(tmp_path, "file-directory")


def test_a_file_that_may_not_be_read(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(self: Path, mode: str) -> None:
        raise PermissionError(13, "Permission denied")

    (tmp_path / "joint.toml").write_text(GOOD)
    monkeypatch.setattr(Path, "open", refuse)
    assert file_fault(tmp_path / "joint.toml", "file-unreadable").found == "permission denied"


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="root may read everything")
def test_an_unreadable_file(tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_text(GOOD)
    (tmp_path / "joint.toml").chmod(0)
    file_fault(tmp_path / "joint.toml", "file-unreadable")


def test_a_path_that_cannot_be() -> None:
    file_fault(Path("a\0b.toml"), "file-unreadable")
    file_fault(Path("a" * 5000), "file-unreadable")


# --- the command ---------------------------------------------------------------------------------------------------


def run(*arguments: str | Path) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "slip", *map(str, arguments)]
    folder = Path(cli.__file__).parents[1]
    return subprocess.run(command, capture_output=True, text=True, cwd=folder, timeout=120)


@pytest.fixture
def wrong(tmp_path: Path) -> Path:
    path = tmp_path / "joint.toml"
    path.write_text(GOOD.replace(SHEAR, "shear = 24000").replace('"M16"', '"M17"'))
    return path


def test_wrong_input_ends_with_2_and_one_line_for_each_fault(wrong: Path) -> None:
    done = run("check", wrong)
    assert (done.returncode, done.stdout) == (2, "")
    lines = done.stderr.splitlines()
    assert [line.split(": found")[0] for line in lines] == [
        f"slip: {wrong}, line 4: bolt.thread",
        f"slip: {wrong}, line 25: case[1].shear",
    ]
    assert "Traceback" not in done.stderr


def test_json_holds_the_errors_and_nothing_else(wrong: Path) -> None:
    done = run("check", wrong, "--json")
    assert (done.returncode, done.stderr) == (2, "")
    found = json.loads(done.stdout)
    assert list(found) == ["format", "errors"] and found["format"] == 1
    assert [error["key"] for error in found["errors"]] == ["bolt.thread", "case[1].shear"]
    for error in found["errors"]:
        assert list(error) == ["code", "file", "line", "key", "found", "expected", "remedy"]
        assert error["file"] == str(wrong)


@pytest.mark.parametrize("path", ["nowhere.toml", "."])
def test_no_file_ends_with_2(path: str, tmp_path: Path) -> None:
    done = run("check", tmp_path / path)
    assert done.returncode == 2
    assert done.stderr.count("\n") == 1 and done.stderr.startswith("slip: ")


def test_a_fault_that_only_a_later_stage_sees_is_an_input_error_too(tmp_path: Path) -> None:
    (tmp_path / "joint.toml").write_text(
        GOOD.replace(SHEAR, f"{SHEAR}\nmoment = [5e6, 0, 0]")
    )  # bolts in a line along x
    done = run("check", tmp_path / "joint.toml")
    assert done.returncode == 2
    assert "bolts in a line" in done.stderr and "Traceback" not in done.stderr


def test_standards_that_cannot_be_compared_are_no_pass(tmp_path: Path) -> None:
    entry = '[[standard]]\nname = "EN 1993-1-8"\nto_standard_level = 1.0\nhole = "short slot"\ncategory = "B"\nslip_class = "A"\n'
    (tmp_path / "joint.toml").write_text(GOOD.replace("24000", "2400").replace("125000", "95000") + entry)
    done = run("check", tmp_path / "joint.toml", "--json")
    assert done.returncode == 3
    (check,) = {
        c["reason"]: c for c in json.loads(done.stdout)["checks"] if c["check"] == "standard.EN 1993-1-8"
    }.values()
    assert not check["holds"] and "along" in check["reason"] and "across" in check["reason"]


def test_a_word_that_no_table_holds() -> None:
    done = run("tables", "zzzzz")
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr.count("\n") == 1 and "slip tables lists the tables" in done.stderr
    with pytest.raises(Problems) as caught:
        tables.run(argparse.Namespace(word="zzzzz"), None)
    assert caught.value.errors[0].code == "no-row"


def test_a_misspelt_key_is_said_once_and_stops_what_it_was_meant_for():
    """`A` was meant for `at`, which "each bolt" does not take: only the unknown key is a fault that can be told."""
    with pytest.raises(Problems) as caught:
        read_text(GOOD.replace('acts_on = "joint"', 'A = []\nacts_on = "each bolt"'))
    assert [error.code for error in caught.value.errors] == ["unknown-key"]
