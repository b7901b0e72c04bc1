"""A sheet is rounded once, clean, and knows its true extents."""

from __future__ import annotations

import math

import numpy as np
import pytest

from layout.drawing.moves import mirrored, shifted
from layout.drawing.outlines import bulge_of_radius, bulge_through, round_corners
from layout.drawing.reference import draw_check_bar, draw_origin_mark
from layout.drawing.shapes import (
    LAYERS,
    Arc,
    Circle,
    Lettering,
    Line,
    Outline,
    Piece,
    Polyline3D,
    extents_of,
    pieces_of,
    point_along,
    turn_of,
)
from layout.drawing.sheet import make_sheet


def only(shape):
    return make_sheet("a", "A", shapes=[shape]).shapes


def test_vertices_are_rounded_once_without_minus_zero() -> None:
    (shape,) = only(Line("CUT_SLOT", (-4e-7, 1.23456789), (np.float64(7.0000004), -1.0)))
    assert (shape.start, shape.end) == ((0.0, 1.234568), (7.0, -1.0))
    assert math.copysign(1, shape.start[0]) == 1
    assert type(shape.end[0]) is float


@pytest.mark.parametrize(
    "shape",
    [
        Line("CUT_SLOT", (1, 1), (1.0000001, 1)),
        Circle("DRILL_PIN", (0, 0), 1e-9),
        Arc("CUT_SLOT", (0, 0), 5, 1, 1),
        Outline("CUT_SLOT", ((1, 1), (1, 1), (1, 1))),
        Outline("CUT_SLOT", ((1, 1),), closed=False),
        Polyline3D("CUT_FLOOR", ((1, 1, 1), (1, 1, 1))),
        Lettering("ENGRAVE_LABEL", "  ", (0, 0)),
    ],
)
def test_shapes_without_length_are_dropped(shape) -> None:
    kept = make_sheet("a", "A", shapes=[shape, Circle("DRILL_PIN", (9, 9), 1)]).shapes
    assert kept == (Circle("DRILL_PIN", (9.0, 9.0), 1.0),)
    with pytest.raises(ValueError, match="there is nothing to draw"):
        only(shape)


def test_an_outline_never_repeats_a_vertex() -> None:
    (shape,) = only(
        Outline("CUT_OUTLINE", ((0, 0), (9, 0), (9, 0), (9, 4), (0, 0)), (0, 0.5, 0.25, 0, 0))
    )
    assert shape == Outline("CUT_OUTLINE", ((0.0, 0.0), (9.0, 0.0), (9.0, 4.0)), (0.0, 0.25, 0.0))


def test_shapes_become_the_simplest_of_their_kind() -> None:
    assert only(Outline("CUT_SLOT", ((0, 0), (9, 1)))) == (
        Line("CUT_SLOT", (0.0, 0.0), (9.0, 1.0)),
    )
    assert only(Arc("CUT_SLOT", (0, 0), 5, 0, math.tau)) == (Circle("CUT_SLOT", (0.0, 0.0), 5.0),)
    straight = only(Outline("CUT_OUTLINE", ((0, 0), (9, 0), (9, 4)), (0, 1e-14, 0)))
    assert straight == (Outline("CUT_OUTLINE", ((0.0, 0.0), (9.0, 0.0), (9.0, 4.0))),)


@pytest.mark.parametrize(
    "shape",
    [
        Line("CUT_SLOT", (0, math.nan), (1, 1)),
        Circle("DRILL_PIN", (0, 0), -1),
        Circle("DRILL_PIN", (0, 0), math.inf),
        Arc("CUT_SLOT", (0, 0), 1, 0, math.nan),
        Outline("CUT_SLOT", ((0, 0), (1, 1)), (math.inf, 0)),
        Outline("CUT_SLOT", ((0, 0), (1, 1), (2, 0)), (0.5,)),
        Polyline3D("CUT_FLOOR", ((0, 0, 0), (1, 1, -math.inf))),
        Lettering("ENGRAVE_LABEL", "1", (0, 0), 0),
    ],
)
def test_numbers_that_cannot_be_drawn_are_refused(shape) -> None:
    with pytest.raises(ValueError, match=r"finite|bulge|height"):
        only(shape)


