"""In which sense the test of each form is optimal, and by which theorem: one table for all that say it.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), Theorems 3.4.1, 3.6.1 and
3.7.1 and section 4.2. With another level at each limit, only the generalised Neyman-Pearson lemma (3.6.1) speaks: such
a test need not be unbiased, and competes with those that have its two expectations.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from verify.problem.hypothesis import Form

BOOK = "Lehmann and Romano 2005"


@dataclass(frozen=True)
class Optimality:
    """What is known of a test that has its form and satisfies its side conditions.

    Attributes
    ----------
    sense : str
        In which sense it is optimal.
    source : str
        The theorem that says so, with its book.
    """

    sense: str
    source: str

    def __str__(self) -> str:
        return f"{self.sense} ({self.source})"


UNBIASED = Optimality("uniformly most powerful unbiased", f"{BOOK}, section 4.2")
ONE_LEVEL = {
    Form.ONE_SIDED: Optimality("uniformly most powerful", f"{BOOK}, Theorem 3.4.1"),
    Form.OUTSIDE: Optimality("uniformly most powerful", f"{BOOK}, Theorem 3.7.1"),
    Form.INTERVAL: UNBIASED,
    Form.POINT: UNBIASED,
}
TWO_LEVELS = Optimality(
    "most powerful at every alternative among the tests with these two expectations at the limits",
    f"{BOOK}, Theorem 3.6.1",
)


def optimality(form: Form, levels: Iterable[object]) -> Optimality:
    """Return the sense in which the test of a form is optimal, by its levels at the limits.

    Examples
    --------
    >>> print(optimality(Form.INTERVAL, ("1/20", "1/20")))
    uniformly most powerful unbiased (Lehmann and Romano 2005, section 4.2)
    >>> optimality(Form.INTERVAL, ("1/50", "1/20")).source
    'Lehmann and Romano 2005, Theorem 3.6.1'
    """
    return TWO_LEVELS if len(set(levels)) > 1 else ONE_LEVEL[form]
