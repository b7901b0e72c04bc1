"""Pages of the template: windows, joints, crosses, bars, and what every page says."""

import math
from dataclasses import replace
from pathlib import Path

import pytest

from layout.drawing.shapes import Lettering, Line, extents_of
from layout.drawing.sheet import make_sheet
from layout.drawing.template import draw_template
from layout.drawing.tiles import plan_tiles, words_of
from layout.errors import JobError
from layout.instrument import Paper
from layout.job.read import read_job
from layout.plan.make import make_plan

EXAMPLES = Path(__file__).parents[3] / "examples"
SIZES = ["A4", "A3", "Letter", "Tabloid", "roll"]
NAMES = ["parlour", "multiscale-seven", "bass"]


@pytest.fixture(scope="module")
def sheets():
    return {name: draw_template(make_plan(read_job(EXAMPLES / f"{name}.yaml"))) for name in NAMES}


def bars_of(tiling, tile):
    """Length on the page of every bar, by the words on it."""
    lines = [shape for shape in tile.marks if isinstance(shape, Line)]
    lengths = {}
    for line in lines:
        start, end = (tiling.to_page(tile, point) for point in (line.start, line.end))
        if math.dist(start, end) > 50:
            way = "across" if abs(start[0] - end[0]) < 1e-6 else "along"
            lengths.setdefault(way, []).append(math.dist(start, end))
    return {way: sorted(found) for way, found in lengths.items()}


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("name", NAMES)
def test_no_joint_runs_through_a_fret_line_or_a_dot(sheets, name, size):
    tiling = plan_tiles(sheets[name], Paper(size))
    assert tiling.crossed == 0
    for shape in (*sheets[name].on_layer("SCRIBE_STOP"), *sheets[name].on_layer("DRILL_MARK")):
        reach = extents_of([shape])
        assert not any(reach.left <= x <= reach.right for x in tiling.joints_x_mm)
        assert not any(reach.low <= y <= reach.high for y in tiling.joints_y_mm)


@pytest.mark.parametrize(
    ("name", "size", "pages"),
    [
        ("parlour", "A4", 2), ("parlour", "Letter", 2), ("parlour", "A3", 2),
        ("multiscale-seven", "A4", 3), ("multiscale-seven", "Tabloid", 2),
        ("bass", "A4", 3), ("bass", "A3", 2), ("bass", "roll", 1), ("parlour", "roll", 1),
    ],
)  # fmt: skip
def test_the_fewest_pages(sheets, name, size, pages):
    tiling = plan_tiles(sheets[name], Paper(size))
    assert len(tiling.tiles) == tiling.rows * tiling.columns == pages


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("bars", [(100.0, 100.0), (99.2, 99.6), (101.3, 98.0)])
def test_the_drawing_is_covered_and_stays_inside_the_margins(sheets, size, bars):
    sheet = sheets["multiscale-seven"]
    paper = Paper(size, 12.0, 15.0, *bars)
    tiling = plan_tiles(sheet, paper)
    around = sheet.extents
    assert tiling.tiles[0].window.left <= around.left
    assert tiling.tiles[-1].window.right >= around.right
    assert tiling.tiles[0].window.high >= around.high
    assert tiling.tiles[-1].window.low <= around.low
    for tile in tiling.tiles:
        shown = [tile.window[:2], tile.window[2:]]
        for shape in tile.marks:
            reach = extents_of([shape])
            shown += [reach[:2], reach[2:]]
        for x, y in (tiling.to_page(tile, point) for point in shown):
            assert 12.0 - 1e-6 <= x <= tiling.page_width_mm - 12.0 + 1e-6
            assert 12.0 - 1e-6 <= y <= tiling.page_height_mm - 12.0 + 1e-6


@pytest.mark.parametrize("size", SIZES)
def test_bars_along_and_across_and_in_inches_on_every_page(sheets, size):
    tiling = plan_tiles(sheets["bass"], Paper(size))
    for tile in tiling.tiles:
        assert bars_of(tiling, tile) == {
            "along": pytest.approx([100.0, 101.6], abs=1e-6),
            "across": pytest.approx([100.0], abs=1e-6),
        }


