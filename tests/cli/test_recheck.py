"""``sidecheck recheck`` on files that are no certificates; acceptance is tested beside the checker itself."""

import json
import re
import subprocess
import sys
from pathlib import Path

from verify.cli.recheck import VERDICTS


def test_what_is_no_certificate_is_malformed(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    for text in ("", "{}", "[1, 2", '{"_type": 1}', "\x00"):
        path.write_text(text)
        done = sidecheck_here("recheck", str(path))
        assert done.returncode == 2
        assert done.stdout.startswith("MALFORMED")


def test_json_is_one_object(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    path.write_text("{}")
    answer = json.loads(sidecheck_here("recheck", str(path), "--json").stdout)
    assert (answer["verdict"], answer["status"]) == ("malformed", 2)


def test_of_several_the_bad_ones_are_named(sidecheck_here, tmp_path) -> None:
    assert sidecheck_here("certify", "casebook/demo/lot-release.case.toml", "-o", str(tmp_path), "--no-pdf",
                          "--digits", "15").returncode == 0  # fmt: skip
    good, bad = str(tmp_path / "lot-release.cert.json"), str(tmp_path / "bad.cert.json")
    text = Path(good).read_text()
    digit = re.search(r'"c1": \{[^}]*?"94', text) or re.search("94", text)
    assert digit is not None
    Path(bad).write_text(text[: digit.end() - 1] + "5" + text[digit.end() :])
    done = sidecheck_here("recheck", good, bad)
    assert done.returncode in (1, 2)
    assert done.stdout.startswith(f"{good}:\nACCEPTED")
    assert done.stdout.endswith(f"2 certificates, not accepted: {bad}\n")
    assert sidecheck_here("recheck", str(tmp_path)).stdout.endswith(f"2 certificates, not accepted: {bad}\n")
    answer = json.loads(sidecheck_here("recheck", bad, good, "--json").stdout)
    assert answer["status"] == done.returncode
    assert answer["certificates"][good]["verdict"] == "accepted"
    assert sidecheck_here("recheck", good, bad, "--case", "casebook/demo/lot-release.case.toml").returncode == 2


def test_missing_files_are_one_line(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    path.write_text("{}")
    (tmp_path / "empty").mkdir()
    for words in (["no-such.cert.json"], [str(tmp_path / "empty")], [str(path), "--case", "no-such.case.toml"]):
        done = sidecheck_here("recheck", *words)
        assert done.returncode == 2
        assert done.stderr.count("\n") == 1


def test_nothing_heavy_is_loaded() -> None:

    code = (
        "import sys; from verify.cli import main; main(['recheck', 'README.md']); "
        "print([m for m in ('sympy', 'flint', 'mpmath', 'numpy', 'scipy') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "[]"


def test_every_status_of_the_checker_stands_in_the_help(sidecheck) -> None:
    text = sidecheck("recheck", "--help").stdout.partition("exit status")[2]
    for code, meaning in VERDICTS.items():
        assert f"  {code} {meaning}" in text
    assert "4 of recheck alone" in sidecheck("--help").stdout


def test_numbers_on_trust_are_status_4(sidecheck, tmp_path) -> None:
    """An exponential density cut off at 1: its sums have no law of the list."""
    case = tmp_path / "tilt.case.toml"
    case.write_text(
        '[density]\nformula = "t*exp(t*x)/(exp(t) - 1)"\nvariable = "x"\nsupport = "reals in (0, 1)"\n'
        'parameter = "t"\nspace = "t > 0"\n'
        '[problem]\nnull = "t <= 1"\nalpha = "0.05"\nn = 1\n'
    )
    done = sidecheck("certify", str(case), "-o", str(tmp_path), "--no-pdf", "--digits", "15")
    assert done.returncode == 0, done.stderr
    done = sidecheck("recheck", str(tmp_path / "tilt.cert.json"))
    assert (done.returncode, done.stdout.partition(" under")[0]) == (4, "ACCEPTED, WITH THE NUMBERS TAKEN ON TRUST,")
