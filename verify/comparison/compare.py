"""Two double-precision opinions on a solved problem, held against the proof."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import asdict, dataclass, field
from fractions import Fraction
from functools import partial
from typing import TYPE_CHECKING, Any

from verify.comparison.brute_force import brute_force_opinion
from verify.comparison.condition import sensitivity
from verify.comparison.flags import Flag, engine_flags, flags_of
from verify.comparison.opinion import Opinion, Truth, opinion_of
from verify.comparison.question import Answer, Question, question
from verify.comparison.scipy_route import scipy_opinion
from verify.killable.calls import MEMORY, SECONDS, Outcome, run_limited
from verify.solution.second_engine import second_engine

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.solution.solve import Solution

ROUTES: dict[str, Callable[[Question], Answer]] = {
    "SciPy": scipy_opinion,
    "brute force": brute_force_opinion,
}
"""Name -> route."""


@dataclass(frozen=True)
class SecondEngine:
    """The side conditions solved once more in mpmath, from the same formulas, in an engine that shares no code.

    Attributes
    ----------
    digits : dict of str to int
        For each number, the significant digits that it reproduces of those asked for.
    note : str
        Why there are none, when there are none.
    """

    digits: dict[str, int]
    note: str = ""


@dataclass(frozen=True)
class Comparison:
    """How far double precision can be trusted on a problem.

    Attributes
    ----------
    opinions : tuple of Opinion
        SciPy's distribution objects, and brute force from the formula.
    flags : tuple of Flag
        What a reader has to be warned of; empty when both routes are right.
    condition : float or None
        A relative error eps in the tails moves the numbers by up to condition * eps.
    mpmath : SecondEngine
        What mpmath makes of the same side conditions at the full number of digits.
    """

    opinions: tuple[Opinion, ...]
    flags: tuple[Flag, ...]
    condition: float | None
    mpmath: SecondEngine = field(default_factory=lambda: SecondEngine({}, "not asked"))

    def as_json(self) -> dict[str, Any]:
        """Plain dictionaries, lists, strings and numbers."""
        return asdict(self)


def compare(solution: Solution, *, seconds: float = SECONDS, memory: int = MEMORY) -> Comparison:
    """Ask both double-precision routes about a solved problem and count the digits that agree with the proof.

    Parameters
    ----------
    solution : Solution
        The proven test.
    seconds, memory : float, int
        Limits for each route; a route that exceeds them is stopped and flagged.

    Returns
    -------
    Comparison
        A library's failure is a flag, never an exception. The routes share no code with the solution; where they agree
        with it, that is evidence, not proof.

    Examples
    --------
    >>> from verify import Density, Problem, solve
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> comparison = compare(solve(Problem(density, null="lam = 5", alpha="0.05", n=1)))
    >>> [opinion.numbers["c2"] for opinion in comparison.opinions], comparison.flags
    (['10', '10'], ())
    """
    truth = _truth(solution)
    calls: list[Callable[[], Any]] = [partial(second_engine, solution)]
    beyond_doubles = ""
    try:
        ask = question(solution)
        if min(ask.levels) < 1e-290:
            beyond_doubles = "the level is at the edge of the doubles or below it"
    except OverflowError as error:
        beyond_doubles = f"a number of the problem fits into no double ({error})"
    if not beyond_doubles:
        calls += [partial(route, ask) for route in ROUTES.values()]
    high, *outcomes = run_limited(calls, seconds, memory)
    if beyond_doubles:
        outcomes = [Outcome(not_attempted=beyond_doubles) for _ in ROUTES]
    opinions = tuple(_opinion(route, truth, outcome) for route, outcome in zip(ROUTES, outcomes, strict=True))
    flags = (*flags_of(truth, opinions), *engine_flags(high.value or {}, solution.digits))
    return Comparison(opinions, flags, truth.sensitivity.condition, _second_engine(high))


def _second_engine(outcome: Outcome) -> SecondEngine:
    if outcome.value is None:
        return SecondEngine({}, f"no answer: {outcome.failure or outcome.not_attempted}")
    return SecondEngine(outcome.value)


def _opinion(route: str, truth: Truth, outcome: Outcome) -> Opinion:
    if outcome.value is None:
        note = f"not attempted: {outcome.not_attempted}" if outcome.not_attempted else ""
        return opinion_of(route, truth, {}, note, outcome.failure)
    answer: Answer = outcome.value
    return opinion_of(route, truth, answer.numbers, answer.note, answer.failure, answer.claimed)


def _truth(solution: Solution) -> Truth:
    """The proven numbers and the scales on which doubles are held against them."""
    known = sensitivity(solution)
    numbers = solution.numbers
    conditions = solution.side_conditions
    numbers |= {f"expectation{i}": condition.expectation for i, condition in enumerate(conditions, 1)}
    level = _positive(conditions[0].target)
    scales: dict[str, Fraction] = {}
    for i, condition in enumerate(conditions, 1):
        scales[f"expectation{i}"] = _positive(condition.target) if condition.of == "phi" else level * known.spread
    for cutoff, mass in known.masses.items():
        if mass > 0:
            scales[cutoff.replace("c", "gamma", 1)] = level / mass
    scales |= {name: known.spread for name, value in numbers.items() if name.startswith("c") and _near_zero(value)}
    step = abs(float(solution.family.scale)) if solution.laws[0].lattice else 0.0
    return Truth(numbers, scales, step, known)


def _near_zero(value: Enclosure) -> bool:
    return value.contains(0) and not value.exact


def _positive(target: Any) -> Fraction:
    return target if isinstance(target, Fraction) else Fraction(float(target))
