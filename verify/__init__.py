"""Check the derivation of an optimal test for a one-parameter exponential family, and prove its cutoffs.

Everything public is listed here and loaded when it is first used, so that ``import verify`` costs nothing.

Examples
--------
>>> import verify
>>> density = verify.Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
...                          parameter="lam", space="lam > 0")
>>> problem = verify.Problem(density, null="lam <= 8 or lam >= 12", alpha="0.05", n=10)
>>> solution = verify.solve(problem, digits=20)
>>> int(solution.c1.lower), int(solution.c2.lower)
(94, 103)
"""

from __future__ import annotations

import sys
from importlib import import_module
from types import ModuleType
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure as Enclosure
    from verify.certificate.certify import certify as certify
    from verify.certificate.certify import recheck as recheck
    from verify.comparison.compare import compare as compare
    from verify.derivation.derive import derive as derive
    from verify.errors import InputError as InputError
    from verify.errors import SidecheckError as SidecheckError
    from verify.errors import UndecidedError as UndecidedError
    from verify.problem.casefile import read_case as read_case
    from verify.problem.density import Density as Density
    from verify.problem.problem import Problem as Problem
    from verify.review.review import review as review
    from verify.solution.solve import solve as solve

PUBLIC = {
    "Density": "verify.problem.density",
    "Problem": "verify.problem.problem",
    "read_case": "verify.problem.casefile",
    "derive": "verify.derivation.derive",
    "solve": "verify.solution.solve",
    "compare": "verify.comparison.compare",
    "review": "verify.review.review",
    "certify": "verify.certificate.certify",
    "recheck": "verify.certificate.certify",
    "Enclosure": "verify.arithmetic.enclosure",
    "InputError": "verify.errors",
    "UndecidedError": "verify.errors",
    "SidecheckError": "verify.errors",
}
"""Public name -> the module that defines it."""

__all__ = sorted([*PUBLIC, "__version__"])
__version__ = "0.1.0"


class _Package(ModuleType):
    """The package ``verify``, in which a sub-package never hides a public function of the same name."""

    def __setattr__(self, name: str, value: Any) -> None:
        if not (name in PUBLIC and isinstance(value, ModuleType)):
            super().__setattr__(name, value)


sys.modules[__name__].__class__ = _Package


def __getattr__(name: str) -> Any:
    if name not in PUBLIC:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(import_module(PUBLIC[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return __all__
