"""Single parts of a derivation: signs, monotonicity, variance functions, the numerical look, affine maps."""

from __future__ import annotations

from fractions import Fraction

import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.derivation.affine import affine_map
from verify.derivation.derive import derive
from verify.derivation.family import LawFamily
from verify.derivation.law_of_variance import name_law
from verify.derivation.ledger import Grade
from verify.derivation.monotone_pieces import V, monotone_pieces
from verify.derivation.monotonicity import certain_sign_between, monotonicity_step
from verify.derivation.numerical_look import numerical_look
from verify.derivation.positivity import Domain, _positive
from verify.derivation.signs import sign_of
from verify.derivation.variance_function import Cube, Quadratic, variance_function
from verify.laws.gamma import Gamma
from verify.laws.poisson import Poisson
from verify.problem.density import Density

R = sp.Symbol("t", real=True)
P = sp.Symbol("t", positive=True)
LINE, HALF = Domain({R: (-sp.oo, sp.oo)}), Domain({P: (sp.Integer(0), sp.oo)})


@settings(max_examples=25, deadline=None)
@given(st.lists(st.integers(-6, 6), min_size=1, max_size=5), st.integers(-3, 3), st.integers(1, 4))
def test_a_proved_sign_holds_at_every_point(coefficients, lower, width):
    """Soundness: whatever sign is proved must hold at rational points of the interval."""
    polynomial = sp.Add(*(c * R**k for k, c in enumerate(coefficients)))
    domain = Domain({R: (sp.Integer(lower), sp.Integer(lower + width))})
    sign = sign_of(polynomial, domain)
    for k in range(1, 20):
        value = polynomial.subs(R, lower + sp.Rational(width * k, 20))
        assert sign == 0 or sp.sign(value) == sign


@pytest.mark.parametrize(
    ("natural", "rising"),
    [
        (R**3, True),
        (R**3 + R, True),
        (-sp.exp(R), False),
        (R**5 - R**4 + R**3, True),
        (sp.atan(R), True),
        (sp.exp(R) / (1 + sp.exp(R)), True),
        (-((R - 1) ** 3), False),
    ],
)
def test_monotone_on_the_line(natural, rising):
    step, found = monotonicity_step(natural, R, LINE, [], [])
    assert (step.grade, found) == (Grade.PROVED, rising)


def test_monotone_on_an_interval_only_by_balls():
    step, rising = monotonicity_step(2 * R + sp.sin(R) * sp.cos(R / 2), R, LINE, [], [sp.Integer(-1), sp.sqrt(2)])
    assert (step.grade, rising) == (Grade.ENCLOSED, True)
    assert "<= t <=" in step.statement


@pytest.mark.parametrize("natural", [R**2, sp.cos(R), R**3 - R, R * sp.exp(-R)])
def test_not_monotone_with_a_witness(natural):
    points = [sp.Rational(k, 2) for k in range(-9, 10)]
    step, rising = monotonicity_step(natural, R, LINE, points, [])
    assert (step.grade, rising) == (Grade.REFUTED, None)
    assert step.witness


def test_subdivision_finds_no_sign_across_a_zero():
    assert certain_sign_between(R, R, Fraction(-1), Fraction(2)) == 0
    assert certain_sign_between(R**2 - R + 1, R, Fraction(-5), Fraction(5)) == 1


def test_variance_function_of_an_affine_inverse_gaussian():
    """T = 5 - 2 Y with Y inverse Gaussian: A follows by the affine map; the law must be found through its
    mirror image."""
    natural = -1 / (2 * P**2)
    plain_a = -1 / P
    variance = variance_function(plain_a + 5 * natural, natural, P)
    assert variance == Cube(P + 5, sp.Integer(1), sp.Integer(5))
    mirrored = variance_function(plain_a - 5 * natural, -natural, P)
    named = name_law(mirrored, P, HALF)
    assert (named.family.scale, named.family.shift, named.word) == (
        Fraction(-1),
        Fraction(5),
        "inverse Gaussian",
    )


