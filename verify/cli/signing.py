"""Keys and signatures on the command line: read before the work begins, every mistake told in one line."""

from __future__ import annotations

import os
import sys
from collections.abc import Collection
from getpass import getpass
from typing import TYPE_CHECKING

from verify.errors import InputError

if TYPE_CHECKING:
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

    from verify.certificate.sign import Signer

PASSWORD = "SIDECHECK_KEY_PASSWORD"
SIGNATURE = ".cert.dsse.json"
CERTIFICATE = ".cert.json"
KEY_LIMIT, ENVELOPE_LIMIT = 100_000, 100_000_000


def read_file(path: str, limit: int) -> bytes:
    """Return the bytes of a file, at most so many.

    Raises
    ------
    InputError
        When it cannot be read.
    """
    try:
        with open(path, "rb") as file:
            return file.read(limit)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "not a path"
        raise InputError(f"the file cannot be read: {reason}", "give the path of a file", file=path) from None


def read_signing_key(path: str) -> Signer:
    """Read the private key of a signer, and ask for its password where it has one.

    Raises
    ------
    InputError
        When it cannot be read or opened, or the extra ``sign`` is missing.
    """
    from verify.certificate.sign import read_signer

    pem = read_file(path, KEY_LIMIT)
    try:
        return read_signer(pem, lambda: _password(path))
    except InputError as error:
        raise error.at(file=path) from None


def _password(path: str) -> bytes:
    known = os.environ.get(PASSWORD)
    if known is not None:
        return os.fsencode(known)
    if not sys.stdin.isatty():
        raise InputError(
            "the private key is protected by a password", f"set {PASSWORD}, or run this at a terminal", key="key"
        )
    return getpass(f"Password of {path}: ").encode()


def read_public(path: str, certificates: Collection[str]) -> Ed25519PublicKey:
    """Read the public key that must have signed these certificates.

    Raises
    ------
    InputError
        When it cannot be read, the extra ``sign`` is missing, or a certificate has no place for a signature beside it.
    """
    from verify.certificate.sign import read_public_key

    for place in certificates:
        if not place.endswith(CERTIFICATE):
            raise InputError(
                "no signature can lie beside this certificate", f"give files named NAME{CERTIFICATE}", file=place
            )
    try:
        return read_public_key(read_file(path, KEY_LIMIT))
    except InputError as error:
        raise error.at(file=path) from None


def check_signature(path: str, data: bytes, key: Ed25519PublicKey) -> tuple[int, list[str]]:
    """Look whether the file beside a certificate holds a signature of this key on exactly these bytes.

    Returns
    -------
    tuple
        0, 1 (no such signature) or 2 (a file that is none), and the line that says it.
    """
    from verify.certificate.sign import key_id, verify_signature

    place = path.removesuffix(CERTIFICATE) + SIGNATURE
    if not os.path.exists(place):
        return 1, [f"REJECTED: not signed: {place} is not there"]
    try:
        good = verify_signature(read_file(place, ENVELOPE_LIMIT), data, key)
    except InputError as error:
        return 2, [f"MALFORMED: {error.at(file=place)}"]
    if not good:
        return 1, [f"REJECTED: {place} holds no signature of the key {key_id(key)} on this certificate"]
    return 0, [f"signed by {key_id(key)}"]
