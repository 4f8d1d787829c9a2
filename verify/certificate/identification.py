"""Versions and build identification: what wrote a certificate."""

from __future__ import annotations

import hashlib
import platform
from functools import cache
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path

ENGINES = ("sympy", "mpmath", "python-flint", "scipy", "numpy")


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
    from verify import __version__

    return {
        "sidecheck": __version__,
        "build": build(),
        "python": platform.python_version(),
        **{name: _version(name) for name in ENGINES},
    }


def _version(name: str) -> str:
    try:
        return version(name)
    except PackageNotFoundError:
        return "absent"
