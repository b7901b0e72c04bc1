"""``stopwright new``: print a starter job."""

from __future__ import annotations

import click

from layout.api import make_starter, starter_kinds
from layout.errors import TextError


@click.command(
    "new",
    epilog="Example: stopwright new steel-six scale=640 frets.count=21 > job.yaml",
)
@click.argument("kind", metavar="KIND", required=False)
@click.argument("settings", metavar="[KEY=VALUE ...]", nargs=-1)
def command(kind: str | None, settings: tuple[str, ...]) -> None:
    """Print a commented starter job of KIND; it runs as it is.

    Keys are set with dots and list places counted from 1: strings.1.gauge="0.011 in". Without
    KIND the kinds are listed.
    """
    if kind is None:
        click.echo("\n".join(starter_kinds()))
        return
    try:
        starter = make_starter(kind, settings)
    except TextError as error:
        raise click.UsageError(str(error)) from error
    click.echo(starter, nl=False)
