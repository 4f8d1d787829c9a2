"""The numbers behind the figures, rebuilt from the certificate, against the solution and textbook formulas."""

from __future__ import annotations

import json
from collections.abc import Callable
from fractions import Fraction
from math import erfc, exp, lgamma, log, sqrt

import pytest

from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.report.figure_data import laws_figure, power_figure, read_test
from verify.report.figure_laws import law_at
from verify.report.figures import draw_laws, draw_power, tidy_svg
from verify.solution.solve import solve

Made = Callable[[str], bytes]
KEYS = ["outside", "two levels", "interval", "point", "one-sided", "one atom", "irrational", "falling", "lattice"]


def predicate(made: Made, key: str) -> dict:  # type: ignore[type-arg]
    return json.loads(made(key))["predicate"]


@pytest.mark.parametrize(
    "key", ["outside", "two levels", "interval", "point", "one-sided", "one atom", "irrational", "falling", "lattice"]
)
def test_the_power_at_a_limit_is_its_level(made: Made, key: str) -> None:
    data = power_figure(predicate(made, key))
    for limit, level in zip(data.limits, data.levels, strict=True):
        assert data.power[data.t.index(limit)] == pytest.approx(level, abs=1e-12)
    assert len(data.t) == len(data.power)
    assert data.t == sorted(data.t)
    assert all(0 <= value <= 1 for value in data.power)
    assert data.t[0] < data.limits[0] < data.t[-1]


@pytest.mark.parametrize("key", ["outside", "interval", "falling"])
def test_power_is_that_of_the_solution(made: Made, key: str) -> None:
    found = predicate(made, key)
    stated = found["problem"]
    problem = Problem(Density(**stated["density"]), null=stated["null"], alpha=stated["alpha"][0], n=stated["n"])
    solution, test, at = solve(problem, digits=20), read_test(found), law_at(found)
    data = power_figure(found)
    for t in data.t[:: len(data.t) // 5]:
        t_exact = Fraction(t)
        assert test.power(at(t_exact)) == pytest.approx(float(solution.power(t_exact).mid), abs=1e-12)


def test_masses_are_poisson(made: Made) -> None:
    data = laws_figure(predicate(made, "outside"))
    for law, mean in zip(data.laws, (80, 120), strict=True):
        for v, mass in zip(data.x, law.y, strict=True):
            assert mass == pytest.approx(exp(v * log(mean) - mean - lgamma(v + 1)), rel=1e-9)
    phi = dict(zip(data.x, data.phi, strict=True))
    assert phi[93] == phi[104] == 0
    assert phi[94] == pytest.approx(0.0867146646)
    assert phi[95] == phi[102] == 1


def test_the_normal_test_rejects_above(made: Made) -> None:
    """Mean of four above 1.6449 / 2, from Phi alone."""
    data = power_figure(predicate(made, "one-sided"))
    for mu, power in zip(data.t, data.power, strict=True):
        assert power == pytest.approx(erfc((1.6448536269514722 - 2 * mu) / sqrt(2)) / 2, abs=1e-9)


def test_shifted_statistic_is_drawn_on_the_scale_of_v(made: Made) -> None:
    """A geometric count from 1: V is never below n."""
    data = laws_figure(predicate(made, "falling"))
    assert min(data.x) >= 5
    assert sum(data.laws[0].y) == pytest.approx(1, abs=0.01)


def test_figures_are_reproducible_and_do_not_clash(made: Made) -> None:
    laws, power = (draw(predicate(made, "outside")) for draw in (laws_figure, power_figure))
    first, second = draw_laws(laws, "λ", "a-"), draw_power(power, "λ", "b-")
    assert first == draw_laws(laws, "λ", "a-")
    assert second == draw_power(power, "λ", "b-")
    for text, prefix in ((first, "a-"), (second, "b-")):
        assert text.startswith("<svg ")
        assert "<metadata" not in text
        assert "http" not in text.replace('xmlns="http://www.w3.org/2000/svg"', "")
        assert text.count('id="') == text.count(f'id="{prefix}')


def test_comments_are_dropped() -> None:
    assert tidy_svg("<!-- made by hand --><svg><!-- 12:00 --></svg>", "x") == "<svg></svg>"
