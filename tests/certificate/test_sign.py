"""Signatures: a published key, OpenSSL as the other reader, and envelopes that are none."""

import base64
import json
import shutil
import subprocess
from hashlib import sha256

import pytest
from cryptography.hazmat.primitives import serialization
from cryptography.hazmat.primitives.asymmetric import rsa
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey
from hypothesis import assume, given
from hypothesis import strategies as st

from verify.certificate.sign import (
    Signer,
    key_id,
    pre_authentication_encoding,
    read_public_key,
    read_signer,
    verify_signature,
)
from verify.errors import InputError

SECRET = bytes.fromhex("9d61b19deffd5a60ba844af492ec2cc44449c5697b326919703bac031cae7f60")
PUBLIC = bytes.fromhex("d75a980182b10ab7d54bfed3c964073a0ee172f3daa62325af021a68f707511a")
KEY = Ed25519PrivateKey.from_private_bytes(SECRET)
STRANGER = Ed25519PrivateKey.from_private_bytes(bytes(32))
PASSWORD = b"a bead"


def never() -> bytes:
    raise AssertionError("no password is needed")


def private_pem(key, password: bytes | None = None) -> bytes:
    how = serialization.NoEncryption() if password is None else serialization.BestAvailableEncryption(password)
    return key.private_bytes(serialization.Encoding.PEM, serialization.PrivateFormat.PKCS8, how)


def public_pem(key) -> bytes:
    return key.public_key().public_bytes(serialization.Encoding.PEM, serialization.PublicFormat.SubjectPublicKeyInfo)


def test_the_key_is_named_by_its_published_public_half() -> None:
    """RFC 8032, section 7.1, TEST 1 (secret and public key, from memory)."""
    signer = read_signer(private_pem(KEY), never)
    assert signer.key_id == sha256(PUBLIC).hexdigest() == key_id(read_public_key(public_pem(KEY)))


@given(st.binary(max_size=200), st.binary(max_size=200))
def test_a_signature_holds_for_these_bytes_and_this_key_only(data, other) -> None:
    assume(data != other)
    envelope = Signer(KEY).sign(data)
    assert verify_signature(envelope, data, KEY.public_key())
    assert not verify_signature(envelope, other, KEY.public_key())
    assert not verify_signature(envelope, data, STRANGER.public_key())


@given(st.binary(min_size=1, max_size=50), st.integers(0, 63), st.integers(1, 255))
def test_a_changed_signature_does_not_hold(data, place, change) -> None:
    content = json.loads(Signer(KEY).sign(data))
    signature = bytearray(base64.b64decode(content["signatures"][0]["sig"]))
    signature[place] ^= change
    content["signatures"][0]["sig"] = base64.b64encode(signature).decode()
    assert not verify_signature(json.dumps(content).encode(), data, KEY.public_key())


def test_openssl_accepts_the_signature(tmp_path) -> None:
    openssl = shutil.which("openssl")
    if openssl is None:
        pytest.skip("openssl is not installed here; continuous integration installs it")
    (tmp_path / "key.pem").write_bytes(public_pem(KEY))
    content = json.loads(Signer(KEY).sign(b'{"a":1}'))
    (tmp_path / "signature").write_bytes(base64.b64decode(content["signatures"][0]["sig"]))
    (tmp_path / "signed").write_bytes(b'DSSEv1 28 application/vnd.in-toto+json 7 {"a":1}')
    words = "pkeyutl -verify -pubin -inkey key.pem -rawin -in signed -sigfile signature"
    done = subprocess.run([openssl, *words.split()], cwd=tmp_path, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr
    assert pre_authentication_encoding(b'{"a":1}') == (tmp_path / "signed").read_bytes()


def test_a_password_is_asked_for_where_there_is_one() -> None:
    assert read_signer(private_pem(KEY, PASSWORD), lambda: PASSWORD).key_id == Signer(KEY).key_id
    for wrong in (b"", b"another"):
        with pytest.raises(InputError, match="the password does not open it") as error:
            read_signer(private_pem(KEY, PASSWORD), lambda wrong=wrong: wrong)
        assert "\n" not in str(error.value)


@pytest.mark.parametrize("pem", [b"", b"no key", public_pem(KEY), private_pem(KEY)[:60]])
def test_what_is_no_private_key_is_refused(pem) -> None:
    with pytest.raises(InputError, match="private key"):
        read_signer(pem, never)


def test_keys_of_another_kind_are_refused() -> None:
    other = rsa.generate_private_key(public_exponent=65537, key_size=2048)
    with pytest.raises(InputError, match="not Ed25519"):
        read_signer(private_pem(other), never)
    with pytest.raises(InputError, match="not Ed25519"):
        read_public_key(public_pem(other))
    with pytest.raises(InputError, match="cannot be read"):
        read_public_key(private_pem(KEY))


@pytest.mark.parametrize(
    "envelope",
    [b"", b"{}", b"[]", b"null", b"\xff", b"[" * 100_000,
     b'{"payloadType":"application/json","payload":"","signatures":[]}',
     b'{"payloadType":"application/vnd.in-toto+json","payload":"?","signatures":[]}'],
)  # fmt: skip
def test_what_is_no_envelope_is_refused(envelope) -> None:
    with pytest.raises(InputError, match="signature file"):
        verify_signature(envelope, b"", KEY.public_key())


def test_an_envelope_without_signatures_proves_nothing() -> None:
    content = json.loads(Signer(KEY).sign(b"x"))
    assert not verify_signature(json.dumps(content | {"signatures": []}).encode(), b"x", KEY.public_key())
