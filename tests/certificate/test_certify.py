# ruff: noqa: E501 (tables of cases, one a line)
"""The producer's certificates are accepted by the rechecker, reproducible, and equal the independent maker's
numbers.
"""

from __future__ import annotations

import copy
import json
import sys
from fractions import Fraction
from pathlib import Path
from types import ModuleType
from typing import Any

import jsonschema
import pytest
import rfc8785
from hypothesis import given, settings
from hypothesis import strategies as st

import verify
from verify.certificate import recheck
from verify.certificate.certify import Certificate, certify
from verify.certificate.write import bundle_index, write_files
from verify.errors import InputError, UndecidedError

NAMES = [
    "poisson irrational", "poisson above", "binomial outside", "negative binomial interval", "gamma point", "power outside",
    "normal interval", "inverse Gaussian below", "table point", "kernel interval", "truncated point",
]  # fmt: skip


def problem_of(case: Any) -> verify.Problem:
    entry = case.density
    density = verify.Density(**entry)
    levels = case.alpha[0] if len(case.alpha) == 1 else case.alpha
    return verify.Problem(density, null=case.null, alpha=levels, n=case.n)


@pytest.fixture(scope="module")
def produced(certificates: dict[str, Any], maker: ModuleType) -> dict[str, Certificate]:
    cases = sys.modules["certificate_cases"].all_cases(maker.Case)
    return {
        name: certify(problem_of(cases[name]), digits=cases[name].digits, tolerance=cases[name].tolerance)
        for name in NAMES
    }


def test_the_rechecker_accepts_what_is_produced(produced: dict[str, Certificate]) -> None:
    assert {name: certificate.recheck().status for name, certificate in produced.items()} == dict.fromkeys(NAMES, 0)


def poisson_outside(null: str, alpha: str) -> Certificate:
    density = verify.Density(
        "exp(-m)*m**x/factorial(x)", variable="x", support="integers >= 0", parameter="m", space="m > 0"
    )
    return certify(verify.Problem(density, null=null, alpha=alpha, n=1), digits=10)


def test_fractions_that_are_printed_as_zero_give_a_size_of_exactly_zero() -> None:
    certificate = poisson_outside("m <= 8 or m >= 12", "1e-20")
    (row,) = certificate.predicate["rounding"]["rows"]
    assert certificate.predicate["test"]["y2"] - certificate.predicate["test"]["y1"] == 1
    assert set(row["numbers"].values()) == {"0.0"}
    assert (row["expectations"], row["size"]) == (["0", "0"], "0")
    assert certificate.recheck().status == 0


@pytest.mark.parametrize(
    "null", ["m <= 10 or m >= 10.00000000000000000001", "m <= 1/100 or m >= 1", "m <= 1/1000 or m >= 1/100"]
)
def test_a_size_that_is_not_located_is_left_out(null: str, maker: ModuleType) -> None:
    certificate = poisson_outside(null, "0.05")
    rows = certificate.predicate["rounding"]["rows"]
    assert any("size" not in row for row in rows)
    assert certificate.recheck().status == 0
    schema = json.loads((Path(verify.__file__).parent / "certificate" / "schema.json").read_text())
    jsonschema.Draft202012Validator(schema).validate(certificate.statement)
    for row in rows:  # to claim it all the same, or to hide one that is known, is not accepted
        other = copy.deepcopy(certificate.predicate)
        changed = other["rounding"]["rows"][row["decimals"] - 1]
        known = changed.pop("size", None)
        if known is None:
            changed["size"] = max(row["expectations"], key=lambda e: Fraction(e if isinstance(e, str) else e["upper"]))
        verdict = recheck.verdict(maker.canonical(maker.statement(other)))
        assert verdict[0] == (3 if known is None else 1)


def test_a_power_that_is_flat_has_its_size_at_the_limits() -> None:
    """One trial, and the same fraction at both places: the test rejects with this probability whatever p is."""
    density = verify.Density(weights=["1", "1"], variable="x", support="integers 0..1", parameter="t", space="t > 0")
    certificate = certify(verify.Problem(density, null="t <= 1/2 or t >= 2", alpha="0.05", n=1), digits=10)
    assert all("size" in row for row in certificate.predicate["rounding"]["rows"])
    assert certificate.recheck().status == 0


