"""``sidecheck review``: a colleague's derivation and cutoffs, confirmed or refuted with the reason."""

from __future__ import annotations

import argparse
import contextlib
import json
import sys
import tempfile
from collections.abc import Callable, Iterable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

from verify.cli import status
from verify.cli.options import add_budget, add_case, add_json, add_workers, digits
from verify.cli.output import note, show_json
from verify.cli.progress import progress_bar

if TYPE_CHECKING:
    from verify.problem.casefile import Case
    from verify.review.cells import Table
    from verify.review.journal import Journal
    from verify.review.run import Job

EXAMPLE = "sidecheck review casebook/demo/claims.case.toml casebook/demo/claims.csv -o reviewed.csv --memo memo.html"
ROW_DIGITS, CLAIM_DIGITS = 20, 50
Records = Callable[[], Iterable[dict[str, Any]]]


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    add_case(parser)
    parser.add_argument(
        "table",
        metavar="TABLE",
        nargs="?",
        help="a table of claims: .csv, .tsv, .xlsx or .json; its columns are "
        "mapped in [table] of the case file. Without it the [claim] of the case file is reviewed",
    )
    parser.add_argument(
        "-o",
        "--output",
        metavar="OUT",
        help="write a copy of the table with the verdicts beside its rows; an interrupted run goes on where it stopped",
    )
    parser.add_argument("--memo", metavar="FILE", help="write a review memo, .md or .html")
    parser.add_argument(
        "--digits",
        type=digits,
        metavar="N",
        default=None,
        help=f"significant digits to prove (default {CLAIM_DIGITS}; {ROW_DIGITS} for a table)",
    )
    add_workers(parser)
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Review, print, write what is wanted, and return the exit status."""
    from verify.errors import InputError
    from verify.problem.casefile import read_case

    if args.memo and not args.memo.lower().endswith((".md", ".html", ".htm")):
        raise InputError(f"a memo cannot be written as {args.memo}", "name it .md or .html", key="--memo")
    case = read_case(args.case)
    if args.table is None:
        if args.output:
            raise InputError(
                "there is no table to write a copy of", "give the table after the case file", key="--output"
            )
        return _claim(case, args)
    return _table(case, args)


def _claim(case: Case, args: argparse.Namespace) -> int:
    from verify.report.review_text import claim_text
    from verify.review.reviewer import Reviewer

    reviewer = Reviewer(case, digits=args.digits or CLAIM_DIGITS, budget=args.budget)
    record = reviewer.claim()
    if args.json:
        show_json({"rows": [record]})
    else:
        print(claim_text(record))
    if args.memo:
        _write_memo(args.memo, case, "", [("", reviewer.derivation(case, case.problem))], lambda: [record])
    return _status([record])


def _table(case: Case, args: argparse.Namespace) -> int:
    from verify.problem.keys import NUMBER_NAMES
    from verify.review.annotate import write_annotated
    from verify.review.journal import Journal
    from verify.review.mapping import map_columns
    from verify.review.run import Job, fingerprint
    from verify.review.tables import open_table

    table = open_table(args.table)
    _refuse_same_file(args)
    columns = map_columns(case.table, table.header, args.table)
    digits = args.digits or ROW_DIGITS
    job = Job(case, columns, Path(args.table).parent, digits, args.budget, args.workers, args.scheduler)
    with _journal_place(args.output) as place:
        import verify

        journal = Journal(place, fingerprint(job, Path(args.table), verify.__version__))
        _run(job, table, journal)
        code = _show(journal, args.json)
        if args.output:
            write_annotated(
                table,
                Path(args.output),
                journal.records(),
                [name for name in NUMBER_NAMES if name in columns.columns],
            )
        if args.memo:
            _write_memo(args.memo, case, Path(args.table).name, _derivations(job, journal), journal.records)
        if args.output:
            journal.remove()
    return code


def _refuse_same_file(args: argparse.Namespace) -> None:
    from verify.errors import InputError

    for given, key in ((args.output, "--output"), (args.memo, "--memo")):
        if given and Path(given).resolve() in (Path(args.table).resolve(), Path(args.case).resolve()):
            raise InputError(f"{given} is an input", "write to another file", key=key)
    if args.output and Path(args.output).suffix.lower() != Path(args.table).suffix.lower():
        raise InputError(
            f"the copy of {args.table} has another ending",
            f"name it {Path(args.table).suffix}",
            key="--output",
        )


@contextlib.contextmanager
def _journal_place(output: str | None) -> Iterator[Path]:
    """Beside the output, where an interrupted run is found again; without an output, in a directory that
    goes away.
    """
    if output:
        yield Path(output + ".journal")
        return
    with tempfile.TemporaryDirectory(prefix="sidecheck-") as folder:
        yield Path(folder) / "journal"


def _run(job: Job, table: Table, journal: Journal) -> None:
    from verify.review.run import run

    if journal.done:
        note(f"{journal.done} rows were done before; going on after them")
    total = sum(1 for _ in table.rows()) if sys.stderr.isatty() else None
    with progress_bar("rows", total, journal.done) as progress:
        run(job, table, journal, progress)


def _show(journal: Journal, as_json: bool) -> int:
    from verify.report.review_text import print_rows

    if not as_json:
        print_rows(journal.records())
        return _status(journal.records())
    print('{"rows": [')
    for index, record in enumerate(journal.records()):
        print((",\n" if index else "") + json.dumps(record, ensure_ascii=False), end="")
    print("\n]}")
    return _status(journal.records())


def _status(records: Iterable[dict[str, Any]]) -> int:
    """1 when a row differs or is refuted, else 2 when one could not be used, else 3 when one is undecided,
    else 0.

    A last digit that is rounded otherwise is no difference: it is 0, and the summary says it.
    """
    from verify.review.record import kind_of

    kinds = {kind_of(record) for record in records}
    if kinds & {"differs", "refuted"}:
        return status.DIFFERS
    if "unusable" in kinds:
        return status.UNUSABLE
    return status.UNDECIDED if "undecided" in kinds else status.OK


def _derivations(job: Job, journal: Journal) -> list[tuple[str, Any]]:
    """The derivations that the rows of a table lean on, each once."""
    from verify.errors import InputError

    reviewer, found = job.reviewer(), []
    for name in dict.fromkeys(record["case"] for record in journal.records()):
        with contextlib.suppress(InputError):  # a case that could not be read is reported at its rows
            case = reviewer.case_named(name)
            found.append((name, reviewer.derivation(case, case.problem)))
    return found


def _write_memo(path: str, case: Case, table: str, derivations: list[tuple[str, Any]], records: Records) -> None:
    import verify
    from verify.report.memo import Memo
    from verify.report.memo_blocks import html, markdown

    memo = Memo(case, table, verify.__version__, derivations)
    blocks = memo.blocks(records)
    pieces = (
        markdown(blocks) if path.lower().endswith(".md") else html(blocks, f"Review memo: {case.title or case.name}")
    )
    with open(path, "w", encoding="utf-8") as stream:
        stream.writelines(pieces)
