"""Sheets moved to x and y of 0 and more, and what they say about it."""

from __future__ import annotations

import pytest

from layout.drawing.moves import made_positive, made_positive_together
from layout.drawing.reference import draw_origin_mark
from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D
from layout.drawing.sheet import Sheet, make_sheet
from layout.files.svg import render_svg

ORIGIN = "Origin: the nut line on the centre line."
WOOD = ((-3.25, -30.0), (400.0, -30.0), (400.0, 30.0), (-3.25, 30.0))


def board() -> Sheet:
    return make_sheet(
        "board",
        "Board",
        shapes=[
            Outline("CUT_OUTLINE", WOOD, (0, 0.1, 0, 0)),
            Circle("DRILL_PIN", (-7.123456, 0), 1.5),
            Arc("SCRIBE_STOP", (50, 0), 20, 0, 1),
            *draw_origin_mark(),
            Lettering("ENGRAVE_LABEL", ORIGIN, (0, -40), 2.4, align="left", stand="top"),
        ],
        notes=["Unit: mm.", ORIGIN],
    )


def floors() -> Sheet:
    floor = Polyline3D("CUT_FLOOR", ((35.0, -31.5, -2.3), (35.7, 31.0, -2.25)))
    return make_sheet("floors", "Floors", shapes=[floor], notes=["Unit: mm.", ORIGIN])


def texts(sheet: Sheet) -> list[str]:
    return [shape.text for shape in sheet.shapes if isinstance(shape, Lettering)]


def test_everything_is_moved_by_whole_millimetres() -> None:
    sheet = board()
    moved, by = made_positive(sheet)
    assert by == (9.0, 49.0)  # 8.62 to the left; 40, two lines of 2.4 with tails, 2 between
    assert 0 <= moved.extents.left < 1
    assert 0 <= moved.extents.low < 1
    assert moved.shapes[0] == Outline(
        "CUT_OUTLINE",
        ((5.75, 19.0), (409.0, 19.0), (409.0, 79.0), (5.75, 79.0)),
        (0.0, 0.1, 0.0, 0.0),
    )
    assert moved.shapes[1] == Circle("DRILL_PIN", (1.876544, 49.0), 1.5)
    assert (moved.name, moved.title) == (sheet.name, sheet.title)


def test_the_sheet_says_by_how_much_and_where_the_origin_went() -> None:
    moved, _ = made_positive(board())
    told = "x 9, y 49: the nut line on the centre line."
    said = "Moved by x 9 mm, y 49 mm, so that no x or y is below 0."
    assert moved.notes == ("Unit: mm.", told, said)
    assert texts(moved) == ["origin 9,49", told, said]
    assert said in render_svg(moved).decode()
    last = moved.shapes[-1]
    assert isinstance(last, Lettering)
    assert last.layer == "ENGRAVE_LABEL"
    others = make_sheet("a", "a", shapes=moved.shapes[:-1]).extents
    highest = max(y for stroke in last.strokes for _, y in stroke.vertices)
    assert highest <= others.low - 1.5


def test_a_sheet_without_lettering_gets_none() -> None:
    moved, by = made_positive(floors())
    assert by == (0.0, 32.0)
    assert texts(moved) == []
    assert moved.shapes[0].vertices == ((35.0, 0.5, -2.3), (35.7, 63.0, -2.25))
    assert moved.notes[-1] == "Moved by x 0 mm, y 32 mm, so that no x or y is below 0."


def test_a_job_s_sheets_move_together() -> None:
    (first, second), by = made_positive_together([board(), floors()])
    assert by == made_positive(board())[1]
    assert first.notes[-1] == second.notes[-1]
    assert second.shapes[0].vertices[0] == (44.0, 17.5, -2.3)
    assert second.extents.low == 17.5


def test_what_lies_above_0_stays() -> None:
    sheet = make_sheet("a", "A", shapes=[Line("REF_LINE", (0, 0), (5, 7))], notes=[ORIGIN])
    assert made_positive(sheet) == (sheet, (0.0, 0.0))
    assert made_positive_together([]) == ((), (0.0, 0.0))


@pytest.mark.parametrize("text", ["The Origin: here", "origin 0,0 too"])
def test_other_texts_are_left_alone(text: str) -> None:
    sheet = make_sheet("a", "A", shapes=[Lettering("ENGRAVE_LABEL", text, (0, 0))], notes=[text])
    moved, _ = made_positive(sheet)
    assert texts(moved)[0] == text
    assert moved.notes[0] == text
