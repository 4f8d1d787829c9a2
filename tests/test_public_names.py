"""The public names, and that asking for them costs nothing before they are used."""

import subprocess
import sys
from importlib import import_module

import pytest

import verify

NAMES = [
    "Density",
    "Enclosure",
    "InputError",
    "Problem",
    "SidecheckError",
    "UndecidedError",
    "compare",
    "derive",
    "read_case",
    "solve",
]


@pytest.mark.parametrize("name", NAMES)
def test_public_name_is_there(name: str) -> None:
    assert callable(getattr(verify, name))
    assert name in dir(verify)


def test_no_name_is_public_by_accident() -> None:
    assert set(NAMES) <= set(verify.__all__)
    assert set(verify.__all__) - set(NAMES) <= {"__version__", "certify", "plan", "recheck", "review"}


def test_unknown_name_is_an_attribute_error() -> None:
    with pytest.raises(AttributeError, match="no attribute 'solv'"):
        verify.solv  # noqa: B018


def test_import_is_light() -> None:
    code = "import sys, verify, verify.cli.main; print([m for m in HEAVY if m in sys.modules])"
    heavy = ["sympy", "mpmath", "flint", "numpy", "scipy", "rich", "tomllib"]
    done = subprocess.run(
        [sys.executable, "-c", f"HEAVY = {heavy}; {code}"], capture_output=True, text=True, check=True
    )
    assert done.stdout.strip() == "[]"


def test_a_subpackage_does_not_hide_a_function_of_the_same_name(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(verify.PUBLIC, "laws", "verify.laws.base")
    monkeypatch.delitem(verify.__dict__, "laws", raising=False)
    verify.laws = import_module("verify.laws")  # what the import system does
    assert "laws" not in verify.__dict__
