"""One worker process at the other end of a pipe."""

from __future__ import annotations

import multiprocessing
import os
import pickle
import signal
import threading
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from dataclasses import dataclass
from multiprocessing.connection import Connection, wait
from typing import Any

from verify.errors import InputError
from verify.parallel.batch import do

Task = tuple[int, tuple[Any, ...]]
"""A batch and its number."""


@dataclass(frozen=True)
class Answer:
    """What came of a batch: its results, or what was raised."""

    values: list[Any]
    error: Exception | None = None

    def results(self) -> list[Any]:
        """Return the results.

        Raises
        ------
        Exception
            What the work raised.
        """
        if self.error is not None:
            raise self.error
        return self.values


class Worker:
    """A fresh process that does one batch at a time.

    Parameters
    ----------
    function : callable
        What it does with each item.

    Raises
    ------
    InputError
        When the system starts no further process.
    """

    task: Task
    """The batch that it is on, or was on last."""

    def __init__(self, function: Callable[[Any], Any]) -> None:
        fresh = multiprocessing.get_context("spawn")  # a fork would copy a progress display's threads
        self.pipe, inner = fresh.Pipe()
        self.process = fresh.Process(target=_serve, args=(inner, function), daemon=hasattr(os, "fork"))
        try:
            with _interrupts_held():
                self.process.start()
        except OSError as error:
            right = "ask for fewer workers"
            raise InputError(f"no process can be started: {error.strerror}", right, key="workers") from None
        finally:
            inner.close()

    def begin(self) -> None:
        """Hand over the batch; a worker that is dead already is noticed later."""
        with suppress(OSError):
            self.pipe.send(self.task[1])

    def answer(self) -> Answer | None:
        """Return what came of the batch; None when the worker died over it."""
        try:
            answer = self.pipe.recv() if self.pipe.poll() else None
        except (EOFError, OSError):
            return None
        return answer if isinstance(answer, Answer) else None

    @property
    def alive(self) -> bool:
        """Whether the process lives."""
        return self.process.is_alive()

    def stop(self) -> None:
        """Kill the process, with the children that it has."""
        _kill_group(self.process.pid)
        self.process.kill()
        self.process.join()
        self.pipe.close()


def _serve(pipe: Connection, function: Callable[[Any], Any]) -> None:
    """Work until the other side hangs up: the whole life of a worker, in a process group of its own."""
    if hasattr(os, "setpgrp"):
        os.setpgrp()
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_leave_with, args=(parent.sentinel,), daemon=True).start()
    while True:
        try:
            pipe.send_bytes(_answer(function, pipe))
        except (EOFError, OSError):
            return


def _answer(function: Callable[[Any], Any], pipe: Connection) -> bytes:
    """Work on the next batch; what cannot travel back is an error of its own."""
    batch = pipe.recv()
    try:
        return pickle.dumps(Answer(do(function, batch)))
    except Exception as error:
        return _raised(error)


def _raised(error: Exception) -> bytes:
    """Pack an exception; one that would not survive the way is told in words."""
    try:
        packed = pickle.dumps(Answer([], error))
        pickle.loads(packed)
        return packed
    except Exception:
        return pickle.dumps(Answer([], RuntimeError(f"{type(error).__name__}: {error}")))


def _leave_with(sentinel: int) -> None:
    """End this process and its children when its parent is gone, however that ended."""
    wait([sentinel])
    _kill_group(os.getpid())
    os._exit(1)


def _kill_group(leader: int | None) -> None:
    if leader is not None and hasattr(os, "killpg"):
        with suppress(ProcessLookupError, PermissionError):
            os.killpg(leader, signal.SIGKILL)


@contextmanager
def _interrupts_held() -> Iterator[None]:
    """Start a process that never hears the keyboard: its parent does, and ends it."""
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    before = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)
