"""One chunk of a table worked from its bytes to the bytes of its result, here or in another process."""

from __future__ import annotations

from collections import deque
from collections.abc import Iterator
from concurrent.futures import Executor, Future
from pathlib import Path

import numpy as np
import polars as pl

from slip.base.records import record
from slip.cases.balance import Loads, imbalance
from slip.cases.form import Form
from slip.cases.judge import Prepared, judge
from slip.cases.parse import EXTRA, LINE
from slip.cases.result import Wanted, result
from slip.cases.rows import REFUSED, read_rows
from slip.cases.stream import Chunk
from slip.cases.summary import Summary, summed
from slip.cases.write import Style, encoded


@record(eq=False)
class Job:
    """What every chunk is worked with; goes to other processes and machines as it is."""

    ready: Prepared
    form: Form
    wanted: Wanted
    how: Style
    loads: Loads | None


@record(eq=False)
class Done:
    """A chunk that has been worked: its part of the result, the rows refused, its summary, marks of its cases, how far it reaches."""

    data: bytes
    refused: pl.DataFrame
    summary: Summary
    marks: np.ndarray
    line: int
    until: int


def work(job: Job, chunk: Chunk) -> Done:
    """One chunk from its bytes to the bytes of its result. Raises Scattered where cases do not stand together."""
    joint, form = job.ready.joint, job.form
    frame, broken = chunk.rows(form)
    found = read_rows(joint, form, frame, broken)
    judged = judge(job.ready, found.block, form.bolts)
    data = b""
    if job.how.kind:
        table = result(joint, form, frame, found.block, judged, job.wanted)
        data = encoded(table, job.how)
    summary = summed(joint, form, found, judged, job.wanted.cases)
    if job.loads is not None:
        summary.balance, summary.balanced = imbalance(joint, form, found.block, job.loads)
    marks = found.block.names.hash().to_numpy()
    breaks = chunk.data.count(b"\n") if isinstance(chunk.data, bytes) else 0
    return Done(data, found.refused, summary, marks, chunk.line + breaks, chunk.until)


def header(job: Job) -> bytes:
    """The header of a CSV of results, from a chunk without cases."""
    empty = pl.DataFrame(schema={str(i): pl.String for i in range(job.form.width)} | {EXTRA: pl.String, LINE: pl.Int64})
    found = read_rows(job.ready.joint, job.form, empty, [])
    table = result(
        job.ready.joint, job.form, empty, found.block, judge(job.ready, found.block, job.form.bolts), job.wanted
    )
    return encoded(table, job.how, header=True)


def in_order(job: Job, chunks: Iterator[Chunk], executor: Executor | None, ahead: int) -> Iterator[Done]:
    """Chunks worked here or by an executor, in their order; few are on the way at a time, so that memory stays bounded."""
    if executor is None:
        for chunk in chunks:
            yield work(job, chunk)
        return
    waiting: deque[Future[Done]] = deque()
    try:
        for chunk in chunks:
            waiting.append(executor.submit(work, job, chunk))
            if len(waiting) > ahead:
                yield waiting.popleft().result()
        while waiting:
            yield waiting.popleft().result()
    finally:
        for future in waiting:
            future.cancel()


def is_refused(path: Path) -> bool:
    """Whether a file is one of refused rows, which a new run may replace."""
    try:
        with open(path, encoding="utf-8") as file:
            return file.readline().rstrip("\n") == ",".join(REFUSED)
    except (OSError, ValueError):
        return False
