"""The pytest plugin: case files as tests, proven solutions as a fixture, and a comparison whose failure explains.

Installed with the package and switched off with ``-p no:sidecheck``. It imports pytest and the standard library
only; everything else is imported when it is first used.

Examples
--------
In a test module of your own::

    from verify.oracle import assert_cutoffs

    def test_lot_release(sidecheck_solution):
        proven = sidecheck_solution("cases/lot-release.case.toml")
        assert_cutoffs(my_solver(...), proven, digits=8)
"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

from verify.oracle.settings import DIGITS, SUFFIX, digits_of

if TYPE_CHECKING:
    from verify.oracle.items import CaseFile
    from verify.solution.solve import Solution

__all__ = ["assert_cutoffs", "sidecheck_solution"]


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add the options and ini keys, all of which begin with the project's name."""
    group = parser.getgroup("sidecheck", "proven cutoffs")
    group.addoption("--sidecheck-digits", metavar="N", default=None, help=f"digits to prove (default {DIGITS})")
    group.addoption("--no-sidecheck-collect", action="store_true", help="leave the case files alone")
    parser.addini("sidecheck_collect", f"collect *{SUFFIX} as tests", type="bool", default=True)
    parser.addini("sidecheck_digits", "digits to prove", default=str(DIGITS))


def pytest_configure(config: pytest.Config) -> None:
    """Make the mark of the case files known, so that ``-m "not sidecheck"`` leaves them out."""
    config.addinivalue_line("markers", f"sidecheck: a case file, *{SUFFIX}")


def pytest_collect_file(file_path: Path, parent: pytest.Collector) -> CaseFile | None:
    """Collect the case files, and nothing else."""
    config = parent.config
    if not file_path.name.endswith(SUFFIX):
        return None
    if config.getoption("no_sidecheck_collect") or not config.getini("sidecheck_collect"):
        return None
    from verify.oracle.items import CaseFile

    collected: CaseFile = CaseFile.from_parent(parent, path=file_path)
    return collected


@pytest.fixture(scope="session")
def sidecheck_solution(request: pytest.FixtureRequest) -> Callable[..., Solution]:
    """Proven solutions: call it with a problem, a case file's path, or a density and ``null=, alpha=, n=``.

    Each solution is proved once a session. ``digits=`` asks for more of them. A path is looked for in the current
    folder, then in the root folder of the tests.
    """
    from verify.oracle.answers import Answers

    return Answers(request.config.rootpath, digits_of(request.config))


def assert_cutoffs(mine: Any, problem: Any, digits: int = 8) -> None:
    """Assert that cutoffs and fractions agree with the proven ones.

    Parameters
    ----------
    mine : mapping or sequence
        Numbers by name (``c1 c2 gamma1 gamma2``; one-sided: ``c gamma``), or in that order; on the scale of the sum
        V = T(X1) + ... + T(Xn). The cutoffs themselves belong to the side that is not rejected, except with
        probability gamma. A continuous law has no fractions.
    problem : Problem, Solution or path of a case file
        What was asked.
    digits : int
        Significant digits of a continuous law's cutoffs, and decimal places of the fractions, that must be right. A
        cutoff on a lattice must be the right support point.

    Raises
    ------
    AssertionError
        With both numbers, the digits that agree, the slip when one explains them, and what follows for the level.
    InputError
        When the problem cannot be used.
    UndecidedError
        When it cannot be solved with proof.

    Notes
    -----
    A test that is written in another way (a fraction 0 at one support point is a fraction 1 at the next) agrees.

    Examples
    --------
    >>> from verify import Density, Problem
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> problem = Problem(density, null="lam <= 8 or lam >= 12", alpha="0.05", n=10)
    >>> assert_cutoffs({"c1": 94, "c2": 103, "gamma1": 0.0867146646010, "gamma2": 0.514744492090}, problem)
    >>> assert_cutoffs((94, 103, 0.515, 0.087), problem, digits=3)
    Traceback (most recent call last):
        ...
    AssertionError: the cutoffs differ from the proven ones
      lam <= 8 or lam >= 12, alpha = 1/20, n = 10; V = sum of x; it rejects inside
                mine   proven           agreement
        c1      94     94               the right support point
        c2      103    103              the right support point
        gamma1  0.515  0.0867146646010  0 decimal places, 3 asked for
        gamma2  0.087  0.514744492090   0 decimal places, 3 asked for
      These are the numbers for gamma1 and gamma2 in each other's place (fractions-exchanged).
      With them the size is 0.0547109 (at 8) and not 1/20: the level is not kept.
    """
    __tracebackhide__ = True
    from verify.errors import InputError, UndecidedError
    from verify.oracle.agreement import disagreement
    from verify.oracle.answers import proven_to

    try:
        complaint = disagreement(mine, proven_to(digits, problem), digits)
    except (InputError, UndecidedError) as error:
        raise error.with_traceback(None) from None  # the line of the test is shown, and none of ours
    if complaint:
        raise AssertionError(complaint)
