from dataclasses import replace

import numpy as np
import pytest

from layout.errors import JobError
from layout.instrument import Board, Margins, Nut, OneRadius, Slots
from layout.plan.make import make_plan

OPEN = Slots()


def pieces(job, fret, **frets):
    return make_plan(replace(job, frets=replace(job.frets, **frets))).pieces_of(fret)


def on_line(plan, fret, point):
    return point[0] == pytest.approx(float(plan.frets.line(fret).x_at(point[1])), abs=1e-9)


@pytest.mark.parametrize("name", ["six", "fan"])
def test_frets_run_from_edge_to_edge(request, name):
    plan = make_plan(request.getfixturevalue(name))
    assert len(plan.pieces) == plan.instrument.frets.count
    for piece in plan.pieces:
        for end, cut, edge in (
            (piece.treble_mm, piece.cut_treble_mm, plan.board.treble),
            (piece.bass_mm, piece.cut_bass_mm, plan.board.bass),
        ):
            assert on_line(plan, piece.fret, end)
            assert on_line(plan, piece.fret, cut)
            assert end[1] == pytest.approx(edge.y_at(end[0]), abs=1e-9)
            assert np.hypot(*(cut - end)) == pytest.approx(OPEN.past_edge_mm, abs=1e-9)
            assert abs(cut[1]) > abs(end[1])


def test_blind_slots_stop_short(six):
    plan = make_plan(replace(six, slots=Slots(run="blind", short_of_edge_mm=1.2)))
    for piece in plan.pieces:
        assert piece.treble_mm[1] - piece.cut_treble_mm[1] == pytest.approx(1.2, abs=1e-9)
        assert piece.cut_bass_mm[1] - piece.bass_mm[1] == pytest.approx(1.2, abs=1e-9)


def test_wire_is_measured_over_the_curve_between_the_finished_edges(six):
    plan = make_plan(replace(six, board=Board(top=OneRadius(254.0))))
    for piece in plan.pieces:
        half = piece.treble_mm[1]
        assert piece.wire_mm == pytest.approx(2 * 254 * np.arcsin(half / 254), abs=1e-9)
    flat = make_plan(six).pieces[0]
    assert flat.wire_mm == pytest.approx(np.hypot(*(flat.treble_mm - flat.bass_mm)), abs=1e-9)


def string_y(plan, index, x):
    return plan.strings.y_at(index, x)


def test_a_partial_fret_ends_half_way_past_its_outermost_strings(six):
    plan = make_plan(replace(six, frets=replace(six.frets, only={3: (2, 3, 4)})))
    (piece,) = plan.pieces_of(3)
    x = plan.frets.at_centre_mm[2]
    assert piece.treble_mm[1] == pytest.approx(
        (string_y(plan, 0, x) + string_y(plan, 1, x)) / 2, abs=1e-9
    )
    assert piece.bass_mm[1] == pytest.approx(
        (string_y(plan, 3, x) + string_y(plan, 4, x)) / 2, abs=1e-9
    )


def test_strings_that_are_not_neighbours_get_separate_pieces(fan):
    plan = make_plan(replace(fan, frets=replace(fan.frets, only={3: (1, 3, 4, 6)})))
    first, middle, last = plan.pieces_of(3)
    assert on_line(plan, 3, middle.treble_mm)
    assert first.treble_mm == pytest.approx(
        plan.board.treble.crossing(plan.frets.line(3)), abs=1e-9
    )
    assert last.bass_mm == pytest.approx(plan.board.bass.crossing(plan.frets.line(3)), abs=1e-9)
    assert first.bass_mm[1] > middle.treble_mm[1] > middle.bass_mm[1] > last.treble_mm[1]
    assert plan.pieces_of(4)[0].fret == 4
    assert len(plan.pieces) == 26


def test_a_fret_before_a_short_string_ends_at_the_inner_edge(banjo):
    plan = make_plan(banjo)
    for fret, string in ((3, 3), (7, 4)):
        (piece,) = plan.pieces_of(fret)
        x = piece.bass_mm[0]
        assert piece.bass_mm[1] == pytest.approx(string_y(plan, string, x) - 3.0, abs=1e-9)


def test_a_partial_fret_before_a_short_string_runs_to_the_edge(banjo):
    (early,) = pieces(banjo, 3, only={3: (3, 4)})
    (late,) = pieces(banjo, 7, only={7: (3, 4)})
    plan = make_plan(banjo)
    assert early.bass_mm == pytest.approx(plan.board.bass.crossing(plan.frets.line(3)), abs=1e-9)
    x = late.bass_mm[0]
    assert late.bass_mm[1] == pytest.approx(
        (string_y(plan, 3, x) + string_y(plan, 4, x)) / 2, abs=1e-9
    )


def test_open_strings_are_no_neighbours(six):
    bass = replace(six.strings[5], open_length_mm=900.0)
    job = replace(six, strings=(*six.strings, bass))
    (piece,) = pieces(job, 3, only={3: (5, 6)})
    plan = make_plan(job)
    assert piece.bass_mm == pytest.approx(plan.board.bass.crossing(plan.frets.line(3)), abs=1e-9)


def test_a_zero_fret_lies_on_zero(six, fan):
    assert make_plan(six).zero_fret is None
    for job in (six, fan):
        plan = make_plan(replace(job, nut=Nut(zero="fret")))
        zero = plan.zero_fret
        line = plan.strings.nut_line
        for point in (zero.treble_mm, zero.bass_mm, zero.cut_treble_mm):
            assert point[0] == pytest.approx(float(line.x_at(point[1])), abs=1e-9)
        assert zero.fret == 0
        assert zero.wire_mm > 40


def test_a_fret_that_runs_off_the_board_is_refused(fan):
    short = replace(fan, board=Board(Margins(), past_last_fret_mm=1.0))
    with pytest.raises(JobError, match="fret 24 runs off the end"):
        make_plan(short)
    along = replace(short, board=replace(short.board, tail_end="along"))
    assert len(make_plan(along).pieces) == 24
