"""Local processes, started fresh, each on one batch at a time; a dead one is replaced and its batch done again."""

from __future__ import annotations

from collections import Counter, deque
from collections.abc import Callable, Iterable, Iterator
from contextlib import closing
from multiprocessing.connection import wait
from typing import Any

from verify.errors import UndecidedError
from verify.parallel.batch import batch_text, batches
from verify.parallel.worker import Answer, Task, Worker

MOST_LOSSES = 3
"""Workers that may die over one batch before it is given up."""

AHEAD = 32
"""Batches handed out ahead of the one waited for, for each worker: a slow one leaves the others with work."""

SECONDS_A_LOOK = 0.5
"""A dead worker may leave a child that keeps its pipe open, so the processes themselves are looked at, too."""


def in_processes(function: Callable[[Any], Any], items: Iterable[Any], workers: int, chunk: int) -> Iterator[Any]:
    """Yield the results in order; a bounded number of batches is handed out ahead of the one waited for."""
    with closing(_Crew(function, batches(items, chunk), workers)) as crew:
        answers: dict[int, Answer] = {}
        wanted = 0
        while True:
            crew.hand_out(wanted + AHEAD * workers)
            if wanted in answers:
                yield from answers.pop(wanted).results()
                wanted += 1
            elif crew.busy:
                answers |= crew.wait()
            else:
                return


class _Crew:
    """The workers of a run, and the work that is left."""

    def __init__(self, function: Callable[[Any], Any], work: Iterator[tuple[Any, ...]], most: int) -> None:
        self.function, self.work, self.most = function, work, most
        self.idle: list[Worker] = []
        self.busy: list[Worker] = []
        self.taken = 0
        self.lost: deque[Task] = deque()
        self.losses: Counter[int] = Counter()

    def hand_out(self, end: int) -> None:
        """Give every worker something to do, as long as there is work before this number."""
        chosen = []
        while (self.idle or len(self.busy) < self.most) and (task := self._next(end)) is not None:
            worker = self.idle.pop() if self.idle else Worker(self.function)
            worker.task = task
            self.busy.append(worker)
            chosen.append(worker)
        for worker in chosen:  # all are starting up by now: a long batch keeps none of them waiting
            worker.begin()

    def _next(self, end: int) -> Task | None:
        """Return lost work first."""
        if self.lost:
            return self.lost.popleft()
        batch = next(self.work, None) if self.taken < end else None
        if batch is None:
            return None
        self.taken += 1
        return self.taken - 1, batch

    def wait(self) -> dict[int, Answer]:
        """Wait for answers; the work of a worker that died is put back.

        Raises
        ------
        UndecidedError
            When several workers died over the same batch.
        """
        ready = wait([worker.pipe for worker in self.busy], SECONDS_A_LOOK)
        answers = {}
        for worker in [worker for worker in self.busy if worker.pipe in ready or not worker.alive]:
            answer = worker.answer()
            self.busy.remove(worker)
            if answer is None:
                self._count_loss(worker)
            else:
                self.idle.append(worker)
                answers[worker.task[0]] = answer
        return answers

    def _count_loss(self, worker: Worker) -> None:
        worker.stop()
        number, batch = worker.task
        self.losses[number] += 1
        if self.losses[number] >= MOST_LOSSES:
            what = batch_text(batch)
            raise UndecidedError(f"{MOST_LOSSES} worker processes died over one piece of work: {what}")
        self.lost.append(worker.task)

    def close(self) -> None:
        """End all workers, whatever they are doing."""
        for worker in (*self.idle, *self.busy):
            worker.stop()
