"""The public names, and the whole way from a job file to files in a few lines."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from layout.drawing.board import draw_board
from layout.drawing.floors import draw_floors
from layout.drawing.gauges import draw_gauges
from layout.drawing.moves import made_positive_together
from layout.drawing.nut_saddle import draw_nut_saddle
from layout.drawing.sheet import Sheet
from layout.drawing.slotting import draw_slotting
from layout.drawing.template import draw_template
from layout.drawing.tiles import Tiling, plan_tiles
from layout.drawing.trial import draw_trial
from layout.errors import ProofError
from layout.files.arcs import Arcs
from layout.files.dxf import DxfVersion, render_dxf
from layout.files.pdf import render_pdf
from layout.files.plan_json import describe_plan, render_plan_json
from layout.files.store import store_files
from layout.files.svg import render_svg
from layout.files.tables import render_positions
from layout.instrument import Instrument
from layout.job.edit import make_starter, starter_kinds
from layout.job.read import read_job, read_job_text
from layout.job.records import library_names, load_library_record
from layout.job.tree import read_bytes
from layout.plan.fault_places import placing_faults
from layout.plan.make import make_plan
from layout.plan.model import Plan
from layout.proof.page import write_report
from layout.proof.prove import TOLERANCE_MM, prove_files
from layout.proof.report import Report

__all__ = [
    "Cut",
    "Drawn",
    "Format",
    "Instrument",
    "Plan",
    "cut_job",
    "describe_plan",
    "draw_all",
    "draw_sheets",
    "library_names",
    "load_library_record",
    "make_plan",
    "make_starter",
    "prove_drawings",
    "read_job",
    "render_files",
    "starter_kinds",
]


FLOORS = "floors"
DRAWINGS = {".dxf", ".svg", ".pdf"}


@dataclass(frozen=True, slots=True)
class Format:
    """How drawings are written: DXF version, form of arcs, moved to positive x and y or not."""

    dxf: DxfVersion = "r2000"
    arcs: Arcs = "bulge"
    positive: bool = False


@dataclass(frozen=True, slots=True)
class Drawn:
    """Every drawing of a plan: sheets for machines, and the paper template with its pages."""

    sheets: tuple[Sheet, ...]
    template: Sheet
    tiling: Tiling


@dataclass(frozen=True, slots=True)
class Cut:
    """What ``cut_job`` wrote: the plan, each file's name and size in bytes, and the proof."""

    plan: Plan
    directory: Path
    sizes: dict[str, int]
    proof: Report


def draw_sheets(plan: Plan, *, positive: bool = False) -> tuple[Sheet, ...]:
    """Draw every sheet that applies to the plan; ``positive`` moves all of them alike."""
    draws = (draw_board, draw_nut_saddle, draw_gauges, draw_floors, draw_slotting, draw_trial)
    sheets = tuple(sheet for draw in draws if (sheet := draw(plan)) is not None)
    return made_positive_together(sheets)[0] if positive else sheets


def draw_all(plan: Plan, *, positive: bool = False) -> Drawn:
    """Draw every sheet, and lay the paper template out on pages."""
    template = draw_template(plan)
    with placing_faults(plan.instrument):
        tiling = plan_tiles(template, plan.instrument.paper, unit=plan.instrument.unit)
    return Drawn(draw_sheets(plan, positive=positive), template, tiling)


def render_files(
    plan: Plan, drawn: Drawn, job: bytes, *, form: Format = Format()
) -> dict[str, bytes]:
    """Render every file of the plan in memory, by name; ``job`` is copied byte for byte.

    R12 files carry no unit, so their names do.
    """
    layers = plan.instrument.layers
    unit = "-mm" if form.dxf == "r12" else ""
    files = {}
    for sheet in drawn.sheets:
        files[f"{sheet.name}{unit}.dxf"] = render_dxf(
            sheet, layers=layers, version=form.dxf, arcs=form.arcs
        )
        if sheet.name != FLOORS:  # floors are lines in space: a flat format cannot hold them
            files[f"{sheet.name}.svg"] = render_svg(sheet, layers=layers)
    files["template.pdf"] = render_pdf(drawn.template, drawn.tiling)
    files["positions.csv"] = render_positions(plan)
    files["plan.json"] = render_plan_json(plan)
    files["job.yaml"] = job
    return files


def prove_drawings(
    drawn: Drawn, files: dict[str, bytes], *, tolerance_mm: float = TOLERANCE_MM
) -> Report:
    """Measure drawings, by file name, against the sheets they were made from."""
    sheets = {sheet.name: sheet for sheet in (*drawn.sheets, drawn.template)}
    tilings = {drawn.template.name: drawn.tiling}
    chosen = {name: data for name, data in files.items() if Path(name).suffix.lower() in DRAWINGS}
    return prove_files(sheets, chosen, tolerance_mm=tolerance_mm, tilings=tilings)


def cut_job(
    path: Path,
    directory: Path,
    *,
    force: bool = False,
    form: Format = Format(),
    approve: Callable[[Plan], None] = lambda _: None,
) -> Cut:
    """Read a job, plan it, draw it, prove the drawings and store every file.

    Nothing is written before all is made and proved.

    Parameters
    ----------
    path
        The job file.
    directory
        Where the files go; made if need be.
    force
        Replace files of the same names.
    form
        How drawings are written.
    approve
        Called with the plan before anything is drawn; may raise to stop the cut.

    Raises
    ------
    JobError
        When the job has faults.
    PitchError, NoSolutionError
        When the temperament or the physics has no answer.
    ProofError
        When a drawing read back does not hold what was planned.
    FileError
        When a file cannot be read or written.

    """
    data = read_bytes(path)
    plan = make_plan(read_job_text(data, path.name, folder=path.parent))
    approve(plan)
    drawn = draw_all(plan, positive=form.positive)
    files = render_files(plan, drawn, data, form=form)
    proof = prove_drawings(drawn, files)
    if not proof.passed:
        raise ProofError(f"the drawings do not prove; nothing was written\n{write_report(proof)}")
    store_files(directory, files, force=force)
    return Cut(plan, directory, {name: len(content) for name, content in files.items()}, proof)
