"""Review a table: rows in, records out, in order, with a journal, and perhaps in several processes."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass
from itertools import islice
from pathlib import Path
from uuid import uuid4

from verify.parallel import run_all
from verify.problem.casefile import Case
from verify.review.cells import Cell, Row, Table
from verify.review.journal import Journal
from verify.review.mapping import ColumnMap
from verify.review.record import Record
from verify.review.reviewer import Reviewer
from verify.review.setting import Cache

BATCH = 100
"""Rows that are handed out at a time."""

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
    scheduler : str or None
        Address of a running Dask scheduler, whose workers see the same case files.
    """

    case: Case
    columns: ColumnMap
    folder: Path
    digits: int
    budget: float = 10.0
    workers: int = 1
    scheduler: str | None = None

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
        The rows; they are read a bounded number ahead.
    journal : Journal
        Where the records go.
    progress : callable, optional
        Called with the number of rows done so far.
    """
    done = journal.done
    tasks = (task_of(job.columns, row) for row in islice(table.rows(), done, None))
    with journal:
        for record in run_all(RowReviewer(job), tasks, job.workers, job.scheduler, BATCH):
            journal.add([record])
            done += 1
            if progress is not None:
                progress(done)


def task_of(columns: ColumnMap, row: Row) -> Task:
    """Return the number of a row and its cells by key."""
    return row.number, columns.fields(row)


class RowReviewer:
    """Reviews the rows of one table, in whichever process; there it makes its reviewer once.

    Parameters
    ----------
    job : Job
        How.
    """

    def __init__(self, job: Job) -> None:
        self.job, self.token = job, uuid4().hex

    def __call__(self, task: Task) -> Record:
        """Return the record of a row; nothing is raised for one row."""
        number, fields = task
        return _reviewers.get(self.token, self.job.reviewer).row(number, fields, self.job.columns.style)


_reviewers: Cache[str, Reviewer] = Cache(4)
"""The reviewers of this process, by the run that they serve: a cluster's worker unpickles a job with every batch."""
