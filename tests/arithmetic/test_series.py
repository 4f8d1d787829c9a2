"""Powers of series against exact polynomial arithmetic."""

from fractions import Fraction

from flint import fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.series import ball_power, exact_power, product_power

weights = st.lists(st.integers(0, 50), min_size=1, max_size=6).filter(lambda ws: ws[0] > 0)


@given(weights, st.integers(1, 9), st.integers(1, 30))
@settings(max_examples=40, deadline=None)
def test_powers_are_those_of_the_polynomial(ws: list[int], n: int, length: int) -> None:
    full = fmpz_poly(ws) ** n
    wanted = [int(full[i]) for i in range(length)]
    exact = exact_power([Fraction(w, 7) for w in ws], n, length)
    assert exact is not None
    assert [Fraction(c, exact[1]) for c in exact[0]] == [Fraction(c, 7**n) for c in wanted]
    with balls(128) as A:
        found = ball_power([A.real(Fraction(w, 7)) for w in ws], n, length)
    assert all(to_enclosure(ball).contains(Fraction(c, 7**n)) for ball, c in zip(found, wanted, strict=True))


def test_small_coefficients_keep_their_relative_accuracy() -> None:
    with balls(128) as A:
        found = ball_power([A.real(Fraction(1, 10**60)), A.real(1)], 50, 51)
    assert min(ball.rel_accuracy_bits() for ball in found) > 110


def test_products_count_divisors() -> None:
    """Ordered factorisations in three factors of 1..12: DLMF 27.2.9 (the divisor function d_3)."""
    assert product_power([1] * 12, 3) == [1, 3, 3, 6, 3, 9, 3, 10, 6, 9, 3, 18]


def test_too_many_bits_are_declined() -> None:
    assert exact_power([Fraction(1, 3**2000), Fraction(1)], 5000, 20000) is None
