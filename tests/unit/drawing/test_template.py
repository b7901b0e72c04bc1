"""The paper template: every line where the plan has it, every distance from zero."""

import math
from pathlib import Path

import numpy as np
import pytest

from layout.drawing.shapes import Lettering, Line, extents_of
from layout.drawing.template import along_edge_x, draw_template
from layout.geometry.board import Edge
from layout.job.read import read_job, read_job_text
from layout.plan.make import make_plan

EXAMPLES = Path(__file__).parents[3] / "examples"
FIVE = """\
title: Six-string
scale: 628.65
strings: [E4, B3, G3, D3, A2, E2]
spread: {nut: 36, saddle: 54}
"""


def plan_of(text):
    return make_plan(read_job_text(text.encode(), "job.yaml"))


def example(name):
    return make_plan(read_job(EXAMPLES / f"{name}.yaml"))


def texts(sheet):
    return [shape.text for shape in sheet.shapes if isinstance(shape, Lettering)]


def frets_on_board(sheet):
    """Long lines; those of the strip are as long as the board is thick."""
    return [line for line in sheet.on_layer("SCRIBE_STOP") if math.dist(line.start, line.end) > 20]


def test_name_and_title():
    sheet = draw_template(plan_of(FIVE + "frets: 20\n"))
    assert sheet.name == "template"
    assert sheet.title == "Six-string: paper template"


@pytest.mark.parametrize("name", ["parlour", "multiscale-seven", "bass"])
def test_every_fret_line_lies_on_the_planned_one_and_runs_past_both_edges(name):
    plan = example(name)
    sheet = draw_template(plan)
    side = -1 if plan.instrument.hand == "left" else 1
    lines = frets_on_board(sheet)
    pieces = plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)
    assert len(lines) == len(pieces)
    for line, piece in zip(lines, pieces, strict=True):
        (x0, y0), (x1, y1) = line.start, line.end
        for x, y in (piece.treble_mm, piece.bass_mm):
            share = (side * y - y0) / (y1 - y0)
            assert x0 + share * (x1 - x0) == pytest.approx(x, abs=1e-5)
            assert 0 < share < 1


def test_distances_are_absolute_with_the_digits_of_the_table():
    plan = example("parlour")
    said = texts(draw_template(plan))
    for fret in range(1, 21):
        assert f"{628.65 * (1 - 2 ** (-fret / 12)):.3f}" in said
    assert "314.325" in said  # half the scale, by hand


def test_inches_stand_beside_millimetres_only_where_the_job_is_in_inches():
    text = FIVE.replace("628.65", "24.75").replace("36", "1.4").replace("54", "2.1")
    said = texts(draw_template(plan_of(text + "frets: 20\nunit: in\n")))
    assert "12.3750 in" in said
    assert "314.325" in said
    assert not any(
        word.endswith(" in") for word in texts(draw_template(plan_of(FIVE + "frets: 20\n")))
    )


def test_lettering_keeps_apart_where_frets_are_close():
    plan = plan_of(FIVE + "frets: {count: 60, temperament: equal-24}\n")
    shapes = [
        shape
        for shape in draw_template(plan).on_layer("ENGRAVE_LABEL")
        if isinstance(shape, Lettering) and shape.text[0].isdigit()
    ]
    assert len(shapes) == 4 * 61
    boxes = sorted(extents_of([shape]) for shape in shapes)
    for place, box in enumerate(boxes):
        for other in boxes[place + 1 : place + 12]:
            assert other.left > box.right or other.low > box.high or other.high < box.low, (
                box,
                other,
            )


def test_the_strip_carries_distances_along_the_edge():
    plan = example("parlour")
    strip = [
        line
        for line in draw_template(plan).on_layer("SCRIBE_STOP")
        if math.dist(line.start, line.end) < 20
    ]
    assert len(strip) == 20
    zero = plan.board.bass.origin_mm
    for line, piece in zip(strip, plan.pieces, strict=True):
        assert line.start[0] == line.end[0]
        assert abs(line.start[1] - line.end[1]) == pytest.approx(6.4)
        along = math.dist(zero, piece.bass_mm)
        assert line.start[0] - zero[0] == pytest.approx(along, abs=2e-6)


def test_side_dots_lie_midway_between_frets_on_the_strip():
    plan = example("parlour")
    sheet = draw_template(plan)
    lines = sorted(
        line.start[0]
        for line in sheet.on_layer("SCRIBE_STOP")
        if math.dist(line.start, line.end) < 20
    )
    dots = sheet.on_layer("DRILL_MARK")
    assert len(dots) == 5
    for dot, fret in zip(dots, (3, 5, 7, 9, 12), strict=True):
        middle = (lines[fret - 1] + lines[fret - 2]) / 2
        assert dot.centre[0] == pytest.approx(middle, abs=2e-6)
        assert dot.radius_mm == 1.0


