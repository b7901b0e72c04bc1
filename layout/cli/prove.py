"""``stopwright prove``: measure files against the job."""

from __future__ import annotations

import sys
from collections.abc import Iterable
from pathlib import Path

import click

from layout.api import draw_all, make_plan, prove_drawings, read_job
from layout.cli.shared import JOB
from layout.errors import FileError, TextError
from layout.plan.model import Plan
from layout.proof.page import write_report
from layout.proof.prove import TOLERANCE_MM
from layout.proof.report import Report
from layout.units import read_length_mm

_ENDINGS = {".dxf", ".svg", ".pdf"}
_LARGEST_BYTES = 64_000_000
"""A drawing of this kind has a thousandth of that."""


@click.command(
    "prove",
    epilog="Example: stopwright prove parlour.yaml parlour-cut measures every drawing in there.",
)
@JOB
@click.argument(
    "paths", metavar="PATH...", nargs=-1, required=True, type=click.Path(path_type=Path)
)
@click.option(
    "--tolerance",
    default=f"{TOLERANCE_MM:g}",
    show_default=True,
    metavar="LENGTH",
    help="Largest deviation that passes; mm where it carries no unit.",
)
@click.option("--positive", is_flag=True, help="The drawings were cut with --positive.")
def command(job: Path, *, paths: tuple[Path, ...], tolerance: str, positive: bool) -> None:
    """Read drawings back and measure them against what JOB plans.

    A PATH is a DXF, SVG or PDF file, as written or as saved by another program, or a directory of
    them. Edges are matched by place, not by name. Whatever is cut, drilled or scribed must be
    there, once, within the tolerance, and nothing else. Exit status 1 when a file fails.
    """
    tolerance_mm = _read_tolerance(tolerance)
    files = {str(path): _read_file(path) for path in _list_drawings(paths)}
    plan = make_plan(read_job(job))
    report = _prove(plan, files, tolerance_mm=tolerance_mm, positive=positive)
    click.echo(write_report(report), nl=False)
    if not report.passed:
        codes = {problem.code for file in report.files for problem in file.problems}
        if "shifted" in codes and not positive:
            click.echo("Drawings cut with --positive are proved with --positive.", err=True)
        sys.exit(1)


def _read_tolerance(text: str) -> float:
    try:
        tolerance_mm = read_length_mm(text)
    except TextError as error:
        raise click.BadParameter(f"{text}: {error}", param_hint="--tolerance") from error
    if not 0 < tolerance_mm <= 1:
        raise click.BadParameter(
            f"{text}: a tolerance is above 0 and at most 1 mm", param_hint="--tolerance"
        )
    return tolerance_mm


def _list_drawings(paths: Iterable[Path]) -> list[Path]:
    """Every file named, and every drawing in a directory, by name."""
    found: dict[Path, None] = {}
    for path in paths:
        if not path.is_dir():
            found[path] = None
            continue
        try:
            inside = sorted(each for each in path.iterdir() if each.suffix.lower() in _ENDINGS)
        except OSError as fault:
            raise FileError(f"{path} could not be read: {fault.strerror}") from fault
        if not inside:
            raise FileError(f"{path} holds no .dxf, .svg or .pdf file")
        found |= dict.fromkeys(inside)
    return list(found)


def _read_file(path: Path) -> bytes:
    if path.suffix.lower() not in _ENDINGS:
        raise click.UsageError(f"{path}: a proof reads .dxf, .svg and .pdf files")
    try:
        if path.stat().st_size > _LARGEST_BYTES:
            raise FileError(f"{path} could not be read: it is larger than 64 MB")
        return path.read_bytes()
    except OSError as fault:
        if isinstance(fault, FileError):
            raise
        raise FileError(f"{path} could not be read: {fault.strerror}") from fault


def _prove(plan: Plan, files: dict[str, bytes], *, tolerance_mm: float, positive: bool) -> Report:
    drawn = draw_all(plan, positive=positive)
    return prove_drawings(drawn, files, tolerance_mm=tolerance_mm)
