"""Bounds of transforms over boxes hold at the points of the boxes."""

from fractions import Fraction
from random import Random
from typing import Any

import pytest
from flint import acb, arb

from verify.arithmetic.ball import balls
from verify.arithmetic.transforms import Bessel, FallingOnLines, GammaRatio, InTerms, Secant, Transform

RATIO = GammaRatio(Fraction(1, 3), Fraction(17, 6))
SECANT = Secant(Fraction(3, 2), Fraction(1), Fraction(1, 4), Fraction(1, 5), Fraction(-1), Fraction(1))


def box_and_point(random: Random, low: int) -> tuple[Any, Any]:
    """A box above the real axis, and a point in it."""
    x, y = random.uniform(-30, 30), random.uniform(low, 40)
    width, height = random.uniform(0, 3), random.uniform(0, 1) * y
    box = acb(arb(x).union(arb(x + width)), arb(y - height / 2).union(arb(y)))
    return box, acb(arb(x + width * random.random()), arb(y - height / 2 * random.random()))


@pytest.mark.parametrize(("transform", "which"), [(Bessel(), (0, 1)), (Bessel(), (3,)), (RATIO, (0,))])
def test_sizes_of_terms_over_boxes(transform: InTerms, which: tuple[int, ...]) -> None:
    random = Random(7)
    with balls(128) as A:
        v = arb(-5) if transform is RATIO else arb(1) / 3
        for _ in range(200):
            box, point = box_and_point(random, 2)
            bound = transform.terms_size(A, box, 3, which, v).upper()
            value = abs(transform.terms(A, point, 3, which)) * (-v * point.real).exp()
            assert not bound.is_finite() or value < bound


@pytest.mark.parametrize("x", [-60, -25, -8, 3])
def test_ratio_bound_is_of_the_right_size_on_a_diagonal(x: int) -> None:
    """A bound that is far too large would cost many nodes."""
    with balls(128) as A:
        point = acb(x, abs(x) + 2)
        box = acb(arb(x, 0.5), arb(abs(x) + 2, 0.5))
        bound = RATIO.term_size(A, box, 1, 0)
        assert bound < 3 * abs(RATIO.terms(A, point, 1, (0,)))


def test_secant_size_over_boxes() -> None:
    random = Random(11)
    with balls(128) as A:
        for _ in range(200):
            box, point = box_and_point(random, 1)
            assert abs(SECANT.value(A, point, False)) < SECANT.size(A, box) * (1 + arb(2) ** -100)
        assert not SECANT.size(A, acb(arb(0, 2), arb(0, 1))).is_finite()


def test_secant_size_in_its_strip() -> None:
    with balls(128) as A:
        box = acb(arb(0, 0.5), arb(0, 0.25))
        for k in range(-4, 5):
            assert abs(SECANT.value(A, acb(arb(k) / 8, arb(1) / 8), False)) < SECANT.size(A, box)


@pytest.mark.parametrize("kind", [Transform, InTerms, FallingOnLines])
def test_a_transform_without_its_parts_cannot_be_made(kind: type[Transform]) -> None:
    with pytest.raises(TypeError, match="abstract"):
        kind()
