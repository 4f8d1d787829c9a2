"""Write certificates: atomic, never over an existing file without being told, with check sums and bundles."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from verify.errors import InputError
from verify.files import write_atomically

SUMS = "SHA256SUMS"


@dataclass(frozen=True)
class Paths:
    """Where a certificate was written."""

    json: Path
    text: Path
    sums: Path


def write_certificate(name: str, data: bytes, directory: Path, *, force: bool = False) -> Paths:
    """Write ``NAME.cert.json``, its byte-identical twin ``NAME.cert.txt``, and their lines in ``SHA256SUMS``.

    A file with the same bytes is left alone; one with other bytes is an error unless ``force``.

    Raises
    ------
    InputError
        When a file is in the way, or the folder cannot be written.

    Examples
    --------
    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     paths = write_certificate("lot", b"{}", Path(folder))
    ...     paths.json.name, paths.text.read_bytes(), paths.sums.read_text().split()[1::2]
    ('lot.cert.json', b'{}', ['lot.cert.json', 'lot.cert.txt'])
    """
    files = {f"{name}.cert.json": data, f"{name}.cert.txt": data}
    write_files(files, directory, force=force)
    return Paths(directory / f"{name}.cert.json", directory / f"{name}.cert.txt", directory / SUMS)


def bundle_index(certificates: Mapping[str, bytes]) -> bytes:
    """Return ``index.json`` of a bundle: name, subject, one line about the test, and SHA-256 of each certificate.

    The index is for finding one's way; each certificate is rechecked alone.
    """
    entries = [_index_entry(name, data) for name, data in sorted(certificates.items())]
    return json.dumps({"certificates": entries}, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def _index_entry(name: str, data: bytes) -> dict[str, str]:
    statement = json.loads(data)
    problem = statement["predicate"]["problem"]
    return {
        "file": f"{name}.cert.json",
        "sha256": hashlib.sha256(data).hexdigest(),
        "subject": statement["subject"][0]["name"],
        "title": problem["title"],
        "null": problem["null"],
        "law": statement["predicate"]["law"]["name"],
    }


def write_files(files: Mapping[str, bytes], directory: Path, *, force: bool = False) -> None:
    """Write files into a folder, each atomically, after looking that none is in the way; then renew ``SHA256SUMS``."""
    try:
        directory.mkdir(parents=True, exist_ok=True)
        for name, data in files.items():
            _require_free(directory / name, data, force)
        for name, data in files.items():
            write_atomically(directory / name, data)
        write_atomically(directory / SUMS, _sums(directory, files))
    except OSError as error:
        raise InputError(
            f"cannot write: {error.strerror or error}",
            "give a folder that can be written",
            file=str(directory),
        ) from None


def _require_free(path: Path, data: bytes, force: bool) -> None:
    if path.exists() and not force and path.read_bytes() != data:
        raise InputError(
            "the file exists and differs", "use --force to overwrite it, or another folder", file=str(path)
        )


def _sums(directory: Path, files: Mapping[str, bytes]) -> bytes:
    path = directory / SUMS
    known = {}
    if path.exists():
        for line in path.read_text(encoding="utf-8").splitlines():
            digest, _, name = line.partition("  ")
            known[name] = digest
    known |= {name: hashlib.sha256(data).hexdigest() for name, data in files.items()}
    return "".join(f"{known[name]}  {name}\n" for name in sorted(known) if name).encode()