def test_cutoffs_that_are_printed_alike_leave_no_window() -> None:
    density = verify.Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0")
    certificate = certify(verify.Problem(density, null="1 <= t <= 2", alpha="0.999999", n=4), digits=10)
    row = certificate.predicate["rounding"]["rows"][0]
    assert row["numbers"]["c1"] == row["numbers"]["c2"]
    assert (row["expectations"], row["size"]) == (["1", "1"], "1")
    assert certificate.recheck().status == 0


def test_the_numbers_are_those_of_the_independent_maker(
    produced: dict[str, Certificate], certificates: dict[str, Any]
) -> None:
    for name, certificate in produced.items():
        other = certificates[name]["predicate"]
        assert all(same(value, other["test"][key]) for key, value in certificate.predicate["test"].items()), name
        mine, theirs = (entry["side_conditions"][0]["expectation"] for entry in (certificate.predicate, other))
        assert same(mine, theirs), name


def same(mine: Any, theirs: Any) -> bool:
    """Whether two claims are equal; the maker knows some numbers exactly that the producer encloses."""
    if isinstance(mine, dict) and isinstance(theirs, str):
        return Fraction(mine["lower"]) < Fraction(theirs) < Fraction(mine["upper"])
    return bool(mine == theirs)


def test_the_bytes_are_canonical_and_have_the_form_of_the_schema(produced: dict[str, Certificate]) -> None:
    schema = json.loads((Path(verify.__file__).parent / "certificate" / "schema.json").read_text())
    for certificate in produced.values():
        assert rfc8785.dumps(certificate.statement) == certificate.data
        jsonschema.Draft202012Validator(schema).validate(certificate.statement)


def test_the_same_problem_gives_the_same_bytes(
    produced: dict[str, Certificate], certificates: dict[str, Any], maker: ModuleType
) -> None:
    case = sys.modules["certificate_cases"].all_cases(maker.Case)["kernel interval"]
    assert (
        certify(problem_of(case), digits=case.digits, tolerance=case.tolerance).data == produced["kernel interval"].data
    )


def test_the_day_of_issue_comes_from_the_user_only(
    produced: dict[str, Certificate],
    certificates: dict[str, Any],
    maker: ModuleType,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    case = sys.modules["certificate_cases"].all_cases(maker.Case)["kernel interval"]
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "86400")
    assert produced["kernel interval"].predicate["issued"] == ""
    assert certify(problem_of(case), digits=20).predicate["issued"] == "1970-01-02"
    assert certify(problem_of(case), digits=20, issued="May").predicate["issued"] == "May"
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "yesterday")
    with pytest.raises(InputError, match="SOURCE_DATE_EPOCH"):
        certify(problem_of(case), digits=20)


def test_a_density_that_is_none_gets_no_certificate() -> None:
    density = verify.Density(
        "2*exp(-lam)*lam**x/factorial(x)",
        variable="x",
        support="integers >= 0",
        parameter="lam",
        space="lam > 0",
    )
    with pytest.raises(UndecidedError):
        certify(verify.Problem(density, null="lam = 5", alpha="0.05", n=1), digits=20)


@pytest.mark.parametrize("tolerance", ["0", "-1", "1", "x", "1/0"])
def test_a_bad_tolerance_is_refused(tolerance: str) -> None:
    density = verify.Density(
        "exp(-lam)*lam**x/factorial(x)",
        variable="x",
        support="integers >= 0",
        parameter="lam",
        space="lam > 0",
    )
    with pytest.raises(InputError, match="tolerance"):
        certify(verify.Problem(density, null="lam = 5", alpha="0.05", n=1), digits=20, tolerance=tolerance)


