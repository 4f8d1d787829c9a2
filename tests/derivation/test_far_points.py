"""Where a proof is not within easy reach: bounded waves, a second sign far out, totals that are nearly 1."""

import pytest

from verify.derivation.derive import derive
from verify.derivation.ledger import Grade
from verify.problem.density import Density


def normal_with_mean(mean: str) -> Density:
    return Density(f"exp(-(x-({mean}))**2/2)/sqrt(2*pi)", variable="x", support="reals", parameter="t", space="reals")


@pytest.mark.parametrize("mean", ["t + t**2/10**6", "t - t**3/10**9", "t + t**2/10**11"])
def test_a_mean_that_turns_round_far_out_is_refuted(mean: str) -> None:
    step = derive(normal_with_mean(mean)).step("monotonicity")
    assert step is not None
    assert step.grade is Grade.REFUTED
    assert "and Q'(t) < 0 at t = " in step.witness


@pytest.mark.parametrize("mean", ["t + sin(t)/2", "3*t + 2*cos(t)"])
def test_a_small_wave_is_proved_away(mean: str) -> None:
    step = derive(normal_with_mean(mean)).step("monotonicity")
    assert step is not None
    assert step.grade is Grade.PROVED


def test_a_wave_that_just_stops_the_rise_is_not_called_positive_by_its_bound() -> None:
    from sympy import Symbol, cos

    from verify.derivation.positivity import Domain

    t = Symbol("t", real=True)
    assert not Domain().positive(1 + cos(t))
    assert Domain().positive(2 + cos(t))


def test_a_binomial_law_by_its_angle() -> None:
    density = Density("binomial(5,x)*sin(a)**(2*x)*cos(a)**(10-2*x)", variable="x", support="integers 0..5",
                      parameter="a", space="0 < a < pi/2")  # fmt: skip
    derivation = derive(density)
    assert derivation.grade is Grade.PROVED
    assert str(derivation.statistic) == "x"
    assert derivation.law.startswith("binomial(trials = 5")


def test_a_total_that_is_nearly_1_is_shown_with_its_distance() -> None:
    density = Density("(1+1/10**30)*t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0")
    step = derive(density).step("normalisation")
    assert step is not None
    assert step.grade is Grade.REFUTED
    assert "off by 1e-30" in step.witness
