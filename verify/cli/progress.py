"""Progress of long work, on stderr: a bar in a terminal, a line now and then elsewhere."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

from verify.cli.output import note

FIRST, MOST = 1000, 10_000
"""Items before the first line, and most items between two lines."""


@contextmanager
def progress_bar(what: str, total: int | None, done: int = 0) -> Iterator[Callable[[int], None]]:
    """Give a function to call with the number of items done so far; no total where it is not worth counting."""
    if not sys.stderr.isatty():
        yield _lines(what, total)
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    columns = (TextColumn(what), BarColumn(), MofNCompleteColumn(), TimeRemainingColumn())
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task(what, total=total, completed=done)
        yield lambda count: bar.update(task, completed=count)


def _lines(what: str, total: int | None) -> Callable[[int], None]:
    """A line at the first thousand, then each time the number has doubled or grown by ten thousand."""
    state = {"next": FIRST}

    def progress(done: int) -> None:
        if done >= state["next"]:
            note(f"{done} {what}" if total is None else f"{done} of {total} {what}")
            state["next"] = min(2 * done, done + MOST)

    return progress
