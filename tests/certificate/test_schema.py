"""The published schema takes every certificate, and refuses other forms."""

from __future__ import annotations

import copy
import json
from pathlib import Path
from typing import Any

import jsonschema

import verify.certificate

SCHEMA = json.loads((Path(verify.certificate.__path__[0]) / "schema.json").read_text())


def test_the_schema_is_a_schema() -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


def test_certificates_have_the_form_of_the_schema(certificates: dict[str, Any]) -> None:
    reader = jsonschema.Draft202012Validator(SCHEMA)
    for name, certificate in certificates.items():
        assert [error.message for error in reader.iter_errors(certificate)] == [], name


def test_the_schema_refuses_unknown_and_missing_keys(certificates: dict[str, Any]) -> None:
    reader = jsonschema.Draft202012Validator(SCHEMA)
    certificate = certificates["poisson outside"]
    for key in certificate["predicate"]:
        changed = copy.deepcopy(certificate)
        del changed["predicate"][key]
        assert not reader.is_valid(changed), key
    assert not reader.is_valid({**certificate, "more": 1})
