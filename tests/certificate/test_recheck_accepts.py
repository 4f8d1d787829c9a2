"""Certificates of every law and form, made without the package, are accepted."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest
import rfc8785

from verify.certificate import recheck

BARE = [sys.executable, "-I", "-S", recheck.__file__]


def test_every_law_and_form_is_accepted(certificates: dict[str, Any], maker: ModuleType, tmp_path: Path) -> None:
    for name, certificate in certificates.items():
        path = tmp_path / f"{name}.cert.json"
        path.write_bytes(maker.canonical(certificate))
        assert recheck.main([str(path)]) == 0, name


def test_the_bytes_are_the_canonical_form_of_an_outside_library(
    certificates: dict[str, Any], maker: ModuleType
) -> None:
    for certificate in certificates.values():
        data = maker.canonical(certificate)
        assert rfc8785.dumps(json.loads(data)) == data == recheck.canonical(json.loads(data))


@pytest.mark.parametrize(
    "name", ["poisson outside", "binomial outside", "gamma point", "normal interval", "truncated point"]
)
def test_a_bare_interpreter_accepts(certificates: dict[str, Any], maker: ModuleType, tmp_path: Path, name: str) -> None:
    path = tmp_path / "one.cert.json"
    path.write_bytes(maker.canonical(certificates[name]))
    run = subprocess.run([*BARE, str(path)], cwd=tmp_path, capture_output=True, text=True, env={}, check=False)
    assert (run.returncode, run.stderr) == (0, "")
    assert run.stdout.startswith("ACCEPTED under ")
    assert run.stdout.count("- on trust: ") == len(certificates[name]["predicate"]["assumptions"])


def test_decimal_arithmetic_written_in_python_accepts_too(
    short: dict[str, Any], maker: ModuleType, tmp_path: Path
) -> None:
    """The four operations are on trust: their other implementation, in Python itself, comes to the same verdict."""
    code = (
        "import runpy, sys, _pydecimal; sys.modules['decimal'] = _pydecimal; "
        "sys.argv = sys.argv[1:]; runpy.run_path(sys.argv[0], run_name='__main__')"
    )
    for name in ("poisson interval", "gamma above"):
        path = tmp_path / "one.cert.json"
        path.write_bytes(maker.canonical(short[name]))
        run = subprocess.run(
            [sys.executable, "-I", "-S", "-c", code, recheck.__file__, str(path)],
            capture_output=True,
            text=True,
            check=False,
        )
        assert (run.returncode, run.stderr) == (0, "")


def test_one_atom_is_decided_exactly(certificates: dict[str, Any]) -> None:
    """Binomial(10, p), p <= 2/5 or p >= 3/5: all the mass on 5, with fraction alpha / P(V = 5) (computed with
    fractions).
    """
    test = certificates["binomial outside"]["predicate"]["test"]
    assert (test["c1"], test["c2"], test["gamma1"]) == ("5", "5", "1953125/7838208")


def test_numbers_on_trust_have_a_status_of_their_own(
    certificates: dict[str, Any], maker: ModuleType, tmp_path: Path
) -> None:
    predicate = json.loads(json.dumps(certificates["gamma outside"]["predicate"]))
    predicate["law"] = {"name": "no closed form", "parameters": {}, "scale": "1", "shift": "0"}
    predicate["assumptions"].insert(-1, recheck.TRUSTED_NUMBERS)
    path = tmp_path / "trust.cert.json"
    path.write_bytes(maker.canonical(maker.statement(predicate)))
    assert recheck.main([str(path)]) == 4


def test_what_surrounds_numbers_on_trust_is_compared_all_the_same(
    certificates: dict[str, Any], maker: ModuleType
) -> None:
    base = json.loads(json.dumps(certificates["gamma outside"]["predicate"]))
    base["law"] = {"name": "no closed form", "parameters": {}, "scale": "1", "shift": "0"}
    base["assumptions"].insert(-1, recheck.TRUSTED_NUMBERS)
    changes: list[tuple[str, str]] = [
        ('"of":"phi"', '"of":"V phi"'), ('"at":"1"', '"at":"2"'), ('"target":"1/20"', '"target":"1/21"'),
        ('"numbers":{"c1":"', '"numbers":{"c1":"1'), ('"size":{', '"size":{"lower":"0.01","upper":"0.02"},"x":{'),
    ]  # fmt: skip
    for old, new in changes:
        text = maker.canonical(base).decode()
        assert old in text
        changed = json.loads(text.replace(old, new, 1))
        for row in changed["rounding"]["rows"]:
            row.pop("x", None)
        assert recheck.verdict(maker.canonical(maker.statement(changed)))[0] == 1, new


@pytest.mark.parametrize("name", ["gamma outside", "poisson interval"])
def test_a_named_law_cannot_be_passed_off_as_trusted(
    certificates: dict[str, Any], maker: ModuleType, tmp_path: Path, name: str
) -> None:
    predicate = json.loads(json.dumps(certificates[name]["predicate"]))
    predicate["law"]["name"] = "Gamma"
    path = tmp_path / "trust.cert.json"
    path.write_bytes(maker.canonical(maker.statement(predicate)))
    assert recheck.main([str(path)]) == 1


def test_the_case_file_is_compared(certificates: dict[str, Any], maker: ModuleType, tmp_path: Path) -> None:
    case = tmp_path / "lot.case.toml"
    case.write_text(
        '[density]\nformula = "exp(-lam) * lam**x / factorial(x)"\nvariable = "x"\nsupport = "integers >= 0"\n'
        'parameter = "lam"\nspace = "lam > 0"\n[problem]\nnull = "lam <= 8 or lam >= 12"\nalpha = "0.05"\nn = 10\n'
    )
    predicate = certificates["poisson outside"]["predicate"]
    path = tmp_path / "lot.cert.json"
    path.write_bytes(maker.canonical(maker.statement(predicate, case.read_bytes())))
    assert recheck.main([str(path), "--case", str(case)]) == 0
    case.write_text(case.read_text().replace("n = 10", "n = 11"))
    assert recheck.main([str(path), "--case", str(case)]) == 1
    path.write_bytes(maker.canonical(maker.statement(predicate, case.read_bytes())))
    assert recheck.main([str(path), "--case", str(case)]) == 1
