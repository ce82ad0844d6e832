"""A table of many load cases worked from end to end: read in chunks, judged, written, added up."""

from __future__ import annotations

from collections.abc import Iterable
from concurrent.futures import Executor
from pathlib import Path

import numpy as np

from slip.base.errors import InputError, Problems
from slip.base.notes import Note
from slip.base.paths import refuse_overwriting
from slip.base.progress import Progress
from slip.base.records import record
from slip.base.units import System
from slip.cases.balance import Loads
from slip.cases.form import Form
from slip.cases.gather import gathered
from slip.cases.hints import hints
from slip.cases.judge import Prepared, prepare
from slip.cases.marks import Marks
from slip.cases.result import Wanted
from slip.cases.rows import REFUSED, Scattered
from slip.cases.stream import Table
from slip.cases.summary import Summary
from slip.cases.work import Done, Job, header, in_order, is_refused
from slip.cases.write import Checkpoint, Output, Style, encoded, style
from slip.joint.contact import PressedContact, PressedFace
from slip.joint.joint import Joint
from slip.read.build import read
from slip.verdict.stage import NOT_SOLVED

AHEAD = 4  # chunks handed to an executor beyond the one that is waited for


@record(eq=False)
class TableResult:
    """What came of a table. `out` and `refused`: files that were written, None where none was. digest: of the table.

    assumptions, warnings: of the joint and of the table.
    """

    ready: Prepared
    form: Form
    summary: Summary
    assumptions: tuple[Note, ...]
    warnings: tuple[Note, ...]
    out: Path | None
    refused: Path | None
    digest: str
    exit_code: int

    @property
    def joint(self) -> Joint:
        """The joint that the cases act on."""
        return self.ready.joint

    @property
    def holds(self) -> bool:
        """Whether every case of the table was judged and holds."""
        return self.exit_code == 0


class Interrupted(KeyboardInterrupt):
    """A run was stopped by its user; the text says what is kept."""


def check_table(
    joint: Joint | str | Path,
    table: str | Path,
    out: str | Path | None = None,
    *,
    refused: str | Path | None = None,
    loads: str | Path | None = None,
    cases: Iterable[str] = (),
    bolts: Iterable[str] = (),
    units: System | None = None,
    resume: bool = False,
    executor: Executor | None = None,
    ahead: int = AHEAD,
    progress: Progress | None = None,
    chunk_size: int = 0,
) -> TableResult:
    """Judge every case of a table of bolt forces or joint loads, one chunk at a time.

    joint: a Joint or the path of its file, whose own cases do not count. table: CSV or Parquet. out: where the result goes, .csv or
    .parquet. refused: where rows that cannot be used go; by default beside `out`, or beside the working directory's table name.
    loads: a table of joint loads that the bolt forces of each case are added up against. cases, bolts: which rows are written.
    units: of the result. resume: go on with an interrupted run that wrote to `out`. executor: any of concurrent.futures' kind; chunks
    go to it, at most `ahead` beyond the one that is waited for. progress: called with how far the table is read and its whole size.
    chunk_size: bytes of a CSV, or rows of a Parquet table, that are worked on together.

    Raises Problems for wrong input, Interrupted when the user stops it.
    """
    found = read(joint, cases_in_table=True) if isinstance(joint, (str, Path)) else joint
    if isinstance(found, (PressedContact, PressedFace)):
        raise Problems(
            [
                InputError(
                    "table-no-bolts", "", "a file without bolts", "a joint with bolts", "use slip check", str(joint)
                )
            ]
        )
    source = Table(Path(table), found)
    target = None if out is None else Path(out)
    lost = Path(refused) if refused else _beside(source.path, target)
    if lost.exists() and not refused and not is_refused(lost):
        remedy = "name another with --refused, or move it away"
        expected = "a free name for the rows that are refused"
        raise Problems(
            [InputError("file-exists", "--refused", "a file of something else", expected, remedy, str(lost))]
        )
    others = (Path(found.file), Path(loads) if loads else None)
    refuse_overwriting({"--out": target, "--refused": lost}, (source.path, *others))
    how = style(target, source.form.separator, source.form.comma)
    wanted = Wanted(units or found.system, tuple(cases), tuple(bolts))
    _refuse_unknown(found, wanted)
    job = Job(prepare(found), source.form, wanted, how, Loads.of(found, loads))
    run = _Run(job, source, target, lost)
    return run.all(resume, executor, ahead, progress, chunk_size)


def _beside(table: Path, out: Path | None) -> Path:
    """Where refused rows go: beside the result, or in the working directory under the table's name."""
    return out.with_name(f"{out.stem}.refused.csv") if out else Path(f"{table.stem}.refused.csv")


def _refuse_unknown(joint: Joint, wanted: Wanted) -> None:
    for bolt in wanted.bolts:
        if bolt not in joint.pattern.names:
            names = ", ".join(joint.pattern.names[:8])
            raise Problems(
                [InputError("unknown-name", "--bolt", f'"{bolt}"', f"a bolt: {names}", "correct the name", joint.file)]
            )


