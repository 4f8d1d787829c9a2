"""Which versions of this program and of its engines are at work: what a result depends on."""

from __future__ import annotations

from functools import cache

ENGINES = ("sympy", "mpmath", "python-flint", "numpy", "scipy")
ABSENT = "absent"

Versions = tuple[tuple[str, str], ...]


@cache
def versions() -> Versions:
    """Return the names of this program and its engines, each with its version.

    Examples
    --------
    >>> [name for name, version in versions()]
    ['sidecheck', 'sympy', 'mpmath', 'python-flint', 'numpy', 'scipy']
    """
    from verify import __version__

    return (("sidecheck", __version__), *((name, _version(name)) for name in ENGINES))


def _version(name: str) -> str:
    from importlib.metadata import PackageNotFoundError, version

    try:
        return version(name)
    except PackageNotFoundError:
        return ABSENT
