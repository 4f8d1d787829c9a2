"""Certificates for the tests of the page, each made once."""

from __future__ import annotations

import json
from collections.abc import Callable
from functools import cache
from typing import Any

import pytest

from verify.certificate.build import canonical
from verify.certificate.certify import certify
from verify.problem.density import Density
from verify.problem.problem import Problem

POISSON = {
    "formula": "exp(-lam)*lam**x/factorial(x)",
    "variable": "x",
    "support": "integers >= 0",
    "parameter": "lam",
    "space": "lam > 0",
}
NORMAL = {
    "formula": "exp(-(x - mu)**2/2)/sqrt(2*pi)",
    "variable": "x",
    "support": "reals",
    "parameter": "mu",
    "space": "reals",
}
BINOMIAL = {
    "formula": "binomial(m, x)*p**x*(1 - p)**(m - x)",
    "variable": "x",
    "support": "integers 0..m",
    "parameter": "p",
    "space": "0 < p < 1",
    "constants": {"m": "10"},
}
GEOMETRIC = {
    "formula": "p*(1 - p)**(x - 1)",
    "variable": "x",
    "support": "integers >= 1",
    "parameter": "p",
    "space": "0 < p < 1",
}
TABLE = {
    "weights": ["1", "3", "2", "1/2"],
    "variable": "x",
    "support": "integers 0..3",
    "parameter": "t",
    "space": "t > 0",
}
PROBLEMS: dict[str, tuple[dict[str, Any], str, Any, int]] = {
    "outside": (POISSON, "lam <= 8 or lam >= 12", "0.05", 10),
    "two levels": (POISSON, "lam <= 8 or lam >= 12", ["0.02", "0.05"], 20),
    "interval": (NORMAL, "0 <= mu <= 1", "0.05", 9),
    "point": (POISSON, "lam = 5", "0.05", 1),
    "one-sided": (NORMAL, "mu <= 0", "0.05", 4),
    "one atom": (BINOMIAL, "p <= 2/5 or p >= 3/5", "0.05", 1),
    "irrational": (POISSON, "lam <= sqrt(2) or lam >= 4", "1/20", 3),
    "falling": (GEOMETRIC, "p <= 1/2", "0.05", 5),
    "lattice": (TABLE, "t <= 1/2 or t >= 2", "0.05", 6),
}


@cache
def certificate(key: str) -> bytes:
    density, null, alpha, n = PROBLEMS[key]
    return certify(Problem(Density(**density), null=null, alpha=alpha, n=n), digits=30, issued="2026-12-01").data


@pytest.fixture(scope="session")
def made() -> Callable[[str], bytes]:
    """A certificate by the name of its problem."""
    return certificate


@pytest.fixture(scope="session")
def retitled() -> Callable[[str], bytes]:
    """A certificate with foreign words in it; the rechecker would see that it was changed, but its page must
    be safe."""

    def change(words: str) -> bytes:
        statement = json.loads(certificate("outside"))
        predicate = statement["predicate"]
        predicate["problem"] |= {"title": words, "source": words}
        predicate["issued"] = words
        predicate["derivation"]["steps"][0] |= {"statement": words, "reason": words}
        predicate["double_precision"]["flags"] = [{"kind": words, "number": "c1", "text": words}]
        predicate["double_precision"]["opinions"][0]["note"] = words
        predicate["assumptions"].append(words)
        statement["subject"][0]["name"] = words
        return canonical(statement)

    return change