def test_extents_reach_as_far_as_arcs_do() -> None:
    assert extents_of([Circle("DRILL_PIN", (3, 4), 5)]) == pytest.approx((-2, -1, 8, 9))
    quarter = Arc("CUT_SLOT", (0, 0), 10, math.radians(30), math.radians(120))
    assert extents_of([quarter]) == pytest.approx((-5, 5, 10 * math.cos(math.pi / 6), 10))
    clockwise = Outline("CUT_OUTLINE", ((0, 0), (10, 0)), (-1, 0), closed=False)
    assert extents_of([clockwise]) == pytest.approx((0, 0, 10, 5))


@pytest.mark.parametrize("bulge", [-3.0, -1.0, -0.2, 1e-3, 0.2, 1.0, 3.0])
def test_a_turn_passes_through_both_ends(bulge: float) -> None:
    piece = Piece((1.0, 2.0), (4.0, -3.0), bulge)
    turn = turn_of(piece)
    assert turn.radius_mm == pytest.approx(math.dist(turn.centre, piece.start), rel=1e-9)
    assert turn.radius_mm == pytest.approx(math.dist(turn.centre, piece.end), rel=1e-9)
    assert point_along(piece, 1 - 1e-15) == pytest.approx(piece.end, abs=1e-6)
    # The sagitta is the bulge times half the chord, to the right of the chord for a left turn.
    chord = math.dist(piece.start, piece.end)
    top = point_along(piece, 0.5)
    along = (piece.end[0] - piece.start[0], piece.end[1] - piece.start[1])
    gap = (top[0] - piece.start[0], top[1] - piece.start[1])
    off = (along[1] * gap[0] - along[0] * gap[1]) / chord
    assert off == pytest.approx(bulge * chord / 2, rel=1e-6)
    assert bulge_through(piece.start, top, piece.end) == pytest.approx(bulge, rel=1e-6)


def test_bulge_of_radius() -> None:
    turn = turn_of(Piece((0, 0), (10, 0), bulge_of_radius((0, 0), (10, 0), radius_mm=305)))
    assert turn.radius_mm == pytest.approx(305)
    assert turn.sweep > 0
    with pytest.raises(ValueError, match="no arc of radius"):
        bulge_of_radius((0, 0), (10, 0), radius_mm=4.9)


def test_round_corners() -> None:
    slot = round_corners("CUT_POCKET", ((0, 0), (0, 2), (9, 2), (9, 0)), radius_mm=1)
    (clean,) = only(slot)
    assert len(clean.vertices) == 6  # the straight ends have no length left
    assert extents_of([clean]) == pytest.approx((0, 0, 9, 2))
    assert all(
        turn_of(piece).radius_mm == pytest.approx(1) for piece in pieces_of(clean) if piece.bulge
    )
    assert [bulge < 0 for bulge in clean.bulges if bulge] == [True] * 4  # clockwise round
    with pytest.raises(ValueError, match="do not fit"):
        round_corners("CUT_POCKET", ((0, 0), (9, 0), (9, 2), (0, 2)), radius_mm=1.01)


def rich():
    return make_sheet(
        "a",
        "A",
        notes=("one", "two"),
        shapes=[
            Outline("CUT_OUTLINE", ((0, -20), (50, -22), (52, 30)), (0.1, 0, -0.2)),
            Circle("DRILL_PIN", (-5, 3), 2),
            Arc("SCRIBE_STOP", (20, 5), 7, 0.5, 3),
            Polyline3D("CUT_FLOOR", ((0, 1, -2), (5, 6, -3), (7, 7, -3))),
            Line("REF_LINE", (0, -30), (1, 40)),
            Lettering("ENGRAVE_LABEL", "Ab1", (9, 40), 4, stand="base", align="left"),
        ],
    )


def test_making_a_sheet_again_changes_nothing() -> None:
    sheet = rich()
    assert make_sheet("a", "A", shapes=sheet.shapes, notes=sheet.notes) == sheet


def test_mirrored_twice_is_the_same_drawing() -> None:
    sheet = rich()
    over = mirrored(sheet)
    assert over.extents == pytest.approx(
        (sheet.extents.left, -sheet.extents.high, sheet.extents.right, -sheet.extents.low)
    )
    back = mirrored(over)
    assert back.notes == sheet.notes
    for mine, theirs in zip(sheet.shapes, back.shapes, strict=True):
        for piece, other in zip(pieces_of(mine), pieces_of(theirs), strict=True):
            assert other.start == pytest.approx(piece.start, abs=1e-9)
            assert other.bulge == pytest.approx(piece.bulge, abs=1e-9)


