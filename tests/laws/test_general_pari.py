"""PARI (through cypari) as an outside check of laws without a closed form: another program sums the same masses."""

from fractions import Fraction

import cypari
import pytest

from verify.arithmetic.ball import balls, to_enclosure
from verify.derivation.derive import derive
from verify.laws.base import Law
from verify.problem.density import Density

CLOSE = Fraction(1, 10**30)


@pytest.fixture(scope="module")
def pari():  # type: ignore[no-untyped-def]
    """PARI at 50 digits."""
    cypari.pari.allocatemem(128 * 10**6)
    cypari.pari.set_real_precision(50)
    return cypari.pari


def number(value: object) -> Fraction:
    return Fraction(str(value).replace(" E", "e"))


def law_of(at: Fraction, n: int, **density: str) -> Law:
    family = derive(Density(variable="x", parameter="t", **density)).family  # type: ignore[arg-type]
    assert family is not None
    return family.at(at, n)


def close(law: Law, method: str, v: int, theirs: Fraction) -> bool:
    with balls(200) as A:
        mine = to_enclosure(getattr(law, method)(A, v))
    return abs(mine.mid - theirs) < CLOSE * max(abs(theirs), CLOSE) and mine.radius < CLOSE * abs(theirs)


@pytest.mark.parametrize("v", [0, 3, 7, 11])
def test_noncentral_hypergeometric(pari, v: int) -> None:  # type: ignore[no-untyped-def]
    law = law_of(
        Fraction(5, 3), 1, kernel="binomial(20,x)*binomial(15,12-x)*t**x", support="integers 0..12", space="t > 0"
    )
    mass = "binomial(20,k)*binomial(15,12-k)*(5/3)^k"
    whole = f"sum(k=0,12,{mass})"
    assert close(law, "cdf", v, number(pari(f"1.*sum(k=0,{v},{mass})/{whole}")))
    assert close(law, "sf", v, number(pari(f"1.*sum(k={v + 1},12,{mass})/{whole}")))
    mean = f"sum(k=0,12,k*{mass})/{whole}"
    shortfall = number(pari(f"1.*sum(k=0,{v},({mean}-k)*{mass})/{whole}"))
    assert close(law, "shortfall", v, shortfall)


@pytest.mark.parametrize("v", [20, 27, 40, 60])
def test_zero_truncated_poisson_of_twenty(pari, v: int) -> None:  # type: ignore[no-untyped-def]
    law = law_of(Fraction(3, 2), 20, formula="t**x/(factorial(x)*(exp(t)-1))", support="integers >= 1", space="t > 0")
    series = "(exp(z+O(z^63))-1)^20"
    assert close(law, "density", v, number(pari(f"polcoef({series},{v})*1.5^{v}/(exp(1.5)-1)^20")))
    total = f"my(p={series});sum(k=20,{v},polcoef(p,k)*1.5^k)/(exp(1.5)-1)^20"
    assert close(law, "cdf", v, number(pari(total)))


@pytest.mark.parametrize("v", [1, 12, 60])
def test_zeta_of_four(pari, v: int) -> None:  # type: ignore[no-untyped-def]
    law = law_of(Fraction(5, 2), 4, formula="x**(-t)/zeta(t)", support="integers >= 1", space="t > 1")
    counts = "my(a=vector(60,k,1),b=dirmul(a,a),c=dirmul(b,b))"
    assert close(law, "density", v, number(pari(f"{counts};c[{v}]/{v}.^(5/2)/zeta(5/2)^4")))
    assert close(law, "cdf", v, number(pari(f"{counts};sum(k=1,{v},c[k]/k^2.5)/zeta(5/2)^4")))
