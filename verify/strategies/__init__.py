"""Generated problems, for testing a solver against proven answers: see :func:`problems`.

The one place where Hypothesis is imported; it comes with the extra ``test``.
"""

from verify.errors import missing_extra

try:
    import hypothesis as _hypothesis
except ModuleNotFoundError:
    raise missing_extra("verify.strategies needs Hypothesis", "test") from None

from verify.strategies.families import FAMILIES as FAMILIES
from verify.strategies.families import LAWS as LAWS
from verify.strategies.problems import PROFILES as PROFILES
from verify.strategies.problems import problems as problems

__all__ = ["FAMILIES", "LAWS", "PROFILES", "problems"]

del _hypothesis
