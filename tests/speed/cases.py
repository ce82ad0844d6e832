"""How long a table of load cases takes, beside what pandas takes to read it and to write the columns of the result.

python tests/speed/cases.py [CASES]      5000 cases of 200 bolts unless said otherwise; ten times as many with `long`

Each run is a process of its own on one core; it prints seconds, their ratio, and the peak memory. It asserts nothing.
"""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import tempfile
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
BOLTS, RUNS = 200, 3
JOINT = """\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "10.9"
hole_diameter = 17.5
[tightening]
preload = [98000, 110000]
[losses]
embedding = "4500 N"
relaxation = "5 %"
[interface]
friction = [0.18, 0.25]
[pattern]
grid = {{ columns = 20, rows = {rows}, pitch = [60, 60] }}
[axial]
meaning = "external"
bolt_share = 0.15
"""
TIMED = """
import resource, sys, time
sys.path.insert(0, {root!r})
{setup}
start = time.perf_counter()
{work}
print(time.perf_counter() - start, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024)
"""
OURS = (
    "from slip.cases.run import check_table",
    "check_table({joint!r}, {table!r}, {out!r})",
)
THEIRS = (
    "import pandas",
    "frame = pandas.read_csv({table!r})\n"
    "result = pandas.DataFrame({{'case': frame['case'], 'bolt': frame['bolt'], 'end': 'given'}})\n"
    "for i, name in enumerate(('clamp_low', 'clamp_high', 'shear', 'safety', 'load_factor', 'required', 'reserve', 'apart')):\n"
    "    result[name] = frame['Fx[N]'] * (1.1 + i)\n"
    "for name in ('open', 'holds', 'case_holds'):\n"
    "    result[name] = frame['Fx[N]'] > 0\n"
    "result.to_csv({out!r}, index=False)",
)


def write_table(path: Path, cases: int) -> None:
    """A table of bolt forces, written in pieces, from a fixed seed."""
    import numpy as np
    import polars as pl

    draw = np.random.default_rng(20240301)
    with open(path, "wb") as file:
        for first in range(0, cases, 1000):
            count = min(1000, cases - first)
            size = count * BOLTS
            frame = pl.DataFrame(
                {
                    "case": np.repeat([f"case {i}" for i in range(first, first + count)], BOLTS),
                    "bolt": np.tile([f"B{i + 1}" for i in range(BOLTS)], count),
                    "Fx[N]": draw.normal(size=size).round(4) * 3000,
                    "Fy[N]": draw.normal(size=size).round(4) * 3000,
                    "Fax[N]": draw.normal(size=size).round(4) * 3000,
                }
            )
            frame.write_csv(file, include_header=first == 0)


def timed(what: tuple[str, str], folder: Path) -> tuple[float, float]:
    """Seconds and peak memory [MiB] of one run on one core."""
    names = {"joint": str(folder / "joint.toml"), "table": str(folder / "cases.csv"), "out": str(folder / "out.csv")}
    script = TIMED.format(root=str(ROOT), setup=what[0], work=what[1].format(**names))
    one = {"POLARS_MAX_THREADS": "1", "OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1", "MKL_NUM_THREADS": "1"}
    core = ["taskset", "-c", "0"] if os.path.exists("/usr/bin/taskset") else []
    done = subprocess.run([*core, sys.executable, "-c", script], env=os.environ | one, capture_output=True, text=True)
    if done.returncode:
        sys.exit(done.stderr)
    seconds, memory = done.stdout.split()
    return float(seconds), float(memory)


def compare(cases: int, runs: int, pandas: bool) -> tuple[float, float]:
    """Print the median of several runs in turn; returns seconds and memory of ours."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        (folder / "joint.toml").write_text(JOINT.format(rows=BOLTS // 20), encoding="utf-8")
        write_table(folder / "cases.csv", cases)
        size = (folder / "cases.csv").stat().st_size / 2**20
        ours, theirs = [], []
        for _ in range(runs):
            ours.append(timed(OURS, folder))
            if pandas:
                theirs.append(timed(THEIRS, folder))
        seconds, memory = statistics.median(s for s, _ in ours), max(m for _, m in ours)
        print(f"{cases} cases of {BOLTS} bolts, {cases * BOLTS} rows, {size:.0f} MiB of CSV, {runs} runs, one core")
        print(f"  slip cases, rows and groups   {seconds:7.2f} s, peak memory {memory:5.0f} MiB")
        if pandas:
            other = statistics.median(s for s, _ in theirs)
            print(f"  pandas, reading and writing   {other:7.2f} s; ratio {seconds / other:.2f} (aim: at most 0.5)")
    return seconds, memory


def main() -> None:
    """One size against pandas, and with `long` ten times the rows."""
    sys.path.insert(0, str(ROOT))
    numbers = [int(word) for word in sys.argv[1:] if word.isdigit()]
    cases = numbers[0] if numbers else 5000
    try:
        import pandas  # noqa: F401

        there = True
    except ImportError:
        there = False
        print("pandas is not installed: no comparison (pip install pandas)")
    seconds, memory = compare(cases, RUNS, there)
    if "long" in sys.argv:
        more, most = compare(10 * cases, 1, False)
        print(
            f"ten times the rows: {more / seconds:.1f} times the time (aim: at most 11), memory {most / memory:.2f} times"
        )


if __name__ == "__main__":
    main()
