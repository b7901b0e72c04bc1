import numpy as np
import pytest

from layout.strings.stopping import StringLie, heights_from_gaps, relief_height_mm


def lie(**changes):
    given = {
        "open_hz": [330.0, 110.0, 82.0],
        "scale_mm": [650.0, 660.0, 670.0],
        "height_at_nut_mm": 0.5,
        "height_at_saddle_mm": 4.0,
        "finger_behind_mm": 8.0,
    }
    return StringLie(**(given | changes))


def test_relief_is_each_strings_own():
    hollow = lie(relief_mm=0.2, relief_from_mm=[40.0, 60.0, np.nan], relief_to_mm=[360.0] * 3)
    found = relief_height_mm(hollow, [[200.0, 30.0], [210.0, 50.0], [200.0, 30.0]])
    np.testing.assert_allclose(found, [[-0.2, 0.0], [-0.2, 0.0], [0.0, 0.0]], rtol=0, atol=1e-15)


def test_relief_that_ends_before_it_begins_is_none():
    hollow = lie(relief_mm=0.2, relief_from_mm=[40.0, 400.0, 40.0], relief_to_mm=[40.0, 360.0, 0.0])
    assert not relief_height_mm(hollow, [[41.0], [380.0], [20.0]]).any()


def test_relief_formula():
    hollow = lie(relief_mm=0.2, relief_from_mm=[40.0] * 3, relief_to_mm=[360.0] * 3)
    by_hand = -4 * 0.2 * (100.0 - 40.0) * (360.0 - 100.0) / 320.0**2
    np.testing.assert_allclose(relief_height_mm(hollow, [[100.0]] * 3), by_hand, rtol=1e-14)


def test_heights_give_back_the_gaps():
    scale = np.array([650.0, 680.0])
    relief = {"relief_mm": 0.15, "relief_from_mm": 0.056 * scale, "relief_to_mm": 0.55 * scale}
    places = (0.056 * scale, 0.5 * scale)
    at_nut, at_saddle = heights_from_gaps(
        scale, places_mm=places, gaps_mm=([0.4, 0.5], 2.0), **relief
    )
    straight = lie(scale_mm=scale, **relief)
    for place, gap in zip(places, ([0.4, 0.5], [2.0, 2.0]), strict=True):
        string = at_nut + (at_saddle - at_nut) * place / scale
        board = relief_height_mm(straight, place[:, None])[:, 0]
        np.testing.assert_allclose(string - board, gap, rtol=0, atol=1e-12)


def test_two_gaps_at_one_place_are_refused():
    with pytest.raises(ValueError, match="the two action gaps are given at the same place"):
        heights_from_gaps(650.0, places_mm=(36.0, 36.0), gaps_mm=(0.4, 2.0))
