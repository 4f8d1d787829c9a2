"""Optional signatures: a DSSE envelope over the bytes of a certificate, Ed25519 (extra ``[sign]``).

Source: in-toto DSSE v1 (pre-authentication encoding PAE); RFC 8032 (Ed25519). The certificate itself stays unsigned and
unchanged; ``NAME.cert.dsse.json`` lies beside it.
"""

from __future__ import annotations

import base64
import binascii
import hashlib
import json
from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from verify.errors import InputError, missing_extra

if TYPE_CHECKING:
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey, Ed25519PublicKey

PAYLOAD_TYPE = "application/vnd.in-toto+json"


def pre_authentication_encoding(data: bytes) -> bytes:
    """Return what is signed: DSSEv1, and type and body each with its length.

    Examples
    --------
    >>> pre_authentication_encoding(b"{}")
    b'DSSEv1 28 application/vnd.in-toto+json 2 {}'
    """
    kind = PAYLOAD_TYPE.encode()
    return b"DSSEv1 %d %b %d %b" % (len(kind), kind, len(data), data)


@dataclass(frozen=True)
class Signer:
    """A private key, read and ready.

    Attributes
    ----------
    key : Ed25519PrivateKey
        The key.
    """

    key: Ed25519PrivateKey

    @property
    def key_id(self) -> str:
        """The SHA-256 of the raw public key."""
        return key_id(self.key.public_key())

    def sign(self, data: bytes) -> bytes:
        """Return the envelope for a certificate's bytes."""
        signature = self.key.sign(pre_authentication_encoding(data))
        envelope = {
            "payloadType": PAYLOAD_TYPE,
            "payload": base64.b64encode(data).decode(),
            "signatures": [{"keyid": self.key_id, "sig": base64.b64encode(signature).decode()}],
        }
        return json.dumps(envelope, sort_keys=True, separators=(",", ":")).encode()


def read_signer(private_key_pem: bytes, ask: Callable[[], bytes]) -> Signer:
    """Read an Ed25519 private key in PEM form; ``ask`` gives the password of one that is protected.

    Raises
    ------
    InputError
        When the key cannot be read, is of another kind, or the password does not open it; or without cryptography.
    """
    serialization, ed25519 = _library()
    password: bytes | None = None
    if any(word in private_key_pem for word in (b"ENCRYPTED PRIVATE KEY", b"Proc-Type: 4,ENCRYPTED")):
        password = ask()
    try:
        key: Any = serialization.load_pem_private_key(private_key_pem, password)
    except (ValueError, TypeError, _unsupported()):
        wrong = "the private key cannot be read" + ("" if password is None else ", or the password does not open it")
        raise InputError(wrong, "give an Ed25519 key in PEM form", key="key") from None
    if not isinstance(key, ed25519.Ed25519PrivateKey):
        raise InputError(
            "the private key is not Ed25519", "make one with: openssl genpkey -algorithm ed25519", key="key"
        )
    return Signer(key)


def read_public_key(public_key_pem: bytes) -> Ed25519PublicKey:
    """Read an Ed25519 public key in PEM form.

    Raises
    ------
    InputError
        When it cannot be read or is of another kind; or without cryptography.
    """
    serialization, ed25519 = _library()
    try:
        key: Any = serialization.load_pem_public_key(public_key_pem)
    except (ValueError, _unsupported()):
        raise InputError("the public key cannot be read", "give an Ed25519 key in PEM form", key="key") from None
    if not isinstance(key, ed25519.Ed25519PublicKey):
        raise InputError("the public key is not Ed25519", "give the key of the signer", key="key")
    found: Ed25519PublicKey = key
    return found


def verify_signature(envelope: bytes, data: bytes, key: Ed25519PublicKey) -> bool:
    """Whether an envelope holds exactly these bytes and a valid signature of this key.

    Raises
    ------
    InputError
        When the envelope cannot be read.
    """
    from cryptography.exceptions import InvalidSignature

    payload, signatures = _open(envelope)
    if payload != data:
        return False
    for signature in signatures:
        try:
            key.verify(signature, pre_authentication_encoding(data))
        except InvalidSignature:
            continue
        return True
    return False


def key_id(key: Ed25519PublicKey) -> str:
    """Return the SHA-256 of the raw public key."""
    serialization, _ = _library()
    raw = key.public_bytes(serialization.Encoding.Raw, serialization.PublicFormat.Raw)
    return hashlib.sha256(raw).hexdigest()


def _open(envelope: bytes) -> tuple[bytes, list[bytes]]:
    try:
        content = json.loads(envelope)
        if content["payloadType"] != PAYLOAD_TYPE:
            raise ValueError("another payload type")
        payload = base64.b64decode(content["payload"], validate=True)
        return payload, [base64.b64decode(entry["sig"], validate=True) for entry in content["signatures"]]
    except (ValueError, KeyError, TypeError, RecursionError, binascii.Error):
        raise InputError("the signature file cannot be read", "give NAME.cert.dsse.json", key="signature") from None


def _unsupported() -> type[Exception]:
    from cryptography.exceptions import UnsupportedAlgorithm

    found: type[Exception] = UnsupportedAlgorithm
    return found


def _library() -> tuple[Any, Any]:
    try:
        from cryptography.hazmat.primitives import serialization
        from cryptography.hazmat.primitives.asymmetric import ed25519
    except ImportError:
        raise missing_extra("signing needs cryptography", "sign", key="sign") from None
    return serialization, ed25519
