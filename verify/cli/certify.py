"""``sidecheck certify``: the certificate, its page and its rechecker, into a folder."""

from __future__ import annotations

import argparse
import re
from typing import TYPE_CHECKING, Any

from verify.cli import status
from verify.cli.options import add_budget, add_cache, add_json, digits
from verify.cli.output import note, show_json
from verify.cli.signing import PASSWORD, SIGNATURE, read_signing_key
from verify.errors import InputError, UndecidedError

if TYPE_CHECKING:
    from verify.certificate.certify import Certificate
    from verify.certificate.sign import Signer
    from verify.derivation.derive import Derivation
    from verify.problem.casefile import Case

EXAMPLE = "sidecheck certify casebook/demo/lot-release.case.toml -o out --paper letter --issued 2026-12-01"

NAME = re.compile(r"[A-Za-z0-9][A-Za-z0-9._-]{0,99}")
"""What may be the name of a file on every system, and in a command line without quotes."""
RESERVED = ("index", "recheck")


def add(parser: argparse.ArgumentParser) -> None:
    """Add the arguments of the command."""
    parser.add_argument("cases", nargs="+", metavar="CASE", help="case files, NAME.case.toml, or - for standard input")
    parser.add_argument(
        "-o", "--out", required=True, metavar="DIR", help="folder for the files; made if it is not there"
    )
    parser.add_argument("--paper", choices=("a4", "letter"), default="a4", help="paper of the PDF (default a4)")
    parser.add_argument(
        "--digits", type=digits, default=50, metavar="N", help="significant digits to certify (default 50)"
    )
    parser.add_argument(
        "--tolerance", default="1/1000000", metavar="X",
        help="how far an expectation may move when numbers are printed to k decimals (default 1/1000000)",
    )  # fmt: skip
    parser.add_argument(
        "--issued", default="", metavar="DATE", help="date or words of issue (default: SOURCE_DATE_EPOCH, if set)"
    )
    parser.add_argument("--no-pdf", action="store_true", help="leave out the PDF")
    parser.add_argument(
        "--sign", metavar="KEY.pem",
        help=f"sign with this Ed25519 key; its password, if it has one, is asked for or taken from {PASSWORD}",
    )  # fmt: skip
    parser.add_argument("--force", action="store_true", help="overwrite files that differ")
    add_cache(parser)
    add_budget(parser)
    add_json(parser)


def run(args: argparse.Namespace) -> int:
    """Certify every case, recheck what was made, and write all files together; several cases make a bundle.

    Nothing is written unless every case has its certificate, and with a key its signature. A certificate that the
    checker leaves open (its limit of work) makes the exit status 3.
    """
    from pathlib import Path

    from verify.certificate.write import bundle_index, write_files
    from verify.memory import watched
    from verify.report.publish import certificate_files, overview_files, require_printers

    require_printers(pdf=not args.no_pdf)
    signer = None if args.sign is None else read_signing_key(args.sign)
    made: dict[str, Certificate] = {}
    files: dict[str, bytes] = {}
    outcome = status.OK
    with watched(args.cache, note) as cache:
        for case in _cases(args.cases):
            certificate, derivation = _certificate(case, args, cache)
            if certificate is None:
                return status.DIFFERS
            outcome = max(outcome, _rechecked(case, certificate))
            made[case.name] = certificate
            files |= certificate_files(
                case.name, certificate.data, paper=args.paper, pdf=not args.no_pdf, family=derivation.family
            )
    if signer is not None:
        files |= {f"{name}{SIGNATURE}": signer.sign(certificate.data) for name, certificate in made.items()}
    if len(made) > 1:
        data = {name: certificate.data for name, certificate in made.items()}
        files |= overview_files(data, paper=args.paper, pdf=not args.no_pdf)
        files["index.json"] = bundle_index(data)
    write_files(files, Path(args.out), force=args.force)
    _show(args, made, sorted(files), signer)
    return outcome


def _rechecked(case: Case, certificate: Certificate) -> int:
    """Let the small checker see a certificate before it is written; one that it leaves open is written, and told."""
    verdict = certificate.recheck()
    if verdict.status in (1, 2):
        raise UndecidedError(f"{case.name}: the rechecker does not accept this certificate: {verdict.lines[0]}")
    note(f"{case.name}: {verdict.lines[0]}")
    return status.UNDECIDED if verdict.status == 3 else status.OK


def _cases(paths: list[str]) -> list[Case]:
    """Read the case files first, so that a mistake in the last one costs no time."""
    from verify.problem.casefile import read_case

    cases = [read_case(path) for path in paths]
    seen: set[str] = set()
    for path, case in zip(paths, cases, strict=True):
        if case.problem is None:
            raise InputError("the case has no [problem]", "a certificate needs a null, a level and n", file=path)
        if not NAME.fullmatch(case.name) or case.name.lower() in RESERVED:
            raise InputError(
                f"{case.name!r} cannot name a certificate", "use letters, digits, . _ - in the file's name", file=path
            )
        if case.name.lower() in seen:
            raise InputError(f"two cases are named {case.name}", "give each file another name", file=path)
        seen.add(case.name.lower())
    return cases


def _certificate(case: Case, args: argparse.Namespace, cache: str | None) -> tuple[Certificate | None, Derivation]:
    """Derive, solve and certify; None, with a remark, when the derivation is refuted."""
    from verify.certificate.build import GUARD_DIGITS
    from verify.certificate.certify import certify
    from verify.derivation.ledger import Grade
    from verify.report.pipeline import derive_case, solve_case

    derivation = derive_case(case, budget=args.budget)
    for step in derivation.steps:
        if step.grade is Grade.REFUTED:
            note(f"{case.name}: no certificate, {step}")
            return None, derivation
    problem: Any = case.problem
    try:
        solution = solve_case(case, derivation, digits=args.digits + GUARD_DIGITS, cache=cache)
        certificate = certify(
            problem, args.digits, case=case, tolerance=args.tolerance, issued=args.issued, solution=solution
        )
    except UndecidedError as error:
        raise UndecidedError(f"{case.name}: {error}") from None
    except InputError as error:
        raise error.at(file=str(case.path)) from None
    return certificate, derivation


def _show(args: argparse.Namespace, made: dict[str, Certificate], files: list[str], signer: Signer | None) -> None:
    signed = {} if signer is None else {"signed_by": signer.key_id}
    if args.json:
        listed = {
            name: {"file": f"{name}.cert.json", "sha256": certificate.sha256} for name, certificate in made.items()
        }
        show_json({"directory": args.out, "certificates": listed, "files": [*files, "SHA256SUMS"], **signed})
        return
    for name, certificate in made.items():
        print(f"{certificate.sha256}  {name}.cert.json")
    print(f"{len(files) + 1} files in {args.out}" + "".join(f", signed by {key}" for key in signed.values()))
