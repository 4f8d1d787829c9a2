"""Chi-square windows and points against printed tables."""

from fractions import Fraction

import pytest

# M. G. Natrella, Experimental Statistics, NBS Handbook 91 (1963), Table A-20: sqrt(nu / c1), alpha 0.05
# (from memory).
NATRELLA = {
    1: "17.79",
    2: "4.859",
    4: "2.567",
    5: "2.248",
    6: "2.052",
    7: "1.918",
    8: "1.820",
    9: "1.746",
    10: "1.686",
}

# NIST/SEMATECH e-Handbook of Statistical Methods, section 1.3.6.7.4: upper critical values of chi-square.
LEVELS = ["0.10", "0.05", "0.025", "0.01", "0.001"]
UPPER = {
    1: "2.706 3.841 5.024 6.635 10.828",
    6: "10.645 12.592 14.449 16.812 22.458",
    10: "15.987 18.307 20.483 23.209 29.588",
    50: "63.167 67.505 71.420 76.154 86.661",
    100: "118.498 124.342 129.561 135.807 149.449",
}
LOWER = {9: "4.168 3.325 2.700 2.088 1.152"}

# L. Knuesel's certified values as used by A. T. Yalta, Comput. Stat. Data Anal. 52 (2008) 4579-4586:
# upper points of chi-square.
KNUESEL = [("1e-7", 5, "40.8630"), ("1e-12", 1, "50.8441"), ("1e-12", 5, "65.2386")]


@pytest.mark.parametrize("nu", NATRELLA)
def test_natrella_table_a_20(variance_test, nu) -> None:
    c1 = variance_test("t = 1", "0.05", nu).c1
    printed = Fraction(NATRELLA[nu])
    room = Fraction(1, 1000) if nu > 1 else Fraction(1, 100)
    assert nu / (printed + room) ** 2 < c1.lower <= c1.upper < nu / (printed - room) ** 2


@pytest.mark.parametrize(("nu", "place"), [(nu, place) for nu in UPPER for place in range(5)])
def test_nist_upper_critical_values(variance_test, rounds_to, nu, place) -> None:
    assert rounds_to(variance_test("t <= 1", LEVELS[place], nu).c, UPPER[nu].split()[place])


@pytest.mark.parametrize("place", range(5))
def test_nist_lower_critical_values(variance_test, rounds_to, place) -> None:
    assert rounds_to(variance_test("t >= 1", LEVELS[place], 9).c, LOWER[9].split()[place])


@pytest.mark.parametrize(("alpha", "nu", "printed"), KNUESEL)
def test_knuesel_upper_points(variance_test, within, alpha, nu, printed) -> None:
    assert within(variance_test("t <= 1", alpha, nu).c, printed, Fraction(5, 10**6))


def test_nist_gear_diameters(variance_test) -> None:
    # NIST/SEMATECH e-Handbook, section 1.3.5.8: N = 100, T = 0.39030 for sigma0 = 0.1.
    assert Fraction("0.39030") < variance_test("t = 1", "0.05", 99).c1.lower


def test_nist_wafers(variance_test, rounds_to) -> None:
    # NIST/SEMATECH e-Handbook, section 7.2.3: N = 10, s = 13.97, sigma0 = 10, T = 17.56, point 16.92.
    assert abs(9 * Fraction("13.97") ** 2 / 100 - Fraction("17.56")) < Fraction(1, 100)
    solution = variance_test("t <= 1", "0.05", 9)
    assert rounds_to(solution.c, "16.92")
    assert solution.c.upper < Fraction("17.56")  # rejected, as printed


DIAMETERS = ["12.1", "12.3", "11.8", "12.0", "12.4", "12.0", "12.1", "11.9", "12.2", "12.2"]


def test_natrella_ten_measurements(variance_test) -> None:
    # M. G. Natrella, NBS Handbook 91 (1963), pp. 4-5.
    data = [Fraction(x) for x in DIAMETERS]
    mean = sum(data) / len(data)
    squares = sum((x - mean) ** 2 for x in data)
    statistic = squares / Fraction("0.208") ** 2
    assert abs(statistic - Fraction("6.93417159763")) < Fraction(1, 10**11)
    solution = variance_test("t = 1", "0.05", 9)
    assert solution.c1.upper < statistic < solution.c2.lower  # the known spread is kept


# The four conditions: G. Casella and R. L. Berger, Statistical Inference, 2nd ed. (2002), Exercise 9.52;
# numbers computed.
# nu = 2, alpha 0.1: of the right size, but only the first satisfies the second condition.
CASELLA = {
    "unbiased": ("0.167629572", "7.8642919", True),
    "likelihood ratio, unknown mean": ("0.206481382", "12.5214447", False),
    "shortest": ("0.210447862", "18.0077193", False),
    "equal tails": ("0.102586589", "5.99146455", False),
}


@pytest.mark.parametrize("name", CASELLA)
def test_only_the_unbiased_window_is_the_solution(variance_test, rounds_to, name) -> None:
    c1, c2, right = CASELLA[name]
    solution = variance_test("t = 1", "0.1", 2)
    assert (rounds_to(solution.c1, c1), rounds_to(solution.c2, c2)) == (right, right)
