"""Every edge stays once, on the layer that does most to the wood."""

from __future__ import annotations

import math

import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from layout.drawing import once
from layout.drawing.once import draw_once
from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D, pieces_of
from layout.drawing.sheet import make_sheet

SQUARE = ((0.0, 0.0), (40.0, 0.0), (40.0, 30.0), (0.0, 30.0))


def line(layer: str, *ends: float) -> Line:
    return Line(layer, (float(ends[0]), float(ends[1])), (float(ends[2]), float(ends[3])))


def test_a_duplicate_and_a_reversed_duplicate_go() -> None:
    first = line("CUT_SLOT", 1, 2, 3, 40)
    assert draw_once([first, first, line("CUT_SLOT", 3, 40, 1, 2)]) == [first]


def test_the_lower_layer_loses_whatever_the_order() -> None:
    cut, centre = line("CUT_SLOT", 0, 0, 10, 0), line("REF_CENTRE", -5, 0, 20, 0)
    left = [line("REF_CENTRE", -5, 0, 0, 0), line("REF_CENTRE", 10, 0, 20, 0)]
    assert draw_once([centre, cut]) == [*left, cut]
    assert draw_once([cut, centre]) == [cut, *left]


@pytest.mark.parametrize(
    ("higher", "lower"),
    [
        ("CUT_SLOT", "DRILL_MARK"),
        ("DRILL_MARK", "SCRIBE_STOP"),
        ("SCRIBE_STOP", "ENGRAVE_LABEL"),
        ("ENGRAVE_LABEL", "REF_LINE"),
        ("REF_LINE", "REF_STRING"),
        ("REF_STRING", "REF_CENTRE"),
        ("REF_CENTRE", "REF_BAR"),
    ],
)
def test_rank(higher: str, lower: str) -> None:
    kept = draw_once([line(lower, 0, 0, 9, 3), line(higher, 0, 0, 9, 3)])
    assert [shape.layer for shape in kept] == [higher]


def test_touching_and_crossing_lines_stay() -> None:
    lines = [
        line("CUT_SLOT", 0, 0, 10, 0),
        line("CUT_SLOT", 10, 0, 20, 0),
        line("CUT_SLOT", 5, -5, 5, 5),
        line("CUT_SLOT", 0, 2e-5, 10, 2e-5),
        line("CUT_SLOT", 0, 0, 10, 3e-5),
    ]
    assert draw_once(lines) == lines


def test_lines_one_rounding_step_apart_are_one() -> None:
    slot = line("CUT_SLOT", 0, 0, 300, 7)
    assert draw_once([slot, Line("REF_LINE", (0.000001, 0.0), (299.999999, 7.000001))]) == [slot]


def test_a_line_along_a_closed_outline_gives_way_even_where_it_came_first() -> None:
    outline = Outline("CUT_OUTLINE", SQUARE)
    kept = draw_once([line("CUT_SLOT", -5, 30, 45, 30), outline])
    assert kept == [line("CUT_SLOT", -5, 30, 0, 30), line("CUT_SLOT", 40, 30, 45, 30), outline]


def test_closed_outlines_to_be_cut_are_never_opened() -> None:
    beside = Outline("CUT_POCKET", tuple((x + 40.0, y) for x, y in SQUARE))
    shapes = [Outline("CUT_OUTLINE", SQUARE), beside]
    assert draw_once(shapes) == shapes


def test_a_closed_reference_outline_loses_shared_edges_and_stays_chained() -> None:
    wood = Outline("CUT_OUTLINE", SQUARE)
    inner = Outline("REF_LINE", ((0.0, 30.0), (0.0, 2.0), (40.0, 2.0), (40.0, 30.0)))
    kept = draw_once([inner, wood])
    assert kept == [Outline("REF_LINE", ((0.0, 2.0), (40.0, 2.0)), closed=False), wood]
    # Only a part missing in the middle of one edge: one chain that runs round the rest.
    kept = draw_once([Outline("REF_LINE", SQUARE), line("CUT_SLOT", 10, 0, 15, 0)])
    assert kept[0] == Outline(
        "REF_LINE", ((15.0, 0.0), *SQUARE[1:], (0.0, 0.0), (10.0, 0.0)), closed=False
    )


@pytest.mark.parametrize("start", range(4))
@pytest.mark.parametrize("backward", [False, True])
def test_an_outline_started_elsewhere_or_run_backward_is_the_same(start, backward) -> None:
    bulges = (0.5, 0.0, -0.25, 0.0)
    first = Outline("CUT_OUTLINE", SQUARE, bulges)
    vertices, turned = SQUARE[start:] + SQUARE[:start], bulges[start:] + bulges[:start]
    if backward:
        vertices = vertices[::-1]
        turned = tuple(-bulge for bulge in (*turned[:3][::-1], turned[3]))
    assert draw_once([first, Outline("CUT_OUTLINE", vertices, turned)]) == [first]


def test_outlines_that_differ_in_a_bulge_only_both_stay() -> None:
    shapes = [
        Outline("CUT_OUTLINE", SQUARE, (0.5, 0.0, 0.0, 0.0)),
        Outline("CUT_OUTLINE", SQUARE, (-0.5, 0.0, 0.0, 0.0)),
    ]
    assert draw_once(shapes) == shapes