def test_mirrored_arcs_run_the_same_way_over() -> None:
    arc = Arc("SCRIBE_STOP", (20, 5), 7, 0.5, 3)
    (over,) = mirrored(make_sheet("a", "A", shapes=[arc])).shapes
    (mine,), (theirs,) = pieces_of(arc), pieces_of(over)
    assert theirs.start == pytest.approx((mine.end[0], -mine.end[1]))
    assert theirs.end == pytest.approx((mine.start[0], -mine.start[1]))
    top = point_along(mine, 0.5)
    assert point_along(theirs, 0.5) == pytest.approx((top[0], -top[1]))


@pytest.mark.parametrize("angle_deg", [0, 37, 90, -90, -37])
@pytest.mark.parametrize("stand", ["base", "middle", "top"])
@pytest.mark.parametrize("align", ["left", "centre", "right"])
def test_mirrored_lettering_stays_upright_in_its_mirrored_box(angle_deg, stand, align) -> None:
    def box(text: str, over: bool):
        word = Lettering("ENGRAVE_LABEL", text, (30, 40), 4, math.radians(angle_deg), align, stand)
        sheet = make_sheet("a", "A", shapes=[word])
        return mirrored(sheet) if over else sheet

    # H fills its box alike from all sides, so its mirror image is itself.
    mine, theirs = box("H", over=False).extents, box("H", over=True).extents
    assert theirs == pytest.approx((mine.left, -mine.high, mine.right, -mine.low), abs=3e-6)
    (word,) = box("F", over=True).shapes
    assert -90 < math.degrees(word.angle) <= 90 + 1e-9
    # The long arm of an F is above its short arm: along the direction up from the writing.
    up = (-math.sin(word.angle), math.cos(word.angle))
    along = (math.cos(word.angle), math.sin(word.angle))
    arms = [
        (math.dist(piece.start, piece.end), piece.start[0] * up[0] + piece.start[1] * up[1])
        for piece in pieces_of(word)
        if abs((piece.end[0] - piece.start[0]) * up[0] + (piece.end[1] - piece.start[1]) * up[1])
        < 1e-3
    ]
    assert max(arms)[1] > min(arms)[1]
    # And it is not seen from behind: its stem stands at the start of the writing.
    places = [
        point[0] * along[0] + point[1] * along[1]
        for piece in pieces_of(word)
        for point in (piece.start, piece.end)
    ]
    assert sum(place < min(places) + 0.01 for place in places) > len(places) / 2


def test_shifted_moves_everything_alike() -> None:
    sheet = rich()
    moved = shifted(sheet, (100.25, -3))
    for mine, theirs in zip(sheet.shapes, moved.shapes, strict=True):
        for piece, other in zip(pieces_of(mine), pieces_of(theirs), strict=True):
            assert other.start == pytest.approx((piece.start[0] + 100.25, piece.start[1] - 3))
            assert other.bulge == pytest.approx(piece.bulge)


def test_the_check_bar_is_100_mm_in_any_direction() -> None:
    for angle in (0.0, math.pi / 2, 0.3):
        bar = draw_check_bar((5, 6), angle=angle)[0]
        assert math.dist(bar.start, bar.end) == pytest.approx(100)
    sheet = make_sheet("a", "A", shapes=[*draw_check_bar((0, -50)), *draw_origin_mark()])
    assert sheet.layers == ("REF_BAR",)
    assert {shape.text for shape in sheet.shapes if isinstance(shape, Lettering)} == {
        "100 mm",
        "origin 0,0",
    }


def test_the_origin_mark_survives_the_lines_that_cross_there() -> None:
    cross = [Line("REF_LINE", (0, -30), (0, 30)), Line("REF_CENTRE", (-9, 0), (600, 0))]
    sheet = make_sheet("a", "A", shapes=[*cross, *draw_origin_mark()])
    assert [shape for shape in sheet.on_layer("REF_BAR") if isinstance(shape, Line)] == [
        Line("REF_BAR", (-3.0, -3.0), (3.0, 3.0)),
        Line("REF_BAR", (-3.0, 3.0), (3.0, -3.0)),
    ]


def test_layers_are_listed_in_the_fixed_order() -> None:
    shapes = [Line(layer, (0, i), (5, i)) for i, layer in enumerate(reversed(LAYERS))]
    assert make_sheet("a", "A", shapes=shapes).layers == LAYERS
