"""Local processes, started fresh; a dead one is replaced."""

from __future__ import annotations

import multiprocessing
import os
import signal
import threading
from collections import deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import Future, ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from contextlib import AbstractContextManager
from itertools import islice
from multiprocessing.connection import wait
from typing import Any

from verify.errors import UndecidedError
from verify.parallel.batch import batch_text, batches, do

MOST_LOSSES = 3
"""Workers that may die over one batch before it is given up."""

AHEAD = 4
"""Batches handed out ahead for each worker."""

Batch = tuple[Any, ...]
Answer = Future[list[Any]]


def in_processes(
    function: Callable[[Any], Any], items: Iterable[Any], workers: int, chunk: int
) -> Iterator[Any]:
    """Yield the results in order; a number of batches is handed out ahead of the one waited for.

    A pool breaks as a whole when one of its processes dies. Then the first unfinished batch is handed out alone, so
    that a second loss is certainly its own.
    """
    work = batches(items, chunk)
    waiting: deque[tuple[Batch, Answer | None]] = deque()
    losses = 0
    with _Pool(workers) as pool:
        while True:
            waiting.extend((batch, None) for batch in islice(work, AHEAD * workers - len(waiting)))
            if not waiting:
                return
            for i in range(1 if losses else len(waiting)):
                batch, answer = waiting[i]
                if answer is None:
                    waiting[i] = batch, pool.submit(function, batch)
            try:
                results = _result(waiting[0][1])
            except BrokenProcessPool:
                losses += 1
                if losses >= MOST_LOSSES:
                    what = batch_text(waiting[0][0])
                    raise UndecidedError(f"{losses} worker processes died over one piece of work: {what}") from None
                pool.renew()
                waiting = deque((batch, answer if _kept(answer) else None) for batch, answer in waiting)
                continue
            losses = 0
            waiting.popleft()
            yield from results


def _result(answer: Answer | None) -> list[Any]:
    return answer.result() if answer is not None else []


def _kept(answer: Answer | None) -> bool:
    """Whether a batch was finished before its pool broke."""
    return answer is not None and answer.done() and not isinstance(answer.exception(), BrokenProcessPool)


class _Pool(AbstractContextManager["_Pool"]):
    """A pool of fresh processes that can be replaced by another one."""

    def __init__(self, workers: int) -> None:
        self.workers = workers
        self.pool = self._new()

    def _new(self) -> ProcessPoolExecutor:
        fresh = multiprocessing.get_context("spawn")  # a fork would copy a progress display's threads
        return ProcessPoolExecutor(self.workers, fresh, initializer=_begin)

    def renew(self) -> None:
        """Replace a broken pool."""
        self.pool.shutdown(wait=True, cancel_futures=True)
        self.pool = self._new()

    def submit(self, function: Callable[[Any], Any], batch: Batch) -> Answer:
        """Hand out a batch; on a pool that is broken already the answer says so."""
        try:
            return self.pool.submit(do, function, batch)
        except BrokenProcessPool as error:
            failed: Answer = Future()
            failed.set_exception(error)
            return failed

    def __exit__(self, *_: object) -> None:
        self.pool.shutdown(wait=True, cancel_futures=True)


def _begin() -> None:
    """Let the keyboard end a worker without a word, and end it when its parent is gone."""
    signal.signal(signal.SIGINT, signal.SIG_DFL)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_leave_with, args=(parent.sentinel,), daemon=True).start()


def _leave_with(sentinel: int) -> None:
    wait([sentinel])
    os._exit(1)
