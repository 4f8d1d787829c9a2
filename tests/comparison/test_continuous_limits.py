"""Continuous formulas at the limits of the brute force: an answer, or the reason why there is none."""

import numpy as np
import pytest

from verify import Density, Problem, solve
from verify.comparison.compare import compare
from verify.comparison.quadrature import nodes

KUMARASWAMY = Density(
    "a*b*x**(a-1)*(1-x**a)**(b-1)",
    variable="x",
    support="reals in (0, 1)",
    parameter="b",
    space="b > 0",
    constants={"a": "1/3"},
)
CHI = Density(
    "2*x**4*exp(-x**2/(2*s**2))/(s**5*2**(5/2)*gamma(5/2))",
    variable="x",
    support="reals > 0",
    parameter="s",
    space="s > 0",
)
CHI_BY_RATE = Density(
    "2*x**4*exp(-r*x**2)*r**(5/2)/gamma(5/2)", variable="x", support="reals > 0", parameter="r", space="r > 0"
)
BURR = Density(
    "c*k*x**(c-1)/(1+x**c)**(k+1)",
    variable="x",
    support="reals > 0",
    parameter="k",
    space="k > 0",
    constants={"c": "3"},
)


def brute(density, null, n):
    comparison = compare(solve(Problem(density, null, "0.05", n), digits=20))
    return next(opinion for opinion in comparison.opinions if opinion.route == "brute force")


@pytest.mark.parametrize(
    ("density", "null", "n", "reason"),
    [
        (KUMARASWAMY, "0.5 <= b <= 2", 1, "cannot tell x from an end of the support at b = 0.5"),
        (CHI, "s <= 1 or s >= 4", 3, "cannot resolve the tails at these cutoffs"),
    ],
)
def test_a_method_at_its_limit_is_not_attempted_rather_than_failed(density, null, n, reason) -> None:
    found = brute(density, null, n)
    assert found.failure == ""
    assert found.note.startswith("not attempted: ")
    assert reason in found.note


@pytest.mark.parametrize(("density", "null"), [(CHI, "1 <= s <= 2"), (CHI_BY_RATE, "1/8 <= r <= 1/2")])
def test_limits_that_lie_far_apart_are_answered_from_the_law_beside_each_cutoff(density, null) -> None:
    found = brute(density, null, 3)
    assert found.failure == ""
    assert min(found.digits[name] for name in ("c1", "c2")) >= 7


def test_a_statistic_that_ripples_by_rounding_is_answered_in_time() -> None:
    found = brute(BURR, "1 <= k <= 2", 3)
    assert found.failure == ""
    assert min(found.digits[name] for name in ("c1", "c2")) >= 7


def test_ripples_are_no_turns_and_turns_stay() -> None:
    def height(w):
        return -(np.asarray(w) ** 2) / 2

    def rippled(w):
        x = np.exp(w)
        return np.log((x + 1) * (x**2 - x + 1))  # log(1 + x**3)

    assert len(nodes([height], rippled, 60.0, 1).turns) == 2  # the two ends alone
    square = nodes([height], lambda w: np.sinh(w) ** 2, 60.0, 0)
    assert np.allclose(square.turns[1:-1], [0], atol=1e-6)
