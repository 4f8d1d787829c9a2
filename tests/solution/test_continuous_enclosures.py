"""The side conditions of a continuous window are enclosed wherever the box lies from the centre it was found from."""

from fractions import Fraction

import pytest

from verify.arithmetic.ball import around, balls, to_enclosure
from verify.laws import Gamma, InverseGaussian, Law, Normal
from verify.solution.conditions import Conditions
from verify.solution.continuous_window import Expansion

LAWS: list[tuple[Law, Law]] = [
    (Normal(Fraction(0), Fraction(1)), Normal(Fraction(1), Fraction(1))),
    (Gamma(Fraction(3), Fraction(1)), Gamma(Fraction(3), Fraction(2))),
    (InverseGaussian(Fraction(2), Fraction(3)), InverseGaussian(Fraction(3), Fraction(3))),
]
LEVEL = Fraction(1, 20)


@pytest.mark.parametrize("laws", LAWS, ids=lambda laws: laws[0].name)
@pytest.mark.parametrize("outside", [False, True])
@pytest.mark.parametrize("point", [False, True])
def test_a_box_away_from_its_centre(laws, outside, point):
    """The derivative must range over the whole stretch from the centre to the box, not over the box alone."""
    used = laws[:1] if point else laws
    conditions = Conditions(used, (LEVEL,) * len(used), outside or point, (1.0,) * len(used))
    with balls(256) as A:
        tiny = A.power(A.real(2), -200)
        centre = A.real(Fraction(3, 4)), A.real(Fraction(5, 2))
        box = around(A.real(Fraction(4, 5)), tiny), around(A.real(Fraction(12, 5)), tiny)
        here = Expansion.around(conditions, A, centre)
        slopes = here.slopes(here.stretch(box))
        sides = here.left_hand_sides(box, slopes)
        direct = [to_enclosure(side) for side in conditions.whole(A, *box)]
    for side, value in zip(sides, direct, strict=True):
        assert side.lower <= value.mid <= side.upper
