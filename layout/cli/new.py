"""``stopwright new``: print a starter job."""

from __future__ import annotations

import click

from layout.api import make_starter, starter_kinds


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
    if kind not in starter_kinds():
        known = ", ".join(starter_kinds())
        raise click.UsageError(f"no kind {kind!r}; the kinds are {known}")
    click.echo(make_starter(kind, settings), nl=False)
