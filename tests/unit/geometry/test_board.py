import numpy as np
import pytest
import shapely

from layout.errors import JobError
from layout.geometry.board import Edge, place_x_mm, shape_board
from layout.geometry.cross import CrossLine
from layout.geometry.frets import divide_mm, lay_frets
from layout.geometry.strings import lay_strings, start_at
from layout.instrument import Board, Margins, MultiScale, ParallelScale, ShortStart, Widths

COUNT = 20
NUT_Y, BRIDGE_Y = np.linspace(18.0, -18.0, 6), np.linspace(27.0, -27.0, 6)
ALL = np.ones(6, bool)


def laid(scale=None, *, full=ALL):
    q = 1 - 2 ** (-7 / 12)
    scale = scale or ParallelScale(628.65)
    strings = lay_strings(scale, NUT_Y, BRIDGE_Y, full=full, square_fraction=(q, q))
    own = divide_mm(strings.scale_mm, np.tile(100.0 * np.arange(1, COUNT + 1), (6, 1)))
    served = np.ones(own.shape, bool)
    free = np.full(COUNT, isinstance(scale, MultiScale))
    return strings, lay_frets(strings, own, votes=served * 1.0, served=served, free=free)


def shape(board=None, *, scale=None, shift=0.0, before=0.0, strings_and_frets=None, starts=None):
    strings, frets = strings_and_frets or laid(scale)
    return shape_board(
        board or Board(),
        strings,
        frets,
        face=strings.nut_line.moved(shift),
        before_face_mm=before,
        fretted=ALL,
        short_starts=starts or (None,) * 6,
    )


FAN = MultiScale(647.7, 685.8, 7.0)
LAST_MM = 628.65 * (1 - 2 ** (-COUNT / 12))


def test_margins_are_square_to_the_centre_line_from_string_centres():
    made = shape(Board(Margins(3.5, 4.0), past_last_fret_mm=12.0))
    tail = LAST_MM + 12.0
    half_tail = 18.0 + 9.0 * tail / 628.65 + 4.0
    corners = [[0, 21.5], [tail, half_tail], [tail, -half_tail], [0, -21.5]]
    np.testing.assert_allclose(made.wood_mm, corners, rtol=0, atol=1e-9)
    assert made.width_at(0.0) == pytest.approx(43.0, abs=1e-9)


def test_multi_scale_corners_lie_on_the_lanes_moved_outward():
    strings, frets = laid(FAN)
    board = Board(Margins(3.0, 4.0), tail_end="along")
    made = shape(board, strings_and_frets=(strings, frets))
    for edge, index, side in ((made.treble, 0, 1.0), (made.bass, 5, -1.0)):
        for point, margin, line in zip(
            edge.points_mm, (3.0, 4.0), (strings.nut_line, made.tail_end), strict=True
        ):
            assert point[0] == pytest.approx(float(line.x_at(point[1])), abs=1e-9)
            assert side * (point[1] - strings.y_at(index, point[0])) == pytest.approx(
                margin, abs=1e-9
            )
    assert made.tail_end.slope == pytest.approx(frets.slope[-1], abs=1e-15)
    assert made.tail_end.at_centre_mm == pytest.approx(frets.at_centre_mm[-1] + 12.0, abs=1e-12)


def test_tail_and_nut_ends():
    strings, _ = laid(FAN)
    square = shape(Board(nut_end="square"), scale=FAN)
    assert square.tail_end.slope == 0.0
    corners = shape(Board(), scale=FAN).wood_mm[[0, 3], 0]
    assert square.nut_end.slope == 0.0
    assert square.nut_end.at_centre_mm == pytest.approx(corners.min(), abs=1e-6)
    assert square.wood_mm[[0, 3], 0] == pytest.approx(square.nut_end.at_centre_mm, abs=1e-9)
    assert shape(Board(), scale=FAN).nut_end == strings.nut_line


