"""Calls that may never come back: run them in a process that can be killed, under a time and a memory limit.

One forked child does all the calls in turn and reports each result; only when it dies or is killed is another one
forked for the calls that are left.
"""

from __future__ import annotations

import faulthandler
import os
import signal
import sys
import time
import warnings
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from multiprocessing.connection import Connection
from typing import Any

from verify.errors import NotAttempted, SidecheckError
from verify.killable.child import OVER_TIME, ForkedChild, can_fork, limit_memory, limit_processor_time

SECONDS = 5.0
"""Processor time one call may take, so that a busy machine changes no outcome."""
PATIENCE = 6
"""Times as long as that a call may take by the clock: one that computes nothing ends, too."""
MEMORY = 1 << 30
"""Bytes that the calls may take beyond what the process holds already."""


@dataclass(frozen=True)
class Outcome:
    """What became of one call: a value, or a failure, or a reason why it was not attempted.

    Attributes
    ----------
    value : Any
        What the call returned; None when it failed or was not attempted.
    failure : str
        Why there is no value ("" when there is one): an exception's text, "stopped after 5 s", "died (signal
        9)".
    not_attempted : str
        The reason of a call that declined.
    seconds : float
        How long it took.
    """

    value: Any = None
    failure: str = ""
    not_attempted: str = ""
    seconds: float = 0.0


def run_limited(
    calls: Sequence[Callable[[], Any]], seconds: float = SECONDS, memory: int = MEMORY
) -> tuple[Outcome, ...]:
    """Run each call in a child process, for at most so many seconds of its processor and bytes; say what became of it.

    Parameters
    ----------
    calls : sequence of callables
        Without arguments; what they return has to be picklable (the calls themselves need not be).
    seconds : float
        Time limit for each call.
    memory : int
        Bytes of address space beyond what this process holds when it forks.

    Returns
    -------
    tuple of Outcome
        One for each call, in order. No exception of a call comes through.

    Examples
    --------
    >>> good, bad = run_limited([lambda: 6 * 7, lambda: 1 / 0])
    >>> good.value, bad.failure
    (42, 'ZeroDivisionError: division by zero')
    """
    if not can_fork():  # the calls are not run at all rather than run without a limit
        return tuple(Outcome(not_attempted="this system cannot fork a process that can be killed") for _ in calls)
    outcomes: list[Outcome] = []
    while len(outcomes) < len(calls):
        outcomes += _one_child(calls[len(outcomes) :], seconds, memory)
    return tuple(outcomes)


def _one_child(calls: Sequence[Callable[[], Any]], seconds: float, memory: int) -> list[Outcome]:
    """Fork a child for these calls; return the outcomes up to the first call that had to be stopped."""

    def life(connection: Connection) -> None:
        _be_quiet()
        limit_memory(memory)
        for call in calls:
            limit_processor_time(seconds)
            connection.send(_outcome(call))

    child = ForkedChild(life)
    try:
        return _collect(child, len(calls), seconds)
    finally:
        child.kill()


def _collect(child: ForkedChild, count: int, seconds: float) -> list[Outcome]:
    outcomes: list[Outcome] = []
    for _ in range(count):
        begun = time.monotonic()
        stopped = Outcome(failure=f"stopped after {seconds:g} s", seconds=seconds)
        if not child.connection.poll(PATIENCE * seconds):
            return [*outcomes, stopped]
        try:
            outcomes.append(child.connection.recv())
        except (EOFError, ConnectionResetError):
            death = child.how_it_ended()
            died = Outcome(failure=f"the process died ({death})", seconds=time.monotonic() - begun)
            return [*outcomes, stopped if death == OVER_TIME else died]
    return outcomes


def _outcome(call: Callable[[], Any]) -> Outcome:
    begun = time.monotonic()
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            value = call()
    except NotAttempted as reason:
        return Outcome(not_attempted=str(reason), seconds=time.monotonic() - begun)
    except SidecheckError as error:
        return Outcome(failure=str(error)[:300], seconds=time.monotonic() - begun)
    except Exception as error:  # any failure of a library is an outcome to report
        name = "" if type(error) is ArithmeticError else f"{type(error).__name__}: "  # the routes' own has no name
        text = f"{name}{error}".replace("\n", " ")[:300]
        return Outcome(failure=text, seconds=time.monotonic() - begun)
    return Outcome(value=value, seconds=time.monotonic() - begun)


def _be_quiet() -> None:
    """Let compiled code print into nowhere: stdout belongs to the parent."""
    faulthandler.disable()
    nowhere = os.open(os.devnull, os.O_WRONLY)
    os.dup2(nowhere, 1)
    os.dup2(nowhere, 2)
    sys.stdout = sys.stderr = open(os.devnull, "w", encoding="utf-8")  # noqa: SIM115 (the process ends with it)
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGALRM):
        signal.signal(number, signal.SIG_DFL)
