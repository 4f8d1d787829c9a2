"""A small table of texts by key in one SQLite file: safe under many processes, and after a crash."""

from __future__ import annotations

import hashlib
import os
import sqlite3
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from verify.errors import InputError

FILE = "sidecheck-results.sqlite"
PATIENCE = 60.0
"""Seconds that a process waits for another one's write."""


class DamagedError(InputError):
    """The file of a store is not, or no longer, a database."""


class Store:
    """Texts by key, each with its digest.

    Parameters
    ----------
    folder : str or Path
        The directory; made when it is not there.

    Raises
    ------
    InputError
        When the directory or the file cannot be used.

    Examples
    --------
    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     store = Store(folder)
    ...     store.put("question", "answer")
    ...     found = store.get("question"), store.get("another")
    ...     store.close()
    >>> found
    ('answer', None)
    """

    def __init__(self, folder: str | Path) -> None:
        self.folder = Path(folder)
        self._connection: sqlite3.Connection | None = None
        self._process = 0

    def get(self, key: str) -> str | None:
        """Return the text, or None where there is none; one whose digest does not fit is refused."""
        with self._open() as connection:
            row = connection.execute("SELECT text, digest FROM results WHERE key = ?", (key,)).fetchone()
        if row is None:
            return None
        if not isinstance(row[0], str) or row[1] != digest(key, row[0]):
            self.refuse(key)
            return None
        return row[0]

    def refuse(self, key: str) -> None:
        """Count a text that was not believed, whichever process found it."""
        with suppress(InputError), self._open() as connection, connection:
            connection.execute("INSERT INTO refused VALUES (?)", (key,))

    def refused(self) -> int:
        """Return how many texts were refused since the store was made.

        Raises
        ------
        DamagedError
            When its file is no longer a database.
        """
        with self._open() as connection:
            return int(connection.execute("SELECT COUNT(*) FROM refused").fetchone()[0])

    def put(self, key: str, text: str) -> None:
        """Keep a text; an older one of the same key is replaced."""
        with self._open() as connection, connection:
            connection.execute("INSERT OR REPLACE INTO results VALUES (?, ?, ?)", (key, text, digest(key, text)))

    def close(self) -> None:
        """Close the file."""
        if self._connection is not None and self._process == os.getpid():
            self._connection.close()
        self._connection = None

    @contextmanager
    def _open(self) -> Iterator[sqlite3.Connection]:
        """Give the connection of this process and thread; a fork never uses its parent's."""
        try:
            if self._connection is None or self._process != os.getpid():
                self.folder.mkdir(parents=True, exist_ok=True)
                self._connection, self._process = _connect(self.folder / FILE), os.getpid()
            yield self._connection
        except (OSError, sqlite3.Error) as error:
            usable = isinstance(error, OSError | sqlite3.OperationalError)
            kind, state = (InputError, "cannot be used") if usable else (DamagedError, "is damaged")
            right = "name another directory" if usable else f"delete {FILE} there"
            raise kind(f"the memory {state}: {error}", right, key="--cache", file=str(self.folder)) from None


def _connect(path: Path) -> sqlite3.Connection:
    connection = sqlite3.connect(path, timeout=PATIENCE, check_same_thread=False)
    columns = "key TEXT PRIMARY KEY, text TEXT NOT NULL, digest TEXT NOT NULL"
    connection.execute(f"CREATE TABLE IF NOT EXISTS results ({columns})")
    connection.execute("CREATE TABLE IF NOT EXISTS refused (key TEXT NOT NULL)")
    return connection


def digest(key: str, text: str) -> str:
    """Digest of a text under its key, so that a text moved to another key is not taken for its answer."""
    return hashlib.sha256(f"{key}\n{text}".encode()).hexdigest()
