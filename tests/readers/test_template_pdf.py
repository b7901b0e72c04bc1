"""The printed template, assembled from its pages by their crosses, measured against the plan.

Pages are read with PDFium, which shares no code with the writer: straight strokes in points, turned
into millimetres of paper. Pages are put together as a maker does it: the crosses of neighbours laid
on each other. Then every fret must be where the plan has it.
"""

from __future__ import annotations

import itertools
import math
from ctypes import byref, c_float
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from layout.drawing.shapes import Line
from layout.drawing.template import draw_template
from layout.drawing.tiles import plan_tiles
from layout.files.pdf import render_pdf
from layout.instrument import Paper
from layout.job.read import read_job
from layout.plan.make import make_plan

pdfium = pytest.importorskip("pypdfium2")
raw = pytest.importorskip("pypdfium2.raw")

EXAMPLES = Path(__file__).parents[2] / "examples"
NAMES = ("bass", "five-line", "multiscale-seven", "nylon", "parlour")
SIZES = ["A4", "A3", "Letter", "Tabloid", "roll"]
PDF_MM = 5e-3
ARM_MM = 8.0


@pytest.fixture(scope="module")
def plans():
    return {name: make_plan(read_job(EXAMPLES / f"{name}.yaml")) for name in NAMES}


@pytest.fixture(scope="module")
def sheets(plans):
    return {name: draw_template(plan) for name, plan in plans.items()}


def read_pages(data, printer=(1.0, 1.0)):
    """Straight strokes of every page, (n, 2, 2) mm on the paper of a printer that may shrink."""
    scale = np.array(printer) * 25.4 / 72
    return [np.array(list(_strokes(page))) * scale for page in pdfium.PdfDocument(data)]


def _strokes(page):
    for thing in page.get_objects():
        assert thing.type == raw.FPDF_PAGEOBJ_PATH
        assert thing.get_matrix().get() == (1, 0, 0, 1, 0, 0)
        ends = []
        for number in range(raw.FPDFPath_CountSegments(thing)):
            segment = raw.FPDFPath_GetPathSegment(thing, number)
            x, y = c_float(), c_float()
            raw.FPDFPathSegment_GetPoint(segment, byref(x), byref(y))
            ends.append((raw.FPDFPathSegment_GetType(segment), (x.value, y.value)))
        if [kind for kind, _ in ends] == [raw.FPDF_SEGMENT_MOVETO, raw.FPDF_SEGMENT_LINETO]:
            yield [point for _, point in ends]


def lengths(strokes):
    return np.hypot(*(strokes[:, 1] - strokes[:, 0]).T)


def crosses(strokes, scale=(1.0, 1.0)):
    """Middles of upright crosses, from the top down."""
    way = np.abs(strokes[:, 1] - strokes[:, 0])
    level = strokes[(np.abs(way[:, 0] - ARM_MM * scale[0]) < 0.01) & (way[:, 1] < 1e-3)]
    upright = strokes[(np.abs(way[:, 1] - ARM_MM * scale[1]) < 0.01) & (way[:, 0] < 1e-3)]
    found = [
        one.mean(axis=0)
        for one, other in itertools.product(level, upright)
        if math.dist(one.mean(axis=0), other.mean(axis=0)) < PDF_MM
    ]
    return sorted(map(tuple, found), key=lambda place: (round(place[0]), -place[1]))


def bars(strokes, axis):
    """Lengths of the strokes of a hundred millimetres or so along x (0) or y (1)."""
    way = np.abs(strokes[:, 1] - strokes[:, 0])
    chosen = (way[:, 1 - axis] < 1e-3) & (way[:, axis] > 97) & (way[:, axis] < 103)
    return sorted(way[chosen][:, axis])


def assemble(pages):
    """Lay pages of one row side by side on their crosses; strokes in the first page's mm."""
    laid, offset = [pages[0]], np.zeros(2)
    for before, after in itertools.pairwise(pages):
        on_before, on_after = crosses(before)[-2:], crosses(after)[:2]
        gaps = np.array(on_before) - np.array(on_after)
        assert np.abs(gaps[0] - gaps[1]).max() < PDF_MM, "the crosses of a joint do not agree"
        offset = offset + gaps.mean(axis=0)
        laid.append(after + offset)
    return np.concatenate(laid)


def largest_miss_mm(plan, strokes):
    """How far the farthest fret end lies off its printed line, zero taken from the nut line."""
    side = -1 if plan.instrument.hand == "left" else 1
    pieces = plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)
    ends = np.array([[piece.bass_mm, piece.treble_mm] for piece in pieces]) * [1, side]
    way = strokes[:, 1] - strokes[:, 0]
    level = strokes[(np.abs(way[:, 1]) < 1e-3) & (np.abs(way[:, 0]) > 110)]
    zero = _zero(strokes, _centre_line(level), plan.strings.nut_line.slope * side)
    tall = strokes[np.abs(way[:, 1]) > 30]
    worst = 0.0
    for bass, treble in ends + zero:
        worst = max(worst, min(_off(one, bass, treble) for one in tall))
    return worst


