"""The command line: one module a command, loaded only when it is called."""

from __future__ import annotations

import gc
import importlib
import io
import os
import sys

import click

from layout import __version__
from layout.errors import FileError, StopwrightError

COMMANDS = {
    "new": "Print a starter job that runs as it is.",
    "plan": "Print where every stop, nut and saddle goes, and what error is left.",
    "cut": "Write the files to cut: drawings, positions, plan.",
    "prove": "Read drawings back, also edited ones, and measure them against the job.",
    "temperaments": "List temperaments, or show one with its positions.",
}
"""Every command with its one line of help, so that the help page loads none of them."""


class _Lazily(click.Group):
    """A group that imports a command's module when the command is called."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002  click's signature
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        if cmd_name not in COMMANDS:
            return None
        # kept out of start-up: a command pays for its own libraries only
        module = importlib.import_module(f"layout.cli.{cmd_name}")
        command: click.Command = module.command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:  # noqa: ARG002
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))


@click.group(
    cls=_Lazily,
    context_settings={"help_option_names": ["-h", "--help"]},
    epilog="Try: stopwright new steel-six > job.yaml, then: stopwright cut job.yaml -o cut",
)
@click.version_option(__version__, prog_name="stopwright")
def group() -> None:
    """Lay out fingerboards for real strings, and write files to cut them at true size.

    Exit status: 0 done; 1 a job with faults, or findings under --strict; 2 wrong usage; 3 a file
    could not be read or written.
    """


def main() -> None:
    """Run the command line; no traceback reaches the user."""
    gc.set_threshold(
        100_000, 50, 50
    )  # a command lives for a second and makes no cycles to speak of
    if sys.stdout is None:  # closed by the caller: the first file opened would take its place
        click.echo("stopwright: standard output is closed", err=True)
        sys.exit(3)
    if isinstance(sys.stdout, io.TextIOWrapper):
        # A title or a path that the terminal has no letters for is shown, not stumbled over.
        sys.stdout.reconfigure(errors="backslashreplace")
    try:
        group(prog_name="stopwright")
    except FileError as error:
        click.echo(f"stopwright: {error}", err=True)
        sys.exit(3)
    except StopwrightError as error:
        click.echo(f"{error}", err=True)
        sys.exit(1)
    except OSError as error:  # a full disk behind standard output, as a rule
        click.echo(f"stopwright: standard output: {error.strerror or error}", err=True)
        # What is still held back goes nowhere, or the interpreter would fail over it at its end.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(3)
