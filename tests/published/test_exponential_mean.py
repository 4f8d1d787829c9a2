"""The unbiased test of an exponential mean, one observation, level 0.10.

W. Fithian, lecture notes Stat 210A (UC Berkeley, 2024), testing with one parameter: the unbiased test puts the share
0.080 below and has upper cutoff 3.9; the equal-tailed test (0.051, 3.0) has power alpha at t = 1/2 too: it is biased.
"""

from fractions import Fraction

import verify
from verify.arithmetic.ball import balls, to_enclosure

DENSITY = {"formula": "exp(-x/t)/t", "variable": "x", "support": "reals > 0", "parameter": "t", "space": "t > 0"}


def test_lower_share_and_upper_cutoff(rounds_to) -> None:
    solution = verify.solve(verify.Problem(verify.Density(**DENSITY), null="t = 1", alpha="0.10", n=1), digits=20)
    with balls(128) as A:
        share = to_enclosure(solution.laws[0].cdf(A, A.interval(solution.c1)))
    assert rounds_to(share, "0.080")
    assert rounds_to(solution.c2, "3.9")


def test_equal_tails_are_biased() -> None:
    density = verify.Density(**DENSITY)
    law = verify.derive(density).family.at
    low, high = Fraction("0.05129329438755058"), Fraction("2.995732273553991")  # computed: -log(0.95), -log(0.05)
    with balls(128) as A:
        powers = [
            to_enclosure(law(t, 1).cdf(A, A.real(low)) + law(t, 1).sf(A, A.real(high)))
            for t in (Fraction(1, 2), Fraction(3, 4), Fraction(1))
        ]
    assert abs(powers[0].mid - Fraction(1, 10)) < Fraction(1, 1000)
    assert abs(powers[2].mid - Fraction(1, 10)) < Fraction(1, 10**14)
    assert powers[1].upper < Fraction(1, 10)
