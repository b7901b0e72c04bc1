"""The public names, and the whole way from a job file to files in a few lines."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from layout.drawing.board import draw_board
from layout.drawing.sheet import Sheet
from layout.files.dxf import render_dxf
from layout.files.plan_json import describe_plan, render_plan_json
from layout.files.store import store_files
from layout.files.svg import render_svg
from layout.files.tables import render_positions
from layout.instrument import Instrument
from layout.job.edit import make_starter, starter_kinds
from layout.job.read import read_job, read_job_text
from layout.job.records import library_names, load_library_record
from layout.job.tree import read_bytes
from layout.plan.make import make_plan
from layout.plan.model import Plan

__all__ = [
    "Cut",
    "Instrument",
    "Plan",
    "cut_job",
    "describe_plan",
    "draw_sheets",
    "library_names",
    "load_library_record",
    "make_plan",
    "make_starter",
    "read_job",
    "render_files",
    "starter_kinds",
]


@dataclass(frozen=True, slots=True)
class Cut:
    """What ``cut_job`` wrote: the plan, and each file's name and size in bytes."""

    plan: Plan
    directory: Path
    sizes: dict[str, int]


def draw_sheets(plan: Plan) -> tuple[Sheet, ...]:
    """Draw every sheet that applies to the plan."""
    return (draw_board(plan),)


def render_files(plan: Plan, job: bytes) -> dict[str, bytes]:
    """Render every file of the plan in memory, by name; ``job`` is copied byte for byte."""
    layers = plan.instrument.layers
    files = {}
    for sheet in draw_sheets(plan):
        files[f"{sheet.name}.dxf"] = render_dxf(sheet, layers=layers)
        files[f"{sheet.name}.svg"] = render_svg(sheet, layers=layers)
    files["positions.csv"] = render_positions(plan)
    files["plan.json"] = render_plan_json(plan)
    files["job.yaml"] = job
    return files


def cut_job(
    path: Path,
    directory: Path,
    *,
    force: bool = False,
    approve: Callable[[Plan], None] = lambda _: None,
) -> Cut:
    """Read a job, plan it, draw it and store every file; nothing is written before all is made.

    Parameters
    ----------
    path
        The job file.
    directory
        Where the files go; made if need be.
    force
        Replace files of the same names.
    approve
        Called with the plan before anything is drawn; may raise to stop the cut.

    Raises
    ------
    JobError
        When the job has faults.
    PitchError, NoSolutionError
        When the temperament or the physics has no answer.
    FileError
        When a file cannot be read or written.

    """
    data = read_bytes(path)
    plan = make_plan(read_job_text(data, path.name, folder=path.parent))
    approve(plan)
    files = render_files(plan, data)
    store_files(directory, files, force=force)
    return Cut(plan, directory, {name: len(content) for name, content in files.items()})
