from dataclasses import replace

import numpy as np
import pytest

from layout.strings.compensation import solve_compensation


def only(case, fret):
    weights = np.zeros_like(case.balance.weights)
    weights[:, fret - 1] = 1.0
    return replace(case, balance=replace(case.balance, weights=weights))


def solve(case, nut, saddle, **options):
    return solve_compensation(
        case.body,
        case.lie,
        balance=case.balance,
        ends=case.ends,
        nut=nut,
        saddle=saddle,
        **options,
    )


@pytest.mark.parametrize("nut", ["one", "straight"])
@pytest.mark.parametrize("saddle", ["one", "straight"])
@pytest.mark.parametrize("seed", range(4))
def test_shared_ends_are_not_played_off_against_each_other(strung, seed, nut, saddle):
    """The saddle alone moves some millimetres; nut and saddle together move no further."""
    case = only(strung(seed), 12)
    both = solve(case, nut, saddle)
    alone = solve(case, "none", "straight")
    farthest = np.abs(alone.setback_mm).max()
    assert np.abs(both.nut_shift_mm).max() < farthest
    assert np.abs(both.setback_mm).max() < farthest
    if "straight" in (nut, saddle):
        assert both.misfit.rms_cents == pytest.approx(alone.misfit.rms_cents, rel=0.05)


def test_every_string_is_met_where_its_own_end_is_free(strung):
    case = only(strung(5), 12)
    for nut, saddle in [("one", "each"), ("each", "straight"), ("each", "each")]:
        assert solve(case, nut, saddle).misfit.rms_cents < 1e-6


def test_a_string_alone_shares_nothing(strung):
    case = only(strung(6, strings=1), 7)
    each, one = solve(case, "each", "each"), solve(case, "one", "straight")
    np.testing.assert_allclose(one.setback_mm, each.setback_mm, rtol=0, atol=1e-6)
    np.testing.assert_allclose(one.nut_shift_mm, each.nut_shift_mm, rtol=0, atol=1e-6)


def test_a_shared_nut_is_held_while_the_saddle_finds_its_strip(strung):
    case = only(strung(7), 12)
    free, held = solve(case, "straight", "each"), solve(case, "straight", "each", strip_mm=0.5)
    np.testing.assert_array_equal(held.nut_shift_mm, free.nut_shift_mm)
    assert held.strip.width_mm == pytest.approx(0.5, abs=1e-7)
    assert held.limit_cost_cents > 0


def test_two_frets_are_left_to_least_squares(strung):
    case = strung(8)
    weights = np.zeros_like(case.balance.weights)
    weights[:, [0, 11]] = 1.0
    case = replace(case, balance=replace(case.balance, weights=weights))
    found = solve(case, "one", "one")
    for nut, saddle in [(1e-2, 0), (-1e-2, 0), (0, 1e-2), (0, -1e-2)]:
        moved = solve(case, found.nut_shift_mm + nut, found.setback_mm + saddle)
        assert moved.misfit.rms_cents > found.misfit.rms_cents
