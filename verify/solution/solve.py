"""Solve a problem: from the derivation to proven cutoffs and fractions."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property, partial
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.derivation.derive import Derivation, derivation_for
from verify.derivation.ledger import Grade, Step, weakest
from verify.derivation.sum_step import sum_step, with_sum_step
from verify.errors import InputError, UndecidedError
from verify.notebook import Shown
from verify.problem.hypothesis import Form
from verify.problem.keys import NUMBER_NAMES
from verify.problem.numbers import Exact, exact
from verify.problem.optimality import optimality
from verify.solution.attainable import require_attainable
from verify.solution.checked import within_shared_digits
from verify.solution.critical import CriticalFunction, Region
from verify.solution.one_sided import Tail, TailProblem
from verify.solution.precision import bits_for
from verify.solution.side_conditions import SideCondition, held
from verify.solution.two_sided import solve_window, window_search
from verify.solution.window import Window, rough_laws, search_precision

if TYPE_CHECKING:
    from verify.derivation.family import LawFamily
    from verify.laws import Law
    from verify.problem.problem import Problem

LEAST_DIGITS, MOST_DIGITS = 15, 10_000


@dataclass(frozen=True)
class Solution(Shown):
    """A proven optimal test.

    Attributes
    ----------
    problem : Problem
        What was asked.
    derivation : Derivation
        On what it rests.
    digits : int
        Significant digits asked for; every enclosure guarantees at least so many (of the fractions on a lattice, of the
        cutoffs of a continuous law).
    critical : CriticalFunction
        The test on the scale of Y, where V = scale * Y + n * shift.
    laws : tuple of Law
        Laws of Y's sum at the limits.
    side_conditions : tuple of SideCondition
        The equations with their enclosed left-hand sides.
    steps : tuple of Step
        The ledger of the derivation with the steps of the solution added.
    prec : int
        Bits at which the proof succeeded.
    """

    problem: Problem
    derivation: Derivation
    digits: int
    critical: CriticalFunction
    laws: tuple[Law, ...]
    side_conditions: tuple[SideCondition, ...]
    steps: tuple[Step, ...]
    prec: int

    @property
    def form(self) -> Form:
        """Form of the hypothesis."""
        return self.problem.hypothesis.form

    @property
    def family(self) -> LawFamily:
        """Law of T over the family."""
        return family_of(self.derivation)

    @property
    def grade(self) -> Grade:
        """Weakest grade that the numbers lean on."""
        return weakest([self.derivation.grade, self.numbers_grade])

    @property
    def numbers_grade(self) -> Grade:
        """How firmly the numbers stand, given the derivation."""
        return weakest(step.grade for step in self.steps if step.name == "numbers")

    @cached_property
    def flipped(self) -> bool:
        """Whether V = scale * Y + n * shift turns the order round."""
        with balls(64) as A:
            return bool(A.real(self.family.scale) < 0)

    @cached_property
    def rejects(self) -> Region:
        """Where the test rejects, on the scale of V."""
        turned: dict[Region, Region] = {"above": "below", "below": "above"}
        region = self.critical.region
        return turned.get(region, region) if self.flipped else region

    def _on_scale(self, c: Any) -> Enclosure:
        """Bring a cutoff from the scale of Y to that of V."""
        scale, shift, n = self.family.scale, self.family.shift, self.problem.n
        if isinstance(scale, Fraction) and isinstance(shift, Fraction) and self.laws[0].plain_points:
            ends = (c.lower, c.upper) if isinstance(c, Enclosure) else (c, c)
            return Enclosure(*sorted(scale * end + n * shift for end in ends))
        with balls(max(self.prec, bits_for(self.digits)) + 64) as A:
            y = A.interval(c) if isinstance(c, Enclosure) else self.laws[0].value(A, c)
            return to_enclosure(A.real(scale) * y + n * A.real(shift))

    @property
    def _two_sided(self) -> bool:
        return self.critical.region in ("inside", "outside")

    def _ends(self) -> tuple[Any, Any]:
        first, second = (self.critical.c1, self.critical.phi1), (self.critical.c2, self.critical.phi2)
        return (second, first) if self.flipped else (first, second)

    @cached_property
    def c1(self) -> Enclosure | None:
        """Lower cutoff on the scale of V = sum of T(Xi); None for a one-sided test."""
        return self._on_scale(self._ends()[0][0]) if self._two_sided else None

    @cached_property
    def c2(self) -> Enclosure | None:
        """Upper cutoff; None for a one-sided test."""
        return self._on_scale(self._ends()[1][0]) if self._two_sided else None

    @property
    def gamma1(self) -> Enclosure | None:
        """Critical function at c1; None for a continuous law or a one-sided test."""
        return self._ends()[0][1] if self._two_sided else None

    @property
    def gamma2(self) -> Enclosure | None:
        """Critical function at c2; None for a continuous law or a one-sided test."""
        return self._ends()[1][1] if self._two_sided else None

    @cached_property
    def c(self) -> Enclosure | None:
        """Cutoff of a one-sided test."""
        return None if self._two_sided else self._on_scale(self.critical.c1)

    @property
    def gamma(self) -> Enclosure | None:
        """Critical function at c; None for a continuous law or a two-sided test."""
        return None if self._two_sided else self.critical.phi1

    @property
    def numbers(self) -> dict[str, Enclosure]:
        """Its cutoffs and fractions by name: those that a test of this form and law has."""
        named = {name: getattr(self, name) for name in NUMBER_NAMES}
        return {name: value for name, value in named.items() if value is not None}

    def __str__(self) -> str:
        density, hypothesis = self.problem.density, self.problem.hypothesis
        lines = [
            f"null: {hypothesis.text(density.parameter)}; n = {self.problem.n}; "
            f"rejects {self.rejects}; {self.grade.value}",
            *(f"{name.ljust(6)} = {value.text(self.digits)}" for name, value in self.numbers.items()),
        ]
        return "\n".join(lines)

    @cached_property
    def cutoff_digits(self) -> int:
        """Digits in which to write a cutoff: those asked for, and more where c1 and c2 would look alike in them."""
        if self.c1 is None or self.c2 is None or self.c1.exact or self.c1.mid == self.c2.mid:
            return self.digits
        ratio = max(abs(self.c1.mid), abs(self.c2.mid)) / (self.c2.mid - self.c1.mid)
        return self.digits + max(0, (ratio.numerator.bit_length() - ratio.denominator.bit_length()) * 3 // 10)

    def digits_of(self, name: str) -> int:
        """Digits in which to write a number of the test, by its name."""
        return self.cutoff_digits if name.startswith("c") else self.digits

    @property
    def expectations(self) -> tuple[Enclosure, ...]:
        """Left-hand sides of the side conditions."""
        return tuple(condition.expectation for condition in self.side_conditions)

    def power(self, t: str | int | Fraction | Exact) -> Enclosure:
        """Return the power (probability of rejection) at a parameter value.

        Raises
        ------
        InputError
            For a value outside the parameter space.
        """
        value = exact(t, key="t")
        space = self.problem.density.parsed_space
        if not space.contains(value):
            raise InputError(f"{t} is outside the parameter space", f"ask inside {space.text}", key="t")
        return self.critical.power(self.family.at(value, self.problem.n), self.prec + 64)

    def phi(self, v: str | int | Fraction | Exact) -> Enclosure:
        """Return the critical function at a value of the statistic V.

        Raises
        ------
        UndecidedError
            When v lies within the enclosure of a cutoff.
        InputError
            For a v that is not a support point of a lattice law.
        """
        value, family = exact(v, key="v"), self.family
        parts = (value, family.scale, family.shift)
        if not all(isinstance(part, Fraction) for part in parts):
            raise UndecidedError("phi is decided at rational values of a statistic with rational scale only")
        y = (value - self.problem.n * family.shift) / family.scale
        if self.laws[0].lattice and y.denominator != 1:
            raise InputError(f"{v} is not a value of the statistic", "ask at a support point", key="v")
        answer = self.critical.at(int(y) if self.laws[0].lattice else y)
        if answer is None:
            raise UndecidedError(f"{v} lies within the enclosure of a cutoff; ask for more digits")
        return answer


def family_of(derivation: Derivation) -> LawFamily:
    """Return the law of T, or say why there is none.

    Raises
    ------
    UndecidedError
        When the derivation found no law.
    """
    if derivation.family is None:
        weak = [step for step in derivation.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
        because = "; ".join(f"{step.name} {step.grade.value}" for step in weak) or "no law was found"
        raise UndecidedError(f"the law of the statistic is not known: {because}")
    return derivation.family


def solve(problem: Problem, digits: int = 50, derivation: Derivation | None = None) -> Solution:
    """Solve a problem and prove the digits.

    Parameters
    ----------
    problem : Problem
        Density, null, level and sample size.
    digits : int
        Significant digits, 15 to 10 000.
    derivation : Derivation, optional
        A derivation of the same density, when known; one that does not cover the limits is made anew.

    Returns
    -------
    Solution

    Raises
    ------
    InputError
        For digits out of range, two levels that no test has, or the derivation of another density.
    UndecidedError
        When the law is not known or a tie cannot be decided.

    Notes
    -----
    Source: Lehmann and Romano 2005, Theorems 3.4.1, 3.6.1 and 3.7.1 and section 4.2.

    Examples
    --------
    >>> from verify import Density, Problem, solve
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> solution = solve(Problem(density, null="lam <= 8 or lam >= 12", alpha="0.05", n=10))
    >>> print(solution.c1, solution.c2, solution.gamma1.text(12), solution.gamma2.text(12))
    94 103 0.0867146646010 0.514744492090
    """
    if not isinstance(digits, int) or not LEAST_DIGITS <= digits <= MOST_DIGITS:
        raise InputError(f"{digits} digits", f"ask for {LEAST_DIGITS} to {MOST_DIGITS}", key="digits")
    derivation = derivation_for(problem, derivation)
    family = family_of(derivation)
    laws = tuple(family.at(limit, problem.n) for limit in problem.hypothesis.limits)
    route = _solve_one_sided if problem.hypothesis.form is Form.ONE_SIDED else _solve_two_sided
    with within_shared_digits(laws, digits):
        return route(problem, derivation, laws, digits)


def _solve_two_sided(problem: Problem, derivation: Derivation, laws: tuple[Law, ...], digits: int) -> Solution:
    even = partial(_even, problem, derivation) if len(laws) == 2 else None
    search = window_search(laws, problem.levels, problem.hypothesis.form is not Form.OUTSIDE, even)
    require_attainable(laws, problem.levels, search.rough)
    window = solve_window(search, digits)
    return with_window(problem, derivation, laws, digits, window)


def _even(problem: Problem, derivation: Derivation, c: int) -> bool:
    """Whether a lattice point has exactly the same mass at both limits."""
    from verify.derivation.even import equally_likely

    family, (low, high) = family_of(derivation), problem.hypothesis.limits
    if not (isinstance(family.scale, Fraction) and isinstance(family.shift, Fraction)):
        return False
    return equally_likely(derivation, (low, high), problem.n, family.scale * c + problem.n * family.shift)


def with_window(
    problem: Problem, derivation: Derivation, laws: tuple[Law, ...], digits: int, window: Window
) -> Solution:
    """Return the solution that a proved window makes."""
    outside = problem.hypothesis.form is not Form.OUTSIDE
    derivation = with_sum_step(derivation, laws, window.prec)
    critical = CriticalFunction("outside" if outside else "inside", window.c1, window.c2, window.phi1, window.phi2)
    return Solution(
        problem, derivation, digits, critical, laws, held(_two_conditions(problem, window), window.prec),
        (*derivation.steps, _numbers_step(problem, laws, window.prec)), window.prec,
    )  # fmt: skip


def _two_conditions(problem: Problem, window: Window) -> tuple[SideCondition, ...]:
    limits, levels = problem.hypothesis.limits, problem.levels
    if len(limits) == 1:
        return (
            SideCondition(limits[0], levels[0], window.conditions[0], "phi"),
            SideCondition(limits[0], Fraction(0), window.conditions[1], "(V - E V) phi"),
        )
    return tuple(
        SideCondition(limit, level, expectation, "phi")
        for limit, level, expectation in zip(limits, levels, window.conditions, strict=True)
    )


def _solve_one_sided(problem: Problem, derivation: Derivation, laws: tuple[Law, ...], digits: int) -> Solution:
    rough, _, _ = rough_laws(laws)
    above = rejects_above(problem, derivation)
    prec = search_precision(rough, problem.levels, 0)
    tail = TailProblem(laws[0], problem.levels[0], above, rough[0], prec).solve(digits)
    return with_tail(problem, derivation, laws, digits, tail)


def with_tail(problem: Problem, derivation: Derivation, laws: tuple[Law, ...], digits: int, tail: Tail) -> Solution:
    """Return the solution that a proved one-sided cutoff makes."""
    above = rejects_above(problem, derivation)
    derivation = with_sum_step(derivation, laws, tail.prec)
    critical = CriticalFunction("above" if above else "below", tail.c, tail.c, tail.phi, tail.phi)
    condition = SideCondition(problem.hypothesis.limits[0], problem.levels[0], tail.condition, "phi")
    return Solution(
        problem, derivation, digits, critical, laws, held((condition,), tail.prec),
        (*derivation.steps, _numbers_step(problem, laws, tail.prec)), tail.prec,
    )  # fmt: skip


def rejects_above(problem: Problem, derivation: Derivation) -> bool:
    """Whether the one-sided test rejects large Y: the sign of Q', of the scale, and the side of the alternative."""
    if derivation.rising is None:
        raise UndecidedError("the direction of the natural parameter is not known, so neither is the side to reject on")
    with balls(64) as A:
        up = bool(A.real(family_of(derivation).scale) > 0)
    return (derivation.rising == up) == problem.hypothesis.null_below


def _numbers_step(problem: Problem, laws: tuple[Law, ...], prec: int) -> Step:
    """The step that the solution adds to the ledger."""
    if prec == 0:
        how = "exact rational arithmetic"
    elif laws[0].lattice:
        how = f"ball arithmetic at {prec} bits: both end fractions lie certainly within [0, 1]"
    else:
        how = f"ball arithmetic at {prec} bits: solved for the cutoffs, they map the enclosures into themselves"
    statement = f"The cutoffs and fractions satisfy the side conditions, shown in {how}."
    source = optimality(problem.hypothesis.form, problem.levels).source
    reason = f"{source}: numbers that fit are the only ones"
    if sum_step(laws, prec) is None:
        return Step("numbers", Grade.PROVED, statement, reason)
    within = "as far as intervals around the values of both routes to the law of the sum contain it"
    return Step("numbers", Grade.CHECKED, f"{statement[:-1]}, {within}.", reason)
