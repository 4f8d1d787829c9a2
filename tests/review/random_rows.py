"""Right rows at random: a random problem, its numbers printed in a random way with random precision."""

import random
from decimal import ROUND_HALF_EVEN, Decimal, localcontext
from fractions import Fraction

from verify import Density, Problem, derive, solve
from verify.errors import InputError, UndecidedError
from verify.review.style import Style

DENSITIES = {
    "Poisson": Density(
        "exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0"
    ),
    "binomial": Density(
        "binomial(9, x)*t**x*(1-t)**(9-x)", variable="x", support="integers 0..9", parameter="t", space="0 < t < 1"
    ),
    "geometric": Density("t*(1-t)**x", variable="x", support="integers >= 0", parameter="t", space="0 < t < 1"),
    "exponential": Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0"),
    "rate": Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0"),
    "normal": Density("exp(-(x-t)**2/2)/sqrt(2*pi)", variable="x", support="reals", parameter="t", space="reals"),
    "variance": Density("exp(-x**2/(2*t))/sqrt(2*pi*t)", variable="x", support="reals", parameter="t", space="t > 0"),
}
_DERIVED: dict[str, object] = {}


def derivation(name: str):
    """Derive each density once."""
    if name not in _DERIVED:
        _DERIVED[name] = derive(DENSITIES[name])
    return _DERIVED[name]


def random_problem(rng: random.Random, name: str) -> Problem:
    inside = name in ("binomial", "geometric")
    a = Fraction(rng.randint(10, 80), 100) if inside else Fraction(rng.randint(20, 900), 100)
    b = a + (Fraction(rng.randint(5, 15), 100) if inside else a * Fraction(rng.randint(10, 120), 100))
    null = rng.choice([f"t <= {a} or t >= {b}", f"{a} <= t <= {b}", f"t = {a}", f"t <= {a}", f"t >= {a}"])
    alpha = rng.choice(["0.01", "0.05", "0.1", "1/40", "0.005", "0.2"])
    return Problem(DENSITIES[name], null, alpha, rng.randint(1, 40))


def printed(value: Fraction, places: int) -> str:
    """Round to so many decimals, ties to even."""
    with localcontext() as context:
        context.prec = 60
        number = Decimal(value.numerator) / Decimal(value.denominator)
        return format(number.quantize(Decimal(1).scaleb(-places), ROUND_HALF_EVEN), "f")


def random_row(rng: random.Random):
    """Return (problem, derivation, style, numbers as text) of a right row."""
    while True:
        name = rng.choice(sorted(DENSITIES))
        problem = random_problem(rng, name)
        try:
            solution = solve(problem, digits=30, derivation=derivation(name))
        except (InputError, UndecidedError):
            continue
        return problem, derivation(name), *_printed(rng, solution)


def _printed(rng: random.Random, solution) -> tuple[Style, dict[str, str]]:
    reported = rng.choice(["sum", "mean", "sum", str(rng.randint(2, 9))])
    divisor = {"sum": 1, "mean": solution.problem.n}.get(reported) or int(reported)
    accept = solution.c is None and solution.rejects == "outside" and rng.random() < 0.3
    style = Style(reported, None, "accept inside" if accept else None)
    lattice = solution.laws[0].lattice
    places, numbers = rng.randint(1, 9), {}
    for key in ("c1", "c2", "c"):
        value = getattr(solution, key)
        if value is not None:
            whole = lattice and divisor == 1
            cut = rng.randint(0, 2) if whole else rng.randint(0, 9)
            numbers[key] = printed(value.mid / divisor, cut)
    for key in ("gamma1", "gamma2", "gamma"):
        value = getattr(solution, key)
        if value is not None:
            numbers[key] = printed(1 - value.mid if accept else value.mid, places)
    return style, numbers
