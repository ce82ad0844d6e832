"""The same table by one process, by several, and by a cluster: the same bytes."""

from __future__ import annotations

import importlib.util
from concurrent.futures import Executor, ProcessPoolExecutor
from multiprocessing import get_context
from pathlib import Path
from typing import Any

import pytest

import slip

ROOT = Path(__file__).resolve().parents[2]
JOINT, TABLE = ROOT / "examples/jib.toml", ROOT / "examples/jib.csv"
PIECES = 2000  # bytes, so that the small table goes in several pieces


def worked(folder: Path, name: str, executor: Executor | None, **options: Any) -> tuple[slip.TableResult, bytes]:
    found = slip.check_table(JOINT, TABLE, folder / name, executor=executor, chunk_size=PIECES, **options)
    return found, (folder / name).read_bytes()


def assert_same(folder: Path, executor: Executor, suffix: str = ".csv", **options: Any) -> None:
    wanted, plain = worked(folder, f"plain{suffix}", None, **options)
    steps: list[int] = []
    found, shared = worked(
        folder, f"shared{suffix}", executor, progress=lambda done, total: steps.append(done), **options
    )
    assert shared == plain and len(steps) > 4 and steps == sorted(steps)
    assert found.summary.as_dict() == wanted.summary.as_dict()
    assert (found.exit_code, found.digest, found.warnings) == (1, wanted.digest, wanted.warnings)


@pytest.fixture(scope="module")
def client() -> Any:
    """A cluster inside this process, on a free port."""
    distributed = pytest.importorskip("distributed", reason='needs the extra "cluster"')
    local = {"n_workers": 2, "threads_per_worker": 1, "processes": False, "dashboard_address": ":0"}
    with distributed.LocalCluster(**local) as cluster, distributed.Client(cluster) as client:
        yield client


@pytest.mark.parametrize("suffix", [".csv", ".parquet"])
def test_a_dask_cluster_changes_nothing(tmp_path: Path, client: Any, suffix: str) -> None:
    assert_same(tmp_path, client.get_executor(), suffix)


def test_a_dask_cluster_with_filters_and_few_on_the_way(tmp_path: Path, client: Any) -> None:
    assert_same(tmp_path, client.get_executor(), cases=("slew 252", "stop 0"), bolts=("B3",), ahead=1)


def test_processes_change_nothing(tmp_path: Path) -> None:
    with ProcessPoolExecutor(2, mp_context=get_context("spawn")) as executor:
        assert_same(tmp_path, executor)


def test_a_fault_on_a_worker_is_told_here(tmp_path: Path, client: Any) -> None:
    """Cases that lie apart are found on a worker; the run then gathers them, as it does alone."""
    head, *rows = TABLE.read_text(encoding="utf-8").splitlines(keepends=True)
    scattered = tmp_path / "scattered.csv"
    scattered.write_text(head + "".join(rows[::2] + rows[1::2]), encoding="utf-8")
    found = slip.check_table(JOINT, scattered, tmp_path / "out.csv", executor=client.get_executor(), chunk_size=PIECES)
    assert found.summary.cases == 30 and found.exit_code == 1
    assert found.summary.worst[0].case == "slew 252"


def test_the_example_runs(tmp_path: Path, client: Any) -> None:
    """docs/scale.md shows the same text."""
    path = ROOT / "examples/cluster.py"
    spec = importlib.util.spec_from_file_location("cluster_example", path)
    assert spec and spec.loader
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    found = module.main(tmp_path / "out.csv", processes=False)
    slip.check_table(JOINT, TABLE, tmp_path / "plain.csv")
    assert (tmp_path / "out.csv").read_bytes() == (tmp_path / "plain.csv").read_bytes()
    assert found.summary.cases == 30 and not found.holds
    assert path.read_text(encoding="utf-8") in (ROOT / "docs/scale.md").read_text(encoding="utf-8")
