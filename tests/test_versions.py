"""The versions on which a result depends, said in one place and taken from there by all."""

from importlib.metadata import PackageNotFoundError

import pytest

import verify
from verify import versions
from verify.certificate import identification


def test_a_certificate_names_the_same_versions():
    named = identification.versions()
    assert set(versions.versions()) <= set(named.items())
    assert named["sidecheck"] == verify.__version__


def test_an_engine_that_is_not_installed_is_named_so(monkeypatch: pytest.MonkeyPatch):
    def missing(name: str) -> str:
        raise PackageNotFoundError(name)

    monkeypatch.setattr("importlib.metadata.version", missing)
    assert dict(versions.versions.__wrapped__())["scipy"] == versions.ABSENT
