"""Case files: read exactly, and each mistake in one line."""

from __future__ import annotations

import hashlib
import io
import sys
from fractions import Fraction
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.errors import InputError
from verify.problem.casefile import MAX_BYTES, read_case, read_case_text

GOOD = """
title = "Bead suspension (invented)"

[density]
formula = "exp(-lam) * lam**x / factorial(x)"
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"
constants = { }

[problem]
null = "lam <= 8 or lam >= 12"
alternative = "8 < lam < 12"
alpha = 0.05
n = 10

[claim]
law = "Poisson(10*lam)"
c1 = 91
gamma1 = 0.3200
gamma2 = "0.51"

[expect]
verdict = "agrees"
slips = ["ends-exchanged"]

[table]
lower = "lo"
reported_as = "mean"
window = "open"
"""


def test_a_case_is_read_exactly(tmp_path: Path) -> None:
    path = tmp_path / "lot.case.toml"
    path.write_text(GOOD, encoding="utf-8")
    case = read_case(path)
    assert (case.name, case.path) == ("lot", str(path))
    assert case.problem is not None
    assert case.problem.levels == (Fraction(1, 20),) * 2
    assert case.claim == {"law": "Poisson(10*lam)", "c1": "91", "gamma1": "0.3200", "gamma2": "0.51"}
    assert case.expect == {"verdict": "agrees", "slips": ["ends-exchanged"]}
    assert case.require_problem() is case.problem
    assert case.table == {"lower": "lo", "reported_as": "mean", "window": "open"}
    assert case.sha256 == hashlib.sha256(path.read_bytes()).hexdigest()


def test_standard_input_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(GOOD.encode())))
    case = read_case("-")
    assert (case.name, case.problem) == ("stdin", read_case("-", GOOD).problem)
    assert case.problem is not None


def test_a_byte_order_mark_and_carriage_returns_do_no_harm(tmp_path: Path) -> None:
    path = tmp_path / "lot.case.toml"
    path.write_bytes(b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode())
    plain = tmp_path / "plain.case.toml"
    plain.write_text(GOOD, encoding="utf-8")
    case = read_case(path)
    assert case.problem == read_case(plain).problem is not None
    assert case.claim == read_case(plain).claim
    assert case.sha256 == hashlib.sha256(path.read_bytes()).hexdigest()


def test_a_case_without_a_problem_is_for_derivation() -> None:
    assert read_case("a.case.toml", GOOD.partition("[problem]")[0]).problem is None


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "alpha = 0.05",
            "alpah = 0.05",
            r"problem\.alpah: unknown key in \[problem\]: 'alpah'; did you mean alpha\?",
        ),
        ("[claim]", "[claims]", r"claims: unknown key: 'claims'; did you mean claim\?"),
        ("n = 10", "foo = 10", r"problem\.foo: unknown key in \[problem\]: 'foo'; known: null, alternative, alpha, n$"),
        ("alpha = 0.05", "", r"problem\.alpha: the key alpha is missing"),
        ('variable = "x"', "", r"density\.variable: the key variable is missing"),
        ("alpha = 0.05", "alpha = 5", r"problem\.alpha: a level outside \(0, 1\)"),
        ("alpha = 0.05", "alpha = inf", r"problem\.alpha: "),
        ("alpha = 0.05", "alpha = [0.02]", r"problem\.alpha: alpha is a list"),
        ("alpha = 0.05", "alpha = true", r"problem\.alpha: alpha is true or false"),
        ("n = 10", "n = 10.0", r"problem\.n: n = 10\.0 is written as a decimal"),
        ("n = 10", "n = 0", r"problem\.n: the number of observations is 0"),
        ("n = 10", "n = [1]", r"problem\.n: n is a list"),
        ("constants = { }", "constants = 3", r"density\.constants: constants is a whole number"),
        ("constants = { }", "constants = { m = [1] }", r"density\.constants: constants is a table"),
        (
            'formula = "exp(-lam) * lam**x / factorial(x)"',
            "formula = 3",
            r"density\.formula: formula is a whole number",
        ),
        ('formula = "exp(-lam) * lam**x / factorial(x)"', "", "exactly one"),
        ("lam <= 8 or", "lam <= 13 or", r"problem\.null: the limits are in the wrong order"),
        ('window = "open"', 'window = "ajar"', r"table\.window: "),
        ('title = "Bead suspension (invented)"', "title = ", "not TOML"),
        ("n = 10", "n = " + "9" * 5000, "lot.case.toml: "),
        ("n = 10", "n = " + "[" * 5000, "lot.case.toml: "),
        ("[density]", "[density]\n'a\\b' = 1", "unknown key"),
    ],
)
def test_each_mistake_is_one_line_with_file_and_key(old: str, new: str, message: str) -> None:
    assert old in GOOD
    with pytest.raises(InputError, match=message) as caught:
        read_case("dir/lot.case.toml", GOOD.replace(old, new))
    line = str(caught.value)
    assert line.startswith("dir/lot.case.toml: ")
    assert "\n" not in line


def test_a_file_that_cannot_be_read_is_one_line(tmp_path: Path) -> None:
    big, latin = tmp_path / "big.case.toml", tmp_path / "latin.case.toml"
    big.write_bytes(b"#" * (MAX_BYTES + 1))
    latin.write_bytes("title = 'é'".encode("latin-1"))
    for path, message in [
        (tmp_path / "none.case.toml", "cannot be read: No such file"),
        (tmp_path, "cannot be read: Is a directory"),
        (big, "too big"),
        (latin, "not UTF-8"),
        ("a\0b", "cannot be read"),
    ]:
        with pytest.raises(InputError, match=message):
            read_case(path)


def test_a_case_that_is_meant_to_be_refused_still_shows_what_it_expects() -> None:
    text = GOOD.replace("lam > 0", "mu > 0").replace('verdict = "agrees"', 'error = "does not bound"')
    case = read_case_text("bad.case.toml", text)
    assert case.expect["error"] == "does not bound"
    with pytest.raises(InputError, match="does not bound"):
        case.read()


@settings(max_examples=150, deadline=None)
@given(
    st.one_of(
        st.text(max_size=200),
        st.tuples(st.integers(0, len(GOOD)), st.text(max_size=5)).map(
            lambda c: GOOD[: c[0]] + c[1] + GOOD[c[0] :]
        ),
    )
)
def test_random_text_is_a_case_or_an_input_error(text: str) -> None:
    try:
        read_case("a.case.toml", text)
    except InputError as error:
        assert str(error).startswith("a.case.toml: ")  # noqa: PT017


def test_a_case_without_a_problem_says_what_to_add() -> None:
    density, _, _ = GOOD.partition("[problem]")
    with pytest.raises(InputError, match=r"lot: problem: the case asks nothing; add \[problem\] with null") as refused:
        read_case("lot", density).require_problem()
    assert refused.value.key == "problem"
