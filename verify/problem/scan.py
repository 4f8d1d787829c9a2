"""A look at a text before any parser sees it: characters, length, brackets, operators, size of its numbers.

Everything that could make a parser slow, or make it see something else than the reader sees (look-alike
letters), is refused here, in time proportional to the length of the text.
"""

from __future__ import annotations

import keyword
import re
import string
import unicodedata
from typing import NoReturn

from verify.errors import InputError

MAX_LENGTH = 20_000
"""Characters in one formula."""
MAX_DEPTH = 100
"""Brackets inside brackets."""
MAX_OPERATORS = 1_000
"""Operators and commas in one formula."""
MAX_DIGITS = 4_000
"""Decimal digits of a number that is written, or that would be computed."""

SIGNS = {"≤": "<=", "≥": ">=", "≠": "!=", "−": "-", "×": "*", "·": "*", "⋅": "*", "\u00a0": " "}
"""Signs that a statistician writes, and what they mean here."""

NUMBER = re.compile(r"(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")
"""A whole number or a decimal, as it may be written."""

_ALLOWED = frozenset(string.ascii_letters + string.digits + "_+-*/^()., ")
_HINTS = {
    "!": "write factorial(x), not x!",
    "=": "a formula has no equals sign",
    "[": "use round brackets ( )",
    "{": "use round brackets ( )",
    "|": "write abs(x), not |x|",
    "%": "write 5/100, not 5%",
}


def shorten(text: str, width: int = 60) -> str:
    """Show a text in a message: printable, on one line, not too long.

    Examples
    --------
    >>> shorten("a" * 100, 10)
    "'aaaaaaaaaa...'"
    """
    return ascii(text if len(text) <= width else text[:width] + "...")


def plain_signs(text: str) -> str:
    """Replace the mathematical signs of ``SIGNS`` by their ASCII spelling, and line ends by spaces.

    Examples
    --------
    >>> plain_signs("8 ≤ lam − 1")
    '8 <= lam - 1'
    """
    for sign, spelling in SIGNS.items():
        text = text.replace(sign, spelling)
    return re.sub(r"[\t\r\n]", " ", text)


def require_text(value: object, key: str, right: str) -> str:
    """Return a text that is not blank and not too long; anything else is an InputError."""
    if not isinstance(value, str):
        raise InputError(f"expected text, got {type(value).__name__}", right, key=key)
    if not value.strip():
        raise InputError("the text is empty", right, key=key)
    if len(value) > MAX_LENGTH:
        raise InputError(f"{len(value)} characters are too many", f"at most {MAX_LENGTH} are read", key=key)
    return value


def scan_formula(text: object, key: str = "") -> str:
    """Return a formula's text in plain ASCII with ``**`` for powers, or refuse it.

    Guaranteed of the result: only letters, digits and ``_ + - * / ( ) . ,``; brackets balanced and at most
    ``MAX_DEPTH`` deep; at most ``MAX_OPERATORS`` operators; no number of more than ``MAX_DIGITS`` digits;
    no Python keyword.

    Raises
    ------
    InputError
        With the character and its position, or the limit that is passed.

    Examples
    --------
    >>> scan_formula("2·x^2")
    '2*x**2'
    """
    given = require_text(text, key, 'write a formula, e.g. "exp(-lam) * lam**x / factorial(x)"')
    _check_characters(given, key)
    plain = plain_signs(given)
    _check_brackets(plain, key)
    _check_operators(plain, key)
    _check_numbers(plain, key)
    _check_words(plain, key)
    return plain.replace("^", "**").strip()


def _check_characters(text: str, key: str) -> None:
    for position, character in enumerate(text, start=1):
        if character not in _ALLOWED and character not in SIGNS and character not in "\t\r\n":
            refuse_character(character, position, key)


def refuse_character(character: str, position: int, key: str) -> NoReturn:
    """Raise the InputError that names a character and where it stands (counted from 1)."""
    name = unicodedata.name(character, f"U+{ord(character):04X}")
    shown = character if character.isprintable() and character.isascii() else ascii(character)[1:-1]
    plain = "write names in plain letters, e.g. lam" if character.isalpha() else "use plain ASCII"
    hint = _HINTS.get(character, "use numbers, names, + - * / ** and ( )") if character.isascii() else plain
    raise InputError(f"character {shown} ({name}) at position {position} is not understood", hint, key=key)


def _check_brackets(text: str, key: str) -> None:
    depth = 0
    for position, character in enumerate(text, start=1):
        depth += (character == "(") - (character == ")")
        if depth < 0:
            raise InputError(
                f"the bracket ) at position {position} closes nothing", "balance the brackets", key=key
            )
        if depth > MAX_DEPTH:
            raise InputError("brackets are nested too deeply", f"at most {MAX_DEPTH} deep are read", key=key)
    if depth:
        raise InputError(f"{depth} of the brackets ( are not closed", "balance the brackets", key=key)


def _check_operators(text: str, key: str) -> None:
    count = sum(text.replace("**", "^").count(sign) for sign in "+-*/^,")
    if count > MAX_OPERATORS:
        raise InputError(f"{count} operators are too many", f"at most {MAX_OPERATORS} are read", key=key)


def _check_numbers(text: str, key: str) -> None:
    for match in re.finditer(r"(?<![\w.])[\d.][\w.]*(?:(?<=[eE])[+-]\d+)?", text):
        token = match.group()
        if not NUMBER.fullmatch(token):
            raise InputError(
                f"{shorten(token)} at position {match.start() + 1} is not a number",
                "write numbers like 12, 0.05 or 1e-200, and a product with *, e.g. 2*x",
                key=key,
            )
        check_literal(token, key)


def check_literal(token: str, key: str) -> None:
    """Refuse a decimal text whose exact value would have more than ``MAX_DIGITS`` digits, uncomputed."""
    mantissa, _, exponent = token.lower().partition("e")
    shift = int(exponent) if len(exponent) < 8 and exponent else 0
    if len(exponent) >= 8 or len(mantissa) + abs(shift) > MAX_DIGITS:
        raise InputError(
            f"the number {shorten(token, 20)} is too long", f"at most {MAX_DIGITS} digits are read", key=key
        )


def _check_words(text: str, key: str) -> None:
    for match in re.finditer(r"[A-Za-z_]\w*", text):
        word = match.group()
        if keyword.iskeyword(word) or word == "__debug__":
            hint = "write lam" if word == "lambda" else "choose another name"
            raise InputError(f"{word!r} is a reserved word", hint, key=key)


def require_name(name: object, key: str) -> str:
    """Return a name for a variable, parameter or constant, or refuse it.

    Examples
    --------
    >>> require_name("lam", "density.parameter")
    'lam'
    """
    right = 'write a name in plain letters, e.g. "lam"'
    text = require_text(name, key, right)
    if not re.fullmatch(r"[A-Za-z][A-Za-z0-9_]{0,39}", text):
        raise InputError(f"{shorten(text)} is not a name", right, key=key)
    _check_words(text, key)
    if text in ("pi", "oo", "inf", "infinity", "integers", "reals"):
        raise InputError(f"{text!r} has a meaning of its own", "choose another name", key=key)
    return text
