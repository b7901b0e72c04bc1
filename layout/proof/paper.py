"""Do the pages of a template hold what is planned for each of them?"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

import numpy as np

from layout.drawing.shapes import Extents, Lettering, extents_of
from layout.drawing.sheet import Sheet
from layout.drawing.tiles import Tile, Tiling
from layout.proof.edges import Edges, Flags, Places, Reals, points_along
from layout.proof.expected import Expected, expect_sheet
from layout.proof.judge import Judgement, judge_match
from layout.proof.matching import match_edges
from layout.proof.plane_map import PlaneMap, make_matrix
from layout.proof.read_pdf import Page, Pages
from layout.proof.reading import Reading
from layout.proof.report import FileReport, LayerReport, Problem
from layout.proof.similarity import find_similarity, move_edges

PAPER_MM = 0.02
"""Least tolerance on paper: a line is wider than that, and pages are written to 0.0004 mm."""
_PAGE_SIZE_MM = 0.5


def prove_pages(
    name: str, pages: Pages, sheet: Sheet, tiling: Tiling, *, tolerance_mm: float
) -> FileReport:
    """Measure every page against the window of the sheet it should show.

    Parameters
    ----------
    name
        The file's, for the report.
    pages, sheet, tiling
        What was read, and what was planned.
    tolerance_mm
        The largest deviation that passes, in mm of the sheet; at least ``PAPER_MM``.

    """
    tolerance_mm = max(tolerance_mm, PAPER_MM)
    problems = list(pages.faults)
    if not pages.broken and len(pages.pages) != len(tiling.tiles):
        said = f"{len(pages.pages)} pages are there, {len(tiling.tiles)} are planned"
        problems.append(Problem("missing", said, float(len(tiling.tiles) - len(pages.pages))))
    layers: list[LayerReport] = []
    notes: list[Problem] = []
    for number, (page, tile) in enumerate(zip(pages.pages, tiling.tiles, strict=False), 1):
        proof = _prove_page(page, sheet, tiling, tile, tolerance_mm=tolerance_mm)
        layers += proof.layers
        problems += [_on_page(problem, number) for problem in proof.problems]
        notes += [_on_page(note, number) for note in proof.notes]
    unit = "pt" if pages.pages else "none"
    return FileReport(name, sheet.name, unit, _add_up(layers), tuple(problems), tuple(notes))


def _on_page(problem: Problem, number: int) -> Problem:
    return replace(problem, text=f"page {number}: {problem.text}")


def _add_up(layers: Iterable[LayerReport]) -> tuple[LayerReport, ...]:
    """One row a layer over all pages: what shows on two pages counts on both."""
    rows: dict[str, LayerReport] = {}
    for row in layers:
        known = rows.get(row.layer, LayerReport(row.layer, 0, 0, 0, 0, 0.0))
        rows[row.layer] = LayerReport(
            row.layer,
            known.planned + row.planned,
            known.found + row.found,
            known.missing + row.missing,
            known.extra + row.extra,
            max(known.largest_mm, row.largest_mm),
        )
    return tuple(rows.values())


def _prove_page(
    page: Page, sheet: Sheet, tiling: Tiling, tile: Tile, *, tolerance_mm: float
) -> Judgement:
    reading = page.reading
    problems = list(reading.faults)
    planned = (tiling.page_width_mm, tiling.page_height_mm)
    sizes = (page.width_mm, page.height_mm)
    if any(abs(size - wanted) > _PAGE_SIZE_MM for size, wanted in zip(sizes, planned, strict=True)):
        text = "it is {:.1f} x {:.1f} mm, not {:.1f} x {:.1f}".format(*sizes, *planned)
        problems.append(Problem("scale", text, sizes[0] / planned[0]))
    if reading.broken:
        return Judgement((), tuple(problems), reading.notes)
    placed = move_edges(reading.edges, _to_sheet(tiling, tile))
    expected = _expect_page(sheet, tile)
    certain = ~np.isin(expected.shape, list(expected.spare))
    on_paper = _both_ends_inside(expected.edges, _paper_of(tiling, tile))
    landmarks = _keep(expected, on_paper & certain)
    seen_whole = placed.take(_both_ends_inside(placed, _paper_of(tiling, tile)))
    anchor = _to_sheet(tiling, tile)(0j)
    whole = find_similarity(landmarks, seen_whole, anchor=anchor, tolerance_mm=tolerance_mm)
    moved = move_edges(placed, whole.to_sheet)
    shown = np.array([shape in tile.marks for shape in expected.sheet.shapes], bool)
    clipped = _clip_planned(expected, tile.window, whole_shapes=shown)
    found, kept, hidden = _clip_found(moved, tile.window)
    match = match_edges(clipped.edges, found, tolerance_mm=tolerance_mm, in_space=False)
    # The clipping path of a page hides what is drawn outside the window.
    match.stray_mm[hidden] = 0.0
    seen = _take(reading, kept)
    verdict = judge_match(clipped, seen, found, match, tolerance_mm=tolerance_mm, paper=True)
    return Judgement(
        verdict.layers,
        (*problems, *whole.problems, *verdict.problems),
        (*reading.notes, *verdict.notes),
    )


def _to_sheet(tiling: Tiling, tile: Tile) -> PlaneMap:
    """From mm on the page to mm of the sheet."""
    along, across = 1 / tiling.scale_along, 1 / tiling.scale_across
    inset = complex(tiling.margin_mm, tiling.margin_mm)
    shrink = make_matrix((along, 0.0), (0.0, across), 0)
    return PlaneMap(1, 0, complex(*tile.corner)).after(shrink).after(PlaneMap(1, 0, -inset))


def _expect_page(sheet: Sheet, tile: Tile) -> Expected:
    """The shapes that reach into the window, and the page's own marks.

    Lettering that the window cuts may be on this page or on the next: it is spare.
    """
    window = tile.window
    reaches = [extents_of([shape]) for shape in sheet.shapes]
    inside = [
        (shape, reach)
        for shape, reach in zip(sheet.shapes, reaches, strict=True)
        if _meet(reach, window)
    ]
    spare = frozenset(
        place
        for place, (shape, reach) in enumerate(inside)
        if isinstance(shape, Lettering) and not _holds(window, reach)
    )
    shapes = (*(shape for shape, _ in inside), *tile.marks)
    return expect_sheet(replace(sheet, shapes=shapes), spare=spare)


def _meet(one: Extents, other: Extents) -> bool:
    return (
        one.left < other.right
        and other.left < one.right
        and one.low < other.high
        and other.low < one.high
    )


def _holds(window: Extents, reach: Extents) -> bool:
    across = window.left <= reach.left and reach.right <= window.right
    return across and window.low <= reach.low and reach.high <= window.high


def _paper_of(tiling: Tiling, tile: Tile) -> Extents:
    """The whole page, in mm of the sheet."""
    to_sheet = _to_sheet(tiling, tile)
    low, high = to_sheet(0j), to_sheet(complex(tiling.page_width_mm, tiling.page_height_mm))
    return Extents(low.real, low.imag, high.real, high.imag)


def _both_ends_inside(edges: Edges, frame: Extents) -> Flags:
    """Edges that can be compared whole, whatever is cut off at the window."""
    left, low, right, high = frame
    inside = np.ones(len(edges), bool)
    for points in (edges.start, edges.end):
        inside &= (points.real > left) & (points.real < right)
        inside &= (points.imag > low) & (points.imag < high)
    return inside


def _keep(expected: Expected, chosen: Flags) -> Expected:
    return _with_edges(expected, expected.edges.take(chosen), chosen)


def _with_edges(expected: Expected, edges: Edges, chosen: Flags) -> Expected:
    shape = expected.shape[chosen]
    first = np.searchsorted(shape, np.arange(len(expected.sheet.shapes) + 1))
    return replace(
        expected,
        edges=edges,
        shape=shape,
        first=first,
        lettering=expected.lettering[chosen],
        needless=expected.needless[chosen],
    )


def _clip_planned(expected: Expected, window: Extents, *, whole_shapes: Flags) -> Expected:
    """Cut what the window cuts; marks stand outside it and stay whole."""
    begin, end = _shares_within(expected.edges, window)
    whole = whole_shapes[expected.shape]
    begin, end = np.where(whole, 0.0, begin), np.where(whole, 1.0, end)
    length = expected.edges.length_mm
    chosen = (end - begin) * length > 1e-3
    return _with_edges(expected, _cut(expected.edges, begin, end).take(chosen), chosen)


def _clip_found(edges: Edges, window: Extents) -> tuple[Edges, Places, slice]:
    """Give what shows of the edges, then what stands outside the window.

    Beside them: where they came from, and where those outside are.
    """
    begin, end = _shares_within(edges, window)
    length = edges.length_mm
    inside = np.flatnonzero((end - begin) * length > 1e-3)
    outside = np.flatnonzero((end - begin) * length <= 1e-3)
    places = np.concatenate((inside, outside))
    begin[outside], end[outside] = 0.0, 1.0
    return _cut(edges, begin, end).take(places), places, slice(len(inside), None)


def _shares_within(edges: Edges, window: Extents) -> tuple[Reals, Reals]:
    """From which to which share of each edge it is inside the window (arcs: all or nothing)."""
    begin, end = np.zeros(len(edges)), np.ones(len(edges))
    way = edges.end - edges.start
    left, low, right, high = window
    sides = ((edges.start.real, way.real, left, right), (edges.start.imag, way.imag, low, high))
    for start, step, least, most in sides:
        moving = np.abs(step) > 1e-12
        safe = np.where(moving, step, 1.0)
        enter, leave = (least - start) / safe, (most - start) / safe
        within = (start >= least) & (start <= most)
        begin = np.maximum(begin, np.where(moving, np.minimum(enter, leave), 0.0))
        end = np.minimum(end, np.where(moving, np.maximum(enter, leave), np.where(within, 1, -1)))
    empty = end <= begin
    begin, end = np.where(empty, 0.0, begin), np.where(empty, 0.0, end)
    bent = np.flatnonzero(edges.bulge != 0)
    if len(bent):
        points = points_along(edges, bent, np.linspace(0, 1, 9))
        inside = (points.real >= left) & (points.real <= right)
        inside &= (points.imag >= low) & (points.imag <= high)
        begin[bent], end[bent] = 0.0, np.where(inside.all(axis=1), 1.0, 0.0)
    return begin, end


def _cut(edges: Edges, begin: Reals, end: Reals) -> Edges:
    way = edges.end - edges.start
    start = np.where(begin > 0, edges.start + begin * way, edges.start)
    stop = np.where(end < 1, edges.start + end * way, edges.end)
    return Edges(start, stop, edges.bulge, edges.low, edges.high)


def _take(reading: Reading, chosen: Places) -> Reading:
    return replace(
        reading,
        edges=reading.edges.take(chosen),
        layer=reading.layer[chosen],
        contour=reading.contour[chosen],
        closed=reading.closed[chosen],
    )
