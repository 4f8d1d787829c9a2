"""``sidecheck decide``: what the proven test says about an observed statistic."""

from __future__ import annotations

import argparse

from verify.cli import status
from verify.cli.options import add_budget, add_cache, add_case, add_digits, add_json
from verify.cli.output import note, show_json

EXAMPLE = "sidecheck decide casebook/demo/lot-release.case.toml --statistic 97"


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    add_case(parser)
    observed = parser.add_mutually_exclusive_group(required=True)
    observed.add_argument("--statistic", metavar="V", help="the observed value of V = T(X1) + ... + T(Xn)")
    observed.add_argument("--data", metavar="X1,X2,...", help="the n observations, separated by commas")
    parser.add_argument(
        "--u", metavar="U", help="a number in [0, 1) drawn before the data were seen; reject when U < phi",
    )  # fmt: skip
    add_digits(parser)
    add_cache(parser)
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Solve, decide, print, and return the exit status (of the proof, not of the decision)."""
    from verify.memory import watched
    from verify.planning import decide, observed_statistic
    from verify.problem.casefile import read_case
    from verify.report.pipeline import run_case
    from verify.report.planning import decision_json, decision_text

    case = read_case(args.case)
    with watched(args.cache, note) as cache:
        solved = run_case(case, digits=args.digits, budget=args.budget, with_comparison=False, cache=cache)
    if solved.solution is None:
        note("the derivation does not carry a test; see sidecheck derive")
        return status.of_grade(solved.grade)
    value = args.statistic
    if args.data is not None:
        value = observed_statistic(solved.solution, [part.strip() for part in args.data.split(",")])
    decision = decide(solved.solution, value, args.u)
    if args.json:
        show_json(decision_json(solved.solution, decision))
    else:
        print(decision_text(case, solved.solution, decision))
    return status.of_grade(solved.grade)
