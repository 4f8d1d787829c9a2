"""Where output goes: the result to stdout, everything else to stderr."""

from __future__ import annotations

import json
import sys
from typing import Any

from verify.errors import InputError


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
