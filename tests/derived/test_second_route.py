"""A second route through one whole joint, in one straight script: every number of its ledger and every factor again.

Five bolts at no symmetric places, tapped into steel under a washer, unequal preloads, springs per bolt by their edges,
unequal warming, shear above the face, axial off the centroid, three couples, both ends of an alternating case.
"""

from __future__ import annotations

from collections.abc import Callable
from math import cos, log, pi
from typing import Any

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq, minimize

FILE = """
format = 1
units = "N mm"
[bolt]
thread = "M12"
grade = "10.9"
far_end = "tapped"
washer_thickness = [2.5, 0]
material = {{ youngs_modulus = 200e3, poissons_ratio = 0.3, expansion = "12e-6 1/K" }}
[tightening]
preload = {{ B1 = [38e3, 55e3], B2 = [34e3, 52e3], B4 = [{weak}, 50e3], others = [41e3, 57e3] }}
[losses]
relaxation = "4 %"
thermal = {{ bolt = 35, plates = [{rise}, 20] }}
[[plate]]
material = "aluminium"
thickness = 18
outline = [-70, -55, 85, 80]
[[plate]]
material = "steel"
thickness = 40
outline = [-200, -150, 200, 150]
[interface]
friction = [0.17, 0.25]
roughness = ["Rq 2.0 um", "Ra 3.2 um"]
[pattern]
positions = [[-50, -40], [40, -32], [70, 30], [-10, 62], [-55, 25]]
[axial]
meaning = "external"
load_introduction = 0.4
[[case]]
acts_on = "joint"
shear = [5200, -3100]
axial = 9000
moment = [120e3, -90e3, 210e3]
at = [25, -15, 40]
ratio = -0.4
"""
R = np.array([[-50, -40], [40, -32], [70, 30], [-10, 62], [-55, 25]], dtype=float)
MU, E, ALPHA = 0.17, 200e3, 12e-6
D_W, D_H = 16.63, 13.5  # bearing face and hole of M12


def circle(d: Any) -> Any:
    return pi / 4 * d**2


def plates_under(D_A: float) -> float:
    """Washer of 2.5 mm and 18 mm of aluminium in one cone."""
    tan_phi = 0.348 + 0.013 * log(20.5 / D_W) + 0.193 * log(D_A / D_W)

    def per_depth(z: float) -> float:
        return 1 / ((E if z < 2.5 else 71e3) * (circle(min(D_A, D_W + 2 * z * tan_phi)) - circle(D_H)))

    cuts = sorted({0, 2.5, min((D_A - D_W) / 2 / tan_phi, 20.5), 20.5})
    return sum(quad(per_depth, a, b, epsabs=0, epsrel=1e-12)[0] for a, b in zip(cuts, cuts[1:], strict=False))


def group_factor(held: np.ndarray, load: np.ndarray) -> float:
    """Least friction work of a turn about any point, for unit work of the load (force and moment about the origin)."""

    def work(centre: np.ndarray) -> float:
        power = load[2] - centre[0] * load[1] + centre[1] * load[0]
        return float(held @ np.hypot(*(R - centre).T)) / abs(power)

    grid = np.arange(-300.0, 301, 25)
    starts = sorted(np.transpose(np.meshgrid(grid, grid)).reshape(-1, 2), key=work)
    exact = {"xatol": 1e-10, "fatol": 1e-14, "maxiter": 4000, "maxfev": 4000}
    return min(minimize(work, start, method="Nelder-Mead", options=exact).fun for start in starts[:4])


def growing_factor(unloaded: np.ndarray, relief: np.ndarray, factor: Callable[[np.ndarray], float]) -> float:
    """Factor on the whole load that equals the held factor of the clamp that it leaves."""
    return brentq(lambda f: factor(MU * np.maximum(unloaded - f * relief, 0)) - f, 0.1, 50, xtol=1e-12)


