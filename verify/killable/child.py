"""A forked child that can be killed, and the limits that the system can set on it.

A C loop ignores alarms and a library may ask for all the memory there is, so a limit inside the same process is no
limit. Where a system lacks a limit (no ``resource`` module, no ``/proc``), that limit is not set; the time limit of
whoever waits for the child always holds.
"""

from __future__ import annotations

import contextlib
import math
import os
import signal
import time
import warnings
from collections.abc import Callable
from multiprocessing import Pipe
from multiprocessing.connection import Connection

try:
    import resource
except ImportError:  # not on every system
    resource = None  # type: ignore[assignment]

OVER_TIME = "signal SIGXCPU"
"""How a child ended that computed for longer than it may."""

HELD = "/proc/self/statm"
"""Where Linux says how many pages of memory a process holds."""


def can_fork() -> bool:
    """Whether this system can fork a process."""
    return hasattr(os, "fork")


class ForkedChild:
    """A child made by ``os.fork`` (allowed also inside daemonic processes of a cluster).

    Parameters
    ----------
    life : callable
        What the child does with its end of the pipe; it then ends without any of the parent's clean-up.

    Attributes
    ----------
    connection : Connection
        The parent's end of the pipe.
    pid : int
        The child's number.
    """

    def __init__(self, life: Callable[[Connection], None]) -> None:
        self.connection, inner = Pipe()
        self._over = False
        with warnings.catch_warnings():  # a fork beside threads is safe here: the child only computes and leaves
            warnings.simplefilter("ignore", DeprecationWarning)
            self.pid = os.fork()
        if self.pid == 0:
            status = 1
            try:
                self.connection.close()
                life(inner)
                status = 0
            finally:
                os._exit(status)
        inner.close()

    def how_it_ended(self) -> str:
        """Wait for a child that closed its pipe and say how it ended."""
        _, status = os.waitpid(self.pid, 0)
        self._over = True
        code = os.waitstatus_to_exitcode(status)
        return f"signal {signal.Signals(-code).name}" if code < 0 else f"exit status {code}"

    def kill(self) -> None:
        """End the child, if it is still there."""
        self.connection.close()
        if self._over:  # its number may be another process's by now
            return
        self._over = True
        with contextlib.suppress(ProcessLookupError):
            os.kill(self.pid, signal.SIGKILL)
        with contextlib.suppress(ChildProcessError):
            os.waitpid(self.pid, 0)


def limit_memory(extra: int) -> None:
    """Let this process take at most so many bytes more than it has, where the system can limit it."""
    if resource is None:
        return
    try:
        with open(HELD, encoding="ascii") as pages:
            held = int(pages.read().split()[0]) * resource.getpagesize()
    except OSError:
        return
    _lower(resource.RLIMIT_AS, held + extra)


def limit_processor_time(seconds: float) -> None:
    """Let this process compute for so many seconds more, in whole ones of its life; then it dies of OVER_TIME."""
    if resource is not None:
        _lower(resource.RLIMIT_CPU, math.ceil(time.process_time() + seconds))


def _lower(which: int, wanted: int) -> None:
    """Set a soft limit, never above the hard one; a system that refuses is left as it is."""
    _, hard = resource.getrlimit(which)
    with contextlib.suppress(ValueError, OSError):
        resource.setrlimit(which, (wanted if hard == resource.RLIM_INFINITY else min(wanted, hard), hard))
