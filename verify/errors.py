"""What can go wrong, in one tree.

SidecheckError
├── InputError        the input cannot be used (exit status 2)
├── UndecidedError    a question was left open within its budget (exit status 3)
│   └── UnknownFunction   because a formula holds a function that an arithmetic does not have
├── NotAttempted      a way to answer declined, with its reason (an outcome)
└── NotRational       an exact rational value was asked of a number that has none (internal)

A *refuted* claim or derivation is a result, never an exception.
"""

from __future__ import annotations


class SidecheckError(Exception):
    """Root of every exception that this package raises on purpose."""


class InputError(SidecheckError):
    """The input cannot be used: says the file, the key, what is wrong and what would be right.

    Parameters
    ----------
    wrong : str
        What is wrong, without a final stop.
    right : str
        What would be right, e.g. an example.
    key : str
        The key of the case file (``"problem.alpha"``) or the name of the argument.
    file : str
        The file, when there is one.

    Examples
    --------
    >>> print(InputError("a level outside (0, 1): 5", 'write "0.05"', key="problem.alpha", file="lot.case.toml"))
    lot.case.toml: problem.alpha: a level outside (0, 1): 5; write "0.05"
    """

    def __init__(self, wrong: str, right: str = "", *, key: str = "", file: str = "") -> None:
        super().__init__(wrong, right, key, file)
        self.wrong, self.right, self.key, self.file = wrong, right, key, file

    def __reduce__(self) -> tuple[object, ...]:
        return _input_error, (self.wrong, self.right, self.key, self.file)

    def at(self, *, key: str = "", file: str = "") -> InputError:
        """Return the same complaint with the file and the key filled in where they were missing."""
        return InputError(self.wrong, self.right, key=self.key or key, file=self.file or file)

    def __str__(self) -> str:
        place = ": ".join(part for part in (self.file, self.key) if part)
        text = self.wrong + (f"; {self.right}" if self.right else "")
        line = f"{place}: {text}" if place else text
        return line.replace("\n", " ")


def mistake(error: Exception) -> str:
    """Describe a mistake of this program on one line, with the place where it happened.

    Examples
    --------
    >>> try:
    ...     1 / 0
    ... except ZeroDivisionError as error:
    ...     line = mistake(error)
    >>> line.partition(" at ")[0], line.partition(": ")[2]
    ('internal error (ZeroDivisionError', 'division by zero), please report it with the input')
    """
    import os
    import traceback

    frames = traceback.extract_tb(error.__traceback__)
    place = f"{os.path.basename(frames[-1].filename)}:{frames[-1].lineno}" if frames else "?"
    text = " ".join(str(error).split())[:200]
    return f"internal error ({type(error).__name__} at {place}: {text}), please report it with the input"


def missing_extra(needs: str, extra: str, *, otherwise: str = "", key: str = "", file: str = "") -> InputError:
    """Return the complaint that an optional library is missing, with the extra that brings it.

    Examples
    --------
    >>> print(missing_extra("a page needs jinja2", "report"))
    a page needs jinja2, which is not installed; run pip install ".[report]" in sidecheck's folder
    """
    right = f'run pip install ".[{extra}]" in sidecheck\'s folder' + (f", or {otherwise}" if otherwise else "")
    return InputError(f"{needs}, which is not installed", right, key=key, file=file)


class UndecidedError(SidecheckError):
    """A question was left open: the reason says what was tried and what would help."""


class UnknownFunction(UndecidedError):  # noqa: N818 (a condition, not a mistake)
    """A formula holds a function of which an arithmetic has no enclosure: what needs it stays open."""


class NotAttempted(SidecheckError):  # noqa: N818 (an outcome, not a mistake)
    """A route does not try this problem; the text is the reason."""


class NotRational(SidecheckError):  # noqa: N818 (a condition, not a mistake)
    """An exact rational value was asked for where there is none, or one too long to be worked out."""


def _input_error(wrong: str, right: str, key: str, file: str) -> InputError:
    """Rebuild the complaint on the other side of a process boundary."""
    return InputError(wrong, right, key=key, file=file)
