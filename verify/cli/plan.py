"""``sidecheck plan``: the smallest sample that reaches a power, proved."""

from __future__ import annotations

import argparse

from verify.cli import status
from verify.cli.options import add_budget, add_cache, add_case, add_json
from verify.cli.output import note, show_json

EXAMPLE = 'sidecheck plan casebook/demo/lot-release.case.toml --at 10 --power 0.9'


def _count(text: str) -> int:
    if not (text.isascii() and text.isdigit() and len(text) <= 10 and int(text) >= 1):
        raise argparse.ArgumentTypeError(f"{text[:40]!r} is not a whole number of at least 1")
    return int(text)


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    add_case(parser)
    parser.add_argument("--at", required=True, metavar="VALUE", help="the alternative at which the power is wanted")
    parser.add_argument("--power", required=True, metavar="P", help='the power wanted, such as "0.9"')
    parser.add_argument("--largest", type=_count, default=10**6, metavar="N", help="largest n to try (default 1000000)")
    parser.add_argument(
        "--scan-to", type=_count, default=None, metavar="N",
        help="without randomisation the power saws up and down: look at every n up to this one, too",
    )  # fmt: skip
    add_cache(parser)
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Search, print, and return the exit status."""
    from verify.memory import watched
    from verify.planning import Planner
    from verify.problem.casefile import read_case
    from verify.report.pipeline import derive_case
    from verify.report.planning import plan_json, plan_text

    case = read_case(args.case)
    problem = case.require_problem()
    derivation = derive_case(case, budget=args.budget)
    if not derivation.carries_numbers:
        note("the derivation does not carry a test; see sidecheck derive")
        return status.of_grade(derivation.grade) or status.UNDECIDED
    with watched(args.cache, note) as cache:
        planner = Planner(problem, derivation, args.at, cache)
        size = planner.smallest(args.power, largest=args.largest, progress=lambda n: note(f"n = {n}"))
        scan = planner.without_randomisation(args.power, args.scan_to) if args.scan_to else None
    if args.json:
        show_json(plan_json(case, size, scan))
    else:
        print(plan_text(case, size, scan))
    return status.of_grade(planner.solution(size.n).grade)
