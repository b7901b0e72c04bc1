"""The PDF's own promises: exact page size, no fitting, the same bytes, nothing but lines."""

import math
import re
import subprocess
import sys
from ctypes import byref, c_float
from io import BytesIO

import pytest

from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D
from layout.drawing.sheet import make_sheet
from layout.drawing.tiles import plan_tiles
from layout.files.pdf import render_pdf
from layout.instrument import Paper

pypdf = pytest.importorskip("pypdf")
pdfium = pytest.importorskip("pypdfium2")
raw = pytest.importorskip("pypdfium2.raw")


def reader(data):
    return pypdf.PdfReader(BytesIO(data))


@pytest.fixture(scope="module")
def sheet():
    return make_sheet(
        "trial",
        "Lauté – n° 3 (5/8)",
        shapes=[
            Line("SCRIBE_STOP", (100.1234567, -20), (101.5, 22)),
            Circle("DRILL_MARK", (60, 0), 3),
            Arc("REF_LINE", (150, 0), 305, -0.1, 0.1),
            Outline("CUT_OUTLINE", ((0, -20), (400, -25), (400, 25), (0, 20)), (0, 0.1, 0, 0)),
            Polyline3D("CUT_FLOOR", ((5, -9, -1), (5, 0, -2), (6, 9, -1))),
            Lettering("ENGRAVE_LABEL", "12", (200, -30)),
        ],
    )


@pytest.fixture(scope="module")
def made(sheet):
    return render_pdf(sheet, plan_tiles(sheet, Paper()))


@pytest.mark.parametrize(
    ("size", "sides_mm"),
    [
        ("A4", (297, 210)), ("A3", (420, 297)), ("Letter", (279.4, 215.9)),
        ("Tabloid", (431.8, 279.4)),
    ],
)  # fmt: skip
def test_page_sizes(sheet, size, sides_mm):
    for page in reader(render_pdf(sheet, plan_tiles(sheet, Paper(size)))).pages:
        box = page.mediabox
        found = sorted(float(side) * 25.4 / 72 for side in (box.width, box.height))
        assert found == pytest.approx(sorted(sides_mm), abs=1e-4)
        assert (float(box.left), float(box.bottom)) == (0, 0)
        assert page.get("/Rotate", 0) == 0
        assert page.get("/UserUnit", 1) == 1


def test_viewers_are_asked_not_to_fit(made):
    document = reader(made)
    assert document.trailer["/Root"]["/ViewerPreferences"]["/PrintScaling"] == "/None"
    assert document.pdf_header == "%PDF-1.6"


def test_metadata(made):
    said = reader(made).metadata
    assert said["/Title"] == "Lauté – n° 3 (5/8)"
    assert said["/Producer"] == said["/Creator"] == "stopwright"
    assert said["/Author"] == ""


def test_the_same_bytes_twice_in_another_process_and_time_zone(sheet, made):
    assert render_pdf(sheet, plan_tiles(sheet, Paper())) == made
    code = (
        "import hashlib\n"
        "from layout.drawing.shapes import Line\n"
        "from layout.drawing.sheet import make_sheet\n"
        "from layout.drawing.tiles import plan_tiles\n"
        "from layout.files.pdf import render_pdf\n"
        "from layout.instrument import Paper\n"
        "s = make_sheet('a', 'A', shapes=[Line('SCRIBE_STOP', (0, 0), (7, 9))])\n"
        "print(hashlib.sha256(render_pdf(s, plan_tiles(s, Paper()))).hexdigest())\n"
    )
    said = {
        subprocess.run(
            [sys.executable, "-c", code],
            env={"PYTHONHASHSEED": seed, "TZ": zone, "PYTHONPATH": "."},
            capture_output=True,
            text=True,
            check=True,
        ).stdout
        for seed, zone in (("1", "UTC"), ("2", "Asia/Tokyo"))
    }
    assert len(said) == 1


def test_nothing_but_stroked_paths(made):
    for page in pdfium.PdfDocument(made):
        kinds = {thing.type for thing in page.get_objects(max_depth=1)}
        assert kinds == {raw.FPDF_PAGEOBJ_PATH}
    for page in reader(made).pages:
        operators = set(
            re.findall(rb"(?<![\w.])(Tj|TJ|Do|sh|f|F|B|b)\s", page.get_contents().get_data())
        )
        assert operators == set()


def test_round_things_are_round(sheet, made):
    """Ends and middles of every curve lie on the circle it stands for."""
    tiling = plan_tiles(sheet, Paper())
    # The outline's end: chord 50, bulge 0.1, so radius 50 x 1.01/0.4 (Euclid, Elements III.35).
    circles = {(60, 0): 3.0, (150, 0): 305.0, (400 - 123.75, 0): 126.25}
    seen = set()
    for page, tile in zip(pdfium.PdfDocument(made), tiling.tiles, strict=True):
        for thing in page.get_objects():
            points = _along_curves(thing)
            if not points:
                continue
            off = {}
            for centre, radius in circles.items():
                place = tiling.to_page(tile, centre)
                off[centre] = max(abs(math.dist(place, point) - radius) for point in points)
            nearest = min(off, key=off.get)
            assert off[nearest] < 5e-3
            seen.add(nearest)
    assert seen == set(circles)


def _segments(thing):
    for number in range(raw.FPDFPath_CountSegments(thing)):
        segment = raw.FPDFPath_GetPathSegment(thing, number)
        x, y = c_float(), c_float()
        assert raw.FPDFPathSegment_GetPoint(segment, byref(x), byref(y))
        yield raw.FPDFPathSegment_GetType(segment), (x.value * 25.4 / 72, y.value * 25.4 / 72)


def _along_curves(thing):
    """Ends and middles of all curves of a path."""
    points, place, waiting = [], None, []
    for kind, point in _segments(thing):
        if kind == raw.FPDF_SEGMENT_BEZIERTO:
            waiting.append(point)
            if len(waiting) == 3:
                one, two, end = waiting
                middle = tuple(
                    (a + 3 * b + 3 * c + d) / 8
                    for a, b, c, d in zip(place, one, two, end, strict=True)
                )
                points += [place, middle, end]
                place, waiting = end, []
        else:
            place = point
    return points


def test_lettering_cut_by_a_window_and_whole_on_another_page_is_left_out():
    shapes = [Line("SCRIBE_STOP", (x, -30.0), (x, 30.0)) for x in range(0, 480, 20)]
    bare = make_sheet("bare", "Bare", shapes=shapes)
    tiling = plan_tiles(bare, Paper())
    first, second = tiling.tiles
    edge = (second.window.left, 40.0)
    said = make_sheet("said", "Said", shapes=[*shapes, Lettering("ENGRAVE_LABEL", "mm", edge)])
    counts = [
        [len(list(page.get_objects())) for page in pdfium.PdfDocument(render_pdf(sheet, tiling))]
        for sheet in (bare, said)
    ]
    assert first.window.right > edge[0] + 2
    assert counts[1][0] > counts[0][0]
    assert counts[1][1] == counts[0][1]
