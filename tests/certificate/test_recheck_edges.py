"""Numbers that are exact by chance, long tables, and every entry of a case file."""

from __future__ import annotations

import copy
import json
import re
from fractions import Fraction
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

import verify
from verify.certificate import recheck
from verify.certificate.certify import certify


def status(problem: verify.Problem) -> int:
    return certify(problem, digits=20).recheck().status


def test_an_exact_median_is_not_rejected(maker: ModuleType) -> None:
    """The median of a normal law: the one-sided cutoff at level 1/2 is n times the limit, claimed as 3 or enclosed."""
    density = verify.Density(
        "exp(-(x-mu)**2/2)/sqrt(2*pi)", variable="x", support="reals", parameter="mu", space="reals"
    )
    made = certify(verify.Problem(density, null="mu <= 1", alpha="1/2", n=3), digits=20)
    assert made.recheck().status == 0
    predicate = copy.deepcopy(made.predicate)
    predicate["test"]["c"] = "3"
    predicate["double_precision"]["opinions"] = []
    assert recheck.verdict(maker.canonical(maker.statement(predicate)))[0] in (0, 3)


def test_an_exact_cutoff_beside_the_true_one_is_not_accepted(maker: ModuleType, certificates: dict[str, Any]) -> None:
    predicate = copy.deepcopy(certificates["normal above"]["predicate"])
    predicate["test"]["c"] = "19"
    assert recheck.verdict(maker.canonical(maker.statement(predicate)))[0] in (1, 3)


def test_masses_that_are_rational_by_chance() -> None:
    """Negative binomial of size 1/2 and p = 1/4: P(0) = 1/2, so that fractions may be rational."""
    density = verify.Density(
        "gamma(x+r)/(gamma(r)*factorial(x))*p**r*(1-p)**x",
        variable="x", support="integers >= 0", parameter="p", space="0 < p < 1", constants={"r": "1/2"},
    )  # fmt: skip
    assert status(verify.Problem(density, null="p >= 1/4", alpha="1/5", n=1)) == 0


def test_a_table_that_ends_before_the_cutoffs_is_refused(maker: ModuleType, certificates: dict[str, Any]) -> None:
    """Zero-truncated Poisson: without its far weights the sums would be those of another law."""
    certificate = certificates["truncated outside"]
    test, law = certificate["predicate"]["test"], certificate["predicate"]["law"]
    needed = test["y2"] - 6 * law["first"] + 1
    for length, wanted in ((needed, 0), (needed - 1, 2)):
        predicate = {**certificate["predicate"], "law": {**law, "weights": law["weights"][:length]}}
        assert recheck.verdict(maker.canonical(maker.statement(predicate)))[0] == wanted


@pytest.mark.parametrize(("factor", "wanted"), [("-1", 1), ("3", 1), ("2", 0), ("1/2", 0)])
def test_the_constant_of_a_density_whose_statistic_turns(
    maker: ModuleType, certificates: dict[str, Any], factor: str, wanted: int
) -> None:
    """(x - m)**2 takes each value twice: a density has one sign and at most all the mass; the rest is on trust."""
    predicate = copy.deepcopy(certificates["variance point"]["predicate"])
    predicate["problem"]["density"]["formula"] = f"{factor}*({predicate['problem']['density']['formula']})"
    assert recheck.verdict(maker.canonical(maker.statement(predicate)))[0] == wanted


def test_integers_beyond_a_number_begin_at_the_next() -> None:
    assert recheck.bounds("integers > 0", "x", {}) == recheck.bounds("integers >= 1", "x", {}) == [1, None]
    assert recheck.bounds("-1 < x < 5", "x", {}) == [-1, 5]
    assert recheck.bounds("integers < a", "x", {"a": Fraction(5)}) == [None, 4]


def test_a_variable_may_have_any_name(maker: ModuleType, certificates: dict[str, Any]) -> None:
    text = (
        maker.canonical(certificates["poisson point"]["predicate"])
        .decode()
        .replace("lam", "text")
        .replace("T(x)", "T(y)")
    )
    predicate = json.loads(re.sub(r"\bx\b", "self", text).replace("h(self)", "h(x)").replace("T(y)", "T(x)"))
    assert recheck.verdict(maker.canonical(maker.statement(predicate)))[0] == 0


CASE = """[density]
formula = "binomial(m, x) * p**x * (1-p)**(m-x)"
variable = "x"
support = "integers 0..m"
parameter = "p"
space = "0 < p < 1"
constants = { m = "10" }
[problem]
null = "p <= 2/5 or p >= 3/5"
alpha = "0.05"
n = 5
"""


@pytest.mark.parametrize(
    ("old", "new", "wanted"),
    [
        ("0..m", "0..10", 0), ('"0.05"', '["1/20", "5e-2"]', 0), ("2/5 or", "0.4 or", 0), ("<=", "≤", 0),
        ("m, x)", "m, x) * 1", 1), ("0..m", "0..11", 1), ("0 < p < 1", "0 < p < 2", 1), ('m = "10"', 'm = "11"', 1),
        ("2/5 or", "1/5 or", 1), ('"p <= 2/5 or p >= 3/5"', '"2/5 <= p <= 3/5"', 1), ('"0.05"', '"0.06"', 1),
        ("n = 5", "n = 6", 1), ("0..m", "from 0 to m", 2), ("0..m", "> -1", 1),
    ],
)  # fmt: skip
def test_every_entry_of_the_case_file_is_compared(
    maker: ModuleType, certificates: dict[str, Any], tmp_path: Path, old: str, new: str, wanted: int
) -> None:
    case = tmp_path / "lot.case.toml"
    case.write_text(CASE.replace(old, new), encoding="utf-8")
    certificate = maker.statement(certificates["binomial outside 5"]["predicate"], case.read_bytes())
    assert recheck.verdict(maker.canonical(certificate), case)[0] == wanted
