"""Formulas: text to SymPy expression through a whitelist of our own, and back.

The text is scanned (``scan``), parsed by Python's grammar into a syntax tree that is never compiled or run,
and walked: only numbers, known names, ``+ - * / **``, signs and calls of the functions in ``functions`` are
understood. Decimals are exact rationals, taken from the text.
"""

from __future__ import annotations

import ast
import warnings
from collections.abc import Mapping
from fractions import Fraction
from functools import cache

import sympy
from sympy.printing.str import StrPrinter

from verify.errors import InputError
from verify.problem.functions import CONSTANTS, FUNCTIONS
from verify.problem.guards import MAX_BITS, Budget, bits
from verify.problem.nearest import suggestion
from verify.problem.scan import MAX_DEPTH, NUMBER, scan_formula, shorten
from verify.problem.work import bounded_work

MAX_TREE = 2 * MAX_DEPTH
"""Depth of the syntax tree, where an exponent or a function counts ``DEEP`` times."""
DEEP = 10


def parse_formula(text: str, symbols: Mapping[str, sympy.Expr], key: str = "") -> sympy.Expr:
    """Read a formula.

    Parameters
    ----------
    text : str
        Numbers, names, ``+ - * /``, ``**`` or ``^``, and calls of the functions in ``FUNCTIONS``.
    symbols : Mapping
        The names that may stand in it: a symbol each, or the exact value of a known constant.
    key : str
        Where the text came from, for messages.

    Returns
    -------
    sympy.Expr
        Real and finite as far as SymPy can tell without numbers for the symbols; every rational in it exact.

    Raises
    ------
    InputError
        For anything else: one line that says what is not understood, or which bound is passed.

    Examples
    --------
    >>> x = sympy.Symbol("x", integer=True, nonnegative=True)
    >>> parse_formula("0.05 * 2^x / factorial(x)", {"x": x})
    2**x/(20*factorial(x))
    """
    source = scan_formula(text, key)
    tree = _syntax_tree(source, key)
    with bounded_work(
        InputError(f"{shorten(source)} is too complicated to be built", "simplify it", key=key)
    ):
        return _require_real(_Walker(source, symbols, key).build(tree, 0), key)


def _syntax_tree(source: str, key: str) -> ast.expr:
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            return ast.parse(source, mode="eval").body
    except SyntaxError as error:
        place = f" near position {error.offset}" if error.offset else ""
        raise InputError(
            f"{shorten(source)} is not a formula{place}", "write products with *", key=key
        ) from None
    except (ValueError, MemoryError, RecursionError, OverflowError):
        raise InputError("the formula cannot be parsed", "simplify it", key=key) from None


def _require_real(expr: sympy.Expr, key: str) -> sympy.Expr:
    if expr.has(sympy.I, sympy.nan, sympy.zoo, sympy.oo, -sympy.oo) or (
        expr.is_number and expr.is_real is False
    ):
        raise InputError("the formula is not a real number", "use real, finite numbers", key=key)
    if any(bits(number) > MAX_BITS for number in expr.atoms(sympy.Rational)):
        raise InputError("a number in the formula is too large", "use smaller numbers", key=key)
    return expr


