"""Does the board's sheet hold what the plan says, each thing once and on its layer?"""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest

from layout.drawing.board import board_notes, draw_board
from layout.drawing.board_marks import FIGURE_MM
from layout.drawing.shapes import Lettering, Line, Outline
from layout.drawing.sheet import Sheet
from layout.job.read import read_job_text
from layout.plan.make import make_plan
from layout.plan.model import Plan

LEAST = {
    "title": "Six-string",
    "scale": "628.65",
    "strings": "[E4, B3, G3, D3, A2, E2]",
    "spread": "{nut: 36, saddle: 54}",
    "frets": "20",
}
GRID_MM = 0.51e-6
"""Half the step to which a sheet's vertices are rounded."""


def plan_of(**keys: str) -> Plan:
    text = "".join(f"{key}: {value}\n" for key, value in (LEAST | keys).items())
    return make_plan(read_job_text(text.encode(), "job.yaml"))


def on(sheet: Sheet, layer: str) -> list:
    return [shape for shape in sheet.shapes if shape.layer == layer]


def lettering(sheet: Sheet) -> dict[str, Lettering]:
    return {shape.text: shape for shape in sheet.shapes if isinstance(shape, Lettering)}


def test_a_saw_cuts_centre_lines(tmp_path) -> None:
    plan = plan_of()
    sheet = draw_board(plan)
    slots = on(sheet, "CUT_SLOT")
    assert len(slots) == 20
    assert on(sheet, "CUT_POCKET") == []
    for slot, piece in zip(slots, plan.pieces, strict=True):
        assert isinstance(slot, Line)
        np.testing.assert_allclose(slot.start, piece.cut_bass_mm, rtol=0, atol=GRID_MM)
        np.testing.assert_allclose(slot.end, piece.cut_treble_mm, rtol=0, atol=GRID_MM)


@pytest.mark.parametrize(
    ("tooling", "slots", "lines", "pockets"),
    [
        ("{machine: router, cutter: 0.58}", "{width: 0.58}", 20, 0),
        ("{machine: router, cutter: 0.4}", "{width: 0.58}", 20, 20),
        ("{machine: router, cutter: 0.8}", "{width: 0.58}", 20, 0),
        ("{machine: laser, kerf: 0.1, lines: on}", "{width: 0.5}", 0, 20),
        ("{machine: saw, kerf: 0.6}", "{width: 0.6}", 20, 0),
    ],
)
def test_what_each_machine_follows(tooling, slots, lines, pockets) -> None:
    sheet = draw_board(plan_of(tooling=tooling, slots=slots))
    assert len(on(sheet, "CUT_SLOT")) == lines
    assert len(on(sheet, "CUT_POCKET")) == pockets
    assert all(shape.closed for shape in on(sheet, "CUT_POCKET"))


@pytest.mark.parametrize(("lines", "width"), [("on", 0.5), ("offset", 0.4)])
def test_a_laser_s_outline_is_as_wide_as_its_lines_ask(lines: str, width: float) -> None:
    sheet = draw_board(
        plan_of(tooling=f"{{machine: laser, kerf: 0.1, lines: {lines}}}", slots="{width: 0.5}")
    )
    for pocket in on(sheet, "CUT_POCKET"):
        xs = [x for x, _ in pocket.vertices]
        assert max(xs) - min(xs) == pytest.approx(width, abs=2e-6)


def test_a_zero_fret_is_cut_like_the_others() -> None:
    sheet = draw_board(plan_of(nut="{zero: fret}"))
    slots = on(sheet, "CUT_SLOT")
    assert len(slots) == 21
    assert (slots[0].start[0], slots[0].end[0]) == (0.0, 0.0)


def test_outline_and_strings_are_the_plan_s() -> None:
    plan = plan_of(scale="{treble: 600, bass: 640, square_at: 5}")
    sheet = draw_board(plan)
    (outline,) = on(sheet, "CUT_OUTLINE")
    assert outline.closed
    np.testing.assert_allclose(outline.vertices, plan.board.wood_mm, rtol=0, atol=GRID_MM)
    strings = on(sheet, "REF_STRING")
    np.testing.assert_allclose(
        [(string.start, string.end) for string in strings],
        np.stack([plan.ends.nut_mm, plan.ends.saddle_mm], axis=1),
        rtol=0,
        atol=GRID_MM,
    )


def test_binding_adds_the_finished_edges() -> None:
    plan = plan_of(board="{binding: 1.5}")
    lines = [shape for shape in on(draw_board(plan), "REF_LINE") if isinstance(shape, Line)]
    along = [shape for shape in lines if shape.end[0] > 400]
    edges = [shape for shape in along if shape.start[0] < 1]
    np.testing.assert_allclose(
        [(edge.start, edge.end) for edge in edges],
        [plan.board.treble.points_mm, plan.board.bass.points_mm],
        rtol=0,
        atol=GRID_MM,
    )


def test_the_saddle_strip_is_as_wide_as_the_saddle() -> None:
    plan = plan_of(
        strings="[{note: E4, plain: steel, gauge: 0.3}, {note: B3, plain: steel, gauge: 0.4}]",
        heights="{nut: 0.5, saddle: 3}",
        compensation="{saddle: each, saddle_thickness: 2.5}",
    )
    (strip,) = [shape for shape in on(draw_board(plan), "REF_LINE") if isinstance(shape, Outline)]
    (x0, y0), (x1, y1), _, (x3, y3) = strip.vertices
    along = np.array([x3 - x0, y3 - y0]) / math.hypot(x3 - x0, y3 - y0)
    width = abs((x1 - x0) * along[1] - (y1 - y0) * along[0])
    assert width == pytest.approx(2.5, abs=3e-6)
    for crown in plan.ends.saddle_mm:
        off = (crown[0] - x0) * along[1] - (crown[1] - y0) * along[0]
        assert -3e-6 <= off <= 2.5 + 3e-6


