"""Entry point: read the command line, run one command, turn every outcome into an exit status."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from contextlib import redirect_stdout
from importlib import import_module
from types import ModuleType
from typing import NoReturn, TextIO, cast

import verify
from verify.cli import status
from verify.cli.output import Outlet, StandardOutputError, complain
from verify.cli.registry import COMMANDS
from verify.errors import InputError, UndecidedError, mistake

EPILOG = """\
example:
  sidecheck solve casebook/demo/lot-release.case.toml

exit status:
  0 all agrees or is proved      1 something differs or is refuted
  2 the input cannot be used     3 undecided within the budget
  4 of recheck alone: accepted, but the numbers are taken on trust

'sidecheck COMMAND --help' shows the options of a command and an example."""


class Parser(argparse.ArgumentParser):
    """An argument parser whose complaint is one line."""

    def error(self, message: str) -> NoReturn:
        """Say on one line what is wrong with the command line, and leave with status 2."""
        text = " ".join(message.split())
        raise InputError(f"{self.prog}: {text}", f"see {self.prog} --help")


def build_parser(chosen: str | None) -> tuple[Parser, ModuleType | None]:
    """Return the parser, with the arguments of the chosen command only, and that command's module."""
    parser = Parser(
        prog="sidecheck",
        description="Check the derivation of an optimal test, and prove the digits of its cutoffs.",
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"sidecheck {verify.__version__}")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND", required=True)
    module = None
    for name, (where, line) in COMMANDS.items():
        if name != chosen:
            commands.add_parser(name, help=line, add_help=False)
            continue
        module = import_module(where)
        sub = commands.add_parser(
            name, help=line, description=line[0].upper() + line[1:] + ".", allow_abbrev=False,
            epilog=f"example:\n  {module.EXAMPLE}", formatter_class=argparse.RawDescriptionHelpFormatter,
        )  # fmt: skip
        module.add(sub)
    return parser, module


def dispatch(argv: Sequence[str]) -> int:
    """Run the command that the arguments ask for and return its exit status."""
    chosen = next((word for word in argv if not word.startswith("-")), None)
    parser, module = build_parser(chosen)
    args = parser.parse_args(argv)
    if module is None:  # argparse refuses an unknown or missing command before this
        raise InputError("no command", "see sidecheck --help")
    return int(module.run(args))


def main(argv: Sequence[str] | None = None) -> int:
    """Run ``sidecheck`` and return its exit status; no exception and no traceback leaves it.

    Examples
    --------
    >>> main(["no-such-command"])
    2
    """
    words = list(sys.argv[1:] if argv is None else argv)
    if sys.stdout is None:  # closed by the shell
        return complain("standard output is closed; send it to a file, a pipe or a terminal", status.UNUSABLE, False)
    try:
        with redirect_stdout(cast("TextIO", Outlet(sys.stdout))):
            code = _outcome(words)
            sys.stdout.flush()
    except BrokenPipeError:
        _discard_stdout()
        code = status.BROKEN_PIPE
    except StandardOutputError as error:
        _discard_stdout()
        code = complain(error, status.UNUSABLE, as_json=False)
    except KeyboardInterrupt:
        print("sidecheck: interrupted", file=sys.stderr)
        code = status.INTERRUPTED
    return code


def _outcome(words: list[str]) -> int:
    """Run the command, with every complaint turned into one line and a status."""
    as_json = "--json" in words
    try:
        return dispatch(words)
    except SystemExit as leaving:  # --help and --version
        return leaving.code if isinstance(leaving.code, int) else status.OK
    except InputError as error:
        return complain(error, status.UNUSABLE, as_json)
    except UndecidedError as error:
        return complain(error, status.UNDECIDED, as_json)
    except (BrokenPipeError, StandardOutputError):
        raise
    except Exception as error:
        return complain(mistake(error), status.INTERNAL, as_json)


def _discard_stdout() -> None:
    """Send the rest of standard output nowhere, so that nothing is left to fail at exit."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
