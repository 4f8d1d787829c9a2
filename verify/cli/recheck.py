"""``sidecheck recheck``: the small independent checker on a certificate, alone."""

from __future__ import annotations

import argparse
import os
import sys
from typing import TYPE_CHECKING

from verify.cli.options import add_json
from verify.cli.output import show_json
from verify.cli.signing import check_signature, read_file, read_public
from verify.errors import InputError

if TYPE_CHECKING:
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

VERDICTS = {
    0: "accepted",
    1: "rejected",
    2: "malformed",
    3: "undecided, or over the limit",
    4: "accepted, numbers on trust",
}
"""What each exit status of the checker means."""

EXAMPLE = "sidecheck recheck out/lot-release.cert.json --case casebook/demo/lot-release.case.toml"
MEANINGS = "\n".join(f"  {code} {meaning}" for code, meaning in VERDICTS.items())

ENDING = ".cert.json"
WORST = (1, 2, 3, 4, 0)
"""Which exit status decides for several certificates."""


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command, and the exit statuses to its help."""
    parser.epilog = f"{parser.epilog}\n\nexit status, of several certificates that of the worst:\n{MEANINGS}"
    parser.add_argument(
        "certificates", nargs="+", metavar="CERTIFICATE",
        help="certificates, NAME.cert.json, folders of them, or - for standard input",
    )  # fmt: skip
    parser.add_argument("--case", metavar="CASE", help="the case file that the certificate must be about")
    parser.add_argument(
        "--signed-by", metavar="PUBLIC.pem",
        help="the Ed25519 key that must have signed each certificate, in NAME.cert.dsse.json beside it",
    )  # fmt: skip
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Check each, print the verdicts, and return the exit status of the checker, of several that of the worst."""
    paths = dict.fromkeys(path for place in args.certificates for path in _certificates(place))
    if args.case is not None and len(paths) > 1:
        raise InputError("one case, several certificates", "check each against its own case", key="--case")
    key = None if args.signed_by is None else read_public(args.signed_by, paths)
    found = {path: _checked(path, args.case, key) for path in paths}
    status = min((status for status, _ in found.values()), key=WORST.index)
    shown = {path: {"verdict": VERDICTS[code], "status": code, "lines": lines} for path, (code, lines) in found.items()}
    if args.json:
        several = {"status": status, "certificates": shown}
        show_json(several if len(shown) > 1 else next(iter(shown.values())))
        return status
    for path, (_, lines) in found.items():
        print("\n".join([*([f"{path}:"] if len(found) > 1 else []), *lines]))
    bad = [path for path, (code, _) in found.items() if code not in (0, 4)]
    if len(found) > 1:
        print(f"{len(found)} certificates, " + (f"not accepted: {', '.join(bad)}" if bad else "all accepted"))
    return status


def _certificates(place: str) -> list[str]:
    """Return the certificates in a folder, in order of their names; the place itself where it is none."""
    if not os.path.isdir(place):
        return [place]
    names = sorted(name for name in os.listdir(place) if name.endswith(ENDING))
    if not names:
        raise InputError("there is no certificate in this folder", f"they are named NAME{ENDING}", file=place)
    return [os.path.join(place, name) for name in names]


def _checked(path: str, case: str | None, key: Ed25519PublicKey | None) -> tuple[int, list[str]]:
    """Return the status and the lines of the checker; a certificate that is not signed as it must be is not checked."""
    from verify.certificate.recheck import FILE_LIMIT, verdict

    data = sys.stdin.buffer.read(FILE_LIMIT + 1) if path == "-" else read_file(path, FILE_LIMIT + 1)
    if case is not None:
        read_file(case, 1)
    signed: list[str] = []
    if key is not None:
        status, signed = check_signature(path, data, key)
        if status:
            return status, signed
    before = sys.get_int_max_str_digits()
    sys.set_int_max_str_digits(0)  # the checker bounds its own work
    try:
        status, lines = verdict(data, case)
    finally:
        sys.set_int_max_str_digits(before)
    return int(status), [*lines, *signed]