@pytest.mark.parametrize(
    ("variance", "word", "scale", "shift"),
    [
        (Quadratic(P + 3, sp.Integer(-3), sp.Integer(1), sp.Integer(0)), "Poisson", 1, 3),
        (Quadratic(3 - 2 * P, sp.Integer(6), sp.Integer(-2), sp.Integer(0)), "Poisson", -2, 3),
        (Quadratic(-P, sp.Integer(0), sp.Integer(0), sp.Rational(1, 2)), "gamma", -1, 0),
        (Quadratic(-3 * P, sp.Integer(0), sp.Integer(-3), sp.Rational(1, 2)), "negative binomial", -3, 0),
        (Quadratic(10 * P / (1 + P), sp.Integer(0), sp.Integer(1), sp.Rational(-1, 10)), "binomial", 1, 0),
    ],
)
def test_affine_maps_of_the_table(variance, word, scale, shift):
    named = name_law(variance, P, HALF)
    assert (named.word, named.family.scale, named.family.shift) == (word, scale, shift)


def test_binomial_needs_a_whole_number_of_trials():
    named = name_law(Quadratic(P / (1 + P), sp.Integer(0), sp.Integer(1), sp.Rational(-2, 5)), P, HALF)
    assert named.family is None
    assert "not a whole number" in named.word


@pytest.mark.parametrize(
    ("density", "wrong"),
    [
        (
            Density(
                "exp(-t)*t**x/factorial(x)",
                variable="x",
                support="integers >= 0",
                parameter="t",
                space="t > 0",
            ),
            lambda t: Poisson(t + sp.Rational(1, 10**6)),
        ),
        (
            Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0"),
            lambda t: Gamma(Fraction(1), t + sp.Rational(1, 10**6)),
        ),
    ],
)
def test_the_look_notices_a_wrong_law(density, wrong):
    family = LawFamily(wrong(density.t), Fraction(1), Fraction(0), density.t)
    assert numerical_look(density, density.x, family, sp.Integer(2)).grade in (Grade.REFUTED, Grade.UNDECIDED)


def test_affine_map_of_logarithms():
    found = affine_map(sp.log(8 * P**2), sp.log(P), P, [sp.Integer(1), sp.Integer(2), sp.Integer(5)])
    assert (found.scale, sp.simplify(found.shift - 3 * sp.log(2))) == (2, 0)


def test_a_mean_squared_over_positive_values_is_fine():
    density = Density("exp(-(x-t**2)**2/2)/sqrt(2*pi)", variable="x", support="reals", parameter="t", space="t > 0")
    derivation = derive(density)
    assert derivation.grade is Grade.PROVED
    assert derivation.law == "normal(mean = t**2, variance = 1)"


@pytest.mark.parametrize("statistic", ["2*sin(x) + 1", "cos(x/3)", "exp(tan(x/2))", "(2 + sin(x))**2"])
def test_pieces_through_an_angle_have_their_inverse(statistic: str) -> None:
    x = sp.Symbol("x", real=True)
    expr = sp.sympify(statistic, locals={"x": x})
    pieces = monotone_pieces(expr, x, -sp.pi / 2, sp.pi / 2)
    assert not isinstance(pieces, str)
    for piece in pieces:
        point = (piece.low + piece.high) / 2 + sp.Rational(1, 7)
        back = piece.inverse.subs(V, expr.subs(x, point))
        assert abs(sp.N(back - point, 30)) < 1e-25


def test_what_was_not_proved_at_a_small_depth_is_searched_again() -> None:
    """A proof that was not found with few steps left must not stand in the way of one with more."""
    p = sp.Symbol("p", real=True)
    domain = Domain({p: (sp.Rational(1, 10), sp.Rational(9, 10))})
    expr = sp.log(1 + sp.exp(sp.gamma(p)) * (1 - p))
    assert not _positive(expr, domain, 1)
    assert domain.positive(expr)
    assert _positive(expr, domain, 1)
    assert not domain.positive(-expr)
    assert not Domain({p: (-sp.oo, sp.oo)}).positive(expr)
