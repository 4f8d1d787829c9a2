"""Where a search begins: the normal score of a gamma law against SciPy's own distribution functions."""

from fractions import Fraction

import pytest
from scipy import stats

from verify.laws import Gamma


@pytest.mark.parametrize(
    ("shape", "close"), [(Fraction(1, 2), 1e-9), (Fraction(3), 1e-9), (Fraction(59), 1e-9), (300, 1e-2)]
)
@pytest.mark.parametrize("tail", [1e-4, 0.05, 0.5, 0.95, 0.9999])
def test_gamma(shape, close, tail):
    rate = Fraction(2)
    law, known = Gamma(Fraction(shape), rate), stats.gamma(float(shape), scale=1 / float(rate))
    v = float(known.ppf(tail))
    z, slope = law.normal_score(v, known.mean(), known.std())
    assert z == pytest.approx(stats.norm.ppf(tail), rel=close, abs=close)
    assert slope == pytest.approx(known.pdf(v) / stats.norm.pdf(z), rel=10 * close)


def test_a_tail_too_small_to_be_told_from_1_still_has_a_rough_score():
    known = stats.gamma(3.0)
    z, slope = Gamma(Fraction(3), Fraction(1)).normal_score(float(known.isf(1e-12)), known.mean(), known.std())
    assert z == pytest.approx(stats.norm.isf(1e-12), rel=0.2)
    assert slope > 0
