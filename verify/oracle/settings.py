"""What the plugin goes by: the ending of case files, and how many digits are proved."""

from __future__ import annotations

import pytest

SUFFIX = ".case.toml"
DIGITS = 30


def digits_of(config: pytest.Config) -> int:
    """Return the digits that the command line or the ini file asks for."""
    given = str(config.getoption("sidecheck_digits") or config.getini("sidecheck_digits")).strip()
    if not (given.isascii() and given.isdigit() and 15 <= int(given) <= 10_000):
        raise pytest.UsageError(f"sidecheck_digits is {given[:20]!r}: write a whole number from 15 to 10000")
    return int(given)