@pytest.mark.parametrize("nut_end", ["along", "square"])
@pytest.mark.parametrize("tail_end", ["along", "square"])
@pytest.mark.parametrize("before", [0.0, 7.0])
@pytest.mark.parametrize("shift", [0.0, 0.4])
def test_a_length_is_counted_in_all(nut_end, tail_end, before, shift):
    made = shape(
        Board(length_mm=480.0, nut_end=nut_end, tail_end=tail_end),
        scale=FAN,
        before=before,
        shift=shift,
    )
    from_to = made.tail_end.at_centre_mm - made.nut_end.at_centre_mm
    assert from_to == pytest.approx(480.0, abs=1e-9)


def test_the_face_and_the_wood_behind_it():
    made = shape(Board(), shift=0.4, before=7.0)
    assert made.face.at_centre_mm == 0.4
    assert made.wood_mm[0, 0] == pytest.approx(-6.6, abs=1e-9)
    assert made.treble.origin_mm == pytest.approx([0.0, 21.0], abs=1e-9)


@pytest.mark.parametrize("turned", [False, True])
def test_widths_at_two_places(turned):
    places = (("nut", 43.5), (14, 54.0))
    made = shape(Board(Widths(*(places[::-1] if turned else places))))
    at_14 = 628.65 * (1 - 2 ** (-14 / 12))
    assert made.width_at(0.0) == pytest.approx(43.5, abs=1e-9)
    assert made.width_at(at_14) == pytest.approx(54.0, abs=1e-9)
    tail = made.tail_end.at_centre_mm
    assert made.width_at(tail) == pytest.approx(43.5 + 10.5 * tail / at_14, abs=1e-9)
    assert made.treble.y_at(200.0) == pytest.approx(-made.bass.y_at(200.0), abs=1e-12)


def test_widths_at_tail_and_bridge():
    made = shape(Board(Widths(("tail", 58.0), ("bridge", 62.0))))
    tail = made.tail_end.at_centre_mm
    assert made.width_at(tail) == pytest.approx(58.0, abs=1e-9)
    assert made.width_at(0.0) == pytest.approx(58.0 - 4.0 * tail / (628.65 - tail), abs=1e-9)


def test_places_by_name_and_number():
    _, frets = laid()
    where = [place_x_mm(p, frets, tail_mm=450.0, bridge_mm=628.65) for p in ("nut", "tail", 0, 12)]
    assert where == pytest.approx([0.0, 450.0, 0.0, 314.325], abs=1e-9)
    assert place_x_mm("bridge", frets, tail_mm=450.0, bridge_mm=628.65) == 628.65


@pytest.mark.parametrize("scale", [None, FAN])
def test_binding_leaves_the_wood_narrower_square_to_the_edge(scale):
    made = shape(Board(binding_mm=1.6), scale=scale)
    bare = shape(Board(), scale=scale)
    assert made.treble.points_mm == pytest.approx(bare.treble.points_mm, abs=1e-12)
    for edge, wood in (
        (made.treble, made.wood_mm[:2]),
        (made.bass, made.wood_mm[:1:-1]),
    ):
        for corner in wood:
            # To the infinite line through the edge: corners lie on the board's ends.
            run = edge.points_mm[1] - edge.points_mm[0]
            gap = corner - edge.points_mm[0]
            away = abs(run[0] * gap[1] - run[1] * gap[0]) / np.hypot(*run)
            assert away == pytest.approx(1.6, abs=1e-9)


def test_edges_may_both_lie_on_one_side_of_the_centre_line():
    q = 0.0
    strings = lay_strings(
        ParallelScale(600.0), NUT_Y + 60, BRIDGE_Y + 60, full=ALL, square_fraction=(q, q)
    )
    own = divide_mm(strings.scale_mm, np.tile(100.0 * np.arange(1, 13), (6, 1)))
    served = np.ones(own.shape, bool)
    frets = lay_frets(strings, own, votes=served * 1.0, served=served, free=np.zeros(12, bool))
    made = shape(Board(binding_mm=1.0), strings_and_frets=(strings, frets))
    assert made.wood_mm[0, 1] == pytest.approx(80.0, abs=2e-4)  # 81 less the binding, near enough
    assert made.wood_mm[3, 1] == pytest.approx(40.0, abs=2e-4)


