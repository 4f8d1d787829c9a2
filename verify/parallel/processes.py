"""Local processes, started fresh; the work of a dead one is done again."""

from __future__ import annotations

import os
import signal
import threading
import time
from collections import deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import Future
from contextlib import contextmanager, suppress
from dataclasses import dataclass
from itertools import islice
from multiprocessing import resource_tracker
from typing import Any

from loky import ProcessPoolExecutor
from loky.process_executor import TerminatedWorkerError

from verify.errors import InputError
from verify.parallel.batch import Lost, batches, do, given_up

MOST_LOSSES = 3
"""Workers that may die over one batch before it is given up."""

AHEAD = 32
"""Batches handed out ahead of the one waited for, for each worker: a slow one leaves the others with work."""

SECONDS_A_LOOK = 0.5
"""How often a worker looks whether its parent lives."""


def in_processes(
    function: Callable[[Any], Any], items: Iterable[Any], workers: int, chunk: int, lost: Lost | None
) -> Iterator[Any]:
    """Yield the results in order; a bounded number of batches is handed out ahead of the one waited for.

    A pool whose worker died does not say over which batch. So the batch waited for is then done alone, where a
    further death is its own, and the others are handed to a new pool.
    """
    work = batches(items, chunk)
    waiting: deque[_Task] = deque()
    pool = _pool(workers)
    try:
        while True:
            for batch in islice(work, AHEAD * workers - len(waiting)):
                waiting.append(_Task(batch, _begin(pool, function, batch)))
            if not waiting:
                return
            try:
                results = waiting[0].answer.result()
            except TerminatedWorkerError:
                pool.shutdown(kill_workers=True)
                results = _alone(function, waiting[0].batch, lost)
                pool = _pool(workers)
                for task in islice(waiting, 1, None):
                    if task.lost:
                        task.answer = _begin(pool, function, task.batch)
            waiting.popleft()
            yield from results
    finally:
        pool.shutdown(kill_workers=True)


@dataclass
class _Task:
    """A batch that was handed out."""

    batch: tuple[Any, ...]
    answer: Future[list[Any]]

    @property
    def lost(self) -> bool:
        """Whether a pool ended before this was done."""
        return not self.answer.done() or isinstance(self.answer.exception(), TerminatedWorkerError)


def _pool(workers: int) -> ProcessPoolExecutor:
    with _starting():
        return ProcessPoolExecutor(workers, initializer=_be_a_worker, initargs=(os.getpid(),))


def _begin(pool: ProcessPoolExecutor, function: Callable[[Any], Any], batch: tuple[Any, ...]) -> Future[list[Any]]:
    """Hand out a batch, which may start workers."""
    try:
        with _starting(), _interrupts_held():
            answer: Future[list[Any]] = pool.submit(do, function, batch)
            return answer
    except TerminatedWorkerError as error:
        answer = Future()
        answer.set_exception(error)
        return answer


@contextmanager
def _starting() -> Iterator[None]:
    """Complain where the system gives no process, no file or no lock for one."""
    try:
        yield
    except OSError as error:
        wrong = f"no process can be started: {error.strerror or error}"
        raise InputError(wrong, "ask for fewer workers", key="workers") from None


def _alone(function: Callable[[Any], Any], batch: tuple[Any, ...], lost: Lost | None) -> list[Any]:
    """Do a batch in a process of its own, again and again until it is given up."""
    for _ in range(MOST_LOSSES):
        pool = _pool(1)
        try:
            return _begin(pool, function, batch).result()
        except TerminatedWorkerError:
            continue
        finally:
            pool.shutdown(kill_workers=True)
    return given_up(batch, f"{MOST_LOSSES} worker processes", lost)


def _be_a_worker(parent: int) -> None:
    """Leave the keyboard to the parent, and never outlive it."""
    if hasattr(os, "setpgrp"):
        os.setpgrp()
    threading.Thread(target=_leave_with, args=(parent,), daemon=True).start()


def _leave_with(parent: int) -> None:
    """End this process and its children when its parent is gone, however that ended."""
    while os.getppid() == parent:
        time.sleep(SECONDS_A_LOOK)
    if hasattr(os, "killpg"):
        with suppress(ProcessLookupError, PermissionError):
            os.killpg(os.getpid(), signal.SIGKILL)
    os._exit(1)


@contextmanager
def _interrupts_held() -> Iterator[None]:
    """Start processes that never hear the keyboard: their parent does, and ends them."""
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    resource_tracker.ensure_running()  # whose start lets interrupts through again, so it comes before they are held
    before = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)
