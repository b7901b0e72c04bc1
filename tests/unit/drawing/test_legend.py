"""Do title, notes, check bar and figures stand clear of the drawing and of each other?"""

from __future__ import annotations

import pytest

from layout.drawing.legend import draw_legend, rows_width_mm, say_lines, set_rows
from layout.drawing.shapes import Extents, Lettering, extents_of
from layout.drawing.sheet import make_sheet

AROUND = Extents(-20.0, -30.0, 100.0, 40.0)
NOTES = ("One.", "Another, longer line.", "A third.")


def drawn(shapes):
    return make_sheet("a", "A", shapes=shapes).shapes


def test_title_above_notes_and_bar_below() -> None:
    shapes = drawn(draw_legend("Title", NOTES, around=AROUND))
    title, *notes = [shape for shape in shapes if shape.layer == "ENGRAVE_LABEL"]
    assert extents_of([title]).low > AROUND.high
    assert [note.text for note in notes] == list(NOTES)
    above = AROUND.low
    for note in notes:
        box = extents_of([note])
        assert box.high < above
        assert box.left >= AROUND.left
        above = box.low
    bar = extents_of([shape for shape in shapes if shape.layer == "REF_BAR"])
    assert bar.high < above
    assert bar.width == pytest.approx(100.0, abs=1e-9)


def test_a_sheet_may_carry_its_own_bar_and_begin_elsewhere() -> None:
    shapes = drawn(draw_legend("Title", NOTES, around=AROUND, left=5.0, bar=False))
    assert {shape.layer for shape in shapes} == {"ENGRAVE_LABEL"}
    assert {shape.anchor[0] for shape in shapes} == {5.0}


def test_columns_are_flush_right_and_do_not_touch() -> None:
    rows = [["string", "x"], ["1 E4", "+630.193"], ["12 E2", "-1.5"]]
    shapes = drawn(set_rows(rows, corner=(10.0, 50.0)))
    assert all(isinstance(shape, Lettering) for shape in shapes)
    by_text = {shape.text: shape for shape in shapes}
    first = [by_text[text].anchor[0] for text in ("string", "1 E4", "12 E2")]
    second = [by_text[text].anchor[0] for text in ("x", "+630.193", "-1.5")]
    assert len(set(first)) == len(set(second)) == 1
    widest = extents_of([by_text["+630.193"]])
    assert widest.left > extents_of([by_text["string"]]).right + 2
    box = extents_of(shapes)
    assert box.left >= 10.0
    assert box.right <= 10.0 + rows_width_mm(rows) + 1e-6
    assert box.high == pytest.approx(50.0, abs=0.3)
    assert by_text["1 E4"].anchor[1] > by_text["12 E2"].anchor[1]


def test_lines_are_nominal_or_offset(plan_job) -> None:
    one = plan_job(tooling="{machine: laser, kerf: 0.1, lines: offset}")
    two = plan_job(tooling="{machine: laser, kerf: {x: 0.1, y: 0.14}, lines: offset}")
    assert say_lines(plan_job()) == "Lines: nominal, no cutter offset."
    assert say_lines(one) == "Lines: offset by half the kerf, 0.1 mm."
    assert say_lines(two) == "Lines: offset by half the kerf, 0.1 mm in x, 0.14 mm in y."
    assert say_lines(one, offset=False) == "Lines: nominal, no cutter offset."