def test_a_print_whose_bars_were_short_is_drawn_larger(sheets):
    tiling = plan_tiles(sheets["parlour"], Paper("A4", bar_along_mm=99.2, bar_across_mm=99.6))
    for tile in tiling.tiles:
        bars = bars_of(tiling, tile)
        assert bars["along"][0] == pytest.approx(100 * 100 / 99.2, abs=2e-6)
        assert bars["across"][0] == pytest.approx(100 * 100 / 99.6, abs=2e-6)
        # What such a printer makes of it.
        assert bars["along"][0] * 0.992 == pytest.approx(100.0, abs=2e-6)
        assert bars["across"][0] * 0.996 == pytest.approx(100.0, abs=2e-6)
        assert any("100/99.2 along, x 100/99.6 across" in line for line in words_of(tile))


def test_an_exact_printer_is_told_of_no_correction(sheets):
    for tile in plan_tiles(sheets["parlour"], Paper()).tiles:
        assert not any("Corrected" in line for line in words_of(tile))


def test_bars_and_words_lie_off_the_drawing(sheets):
    for size in SIZES:
        tiling = plan_tiles(sheets["bass"], Paper(size))
        for tile in tiling.tiles:
            window = tile.window
            for shape in tile.marks:
                if isinstance(shape, Lettering) and len(shape.text) == 1:
                    continue  # a cross's letter
                reach = extents_of([shape])
                if max(reach.width, reach.height) == pytest.approx(8.0, abs=1e-5):
                    continue  # a cross
                outside = (
                    reach.right <= window.left
                    or reach.high <= window.low
                    or reach.low >= window.high
                )
                assert outside, shape


def test_what_every_page_says(sheets):
    tiling = plan_tiles(sheets["parlour"], Paper(), unit="in")
    for tile in tiling.tiles:
        said = words_of(tile)
        assert "Parlour guitar, six strings: paper template" in said
        assert f"Sheet: row 1 of 1, column {tile.column} of 2. Unit: mm and inches, 1:1." in said
        assert any(line.startswith("Print at 100 %, measure the bars") for line in said)


@pytest.mark.parametrize("paper", [Paper("A4"), Paper("A4", 30.0, 40.0), Paper("A4", 20.0, 0.0)])
def test_both_pages_of_a_joint_carry_its_crosses(sheets, paper):
    tiling = plan_tiles(sheets["parlour"], paper)
    carried = {
        (tile.row, tile.column): {
            (shape.text, shape.anchor)
            for shape in tile.marks
            if isinstance(shape, Lettering) and len(shape.text) == 1
        }
        for tile in tiling.tiles
    }
    assert len(carried) > 1
    for (row, column), crosses in carried.items():
        for neighbour in ((row, column + 1), (row + 1, column)):
            if neighbour in carried:
                assert len(crosses & carried[neighbour]) >= 2


def test_a_wide_board_is_parted_beside_it_not_along_its_frets():
    # 300 mm of height needs two rows on A4; the lines end at y = 60.
    shapes = [Line("SCRIBE_STOP", (x, -60.0), (x, 60.0)) for x in range(0, 240, 20)]
    shapes.append(Line("REF_LINE", (0.0, -230.0), (230.0, -230.0)))
    tiling = plan_tiles(make_sheet("wide", "Wide", shapes=shapes), Paper("A4"))
    assert tiling.rows == 2
    assert tiling.crossed == 0
    assert all(y < -60 for y in tiling.joints_y_mm)


def test_landscape_or_portrait_by_the_number_of_pages():
    upright = make_sheet("u", "U", shapes=[Line("REF_LINE", (0, 0), (100, 200))])
    level = make_sheet("l", "L", shapes=[Line("REF_LINE", (0, 0), (250, 100))])
    one, other = (plan_tiles(sheet, Paper("Letter")) for sheet in (upright, level))
    assert (one.page_width_mm, one.page_height_mm) == (215.9, 279.4)
    assert (other.page_width_mm, other.page_height_mm) == (279.4, 215.9)


def test_paper_with_no_room_left_is_refused_with_a_remedy(sheets):
    with pytest.raises(JobError, match=r"paper: A4 with a margin of 50 mm and an overlap of 100"):
        plan_tiles(sheets["parlour"], replace(Paper(), margin_mm=50.0, overlap_mm=100.0))
