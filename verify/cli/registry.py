"""Which commands there are.

A command is a module with ``EXAMPLE`` (one command line), ``add(parser)`` (its arguments) and
``run(args) -> int`` (its exit status). To add one: write that module beside this file and add its line
below. Nothing of it is imported until it is the command asked for.
"""

from __future__ import annotations

COMMANDS: dict[str, tuple[str, str]] = {
    "derive": ("verify.cli.derive", "show step by step which law a density's statistic has"),
    "review": ("verify.cli.review", "judge a colleague's derivation and cutoffs, or a table of them"),
    "solve": ("verify.cli.solve", "derive, then prove the cutoffs of the optimal test"),
    "plan": ("verify.cli.plan", "find the smallest sample that reaches a power"),
    "decide": ("verify.cli.decide", "apply the proven test to an observed statistic"),
    "casebook": ("verify.cli.casebook", "run every case of some folders against what it expects"),
    "answers": ("verify.cli.answers", "write a table of proven cutoffs over a grid of designs"),
    "certify": ("verify.cli.certify", "write a certificate that others can recheck, and its page"),
    "recheck": ("verify.cli.recheck", "check a certificate with the small independent checker"),
}
"""Name of the command -> its module, and what it does in one line."""
