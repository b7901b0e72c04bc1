from dataclasses import replace

import numpy as np
import pytest

from layout.strings.compensation import solve_compensation


def solve(case, nut="each", saddle="each", **options):
    return solve_compensation(
        case.body,
        case.lie,
        balance=case.balance,
        ends=case.ends,
        nut=nut,
        saddle=saddle,
        **options,
    )


def reweigh(case, weights):
    return replace(case, balance=replace(case.balance, weights=weights))


def test_no_move_is_only_measured(strung):
    found = solve(strung(1), "none", "none")
    assert not found.nut_shift_mm.any()
    assert not found.setback_mm.any()
    assert found.misfit.rms_cents > 1
    assert found.limit_cost_cents is None
    assert found.fits


def test_an_unweighted_string_stays_where_each_is_free_and_follows_where_not(strung):
    case = strung(2)
    weights = np.ones_like(case.balance.weights)
    weights[1] = 0.0
    case = reweigh(case, weights)
    free = solve(case)
    assert free.nut_shift_mm[1] == pytest.approx(0.0, abs=1e-9)
    assert free.setback_mm[1] == pytest.approx(0.0, abs=1e-9)
    one = solve(case, "one", "one")
    assert one.setback_mm[1] == one.setback_mm[0] != 0.0
    course = solve(case, "none", "course")
    assert course.setback_mm[1] == course.setback_mm[0] != course.setback_mm[2]


def test_a_string_without_stops_stays_and_is_not_in_the_strip(strung):
    case = strung(3)
    stops = case.balance.stops_mm.copy()
    stops[5] = np.nan
    bridge = case.ends.bridge_mm.copy()
    bridge[5, 0] += 40.0
    case = replace(
        case,
        balance=replace(case.balance, stops_mm=stops),
        ends=replace(case.ends, bridge_mm=bridge),
    )
    found = solve(case, "straight", "straight", strip_mm=1.0)
    assert found.nut_shift_mm[5] == found.setback_mm[5] == 0.0
    assert np.isnan(found.error_cents[5]).all()
    assert found.strip.width_mm == pytest.approx(0.0, abs=1e-9)
    assert found.limit_cost_cents == 0.0


def test_straight_edges_are_straight_in_plan(strung):
    case = strung(4)
    found = solve(case, "straight", "straight")
    for line, figures in (
        (case.ends.nut_mm, found.nut_shift_mm),
        (case.ends.bridge_mm, found.setback_mm),
    ):
        x, y = (line + figures[:, None] * case.ends.direction).T
        np.testing.assert_allclose(np.polyval(np.polyfit(y, x, 1), y), x, rtol=0, atol=1e-9)


def test_a_short_string_keeps_out_of_the_straight_nut(strung):
    case = strung(5)
    ends = replace(case.ends, own_nut=np.arange(6) == 5)
    found = solve(replace(case, ends=ends), "straight", "none")
    alone = solve(case, "each", "none")
    assert found.nut_shift_mm[5] == pytest.approx(alone.nut_shift_mm[5], abs=1e-6)
    assert solve(case, "straight", "none").nut_shift_mm[5] != pytest.approx(
        alone.nut_shift_mm[5], abs=1e-3
    )


def test_fixed_figures_are_held_and_the_other_end_is_solved(strung):
    case = strung(6)
    free = solve(case)
    held = solve(case, free.nut_shift_mm, "each")
    np.testing.assert_allclose(held.setback_mm, free.setback_mm, rtol=0, atol=1e-6)
    np.testing.assert_array_equal(held.nut_shift_mm, free.nut_shift_mm)


def test_a_listed_saddle_is_only_checked(strung):
    case = strung(7)
    listed = np.array([1.0, 4.0, 1.0, 1.0, 4.0, 1.0])
    found = solve(case, "each", listed, strip_mm=1.0)
    np.testing.assert_array_equal(found.setback_mm, listed)
    assert not found.fits
    assert found.strip.width_mm > 2
    assert found.limit_cost_cents is None
    assert solve(case, "each", listed, strip_mm=3.5).fits


def test_a_wide_saddle_costs_nothing(strung):
    case = strung(8)
    free, wide = solve(case), solve(case, strip_mm=100.0)
    np.testing.assert_array_equal(free.setback_mm, wide.setback_mm)
    assert wide.limit_cost_cents == 0.0


def test_a_hair_of_a_saddle_is_a_straight_one(strung):
    case = strung(9)
    straight, thin = solve(case, "each", "straight"), solve(case, "each", "each", strip_mm=1e-6)
    np.testing.assert_allclose(thin.setback_mm, straight.setback_mm, rtol=0, atol=1e-5)
    assert thin.misfit.rms_cents == pytest.approx(straight.misfit.rms_cents, abs=1e-6)


@pytest.mark.parametrize("strip_mm", [0.0, -1.0, np.nan, np.inf])
def test_a_saddle_has_thickness(strung, strip_mm):
    with pytest.raises(ValueError, match="thickness"):
        solve(strung(1), strip_mm=strip_mm)


def test_a_stop_past_the_saddle_is_said_at_once(strung):
    case = strung(1)
    stops = case.balance.stops_mm.copy()
    stops[0, -1] = 2000.0
    with pytest.raises(ValueError, match="past the saddle"):
        solve(replace(case, balance=replace(case.balance, stops_mm=stops)))


def test_weights_pull(strung):
    case = strung(10, strings=1)
    heavy = np.ones((1, 12))
    heavy[0, 11] = 1e4
    even = solve(reweigh(case, np.ones((1, 12))), "none", "each")
    pulled = solve(reweigh(case, heavy), "none", "each")
    assert abs(pulled.error_cents[0, 11]) < abs(even.error_cents[0, 11]) / 100


def test_every_string_at_one_place_across_the_board(strung):
    """Unfretted work may lay all strings down the middle."""
    case = strung(13, strings=3)
    ends = replace(
        case.ends,
        nut_mm=np.zeros((3, 2)),
        bridge_mm=np.column_stack([case.lie.scale_mm.mean() * np.ones(3), np.zeros(3)]),
    )
    case = replace(case, ends=ends)
    straight = solve(case, "straight", "straight")
    assert np.ptp(straight.setback_mm) < 1e-9
    held = solve(case, strip_mm=0.3)
    assert held.strip.width_mm == pytest.approx(0.3, abs=1e-8)
    assert held.strip.slant == 0.0
