from dataclasses import replace

import numpy as np
import pytest

from layout.findings import Assumed, Finding
from layout.geometry.surface import Surface
from layout.instrument import Board, Compensation, Listed, Nut, ShortStart, Sides, Tooling
from layout.plan.make import make_plan

SHIFTS = (0.1, -0.2, 0.3, 0.4, 0.5, 0.6)


def listed(job, **nut):
    return replace(job, compensation=Compensation(Listed(SHIFTS), "none"), nut=Nut(**nut))


def test_trimming_ends_the_board_at_the_largest_shift(six):
    plan = make_plan(listed(six, fit="trim"))
    assert plan.ends.face_mm == 0.6
    assert plan.ends.file_back_mm == pytest.approx([0.5, 0.8, 0.3, 0.2, 0.1, 0.0], abs=1e-12)
    assert plan.ends.overhang_mm.tolist() == [0.0] * 6
    assert plan.board.face.at_centre_mm == 0.6
    assert plan.board.wood_mm[0, 0] == pytest.approx(0.6, abs=1e-12)


def test_overhanging_edges_reach_over_the_board_s_end(six):
    plan = make_plan(listed(six, fit="overhang"))
    assert plan.ends.face_mm == 0.0
    assert plan.ends.overhang_mm == pytest.approx([0.1, 0.0, 0.3, 0.4, 0.5, 0.6], abs=1e-12)
    assert plan.ends.file_back_mm == pytest.approx([0.0, 0.2, 0.0, 0.0, 0.0, 0.0], abs=1e-12)
    assert plan.board.wood_mm[0, 0] == pytest.approx(0.0, abs=1e-12)


def test_a_saw_line_on_zero_puts_the_face_half_a_kerf_on(six):
    job = replace(six, nut=Nut(zero="kerf"), tooling=Tooling("saw", kerf_mm=(0.6, 0.6)))
    plan = make_plan(job)
    assert plan.ends.nut_shift_mm.tolist() == [0.3] * 6
    assert plan.ends.nut_mm[:, 0] == pytest.approx(0.3, abs=1e-4)
    assert plan.ends.face_mm == 0.3
    assert plan.board.wood_mm[0, 0] == pytest.approx(0.3, abs=1e-12)
    assert not plan.ends.file_back_mm.any()
    assert not plan.ends.overhang_mm.any()
    # The frets are still counted from x = 0.
    assert plan.frets.at_centre_mm[11] == pytest.approx(314.325, abs=1e-9)


def test_behind_a_zero_fret_the_board_runs_on_for_the_nut(parlour):
    plan = make_plan(replace(parlour, nut=Nut(zero="fret", thickness_mm=5.0)))
    assert plan.board.nut_end.at_centre_mm == pytest.approx(-7.0, abs=1e-12)
    assert plan.board.face.at_centre_mm == 0.0
    assert plan.height_at_nut_mm.tolist() == [0.0] * 6
    assert plan.ends.nut_mm[:, 0].tolist() == [0.0] * 6


def test_points_where_the_strings_leave(parlour):
    plan = make_plan(parlour)
    strings, ends = plan.strings, plan.ends
    moved = strings.nut_mm + ends.nut_shift_mm[:, None] * strings.direction
    assert ends.nut_mm == pytest.approx(moved, abs=1e-12)
    moved = strings.bridge_mm + ends.setback_mm[:, None] * strings.direction
    assert ends.saddle_mm == pytest.approx(moved, abs=1e-12)
    rise = plan.height_at_saddle_mm - plan.height_at_nut_mm
    run = strings.scale_mm + ends.setback_mm - ends.nut_shift_mm
    assert plan.speaking_mm == pytest.approx(np.hypot(run, rise), abs=1e-9)


def test_speaking_lengths_without_heights_are_those_in_plan(banjo):
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, 3.0)))
    job = replace(banjo, heights=None, compensation=Compensation(), strings=strings)
    plan = make_plan(job)
    assert plan.speaking_mm[:4] == pytest.approx(plan.strings.scale_mm[:4], abs=1e-9)
    assert plan.speaking_mm[4] == pytest.approx(plan.strings.scale_mm[4] + 3.0, abs=1e-9)
    assert plan.pitch is None


def test_short_strings_have_a_nut_of_their_own(banjo):
    plan = make_plan(replace(banjo, compensation=Compensation("each", "straight", None, 1, 12)))
    assert plan.ends.nut_shift_mm[4] != 0
    assert (plan.ends.file_back_mm[4], plan.ends.overhang_mm[4]) == (0.0, 0.0)


def test_loads_are_those_of_the_strings_as_tuned(parlour):
    plan = make_plan(parlour)
    assert plan.loads.total_n == pytest.approx(plan.loads.tension_n.sum(), rel=1e-15)
    assert plan.loads.total_n == pytest.approx(670.0, abs=20)
    far = make_plan(replace(parlour, compensation=Compensation("none", Sides(8.0, 8.0))))
    grown = (636.65 / 628.65) ** 2
    assert far.loads.share_of_break / plan.loads.share_of_break == pytest.approx(
        far.loads.tension_n / plan.loads.tension_n, rel=1e-12
    )
    assert far.loads.tension_n[0] / plan.loads.tension_n[0] == pytest.approx(grown, rel=0.01)


def test_one_unknown_string_leaves_the_sum_unknown(parlour, six):
    assert make_plan(six).loads.total_n is None
    mixed = replace(parlour, strings=(six.strings[0], *parlour.strings[1:]))
    plan = make_plan(replace(mixed, compensation=Compensation()))
    assert plan.loads.total_n is None
    assert np.isfinite(plan.loads.tension_n[1:]).all()
    assert plan.pitch is None


def test_what_was_assumed_and_found_before_goes_on(parlour):
    note = Finding("some-note", "note", "Something.")
    said = Assumed("paper.size", "A4")
    plan = make_plan(replace(parlour, assumed=(said,), findings=(note,), tooling=None))
    assert plan.findings[0] == note
    assert plan.assumed[0] == said
    assert plan.assumed[-1].key == "tooling"
    assert "tooling" not in [item.key for item in make_plan(parlour).assumed]


def test_the_plan_holds_what_its_parts_say(parlour):
    plan = make_plan(parlour)
    assert plan.fretted.all()
    assert plan.cut.finished_mm == pytest.approx(0.60, abs=1e-12)
    assert float(plan.surface.radius_mm(0.0)) == pytest.approx(305.0, abs=1e-9)
    assert make_plan(replace(parlour, board=Board())).surface == Surface((0, 0, 0), flat=True)


def test_left_handed_work_has_the_same_numbers(fan):
    right, left = make_plan(fan), make_plan(replace(fan, hand="left"))
    np.testing.assert_array_equal(right.board.wood_mm, left.board.wood_mm)
    np.testing.assert_array_equal(right.frets.met_mm, left.frets.met_mm)
