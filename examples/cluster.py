"""The table of the slewing jib, worked by a cluster: here two processes of this machine.

    pip install "slipproof[cluster]"
    python examples/cluster.py

For a cluster that runs already write Client("tcp://scheduler:8786") in place of the local one.
"""

from pathlib import Path

from distributed import Client, LocalCluster

import slip

HERE = Path(__file__).resolve().parent


def main(out: str | Path = "jib-result.csv", processes: bool = True) -> slip.TableResult:
    """Work the table into `out`; without `processes` the two workers are threads."""
    with (
        LocalCluster(n_workers=2, threads_per_worker=1, processes=processes, dashboard_address=":0") as cluster,
        Client(cluster) as client,
    ):
        return slip.check_table(HERE / "jib.toml", HERE / "jib.csv", out, executor=client.get_executor())


if __name__ == "__main__":
    found = main()
    print(f"{found.summary.cases} cases, {'all hold' if found.holds else 'not all hold'}: see {found.out}")
