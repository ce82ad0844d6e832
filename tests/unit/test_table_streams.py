"""A table in chunks, by several workers, interrupted and gone on with, gathered from scattered rows: always the same result."""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import Any

import numpy as np
import polars as pl
import pytest

from slip import cli
from slip.base.errors import Problems
from slip.cases import gather, stream
from slip.cases.form import csv_form
from slip.cases.marks import Marks
from slip.cases.run import Interrupted, check_table
from slip.cases.stream import Table, last_case
from slip.cases.summary import Summary
from slip.read.build import read

JOINT = """\
format = 1
units = "N mm"
[bolt]
thread = "M16"
grade = "8.8"
hole_diameter = 17.5
[tightening]
preload = [78000, 95000]
[losses]
embedding = "4500 N"
relaxation = "5 %"
[interface]
friction = [0.18, 0.25]
[pattern]
positions = [[-80, -60], [80, -60], [-80, 60], [80, 60]]
[axial]
meaning = "external"
bolt_share = 0.15
"""
CASES, BOLTS = 300, 4


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "joint.toml").write_text(JOINT, encoding="utf-8")
    draw = np.random.default_rng(5)
    frame = pl.DataFrame(
        {
            "case": np.repeat([f"case {i:03d}" for i in range(CASES)], BOLTS),
            "bolt": np.tile(["B1", "B2", "B3", "B4"], CASES),
            **{name: draw.normal(size=CASES * BOLTS).round(4) * 3000 for name in ("Fx[N]", "Fy[N]", "Fax[N]")},
            "note": np.tile(["plain", 'a "quoted" word', "two\nlines", ""], CASES),
        }
    )
    frame.write_csv(tmp_path / "cases.csv")
    frame.write_parquet(tmp_path / "cases.parquet")
    return tmp_path


def whole(folder: Path) -> bytes:
    check_table(folder / "joint.toml", folder / "cases.csv", folder / "whole.csv")
    return (folder / "whole.csv").read_bytes()


def in_chunks(folder: Path, table: str = "cases.csv", out: str = "out.csv", **options: Any) -> Any:
    return check_table(folder / "joint.toml", folder / table, folder / out, **{"chunk_size": 3000, **options})


@pytest.mark.parametrize("size", [150, 1000, 3001, 100_000])
def test_the_size_of_a_chunk_changes_nothing(folder: Path, size: int) -> None:
    steps: list[tuple[int, int]] = []
    found = in_chunks(folder, chunk_size=size, progress=lambda done, total: steps.append((done, total)))
    assert (folder / "out.csv").read_bytes() == whole(folder)
    assert found.summary.rows == CASES * BOLTS and found.summary.cases == CASES
    assert steps[-1][0] == steps[-1][1] and (len(steps) > 20) == (size < 3100)


def test_lines_are_counted_across_quoted_breaks(folder: Path) -> None:
    path = folder / "cases.csv"
    text = path.read_text(encoding="utf-8")
    bad = text.replace("case 250,B4", "case 250,B9")
    path.write_text(bad, encoding="utf-8")
    in_chunks(folder)
    lost = pl.read_csv(folder / "out.refused.csv")
    line = bad[: bad.index("case 250,B9")].count("\n") + 1
    assert lost["line"].to_list() == [line] and lost["case"].to_list() == ["case 250"]


def test_parquet_in_and_out(folder: Path) -> None:
    expected = pl.read_csv(folder / "whole.csv") if whole(folder) else None
    for table, out in (("cases.parquet", "out.parquet"), ("cases.csv", "out.parquet"), ("cases.parquet", "out.csv")):
        found = in_chunks(folder, table, out, chunk_size=90 if "parquet" in table else 3000)
        rows = pl.read_parquet(folder / out) if out.endswith("parquet") else pl.read_csv(folder / out)
        assert rows.with_columns(pl.col("bolt", "end").cast(pl.String)).equals(expected)
        assert found.summary.cases == CASES
    assert sorted(p.suffix for p in folder.iterdir()) == [".csv"] * 3 + [".parquet"] * 2 + [".toml"]


