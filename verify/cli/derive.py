"""``sidecheck derive``: the ledger of a derivation."""

from __future__ import annotations

import argparse

from verify.cli import status
from verify.cli.options import add_budget, add_case, add_json, digits
from verify.cli.output import show_json

EXAMPLE = "sidecheck derive casebook/demo/lot-release.case.toml"


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    add_case(parser)
    parser.add_argument(
        "--digits", type=digits, default=50, metavar="N",
        help="taken as by every command, without effect: a derivation prints formulas, not digits",
    )  # fmt: skip
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Derive, print, and return the exit status."""
    from verify.problem.casefile import read_case
    from verify.report.json_form import derivation_json
    from verify.report.pipeline import derive_case
    from verify.report.text import derivation_text

    case = read_case(args.case)
    derivation = derive_case(case, budget=args.budget)
    if args.json:
        show_json(derivation_json(derivation, n=case.problem.n if case.problem else None))
    else:
        print(derivation_text(derivation, case))
    return status.of_grade(derivation.grade)
