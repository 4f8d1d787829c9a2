"""Options that several commands share."""

from __future__ import annotations

import argparse

from verify.parallel.run import MOST_WORKERS

DIGITS = (15, 10_000)
"""Fewest and most significant digits that can be asked for."""


def digits(text: str) -> int:
    """Read the value of ``--digits``."""
    low, high = DIGITS
    if not (text.isascii() and text.isdigit() and len(text) <= 6 and low <= int(text) <= high):
        raise argparse.ArgumentTypeError(f"{text[:40]!r} is not a whole number of digits from {low} to {high}")
    return int(text)


def seconds(text: str) -> float:
    """Read a number of seconds."""
    try:
        value = float(text)
    except ValueError:
        value = -1.0
    if not 0 < value <= 86_400:
        raise argparse.ArgumentTypeError(f"{text[:40]!r} is not a number of seconds, such as 10")
    return value


def workers(text: str) -> int:
    """Read a number of processes."""
    if not (text.isascii() and text.isdigit() and len(text) <= 6 and 1 <= int(text) <= MOST_WORKERS):
        raise argparse.ArgumentTypeError(f"{text[:40]!r} is not a number of processes from 1 to {MOST_WORKERS}")
    return int(text)


def add_case(parser: argparse.ArgumentParser) -> None:
    """Add the case file."""
    parser.add_argument("case", metavar="CASE", help="a case file, NAME.case.toml, or - for standard input")


def add_json(parser: argparse.ArgumentParser) -> None:
    """Add ``--json``."""
    parser.add_argument("--json", action="store_true", help="print one JSON object on stdout and nothing else there")


def add_digits(parser: argparse.ArgumentParser, default: int = 50) -> None:
    """Add ``--digits``."""
    low, high = DIGITS
    parser.add_argument(
        "--digits", type=digits, default=default, metavar="N",
        help=f"significant digits to prove, {low} to {high} (default {default})",
    )  # fmt: skip


def add_budget(parser: argparse.ArgumentParser) -> None:
    """Add ``--budget``."""
    parser.add_argument(
        "--budget", type=seconds, default=10.0, metavar="SECONDS",
        help="time for each symbolic step; a step that needs more is undecided (default 10)",
    )  # fmt: skip


def add_workers(parser: argparse.ArgumentParser) -> None:
    """Add ``--workers`` and ``--scheduler``."""
    parser.add_argument("--workers", type=workers, default=1, metavar="N", help="local processes (default 1)")
    parser.add_argument(
        "--scheduler", metavar="ADDRESS",
        help="a running Dask scheduler, tcp://host:port, whose workers see the same files",
    )  # fmt: skip


def add_cache(parser: argparse.ArgumentParser) -> None:
    """Add ``--cache``."""
    parser.add_argument(
        "--cache", metavar="DIR",
        help="remember proven results here (also by SIDECHECK_CACHE); they are proved again when they are read",
    )  # fmt: skip
