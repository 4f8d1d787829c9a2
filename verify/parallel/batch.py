"""Batches of items, and the work on one."""

from __future__ import annotations

import threading
from collections.abc import Callable, Iterable, Iterator
from itertools import islice
from typing import Any, TypeVar

from verify.errors import UndecidedError

Item = TypeVar("Item")

_one_at_a_time = threading.Lock()
"""Arb's precision is global to a process, so it works on one item at a time, though its scheduler has threads."""


def batches(items: Iterable[Item], size: int) -> Iterator[tuple[Item, ...]]:
    """Yield the items in tuples of this size (the last may be shorter).

    Examples
    --------
    >>> list(batches("abcde", 2))
    [('a', 'b'), ('c', 'd'), ('e',)]
    """
    stream = iter(items)
    while batch := tuple(islice(stream, size)):
        yield batch


def do(function: Callable[[Any], Any], batch: tuple[Any, ...]) -> list[Any]:
    """Work on a batch, alone in this process."""
    with _one_at_a_time:
        return [function(item) for item in batch]


Lost = Callable[[Any, UndecidedError], Any]
"""What stands for the result of an item over which worker after worker died."""


def given_up(batch: tuple[Any, ...], died: str, lost: Lost | None) -> list[Any]:
    """Return what stands for the results of a batch that took down every worker that tried it.

    Raises
    ------
    UndecidedError
        Where nothing stands for them.
    """
    error = UndecidedError(f"{died} died over one piece of work: {batch_text(batch)}")
    if lost is None:
        raise error
    return [lost(item, error) for item in batch]


def batch_text(batch: tuple[Any, ...]) -> str:
    """Name a batch on one line, for a message."""
    text = " ".join(repr(batch[0]).split())
    more = f" and {len(batch) - 1} more" if len(batch) > 1 else ""
    return (text if len(text) <= 120 else text[:117] + "...") + more
