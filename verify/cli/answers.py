"""``sidecheck answers``: a table of proven cutoffs over a grid of designs, to be read from any language."""

from __future__ import annotations

import argparse
import json
from itertools import islice
from pathlib import Path
from typing import TYPE_CHECKING

from verify.cli import status
from verify.cli.options import add_budget, add_cache, add_digits, add_json, add_workers
from verify.cli.output import note, show_json
from verify.cli.progress import progress_bar

if TYPE_CHECKING:
    from verify.answers.grid import Grid
    from verify.answers.row import Asker
    from verify.review.journal import Journal

EXAMPLE = "sidecheck answers casebook/demo/lot-release.grid.toml -o answers.csv"
CHUNK = 20
"""Rows handed out to a worker at a time."""


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    parser.add_argument(
        "grid",
        metavar="GRID",
        help="a case file with [grid]: the lists lower and upper (or limit), "
        "alpha and n vary its [problem]; - for standard input",
    )
    parser.add_argument(
        "-o",
        "--output",
        metavar="FILE",
        required=True,
        help="the table, .csv or .parquet; an interrupted run goes on where it stopped",
    )
    add_digits(parser, default=20)
    add_workers(parser)
    add_cache(parser)
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Answer every design of the grid, write the table, and return the exit status."""
    from verify.answers.grid import read_grid
    from verify.answers.row import Asker
    from verify.answers.table import require_place
    from verify.memory import watched
    from verify.problem.casefile import case_bytes, read_case_text

    require_place(args.output)
    text = case_bytes(args.grid).decode("utf-8", "surrogateescape")
    grid = read_grid(read_case_text(args.grid, text))
    with watched(args.cache, note) as cache:
        asker = Asker(args.grid, text, args.digits, args.budget, cache)
        return _table(grid, asker, args)


def _table(grid: Grid, asker: Asker, args: argparse.Namespace) -> int:
    from verify.answers.table import write_table
    from verify.review.journal import Journal

    refusal = asker.refusal()
    if refusal is not None:
        note(f"no table: {refusal.name} is {refusal.grade.value}: {refusal.statement}")
        return status.of_grade(refusal.grade)
    if grid.left_out:
        pairs = "pair of limits is" if grid.left_out == 1 else "pairs of limits are"
        note(f"{grid.left_out} {pairs} not ascending and left out")
    about = asker.about()
    journal = Journal(Path(args.output + ".journal"), json.dumps(about, sort_keys=True))
    _answer(grid, asker, journal, args)
    write_table(Path(args.output), grid.problem.hypothesis.form, journal.records(), about)
    counts = _counts(journal)
    journal.remove()
    if args.json:
        show_json({"table": args.output, "rows": len(grid), "digits": args.digits, "status": counts})
    else:
        print(f"{args.output}: {len(grid)} rows, " + ", ".join(f"{count} {name}" for name, count in counts.items()))
    return _status(counts)


def _answer(grid: Grid, asker: Asker, journal: Journal, args: argparse.Namespace) -> None:
    from verify.parallel import run_all

    if journal.done:
        note(f"{journal.done} rows were done before; going on after them")
    left = islice(grid.designs(), journal.done, None)
    with journal, progress_bar("rows", len(grid), journal.done) as progress:
        done = journal.done
        for record in run_all(asker, left, args.workers, args.scheduler, CHUNK):
            journal.add([record])
            done += 1
            progress(done)


def _counts(journal: Journal) -> dict[str, int]:
    counts: dict[str, int] = {}
    for record in journal.records():
        counts[record["status"]] = counts.get(record["status"], 0) + 1
    return counts


def _status(counts: dict[str, int]) -> int:
    """2 when a design cannot be used, else 3 when one is undecided, else 0."""
    if "unusable" in counts:
        return status.UNUSABLE
    return status.UNDECIDED if "undecided" in counts else status.OK
