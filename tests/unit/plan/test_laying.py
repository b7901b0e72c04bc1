from dataclasses import replace

import numpy as np
import pytest

from layout.errors import JobError
from layout.instrument import (
    MultiScale,
    ParallelScale,
    ShortStart,
    SpreadList,
    SpreadRule,
    StringSpec,
)
from layout.pitch.notes import NoteName, read_note
from layout.pitch.temperament import equal
from layout.plan.laying import courses, lay_out, outer_strings


def test_parallel_board_in_equal_temperament(six):
    laid = lay_out(six)
    places = 628.65 * (1 - 2.0 ** (-np.arange(1, 21) / 12))
    assert laid.frets.at_centre_mm == pytest.approx(places, abs=1e-9)
    assert laid.frets.met_mm == pytest.approx(laid.own_mm, abs=1e-9)
    assert laid.target_cents == pytest.approx(np.tile(100.0 * np.arange(1, 21), (6, 1)), abs=1e-9)


def test_multi_scale_figures(fan):
    # Geometry page, Lines: the example, to 0.001 mm.
    laid = lay_out(fan)
    points = laid.strings.points(laid.frets.met_mm)
    assert laid.strings.nut_mm[[0, -1], 0] == pytest.approx([6.336, -6.336], abs=5e-4)
    assert laid.strings.bridge_mm[[0, -1], 0] == pytest.approx([653.984, 679.414], abs=5e-4)
    assert laid.frets.at_centre_mm[6] == pytest.approx(221.731, abs=5e-4)
    assert points[[0, -1], 11, 0] == pytest.approx([330.160, 336.539], abs=5e-4)


@pytest.mark.parametrize(
    ("square_at", "fraction"),
    [("nut", 0.0), ("bridge", 1.0), (0.0, 0.0), (7.5, 1 - 2 ** (-750 / 1200))],
)
def test_where_it_is_square(fan, square_at, fraction):
    laid = lay_out(replace(fan, scale=MultiScale(647.7, 685.8, square_at)))
    strings = laid.strings
    met = strings.points(strings.scale_mm[:, None] * np.array([[fraction]]))[:, 0, 0]
    assert np.ptp(met[[0, -1]]) < 1e-9


def test_a_keyed_record_takes_each_outer_strings_own_fraction(lute, fret_rows):
    keyed = replace(
        lute,
        scale=MultiScale(600.0, 640.0, 1.0),
        frets=replace(lute.frets, slant="free"),
        strings=(*lute.strings[:5], StringSpec(note=read_note("D2"))),
    )
    laid = lay_out(keyed)
    assert abs(laid.target_cents[0, 0] - laid.target_cents[-1, 0]) > 40
    own = laid.strings.points(laid.own_mm)[[0, -1], 0, 0]
    assert own[0] == pytest.approx(own[1], abs=1e-9)


def test_a_lute_in_quarter_comma_parts_by_41_cents_at_fret_1(lute):
    # Geometry page: 41 cents at fret 1 of a lute in quarter-comma meantone.
    laid = lay_out(lute)
    asked = laid.target_cents[:, 0]
    assert np.ptp(asked) == pytest.approx(41.06, abs=0.005)
    left = 1200 * np.log2(
        (laid.strings.scale_mm - laid.own_mm[:, 0])
        / (laid.strings.scale_mm - laid.frets.met_mm[:, 0])
    )
    assert np.ptp(left) == pytest.approx(41.06, abs=0.005)
    assert left.sum() == pytest.approx(0.0, abs=1e-9)  # where least squares in cents ends


@pytest.mark.parametrize(
    ("pitch", "pick"),
    [
        ("flat", np.min),
        ("sharp", np.max),
        ((1,), lambda cents: cents[0]),
        ((1, 3), lambda cents: cents[[0, 2]].mean()),
    ],
)
def test_favour_picks_the_pitch(lute, pitch, pick):
    favoured = replace(lute, frets=replace(lute.frets, favour={1: pitch}))
    laid, plain = lay_out(favoured), lay_out(lute)
    cents = plain.target_cents[:, 0]
    assert laid.frets.at_centre_mm[0] == pytest.approx(
        600 * (1 - 2 ** (-pick(cents) / 1200)), abs=1e-9
    )
    assert laid.frets.at_centre_mm[1:] == pytest.approx(plain.frets.at_centre_mm[1:], abs=1e-12)
    assert laid.own_mm == pytest.approx(plain.own_mm, abs=1e-12)  # what strings want stays


def test_courses_share_a_vote(lute):
    doubled = tuple(
        string
        for index, string in enumerate(lute.strings)
        for string in [replace(string, course=f"c{index}")] * (2 if index < 2 else 1)
    )
    spread = replace(lute.spread, pair_nut_mm=2.0, pair_saddle_mm=2.5)
    laid = lay_out(replace(lute, strings=doubled, spread=spread))
    assert laid.frets.at_centre_mm == pytest.approx(lay_out(lute).frets.at_centre_mm, abs=1e-9)


def test_course_numbers(six):
    names = ["a", "a", None, "b", None, "b"]
    made = replace(
        six, strings=tuple(replace(s, course=c) for s, c in zip(six.strings, names, strict=True))
    )
    assert courses(made).tolist() == [0, 0, 1, 2, 3, 2]


