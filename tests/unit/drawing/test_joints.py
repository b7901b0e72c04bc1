"""Joints between sheets of paper keep clear of lines where a shift does it."""

import itertools

import pytest

from layout.drawing.joints import part_axis

FRETS = [(x, x) for x in range(0, 480, 20)]


def crossings(joints, spans):
    return sum(low - 0.1 < joint < high + 0.1 for joint in joints for low, high in spans)


def test_what_fits_is_not_parted_and_lies_in_the_middle():
    parting = part_axis(10, 90, window_mm=100, overlap_mm=15, spans=FRETS)
    assert parting.windows_mm == ((0, 100),)
    assert parting.joints_mm == ()


@pytest.mark.parametrize("window", [70, 111.3, 180, 267, 415])
@pytest.mark.parametrize("overlap", [0, 15, 40])
def test_windows_cover_everything_and_share_the_overlap(window, overlap):
    parting = part_axis(-10, 470, window_mm=window, overlap_mm=overlap, spans=FRETS)
    windows = parting.windows_mm
    assert windows[0][0] == -10
    assert windows[-1][1] >= 470 - 1e-9
    for (start, end), joint, (following, _) in zip(
        windows, parting.joints_mm, windows[1:], strict=False
    ):
        assert end - start <= window + 1e-9
        assert joint == pytest.approx(end - overlap / 2, abs=1e-9)
        assert joint == pytest.approx(following + overlap / 2, abs=1e-9)
    assert crossings(parting.joints_mm, FRETS) == parting.crossed == 0


def test_fewest_windows_where_a_shift_is_enough():
    parting = part_axis(0, 400, window_mm=210, overlap_mm=10, spans=[(204, 206)])
    assert len(parting.windows_mm) == 2
    assert parting.crossed == 0


def test_one_more_window_rather_than_a_cut_line():
    # Two windows of 205 with an overlap of 10 cover 400 only with the joint at 200 exactly.
    parting = part_axis(0, 400, window_mm=205, overlap_mm=10, spans=[(199, 201)])
    assert len(parting.windows_mm) == 3
    assert parting.crossed == 0


def test_a_line_all_along_is_crossed_once_a_joint_without_more_windows():
    parting = part_axis(0, 400, window_mm=210, overlap_mm=10, spans=[(0, 400)])
    assert (len(parting.windows_mm), parting.crossed) == (2, 1)


def test_the_choice_is_as_good_as_trying_every_half_millimetre():
    spans = [(x, x + 13) for x in (20, 61, 88, 104, 150, 171, 190, 220, 236, 251, 280)]
    parting = part_axis(0, 300, window_mm=120, overlap_mm=20, spans=spans)
    assert len(parting.joints_mm) == 2
    tried = [half / 2 for half in range(600)]
    least = min(
        crossings((one, other), spans)
        for one, other in itertools.product(tried, tried)
        if one <= 110 and 0 < other - one <= 100 and 300 - other <= 110
    )
    assert parting.crossed == least
