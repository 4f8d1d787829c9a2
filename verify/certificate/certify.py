"""Certify a problem, and recheck a certificate: the public functions."""

from __future__ import annotations

import os
from dataclasses import dataclass
from datetime import UTC, datetime
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING, Any

from verify.certificate import recheck as checker
from verify.certificate.build import GUARD_DIGITS, Subject, build_statement, canonical
from verify.certificate.write import Paths, write_certificate
from verify.errors import InputError, UndecidedError

if TYPE_CHECKING:
    from verify.problem.casefile import Case
    from verify.problem.problem import Problem
    from verify.solution.solve import Solution

OPINION_SECONDS = 120.0
"""Time for a double-precision opinion: long, since what is certified must not depend on how busy a machine is."""

TOLERANCE = Fraction(1, 10**6)
"""How far the expectations may move by rounding, when the user says nothing."""


@dataclass(frozen=True)
class Certificate:
    """A certificate: its statement and the bytes to be stored.

    Attributes
    ----------
    name : str
        File name without ``.cert.json``.
    statement : dict
        The in-toto Statement.
    data : bytes
        Its canonical form (RFC 8785).
    """

    name: str
    statement: dict[str, Any]
    data: bytes

    @property
    def predicate(self) -> dict[str, Any]:
        """What is certified."""
        found: dict[str, Any] = self.statement["predicate"]
        return found

    @property
    def sha256(self) -> str:
        """Digest of the bytes."""
        from hashlib import sha256

        return sha256(self.data).hexdigest()

    def recheck(self) -> Verdict:
        """Hand the bytes to the rechecker."""
        return Verdict(*_verdict(self.data, None))

    def write(self, directory: str | Path, *, force: bool = False) -> Paths:
        """Write ``NAME.cert.json``, its twin ``NAME.cert.txt`` and the line in ``SHA256SUMS``; see
        ``write_certificate``.
        """
        return write_certificate(self.name, self.data, Path(directory), force=force)


@dataclass(frozen=True)
class Verdict:
    """What the rechecker says.

    Attributes
    ----------
    status : int
        0 accepted, 1 rejected, 2 malformed, 3 over the resource limit, 4 accepted with the numbers on trust.
    lines : tuple of str
        The verdict, and what is taken on trust.
    """

    status: int
    lines: tuple[str, ...]

    @property
    def accepted(self) -> bool:
        """Whether every number was confirmed."""
        return self.status == 0

    def __str__(self) -> str:
        return "\n".join(self.lines)


def certify(
    problem: Problem,
    digits: int = 50,
    *,
    case: Case | None = None,
    tolerance: Fraction | str = TOLERANCE,
    issued: str = "",
    solution: Solution | None = None,
) -> Certificate:
    """Solve a problem, compare it with double precision, and certify it.

    Parameters
    ----------
    problem : Problem
        What is asked.
    digits : int
        Significant digits of the numbers printed, 2 to 1000.
    case : Case, optional
        The case file it came from: names the certificate and gives title, source and digest.
    tolerance : Fraction or str
        How far the expectations may move when the numbers are printed to k decimals.
    issued : str
        Date or words of issue; when empty, SOURCE_DATE_EPOCH is used if set, else it stays empty.
    solution : Solution, optional
        A solution of this problem with at least ``digits + 10`` digits, when one is at hand.

    Returns
    -------
    Certificate
        Not yet rechecked: ``certificate.recheck()`` does it.

    Raises
    ------
    InputError
        For digits or a tolerance out of range, or a solution of another problem or with too few digits.
    UndecidedError
        When the solution or a step of the derivation is open, or a cutoff of a continuous law is 0 or cannot be told
        from 0.

    Examples
    --------
    >>> from verify import Density, Problem
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> certificate = certify(Problem(density, null="lam = 5", alpha="0.05", n=1), digits=20)
    >>> certificate.recheck().status, certificate.predicate["test"]["gamma1"]["lower"]
    (0, '0.67547159257243044625')
    """
    from verify.comparison.compare import compare
    from verify.solution.solve import solve

    if not 2 <= digits <= 1000:
        raise InputError(f"{digits} digits", "ask for 2 to 1000", key="digits")
    allowed = _tolerance(tolerance)
    solved = solution or solve(problem, digits=max(15, digits + GUARD_DIGITS))
    _require_answer(solved, problem, digits)
    _require_significant(solved)
    subject = Subject() if case is None else Subject(Path(case.path).name, case.sha256, case.title, case.source)
    statement = build_statement(
        solved,
        compare(solved, seconds=OPINION_SECONDS),
        subject,
        digits=digits,
        tolerance=allowed,
        issued=issued or _epoch(),
    )
    return Certificate("certificate" if case is None else case.name, statement, canonical(statement))


def _require_answer(solution: Solution, problem: Problem, digits: int) -> None:
    """Refuse a solution of another problem, or one with too few digits."""
    asked, solved = problem, solution.problem
    if (asked.density, asked.hypothesis, asked.levels, asked.n) != (
        solved.density, solved.hypothesis, solved.levels, solved.n
    ):  # fmt: skip
        raise InputError("the solution is that of another problem", "solve the problem asked about", key="solution")
    if solution.digits < digits + GUARD_DIGITS:
        raise InputError(
            f"a solution with {solution.digits} digits",
            f"solve with digits={digits + GUARD_DIGITS} or more, {GUARD_DIGITS} beyond those certified", key="solution",
        )  # fmt: skip


def _require_significant(solution: Solution) -> None:
    """Refuse a cutoff that has no significant digit: 0, or enclosed together with 0 (continuous laws only)."""
    if solution.laws[0].lattice:
        return
    for name in ("c", "c1", "c2"):
        value = getattr(solution, name)
        if value is not None and value.lower <= 0 <= value.upper:
            raise UndecidedError(
                f"no certificate: the cutoff {name} is 0 or too near 0 to be told from it; a certificate states "
                "significant digits, and 0 has none; measure the observation from another origin, such as x - 1 in "
                "the density in place of x, or choose another level"
            )


def _tolerance(value: Fraction | str) -> Fraction:
    try:
        found = Fraction(value)
    except (ValueError, ZeroDivisionError):
        raise InputError(f"the tolerance {value!r} is not a number", 'write "1/1000000"', key="tolerance") from None
    if not 0 < found < 1:
        raise InputError(f"a tolerance outside (0, 1): {value}", 'write "1/1000000"', key="tolerance")
    return found


def _epoch() -> str:
    text = os.environ.get("SOURCE_DATE_EPOCH", "")
    if not text:
        return ""
    if not text.isdecimal() or len(text) > 11:
        raise InputError("SOURCE_DATE_EPOCH is not a number of seconds", "unset it, or give issued", key="issued")
    return datetime.fromtimestamp(int(text), UTC).date().isoformat()


def recheck(path: str | Path, case: str | Path | None = None) -> Verdict:
    """Recheck a certificate file with the independent checker.

    Parameters
    ----------
    path : path
        ``NAME.cert.json``.
    case : path, optional
        The case file that it must be about.

    Raises
    ------
    InputError
        When a file cannot be read. A false or malformed certificate is a verdict, not an exception.
    """
    for place in (path, *([case] if case is not None else [])):
        if not Path(place).is_file():
            raise InputError("the file cannot be read", "give the path of a file", file=str(place))
    with open(path, "rb") as file:
        return Verdict(*_verdict(file.read(checker.FILE_LIMIT + 1), case))


def _verdict(data: bytes, case: str | Path | None) -> tuple[int, tuple[str, ...]]:
    status, lines = checker.verdict(data, case)
    return status, tuple(lines)
