"""``sidecheck certify`` as a whole command, and the recheck by the page's own instructions."""

from __future__ import annotations

import hashlib
import json
import re
import shlex
import shutil
import subprocess
import sys
from html import unescape
from pathlib import Path

import pytest

from verify.cli.main import main

ROOT = Path(__file__).resolve().parents[2]
DEMO = ROOT / "casebook" / "demo"
LOT, TARGET = DEMO / "lot-release.case.toml", DEMO / "lot-target.case.toml"


def certify(*words: object) -> int:
    return main(["certify", *(str(word) for word in words), "--digits", "20"])


def contents(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir()}


@pytest.fixture(scope="module")
def written(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("certify") / "out"
    assert certify(LOT, "-o", folder, "--issued", "2026-12-01", "--paper", "letter") == 0
    return folder


def test_files_and_their_sums(written: Path) -> None:
    files = contents(written)
    wanted = {
        "lot-release.cert.json",
        "lot-release.cert.txt",
        "lot-release.html",
        "lot-release.pdf",
        "recheck.py",
        "SHA256SUMS",
    }
    assert set(files) == wanted
    assert files["lot-release.cert.json"] == files["lot-release.cert.txt"]
    assert files["recheck.py"] == (ROOT / "verify" / "certificate" / "recheck.py").read_bytes()
    sums = {name: digest for digest, name in (line.split("  ") for line in files["SHA256SUMS"].decode().splitlines())}
    assert sums == {name: hashlib.sha256(data).hexdigest() for name, data in files.items() if name != "SHA256SUMS"}


def test_recheck_from_an_empty_folder_by_the_page_alone(written: Path, tmp_path: Path) -> None:
    """Only what the page says is done: its digests compared, its command run."""
    page = (written / "lot-release.html").read_text(encoding="utf-8")
    for name in ("lot-release.cert.json", "recheck.py"):
        shutil.copy(written / name, tmp_path)
        assert hashlib.sha256((tmp_path / name).read_bytes()).hexdigest() in page
    commands = re.search(r"<pre>(.*?)</pre>", page, re.DOTALL)
    assert commands is not None
    command = unescape(commands[1]).strip().splitlines()[-1]
    words = shlex.split(command)
    assert words[:3] == ["python", "-I", "-S"]
    done = subprocess.run(
        [sys.executable, *words[1:]], cwd=tmp_path, env={}, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr
    first, second = done.stdout.splitlines()[:2]
    assert first.startswith("ACCEPTED")
    assert second.split()[-1] == hashlib.sha256((written / "lot-release.cert.json").read_bytes()).hexdigest()


def test_the_pdf_alone_says_how(written: Path) -> None:
    """From the text of the PDF: both digests, the file's name and the command."""
    pdftotext = shutil.which("pdftotext")
    if pdftotext is None:
        pytest.skip("pdftotext is not installed here; continuous integration installs it")
    done = subprocess.run([pdftotext, written / "lot-release.pdf", "-"], capture_output=True, text=True, check=True)
    lines = done.stdout.splitlines()
    assert "python -I -S recheck.py lot-release.cert.json" in lines
    for name in ("lot-release.cert.json", "recheck.py"):
        assert hashlib.sha256((written / name).read_bytes()).hexdigest() in lines


def test_regenerating_gives_identical_bytes(written: Path, tmp_path: Path) -> None:
    code = "import sys; from verify.cli.main import main; sys.exit(main(sys.argv[1:]))"
    words = ["certify", str(LOT), "-o", str(tmp_path), "--issued", "2026-12-01", "--paper", "letter", "--digits", "20"]
    subprocess.run([sys.executable, "-c", code, *words], cwd=ROOT, check=True, capture_output=True)
    assert contents(tmp_path) == contents(written)


def test_nothing_is_overwritten_without_force(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert certify(LOT, "-o", tmp_path, "--no-pdf") == 0
    before = contents(tmp_path)
    assert "lot-release.pdf" not in before
    assert certify(LOT, "-o", tmp_path, "--no-pdf") == 0
    assert contents(tmp_path) == before
    capsys.readouterr()
    assert certify(LOT, "-o", tmp_path, "--no-pdf", "--issued", "2027-01-01") == 2
    complaint = capsys.readouterr().err
    assert "--force" in complaint
    assert len([line for line in complaint.splitlines() if "exists" in line]) == 1
    assert contents(tmp_path) == before
    assert certify(LOT, "-o", tmp_path, "--no-pdf", "--issued", "2027-01-01", "--force") == 0
    assert contents(tmp_path) != before


def test_what_the_checker_leaves_open_is_written_and_told(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Its limit of work: a mean of 1e14."""
    case = ROOT / "casebook" / "numerics" / "huge-poisson.case.toml"
    assert certify(case, "-o", tmp_path / "out", "--no-pdf") == 3
    assert "huge-poisson: UNDECIDED" in capsys.readouterr().err
    assert (tmp_path / "out" / "huge-poisson.cert.json").is_file()


def test_a_bundle_has_an_overview(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert certify(LOT, TARGET, "-o", tmp_path, "--json") == 0
    said = json.loads(capsys.readouterr().out)
    assert set(said["certificates"]) == {"lot-release", "lot-target"}
    assert set(said["files"]) == set(contents(tmp_path))
    overview = (tmp_path / "index.html").read_text(encoding="utf-8")
    for name, entry in said["certificates"].items():
        assert f'href="{name}.html"' in overview
        assert entry["sha256"] in overview
    index = json.loads((tmp_path / "index.json").read_text(encoding="utf-8"))
    assert [entry["file"] for entry in index["certificates"]] == ["lot-release.cert.json", "lot-target.cert.json"]
    assert (tmp_path / "index.pdf").read_bytes().startswith(b"%PDF")


@pytest.mark.parametrize(
    ("words", "status", "reason"),
    [
        ((DEMO / "no-such.case.toml", "-o", "x"), 2, "no-such.case.toml"),
        ((LOT, LOT, "-o", "x"), 2, "two cases are named"),
        ((LOT, "-o", "x", "--paper", "a5"), 2, "paper"),
        ((LOT, "-o", "x", "--tolerance", "0"), 2, "tolerance"),
        ((ROOT / "casebook" / "refusals" / "poisson-wrong-constant.case.toml", "-o", "x"), 1, "refuted"),
    ],
)
def test_refusals(words: tuple[object, ...], status: int, reason: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert certify(*words) == status
    assert reason in capsys.readouterr().err
    assert not Path("x").exists()


def test_two_levels_are_certified_under_their_own_theorem(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    case = tmp_path / "two.case.toml"
    text = TARGET.read_text(encoding="utf-8").partition("[problem]")[0]
    case.write_text(text + '[problem]\nnull = "8 <= lam <= 12"\nalpha = ["0.02", "0.05"]\nn = 1\n', encoding="utf-8")
    assert certify(case, "-o", tmp_path, "--no-pdf") == 0
    assert main(["recheck", str(tmp_path / "two.cert.json"), "--case", str(case)]) == 0
    said = capsys.readouterr().out
    assert "Theorem 3.6.1" in said
    assert "unbiased" not in said


def test_a_fraction_that_is_a_decimal_is_certified_exactly(tmp_path: Path) -> None:
    """Ten fair coins at level (11 + 45/8)/1024: gamma is 1/8, which two decimals round to neither side by digits."""
    case = tmp_path / "coins.case.toml"
    case.write_text(
        '[density]\nformula = "binomial(10, x)*p**x*(1-p)**(10-x)"\nvariable = "x"\nsupport = "integers 0..10"\n'
        'parameter = "p"\nspace = "0 < p < 1"\n[problem]\nnull = "p <= 1/2"\nalpha = "133/8192"\nn = 1\n',
        encoding="utf-8",
    )
    assert certify(case, "-o", tmp_path, "--no-pdf") == 0
    assert json.loads((tmp_path / "coins.cert.json").read_text())["predicate"]["test"]["gamma"] == "1/8"
