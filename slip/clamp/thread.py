"""Screw threads of 60 degrees (ISO metric and unified): diameters and areas.

All lengths in mm, areas in mm2; the arguments broadcast, numbers in give a number out. With H = sqrt(3)/2 P the
height of the sharp thread, the factors below are sums of eighths and sixths of H.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from slip.base.formulas import formula

Value = Any  # a number, or an array of numbers that broadcasts with the others


@formula("P", "25.4/n", unit="mm", source="asme_b1_1", basis="memory", valid="n > 0")
def pitch_from_count(n: Value) -> Value:
    """Pitch [mm] of a unified thread with n threads per inch, n > 0. Exact. Source asme_b1_1, memory."""
    return 25.4 / n


@formula("d_2", "d - 0.649519*P", unit="mm", source="iso724", basis="memory", valid="60 degree thread, 0 < P < d")
def pitch_diameter(d: Value, P: Value) -> Value:
    """Pitch diameter d_2 [mm]: where thread and gap are equally wide; d - 3/4 H.

    d: nominal diameter [mm]; P: pitch [mm], 0 < P < d. Source iso724, memory.
    """
    return d - 0.649519 * P


@formula("d_3", "d - 1.226869*P", unit="mm", source="iso898", basis="memory", valid="60 degree thread, 0 < P < d/1.23")
def minor_diameter(d: Value, P: Value) -> Value:
    """Minor diameter d3 [mm] of the bolt, at the rounded root: d - 17/12 H.

    d: nominal diameter [mm]; P: pitch [mm], 0 < P < d/1.23. Source iso898, memory.
    """
    return d - 1.226869 * P


@formula("D_1", "d - 1.082532*P", unit="mm", source="iso724", basis="memory", valid="60 degree thread, 0 < P < d/1.09")
def nut_minor_diameter(d: Value, P: Value) -> Value:
    """Minor diameter D1 [mm] of the nut or tapped hole: d - 5/4 H.

    d: nominal diameter [mm]; P: pitch [mm], 0 < P < d/1.09. Source iso724, memory.
    """
    return d - 1.082532 * P


@formula("d_s", "(d2 + d3)/2", unit="mm", source="iso898", basis="memory", valid="metric thread")
def stress_diameter(d2: Value, d3: Value) -> Value:
    """Diameter [mm] of the round bar that is as strong as a metric thread.

    d2: pitch diameter [mm]; d3: minor diameter of the bolt [mm]. Source iso898, memory.
    """
    return (d2 + d3) / 2


@formula("A_s", "pi/4*((d2 + d3)/2)^2", unit="mm^2", source="iso898", basis="memory", valid="metric thread")
def stress_area(d2: Value, d3: Value) -> Value:
    """Tensile stress area [mm2] of a metric thread.

    d2: pitch diameter [mm]; d3: minor diameter of the bolt [mm]. Source iso898, memory (the rounded areas of the
    standard are met: see tests/published/test_tightening.py).
    """
    return np.pi / 4 * ((d2 + d3) / 2) ** 2


@formula("A_s", "pi/4*(d - 0.974279*P)^2", unit="mm^2", source="asme_b1_1", basis="memory", valid="unified thread")
def stress_area_unified(d: Value, P: Value) -> Value:
    """Tensile stress area [mm2] of a unified thread: that of a bar of diameter d - 9/8 H.

    d: nominal diameter [mm]; P: pitch [mm] = 25.4 / threads per inch, 0 < P < d. Source asme_b1_1, memory.
    """
    return np.pi / 4 * (d - 0.974279 * P) ** 2


@formula("A", "pi/4*d^2", unit="mm^2", source="statics", basis="derived", valid="d >= 0")
def round_area(d: Value) -> Value:
    """Area [mm2] of a full circle of diameter d [mm], d >= 0: shank, core at d3, nominal area A_N.

    Source statics, derived.
    """
    return np.pi / 4 * d**2