def test_the_fifth_string_of_a_banjo(banjo):
    laid = lay_out(banjo)
    start = 666.75 * (1 - 2 ** (-5 / 12))
    assert laid.strings.nut_mm[4, 0] == pytest.approx(start, abs=1e-9)
    speaks = laid.strings.bridge_mm[4] - laid.strings.nut_mm[4]
    assert speaks[0] == pytest.approx(499.498, abs=5e-4)
    assert laid.strings.scale_mm[4] == pytest.approx(np.hypot(*speaks), abs=1e-9)
    # Board fret 12 lies at half the scale, seven semitones above its open note.
    assert laid.frets.at_centre_mm[11] == pytest.approx(333.375, abs=1e-9)
    assert laid.target_cents[4, [4, 5, 11]] == pytest.approx([0.0, 100.0, 700.0], abs=1e-9)
    assert laid.served[4].tolist() == [False] * 5 + [True] * 17
    assert np.isnan(laid.frets.met_mm[4, :5]).all()
    assert laid.frets.met_mm[4, 5:] == pytest.approx(laid.own_mm[4, 5:], abs=1e-9)
    # It goes on in the spacing of the others: 8 mm at the nut, 11 mm at the saddle.
    assert laid.strings.bridge_mm[4, 1] == pytest.approx(-27.5, abs=1e-12)
    assert laid.strings.nut_mm[4, 1] == pytest.approx(-20.0 - 7.5 * start / 666.75, abs=1e-9)


@pytest.mark.parametrize("behind", [0.0, 5.0])
def test_standing_behind_the_fret_moves_the_nut_alone(banjo, behind):
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, behind, 9.0)))
    moved, plain = lay_out(replace(banjo, strings=strings)), lay_out(banjo)
    for name in ("own_mm", "target_cents"):
        np.testing.assert_allclose(getattr(moved, name), getattr(plain, name), rtol=0, atol=1e-12)
    assert moved.frets.at_centre_mm == pytest.approx(plain.frets.at_centre_mm, abs=1e-12)


def test_a_listed_short_string(banjo):
    spread = SpreadList((12.0, 4.0, -4.0, -12.0, -21.5), (16.5, 5.5, -5.5, -16.5, -27.5))
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, 5.0, 9.0)))
    laid = lay_out(replace(banjo, spread=spread, strings=strings))
    own_nut = laid.strings.nut_mm[4] - 5.0 * laid.strings.direction[4]
    assert own_nut[1] == pytest.approx(-21.5, abs=1e-9)
    assert laid.strings.nut_mm[4, 0] == pytest.approx(laid.frets.at_centre_mm[4], abs=1e-9)


def test_favouring_counts_a_short_string_from_the_board_s_nut(banjo):
    favoured = {12: "flat", 10: "sharp", 7: (5,)}
    laid = lay_out(replace(banjo, frets=replace(banjo.frets, favour=favoured)))
    assert laid.frets.at_centre_mm == pytest.approx(lay_out(banjo).frets.at_centre_mm, abs=1e-9)


def test_open_strings_go_on_outward_and_meet_no_fret(six):
    bass = StringSpec(note=read_note("D2"), open_length_mm=900.0)
    laid = lay_out(replace(six, strings=(*six.strings, bass)))
    assert laid.strings.bridge_mm[6, 1] == pytest.approx(-27.0 - 10.8, abs=1e-12)
    assert laid.strings.scale_mm[6] == 900.0
    assert not laid.served[6].any()
    assert laid.frets.at_centre_mm == pytest.approx(lay_out(six).frets.at_centre_mm, abs=1e-12)
    assert outer_strings(replace(six, strings=(bass, *six.strings))) == (1, 6)


def test_partial_frets_serve_the_strings_named(six):
    laid = lay_out(replace(six, frets=replace(six.frets, only={3: (1, 2, 6)})))
    assert laid.served[:, 2].tolist() == [True, True, False, False, False, True]
    assert laid.served[:, 3].all()


def test_a_fret_without_strings_is_refused(banjo):
    for frets in (
        replace(banjo.frets, only={3: (5,)}),
        replace(banjo.frets, favour={3: (5,)}),
    ):
        with pytest.raises(JobError, match=r"frets\.(only|favour)\.3.*runs over this fret"):
            lay_out(replace(banjo, frets=frets))


def test_a_board_without_a_full_string_is_refused(banjo):
    with pytest.raises(JobError, match="reaches the nut"):
        lay_out(replace(banjo, strings=banjo.strings[4:]))


def test_unfretted_work_without_a_spread_runs_down_the_middle(six):
    laid = lay_out(replace(six, spread=None, strings=six.strings[:1]))
    assert laid.strings.nut_mm.tolist() == [[0.0, 0.0]]
    assert laid.strings.scale_mm.tolist() == [628.65]


def test_a_string_ordered_by_its_frequency_counts_from_the_nearest_degree(lute, fret_rows):
    keyed = equal(12).keyed_from(NoteName("C"))
    frets = fret_rows(8, keyed, counted_from="key")
    strings = (StringSpec(hz=331.0), *lute.strings[1:])
    laid = lay_out(replace(lute, frets=frets, strings=strings))
    assert laid.target_cents[0] == pytest.approx(100.0 * np.arange(1, 9), abs=1e-9)


def test_one_string(six):
    laid = lay_out(replace(six, strings=six.strings[:1], spread=SpreadRule(0.0, 0.0)))
    assert laid.frets.met_mm == pytest.approx(laid.own_mm, abs=1e-9)


def test_equal_gaps_are_exact_on_parallel_boards(parlour):
    spread = SpreadRule(36.0, 54.0, "gaps")
    laid = lay_out(replace(parlour, spread=spread, scale=ParallelScale(647.7)))
    assert laid.frets.met_mm == pytest.approx(laid.own_mm, abs=1e-9)
