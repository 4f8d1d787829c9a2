"""Writing files: beside their place first, then moved there, so that nobody ever sees half of one."""

from __future__ import annotations

import os
import secrets
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path


@contextmanager
def beside(path: Path) -> Iterator[Path]:
    """Give an empty file beside ``path`` to write to, which takes its place at the end and is gone when anything fails.

    It is flushed to the disk before it is moved, and may be read by whom the user's mask allows.

    Raises
    ------
    OSError
        When the folder cannot be written to.

    Examples
    --------
    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     with beside(Path(folder) / "table.csv") as place:
    ...         written = place.write_text("n,c")
    ...     [(path.name, path.read_text()) for path in Path(folder).iterdir()]
    [('table.csv', 'n,c')]
    """
    place = path.with_name(f".{path.name}.{secrets.token_hex(4)}")
    os.close(os.open(place, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666))
    try:
        yield place
        with open(place, "rb+") as file:
            os.fsync(file.fileno())
        os.replace(place, path)
    except BaseException:
        with suppress(OSError):  # what went wrong first is what is told
            place.unlink()
        raise


def write_atomically(path: Path, data: bytes) -> None:
    """Write a whole file: all or nothing."""
    with beside(path) as place:
        place.write_bytes(data)