def short_board(step=0.0, behind=0.0):
    full = np.array([True] * 5 + [False])
    strings, frets = laid(full=full)
    strings = start_at(strings, 5, frets.line(5), behind_mm=behind, y_mm=None)
    starts = (None,) * 5 + (ShortStart(5, behind, step),)
    return strings, frets, shape(strings_and_frets=(strings, frets), starts=starts)


@pytest.mark.parametrize(("step", "behind"), [(0.0, 0.0), (9.0, 0.0), (9.0, 4.0)])
def test_the_edge_steps_out_square_before_a_short_strings_nut(step, behind):
    strings, frets, made = short_board(step, behind)
    edge = made.bass.points_mm
    fret_5 = frets.at_centre_mm[4]
    own_nut = fret_5 - behind * strings.direction[5, 0]
    assert len(edge) == 4
    assert edge[1:3, 0] == pytest.approx(own_nut - step, abs=1e-9)
    x = edge[1, 0]
    assert edge[1, 1] == pytest.approx(strings.y_at(4, x) - 3.0, abs=1e-9)
    assert edge[2, 1] == pytest.approx(strings.y_at(5, x) - 3.0, abs=1e-9)
    assert len(made.treble.points_mm) == 2
    assert made.wood_mm.shape == (6, 2)


def test_frets_before_the_step_end_on_the_inner_edge():
    strings, frets, made = short_board(step=9.0)
    for fret, index in ((3, 4), (4, 4), (5, 5), (12, 5)):
        end = made.bass.crossing(frets.line(fret))
        assert end[1] == pytest.approx(strings.y_at(index, end[0]) - 3.0, abs=1e-9)


def test_a_line_along_the_step_counts_its_inner_end():
    _, frets, made = short_board()
    end = made.bass.crossing(frets.line(5))
    assert end == pytest.approx(made.bass.points_mm[1], abs=1e-9)


def test_binding_follows_the_step():
    full = np.array([True] * 5 + [False])
    strings, frets = laid(full=full)
    strings = start_at(strings, 5, frets.line(5), behind_mm=0.0, y_mm=None)
    starts = (None,) * 5 + (ShortStart(5, 0.0, 9.0),)
    made = shape(Board(binding_mm=1.2), strings_and_frets=(strings, frets), starts=starts)
    wood = shapely.Polygon(made.wood_mm)
    edge = shapely.LineString(made.bass.points_mm)
    assert len(made.wood_mm) == 6
    assert wood.is_valid
    # Away from the ends, which the wood shares with the finished edge.
    for point in made.wood_mm[3:5]:
        assert edge.distance(shapely.Point(point)) >= 1.2 - 1e-9


def test_distance_along_an_edge_is_counted_from_the_nut_line():
    made = shape(Board(), before=7.0)
    assert made.treble.along_mm(made.treble.origin_mm) == 0.0
    assert made.treble.along_mm(made.treble.points_mm[0]) < 0
    run = made.treble.points_mm[1] - made.treble.origin_mm
    assert made.treble.along_mm(made.treble.points_mm[1]) == pytest.approx(np.hypot(*run), abs=1e-9)


def test_a_line_past_the_end_misses_the_edge():
    edge = Edge(np.array([[0.0, 20.0], [400.0, 30.0]]), np.array([0.0, 20.0]))
    assert edge.crossing(CrossLine(500.0)) is None
    assert edge.crossing(CrossLine(200.0)) == pytest.approx([200.0, 25.0], abs=1e-12)
    assert edge.y_at(500.0) == pytest.approx(32.5, abs=1e-12)


def test_impossible_boards():
    with pytest.raises(JobError, match="edges of the board cross"):
        shape(Board(Widths(("nut", 40.0), (1, 10.0))))
    with pytest.raises(JobError, match="beyond the nut"):
        shape(Board(length_mm=5.0), before=7.0)
    with pytest.raises(JobError, match="two places must differ"):
        shape(Board(Widths(("nut", 40.0), (0, 50.0))))
