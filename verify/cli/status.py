"""Exit statuses: what a shell, a make file or a CI job reads.

==== =====================================================================
0    all agrees, or is proved, enclosed or checked numerically
1    something differs or is refuted
2    the input cannot be used, or standard output cannot be written (one line on stderr)
3    undecided within the budget
4    ``recheck`` only: accepted, but the numbers are taken on trust (laws without a closed form)
70   an internal error: a mistake in this program (one line on stderr)
130  interrupted from the keyboard
141  the reader of our output went away (a broken pipe)
==== =====================================================================
"""

from __future__ import annotations

from verify.derivation.ledger import Grade

OK = 0
DIFFERS = 1
UNUSABLE = 2
UNDECIDED = 3
INTERNAL = 70
INTERRUPTED = 130
BROKEN_PIPE = 141


def of_grade(grade: Grade) -> int:
    """Return the exit status of a result with this grade.

    Examples
    --------
    >>> of_grade(Grade.PROVED), of_grade(Grade.REFUTED), of_grade(Grade.UNDECIDED)
    (0, 1, 3)
    """
    return {Grade.REFUTED: DIFFERS, Grade.UNDECIDED: UNDECIDED}.get(grade, OK)
