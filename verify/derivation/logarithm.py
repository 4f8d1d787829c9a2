"""The logarithm of a density, expanded without a branch mistake.

``log |a b| = log |a| + log |b|`` and ``log |a**e| = e log |a|`` (e real) hold for all real a, b other than
0, so the expansion is of log of the absolute value; for a density the two are the same once it is shown
non-negative.
"""

from __future__ import annotations

import sympy as sp

from verify.derivation.positivity import Domain
from verify.derivation.signs import sign_of

LARGEST_POWER = 20
"""Multiples of logarithms up to this are put together into one logarithm of powers."""


def log_absolute(expr: sp.Expr, domain: Domain) -> sp.Expr:
    """Return log |expr| as a sum of logarithms of its parts.

    Parameters
    ----------
    expr : Expr
        Real on the domain, and not zero where the logarithm is used.
    domain : Domain
        Where its symbols live; used to write log(1 - p) rather than log((1 - p)**2)/2.

    Examples
    --------
    >>> x, t = sp.Symbol("x", integer=True, nonnegative=True), sp.Symbol("t", positive=True)
    >>> log_absolute(sp.exp(-t) * t**x / sp.factorial(x), Domain())
    -t + x*log(t) - log(factorial(x))
    """
    if isinstance(expr, sp.Mul):
        return sp.Add(*(log_absolute(factor, domain) for factor in expr.args))
    if isinstance(expr, sp.exp):
        return open_logs(expr.exp, domain)
    if isinstance(expr, sp.Pow):
        return sp.Mul(expr.exp, log_absolute(expr.base, domain))
    if isinstance(expr, sp.Abs):
        return log_absolute(expr.args[0], domain)
    if isinstance(expr, sp.beta):
        a, b = expr.args[0], expr.args[1]
        return (
            log_absolute(sp.gamma(a), domain)
            + log_absolute(sp.gamma(b), domain)
            - log_absolute(sp.gamma(a + b), domain)
        )
    if isinstance(expr, sp.Add):
        factored = sp.factor(sp.together(expr)) if expr.free_symbols else expr
        if not isinstance(factored, sp.Add):
            return log_absolute(factored, domain)
    return _log_atom(expr, domain)


def _log_atom(expr: sp.Expr, domain: Domain) -> sp.Expr:
    sign = sign_of(expr, domain)
    if sign == 0:
        return sp.log(expr**2) / 2
    return sp.log(expr if sign > 0 else -expr)


def open_logs(expr: sp.Expr, domain: Domain) -> sp.Expr:
    """Expand the logarithms inside an expression whose arguments are proved positive.

    Examples
    --------
    >>> p = sp.Symbol("p", positive=True)
    >>> open_logs(sp.log(p/(1 - p)), Domain({p: (sp.Integer(0), sp.Integer(1))}))
    log(p) - log(1 - p)
    """
    opened = {}
    for logarithm in expr.atoms(sp.log):
        argument = logarithm.args[0]
        if argument.free_symbols and not argument.is_Symbol and sign_of(argument, domain) == 1:
            opened[logarithm] = log_absolute(argument, domain)
    return sp.expand_mul(expr.xreplace(opened)) if opened else expr


def combine_logs(expr: sp.Expr) -> sp.Expr:
    """Write c log a - c log b as c log(a/b), where every argument stands in a real logarithm already.

    Examples
    --------
    >>> p = sp.Symbol("p", positive=True)
    >>> combine_logs(sp.log(p) - sp.log(1 - p))
    log(p/(1 - p))
    """
    if not isinstance(expr, sp.Add):
        return expr
    terms = [term.as_coeff_Mul() for term in expr.args]
    logs = [(c, f) for c, f in terms if isinstance(f, sp.log) and c.is_Rational]
    if len(logs) < 2:
        return expr
    size = sp.gcd([c for c, _ in logs])
    size = -size if all(c < 0 for c, _ in logs) else size
    if any(abs(c / size) > LARGEST_POWER for c, _ in logs):
        return expr
    argument = sp.Mul(*(f.args[0] ** (c / size) for c, f in logs))
    if argument.as_numer_denom()[0] == 1:
        size, argument = -size, 1 / argument
    rest = (c * f for c, f in terms if (c, f) not in logs)
    return sp.Add(size * sp.log(argument), *rest)
