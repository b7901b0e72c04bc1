import numpy as np
import pytest

from layout.geometry.spread import clear_gaps_mm, spread_strings
from layout.instrument import ShortStart, SpreadList, SpreadRule, StringSpec

GAUGES_MM = (0.254, 0.33, 0.4318, 0.6604, 0.9144, 1.1684)  # 10 to 46 thousandths of an inch


def strings(gauges=GAUGES_MM, **more):
    return [StringSpec(gauge_mm=gauge, **more) for gauge in gauges]


def test_equal_centres():
    nut, bridge = spread_strings(SpreadRule(36.0, 52.5), strings())
    assert nut.tolist() == pytest.approx([18, 10.8, 3.6, -3.6, -10.8, -18], abs=1e-12)
    assert bridge.tolist() == pytest.approx([26.25, 15.75, 5.25, -5.25, -15.75, -26.25], abs=1e-12)


def test_equal_gaps_count_the_gauges():
    nut, bridge = spread_strings(SpreadRule(36.0, 52.5, "gaps"), strings())
    for y, width in ((nut, 36.0), (bridge, 52.5)):
        assert (y[0], y[-1]) == (width / 2, pytest.approx(-width / 2, abs=1e-12))
        gap = clear_gaps_mm(y, strings())
        assert np.ptp(gap) < 1e-12
        # Width less the wood of the strings, halves of the outer two left out.
        wood = sum(GAUGES_MM) - (GAUGES_MM[0] + GAUGES_MM[-1]) / 2
        assert gap[0] == pytest.approx((width - wood) / 5, abs=1e-12)


def test_equal_gaps_without_gauges_are_equal_centres():
    bare = strings([None] * 6)
    assert spread_strings(SpreadRule(36.0, 52.5, "gaps"), bare)[0] == pytest.approx(
        spread_strings(SpreadRule(36.0, 52.5), bare)[0], abs=1e-12
    )


def test_courses_keep_their_pair_gap_and_share_the_rest():
    names = ["a", "a", "b", "b", "c", "c", None]
    gauges = [0.25, 0.3, 0.35, 0.6, 0.5, 0.9, 1.0]
    made = [StringSpec(gauge_mm=g, course=c) for g, c in zip(gauges, names, strict=True)]
    spread = SpreadRule(40.0, 56.0, pair_nut_mm=1.8, pair_saddle_mm=2.4)
    for y, width, pair in zip(spread_strings(spread, made), (40.0, 56.0), (1.8, 2.4), strict=True):
        gap = clear_gaps_mm(y, made)
        assert gap[[0, 2, 4]] == pytest.approx(pair, abs=1e-12)
        assert np.ptp(gap[[1, 3, 5]]) < 1e-12
        assert y[0] - y[-1] == pytest.approx(width, abs=1e-12)


def test_one_course_alone_has_equal_centres():
    made = strings([0.25, 0.25, 0.25], course="one")
    spread = SpreadRule(6.0, 8.0, pair_nut_mm=1.0, pair_saddle_mm=1.0)
    assert spread_strings(spread, made)[0].tolist() == [3.0, 0.0, -3.0]


def test_one_string_lies_on_the_centre_line():
    nut, bridge = spread_strings(SpreadRule(0.0, 0.0), strings([0.5]))
    assert (nut.tolist(), bridge.tolist()) == ([0.0], [0.0])


def test_listed():
    nut, bridge = spread_strings(SpreadList((10.0, -9.0), (20.0, -18.0)), strings([0.3, 0.4]))
    assert (nut.tolist(), bridge.tolist()) == ([10.0, -9.0], [20.0, -18.0])


def test_strings_that_miss_the_nut_go_on_outward():
    open_only = StringSpec(open_length_mm=700.0)
    short = StringSpec(starts_at=ShortStart(5))
    made = [open_only, *strings([None] * 4), short, short]
    nut, bridge = spread_strings(SpreadRule(24.0, 45.0), made)
    assert nut.tolist() == pytest.approx([20, 12, 4, -4, -12, -20, -28], abs=1e-12)
    assert bridge.tolist() == pytest.approx([37.5, 22.5, 7.5, -7.5, -22.5, -37.5, -52.5], abs=1e-12)


def test_the_spacing_that_goes_on_outward_is_that_of_gaps_and_courses():
    full = [StringSpec(gauge_mm=0.4, course=name) for name in "aabb"]
    bass = [StringSpec(gauge_mm=1.2, course="c", open_length_mm=900.0) for _ in range(2)]
    spread = SpreadRule(20.0, 30.0, pair_nut_mm=2.0, pair_saddle_mm=2.0)
    nut, _ = spread_strings(spread, [*full, *bass])
    gap = clear_gaps_mm(nut, [*full, *bass])
    assert gap[[0, 2, 4]] == pytest.approx(2.0, abs=1e-12)
    assert gap[3] == pytest.approx(gap[1], abs=1e-12)
    assert nut[0] - nut[3] == pytest.approx(20.0, abs=1e-12)


def test_gaps_too_narrow_for_the_strings_are_negative():
    thick = strings([3.0, 3.0, 3.0])
    nut, _ = spread_strings(SpreadRule(4.0, 8.0, "gaps"), thick)
    assert clear_gaps_mm(nut, thick) == pytest.approx([-1.0, -1.0], abs=1e-12)
