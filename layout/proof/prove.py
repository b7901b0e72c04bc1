"""Do the files hold what the sheets plan?

Files are read back from their bytes by readers of their own, which share nothing with the writers
but the sheet itself.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import replace
from pathlib import PurePath

from layout.drawing.sheet import Sheet
from layout.drawing.tiles import Tiling
from layout.proof.expected import Expected, expect_sheet
from layout.proof.judge import judge_match
from layout.proof.matching import match_edges
from layout.proof.paper import prove_pages
from layout.proof.plane_map import PlaneMap
from layout.proof.read_dxf import read_dxf
from layout.proof.read_pdf import read_pdf
from layout.proof.read_svg import read_svg
from layout.proof.reading import Reading
from layout.proof.report import FileReport, LayerReport, Problem, Report
from layout.proof.similarity import Similarity, find_similarity, move_edges

TOLERANCE_MM = 0.01
"""A tenth of what a careful hand marks, and a tenth of a router's backlash."""
PAGE_MARGIN_MM = 2.0
"""White around the drawing on an SVG page."""
_MOST_MEASURED = 2
"""Sheets that a file of no known name is measured against in full."""
READERS: dict[str, Callable[[bytes], Reading]] = {"dxf": read_dxf, "svg": read_svg}
"""Which reader takes files that end in what."""


def prove_files(
    sheets: Mapping[str, Sheet],
    files: Mapping[str, bytes],
    *,
    tolerance_mm: float = TOLERANCE_MM,
    tilings: Mapping[str, Tiling] | None = None,
) -> Report:
    """Measure files against sheets.

    Parameters
    ----------
    sheets
        By name: ``board``.
    files
        Contents by file name: ``board.dxf``. The ending tells the format. A file whose name begins
        with a sheet's name belongs to it; any other to the sheet it fits best.
    tolerance_mm
        The largest deviation that passes, above 0.
    tilings
        How sheets are laid out on pages, by sheet name; a PDF file needs one.

    Returns
    -------
    Report
        One ``FileReport`` a file, in the given order. Never fails over what is in a file.

    Raises
    ------
    ValueError
        When there is no sheet, or the tolerance is not a length above 0.

    Notes
    -----
    What a file declares about its unit is believed. Then a drawing that is enlarged, mirrored,
    turned or moved as a whole is named as that; the layers are measured with it taken out.

    """
    if not sheets:
        raise ValueError("there is no sheet to measure against")
    if not (tolerance_mm > 0 and math.isfinite(tolerance_mm)):
        raise ValueError(f"a tolerance is a length above 0, not {tolerance_mm}")
    known: dict[str, Expected] = {}

    def expect(name: str) -> Expected:
        if name not in known:
            known[name] = expect_sheet(sheets[name])
        return known[name]

    reports = []
    for name, content in files.items():
        if _ending(name) == "pdf":
            reports.append(
                _prove_pdf(name, content, sheets, tilings or {}, tolerance_mm=tolerance_mm)
            )
            continue
        reader = READERS.get(_ending(name))
        if reader is None:
            fault = Problem("unreadable", "a proof reads .dxf, .svg and .pdf files")
            reports.append(FileReport(name, None, "none", (), (fault,), ()))
            continue
        reading = reader(content)
        page = _ending(name) == "svg"
        owner = find_sheet_name(name, sheets)
        choice = [owner] if owner else list(sheets)
        if len(choice) > _MOST_MEASURED:
            possible = {each: expect(each) for each in choice}
            choice = _prefer_sheets(reading, possible, page=page, tolerance_mm=tolerance_mm)
        proofs = [
            replace(
                _prove(name, reading, expect(each), page=page, tolerance_mm=tolerance_mm),
                sheet=each,
            )
            for each in choice
        ]
        reports.append(max(proofs, key=_fit))
    return Report(tuple(reports), tolerance_mm)


def _prefer_sheets(
    reading: Reading, possible: Mapping[str, Expected], *, page: bool, tolerance_mm: float
) -> list[str]:
    """Name the few sheets whose corners most are in a file: only those are measured."""
    met = {}
    for name, expected in possible.items():
        anchor = _page_corner(expected.sheet) if page else 0j
        placed = move_edges(reading.edges, PlaneMap(1, 0, anchor))
        whole = find_similarity(expected, placed, anchor=anchor, tolerance_mm=tolerance_mm)
        met[name] = whole.met
    return sorted(met, key=lambda name: -met[name])[:_MOST_MEASURED]


