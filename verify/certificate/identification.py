"""Versions and build identification: what wrote a certificate."""

from __future__ import annotations

import hashlib
import platform
from functools import cache
from pathlib import Path

from verify.versions import versions as found


@cache
def build() -> str:
    """Return the first 16 characters of the SHA-256 over this package's source files, in order of their names."""
    root = Path(__file__).resolve().parent.parent
    digest = hashlib.sha256()
    for path in sorted(root.rglob("*.py")):
        digest.update(path.relative_to(root).as_posix().encode() + b"\0" + hashlib.sha256(path.read_bytes()).digest())
    return digest.hexdigest()[:16]


def versions() -> dict[str, str]:
    """Name -> version of this program, its build, Python, and the engines."""
    return {**dict(found()), "build": build(), "python": platform.python_version()}
