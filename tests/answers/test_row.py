"""One row of a table: on which derivation it leans, and that nothing open or refuted carries numbers."""

import pickle

import pytest

from verify.answers import row
from verify.answers.row import Asker
from verify.derivation.ledger import Grade, Step

NORMAL = """
[density]
formula = "exp(x*({Q}) - ({Q})**2/2 - x**2/2)/sqrt(2*pi)"
variable = "x"
support = "reals"
parameter = "t"
space = "reals"
[problem]
null = "0 <= t <= 1"
alpha = "0.05"
n = 10
"""


def asker_of(natural: str) -> Asker:
    return Asker("some.grid.toml", NORMAL.replace("{Q}", natural), 15, 10.0, None)


def design(lower: str, upper: str) -> dict:
    return {"limits": [lower, upper], "levels": ["0.05", "0.05"], "n": 10}


def test_a_natural_parameter_that_turns_between_the_limits_of_a_row_gives_that_row_no_numbers():
    asker = asker_of("t + 3*exp(-(t-10)**2)")
    assert asker.refusal() is None
    good, bad = asker(design("0", "1")), asker(design("9", "11"))
    assert (good["status"], good["reason"], good["rejects"]) == ("enclosed", "", "outside")
    assert bad["status"] == "undecided"
    assert "monotonicity refuted" in bad["reason"]
    assert "c1" not in bad


def test_an_asker_that_travels_takes_its_derivation_along(monkeypatch):
    asker = asker_of("t")
    assert asker.refusal() is None
    here = asker(design("0", "1"))
    sent = pickle.dumps(asker)
    monkeypatch.setattr(row, "derive", None)
    assert pickle.loads(sent)(design("0", "1")) == here
    assert here["status"] == "proved"


@pytest.mark.parametrize("grade", [Grade.UNDECIDED, Grade.REFUTED])
def test_an_open_step_leaves_a_row_without_numbers(monkeypatch, grade):
    asker = asker_of("t")
    whole = asker.derivation
    weak = Step("nonnegativity", grade, "what was found", "a reason")
    object.__setattr__(whole, "steps", (*whole.steps, weak))
    found = asker(design("0", "1"))
    assert found["status"] == "undecided"
    assert found["reason"] == f"nonnegativity {grade.value}: what was found"
    assert "c1" not in found