def test_workers_change_nothing(
    folder: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    with ThreadPoolExecutor(3) as executor:
        in_chunks(folder, executor=executor)
    assert (folder / "out.csv").read_bytes() == whole(folder)
    monkeypatch.setattr(stream, "CHUNK", 20_000)
    files = [str(folder / name) for name in ("joint.toml", "cases.csv")]
    code = cli.main(["cases", *files, "--out", str(folder / "two.csv"), "--workers", "2"])
    alone = cli.main(["cases", *files, "--out", str(folder / "one.csv")])
    said = capsys.readouterr().out
    assert code == alone and (folder / "two.csv").read_bytes() == whole(folder)
    assert said.replace("two.csv", "one.csv").count("one.csv") == 2


def stop_after(chunks: int) -> Any:
    """A progress that interrupts as a user would."""
    seen = [0]

    def progress(done: int, total: int) -> None:
        seen[0] += 1
        if seen[0] == chunks:
            raise KeyboardInterrupt

    return progress


@pytest.mark.parametrize(
    ("table", "out"), [("cases.csv", "out.csv"), ("cases.csv", "out.parquet"), ("cases.parquet", "out.csv")]
)
def test_an_interrupted_run_goes_on(folder: Path, table: str, out: str) -> None:
    size = 3000 if table.endswith("csv") else 90
    with pytest.raises(Interrupted, match="cases are in .*--resume"):
        in_chunks(folder, table, out, chunk_size=size, progress=stop_after(4))
    assert not (folder / out).exists()
    if out.endswith("csv"):  # what is finished is a table that can be read
        partial = pl.read_csv(folder / "out.csv.part")
        assert 0 < partial.height < CASES * (BOLTS + 2) and partial.columns[0] == "case"
    with pytest.raises(Interrupted):
        in_chunks(folder, table, out, chunk_size=size, resume=True, progress=stop_after(3))
    found = in_chunks(folder, table, out, chunk_size=size, resume=True)
    uncut = check_table(folder / "joint.toml", folder / table, folder / f"again{out[3:]}")
    assert (folder / out).read_bytes() == (folder / f"again{out[3:]}").read_bytes() or out.endswith("parquet")
    if out.endswith("parquet"):
        assert pl.read_parquet(folder / out).equals(pl.read_parquet(folder / "again.parquet"))
    ours, theirs = found.summary.as_dict(), uncut.summary.as_dict()
    assert ours.pop("axial") == pytest.approx(theirs.pop("axial"), rel=1e-12)  # sums of chunks round on their own
    assert ours == theirs and found.digest == uncut.digest
    assert not list(folder.glob("*.resume")) and not list(folder.glob("*.part*"))


def test_a_run_goes_on_only_with_the_same_input(folder: Path) -> None:
    with pytest.raises(Problems) as caught:
        in_chunks(folder, resume=True)
    assert caught.value.errors[0].code == "no-resume"
    with pytest.raises(Interrupted):
        in_chunks(folder, progress=stop_after(2))
    path = folder / "cases.csv"
    text = path.read_text(encoding="utf-8")
    path.write_text(text.replace("case 001", "case 0x1", 1), encoding="utf-8")
    with pytest.raises(Problems) as caught:
        in_chunks(folder, resume=True)
    assert caught.value.errors[0].code == "resume-changed" and "the table" in caught.value.errors[0].found
    path.write_text(text, encoding="utf-8")
    with pytest.raises(Problems) as caught:
        in_chunks(folder, resume=True, bolts=["B1"])
    assert "what was asked for" in caught.value.errors[0].found
    in_chunks(folder, resume=True)
    assert (folder / "out.csv").read_bytes() == whole(folder)


@pytest.mark.parametrize("parts", [1, 5])
def test_scattered_cases_are_gathered(folder: Path, parts: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """Listed bolt by bolt; in one part the cases keep their order, in several each part does."""
    frame = pl.read_csv(folder / "cases.csv")
    expected = pl.read_csv(folder / "whole.csv") if whole(folder) else None
    path = folder / "cases.csv"
    frame.sort("bolt", maintain_order=True).write_csv(path)
    monkeypatch.setattr(gather, "LARGEST_PART", path.stat().st_size // parts + 1)
    monkeypatch.setattr(gather, "ROWS", 100)
    found = in_chunks(folder)
    rows = pl.read_csv(folder / "out.csv")
    assert rows.sort("case", maintain_order=True).equals(expected)
    assert rows.equals(expected) == (parts == 1)
    assert found.summary.cases == CASES and found.summary.refused == 0
    with pytest.raises(Interrupted):
        in_chunks(folder, progress=stop_after(3))
    in_chunks(folder, resume=True)
    assert pl.read_csv(folder / "out.csv").equals(rows)


def test_a_case_wider_than_a_chunk(folder: Path) -> None:
    found = in_chunks(folder, chunk_size=20)
    assert found.summary.cases == CASES and (folder / "out.csv").read_bytes() == whole(folder)


def test_where_the_last_case_begins(folder: Path) -> None:
    form = csv_form(b"case,bolt,Fx[N],Fy[N]\na,B1,1,2\n", read(folder / "joint.toml", cases_in_table=True), "t")
    for data, rest in (
        (b"a,1,2,3\nb,1,2,3\nb,2,2,3\nb,3", b"b,1,2,3\nb,2,2,3\nb,3"),
        (b"a,1,2,3\n\nb,1,2,3\n\nb,2,2,3\n", b"b,1,2,3\n\nb,2,2,3\n"),
        (b'a,1,2,3\n"b",1,"x\ny",3\nb,2,2,3\n', b'"b",1,"x\ny",3\nb,2,2,3\n'),
        (b"b,1,2,3\nb,2,2,3\n", None),
        (b"b,1,2", None),
    ):
        cut = last_case(data, form)
        assert (data[cut:] if cut else None) == rest


def test_filters_choose_rows_and_not_the_verdict(folder: Path) -> None:
    everything = in_chunks(folder)
    found = in_chunks(folder, cases=["case 007", "case 123"], bolts=["B2"])
    rows = pl.read_csv(folder / "out.csv")
    assert rows["case"].unique(maintain_order=True).to_list() == ["case 007", "case 123"]
    assert rows["bolt"].to_list() == ["B2", "group", "force only"] * 2
    assert found.exit_code == everything.exit_code and found.summary.worst == everything.summary.worst
    assert sorted(w.case for w in found.summary.asked) == ["case 007", "case 123"]


def test_summaries_add_up(folder: Path) -> None:
    found = in_chunks(folder)
    again = Summary.from_dict(found.summary.as_dict())
    assert again.as_dict() == found.summary.as_dict()
    rows = pl.read_csv(folder / "out.csv")
    bolts = rows.filter(pl.col("bolt").is_in(["B1", "B2", "B3", "B4"]))
    for i, bolt in enumerate(found.summary.bolts):
        own = bolts.filter(pl.col("bolt") == bolt)
        value, case = found.summary.envelope["clamp_low"][i]
        assert value == own["clamp_low[N]"].min() and case == own.sort("clamp_low[N]")["case"][0]
        assert found.summary.envelope["shear"][i][0] == own["shear[N]"].max()
    least = bolts.group_by("case").agg(pl.col("reserve_factor").min())
    assert found.summary.worst[0].reserve <= least["reserve_factor"].min()
    assert sum(found.summary.spread) == CASES
    assert [w.reserve for w in found.summary.worst] == sorted(w.reserve for w in found.summary.worst)
    assert found.summary.codes[1] == sum(w.code == 1 for w in found.summary.worst)
    assert Table(folder / "cases.csv", found.joint).form.said == found.form.said


@pytest.mark.parametrize("scattered", [True, False])
def test_a_changed_table_is_not_gone_on_with(folder: Path, scattered: bool) -> None:
    """Parquet, or cases in no order: the whole table is compared, not its size alone."""
    table = "cases.csv" if scattered else "cases.parquet"
    if scattered:
        pl.read_csv(folder / table).sort("bolt", maintain_order=True).write_csv(folder / table)
        gather.ROWS, kept = 100, gather.ROWS
    try:
        with pytest.raises(Interrupted):
            in_chunks(folder, table, chunk_size=100_000 if scattered else 90, progress=stop_after(2))
        data = (folder / table).read_bytes()
        at = data.rindex(b"case 299") if scattered else len(data) // 2
        (folder / table).write_bytes(data[:at] + bytes([data[at] ^ 1]) + data[at + 1 :])
        with pytest.raises(Problems) as caught:
            in_chunks(folder, table, chunk_size=90, resume=True)
    finally:
        if scattered:
            gather.ROWS = kept
    assert caught.value.errors[0].code in ("resume-changed", "table-broken")


def test_marks_are_found_again() -> None:
    draw, marks, added = np.random.default_rng(3), Marks(), []
    for _ in range(40):
        fresh = draw.integers(0, 2**63, size=int(draw.integers(0, 50)), dtype=np.uint64)
        assert not marks.has_any(fresh)
        marks.add(fresh)
        added += fresh.tolist()
    for mark in added:
        assert marks.has_any(np.array([mark, 1], dtype=np.uint64))
    assert not marks.has_any(np.array([2**63], dtype=np.uint64))