def test_dots_of_an_unfretted_board_sit_on_the_stop():
    plan = plan_of(FIVE + "frets: {count: 12, kind: lines}\nmarks: {side: [1, 5]}\n")
    sheet = draw_template(plan)
    stops = {line.start[0] for line in sheet.on_layer("SCRIBE_STOP")}
    for dot in sheet.on_layer("DRILL_MARK"):
        assert min(abs(dot.centre[0] - x) for x in stops) < 2e-6


def test_partial_frets_end_where_they_are_cut_and_stay_off_the_strip():
    plan = plan_of(FIVE + "frets: {count: 14, only: {14: [1, 2]}}\n")
    lines = draw_template(plan).on_layer("SCRIBE_STOP")
    (last,) = [line for line in lines if abs(line.start[0] - plan.frets.at_centre_mm[-1]) < 0.01]
    low = min(last.start[1], last.end[1])
    assert low == pytest.approx(plan.pieces_of(14)[0].bass_mm[1], abs=1e-6)


def test_left_hand_is_the_same_drawing_turned_over():
    right = draw_template(plan_of(FIVE + "frets: 20\nmarks: {side: [3, 5]}\n"))
    left = draw_template(plan_of(FIVE + "frets: 20\nmarks: {side: [3, 5]}\nhand: left\n"))

    def places(sheet, side):
        return sorted(
            tuple(sorted((x, round(side * y, 6) + 0.0) for x, y in (line.start, line.end)))
            for line in (*sheet.on_layer("SCRIBE_STOP"), *sheet.on_layer("REF_STRING"))
        )

    assert places(right, 1) == places(left, -1)
    assert "Left-handed: mirrored across the centre line." in left.notes
    angles = {shape.angle for shape in left.shapes if isinstance(shape, Lettering)}
    assert angles == {0.0, math.pi / 2}  # upright, or read from the right


def test_fret_lines_reach_past_the_square_blank():
    sheet = draw_template(plan_of(FIVE + "frets: 20\nboard: {blank: {width: 70}}\n"))
    for line in frets_on_board(sheet):
        assert {line.start[1], line.end[1]} == {-40.0, 40.0}


def test_strings_end_at_the_tail():
    plan = example("multiscale-seven")
    for shape in draw_template(plan).on_layer("REF_STRING"):
        assert isinstance(shape, Line)
        x, y = max(shape.start, shape.end)
        assert x == pytest.approx(float(plan.board.tail_end.x_at(y)), abs=1e-5)


def test_a_board_sawn_at_zero_says_so_and_dots_count_from_zero():
    text = "nut: {zero: kerf}\ntooling: {machine: saw, kerf: 0.6}\nmarks: {side: [1]}\n"
    plan = plan_of(FIVE + "frets: 20\n" + text)
    sheet = draw_template(plan)
    assert "Figures: distance from zero (nut-end saw line) along the centre line." in sheet.notes
    (dot,) = sheet.on_layer("DRILL_MARK")
    assert dot.centre[0] == pytest.approx(35.283 / 2, abs=0.01)


def test_a_bound_board_shows_its_finished_edges():
    sheet = draw_template(plan_of(FIVE + "frets: 20\nboard: {binding: 1.5}\n"))
    edges = [line for line in sheet.on_layer("REF_LINE") if abs(line.start[0] - line.end[0]) > 400]
    assert len(edges) == 2


def test_a_short_string_is_named_at_its_own_nut_and_its_frets_reach_its_edge():
    plan = plan_of(
        "title: Five\nscale: 668\nspread: {nut: 26, saddle: 45}\nfrets: 22\n"
        "strings: [D4, B3, G3, D3, {note: G4, starts_at: {fret: 5, behind: 10, step: 6}}]\n"
    )
    sheet = draw_template(plan)
    (name,) = [s for s in sheet.shapes if isinstance(s, Lettering) and s.text == "G4"]
    assert name.anchor[0] == pytest.approx(plan.ends.nut_mm[-1, 0] - 1.5, abs=1e-6)
    lows = [min(line.start[1], line.end[1]) for line in frets_on_board(sheet)]
    assert lows[3] - lows[4] > 5


def test_a_square_step_of_the_edge_adds_no_length():
    edge = Edge(np.array([[1.0, -20], [101, -20], [101, -30], [400, -30]]), np.array([0.0, -20]))
    assert along_edge_x(edge, 0.0) == 0.0
    assert along_edge_x(edge, 400.0) == pytest.approx(400.0)
    assert along_edge_x(edge, -5.0) == pytest.approx(-5.0)