@pytest.mark.parametrize(("rise", "weak"), [(60.0, 30e3), (5.0, 30e3), (5.0, 8e3)], ids=["gain", "loss", "open"])
def test_whole_ledger(rise: float, weak: float, run_check: Any) -> None:
    # springs: hexagon head, thread in steel of 206 GPa, 20.5 mm of grip
    A_N, A_3 = circle(12.0), circle(12 - 1.226869 * 1.75)
    ends = 6 / A_N / E + 6 / A_3 / E + 0.33 * 12 / A_N / 206e3
    stiff, soft = ends + 20.5 / A_N / E, ends + 20.5 / A_3 / E
    edge = np.min([R[:, 0] + 70, 85 - R[:, 0], R[:, 1] + 55, 80 - R[:, 1]], axis=0)  # the base is wider throughout
    apart = np.array([min(np.hypot(*(R[i] - R[j])) for j in range(5) if j != i) for i in range(5)])
    plates = np.array([plates_under(D_A) for D_A in np.minimum(2 * edge, apart)])
    # before load: Rz 22.4 um is thread 3, head 4.5, two faces 2.5 each
    low, high = np.array([38e3, 34e3, 41e3, weak, 41e3]), np.array([55e3, 52e3, 57e3, 50e3, 57e3])
    embedding = (3 + 4.5 + 2 * 2.5) * 1e-3 / (stiff + plates)
    change = (20.5 * ALPHA * 35 - 2.5 * ALPHA * 35 - 18 * 23.5e-6 * rise) / (stiff + plates)
    loss, gain = np.maximum(change, 0), np.maximum(-change, 0)
    assert (gain > 0).all() if rise == 60 else (loss > 0).all()
    unloaded = low - embedding - 0.04 * low - loss
    # what acts, at the centroid in the face
    shear, pull, arm = np.array([5200.0, -3100.0]), 9000.0, np.array([25.0, -15.0]) - R.mean(axis=0)
    tilt_x, tilt_y = 120e3 + pull * arm[1] - 40 * shear[1], -90e3 - pull * arm[0] + 40 * shear[0]
    turning = 210e3 + arm[0] * shear[1] - arm[1] * shear[0]
    x, y = (R - R.mean(axis=0)).T
    # rigid plate: tension a + b x + c y in balance with force and both moments (tension at y turns about +x, at x about -y)
    ones = np.ones(5)
    plane = np.array([ones, x, y])
    tension = np.linalg.solve(plane @ plane.T, [pull, -tilt_y, tilt_x]) @ plane
    F_x = shear[0] / 5 - turning * y / sum(x**2 + y**2)
    F_y = shear[1] / 5 + turning * x / sum(x**2 + y**2)
    about_origin = turning + R.mean(axis=0)[0] * shear[1] - R.mean(axis=0)[1] * shear[0]
    share_low, share_high = 0.4 * plates / (soft + plates), 0.4 * plates / (stiff + plates)
    # torsion left by tightening, thread friction .20; stress area of M12 84.27 mm2
    A_s = circle(12 - 0.938194 * 1.75)
    twist = high * (1.75 / 2 / pi + (12 - 0.649519 * 1.75) * 0.20 / 2 / cos(pi / 6))
    torsion = 16 * twist / (pi * (4 * A_s / pi) ** 1.5)

    result, _ = run_check(FILE.format(rise=rise, weak=weak))
    for end, scale in zip(result["cases"][0]["ends"], (1.0, -0.4), strict=True):
        pulled = np.maximum(scale * tension, 0)
        relief, bolt = (1 - share_low) * pulled, high + gain + share_high * pulled
        clamp = np.maximum(unloaded - relief, 0)
        load, bolt_shear = scale * np.array([*shear, about_origin]), abs(scale) * np.hypot(F_x, F_y)
        expected = {
            "assembly_low": low,
            "assembly_high": high,
            "embedding": embedding,
            "relaxation": 0.04 * low,
            "thermal_loss": loss,
            "thermal_gain": gain,
            "axial_relief": relief,
            "clamp_low": clamp,
            "clamp_high": high + gain,
            "bolt_force_high": bolt,
            "yield_use": np.sqrt((bolt / A_s) ** 2 + 3 * torsion**2) / 940,
            "bearing_pressure_high": bolt / (circle(D_W) - circle(D_H)),
            "separation_factor": [c / r if r > 0 else None for c, r in zip(unloaded, relief, strict=True)],
            "open": clamp == 0,
            "shear": bolt_shear,
        }
        rows = end["ledger"]
        assert [row["bolt"] for row in rows] == ["B1", "B2", "B3", "B4", "B5"]
        for i, row in enumerate(rows):
            assert set(row) == {"bolt", *(key for key, values in expected.items() if values[i] is not None)}
            for key in set(row) - {"bolt"}:
                assert row[key] == pytest.approx(expected[key][i], rel=1e-9, abs=1e-7), (key, row["bolt"])
        assert any(row["open"] for row in rows) == (weak == 8e3 and scale == 1)

        growing = np.where(clamp > 0, MU * unloaded / (bolt_shear + MU * relief), 0)
        force, held = np.hypot(*load[:2]), MU * clamp
        found = {
            "per_bolt": (np.min(held / bolt_shear), np.min(growing)),
            "group": (
                group_factor(held, load),
                growing_factor(unloaded, relief, lambda held, load=load: group_factor(held, load)),
            ),
            "force_only": (
                sum(held) / force,
                growing_factor(unloaded, relief, lambda held, force=force: sum(held) / force),
            ),
        }
        for name, factors in found.items():
            slip = end["gross_slip"][name]
            assert (slip["safety"], slip["load_factor"]) == pytest.approx(factors, rel=1e-7), name
