"""Where output goes: the result to stdout, everything else to stderr."""

from __future__ import annotations

import json
import sys
from typing import Any, TextIO

from verify.errors import InputError, SidecheckError


class StandardOutputError(SidecheckError):
    """Standard output cannot be written."""


class Outlet:
    """Standard output, whose failures are told from those of any other file.

    Everything but ``write`` and ``flush`` is left to the stream.

    Examples
    --------
    >>> print("text", file=Outlet(sys.stdout))
    text
    """

    def __init__(self, stream: TextIO) -> None:
        self._stream = stream

    def __getattr__(self, name: str) -> Any:
        return getattr(self._stream, name)

    def write(self, text: str) -> int:
        """Write text; a broken pipe stays one.

        Raises
        ------
        StandardOutputError
            When the stream does not take it.
        """
        try:
            return self._stream.write(text)
        except OSError as error:
            raise _named(error) from None

    def flush(self) -> None:
        """Write what is left over.

        Raises
        ------
        StandardOutputError
            When the stream does not take it.
        """
        try:
            self._stream.flush()
        except OSError as error:
            raise _named(error) from None


def _named(error: OSError) -> Exception:
    if isinstance(error, BrokenPipeError):
        return error
    return StandardOutputError(f"standard output cannot be written: {error.strerror}")


def show_json(value: dict[str, Any]) -> None:
    """Print one JSON object on stdout."""
    print(json.dumps(value, indent=2, ensure_ascii=False))


def note(text: str) -> None:
    """Print progress or a remark on stderr."""
    print(f"sidecheck: {text}", file=sys.stderr)


def complain(error: Exception | str, code: int, as_json: bool) -> int:
    """Say on one line of stderr why there is no result (with ``--json`` on stdout too); return the status."""
    line = " ".join(str(error).split())
    print(line if line.startswith("sidecheck") else f"sidecheck: {line}", file=sys.stderr)
    if as_json:
        detail = {"message": line, "status": code}
        if isinstance(error, InputError):
            detail |= {"file": error.file, "key": error.key, "wrong": error.wrong, "right": error.right}
        show_json({"error": detail})
    return code
