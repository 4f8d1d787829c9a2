"""A bound on the work that reading one text may cause, for what no bound on sizes foresees.

Building an expression or deciding a sign calls SymPy, which may loop for minutes on absurd numbers.
Inside ``bounded_work`` every 64th function call looks at the thread's own CPU clock, and the block is
left when the time is spent. One long call into C is not interrupted; the guards on sizes keep those
short. Under a profiler written in C (cProfile) there is no bound.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

from verify.errors import SidecheckError

SECONDS = 1.5
"""CPU time for one text or one comparison."""


class _Spent(BaseException):
    """Time is up; no ``except Exception`` inside SymPy can swallow it."""


@contextmanager
def bounded_work(refusal: SidecheckError, seconds: float = SECONDS) -> Iterator[None]:
    """Run a block of symbolic work; raise ``refusal`` when its time is spent or when SymPy itself gives up.

    Blocks may be nested: the inner block then stands under its own bound only.

    Examples
    --------
    >>> from verify.errors import InputError
    >>> with bounded_work(InputError("too complicated"), seconds=0.01):
    ...     while True:
    ...         abs(1)
    Traceback (most recent call last):
        ...
    verify.errors.InputError: too complicated
    """
    deadline = time.thread_time() + seconds
    before = sys.getprofile()
    calls = 0

    def look(frame: Any, event: str, argument: Any) -> None:
        nonlocal calls
        calls += 1
        if not calls % 64 and time.thread_time() > deadline:
            raise _Spent

    watched = before is None or callable(before)  # a profiler written in C could not be put back: it stays
    if watched:
        sys.setprofile(look)
    try:
        yield
    except SidecheckError:
        raise
    except _Spent:
        raise refusal from None
    except Exception as error:
        raise refusal from error
    finally:
        if watched:
            sys.setprofile(before)
