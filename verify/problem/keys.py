"""The keys of a case file, table by table, with the type each must have. To add a key: one line here."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from verify.errors import InputError
from verify.problem.nearest import suggestion


class DecimalText(str):
    """A TOML decimal, kept as the text that was written, so that it stays exact."""

    def __new__(cls, text: str) -> DecimalText:
        """Keep the text without the underscores that TOML allows between digits."""
        return super().__new__(cls, text.replace("_", ""))


@dataclass(frozen=True)
class Kind:
    """What a value may be: a test, and its name for messages."""

    fits: Callable[[Any], bool]
    name: str


def _is_text(value: Any) -> bool:
    return isinstance(value, str) and not isinstance(value, DecimalText)


def _is_number(value: Any) -> bool:
    return isinstance(value, str) or (isinstance(value, int) and not isinstance(value, bool))


TEXT = Kind(_is_text, "text in quotes")
NUMBER = Kind(_is_number, 'an exact number, e.g. "0.05", "1/3" or 12')
LEVELS = Kind(
    lambda v: _is_number(v) or (isinstance(v, list) and len(v) == 2 and all(map(_is_number, v))),
    'a level, e.g. "0.05", or two of them, ["0.02", "0.05"]',
)
NUMBERS = Kind(
    lambda v: isinstance(v, list) and all(map(_is_number, v)), 'a list of exact numbers, e.g. ["1", "1/2"]'
)
CONSTANTS = Kind(
    lambda v: isinstance(v, dict) and all(map(_is_number, v.values())),
    'a table of exact numbers, e.g. { m = "10" }',
)
TEXTS = Kind(
    lambda v: _is_text(v) or (isinstance(v, list) and all(map(_is_text, v))), "text or a list of texts"
)
TABLE = Kind(lambda v: isinstance(v, dict), "a table")
WINDOW = Kind(lambda v: v in ("closed", "open"), '"closed" or "open"')
REGION = Kind(lambda v: v in ("reject inside", "accept inside"), '"reject inside" or "accept inside"')
FRACTIONS = Kind(lambda v: v in ("of rejection", "of acceptance"), '"of rejection" or "of acceptance"')
REPORTED = Kind(lambda v: v in ("sum", "mean") or _is_number(v), '"sum", "mean" or a divisor')
LEVEL_LIST = Kind(
    lambda v: isinstance(v, list) and bool(v) and all(map(LEVELS.fits, v)),
    'a list of levels, e.g. ["0.05", "0.01"], each one level or two',
)
LIST = Kind(lambda v: bool(NUMBERS.fits(v)) and bool(v), 'a list of exact numbers, e.g. ["8", "17/2"]')
SIZES = Kind(
    lambda v: _is_text(v) or (isinstance(v, list) and bool(v) and all(type(n) is int for n in v)),
    'a list of whole numbers, e.g. [10, 20], or a range, e.g. "10..100"',
)
COLUMN = Kind(lambda v: isinstance(v, str | int) and not isinstance(v, bool), "the name of a column")


ONE_SIDED, TWO_SIDED = ("c", "gamma"), ("c1", "c2", "gamma1", "gamma2")
NUMBER_NAMES = (*TWO_SIDED, *ONE_SIDED)
"""The cutoffs and fractions of a test, by name."""


@dataclass(frozen=True)
class Keys:
    """The keys of one table, those it must have, and what it is for."""

    kinds: Mapping[str, Kind]
    required: tuple[str, ...] = ()


CASE_KEYS = Keys(
    {
        "title": TEXT, "source": TEXT,
        "density": TABLE, "problem": TABLE, "claim": TABLE, "expect": TABLE, "table": TABLE, "grid": TABLE,
    }
)  # fmt: skip
DENSITY_KEYS = Keys(
    {
        "formula": TEXT, "kernel": TEXT, "weights": NUMBERS,
        "variable": TEXT, "support": TEXT, "parameter": TEXT,
        "space": TEXT, "constants": CONSTANTS,
    },
    ("variable", "support", "parameter", "space"),
)  # fmt: skip
PROBLEM_KEYS = Keys(
    {"null": TEXT, "alternative": TEXT, "alpha": LEVELS, "n": NUMBER},
    ("null", "alpha", "n"),
)
_HOW_MEANT = {"reported_as": REPORTED, "window": WINDOW, "region": REGION, "fractions": FRACTIONS}
CLAIM_KEYS = Keys(
    {
        "natural_parameter": TEXT,
        "statistic": TEXT,
        "law": TEXT,
        **dict.fromkeys(NUMBER_NAMES, NUMBER),
        **_HOW_MEANT,
    }
)
EXPECT_KEYS = Keys(
    {
        "verdict": TEXT, "error": TEXT, "key": TEXT, "grade": TEXT, "status": NUMBER,
        "form": TEXT, "law": TEXT,
        "natural_parameter": TEXT, "statistic": TEXT, "step": TEXT, "witness": TEXT,
        "flags": TEXTS, "slips": TEXTS, **dict.fromkeys(NUMBER_NAMES, NUMBER),
    }
)  # fmt: skip
TABLE_KEYS = Keys(
    {
        **dict.fromkeys(("id", "case", "null", "lower", "upper", "alpha", "n", *NUMBER_NAMES), COLUMN),
        **_HOW_MEANT,
    }
)
"""Columns of a claim table, by what they hold, and how the numbers in them are meant."""

GRID_KEYS = Keys({"lower": LIST, "upper": LIST, "limit": LIST, "alpha": LEVEL_LIST, "n": SIZES})
"""Lists that vary the problem of a case file over a grid of designs."""


def check_table(table: Mapping[str, Any], keys: Keys, place: str) -> None:
    """Refuse an unknown key (suggesting the nearest), a value of the wrong type, or a missing key.

    A table that is absent altogether may be passed as ``{}``: then nothing is required of it.
    """
    inside = f" in [{place}]" if place else ""
    for name, value in table.items():
        dotted = f"{place}.{name}" if place else name
        kind = keys.kinds.get(name)
        if kind is None:
            raise InputError(f"unknown key{inside}: {name[:40]!a}", suggestion(name, keys.kinds), key=dotted[:80])
        if not kind.fits(value):
            raise InputError(f"{name} is {_type_name(value)}", f"write {kind.name}", key=dotted)
    for name in keys.required if table else ():
        if name not in table:
            raise InputError(f"the key {name} is missing", f"add {name} = ...", key=f"{place}.{name}")


def _type_name(value: Any) -> str:
    names: dict[type, str] = {
        list: "a list",
        dict: "a table",
        DecimalText: "a decimal",
        str: "a text that is not known here",
        int: "a whole number",
        bool: "true or false",
    }
    return names.get(type(value), f"a {type(value).__name__}")