def _prove_pdf(
    name: str,
    content: bytes,
    sheets: Mapping[str, Sheet],
    tilings: Mapping[str, Tiling],
    *,
    tolerance_mm: float,
) -> FileReport:
    laid_out = {sheet: sheets[sheet] for sheet in tilings if sheet in sheets}
    owner = find_sheet_name(name, laid_out)
    choice = [owner] if owner else list(laid_out)
    if not choice:
        fault = Problem("no-sheet", "no sheet of the job is laid out on pages")
        return FileReport(name, None, "none", (), (fault,), ())
    pages = read_pdf(content)
    proofs = [
        replace(
            prove_pages(name, pages, sheets[sheet], tilings[sheet], tolerance_mm=tolerance_mm),
            sheet=sheet,
        )
        for sheet in choice
    ]
    return max(proofs, key=_fit)


def _ending(name: str) -> str:
    return PurePath(name).suffix[1:].lower()


def find_sheet_name(file_name: str, sheets: Mapping[str, Sheet]) -> str | None:
    """Find the sheet whose name a file's name begins with: the longest one.

    Examples
    --------
    >>> find_sheet_name("Board-edited.dxf", {"board": None, "gauges": None})
    'board'

    """
    stem = PurePath(file_name).stem.lower()
    fitting = [name for name in sheets if re.match(re.escape(name.lower()) + r"(?![a-z])", stem)]
    return max(fitting, key=len, default=None)


def _fit(report: FileReport) -> tuple[float, float]:
    """How well a file fits a sheet: by the shapes found, less what is extra."""
    planned = sum(layer.planned for layer in report.layers) or 1
    found = sum(layer.found for layer in report.layers)
    extra = sum(layer.extra for layer in report.layers)
    return found / planned - min(extra / planned, 1.0), -len(report.problems)


def _prove(
    name: str, reading: Reading, expected: Expected, *, page: bool, tolerance_mm: float
) -> FileReport:
    sheet = expected.sheet
    if reading.broken:
        return FileReport(name, sheet.name, reading.unit, (), reading.faults, reading.notes)
    anchor = _page_corner(sheet) if page else 0j
    placed = move_edges(reading.edges, PlaneMap(1, 0, anchor))
    whole = find_similarity(expected, placed, anchor=anchor, tolerance_mm=tolerance_mm)
    whole, notes = _allow_corner(whole, sheet, tolerance_mm=0.0 if page else tolerance_mm)
    found = move_edges(placed, whole.to_sheet)
    match = match_edges(expected.edges, found, tolerance_mm=tolerance_mm, in_space=not page)
    verdict = judge_match(expected, reading, found, match, tolerance_mm=tolerance_mm)
    problems = (*reading.faults, *whole.problems, *verdict.problems)
    if not len(reading.edges):
        problems = (*reading.faults, Problem("missing", "nothing is drawn in the file"))
    return FileReport(
        name,
        sheet.name,
        reading.unit,
        verdict.layers,
        problems,
        (*reading.notes, *notes, *verdict.notes, *_note_unit(reading)),
    )


def _page_corner(sheet: Sheet) -> complex:
    """Where the upper left corner of an SVG page lies: outside a margin, on a whole 1e-4 mm."""
    left = math.floor(round(sheet.extents.left * 1e4, 2)) / 1e4
    high = math.ceil(round(sheet.extents.high * 1e4, 2)) / 1e4
    return complex(left - PAGE_MARGIN_MM, high + PAGE_MARGIN_MM)


def _allow_corner(
    whole: Similarity, sheet: Sheet, *, tolerance_mm: float
) -> tuple[Similarity, tuple[Problem, ...]]:
    """Accept a DXF file whose origin was moved to the lower left corner, as makers ask for."""
    if [problem.code for problem in whole.problems] != ["shifted"]:
        return whole, ()
    corner = complex(sheet.extents.left, sheet.extents.low)
    positive = complex(min(corner.real, 0.0), min(corner.imag, 0.0))
    if min(abs(whole.to_sheet.b - corner), abs(whole.to_sheet.b - positive)) > tolerance_mm:
        return whole, ()
    moved = -whole.to_sheet.b
    text = (
        "the origin is the lower left corner: everything lies "
        f"{moved.real:.3f} mm further right and {moved.imag:.3f} mm further up than planned"
    )
    return Similarity(whole.to_sheet, ()), (Problem("shifted", text, abs(moved)),)


def _note_unit(reading: Reading) -> tuple[Problem, ...]:
    if reading.unit == "none":
        return (Problem("unit", "the file names no unit; it was read in mm"),)
    return ()


__all__ = [
    "READERS",
    "TOLERANCE_MM",
    "FileReport",
    "LayerReport",
    "Problem",
    "Report",
    "find_sheet_name",
    "prove_files",
]
