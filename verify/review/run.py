"""Review a table: rows in, records out, in order, with a journal, and perhaps in several processes."""

from __future__ import annotations

import hashlib
import os
import time
from collections import deque
from collections.abc import Callable, Iterator, Mapping
from concurrent.futures import Future, ProcessPoolExecutor
from dataclasses import dataclass
from itertools import islice
from multiprocessing import get_context
from pathlib import Path
from threading import Thread

from verify.problem.casefile import Case
from verify.review.cells import Cell, Row, Table
from verify.review.journal import Journal
from verify.review.mapping import ColumnMap
from verify.review.record import Record
from verify.review.reviewer import Reviewer

BATCH = 100
"""Rows that are handed out, and written to the journal, at a time."""

Task = tuple[int, dict[str, Cell]]
Progress = Callable[[int], None]


@dataclass(frozen=True)
class Job:
    """What a table is reviewed for and how.

    Attributes
    ----------
    case : Case
        The case file.
    columns : ColumnMap
        What the columns hold.
    folder : Path
        Where case files named in a column lie.
    digits : int
        Significant digits to prove.
    budget : float
        Seconds for each symbolic step.
    workers : int
        Processes; 1 for this one alone.
    """

    case: Case
    columns: ColumnMap
    folder: Path
    digits: int
    budget: float = 10.0
    workers: int = 1

    def reviewer(self) -> Reviewer:
        """Return a reviewer for this job."""
        return Reviewer(self.case, digits=self.digits, budget=self.budget, folder=self.folder)


def fingerprint(job: Job, table: Path, version: str) -> str:
    """Return a digest of everything that the records depend on."""
    with open(table, "rb") as stream:
        digest = hashlib.file_digest(stream, "sha256").hexdigest()
    parts = (
        digest,
        job.case.sha256,
        sorted(job.columns.columns.items()),
        sorted(job.columns.style.items()),
        job.digits,
        version,
    )
    return hashlib.sha256(repr(parts).encode()).hexdigest()


def run(job: Job, table: Table, journal: Journal, progress: Progress | None = None) -> None:
    """Review every row that the journal does not hold yet.

    Parameters
    ----------
    job : Job
        How.
    table : Table
        The rows.
    journal : Journal
        Where the records go.
    progress : callable, optional
        Called with the number of rows done so far.
    """
    done = journal.done
    tasks = (task_of(job.columns, row) for row in islice(table.rows(), done, None))
    try:
        for records in _reviewed(job, tasks):
            journal.add(records)
            done += len(records)
            if progress is not None:
                progress(done)
    finally:
        journal.close()


def task_of(columns: ColumnMap, row: Row) -> Task:
    """Return the number of a row and its cells by key."""
    return row.number, columns.fields(row)


def _reviewed(job: Job, tasks: Iterator[Task]) -> Iterator[list[Record]]:
    if job.workers == 1:
        reviewer = job.reviewer()
        for batch in _batches(tasks):
            yield [reviewer.row(number, fields, job.columns.style) for number, fields in batch]
        return
    spawn = get_context("spawn")  # a fork would inherit threads and the lock of the journal
    with ProcessPoolExecutor(job.workers, spawn, initializer=_start, initargs=(job,)) as pool:
        waiting: deque[Future[list[Record]]] = deque()
        for batch in _batches(tasks):
            waiting.append(pool.submit(_work, batch, job.columns.style))
            if len(waiting) > 2 * job.workers:
                yield waiting.popleft().result()
        while waiting:
            yield waiting.popleft().result()


def _batches(tasks: Iterator[Task]) -> Iterator[tuple[Task, ...]]:
    while batch := tuple(islice(tasks, BATCH)):
        yield batch


_reviewer: Reviewer | None = None


def _start(job: Job) -> None:
    """Make the reviewer of a worker process."""
    global _reviewer
    Thread(target=_leave_with, args=(os.getppid(),), daemon=True).start()
    _reviewer = job.reviewer()


def _leave_with(parent: int) -> None:
    """End this worker when the process that started it is gone, so that a killed run leaves nothing behind."""
    while os.getppid() == parent:
        time.sleep(1)
    os._exit(1)


def _work(batch: tuple[Task, ...], style: Mapping[str, str]) -> list[Record]:
    if _reviewer is None:
        raise RuntimeError("a worker without a reviewer")
    return [_reviewer.row(number, fields, style) for number, fields in batch]
