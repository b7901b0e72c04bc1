"""``stopwright cut``: write the files to cut."""

from __future__ import annotations

from pathlib import Path

import click

from layout.api import Format, cut_job
from layout.cli.shared import JOB, STRICT, end_strictly, tell
from layout.files.arcs import Arcs
from layout.files.dxf import DxfVersion
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
@click.option(
    "--dxf",
    "version",
    type=click.Choice(["r2000", "r12"]),
    default="r2000",
    show_default=True,
    help="DXF version; r12 is for old machines and carries no unit.",
)
@click.option(
    "--arcs",
    type=click.Choice(["bulge", "pieces", "chords"]),
    default="bulge",
    show_default=True,
    help="Arcs in outlines: as bulges, as separate lines and arcs, or as short chords.",
)
@click.option("--positive", is_flag=True, help="Move all drawings alike to x and y of 0 or more.")
@click.option("--force", is_flag=True, help="Replace files of the same names in DIR.")
@STRICT
def command(
    job: Path,
    *,
    directory: Path,
    version: DxfVersion,
    arcs: Arcs,
    positive: bool,
    force: bool,
    strict: bool,
) -> None:
    """Plan JOB and write drawings, positions and plan into DIR."""
    done = cut_job(
        job,
        directory,
        force=force,
        form=Format(version, arcs, positive),
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
        f"{len(done.plan.assumed)} values were assumed; stopwright plan {job} lists them.",
        err=True,
    )
    click.echo(
        f"Read back and measured: {len(done.proof.files)} drawings, largest deviation "
        f"{done.proof.largest_mm:.4f} mm.",
        err=True,
    )
    click.echo(CAUTIONS[-1], err=True)
