"""Planning: how many observations, how many decimals, and what an observed statistic decides.

Source: Lehmann and Romano 2005, section 3.2: the power of a most powerful test of n observations is at least
that of n - 1, since one may be ignored; so "n suffices and n - 1 does not" is provable by two enclosures.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING, Literal

from verify.arithmetic.enclosure import Enclosure
from verify.errors import InputError, UndecidedError
from verify.memory import solver
from verify.problem.numbers import Exact, exact, exact_text
from verify.problem.problem import Problem
from verify.solution.critical import CriticalFunction
from verify.solution.solve import Solution

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation

PLANNING_DIGITS = 20
MOST_DIGITS = 320
LARGEST_N = 10**9

Progress = Callable[[int], None]


def _silent(n: int) -> None:
    """Report nothing."""


@dataclass(frozen=True)
class SampleSize:
    """The smallest sample that reaches a power, proved by the enclosures at n and at n - 1.

    Attributes
    ----------
    at : Exact
        The alternative at which the power is wanted.
    wanted : Fraction
        The power wanted.
    n : int
        The smallest n.
    power : Enclosure
        Power at n, certainly at least the one wanted.
    power_before : Enclosure or None
        Power at n - 1, certainly less; None when n = 1.
    """

    at: Exact
    wanted: Fraction
    n: int
    power: Enclosure
    power_before: Enclosure | None


def with_sample_size(problem: Problem, n: int) -> Problem:
    """Return the same problem with another sample size."""
    return replace(problem, n=n)


class Planner:
    """Power of the optimal test as a function of n, each n solved once.

    Parameters
    ----------
    problem : Problem
        The problem; its own n plays no part.
    derivation : Derivation
        The derivation of its density.
    at : str or Exact
        The alternative at which power is wanted.
    cache : str, optional
        Directory of results that were proved before.

    Raises
    ------
    InputError
        When the alternative lies outside the parameter space, or in the null.
    """

    def __init__(self, problem: Problem, derivation: Derivation, at: str | Exact, cache: str | None = None) -> None:
        self.problem, self.derivation, self._solve = problem, derivation, solver(cache)
        self.at = exact(at, key="at")
        self._solutions: dict[tuple[int, int], Solution] = {}
        if not problem.density.parsed_space.contains(self.at):
            raise InputError(
                f"{exact_text(self.at)} is outside the parameter space",
                f"ask for power inside {problem.density.parsed_space.text}", key="at",
            )  # fmt: skip
        if problem.hypothesis.holds_at(self.at):
            raise InputError(
                f"{exact_text(self.at)} is in the null, where a test should reject seldom and power is no aim",
                f"ask at an alternative: {problem.hypothesis.alternative_text(problem.density.parameter)}", key="at",
            )  # fmt: skip

    def solution(self, n: int, digits: int = PLANNING_DIGITS) -> Solution:
        """Return the proven test for n observations."""
        if (n, digits) not in self._solutions:
            self._solutions[n, digits] = self._solve(with_sample_size(self.problem, n), digits, self.derivation)
        return self._solutions[n, digits]

    def power(self, n: int, digits: int = PLANNING_DIGITS) -> Enclosure:
        """Return the power of the randomised test."""
        return self.solution(n, digits).power(self.at)

    def reaches(self, n: int, wanted: Fraction) -> bool:
        """Whether the power at n is certainly at least the one wanted (False: certainly less).

        Raises
        ------
        UndecidedError
            When the enclosure still straddles the power wanted at the largest precision.
        """
        digits = PLANNING_DIGITS
        while digits <= MOST_DIGITS:
            power = self.power(n, digits)
            if power.lower >= wanted:
                return True
            if power.upper < wanted:
                return False
            digits *= 4
        raise UndecidedError(f"the power at n = {n} cannot be told from {wanted}")

    def smallest(self, wanted: str | Fraction, *, largest: int = LARGEST_N, progress: Progress = _silent) -> SampleSize:
        """Return the smallest n whose randomised test has the power wanted, by doubling and bisection.

        Raises
        ------
        InputError
            When the power is not in (0, 1), or not reached by the largest n allowed.
        """
        goal = _probability(wanted)
        low, high = 0, 1
        while not self._step(high, goal, progress):
            if high >= largest:
                raise InputError(
                    f"the power at n = {largest} is still below {goal}",
                    "ask for less power, an alternative further from the null, or a larger --largest", key="power",
                )  # fmt: skip
            low, high = high, min(2 * high, largest)
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (low, middle) if self._step(middle, goal, progress) else (middle, high)
        return SampleSize(self.at, goal, high, self.power(high), self.power(low) if low else None)

    def _step(self, n: int, wanted: Fraction, progress: Progress) -> bool:
        progress(n)
        return self.reaches(n, wanted)

    def power_without_randomisation(self, n: int) -> Enclosure:
        """Return the power of the test that accepts at its cutoffs: the largest non-randomised part of the optimal one.

        For a continuous law there is nothing to leave out.
        """
        solution = self.solution(n)
        return accepting_at_the_ends(solution.critical).power(solution.family.at(self.at, n), solution.prec + 64)

    def without_randomisation(self, wanted: str | Fraction, last: int, *, progress: Progress = _silent) -> ScanResult:
        """Scan n = 1..last without randomisation, where the power saws up and down.

        Returns
        -------
        ScanResult
            The first n that reaches the power and the n from which it stays above it up to ``last``.
        """
        goal = _probability(wanted)
        first, stays = None, None
        for n in range(1, last + 1):
            progress(n)
            power = self.power_without_randomisation(n)
            if power.lower >= goal:
                first, stays = first or n, stays or n
            elif power.upper < goal:
                stays = None
            else:
                raise UndecidedError(f"the power at n = {n} cannot be told from {goal}")
        return ScanResult(self.at, goal, last, first, stays)


@dataclass(frozen=True)
class ScanResult:
    """What a scan over sample sizes found.

    Attributes
    ----------
    at, wanted
        Alternative and power.
    last : int
        Largest n looked at; nothing is claimed beyond it.
    first : int or None
        First n that reaches the power.
    stays : int or None
        The n from which every one up to ``last`` reaches it.
    """

    at: Exact
    wanted: Fraction
    last: int
    first: int | None
    stays: int | None


def accepting_at_the_ends(critical: CriticalFunction) -> CriticalFunction:
    """Return the critical function with both end fractions set to 0."""
    if critical.phi1 is None:
        return critical
    return replace(critical, phi1=Enclosure.of(0), phi2=Enclosure.of(0))


def _probability(value: str | Fraction) -> Fraction:
    number = exact(value, key="power")
    if not isinstance(number, Fraction) or not 0 < number < 1:
        raise InputError(f"{value} is not a power", 'write a rational between 0 and 1, such as "0.9"', key="power")
    return number


@dataclass(frozen=True)
class Decision:
    """What the test says about an observed statistic.

    Attributes
    ----------
    statistic : Exact
        Observed V, the sum of T(Xi).
    phi : Enclosure
        Probability of rejecting the null there.
    says : {"reject", "do not reject", "reject with probability phi"}
        The decision, before any randomisation.
    after : {"reject", "do not reject"} or None
        The decision once a number u in [0, 1) was drawn: reject when u < phi.
    """

    statistic: Exact
    phi: Enclosure
    says: Literal["reject", "do not reject", "reject with probability phi"]
    after: Literal["reject", "do not reject"] | None = None


def decide(solution: Solution, statistic: str | Exact, u: str | Exact | None = None) -> Decision:
    """Apply a proven test to an observed statistic.

    Parameters
    ----------
    solution : Solution
        The test.
    statistic : str or Exact
        Observed value of V = T(X1) + ... + T(Xn).
    u : str or Exact, optional
        A number in [0, 1) drawn beforehand; with it a randomised decision is carried out (reject when u < phi).

    Raises
    ------
    InputError
        When the value is not one the statistic can take, or u is outside [0, 1).
    UndecidedError
        When the value lies within the enclosure of a cutoff.
    """
    value = exact(statistic, key="statistic")
    phi = solution.phi(value)
    if phi.exact and phi.lower in (0, 1):
        return Decision(value, phi, "reject" if phi.lower else "do not reject")
    says: Literal["reject with probability phi"] = "reject with probability phi"
    if u is None:
        return Decision(value, phi, says)
    drawn = exact(u, key="u")
    if not isinstance(drawn, Fraction) or not 0 <= drawn < 1:
        raise InputError(f"{u} is not a number drawn from [0, 1)", 'write a decimal such as "0.4217"', key="u")
    if phi.lower <= drawn < phi.upper and not phi.exact:
        raise UndecidedError(f"u = {u} lies within the enclosure of phi; ask for more digits")
    return Decision(value, phi, says, "reject" if drawn < phi.lower or drawn < phi.upper else "do not reject")


def observed_statistic(solution: Solution, data: list[str]) -> Exact:
    """Return V = T(x1) + ... + T(xn) of observed data, exactly.

    Raises
    ------
    InputError
        When there are not n values, or one lies outside the support.
    """
    from verify.derivation.statistic_value import statistic_sum

    if len(data) != solution.problem.n:
        raise InputError(f"{len(data)} observations", f"the test was planned for n = {solution.problem.n}", key="data")
    return statistic_sum(solution.problem.density, solution.derivation.statistic, data)
