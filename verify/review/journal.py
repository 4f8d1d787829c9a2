"""The journal of a long run: one line a row, in the order of the rows, so that an interrupted run goes on
where it stopped.
"""

from __future__ import annotations

import json
import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import IO, Self

from verify.errors import InputError
from verify.review.record import Record


class Journal:
    """Records of the rows that are done.

    Parameters
    ----------
    path : Path
        The file.
    fingerprint : str
        Of everything that the records depend on; a journal with another one is not used.

    Attributes
    ----------
    done : int
        How many rows were found done when the journal was opened.

    Raises
    ------
    InputError
        When another run is writing it, or it cannot be written.
    """

    def __init__(self, path: Path, fingerprint: str) -> None:
        self.path, self.fingerprint = path, fingerprint
        with _told(path):
            self._stream: IO[str] | None = open(path, "a", encoding="utf-8")  # noqa: SIM115 (kept open over the run)
        _lock(self._stream, path)
        with _told(path):
            self.done = self._keep_whole_lines()
        self._empty = not self.done

    def __enter__(self) -> Self:
        return self

    def __exit__(self, kind: type[BaseException] | None, *_: object) -> None:
        """Close the file; a run that failed before its first row leaves none behind."""
        if kind is not None and self._empty:
            self.remove()
        self.close()

    def _keep_whole_lines(self) -> int:
        """Cut a journal to its whole lines and count its records; a journal of something else is begun
        anew.
        """
        end = count = 0
        if self.path.is_file():
            with open(self.path, "rb") as stream:
                first = stream.readline()
                if first == self._first_line():
                    end = len(first)
                    for line in stream:
                        if not line.endswith(b"\n"):
                            break
                        end, count = end + len(line), count + 1
        with open(self.path, "ab") as stream:
            stream.truncate(end)
            if not end:
                stream.write(self._first_line())
        return count

    def _first_line(self) -> bytes:
        return (json.dumps({"fingerprint": self.fingerprint}) + "\n").encode()

    def add(self, records: list[Record]) -> None:
        """Append records; they are in the file when this returns."""
        if self._stream is None:
            raise ValueError("the journal is closed")
        with _told(self.path):
            self._stream.writelines(json.dumps(record, ensure_ascii=False) + "\n" for record in records)
            self._stream.flush()
        self._empty = self._empty and not records

    def close(self) -> None:
        """Close the file."""
        if self._stream is not None:
            with suppress(OSError):  # a full disk: what did not go into it was told when it was added
                self._stream.close()
            self._stream = None

    def records(self) -> Iterator[Record]:
        """Yield the records from the beginning."""
        with open(self.path, encoding="utf-8") as stream:
            next(stream, None)
            for line in stream:
                yield json.loads(line)

    def remove(self) -> None:
        """Delete the file."""
        self.close()
        os.unlink(self.path)


@contextmanager
def _told(path: Path) -> Iterator[None]:
    """Say in our words why the journal cannot be written."""
    try:
        yield
    except OSError as error:
        wrong = f"the rows that are done cannot be kept: {error.strerror or error}"
        right = "make room, or choose another output; the same command goes on where this one stopped"
        raise InputError(wrong, right, file=str(path)) from None


def _lock(stream: IO[str], path: Path) -> None:
    """Keep a second run away from the journal, where the system has such locks."""
    try:
        import fcntl
    except ImportError:
        return
    try:
        fcntl.flock(stream, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError:
        raise InputError(
            "another run is writing this table", "wait for it, or choose another output", file=str(path)
        ) from None
