"""``sidecheck solve``: asked, derived, solved, compared."""

from __future__ import annotations

import argparse

from verify.cli import status
from verify.cli.options import add_budget, add_cache, add_case, add_digits, add_json
from verify.cli.output import note, show_json

EXAMPLE = "sidecheck solve casebook/demo/lot-release.case.toml --digits 30"


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    add_case(parser)
    add_digits(parser)
    add_cache(parser)
    add_budget(parser)
    parser.add_argument("--no-compare", action="store_true", help="leave out the double-precision opinions")
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Run the pipeline, print, and return the exit status.

    The double-precision opinions never change the status: the numbers are proved without them.
    """
    from verify.memory import watched
    from verify.problem.casefile import read_case
    from verify.report.json_form import run_json
    from verify.report.pipeline import run_case
    from verify.report.text import run_text

    case = read_case(args.case)
    with watched(args.cache, note) as cache:
        result = run_case(
            case, digits=args.digits, budget=args.budget, with_comparison=not args.no_compare, cache=cache
        )
    if args.json:
        show_json(run_json(result))
    else:
        print(run_text(result))
    return status.of_grade(result.grade)