class _Run:
    """One run over a table."""

    def __init__(self, job: Job, table: Table, out: Path | None, refused: Path) -> None:
        self.job, self.table, self.out, self.refused = job, table, out, refused
        self.summary = Summary(job.ready.joint.pattern.names)
        self.writer = Output(out, job.how) if out else None
        self.lost = Output(refused, Style("csv"))
        self.checkpoint = Checkpoint(out) if out else None
        self.seen = (
            Output(out.with_name(f"{out.name}.seen"), Style("csv")) if out else None
        )  # marks of the cases so far
        self.marks = Marks()
        self.gathering = False

    def all(
        self, resume: bool, executor: Executor | None, ahead: int, progress: Progress | None, size: int
    ) -> TableResult:
        start = self._resumed() if resume else (0, 0)
        if not resume:
            self._begin()
        try:
            try:
                self._work(start, executor, ahead, progress, size)
            except Scattered:
                self._begin(gathering=True)
                self._work((0, 0), executor, ahead, progress, size)
        except KeyboardInterrupt:
            raise Interrupted(self._kept()) from None
        return self._finished()

    def _begin(self, gathering: bool = False) -> None:
        self.summary, self.marks = Summary(self.summary.bolts), Marks()
        self.gathering = gathering
        if gathering or self.table.parquet:
            self.table.read_whole()
        self.lost.begin()
        if self.checkpoint:
            self.checkpoint.remove()
        for file in (self.writer, self.seen):
            if file:
                file.begin()

    def _work(
        self, start: tuple[int, int], executor: Executor | None, ahead: int, progress: Progress | None, size: int
    ) -> None:
        chunks = (
            (c for c in gathered(self.table) if c.until > start[0])
            if self.gathering
            else self.table.chunks(*start, size)
        )
        for done in in_order(self.job, chunks, executor, ahead):
            if not self.gathering:
                if self.marks.has_any(done.marks):
                    raise Scattered
                self.marks.add(done.marks)
            self._keep(done)
            if progress:
                done_rows = self.summary.rows, self.table.rows
                progress(*(done_rows if self.gathering else (min(done.until, self.table.total), self.table.total)))

    def _keep(self, done: Done) -> None:
        """Write one chunk and remember how far the run has come."""
        if self.writer:
            if self.job.how.kind == "csv" and not self.writer.size:
                self.writer.add(header(self.job))
            self.writer.add(done.data)
        if done.refused.height:
            if not self.lost.size:
                self.lost.add(",".join(REFUSED).encode() + b"\n")
            self.lost.add(encoded(done.refused, Style("csv")))
        self.summary.add(done.summary)
        if self.checkpoint and self.writer and self.seen:
            self.seen.add(done.marks.tobytes())
            self.checkpoint.save(
                {
                    "input": self.job.ready.joint.digest,
                    "asked": self._asked(),
                    "table": self.table.digest,
                    "size": self.table.size,
                    "until": done.until,
                    "line": done.line,
                    "gathering": self.gathering,
                    "out": self.writer.size,
                    "refused": self.lost.size,
                    "seen": self.seen.size,
                    "summary": self.summary.as_dict(),
                }
            )

    def _asked(self) -> list[object]:
        """What else the result depends on."""
        wanted = self.job.wanted
        loads = None if self.job.loads is None else self.job.loads.digest
        return [wanted.system.name, list(wanted.cases), list(wanted.bolts), loads]

    def _resumed(self) -> tuple[int, int]:
        """Where an interrupted run has to go on: bytes or rows, and the line."""
        if not (self.checkpoint and self.writer and self.seen):
            remedy = "name the file that the run wrote to"
            raise Problems(
                [InputError("resume-without-out", "--resume", "no --out", "the result to go on with", remedy)]
            )
        state = self.checkpoint.load()
        whole = self.table.parquet or state["gathering"]
        same = {
            "the joint file": state["input"] == self.job.ready.joint.digest,
            "the table": state["size"] == self.table.size
            and (self.table.read_whole() if whole else self.table.read_before(state["until"])) == state["table"],
            "what was asked for": state["asked"] == self._asked(),
        }
        changed = [name for name, is_same in same.items() if not is_same]
        if changed:
            expected = "everything as in the run that was interrupted"
            remedy = "leave out --resume to begin anew"
            raise Problems(
                [InputError("resume-changed", "--resume", f"{' and '.join(changed)} changed", expected, remedy)]
            )
        self.gathering = state["gathering"]
        self.summary = Summary.from_dict(state["summary"])
        self.writer.begin(state["out"])
        self.lost.begin(state["refused"])
        self.seen.begin(state["seen"])
        self.marks.add(np.fromfile(self.seen.partial, dtype=np.uint64))
        return state["until"], state["line"]

    def _kept(self) -> str:
        if self.writer and self.writer.size and self.summary.cases:
            return f"{self.summary.cases} cases are in {self.writer.partial}; go on with --resume"
        return "nothing was written"

    def _finished(self) -> TableResult:
        joint, summary = self.job.ready.joint, self.summary
        if self.writer:
            self.writer.finish()
        kept = self.lost.size > 0
        if kept:
            self.lost.finish()
        else:
            self.lost.discard()
            if is_refused(self.refused):  # of an earlier run
                self.refused.unlink()
        if self.checkpoint and self.seen:
            self.seen.discard()
            self.checkpoint.remove()
        grown = self.table.grown
        warnings = (
            *joint.warnings,
            *hints(
                self.job.ready, self.table.form, summary, grown, self.job.loads is not None and self.job.loads.asked
            ),
        )
        code = NOT_SOLVED if grown and summary.code == 0 else summary.code
        assumptions = (*joint.assumptions, *self.job.ready.assembly.assumptions, *self.table.form.assumptions)
        return TableResult(
            self.job.ready, self.table.form, summary, assumptions, warnings, self.out, self.refused if kept else None,
            self.table.digest, code,
        )  # fmt: skip
