"""``stopwright cut``: write the files to cut."""

from __future__ import annotations

from pathlib import Path

import click

from layout.api import cut_job
from layout.cli.shared import JOB, STRICT, end_strictly, naming_faults, tell
from layout.files.page import CAUTIONS


@click.command(
    "cut",
    epilog="Example: stopwright cut parlour.yaml -o parlour-cut writes parlour-cut/board.dxf.",
)
@JOB
@click.option(
    "-o",
    "--output",
    "directory",
    required=True,
    metavar="DIR",
    type=click.Path(path_type=Path),
    help="Directory for the files; made if need be.",
)
@click.option("--force", is_flag=True, help="Replace files of the same names in DIR.")
@STRICT
def command(job: Path, *, directory: Path, force: bool, strict: bool) -> None:
    """Plan JOB and write drawings, positions and plan into DIR."""
    with naming_faults(job):
        done = cut_job(
            job,
            directory,
            force=force,
            approve=lambda plan: end_strictly(plan.findings, strict=strict),
        )
    for name in done.sizes:
        click.echo(directory / name)
    for finding in done.plan.findings:
        tell(finding)
    pitch = done.plan.pitch
    if pitch is not None:
        click.echo(
            f"Error left over the balanced frets: {pitch.rms_cents:.2f} cents rms, "
            f"{abs(pitch.worst.cents):.2f} at worst.",
            err=True,
        )
    click.echo(
        f"{len(done.plan.assumed)} values were assumed; stopwright plan {job.name} lists them.",
        err=True,
    )
    click.echo(CAUTIONS[-1], err=True)
