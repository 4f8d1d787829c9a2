"""Take a logarithm apart into parts of x alone, of t alone, and products of the two."""

from __future__ import annotations

from dataclasses import dataclass, field

import sympy as sp
from sympy import Expr, Symbol


@dataclass
class Separated:
    """``of_x + of_t + sum of coefficient(t) * part(x) + tangled``.

    Attributes
    ----------
    of_x, of_t : Expr
        Terms in x alone (constants among them) and in t alone.
    products : dict
        Function of x -> its coefficient, a function of t.
    tangled : Expr
        Terms in which x and t could not be parted; 0 when all is well.
    """

    of_x: Expr = sp.S.Zero
    of_t: Expr = sp.S.Zero
    products: dict[Expr, Expr] = field(default_factory=dict)
    tangled: Expr = sp.S.Zero

    def add(self, term: Expr, x: Symbol, t: Symbol) -> bool:
        """Put one additive term in its place; False when it is a tangle (which is not put anywhere)."""
        if not term.has(t):
            self.of_x += term
        elif not term.has(x):
            self.of_t += term
        else:
            coefficient, part = term.as_independent(x, as_Add=False)
            if part.has(t):
                return False
            self.products[part] = self.products.get(part, sp.S.Zero) + coefficient
        return True


def separate(expr: Expr, x: Symbol, t: Symbol) -> Separated:
    """Separate an expression, multiplying out only where that is needed.

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> separate(-(x - 3)**2 / (2*t) - sp.log(t), x, t).products
    {(x - 3)**2: -1/(2*t)}
    >>> separate(-(x - t)**2 / 2, x, t).products
    {x: t}
    """
    parts = Separated()
    for term in sp.Add.make_args(expr):
        if parts.add(term, x, t):
            continue
        for piece in sp.Add.make_args(_opened(term, x, t)):
            if not parts.add(piece, x, t):
                parts.tangled += piece
    if len(parts.products) > 1:
        _multiply_out(parts, x, t)
    parts.products = {part: coefficient for part, coefficient in _settled(parts, x) if coefficient != 0}
    return parts


def _multiply_out(parts: Separated, x: Symbol, t: Symbol) -> None:
    """Write sums of functions of x as separate products, so that equal functions meet."""
    products, parts.products = parts.products, {}
    for part, coefficient in products.items():
        for piece in sp.Add.make_args(sp.expand(part)):
            parts.add(coefficient * piece, x, t)


def _opened(term: Expr, x: Symbol, t: Symbol) -> Expr:
    opened = sp.expand(term)
    if opened.has(sp.sin, sp.cos, sp.sinh, sp.cosh):
        opened = sp.expand(opened, trig=True)
    if any(part.has(x) and part.has(t) for part in opened.atoms(sp.Pow)):
        opened = sp.expand(sp.expand_power_base(sp.expand_power_exp(opened)))
    return opened


def _settled(parts: Separated, x: Symbol) -> list[tuple[Expr, Expr]]:
    """Move additive constants of the coefficients to the part of x alone."""
    settled = []
    for part, coefficient in parts.products.items():
        opened = sp.expand(coefficient) if isinstance(coefficient, (sp.Add, sp.Mul)) else coefficient
        constant, moving = opened.as_independent(*(opened.free_symbols or {x}), as_Add=True)
        if not opened.free_symbols:
            constant, moving = opened, sp.S.Zero
        parts.of_x += constant * part
        settled.append((part, coefficient if constant == 0 and moving != 0 else moving))
    return settled
