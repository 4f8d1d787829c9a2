"""Run symbolic steps in a child process that is really stopped when its time or memory is spent.

Computer algebra has calls that never return, so a step runs where it can be killed. One child serves all steps of a
derivation and is started anew only after a kill.
"""

from __future__ import annotations

import multiprocessing
import signal
import sys
import time
import traceback
from collections.abc import Callable
from pathlib import Path
from types import TracebackType
from typing import Any, Self

from verify.errors import SidecheckError, UndecidedError
from verify.killable.child import ForkedChild, can_fork, limit_memory

MEMORY = 2 * 2**30
"""Bytes that a child may take beyond what it starts with."""

Connection = Any

PACKAGE = Path(__file__).resolve().parent.parent


class Worker:
    """One killable child that evaluates functions of picklable arguments.

    Parameters
    ----------
    seconds : float
        Time budget of each call.
    memory : int
        Bytes that the child may take beyond what it starts with (where the system can limit it).
    method : str
        ``"fork"`` (the child starts with everything imported) or ``"spawn"``; the default is fork where
        there is one.

    Examples
    --------
    >>> with Worker(5.0) as worker:
    ...     worker.run(pow, 2, 10)
    1024
    """

    def __init__(self, seconds: float, memory: int = MEMORY, method: str = "") -> None:
        self.seconds, self.memory = seconds, memory
        self.method = method or ("fork" if can_fork() else "spawn")
        self._child: ForkedChild | _Spawned | None = None

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.stop()

    def stop(self) -> None:
        """Kill the child, if there is one."""
        if self._child is not None:
            self._child.kill()
            self._child = None

    def run(self, function: Callable[..., Any], *arguments: Any) -> Any:
        """Return ``function(*arguments)``, computed in the child.

        Raises
        ------
        UndecidedError
            When the time or the memory is spent, when the child dies, or when the algebra system gives up
            with an exception of its own: the reason says which.
        SidecheckError
            What the function itself raised on purpose.
        """
        if self._child is None:
            self._child = self._forked() if self.method == "fork" else _Spawned(self.memory)
        started = time.monotonic()
        try:
            self._child.connection.send((function, arguments))
            if not self._child.connection.poll(self.seconds):
                self.stop()
                raise UndecidedError(f"stopped after its budget of {self.seconds:g} s")
            kind, value = self._child.connection.recv()
        except (EOFError, BrokenPipeError, ConnectionResetError) as error:
            self.stop()
            spent = time.monotonic() - started
            raise UndecidedError(f"the computation ended abnormally after {spent:.1f} s") from error
        except BaseException:
            self.stop()
            raise
        if kind == "value":
            return value
        if kind == "raised":
            raise value
        raise UndecidedError(value)

    def _forked(self) -> ForkedChild:
        sys.stdout.flush()  # else what stands in its buffer might be printed twice
        sys.stderr.flush()
        return ForkedChild(lambda connection: serve(connection, self.memory))


class _Spawned:
    """A child started from nothing, where the system cannot fork."""

    def __init__(self, memory: int) -> None:
        context = multiprocessing.get_context("spawn")
        self.connection, inner = context.Pipe()
        self._process = context.Process(target=serve, args=(inner, memory), daemon=True)
        self._process.start()
        inner.close()

    def kill(self) -> None:
        self.connection.close()
        self._process.kill()
        self._process.join()


def serve(connection: Connection, memory: int) -> None:
    """Answer calls until the other side hangs up (the child's whole life)."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    limit_memory(memory)
    while True:
        try:
            function, arguments = connection.recv()
        except (EOFError, OSError):
            return
        connection.send(_answer(function, arguments))


def _answer(function: Callable[..., Any], arguments: tuple[Any, ...]) -> tuple[str, Any]:
    try:
        return "value", function(*arguments)
    except SidecheckError as error:
        return "raised", error
    except MemoryError:
        return "gave up", "stopped by its memory limit"
    except Exception as error:
        if not _is_surrender(error):
            return "raised", error
        words = str(error).splitlines()
        return (
            "gave up",
            f"the algebra system gave up: {type(error).__name__}: {words[0][:200] if words else ''}",
        )


def _is_surrender(error: Exception) -> bool:
    """Whether a library gave up, rather than that this package made a mistake."""
    if isinstance(error, (ArithmeticError, NotImplementedError, RecursionError)):
        return True
    frames = traceback.extract_tb(error.__traceback__)
    return not frames or PACKAGE not in Path(frames[-1].filename).resolve().parents
