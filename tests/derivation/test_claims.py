"""A colleague's natural parameter, statistic and law."""

from __future__ import annotations

from dataclasses import replace

import pytest

from verify.derivation.derive import derive
from verify.derivation.ledger import Grade
from verify.errors import InputError
from verify.problem.density import Density

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
PARETO = Density(
    "t*a**t/x**(t+1)", variable="x", support="reals > a", parameter="t", space="t > 0", constants={"a": "2"}
)
EXPONENTIAL = Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0")
NORMAL = Density(
    "exp(-(x-mu)**2/(2*s**2))/(s*sqrt(2*pi))",
    variable="x",
    support="reals",
    parameter="mu",
    space="reals",
    constants={"s": "3"},
)


def _claims(density, n=10, **claim):
    return [step for step in derive(density, claim=claim, n=n).steps if step.name == "claims"]


@pytest.mark.parametrize(
    ("density", "claim"),
    [
        (POISSON, {"natural_parameter": "log(lam)", "statistic": "x", "law": "Poisson(10*lam)"}),
        (POISSON, {"natural_parameter": "log(3*lam)", "law": "Poisson(n*lam)"}),
        (POISSON, {"natural_parameter": "log(lam)/2", "statistic": "2*x + 5"}),
        (POISSON, {"law": "poisson(mean=10*lam)"}),
        (PARETO, {"natural_parameter": "-t", "statistic": "log(x)"}),
        (PARETO, {"natural_parameter": "t", "statistic": "log(a/x)"}),
        (PARETO, {"natural_parameter": "-t", "statistic": "log(x/a)", "law": "Gamma(10, t)"}),
        (EXPONENTIAL, {"law": "gamma(shape=10, scale=t)"}),
        (EXPONENTIAL, {"law": "Gamma(10, 1/t)"}),
        (EXPONENTIAL, {"statistic": "3*x", "law": "Gamma(10, 1/(3*t))"}),
        (NORMAL, {"statistic": "x", "law": "normal(10*mu, sd=s*sqrt(n))"}),
        (NORMAL, {"statistic": "x - 1", "law": "Normal(10*mu - 10, 90)"}),
        (NORMAL, {"statistic": "x/n", "natural_parameter": "n*mu/s**2", "law": "Normal(mu, s**2/n)"}),
    ],
)
def test_agrees(density, claim):
    steps = _claims(density, **claim)
    assert steps
    assert all(step.grade is Grade.PROVED for step in steps), [str(step) for step in steps]


@pytest.mark.parametrize(
    ("density", "claim", "part"),
    [
        (POISSON, {"natural_parameter": "lam"}, "no affine function"),
        (POISSON, {"statistic": "x**2"}, "no affine function"),
        (POISSON, {"statistic": "2*x", "natural_parameter": "log(lam)"}, "do not belong together"),
        (POISSON, {"law": "Poisson(lam)"}, "not Poisson(lam)"),
        (POISSON, {"law": "Normal(10*lam, 10*lam)"}, "not Normal"),
        (EXPONENTIAL, {"law": "Gamma(10, t)"}, "not Gamma(10, t)"),
        (PARETO, {"statistic": "x"}, "no affine function"),
    ],
)
def test_refuted_with_a_witness(density, claim, part):
    refuted = [step for step in _claims(density, **claim) if step.grade is Grade.REFUTED]
    assert len(refuted) == 1
    assert part in refuted[0].statement
    assert refuted[0].witness


@pytest.mark.parametrize(
    "law", ["Poisson", "Zipf(lam)", "Poisson(lam, 2)", "Poisson()", "Poisson(rate=lam)", "Gamma(1)"]
)
def test_unreadable_law_is_the_callers_mistake(law):
    with pytest.raises(InputError) as caught:
        _claims(POISSON, law=law)
    assert caught.value.key == "claim.law"


def test_numbers_do_not_lean_on_what_a_colleague_said():
    derivation = derive(POISSON, claim={"law": "Poisson(lam)"}, n=10)
    assert (derivation.grade, derivation.footing) == (Grade.REFUTED, Grade.PROVED)
    assert derivation.carries_numbers


def test_numbers_lean_on_every_other_step():
    derivation = derive(replace(POISSON, formula="2*exp(-lam)*lam**x/factorial(x)"))
    assert derivation.grade is derivation.footing is Grade.REFUTED
    assert not derivation.carries_numbers