def test_writing_is_careful(produced: dict[str, Certificate], tmp_path: Path) -> None:
    first, second = produced["poisson above"], produced["gamma point"]
    paths = first.write(tmp_path)
    assert paths.json.read_bytes() == paths.text.read_bytes() == first.data
    assert f"{first.sha256}  certificate.cert.json\n" in paths.sums.read_text()
    first.write(tmp_path)
    with pytest.raises(InputError, match="exists"):
        second.write(tmp_path)
    assert paths.json.read_bytes() == first.data
    second.write(tmp_path, force=True)
    assert paths.json.read_bytes() == second.data
    assert sorted(path.name for path in tmp_path.iterdir()) == [
        "SHA256SUMS",
        "certificate.cert.json",
        "certificate.cert.txt",
    ]
    assert verify.recheck(paths.json).accepted
    with pytest.raises(InputError, match="cannot be read"):
        verify.recheck(tmp_path / "missing.cert.json")


def test_a_bundle_has_an_index(produced: dict[str, Certificate], tmp_path: Path) -> None:
    made = {name.replace(" ", "-"): certificate.data for name, certificate in produced.items()}
    entries = json.loads(bundle_index(made))["certificates"]
    write_files({f"{name}.cert.json": data for name, data in made.items()}, tmp_path)
    assert [entry["file"] for entry in entries] == sorted(f"{name.replace(' ', '-')}.cert.json" for name in NAMES)
    assert all(verify.recheck(tmp_path / entry["file"]).accepted for entry in entries)
    assert bundle_index(dict(reversed(made.items()))) == bundle_index(made)


def test_a_continuous_cutoff_of_0_has_no_significant_digit_and_gets_no_certificate() -> None:
    """For alpha = 1/2 the cutoff is n times the limit, by symmetry: 0 here, and n one unit further on."""

    def asked(origin: str) -> verify.Problem:
        formula = f"exp(-(x-{origin}-mu)**2/2)/sqrt(2*pi)"
        density = verify.Density(formula, variable="x", support="reals", parameter="mu", space="reals")
        return verify.Problem(density, null="mu <= 0", alpha="1/2", n=3)

    with pytest.raises(UndecidedError, match=r"the cutoff c is 0 .* significant digits, and 0 has none; .* origin"):
        certify(asked("0"), digits=20)
    moved = certify(asked("1"), digits=20)
    claimed = moved.predicate["test"]["c"]
    assert Fraction(claimed["lower"]) < 3 < Fraction(claimed["upper"])
    assert moved.recheck().status == 0


def poisson(null: str, alpha: Any = "0.05", n: int = 1) -> verify.Problem:
    return verify.Problem(
        verify.Density("exp(-m)*m**x/factorial(x)", variable="x", support="integers >= 0", parameter="m", space="m > 0"),
        null=null, alpha=alpha, n=n,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("other", "digits", "reason"),
    [
        (poisson("m <= 8"), 30, "another problem"),
        (poisson("m >= 7"), 30, "another problem"),
        (poisson("m <= 7", "0.01"), 30, "another problem"),
        (poisson("m <= 7", n=2), 30, "another problem"),
        (poisson("m <= 7"), 15, "15 digits"),
        (poisson("m <= 7"), 29, "29 digits"),
    ],
)
def test_a_solution_must_be_that_of_the_problem_with_enough_digits(other, digits, reason) -> None:
    with pytest.raises(InputError, match=reason) as error:
        certify(poisson("m <= 7"), digits=20, solution=verify.solve(other, digits))
    assert error.value.key == "solution"


def test_a_solution_at_hand_gives_the_same_bytes() -> None:
    """Another writing of the level is the same problem."""
    solved = verify.solve(poisson("m <= 7", Fraction(1, 20)), 30)
    assert certify(poisson("m <= 7"), digits=20, solution=solved).data == certify(poisson("m <= 7"), digits=20).data


@given(st.integers(12, 40), st.integers(15, 60))
@settings(max_examples=10, deadline=None)
def test_what_is_certified_is_accepted_whatever_the_digits_at_hand(asked: int, solved: int) -> None:
    solution = verify.solve(poisson("m <= 7"), solved)
    if solved < asked + 10:
        with pytest.raises(InputError):
            certify(poisson("m <= 7"), digits=asked, solution=solution)
    else:
        assert certify(poisson("m <= 7"), digits=asked, solution=solution).recheck().status == 0
