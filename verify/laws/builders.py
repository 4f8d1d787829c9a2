"""Builds the tables of a lattice sum: one power of the weights per precision, shared by all parameter
values.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import Balls, balls, midpoint, to_fraction
from verify.arithmetic.exact import Rationals
from verify.arithmetic.series import ball_power, exact_power, up_to
from verify.errors import NotRational, UndecidedError
from verify.laws.table import Table
from verify.laws.tilting import cut

if TYPE_CHECKING:
    from verify.laws.atoms import Atoms
    from verify.laws.lattice import LatticeSum

Number = Any

MAX_LENGTH = 1 << 20
"""Longest table of masses that is attempted."""

GUARD_BITS = 64


def in_balls(A: Any) -> bool:
    """Whether an arithmetic works in balls (the other one that a lattice sum serves is exact)."""
    if isinstance(A, Balls):
        return True
    if isinstance(A, Rationals):
        return False
    raise TypeError("a lattice sum is computed in balls or exactly")


def widen(A: Any, table: Table, raw: Number, *, touched: bool) -> Number:
    """Return a raw sum of the table as a probability, widened by what the table may lack."""
    if isinstance(A, Rationals):
        return Fraction(raw) / table.total
    value = A.real(raw) / table.total
    return value + up_to(table.missing) if touched else value


def exact_table(law: LatticeSum, v: int | None) -> Table:
    """Return the table in exact fractions.

    Raises
    ------
    NotRational
        Where a mass is irrational, the support has no lower end, or the fractions would fill too many bits.
    """
    one, n = law.one, law.n
    if one.first is None:
        raise NotRational("masses of a two-sided lattice are infinite sums")
    reach = (
        one.last
        if one.last is not None
        else max(0, (n * one.first if v is None else v) - (n - 1) * one.first)
    )
    key = ("exact", law.at, n)
    known: Table | None = one.cache.get(key)
    if known is not None and (known.complete or (v is not None and v <= known.end)):
        return known
    masses = one.masses(Rationals(), law.at, one.first, reach)
    length = n * (reach - one.first) + 1 if one.last is not None else reach - one.first + 1
    powered = exact_power(masses, n, length)
    if powered is None:
        raise NotRational("the exact masses would fill too many bits")
    raw, denominator = powered
    total = denominator if one.normalised else sum(raw)
    table = Table(n * one.first, raw, total, complete=one.last is not None)
    one.cache[key] = table
    return table


def ball_table(law: LatticeSum, prec: int, v: int | None) -> Table:
    """Return the table in balls at a precision, long enough to reach v."""
    one = law.one
    key = ("balls", prec, law.at, law.n)
    known: Table | None = one.cache.get(key)
    if known is not None and (known.complete or v is None or v <= known.end):
        return known
    bits = prec + GUARD_BITS + 2 * law.n.bit_length()
    with balls(bits) as A:
        table = _build(law, A, bits, v, known)
    one.cache[key] = table
    return table


def _build(law: LatticeSum, A: Any, bits: int, v: int | None, known: Table | None) -> Table:
    one, n = law.one, law.n
    low, high, missing = _window(law, bits)
    if one.last is not None or one.first is None:
        length = n * (high - low) + 1
        reach = high
    else:
        length = _length(law, v, known)
        reach = min(high, low + length - 1) if high is not None else low + length - 1
    if length > MAX_LENGTH:
        raise UndecidedError(
            f"the table of masses would need {length} lattice points (at most {MAX_LENGTH} are tried)"
        )
    raw = _power(law, A, low, reach, length)
    total = A.real(1)
    if not one.normalised:
        total = A.power(sum(one.tilted(A, law.at, low, high), A.real(0)), n)
    cut_off = one.last is None and (one.first is None or reach < low + length - 1)
    return Table(
        n * low,
        raw,
        total,
        complete=one.last is not None or one.first is None,
        exact_below=_first_touched(one, n, reach) if cut_off else None,
        missing=missing if cut_off else 0,
    )


def _first_touched(one: Atoms, n: int, reach: int) -> int:
    """The smallest sum in which a cut observation can take part (for a two-sided lattice: any)."""
    return -(1 << 60) if one.first is None else reach + 1 + (n - 1) * one.first


def _window(law: LatticeSum, bits: int) -> tuple[int, Any, Any]:
    """Where one observation is cut, and a bound for the mass of a sum with an observation outside."""
    one, n = law.one, law.n
    if one.first is not None and one.last is not None:
        return one.first, one.last, 0
    wanted = 2 * bits + n.bit_length()
    top = cut(one, law.at, wanted, upper=True)
    if one.first is not None:
        return (one.first, None, 0) if top is None else (one.first, _rounded(top[0]), n * top[1])
    bottom = cut(one, law.at, wanted, upper=False)
    if top is None or bottom is None:
        raise UndecidedError(
            "no bound was found for a tail of the two-sided lattice inside the parameter space"
        )
    return -_rounded(-bottom[0]), _rounded(top[0]), n * (top[1] + bottom[1])


def _rounded(place: int) -> int:
    """Round outward so that neighbouring parameter values share one window."""
    unit = 1 << max(0, abs(place).bit_length() - 3)
    return -(-place // unit) * unit


def _length(law: LatticeSum, v: int | None, known: Table | None) -> int:
    start = law.n * (law.one.first or 0)
    with balls(GUARD_BITS) as A:
        mean, spread = (to_fraction(midpoint(x)) for x in (law.expectation(A), law.spread(A)))
    reach = max(int(mean + 8 * spread) + 16, 0 if v is None else v)
    if known is not None:
        reach = max(reach, start + 2 * len(known.raw))
    wanted = max(reach - start + 1, 16)
    unit = 1 << max(0, wanted.bit_length() - 3)
    return -(-wanted // unit) * unit


def _power(law: LatticeSum, A: Any, low: int, reach: int, length: int) -> list[Number]:
    """The n-fold masses at the law's parameter value, from the power at the family's base value."""
    one, n = law.one, law.n
    base = one.cache.setdefault("base", law.at)
    powers = one.cache.setdefault(("powers", A.prec, n, low, reach), [])
    if len(powers) < length:
        powers[:] = ball_power(one.tilted(A, base, low, reach), n, length)
    if base == law.at:
        return list(powers[:length])
    C, rho = one.ratio(A, law.at, base, low if one.first is not None else 0)
    factor, out = A.power(C, n) * A.power(rho, n * low), []
    for mass in powers[:length]:
        out.append(mass * factor)
        factor = factor * rho
    return out


def moments(law: LatticeSum, A: Any) -> tuple[Number, Number]:
    """Mean and variance of one observation on a finite support, from its masses."""
    one = law.one
    if one.first is None or one.last is None:
        raise UndecidedError("the mean of an infinite lattice needs the derivation's log-normaliser")
    key = ("moments", law.at, A.prec if in_balls(A) else "exact")
    if key not in one.cache:
        read = one.tilted if in_balls(A) else one.masses
        masses = read(A, law.at, one.first, one.last)
        total = sum(masses, A.real(0))
        ys = range(one.first, one.last + 1)
        mean = sum((y * m for y, m in zip(ys, masses, strict=True)), A.real(0)) / total
        square = sum(((y - mean) * (y - mean) * m for y, m in zip(ys, masses, strict=True)), A.real(0)) / total
        one.cache[key] = (mean, square)
    found: tuple[Number, Number] = one.cache[key]
    return found
