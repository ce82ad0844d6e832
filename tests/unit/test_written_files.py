"""Files that the program writes: whole or not at all, and never over what somebody else wrote."""

from __future__ import annotations

from pathlib import Path

import pytest

from slip import cli
from slip.base.errors import Problems
from slip.commands.outcome import write
from slip.read.build import read

WRONG = "format = 1\n[bolt]\nthread = 16\n"


@pytest.fixture
def wrong(tmp_path: Path) -> Path:
    path = tmp_path / "joint.toml"
    path.write_text(WRONG)
    return path


def test_a_failed_run_leaves_an_existing_report(wrong: Path, capsys: pytest.CaptureFixture[str]) -> None:
    report = wrong.with_name("report.html")
    report.write_text("the report of yesterday")
    assert cli.main(["check", str(wrong), "--report", str(report)]) == 2
    assert report.read_text() == "the report of yesterday"
    assert sorted(p.name for p in wrong.parent.iterdir()) == ["joint.toml", "report.html"]
    assert capsys.readouterr().out == ""


def test_a_report_is_written_beside_and_then_replaced(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "report.html"
    target.write_text("old")
    seen: list[tuple[str, str]] = []
    replace = Path.replace

    def watched(self: Path, other: Path) -> Path:
        seen.append((self.read_text(), target.read_text()))
        return replace(self, other)

    monkeypatch.setattr(Path, "replace", watched)
    write(target, "new", [tmp_path / "joint.toml"])
    assert seen == [("new", "old")]
    assert [p.name for p in tmp_path.iterdir()] == ["report.html"]
    assert target.read_text() == "new"


def test_a_write_that_fails_leaves_the_old_report_whole(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "report.html"
    target.write_text("old")

    def full(self: Path, text: str, **_: object) -> int:
        with self.open("w") as file:
            file.write(text[:2])
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "write_text", full)
    with pytest.raises(Problems) as caught:
        write(target, "new text", [tmp_path / "joint.toml"])
    (error,) = caught.value.errors
    assert (error.code, error.file) == ("not-written", str(target))
    assert [p.name for p in tmp_path.iterdir()] == ["report.html"]
    assert target.read_text() == "old"


def test_a_report_never_replaces_the_joint_file(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "joint.toml"
    path.write_text(WRONG)
    with pytest.raises(Problems) as caught:
        write(path, "report", [tmp_path / "." / "joint.toml"])
    assert caught.value.errors[0].code == "report-over-input"
    assert path.read_text() == WRONG


def test_new_never_overwrites(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "mine.toml"
    assert cli.main(["new", str(path)]) == 0
    written = path.read_text()
    assert read(path).cases
    path.write_text("# mine\n" + written)
    assert cli.main(["new", str(path)]) == 2
    assert path.read_text() == "# mine\n" + written
    assert "file-exists" not in capsys.readouterr().out


def test_new_into_no_folder(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["new", str(tmp_path / "no" / "mine.toml")]) == 2
    said = capsys.readouterr().err
    assert said.startswith("slip: ") and said.count("\n") == 1
