"""``stopwright temperaments``: list records, or show one with positions on a length."""

from __future__ import annotations

import click

from layout.errors import TextError
from layout.files.record_page import render_record, render_record_list
from layout.job.records import library_names, load_library_record
from layout.units import read_length_mm


@click.command(
    "temperaments",
    epilog="Example: stopwright temperaments werckmeister-3 --on 650 prints cents and places.",
)
@click.argument("name", metavar="[NAME]", required=False)
@click.option(
    "--on",
    "length",
    default="650",
    show_default=True,
    metavar="LENGTH",
    help="Length to divide, from nut to bridge; mm where it carries no unit.",
)
def command(name: str | None, *, length: str) -> None:
    """List the temperament records, or print one with its cents, source and positions."""
    if name is None:
        records = [load_library_record(each) for each in library_names()]
        click.echo(render_record_list(records), nl=False)
        return
    if name not in library_names():
        raise click.UsageError(f"no record {name!r}; the records are {', '.join(library_names())}")
    try:
        length_mm = read_length_mm(length)
    except TextError as error:
        raise click.BadParameter(f"{length}: {error}", param_hint="--on") from error
    if length_mm <= 0:
        raise click.BadParameter(f"{length}: a length is above 0", param_hint="--on")
    click.echo(render_record(load_library_record(name), length_mm), nl=False)