def test_no_strip_is_drawn_while_nothing_is_compensated() -> None:
    *lines, nut, bridge = on(draw_board(plan_of()), "REF_LINE")
    # the bridge line, and what the board's own end leaves of the nut line
    assert all(isinstance(shape, Line) for shape in lines)
    assert [shape.start[0] for shape in lines] == [0.0, 0.0, 628.65]
    assert (nut.text, bridge.text) == ("nut line", "bridge line")


def test_every_fret_and_string_is_named_in_the_waste() -> None:
    plan = plan_of()
    sheet = draw_board(plan)
    said = lettering(sheet)
    for label in [*plan.instrument.frets.labels, "E4", "B3", "G3", "D3", "A2", "E2"]:
        assert label in said
    wood = plan.board.wood_mm
    for text, shape in said.items():
        if shape.layer != "ENGRAVE_LABEL":
            continue
        for stroke in shape.strokes:
            for x, y in stroke.vertices:
                on_board = wood[:, 0].min() < x < wood[:, 0].max() and (
                    plan.board.bass.y_at(x) < y < plan.board.treble.y_at(x)
                )
                assert not on_board, text


def test_a_string_by_frequency_is_named_by_it() -> None:
    assert "440.00 Hz" in lettering(draw_board(plan_of(strings="[{hz: 440}, {hz: 330}]")))


def test_title_notes_and_check_bar_are_in_the_drawing() -> None:
    plan = plan_of(slots="{width: 0.6}")
    sheet = draw_board(plan)
    said = lettering(sheet)
    for note in [*board_notes(plan), "Six-string", "100 mm", "origin 0,0"]:
        assert note in said
    assert "Slots: 0.600 mm wide when cut." in sheet.notes
    assert sheet.name == "board"
    assert sheet.title == "Six-string: fingerboard"
    bars = [shape for shape in on(sheet, "REF_BAR") if isinstance(shape, Line)]
    assert max(math.dist(bar.start, bar.end) for bar in bars) == pytest.approx(100, abs=1e-9)


@pytest.mark.parametrize(
    ("keys", "note"),
    [
        ({}, "Lines: nominal, no cutter offset."),
        (
            {"tooling": "{machine: laser, kerf: 0.1, lines: offset}"},
            "Lines: offset by half the kerf, 0.1 mm.",
        ),
        ({"hand": "left"}, "Left-handed: mirrored across the centre line."),
    ],
)
def test_notes_say_how_the_lines_are_meant(keys, note: str) -> None:
    assert note in board_notes(plan_of(**keys))


def test_a_left_handed_board_is_the_right_handed_one_turned_over() -> None:
    left, right = (draw_board(plan_of(hand=hand)) for hand in ("left", "right"))
    for layer in ("CUT_SLOT", "CUT_OUTLINE", "REF_STRING"):
        points = [
            sorted(
                (x, sign * y + 0.0)
                for shape in on(sheet, layer)
                for x, y in (
                    shape.vertices if isinstance(shape, Outline) else (shape.start, shape.end)
                )
            )
            for sheet, sign in ((left, 1), (right, -1))
        ]
        assert points[0] == points[1]
    assert lettering(left)["E4"].anchor[1] == -lettering(right)["E4"].anchor[1]
    assert lettering(left)["12"].angle == lettering(right)["12"].angle == 0
    assert lettering(left)["12"].anchor[1] > 0 > lettering(right)["12"].anchor[1]


@pytest.mark.parametrize("scale", ["250", "330", "628.65"])
@pytest.mark.parametrize("frets", ["24", "{count: 36, temperament: equal-24}"])
def test_labels_of_close_frets_do_not_touch(scale: str, frets: str) -> None:
    plan = plan_of(scale=scale, frets=frets, spread="{nut: 30, saddle: 40}")
    said = lettering(draw_board(plan))
    boxes = []
    for label in plan.instrument.frets.labels:
        points = [point for stroke in said[label].strokes for point in stroke.vertices]
        xs, ys = zip(*points, strict=True)
        boxes.append((min(xs), max(xs), min(ys), max(ys)))
    for (_, right, low, high), (left, _, next_low, next_high) in itertools.pairwise(boxes):
        assert left > right or next_low > high or next_high < low
    heights = {round(high - low, 6) for _, _, low, high in boxes}
    assert max(heights) <= FIGURE_MM
    assert max(heights) == pytest.approx(FIGURE_MM, abs=1e-6) or scale != "628.65"


@pytest.mark.parametrize(
    ("kerf", "radius", "told"), [("0.2", 1.4, False), ("{x: 0.2, y: 0.1}", 1.5, True)]
)
def test_holes_allow_for_a_kerf_that_is_the_same_all_round(kerf, radius, told) -> None:
    tooling = f"{{machine: laser, kerf: {kerf}, lines: offset}}"
    sheet = draw_board(plan_of(tooling=tooling, pins="{size: 3}"))
    assert [hole.radius_mm for hole in on(sheet, "DRILL_PIN")] == pytest.approx([radius, radius])
    assert any(note.startswith("Holes: nominal") for note in sheet.notes) == told
