"""From a continuous density to the law of its statistic, by quadrature of the density itself."""

from __future__ import annotations

import sympy as sp

from verify.derivation.cumulants import cumulants, impossible_variance
from verify.derivation.factorisation import Factorisation
from verify.derivation.family import LawFamily
from verify.derivation.lattice_route import space_ends
from verify.derivation.monotone_pieces import V, inverse_on, monotone_pieces
from verify.derivation.points import parameter_points
from verify.derivation.positivity import Domain
from verify.derivation.smooth_parts import smooth_slope
from verify.derivation.transforms import transform_of
from verify.derivation.zeta_values import open_zeta
from verify.laws.continuous import OneObservation
from verify.laws.shape import DEVIATION, Piece, Shape
from verify.problem.density import Density
from verify.problem.numbers import as_exact, as_expr


def continuous_family(density: Density, found: Factorisation) -> tuple[LawFamily, str] | str:
    """Return the family with the reason, or what stands in the way.

    Parameters
    ----------
    density : Density
        A normalised density on an interval.
    found : Factorisation
        Its statistic, natural parameter and log normaliser.
    """
    if density.is_kernel:
        return "a kernel on an interval has no known normaliser: give the normalised density as a formula"
    x, t, support = density.x, density.t, density.parsed_support
    pieces = monotone_pieces(found.statistic, x, support.lower, support.upper)
    if isinstance(pieces, str):
        return pieces
    mean, variance = cumulants(open_zeta(found.log_normaliser), found.natural_parameter, t)
    wrong = impossible_variance(variance, t, parameter_points(density))
    if wrong:
        return wrong
    constant, core = density.expr.as_independent(x, as_Add=False)
    centred = (sp.Symbol(DEVIATION) - found.statistic) * core
    shape = Shape(
        constant,
        core,
        found.statistic,
        smooth_slope(found.statistic, x),
        centred,
        x.name,
        t.name,
        pieces,
        space_ends(density),
        mean,
        variance,
        found.natural_parameter,
        transform_of(density, found),
        *_pushed(core, found.statistic, x, pieces),
        _log_transform(density, found),
    )
    word = "monotone" if len(pieces) == 1 else f"monotone in {len(pieces)} pieces"
    return LawFamily(OneObservation(shape, t), as_exact(1), as_exact(0), t), f"T is {word} on the support"


def _pushed(core: sp.Expr, statistic: sp.Expr, x: sp.Symbol, pieces: tuple[Piece, ...]) -> tuple[sp.Expr | None, bool]:
    """The density of T at v without its constant, where T is monotone, and whether it is log-concave."""
    if len(pieces) != 1:
        return None, False
    (piece,) = pieces
    slope = sp.diff(piece.inverse, V) * (1 if piece.rising else -1)
    pushed = _parted(_at(core, x, piece) * slope)
    ends = sorted((piece.at_low, piece.at_high), key=lambda end: end is not None)
    if ends[1] is not None:
        return pushed, False
    curve, line = sp.diff(sp.expand_log(sp.log(pushed), force=True), V, 2), Domain({V: (-sp.oo, sp.oo)})
    forms = (_without_sinh, sp.simplify) if curve.has(sp.sinh) else (sp.simplify,)
    return pushed, any(line.sign(form(curve)) == -1 for form in forms)


def _parted(expr: sp.Expr) -> sp.Expr:
    """The expression with its sums of exponentials put together and its powers of positive products parted.

    So exp(v)/(1 + exp(v)) and its complement stay away from 0 as far as balls can see.
    """
    sums = {node: sp.factor(sp.together(node)) for node in expr.atoms(sp.Add) if node.has(sp.exp)}
    return sp.powsimp(sp.expand_power_base(expr.xreplace(sums))) if sums else expr


def _without_sinh(expr: sp.Expr) -> sp.Expr:
    """The expression with sinh(w)**2 written as cosh(w)**2 - 1, and multiplied out."""
    squares = {node: sp.cosh(node.base.args[0]) ** 2 - 1 for node in expr.atoms(sp.Pow) if _is_sinh_squared(node)}
    return sp.expand(expr.xreplace(squares))


def _is_sinh_squared(node: sp.Pow) -> bool:
    return isinstance(node.base, sp.sinh) and node.exp == 2


def _at(core: sp.Expr, x: sp.Symbol, piece: Piece) -> sp.Expr:
    """The core at the inverse of a piece; where T is positive, so is v, and the root of its square is v itself."""
    least = piece.at_low if piece.rising else piece.at_high
    value = sp.Dummy("v", positive=True) if least is not None and as_expr(least).is_nonnegative else V
    return core.subs(x, piece.inverse.subs(V, value)).subs(value, V)


def _log_transform(density: Density, found: Factorisation) -> sp.Expr | None:
    """The log normaliser in terms of the natural parameter, the symbol z; None where no inverse of Q is found.

    The logarithm of a power becomes a multiple of a logarithm, for only a whole multiple can be continued to complex z
    without regard to its cut; a constant that this adds drops out of differences.
    """
    space = density.parsed_space
    back = inverse_on(found.natural_parameter, density.t, space.lower, space.upper)
    if back is None:
        return None
    plain = found.log_normaliser.replace(sp.log, lambda inside: sp.expand_log(sp.log(sp.factor(inside)), force=True))
    return plain.subs(density.t, back.subs(V, sp.Symbol("z")))
