"""One function over many items: the results are the same, and in the same order, whoever does the work.

Items and results travel as pickles, so they are texts, numbers and plain containers of them, never balls. A
worker that dies is replaced and its items are done again; an item that takes its worker down every time is
reported, not retried forever.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from typing import TypeVar

from verify.errors import InputError, UndecidedError

Item = TypeVar("Item")
Result = TypeVar("Result")

MOST_WORKERS = 256


def run_all(
    function: Callable[[Item], Result],
    items: Iterable[Item],
    workers: int = 1,
    scheduler: str | None = None,
    chunk: int = 1,
    lost: Callable[[Item, UndecidedError], Result] | None = None,
) -> Iterator[Result]:
    """Yield ``function(item)`` for every item, in the order of the items.

    Parameters
    ----------
    function : callable
        At the top level of a module that the workers can import (or a ``functools.partial`` of one); its
        result must depend on the item alone.
    items : iterable
        Picklable; read lazily, a bounded number ahead.
    workers : int
        Local processes; 1 for this process alone.
    scheduler : str, optional
        Address of a running Dask scheduler, ``tcp://host:port``; then ``workers`` is not looked at.
    chunk : int
        Items handed out at a time; more than one where an item takes milliseconds.
    lost : callable, optional
        (item, error) -> what stands for its result, where its batch took down every worker that tried it.

    Raises
    ------
    InputError
        For a number of workers or a scheduler that cannot be used.
    UndecidedError
        When a batch took down every worker that tried it, and ``lost`` was not given.
    Exception
        Whatever ``function`` raises, at the place of its item.

    Examples
    --------
    >>> list(run_all(abs, [-1, 2, -3]))
    [1, 2, 3]
    """
    if not 1 <= workers <= MOST_WORKERS:
        raise InputError(f"{workers} workers", f"ask for 1 to {MOST_WORKERS}", key="workers")
    if scheduler is not None:
        from verify.parallel.cluster import on_cluster

        return on_cluster(function, items, scheduler, chunk, lost)
    if workers == 1:
        return map(function, items)
    from verify.parallel.processes import in_processes

    return in_processes(function, items, workers, chunk, lost)
