"""Tables of weights, with gaps: against exact fractions and every pair of cutoffs."""

from fractions import Fraction

import exhaustive
from hypothesis import assume, given
from hypothesis import strategies as st

from verify.derivation.derive import derive
from verify.errors import InputError
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

weights = st.lists(st.integers(0, 4), min_size=2, max_size=5).filter(lambda w: w[0] and w[-1])
levels = st.sampled_from([Fraction(1, 20), Fraction(1, 3), Fraction(9, 10)])


def masses(table: list[int], t: Fraction, n: int) -> dict[int, Fraction]:
    one = {k: w * t**k for k, w in enumerate(table) if w}
    total, result = sum(one.values()), {0: Fraction(1)}
    for _ in range(n):
        grown: dict[int, Fraction] = {}
        for a, p in result.items():
            for b, q in one.items():
                grown[a + b] = grown.get(a + b, Fraction(0)) + p * q / total
        result = grown
    return result


@given(weights, st.sampled_from([(1, 2), (Fraction(1, 3), 3)]), levels, st.integers(1, 3), st.booleans())
def test_a_table_of_weights(table, limits, level, n, outside):
    density = Density(
        weights=[str(w) for w in table],
        variable="x",
        support=f"integers 0..{len(table) - 1}",
        parameter="t",
        space="t > 0",
    )
    low, high = map(Fraction, limits)
    null = f"{low} <= t <= {high}" if outside else f"t <= {low} or t >= {high}"
    try:
        solution = solve(
            Problem(density, null=null, alpha=str(level), n=n), digits=20, derivation=derivation(density, table)
        )
    except InputError:
        assume(False)
    laws = masses(table, low, n), masses(table, high, n)
    find = exhaustive.outside if outside else exhaustive.inside
    c1, c2, phi1, phi2 = find(*laws, (level, level))
    assert (solution.c1.lower, solution.c2.lower) == (c1, c2)
    assert solution.gamma1.contains(phi1)
    assert solution.gamma2.contains(phi2)


KNOWN: dict[tuple[int, ...], object] = {}


def derivation(density: Density, table: list[int]):
    key = tuple(table)
    if key not in KNOWN:
        KNOWN[key] = derive(density)
    return KNOWN[key]
