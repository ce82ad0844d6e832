"""Prints what the frictional step costs: applications of the compliance and of its near inverse, wall times beside one
bare application, and the aims. Asserts nothing. Run as a script; OMP_NUM_THREADS=1 keeps the comparison fair.

python tests/speed/step.py [CELLS]

CELLS: along the finest grid, 512 if not given; 128 takes half a minute, 512 a few minutes. A 512 cycle is of few steps: what counts
there is the mean beside that of 256.
"""

import sys
import time
from itertools import pairwise
from math import pi

import numpy as np

from slip.friction.compliance.halfspace import HalfSpace
from slip.friction.compliance.strips import Strips
from slip.friction.march.face import Face
from slip.friction.march.history import march
from slip.friction.march.step import step

AT_MOST = {"smooth": 40, "layered": 20, "cycle": 25}  # applications; of a cycle the mean
FINER = 1.3  # a 512 cycle over a 256 one, in applications of the mean step
SECONDS = 1.0  # 40 steps of 2000 strips
# Half of the load, all of it, and the beginning of the way back in steps of the whole way.
SHORT = np.concatenate([np.linspace(0.5, 1, 2), np.linspace(0.9, 0.5, 5)])
WAY = np.concatenate([np.linspace(0.1, 1, 10), np.linspace(0.9, -1, 20), np.linspace(-0.9, 1, 20)])


def sphere(cells, nu, radius=1.0, layer=None):
    cell = 2.2 * radius / cells
    x = (np.arange(cells) + 0.5) * cell - 1.1 * radius
    r = np.array(np.meshgrid(x, x, indexing="ij"))
    bound = np.sqrt(np.maximum(0.0, 1 - (r**2).sum(0) / radius**2))
    G = 2 * (2 - nu) * 2e4
    return HalfSpace((cells, cells), (cell, cell), [(G, nu)] * 2, layer=layer), bound, 2 * pi / 3 * radius**2, r


def bare(body):
    """Milliseconds of one application, the best of a few."""
    q = np.ones((body.components, *body.shape))
    times = []
    for _ in range(5):
        start = time.perf_counter()
        body.apply(q)
        times.append(1e3 * (time.perf_counter() - start))
    return min(times)


def show(what, steps, stamps, one, aim):
    """A line: mean and largest applications, near inverses, Newton steps, time per step and in bare applications; the mean."""
    applications = [made.applications for made in steps]
    took = 1e3 * np.mean([b - a for a, b in pairwise(stamps)])
    print(
        f"{what:52s} {np.mean(applications):6.1f} (most {max(applications):5.1f}) near inverses "
        f"{np.mean([made.near_inverses for made in steps]):5.1f}, "
        f"Newton {np.mean([made.newton for made in steps]):4.1f}, "
        f"{took:8.1f} ms = {took / one:5.1f} bare of {one:.2f} ms, balance {max(made.balance for made in steps):.0e}"
        + (f" (aim: at most {aim:g} applications)" if aim else ""),
        flush=True,
    )
    return float(np.mean(applications))


def timed(what, one, steps, aim=None):
    """Make the steps and print their line; the mean of the applications, and seconds of the processor."""
    start = time.process_time()
    stamps, kept = [time.perf_counter()], []
    for made in steps:
        stamps.append(time.perf_counter())
        kept.append(made)
    took = time.process_time() - start
    return show(what, kept, stamps, one, aim), took


def cycle(body, bound, total, way):
    """Steps along parts of q = .6."""
    return march(body, bound, Face(2), loads=[[0.6 * total * q, 0.0] for q in way])


def main(finest):
    cycles = {}
    for cells in (n for n in (64, 128, 256, 512, 1024) if n <= finest):
        for nu in (0.0, 0.3):
            body, bound, total, r = sphere(cells, nu)
            one = bare(body)
            body.largest()
            name = f"sphere {cells} x {cells}, nu {nu}"
            motion = 3 * 2 * pi / 3 / (16 * 2e4) * (1 - 0.4 ** (2 / 3))
            timed(
                f"{name}, motion to q = .6, cold",
                one,
                (step(body, bound, Face(2), motion=[motion, 0]) for _ in range(1)),
            )
            timed(
                f"{name}, load q = .6, cold",
                one,
                (step(body, bound, Face(2), load=[0.6 * total, 0]) for _ in range(1)),
                AT_MOST["smooth"] if cells == 256 else None,
            )
            timed(
                f"{name}, and free to turn",
                one,
                (step(body, bound, Face(2, r), load=[0.6 * total, 0, 0]) for _ in range(1)),
            )
            way, said = (WAY, "cycle of 40 after 10") if cells <= 256 else (SHORT, "beginning of a cycle")
            if cells == 256:
                cycles[nu], _ = timed(f"{name}, beginning of a cycle", one, cycle(body, bound, total, SHORT))
            if cells <= 256 or (cells == 512 and nu):
                found, _ = timed(f"{name}, {said}", one, cycle(body, bound, total, way), AT_MOST["cycle"])
            if cells == 512 and nu:
                print(
                    f"{'512 over 256, both from the beginning':52s} {found / cycles[nu]:6.2f} (aim: at most {FINER:g})"
                )
    for cells in (128, 256):
        for nu in (0.0, 0.3):
            radius = 0.25 * cells / 2.2
            shape = sphere(cells, nu, radius)[1]
            proportional = np.where(shape > 0, 2e4 * np.where(shape > 0, shape, 1.0), np.inf)
            scattered = 2e4 * np.exp(2 * np.random.default_rng(0).normal(size=shape.shape))
            for kind, layer in (("2e4", 2e4), ("in proportion to p", proportional), ("scattered", scattered)):
                body, bound, total, _ = sphere(cells, nu, radius, layer)
                one = bare(body)
                body.largest()
                cold = (step(body, bound, Face(2), load=[0.6 * total, 0]) for _ in range(1))
                aim = AT_MOST["layered"] if kind == "2e4" else None
                timed(f"{cells} x {cells} of .25 mm, nu {nu}, layer {kind}", one, cold, aim)
    for cells in (500, 2000):
        body = Strips(80.0, 50.0, cells, (8e6, 8e6), layer=80.0)
        way = march(body, 6.0, Face(1), loads=20400.0 * WAY)
        name = f"strips of {cells} cells, cycle of 40 after 10"
        _, seconds = timed(name, bare(body), way)
        if cells == 2000:
            print(
                f"{'40 of these steps, processor seconds':52s} {seconds * 40 / len(WAY):6.2f} (aim: at most {SECONDS:g})"
            )


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 512)
