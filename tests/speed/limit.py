"""How long the gross-slip load takes: many small cases at once, and one face of many points. It prints and asserts nothing.

python tests/speed/limit.py
"""

from __future__ import annotations

import sys
import time
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
BOLTS = np.array([[-80, -60], [0, -60], [80, -60], [-80, 60], [0, 60], [80, 60]], dtype=float)


def measured(label: str, bound: np.ndarray, relief: np.ndarray | None, points: np.ndarray, load: np.ndarray) -> None:
    """Time one call, with relief if there is any, and say how it went."""
    from slip.friction.march.limit import limit
    from slip.friction.march.relief import limit_with_relief

    start, cpu = time.perf_counter(), time.process_time()
    found = limit(bound, points, load) if relief is None else limit_with_relief(bound, relief, points, load)
    spent, cpu = time.perf_counter() - start, time.process_time() - cpu
    steps, gap = np.atleast_1d(found.iterations), np.atleast_1d(found.gap)
    count = steps.size
    print(
        f"{label:<38} {spent:8.3f} s  cpu {cpu:7.3f} s  {1e6 * spent / count:10.1f} us a case   "
        f"steps {np.median(steps):.0f} (most {steps.max()})   largest gap {gap.max():.1e}"
    )


def main() -> None:
    """All sizes, from a fixed seed."""
    draw = np.random.default_rng(20240229)
    for count, n in ((6, 6), (10_000, 6), (100_000, 6), (5_000, 200)):
        points = BOLTS if n == len(BOLTS) else draw.uniform(-100, 100, (n, 2))
        bound = draw.uniform(2_000, 20_000, (count, n))
        load = draw.normal(0.0, 1.0, (count, 3)) * [20_000, 20_000, 2e6] * (n / 6)
        # Most points are relieved, some pressed.
        relief = bound * draw.uniform(-0.1, 0.4, (count, n))
        measured(f"{count} cases of {n} bolts", bound, None, points, load)
        measured(f"{count} cases of {n} bolts, relieved", bound, relief, points, load)
        measured(f"{count} cases of {n} bolts, relief 0", bound, 0 * relief, points, load)
    for count in (1_000, 10_000):
        points = draw.uniform(-100, 100, (count, 2))
        measured(f"one case of {count} points", draw.uniform(0, 60, count), None, points, np.array([1e4, -2e4, 3e6]))


if __name__ == "__main__":
    sys.path.insert(0, str(ROOT))
    main()
