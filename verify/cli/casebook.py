"""``sidecheck casebook``: run every case of some folders and hold it against what it expects."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, TextIO

from verify.cli.options import add_budget, add_cache, add_json, add_workers, digits
from verify.cli.output import note, show_json
from verify.cli.progress import progress_bar

if TYPE_CHECKING:
    from verify.casebook.outcome import Result

EXAMPLE = "sidecheck casebook casebook --workers 2 --junit report.xml"


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    parser.add_argument("places", metavar="DIR", nargs="+", help="folders (searched to the bottom) and case files")
    parser.add_argument(
        "--only",
        metavar="PATTERN",
        action="append",
        default=[],
        help="run the cases of this name, e.g. 'lot-*' or 'published/*'; may be repeated",
    )
    parser.add_argument("--fail-fast", action="store_true", help="stop behind the first case that does not pass")
    add_workers(parser)
    add_cache(parser)
    parser.add_argument("--junit", metavar="FILE", help="write a JUnit report")
    parser.add_argument("--jsonl", metavar="FILE", help="write one JSON object a case, without times")
    parser.add_argument(
        "--github",
        action="store_true",
        help="print annotations, and append a table to the file named by GITHUB_STEP_SUMMARY",
    )
    parser.add_argument("--digits", type=digits, default=30, metavar="N",
                        help="significant digits to prove (default 30; more where a case prints more)")  # fmt: skip
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Run the cases, print, write what is wanted, and return the exit status: 0 only when every case passed."""
    from verify.casebook.find import find_cases
    from verify.casebook.lines import book_json, book_text
    from verify.casebook.outcome import status_of
    from verify.casebook.run import How, run_book
    from verify.errors import InputError
    from verify.memory import watched

    paths = find_cases(args.places, args.only)
    _require_folders(args)
    with watched(args.cache, note) as cache, progress_bar("cases", len(paths)) as progress:
        results = run_book(paths, How(args.digits, args.budget, cache), workers=args.workers, scheduler=args.scheduler,
                           fail_fast=args.fail_fast, progress=progress)  # fmt: skip
    left = len(paths) - len(results)
    try:
        _write(args, results)
    except InputError:
        if not args.json:  # one object alone, that of the complaint
            print(book_text(results, left))
        raise
    if args.json:
        show_json(book_json(results, left))
    else:
        print(book_text(results, left))
    if args.github:
        _github(results, left, sys.stderr if args.json else sys.stdout)
    return status_of(results)


def _require_folders(args: argparse.Namespace) -> None:
    """Complain about a report that cannot be written before the work, not after it."""
    from verify.errors import InputError

    for key in ("junit", "jsonl"):
        given = getattr(args, key)
        if given and (Path(given).is_dir() or not os.access(Path(given).absolute().parent, os.W_OK | os.X_OK)):
            raise InputError(
                f"{given} cannot be written", "name a file in a folder that can be written to", key=f"--{key}"
            )


def _write(args: argparse.Namespace, results: Sequence[Result]) -> None:
    """Write the reports, each all or nothing."""
    from verify.casebook.junit import junit_xml
    from verify.casebook.lines import json_lines
    from verify.errors import InputError
    from verify.files import write_atomically

    wanted = {"junit": junit_xml, "jsonl": json_lines}
    for key, make in wanted.items():
        if place := getattr(args, key):
            try:
                write_atomically(Path(place), make(results))
            except OSError as error:
                wrong = f"cannot write: {error.strerror or error}"
                raise InputError(wrong, "name a file that can be written", key=f"--{key}", file=place) from None


def _github(results: Sequence[Result], left: int, out: TextIO) -> None:
    from verify.casebook.github import annotation_lines, step_summary
    from verify.errors import InputError

    for line in annotation_lines(results):
        print(line, file=out)
    place = os.environ.get("GITHUB_STEP_SUMMARY")
    if not place:
        note("GITHUB_STEP_SUMMARY names no file: no summary is written")
        return
    try:
        with open(place, "a", encoding="utf-8", errors="backslashreplace") as stream:
            stream.write(step_summary(results, left))
    except OSError as error:
        wrong = f"cannot write the summary: {error.strerror or error}"
        raise InputError(wrong, "let GITHUB_STEP_SUMMARY name a file", key="--github", file=place) from None