def test_doubled_circles_and_floors_go() -> None:
    hole, floor = (
        Circle("DRILL_PIN", (5.0, 5.0), 1.5),
        Polyline3D("CUT_FLOOR", ((0.0, 0.0, -2.0), (9.0, 9.0, -2.5))),
    )
    back = Polyline3D("CUT_FLOOR", floor.vertices[::-1])
    other = Circle("DRILL_PIN", (5.0, 5.0), 1.6)
    assert draw_once([Circle("DRILL_MARK", (5.0, 5.0), 1.5), floor, other, back]) == [
        Circle("DRILL_MARK", (5.0, 5.0), 1.5),
        floor,
        other,
    ]
    assert draw_once([hole, Circle("DRILL_PIN", (5.000001, 5.0), 1.5)]) == [hole]


def arc(layer: str, first_deg: float, last_deg: float) -> Arc:
    return Arc(layer, (3.0, 4.0), 20.0, math.radians(first_deg), math.radians(last_deg))


@pytest.mark.parametrize(
    ("mine", "theirs", "left"),
    [
        ((0, 90), (0, 90), []),
        ((0, 90), (30, 60), [(0, 30), (60, 90)]),
        ((0, 90), (60, 200), [(0, 60)]),
        ((0, 90), (300, 390), [(30, 90)]),
        ((10, 350), (340, 380), [(20, 340)]),
        ((0, 90), (90, 180), [(0, 90)]),
        ((-170, 170), (-175, 175), []),
        ((0, 300), (200, 460), [(100, 200)]),
    ],
)
def test_arcs_of_one_circle_lose_what_they_share(mine, theirs, left) -> None:
    kept = draw_once([arc("REF_LINE", *mine), arc("CUT_OUTLINE", *theirs)])
    angles = [
        tuple(round(math.degrees(angle), 9) for angle in (shape.start_angle, shape.end_angle))
        for shape in kept[:-1]
    ]
    assert angles == [tuple(map(pytest.approx, span)) for span in left]


def test_an_arc_along_the_round_edge_of_an_outline_goes() -> None:
    outline = Outline("CUT_OUTLINE", ((0.0, 0.0), (40.0, 0.0)), (0.3, 0.0))
    same = Outline("REF_LINE", ((40.0, 0.0), (0.0, 0.0)), (-0.3, 0.0), closed=False)
    assert draw_once([same, outline]) == [outline]


def test_lettering_loses_only_the_strokes_that_are_drawn_already() -> None:
    word = make_sheet("a", "a", shapes=[Lettering("ENGRAVE_LABEL", "H", (0, 0), 21)]).shapes[0]
    left = next(stroke for stroke in word.strokes if stroke.vertices[0][0] < 0)
    slot = Line("CUT_SLOT", *left.vertices)
    kept = draw_once([word, slot])
    assert len(kept[0].strokes) == len(word.strokes) - 1
    assert left not in kept[0].strokes
    whole = [Line("CUT_SLOT", *stroke.vertices) for stroke in word.strokes]
    assert draw_once([word, *whole]) == whole


points = st.tuples(st.integers(-4, 4), st.integers(-4, 4)).map(lambda p: (float(p[0]), float(p[1])))
lines = st.builds(
    Line, st.sampled_from(["CUT_SLOT", "REF_LINE", "REF_BAR"]), points, points
).filter(lambda one: one.start != one.end)


@given(st.lists(lines, min_size=1, max_size=12))
def test_nothing_is_lost_and_nothing_is_left_twice(drawn) -> None:
    """The length of what stays is the length of the union, by an independent library."""
    kept = draw_once(drawn)
    pieces = [piece for shape in kept for piece in pieces_of(shape)]
    union = shapely.unary_union([shapely.LineString([one.start, one.end]) for one in drawn])
    stays = sum(math.dist(piece.start, piece.end) for piece in pieces)
    assert stays == pytest.approx(union.length, abs=1e-4)
    for piece in pieces:
        middle = shapely.Point(
            (piece.start[0] + piece.end[0]) / 2, (piece.start[1] + piece.end[1]) / 2
        )
        assert union.distance(middle) < 1e-5
    assert draw_once(kept) == kept


def test_lettering_gives_way_to_the_same_lettering() -> None:
    word = Lettering("ENGRAVE_LABEL", "FRET 12", (3, 4), 3.0)
    beside = Lettering("ENGRAVE_LABEL", "FRET 12", (3, 9), 3.0)
    sheet = make_sheet("a", "A", shapes=[word, beside, word])
    assert sheet == make_sheet("a", "A", shapes=[word, beside])
    assert [len(shape.strokes) for shape in sheet.shapes] == [len(sheet.shapes[0].strokes)] * 2


def test_words_that_stand_clear_are_left_alone_for_good_reason(monkeypatch) -> None:
    """Looked at again with all the rest, they keep every stroke."""
    shapes = [
        *(
            Lettering("ENGRAVE_LABEL", "HE-LL 40", (12.0 * place, 7.0 * (place % 3)), 3.0, turn)
            for place, turn in enumerate((0.0, 0.4, 1.5707963267948966, 0.0, -0.3, 0.0))
        ),
        Lettering("ENGRAVE_LABEL", "HE-LL 40", (0, 30), 3.0),
        Line("REF_STRING", (-20, -3), (60, 12)),
        Line("CUT_SLOT", (0, 1.5), (40, 1.5)),
        Outline("CUT_OUTLINE", ((-30, -30), (70, -30), (70, 40), (-30, 40)), (0.2, 0, 0, 0)),
    ]
    sheet = make_sheet("a", "A", shapes=shapes)
    found: list[set[int]] = []
    lone = once._find_lone_words
    monkeypatch.setattr(once, "_find_lone_words", lambda drawn: found.append(lone(drawn)) or set())
    assert make_sheet("a", "A", shapes=shapes) == sheet
    assert 0 < len(found[0]) < 7
