"""``stopwright plan``: print the plan a maker reads."""

from __future__ import annotations

from pathlib import Path

import click

from layout.cli.shared import JOB, STRICT, end_strictly
from layout.files.page import render_page
from layout.files.plan_json import render_plan_json
from layout.job.read import read_job  # not from layout.api: a plan need not load the drawing
from layout.plan.make import make_plan


@click.command(
    "plan", epilog="Example: stopwright plan parlour.yaml --inch prints 1/64 inch beside each mm."
)
@JOB
@click.option("--inch", is_flag=True, help="Add decimal inch and the nearest 1/64 to the page.")
@click.option("--json", "as_json", is_flag=True, help="Print the plan as JSON and nothing else.")
@STRICT
def command(job: Path, *, inch: bool, as_json: bool, strict: bool) -> None:
    """Print where every stop, nut and saddle of JOB goes, and what error is left in cents."""
    plan = make_plan(read_job(job))
    if as_json:
        click.echo(render_plan_json(plan).decode("ascii"), nl=False)
    else:
        click.echo(render_page(plan, inch=inch), nl=False)
    end_strictly(plan.findings, strict=strict)
