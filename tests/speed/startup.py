"""How long a check takes from the command line, against what importing numpy costs by itself. It prints and asserts nothing.

python tests/speed/startup.py [RUNS]

Both are run in turn on the interpreter that runs this, the program as installed from a wheel (with compiled modules, as a user has
it). The aim is a ratio of at most 2.5: most of what a user waits for is numpy.
"""

from __future__ import annotations

import json
import os
import shutil
import statistics
import subprocess
import sys
import tempfile
import time
from importlib import metadata
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
RUNS = 31


def installed() -> bool:
    """Whether slipproof is installed on this interpreter, and not as a link to a source folder."""
    try:
        origin = metadata.distribution("slipproof").read_text("direct_url.json")
    except metadata.PackageNotFoundError:
        return False
    return not (origin and json.loads(origin).get("dir_info", {}).get("editable"))


def install(folder: Path) -> None:
    """Build a wheel from a copy of the source and install it, without its dependencies, into a folder."""
    source = folder / "source"
    source.mkdir()
    for name in ("pyproject.toml", "README.md"):
        shutil.copy(ROOT / name, source)
    shutil.copytree(ROOT / "slip", source / "slip", ignore=shutil.ignore_patterns("__pycache__"))
    command = [
        sys.executable,
        "-m",
        "pip",
        "install",
        "--quiet",
        "--no-deps",
        "--target",
        str(folder / "installed"),
        str(source),
    ]
    subprocess.run(command, check=True, env=environment(None))


def environment(path: Path | None) -> dict[str, str]:
    """This process's environment without its Python settings, with a folder to import from."""
    kept = {key: value for key, value in os.environ.items() if not key.startswith("PYTHON")}
    return kept | ({"PYTHONPATH": str(path)} if path else {})


def seconds(command: list[str], folder: Path, path: Path | None) -> float:
    """Wall time of a command."""
    start = time.perf_counter()
    subprocess.run(command, check=True, cwd=folder, env=environment(path), stdout=subprocess.DEVNULL)
    return time.perf_counter() - start


def main(runs: int = RUNS) -> None:
    """Measure and print."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        shutil.copy(ROOT / "examples/bracket.toml", folder)
        path = None
        if not installed():
            install(folder)
            path = folder / "installed"
        commands = {
            "python -c pass": [sys.executable, "-c", "pass"],
            "python -c 'import numpy'": [sys.executable, "-c", "import numpy"],
            "slip check bracket.toml": [sys.executable, "-m", "slip", "check", "bracket.toml"],
        }
        times: dict[str, list[float]] = {label: [] for label in commands}
        for command in commands.values():  # the first run reads files from the disk
            seconds(command, folder, path)
        for _ in range(runs):
            for label, command in commands.items():
                times[label].append(seconds(command, folder, path))
    print(f"Python {sys.version.split()[0]}, numpy {metadata.version('numpy')}, {runs} runs in turn")
    for label, found in times.items():
        print(f"{label:<26} median {1e3 * statistics.median(found):7.1f} ms, fastest {1e3 * min(found):7.1f} ms")
    whole, bare = times["slip check bracket.toml"], times["python -c 'import numpy'"]
    ratio, fastest = statistics.median(whole) / statistics.median(bare), min(whole) / min(bare)
    print(f"ratio of the medians {ratio:.2f}, of the fastest runs {fastest:.2f} (aim: at most 2.5)")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else RUNS)
