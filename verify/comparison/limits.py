"""Calls that may never come back: run them in a process that can be killed, under a time and a memory limit.

A C loop ignores alarms and a library may ask for all the memory there is, so a limit inside the same process
is no limit. One forked child does all the calls in turn and reports each result; only when it dies or is
killed is another one forked for the calls that are left.
"""

from __future__ import annotations

import faulthandler
import os
import resource
import signal
import sys
import time
import warnings
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from multiprocessing.connection import Connection, Pipe
from typing import Any, NoReturn

from verify.errors import SidecheckError

SECONDS = 5.0
"""Time one call may take."""
MEMORY = 1 << 30
"""Bytes that the calls may take beyond what the process holds already."""


class NotAttempted(SidecheckError):  # noqa: N818 (an outcome, not a mistake)
    """A route does not try this problem; the text is the reason."""


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
    """Run each call in a child process, for at most so many seconds and bytes, and say what became of it.

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
    if not hasattr(os, "fork"):  # the calls are not run at all rather than run without a limit
        return tuple(Outcome(not_attempted="this system cannot fork a process that can be killed") for _ in calls)
    outcomes: list[Outcome] = []
    while len(outcomes) < len(calls):
        outcomes += _one_child(calls[len(outcomes) :], seconds, memory)
    return tuple(outcomes)


def _one_child(calls: Sequence[Callable[[], Any]], seconds: float, memory: int) -> list[Outcome]:
    """Fork a child for these calls; return the outcomes up to the first call that had to be stopped."""
    here, there = Pipe(duplex=False)
    with warnings.catch_warnings():  # a fork beside threads is safe here: the child only computes and leaves
        warnings.simplefilter("ignore", DeprecationWarning)
        child = os.fork()
    if child == 0:
        here.close()
        _child(calls, seconds, memory, there)
    there.close()
    try:
        return _collect(child, here, len(calls), seconds)
    finally:
        here.close()
        _stop(child)


def _collect(child: int, pipe: Connection, count: int, seconds: float) -> list[Outcome]:
    outcomes: list[Outcome] = []
    for _ in range(count):
        begun = time.monotonic()
        if not pipe.poll(seconds):
            return [*outcomes, Outcome(failure=f"stopped after {seconds:g} s", seconds=seconds)]
        try:
            outcomes.append(pipe.recv())
        except EOFError:
            death = f"the process died ({_end_of(child)})"
            return [*outcomes, Outcome(failure=death, seconds=time.monotonic() - begun)]
    return outcomes


def _end_of(child: int) -> str:
    """Wait for a child that closed its pipe and say how it ended."""
    _, status = os.waitpid(child, 0)
    code = os.waitstatus_to_exitcode(status)
    return f"signal {signal.Signals(-code).name}" if code < 0 else f"exit status {code}"


def _stop(child: int) -> None:
    try:
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
    except (ProcessLookupError, ChildProcessError):
        pass  # it has been waited for already


def _child(calls: Sequence[Callable[[], Any]], seconds: float, memory: int, pipe: Connection) -> NoReturn:
    """Do the calls, send each outcome, and leave without running anything of the parent's clean-up."""
    status = 1
    try:
        _be_quiet()
        _limit(seconds * len(calls), memory)
        for call in calls:
            pipe.send(_outcome(call))
        status = 0
    finally:
        os._exit(status)


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


def _limit(seconds: float, memory: int) -> None:
    """Set the kernel's own limits, so that a child whose parent is gone ends as well."""
    with open("/proc/self/statm", encoding="ascii") as pages:
        held = int(pages.read().split()[0]) * resource.getpagesize()
    _, hard = resource.getrlimit(resource.RLIMIT_AS)
    wanted = held + memory
    resource.setrlimit(resource.RLIMIT_AS, (wanted if hard == resource.RLIM_INFINITY else min(wanted, hard), hard))
    _, hard = resource.getrlimit(resource.RLIMIT_CPU)
    used = int(time.process_time() + seconds) + 2
    resource.setrlimit(resource.RLIMIT_CPU, (used if hard == resource.RLIM_INFINITY else min(used, hard), hard))
