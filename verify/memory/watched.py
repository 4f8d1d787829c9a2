"""The memory of a run: which directory, is it sound, and was anything in it refused?"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from contextlib import contextmanager

from verify.memory.store import DamagedError, Store

VARIABLE = "SIDECHECK_CACHE"
"""Environment variable that names the directory when no option does."""


def cache_of(option: str | None) -> str | None:
    """Return the directory that an option or, without one, the environment names; None for no memory."""
    return option or os.environ.get(VARIABLE) or None


@contextmanager
def watched(option: str | None, tell: Callable[[str], None]) -> Iterator[str | None]:
    """Give the directory of the memory for a run, None where there is none or its file is damaged.

    Parameters
    ----------
    option : str or None
        The directory that the user names.
    tell : callable
        Called with one line where the memory is damaged, or where something in it was refused in the run.

    Raises
    ------
    InputError
        When the directory cannot be written to.
    """
    folder = cache_of(option)
    if folder is None:
        yield None
        return
    store = Store(folder)
    try:
        before = store.refused()
    except DamagedError as error:
        tell(f"{error}: nothing is remembered in this run")
        yield None
        return
    yield folder
    try:
        refused = store.refused() - before
    except DamagedError as error:
        tell(f"{error}: what could not be read was worked out afresh")
        return
    if refused > 0:
        what = "1 remembered result" if refused == 1 else f"{refused} remembered results"
        was = "was damaged or wrong, and was" if refused == 1 else "were damaged or wrong, and were"
        tell(f"{what} in {folder} {was} worked out afresh")
