"""``certify --sign`` and ``recheck --signed-by`` as whole commands."""

import json
import os
import pty
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
from cryptography.hazmat.primitives import serialization
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey

from verify.cli.main import main

ROOT = Path(__file__).resolve().parents[2]
LOT, TARGET = (str(ROOT / "casebook" / "demo" / f"{name}.case.toml") for name in ("lot-release", "lot-target"))
VARIABLE = "SIDECHECK_KEY_PASSWORD"
PEM = serialization.Encoding.PEM


def write_keys(folder: Path, name: str, password: bytes | None = None) -> tuple[str, str]:
    key = Ed25519PrivateKey.generate()
    how = serialization.NoEncryption() if password is None else serialization.BestAvailableEncryption(password)
    private, public = folder / f"{name}.pem", folder / f"{name}.public.pem"
    private.write_bytes(key.private_bytes(PEM, serialization.PrivateFormat.PKCS8, how))
    public.write_bytes(key.public_key().public_bytes(PEM, serialization.PublicFormat.SubjectPublicKeyInfo))
    return str(private), str(public)


def certify(*words: str) -> int:
    return main(["certify", *words, "--no-pdf", "--digits", "15"])


@pytest.fixture(scope="module")
def signed(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, str]:
    folder = tmp_path_factory.mktemp("signed")
    private, public = write_keys(folder, "key")
    assert certify(LOT, TARGET, "-o", str(folder / "out"), "--sign", private) == 0
    return folder / "out", public


def test_each_certificate_has_its_signature_beside_it(signed, capsys) -> None:
    folder, public = signed
    names = {"lot-release.cert.dsse.json", "lot-target.cert.dsse.json"}
    assert names <= {path.name for path in folder.iterdir()}
    assert all(name in (folder / "SHA256SUMS").read_text() for name in names)
    assert main(["recheck", str(folder), "--signed-by", public]) == 0
    said = capsys.readouterr().out
    assert said.count("ACCEPTED") == said.count("signed by ") == 2
    assert "2 certificates, all accepted" in said


def test_the_certificate_is_the_same_without_a_signature(signed, tmp_path) -> None:
    assert certify(LOT, "-o", str(tmp_path)) == 0
    assert not list(tmp_path.glob("*.dsse.json"))
    assert (tmp_path / "lot-release.cert.json").read_bytes() == (signed[0] / "lot-release.cert.json").read_bytes()


def test_what_is_not_signed_so_is_rejected(signed, tmp_path, capsys) -> None:
    folder, public = signed
    _, stranger = write_keys(tmp_path, "stranger")
    path = shutil.copy(folder / "lot-release.cert.json", tmp_path)
    envelope = tmp_path / "lot-release.cert.dsse.json"

    def said(key: str) -> tuple[int, str]:
        status = main(["recheck", str(path), "--signed-by", key])
        return status, capsys.readouterr().out

    assert said(public) == (1, f"REJECTED: not signed: {envelope} is not there\n")
    envelope.write_text("{}")
    status, line = said(public)
    assert (status, line.count("\n"), line.startswith("MALFORMED")) == (2, 1, True)
    shutil.copy(folder / "lot-target.cert.dsse.json", envelope)
    assert said(public)[0] == 1
    shutil.copy(folder / "lot-release.cert.dsse.json", envelope)
    assert said(public)[0] == 0
    assert said(stranger)[0] == 1
    Path(path).write_bytes(Path(path).read_bytes().replace(b"lot-release", b"lot-RELEASE"))
    status, line = said(public)
    assert (status, "holds no signature" in line) == (1, True)


def test_a_password_is_taken_from_the_environment(tmp_path, capsys, monkeypatch) -> None:
    private, public = write_keys(tmp_path, "key", b"a bead")
    out = tmp_path / "out"
    monkeypatch.setattr(sys, "stdin", open(os.devnull))  # noqa: SIM115 (it lives as long as the test)
    for value, reason in ((None, f"set {VARIABLE}, or run this at a terminal"), ("wrong", "does not open it")):
        monkeypatch.delenv(VARIABLE, raising=False)
        if value is not None:
            monkeypatch.setenv(VARIABLE, value)
        assert certify(LOT, "-o", str(out), "--sign", private) == 2
        complaint = capsys.readouterr().err
        assert reason in complaint
        assert complaint.count("\n") == 1
        assert not out.exists()
    monkeypatch.setenv(VARIABLE, "a bead")
    assert certify(LOT, "-o", str(out), "--sign", private, "--json") == 0
    answer = json.loads(capsys.readouterr().out)
    assert "lot-release.cert.dsse.json" in answer["files"]
    assert main(["recheck", str(out / "lot-release.cert.json"), "--signed-by", public, "--json"]) == 0
    assert f"signed by {answer['signed_by']}" in json.loads(capsys.readouterr().out)["lines"]


def test_a_password_is_asked_for_at_a_terminal(tmp_path) -> None:
    """A terminal of its own for the command: it asks, is answered, and does not show the answer."""
    private, _ = write_keys(tmp_path, "key", b"a bead")
    words = [sys.executable, "-m", "verify", "certify", LOT, "-o", str(tmp_path / "out"), "--no-pdf", "--sign", private]
    environment = {key: value for key, value in os.environ.items() if key != VARIABLE}
    pid, terminal = pty.fork()
    if pid == 0:
        os.chdir(ROOT)
        os.execve(sys.executable, words, environment)
    seen, answered = b"", False
    while True:
        try:
            part = os.read(terminal, 1000)
        except OSError:
            break
        if not part:
            break
        seen += part
        if b"Password of" in seen and not answered:
            os.write(terminal, b"a bead\n")
            answered = True
    os.close(terminal)
    _, status = os.waitpid(pid, 0)
    assert os.waitstatus_to_exitcode(status) == 0, seen
    assert b"a bead" not in seen
    assert (tmp_path / "out" / "lot-release.cert.dsse.json").is_file()


def test_misuse_is_one_line_before_any_work(signed, tmp_path, capsys) -> None:
    folder, public = signed
    certificate = str(folder / "lot-release.cert.json")
    out = tmp_path / "out"
    for words in (
        ["certify", LOT, "-o", str(out), "--sign", "no-such.pem"],
        ["certify", LOT, "-o", str(out), "--sign", public],
        ["certify", LOT, "-o", str(out), "--sign", LOT],
        ["recheck", certificate, "--signed-by", "no-such.pem"],
        ["recheck", certificate, "--signed-by", LOT],
        ["recheck", "-", "--signed-by", public],
        ["recheck", str(folder / "lot-release.cert.txt"), "--signed-by", public],
    ):
        assert main(words) == 2
        said = capsys.readouterr()
        assert (said.out, said.err.count("\n")) == ("", 1)
    assert not out.exists()


def test_a_missing_extra_is_told_in_one_line(signed, tmp_path) -> None:
    """Cryptography as if it were not installed."""
    private, public = write_keys(tmp_path, "key")
    code = (
        "import sys; sys.modules['cryptography'] = None; from verify.cli.main import main; sys.exit(main(sys.argv[1:]))"
    )
    for words in (
        ["certify", LOT, "-o", str(tmp_path / "out"), "--sign", private],
        ["recheck", str(signed[0] / "lot-release.cert.json"), "--signed-by", public],
    ):
        done = subprocess.run(
            [sys.executable, "-c", code, *words], capture_output=True, text=True, check=False, cwd=ROOT
        )
        assert (done.returncode, done.stdout, done.stderr.count("\n")) == (2, "", 1)
        assert '".[sign]"' in done.stderr
    assert not (tmp_path / "out").exists()