def _zero(strokes, centre_y, slope):
    """Where the nut line crosses the centre line: the first stroke of its slope that is no bar.

    The board's outline may draw the middle of it: its ends beyond the edges are enough.
    """
    way = strokes[:, 1] - strokes[:, 0]
    long = (np.abs(way[:, 1]) > 4) & (np.abs(lengths(strokes) - 100) > 0.01)
    along = long & (np.abs(way[:, 0] - slope * way[:, 1]) < PDF_MM)
    middles = strokes[along].mean(axis=1)
    return np.array([(middles[:, 0] - slope * (middles[:, 1] - centre_y)).min(), centre_y])


def _centre_line(level):
    """The centre line alone runs past the board: it is the longest level stroke."""
    spans = {}
    for one in level:
        spans.setdefault(round(float(one[0, 1]), 1), []).append(one[:, 0])
    longest = max(spans, key=lambda y: np.ptp(np.concatenate(spans[y])))
    return float(np.mean([one[0, 1] for one in level if abs(one[0, 1] - longest) < 0.1]))


def _off(stroke, *points):
    """Largest distance of points from a stroke that reaches past them, else from its ends."""
    start, end = stroke
    way = end - start
    off = 0.0
    for point in points:
        share = np.clip((point - start) @ way / (way @ way), 0, 1)
        off = max(off, float(np.hypot(*(start + share * way - point))))
    return off


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("name", NAMES)
def test_every_fret_of_the_assembled_paper_is_where_the_plan_has_it(plans, sheets, name, size):
    plan = plans[name]
    sheet = sheets[name]
    tiling = plan_tiles(sheet, Paper(size))
    pages = read_pages(render_pdf(sheet, tiling))
    assert len(pages) == len(tiling.tiles) == (1 if size == "roll" else tiling.columns)
    assert largest_miss_mm(plan, assemble(pages)) < PDF_MM
    for strokes in pages:
        assert bars(strokes, 0) == pytest.approx([100.0, 101.6], abs=PDF_MM)
        assert bars(strokes, 1) == pytest.approx([100.0], abs=PDF_MM)


@pytest.mark.parametrize("name", NAMES)
def test_a_printer_that_shrank_by_8_and_4_in_a_thousand_prints_true_the_next_time(
    plans, sheets, name
):
    plan = plans[name]
    sheet = sheets[name]
    printer = (0.992, 0.996)
    first = read_pages(render_pdf(sheet, plan_tiles(sheet, Paper("A4"))), printer)
    measured = bars(first[0], 0)[0], bars(first[0], 1)[0]
    assert measured == pytest.approx((99.2, 99.6), abs=PDF_MM)
    paper = Paper("A4", bar_along_mm=99.2, bar_across_mm=99.6)
    tiling = plan_tiles(sheet, paper)
    data = render_pdf(sheet, tiling)
    for drawn, printed in zip(read_pages(data), read_pages(data, printer), strict=True):
        assert bars(drawn, 0)[0] == pytest.approx(100 * 100 / 99.2, abs=PDF_MM)
        assert bars(drawn, 1)[0] == pytest.approx(100 * 100 / 99.6, abs=PDF_MM)
        assert bars(printed, 0) == pytest.approx([100.0, 101.6], abs=PDF_MM)
        assert bars(printed, 1) == pytest.approx([100.0], abs=PDF_MM)
    assert largest_miss_mm(plan, assemble(read_pages(data, printer))) < PDF_MM


def test_crosses_lie_at_the_same_places_of_the_sheet_on_both_pages(sheets):
    sheet = sheets["multiscale-seven"]
    tiling = plan_tiles(sheet, Paper("A4"))
    seen = {}
    for tile, strokes in zip(tiling.tiles, read_pages(render_pdf(sheet, tiling)), strict=True):
        for x, y in crosses(strokes):
            place = (x - tiling.margin_mm + tile.corner[0], y - tiling.margin_mm + tile.corner[1])
            near = [known for known in seen if math.dist(known, place) < PDF_MM]
            seen.setdefault(near[0] if near else place, []).append(tile.column)
    assert sorted(seen.values()) == [[1, 2], [1, 2], [2, 3], [2, 3]]
    for place in tiling.crosses:
        assert min(math.dist(place, known) for known in seen) < PDF_MM


def test_a_page_moved_by_a_millimetre_is_found(plans, sheets):
    plan = plans["parlour"]
    sheet = sheets["parlour"]
    tiling = plan_tiles(sheet, Paper("A4"))
    first, second = tiling.tiles
    # The drawing of the second page moves, its crosses stay.
    marks = tuple(
        replace(
            shape, start=(shape.start[0] + 1, shape.start[1]), end=(shape.end[0] + 1, shape.end[1])
        )
        for shape in second.marks
        if isinstance(shape, Line)
    )
    moved = replace(second, marks=marks)
    pages = read_pages(render_pdf(sheet, replace(tiling, tiles=(first, moved))))
    assert largest_miss_mm(plan, assemble(pages)) == pytest.approx(1.0, abs=0.01)


def test_lines_end_at_the_window_for_the_eye(sheets):
    """Ink stays inside the margins: rendered, nothing is darker than paper beyond them."""
    sheet = sheets["bass"]
    tiling = plan_tiles(sheet, Paper("A4", margin_mm=20.0))
    for page in pdfium.PdfDocument(render_pdf(sheet, tiling)):
        seen = page.render(scale=100 / 72, grayscale=True).to_numpy()
        border = round(19 / 25.4 * 100)
        inside = seen[border:-border, border:-border]
        assert inside.min() < 100
        assert seen.sum(dtype=int) - inside.sum(dtype=int) == 255 * (seen.size - inside.size)
