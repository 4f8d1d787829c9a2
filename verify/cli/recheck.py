"""``sidecheck recheck``: the small independent checker on a certificate, alone."""

from __future__ import annotations

import argparse
import sys

from verify.cli.options import add_json
from verify.cli.output import show_json
from verify.errors import InputError

EXAMPLE = "sidecheck recheck out/lot-release.cert.json --case casebook/demo/lot-release.case.toml"

VERDICTS = {
    0: "accepted",
    1: "rejected",
    2: "malformed",
    3: "undecided, or over the limit",
    4: "accepted, numbers on trust",
}
"""What each exit status of the checker means."""


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    parser.add_argument(
        "certificate", metavar="CERTIFICATE", help="a certificate, NAME.cert.json, or - for standard input"
    )
    parser.add_argument("--case", metavar="CASE", help="the case file that the certificate must be about")
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Check, print the verdict, and return the exit status of the checker."""
    from verify.certificate.recheck import FILE_LIMIT, verdict

    data = _read(args.certificate, FILE_LIMIT + 1)
    if args.case is not None:
        _read(args.case, 1)
    before = sys.get_int_max_str_digits()
    sys.set_int_max_str_digits(0)  # the checker bounds its own work
    try:
        status, lines = verdict(data, args.case)
    finally:
        sys.set_int_max_str_digits(before)
    if args.json:
        show_json({"verdict": VERDICTS[status], "status": status, "lines": lines})
    else:
        print("\n".join(lines))
    return int(status)


def _read(path: str, limit: int) -> bytes:
    if path == "-":
        return sys.stdin.buffer.read(limit)
    try:
        with open(path, "rb") as file:
            return file.read(limit)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "not a path"
        raise InputError(f"the file cannot be read: {reason}", "give the path of a file", file=path) from None
