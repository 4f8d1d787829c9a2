"""The command ``sidecheck``: one short file a command, loaded only when it is the one asked for."""

from verify.cli.main import main as main