class _Walker:
    """Turns one syntax tree into one expression, bottom up, spending one budget."""

    def __init__(self, source: str, symbols: Mapping[str, sympy.Expr], key: str) -> None:
        self.source, self.symbols, self.key = source, symbols, key
        self.budget = Budget(key)

    def build(self, node: ast.expr, depth: int) -> sympy.Expr:
        if depth > MAX_TREE:
            raise self.error("the formula is nested too deeply", "simplify it")
        match node:
            case ast.Constant():
                return self.number(node)
            case ast.Name():
                return self.name(node.id)
            case ast.UnaryOp(op=ast.USub() | ast.UAdd()):
                inner = self.build(node.operand, depth + 1)
                return -inner if isinstance(node.op, ast.USub) else inner
            case ast.BinOp(op=ast.Add() | ast.Sub()):
                return self.sum(node, depth)
            case ast.BinOp(op=ast.Mult() | ast.Div()):
                return self.product(node, depth)
            case ast.BinOp(op=ast.Pow()):
                return self.power(self.build(node.left, depth + 1), self.build(node.right, depth + DEEP))
            case ast.Call():
                return self.call(node, depth)
        wrong = f"{self.segment(node)} is not understood in a formula"
        raise self.error(wrong, "use numbers, names, + - * / ** and functions")

    def error(self, wrong: str, right: str) -> InputError:
        return InputError(wrong, right, key=self.key)

    def segment(self, node: ast.expr) -> str:
        return shorten(ast.get_source_segment(self.source, node) or "")

    def number(self, node: ast.Constant) -> sympy.Expr:
        text = self.source[node.col_offset : node.end_col_offset]
        if not NUMBER.fullmatch(text):
            raise self.error(f"{shorten(text)} is not a number", "write numbers like 12, 0.05 or 1e-200")
        value = Fraction(text)
        result = sympy.Rational(value.numerator, value.denominator)
        self.budget.spend(bits(result), "a number")
        return result

    def name(self, name: str) -> sympy.Expr:
        if name in self.symbols:
            return self.symbols[name]
        if name in CONSTANTS:
            return CONSTANTS[name]
        if name in FUNCTIONS:
            raise self.error(f"the function {name} has no argument", f"write {name}(...)")
        known = sorted({*self.symbols, *CONSTANTS})
        hint = "write exp(1)" if name in ("e", "E") else f"known here: {', '.join(known)}"
        raise self.error(f"unknown name {shorten(name, 30)}", hint)

    def sum(self, node: ast.expr, depth: int) -> sympy.Expr:
        terms: list[sympy.Expr] = []
        while isinstance(node, ast.BinOp) and isinstance(node.op, ast.Add | ast.Sub):
            term = self.build(node.right, depth + 1)
            terms.append(-term if isinstance(node.op, ast.Sub) else term)
            node = node.left
        terms.append(self.build(node, depth + 1))
        return self.finite(sympy.Add(*reversed(terms)))

    def product(self, node: ast.expr, depth: int) -> sympy.Expr:
        factors: list[sympy.Expr] = []
        while isinstance(node, ast.BinOp) and isinstance(node.op, ast.Mult | ast.Div):
            factor = self.build(node.right, depth + 1)
            factors.append(
                self.power(factor, sympy.S.NegativeOne) if isinstance(node.op, ast.Div) else factor
            )
            node = node.left
        factors.append(self.build(node, depth + 1))
        return self.finite(sympy.Mul(*reversed(factors)))

    def power(self, base: sympy.Expr, exponent: sympy.Expr) -> sympy.Expr:
        if base.is_zero and exponent.is_negative:
            raise self.error("division by zero", "use a denominator that is not zero")
        if exponent is not sympy.S.NegativeOne:
            self.budget.power(base, exponent)
        return self.finite(sympy.Pow(base, exponent))

    def call(self, node: ast.Call, depth: int) -> sympy.Expr:
        if not isinstance(node.func, ast.Name) or node.keywords:
            raise self.error(
                f"{self.segment(node)} is not understood in a formula", "call functions by name, e.g. exp(x)"
            )
        name = node.func.id
        function = FUNCTIONS.get(name)
        if function is None:
            raise self.error(f"unknown function {shorten(name, 30)}", suggestion(name, FUNCTIONS))
        if len(node.args) != function.arity:
            raise self.error(
                f"{name} takes {function.arity} argument(s), got {len(node.args)}", "check the commas"
            )
        arguments = tuple(self.build(argument, depth + DEEP) for argument in node.args)
        function.guard(self.budget, name, arguments)
        return self.finite(function.build(*arguments))

    def finite(self, value: sympy.Expr) -> sympy.Expr:
        if value in (sympy.zoo, sympy.oo, -sympy.oo, sympy.nan):
            raise self.error(
                "a part of the formula is infinite or undefined", "check for a division by zero or log(0)"
            )
        self.budget.number(value)
        return value


class _Printer(StrPrinter):  # type: ignore[misc]
    """SymPy's plain text, but with e written as the formula language writes it."""

    def _print_Exp1(self, expr: sympy.Expr) -> str:  # noqa: N802
        return "exp(1)"


@cache
def _printer() -> _Printer:
    return _Printer({"order": None})


def formula_text(expr: sympy.Expr) -> str:
    """Write an expression as text that ``parse_formula`` reads back.

    Examples
    --------
    >>> formula_text(sympy.exp(1) / 2)
    'exp(1)/2'
    """
    return str(_printer().doprint(expr))
