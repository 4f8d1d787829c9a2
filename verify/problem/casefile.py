"""Case files, ``NAME.case.toml``: read, checked key by key, and turned into a density and a problem."""

from __future__ import annotations

import hashlib
import sys
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from verify.errors import InputError
from verify.problem.density import Density
from verify.problem.keys import (
    CASE_KEYS,
    CLAIM_KEYS,
    DENSITY_KEYS,
    EXPECT_KEYS,
    GRID_KEYS,
    PROBLEM_KEYS,
    TABLE_KEYS,
    DecimalText,
    check_table,
)
from verify.problem.problem import Problem

MAX_BYTES = 10_000_000
SUFFIX = ".case.toml"


@dataclass(frozen=True)
class Case:
    """A case file, read.

    Attributes
    ----------
    name : str
        The file's name without ``.case.toml`` ("stdin" for standard input).
    path : str
        The path as given.
    title, source : str
        What it is, and where it comes from.
    density : Density
        Of one observation.
    problem : Problem or None
        None when there is no table ``[problem]``.
    claim : dict
        What the derivation under review says; texts.
    expect : dict
        What a run of the case book must find.
    table : dict
        Columns of a claim table, and how they are meant.
    sha256 : str
        Of the bytes of the file.
    """

    name: str
    path: str
    title: str
    source: str
    density: Density
    problem: Problem | None
    claim: dict[str, str] = field(default_factory=dict)
    expect: dict[str, Any] = field(default_factory=dict)
    table: dict[str, Any] = field(default_factory=dict)
    sha256: str = ""

    def require_problem(self) -> Problem:
        """Return what the case asks of the parameter.

        Raises
        ------
        InputError
            When it asks nothing: it has no table ``[problem]``.
        """
        if self.problem is None:
            right = 'add [problem] with null = "...", alpha = "0.05", n = 10'
            raise InputError("the case asks nothing", right, key="problem", file=self.path)
        return self.problem


@dataclass(frozen=True)
class CaseText:
    """A case file whose keys are checked; its density and problem are not yet read (some must fail)."""

    name: str
    path: str
    sha256: str
    tables: dict[str, Any]

    @property
    def expect(self) -> dict[str, Any]:
        """The table ``[expect]``."""
        return dict(self.tables.get("expect", {}))

    @property
    def grid(self) -> dict[str, Any]:
        """The table ``[grid]``."""
        return dict(self.tables.get("grid", {}))

    def read(self) -> Case:
        """Read the density and the problem.

        Raises
        ------
        InputError
            With the file and the key.
        """
        try:
            return self._read()
        except InputError as error:
            raise error.at(file=self.path) from None

    def _read(self) -> Case:
        tables = self.tables
        if "density" not in tables:
            raise InputError(
                "the table [density] is missing", "describe one observation there", key="density"
            )
        density = _density(tables["density"])
        problem = _problem(density, tables["problem"]) if "problem" in tables else None
        return Case(
            self.name, self.path, tables.get("title", ""), tables.get("source", ""), density, problem,
            {key: str(value) for key, value in tables.get("claim", {}).items()},
            self.expect, dict(tables.get("table", {})), self.sha256,
        )  # fmt: skip


def read_case(path: str | Path, text: str | None = None) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : str or Path
        The file; ``-`` for standard input.
    text : str, optional
        The contents, when they are already at hand; ``path`` then only gives the name.

    Raises
    ------
    InputError
        One line with the file, the key, what is wrong and what would be right.

    Examples
    --------
    >>> case = read_case("coin.case.toml", '''
    ... [density]
    ... formula = "p**x * (1 - p)**(1 - x)"
    ... variable = "x"
    ... support = "integers 0..1"
    ... parameter = "p"
    ... space = "0 < p < 1"
    ... ''')
    >>> case.name, case.problem is None
    ('coin', True)
    """
    return read_case_text(path, text).read()


def read_case_text(path: str | Path, text: str | None = None) -> CaseText:
    """Read a case file and check its keys and types, but not yet what the texts in it say."""
    place = str(path)
    data = case_bytes(place) if text is None else text.encode("utf-8", "surrogateescape")
    try:
        if len(data) > MAX_BYTES:
            raise InputError("the file is too big", f"at most {MAX_BYTES} bytes are read")
        tables = _parse(data)
        check_table(tables, CASE_KEYS, "")
        for name, keys in _TABLES.items():
            check_table(tables.get(name, {}), keys, name)
    except InputError as error:
        raise error.at(file=place) from None
    return CaseText(_name(place), place, hashlib.sha256(data).hexdigest(), tables)


_TABLES = {
    "density": DENSITY_KEYS,
    "problem": PROBLEM_KEYS,
    "claim": CLAIM_KEYS,
    "expect": EXPECT_KEYS,
    "table": TABLE_KEYS,
    "grid": GRID_KEYS,
}


def _name(place: str) -> str:
    return "stdin" if place == "-" else Path(place).name.removesuffix(SUFFIX)


def case_bytes(place: str) -> bytes:
    """Read a file, or standard input for ``-``; a byte more than is accepted tells that it is too big."""
    if place == "-":
        return sys.stdin.buffer.read(MAX_BYTES + 1)
    try:
        with open(place, "rb") as stream:
            return stream.read(MAX_BYTES + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else "not a path"
        raise InputError(
            f"the file cannot be read: {reason}", "give the path of a case file", file=place
        ) from None


def _parse(data: bytes) -> dict[str, Any]:
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise InputError(f"the file is not UTF-8 (byte {error.start})", "save it as UTF-8") from None
    try:
        return tomllib.loads(text, parse_float=DecimalText)
    except tomllib.TOMLDecodeError as error:
        raise InputError(f"the file is not TOML: {error}", "see a case file of the case book") from None
    except (ValueError, RecursionError):
        raise InputError(
            "the file is not TOML that can be read", "a number is too long or the nesting too deep"
        ) from None


def _density(table: Mapping[str, Any]) -> Density:
    return Density(**dict(table))


def _problem(density: Density, table: Mapping[str, Any]) -> Problem:
    n = table["n"]
    if isinstance(n, DecimalText):
        raise InputError(
            f"n = {n} is written as a decimal", "write a whole number, e.g. n = 10", key="problem.n"
        )
    return Problem(density, table["null"], table["alpha"], n, table.get("alternative"))
