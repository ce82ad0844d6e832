"""Dangerous one-character changes of formulas, each in a copy of the program: a quick test must turn red for every one.

python tests/house/mutations.py [NAME...]

Prints name, file, change and what the test said; exits with 1 when a change stays green, or when the original is not green.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
import tempfile
import time
from collections.abc import Sequence
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import NamedTuple

ROOT = Path(__file__).resolve().parents[2]
ALIKE = ("slip", "tests", "examples", "docs", "pyproject.toml", "README.md", "DEVELOPERS.md")
WITHOUT = shutil.ignore_patterns("__pycache__", ".*_cache", ".hypothesis")


class Mutation(NamedTuple):
    """A change of a file below slip/: `before` stands in it once; `test` is the quick file, or the test in one, that must see it."""

    name: str
    file: str
    before: str
    after: str
    test: str


MUTATIONS = (
    Mutation(
        "bolt share of the axial load",
        "clamp/working.py",
        "return (1 - Phi) * np.maximum(F_ax, 0)\n",
        "return (1 + Phi) * np.maximum(F_ax, 0)\n",
        "tests/derived/test_joint_files.py",
    ),
    Mutation(
        "wider of scatter and friction",
        "clamp/scatter.py",
        "np.minimum(F_scatter, F_friction)",
        "np.maximum(F_scatter, F_friction)",
        "tests/derived/test_examples.py",
    ),
    Mutation(
        "pitch diameter in the thread's friction",
        "clamp/tightening.py",
        "return T / (P / (2 * np.pi) + d2 * mu_th",
        "return T / (P / (2 * np.pi) + P * mu_th",
        "tests/derived/test_traps.py",
    ),
    Mutation(
        "flank angle",
        "clamp/tightening.py",
        "COS_FLANK = np.cos(np.pi / 6)",
        "COS_FLANK = np.cos(np.pi / 3)",
        "tests/published/test_tightening.py",
    ),
    Mutation(
        "sign of the turning moment's share",
        "clamp/working.py",
        "return V_y / n + M_z * x / sum_r2",
        "return V_y / n - M_z * x / sum_r2",
        "tests/derived/test_joint_files.py",
    ),
    Mutation(
        "sign of the axial relief",
        "clamp/working.py",
        "np.maximum(F_low - F_Z - F_R - F_th - relief, 0)",
        "np.maximum(F_low - F_Z - F_R - F_th + relief, 0)",
        "tests/derived/test_joint_files.py",
    ),
    Mutation(
        "sum of the settling faces",
        "clamp/losses.py",
        "return n_thread * f_thread + n_bearing * f_bearing + n_inner * f_inner",
        "return n_thread * f_thread + n_bearing * f_bearing - n_inner * f_inner",
        "tests/derived/test_clamp_formulas.py",
    ),
    Mutation(
        "faces that share the load",
        "friction/law.py",
        "return mu * m * clamp",
        "return mu / m * clamp",
        "tests/derived/test_traps.py",
    ),
    Mutation(
        "relief in the load factor",
        "friction/law.py",
        "np.asarray(F_s + mu * m * relief, dtype=float)",
        "np.asarray(F_s - mu * m * relief, dtype=float)",
        "tests/derived/test_joint_files.py",
    ),
    Mutation(
        "separation",
        "clamp/working.py",
        "clamp_0 / np.asarray(relief)",
        "clamp_0 * np.asarray(relief)",
        "tests/derived/test_traps.py",
    ),
    Mutation(
        "EN 1993-1-8, tension",
        "verdict/standards/en1993.py",
        "(F_pC - 0.8 * F_t)",
        "(F_pC + 0.8 * F_t)",
        "tests/published/test_en1993.py",
    ),
    Mutation(
        "EN 1993-1-8, partial factor",
        "verdict/standards/en1993.py",
        '"C": 1.25}',
        '"C": 1.15}',
        "tests/published/test_en1993.py",
    ),
    Mutation(
        "AISC 360, tension",
        "verdict/standards/aisc360.py",
        "return 1.0 - T_u / (D_u * T_b * n_b)",
        "return 1.0 + T_u / (D_u * T_b * n_b)",
        "tests/published/test_aisc360.py",
    ),
    Mutation(
        "clamp on the rings of the patch",
        "pressure/patch.py",
        "return between(1), between(2)",
        "return between(0), between(1)",
        "tests/derived/test_examples.py",
    ),
    Mutation(
        "flanks of a thread push its hole open",
        "pressure/receding.py",
        "= thread.wedge * pull",
        "= -thread.wedge * pull",
        "tests/converge/test_receding.py",
    ),
    Mutation(
        "face under a plate between others",
        "pressure/receding.py",
        "= weights, -weights",
        "= weights, weights",
        "tests/converge/test_receding.py",
    ),
    Mutation(
        "what holds",
        "verdict/gross_slip.py",
        "holds=bool(factor >= least),\n        decides=decides",
        "holds=bool(factor <= least),\n        decides=decides",
        "tests/derived/test_joint_files.py",
    ),
    Mutation(
        "ends of a lap",
        "friction/model_strips.py",
        "P * h / (2 * EA) - D",
        "P * h / EA - D",
        "tests/derived/test_pressed_face.py",
    ),
    Mutation(
        "blocks thicker than the patch is wide",
        "friction/models.py",
        "all(t > width",
        "all(2 * t > width",
        "tests/derived/test_partial_blocks.py",
    ),
    Mutation(
        "turning moment on a face of known pressure",
        "friction/known_pressure.py",
        '"y": arms[1], "V_x": vx',
        '"y": -arms[1], "V_x": vx',
        "tests/derived/test_pressed_face.py",
    ),
    Mutation(
        "other end of a ratio in a table",
        "cases/acting.py",
        "return ratio * given + 0.0",
        "return -ratio * given + 0.0",
        "tests/derived/test_table_traps.py::test_both_ends_count",
    ),
    Mutation(
        "which end of a case governs in a table",
        "cases/judge.py",
        "np.where(_tied_first(reserve[0], reserve[1]), 0, 1)",
        "np.where(_tied_first(reserve[0], reserve[1]), 1, 0)",
        "tests/derived/test_table_traps.py::test_both_ends_count",
    ),
    Mutation(
        "an empty cell of a table is not zero",
        "cases/rows.py",
        "yield pl.col(name).is_null(), words(",
        "yield pl.col(name).is_infinite(), words(",
        "tests/unit/test_bad_tables.py::test_a_row_that_is_refused",
    ),
    Mutation(
        "slip of the nearest point in the group limit",
        "friction/march/descent.py",
        "turn = (z[0] - u[0]) / lever[0]",
        "turn = (z[0] + u[0]) / lever[0]",
        "tests/derived/test_limit.py::test_hardly_a_case_of_six_bolts_is_left",
    ),
    Mutation(
        "factor that the forces of the group limit carry",
        "friction/march/motions.py",
        "return (self.along * fx + self.about * turn) / self.size, balanced",
        "return (self.along * fx - self.about * turn) / self.size, balanced",
        "tests/derived/test_limit.py::test_hardly_a_case_of_six_bolts_is_left",
    ),
    Mutation(
        "size of a contact against its radius",
        "friction/pressed/range.py",
        "share[1] > SMALL",
        "share[1] < SMALL",
        "tests/derived/test_pressed_range.py::test_a_contact_that_is_not_small_is_told",
    ),
)


def copied(to: Path) -> Path:
    """A copy of what the tests need."""
    for name in ALIKE:
        source = ROOT / name
        if source.is_dir():
            shutil.copytree(source, to / name, ignore=WITHOUT)
        elif source.exists():
            shutil.copy(source, to / name)
    return to


def tested(copy: Path, test: str) -> tuple[bool, str]:
    """Whether a test file is green in a copy, and what pytest said."""
    environment = {**os.environ, "PYTHONPATH": str(copy), "PYTHONDONTWRITEBYTECODE": "1"}
    command = [sys.executable, "-m", "pytest", "-x", "-q", "-p", "no:cacheprovider", test]
    done = subprocess.run(command, cwd=copy, env=environment, capture_output=True, text=True, check=False)
    if done.returncode not in (0, 1):  # 1 is a failed test; anything else is no answer
        raise RuntimeError(f"{test}: pytest did not run\n{done.stdout[-2000:]}{done.stderr[-2000:]}")
    return done.returncode == 0, done.stdout.strip().splitlines()[-1][:70] if done.stdout.strip() else ""


def mutate(copy: Path, mutation: Mutation) -> None:
    """Apply a change to a copy; an error when its text is not there exactly once."""
    path = copy / "slip" / mutation.file
    text = path.read_text(encoding="utf-8")
    if text.count(mutation.before) != 1:
        raise RuntimeError(
            f"{mutation.name}: {mutation.before!r} stands {text.count(mutation.before)} times in {mutation.file}"
        )
    path.write_text(text.replace(mutation.before, mutation.after), encoding="utf-8")


def change(mutation: Mutation) -> str:
    """The characters that differ, with a little round them."""
    before, after = mutation.before, mutation.after
    at = next(i for i, (a, b) in enumerate(zip(before, after, strict=False)) if a != b)
    start = max(at - 12, 0)
    return f"{before[start : at + 10].strip()} -> {after[start : at + 10].strip()}".replace("\n", " ")


def attempt(mutation: Mutation | None, test: str) -> tuple[bool, str]:
    """A test file in a fresh copy, mutated or not."""
    with tempfile.TemporaryDirectory(prefix="slip-mutation-") as folder:
        copy = copied(Path(folder))
        if mutation is not None:
            mutate(copy, mutation)
        return tested(copy, test)


def main(names: Sequence[str] = ()) -> int:
    """Run the mutations whose names hold one of the words, all without words."""
    chosen = [m for m in MUTATIONS if not names or any(word in m.name for word in names)]
    started, wrong = time.monotonic(), 0
    with ThreadPoolExecutor(max_workers=min(4, os.cpu_count() or 1)) as pool:
        tests = list(dict.fromkeys(m.test for m in chosen))
        originals = dict(zip(tests, pool.map(lambda test: attempt(None, test), tests), strict=True))
        for test, (green, said) in originals.items():
            print(f"{'green' if green else 'RED':<6} original: {test}" + ("" if green else f": {said}"))
            wrong += not green
        for m, (green, _) in zip(chosen, pool.map(lambda m: attempt(m, m.test), chosen), strict=True):
            print(
                f"{'GREEN' if green else 'red':<6} {m.name}: slip/{m.file}: {change(m)}"
                + (f" not seen by {m.test}" if green else "")
            )
            wrong += green
    print(f"{len(chosen)} changes, {wrong} of them or of the originals wrong, {time.monotonic() - started:.0f} s")
    return 1 if wrong or not chosen else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
