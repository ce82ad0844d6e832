"""`slip penalty` with the table of a run: what is written, what is refused."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import polars as pl
import pytest

from slip import cli

ROOT = Path(__file__).resolve().parents[2]
K, MU = 28000.0, 0.18


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The bracket with its model's data, and the contact of a run: patches of even points, pushed along y on springs K."""
    monkeypatch.chdir(tmp_path)
    text = (ROOT / "examples" / "bracket.toml").read_text(encoding="utf-8")
    model = f'[finite_elements]\npresent = {{ per_area = "{K:g} N/mm^3" }}\n'
    Path("joint.toml").write_text(text + model, encoding="utf-8")
    rows = []
    for x in (-80, 0, 80):
        for y in (-60, 60):
            for i, motion in enumerate(np.linspace(0.05, 0.5, 10)):  # um
                pressure, area = 45.0, 110.0
                traction = min(K * motion * 1e-3, MU * pressure)
                rows.append((len(rows), x + i, y, area, pressure, 0.0, traction, 0.0, motion))
    head = ("id", "x[mm]", "y[mm]", "area[mm2]", "p[MPa]", "tx[MPa]", "ty[MPa]", "gx[um]", "gy[um]")
    pl.DataFrame(rows, schema=head, orient="row").write_csv("run.csv")
    return tmp_path


def test_a_run_is_examined(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    options = ["--interface", "run.csv", "--motion", "total", "--per-point", "points.csv", "--map", "map.svg"]
    assert cli.main(["penalty", "joint.toml", *options, "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["present"]["value"] == K
    sticking = sum(K * m * 1e-3 < MU * 45.0 for m in np.linspace(0.05, 0.5, 10)) / 10
    assert found["run"]["over_pressure"][0]["points"] == 60
    points = pl.read_csv("points.csv")
    assert points.height == 60 and points["k_t_typical[N/mm^3]"].n_unique() == 1
    law = found["interface"]["k_t"]["mean"][1] / found["judged_on"]["pressure"]["mean"]
    assert points["k_t_typical[N/mm^3]"][0] == pytest.approx(45.0 * law, rel=1e-9)
    assert "<svg" in Path("map.svg").read_text(encoding="utf-8")
    assert cli.main(["penalty", "joint.toml", *options]) == 0
    said = capsys.readouterr().out
    assert f"{1 - sticking:.1%} of the clamp slips" in said and max(map(len, said.split("\n"))) <= 80


def test_the_page_has_the_run(folder: Path) -> None:
    options = ["--interface", "run.csv", "--motion", "total", "--report"]
    pages = []
    for name in ("one.html", "two.html"):
        assert cli.main(["penalty", "joint.toml", *options, name]) == 0
        pages.append(Path(name).read_text(encoding="utf-8"))
    assert pages[0] == pages[1] and "What the run found on its contact" in pages[0]
    assert "Map of the contact" in pages[0] and "of the clamp slips" in pages[0]
    assert cli.main(["penalty", "joint.toml", "--report", "three.html"]) == 0
    assert "What the run found" not in Path("three.html").read_text(encoding="utf-8")


def test_the_motion_has_to_be_declared(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["penalty", "joint.toml", "--interface", "run.csv"]) == 2
    said = capsys.readouterr().err
    assert said.count("\n") == 1 and "total, slip or path" in said


@pytest.mark.parametrize(
    "options",
    [
        ["--map", "map.svg"],
        ["--per-point", "p.csv"],
        ["--motion", "slip"],
        ["--interface", "run.csv", "--map", "run.csv"],
    ],
)
def test_options_that_do_not_go_together(folder: Path, options: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    before = Path("run.csv").read_bytes()
    assert cli.main(["penalty", "joint.toml", *options]) == 2
    assert capsys.readouterr().err.count("\n") == 1
    assert Path("run.csv").read_bytes() == before and sorted(p.name for p in folder.iterdir()) == [
        "joint.toml",
        "run.csv",
    ]
