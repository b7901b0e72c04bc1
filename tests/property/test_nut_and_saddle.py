"""What must hold of nut and saddle on any instrument."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from layout.strings.balance import EndLines
from layout.strings.compensation import solve_compensation
from layout.strings.stopping import predict_stops
from layout.strings.strip import narrowest_strip

SEEDS = st.integers(0, 10**6)
RULES = st.sampled_from(["one", "straight", "course", "each"])
MOVE_MM = 1e-3

few = settings(max_examples=25, deadline=None, derandomize=True)


def solve(case, nut, saddle, strip_mm=None):
    return solve_compensation(
        case.body,
        case.lie,
        balance=case.balance,
        ends=case.ends,
        nut=nut,
        saddle=saddle,
        strip_mm=strip_mm,
    )


def total(case, shift_mm, setback_mm):
    stopped = predict_stops(
        case.body,
        case.lie,
        case.balance.stops_mm,
        nut_shift_mm=shift_mm,
        setback_mm=setback_mm,
    )
    return (case.balance.weights * (stopped.cents - case.balance.target_cents) ** 2).sum()


def met(line_mm, direction, first, last):
    """Move each string to the line through two points."""
    across = np.array([first[1] - last[1], last[0] - first[0]])
    return ((first - line_mm) @ across) / (direction @ across)


def neighbours(rule, figures, line_mm, ends):
    """Figures a little away that keep the rule."""
    strings = len(figures)
    if rule == "straight":
        ways = ends.direction
        points = line_mm + figures[:, None] * ways
        for treble, bass in [(1, 0), (-1, 0), (0, 1), (0, -1), (1, 1), (1, -1)]:
            yield met(
                line_mm,
                ways,
                points[0] + treble * MOVE_MM * ways[0],
                points[-1] + bass * MOVE_MM * ways[-1],
            )
        return
    group = {"one": np.zeros(strings, int), "course": ends.course, "each": np.arange(strings)}
    for name in np.unique(group[rule]):
        for sign in (1, -1):
            yield figures + sign * MOVE_MM * (group[rule] == name)


@few
@given(seed=SEEDS, nut=RULES, saddle=RULES, strings=st.integers(2, 7))
def test_no_small_move_lowers_the_sum(strung, seed, nut, saddle, strings):
    case = strung(seed, strings=strings)
    found = solve(case, nut, saddle)
    shift, setback = found.nut_shift_mm, found.setback_mm
    least = total(case, shift, setback) * (1 - 1e-12)
    for moved in neighbours(nut, shift, case.ends.nut_mm, case.ends):
        assert total(case, moved, setback) >= least
    for moved in neighbours(saddle, setback, case.ends.bridge_mm, case.ends):
        assert total(case, shift, moved) >= least


@few
@given(seed=SEEDS, fret=st.integers(1, 12))
def test_one_balanced_fret_takes_the_least_move(strung, seed, fret):
    case = strung(seed, strings=3)
    weights = np.zeros((3, 12))
    weights[:, fret - 1] = 1.0
    case = replace(case, balance=replace(case.balance, weights=weights))
    found = solve(case, "each", "each")
    assert np.abs(found.error_cents[:, fret - 1]).max() < 1e-6

    def error(shift, setback):
        return predict_stops(
            case.body, case.lie, case.balance.stops_mm, nut_shift_mm=shift, setback_mm=setback
        ).cents[:, fret - 1]

    n, s = found.nut_shift_mm, found.setback_mm
    by_nut = (error(n + 1e-2, s) - error(n - 1e-2, s)) / 2e-2
    by_saddle = (error(n, s + 1e-2) - error(n, s - 1e-2)) / 2e-2
    # Shortest to the line of zero error: square to it, along the error's own gradient.
    askew_mm = (n * by_saddle - s * by_nut) / np.hypot(by_nut, by_saddle)
    assert np.abs(askew_mm).max() < 1e-6


@few
@given(seed=SEEDS, nut=RULES, saddle=RULES, width_mm=st.floats(0.2, 3.0))
def test_nothing_to_correct_moves_nothing(strung, seed, nut, saddle, width_mm):
    case = strung(seed)
    cents = predict_stops(case.body, case.lie, case.balance.stops_mm).cents
    case = replace(case, balance=replace(case.balance, target_cents=cents))
    found = solve(case, nut, saddle, width_mm)
    assert np.abs(found.nut_shift_mm).max() < 1e-8
    assert np.abs(found.setback_mm).max() < 1e-8


@few
@given(
    seed=SEEDS, width_mm=st.floats(0.05, 2.0), nut=RULES, saddle=st.sampled_from(["course", "each"])
)
def test_saddle_points_keep_to_the_strip(strung, seed, width_mm, nut, saddle):
    case = strung(seed)
    free, held = solve(case, nut, saddle), solve(case, nut, saddle, width_mm)
    points = case.ends.bridge_mm + held.setback_mm[:, None] * case.ends.direction
    assert narrowest_strip(points).width_mm <= width_mm + 1e-9
    assert held.strip.width_mm == pytest.approx(narrowest_strip(points).width_mm, abs=1e-9)
    assert held.limit_cost_cents >= -1e-12
    assert held.limit_cost_cents == pytest.approx(
        held.misfit.rms_cents - free.misfit.rms_cents, abs=1e-12
    )
    narrower = solve(case, nut, saddle, width_mm / 2)
    assert narrower.misfit.rms_cents >= held.misfit.rms_cents - 1e-7


@few
@given(seed=SEEDS, nut=RULES, saddle=RULES)
def test_the_mirror_image_has_the_same_figures(strung, seed, nut, saddle):
    case = strung(seed)
    flip = np.array([1.0, -1.0])
    ends = case.ends
    mirrored = replace(
        case, ends=EndLines(ends.nut_mm * flip, ends.bridge_mm * flip, ends.course, ends.own_nut)
    )
    for width_mm in (None, 1.0):
        here, there = solve(case, nut, saddle, width_mm), solve(mirrored, nut, saddle, width_mm)
        for name in ("nut_shift_mm", "setback_mm"):
            np.testing.assert_allclose(getattr(here, name), getattr(there, name), rtol=0, atol=1e-6)
        assert here.strip.at_centre_mm == pytest.approx(there.strip.at_centre_mm, abs=1e-6)
        assert here.strip.slant == pytest.approx(-there.strip.slant, abs=1e-6)


@few
@given(seed=SEEDS, strings=st.integers(1, 7))
def test_more_freedom_never_costs(strung, seed, strings):
    case = strung(seed, strings=strings)
    rules = [("none", "none"), ("none", "straight"), ("none", "each"), ("each", "each")]
    rms = [solve(case, nut, saddle).misfit.rms_cents for nut, saddle in rules]
    assert np.diff(rms).max() <= 1e-9


@few
@given(
    seed=SEEDS,
    step_cents=st.sampled_from([50.0, 78.0]),
    lift_mm=st.floats(0.0, 3.0),
    nut=RULES,
    saddle=RULES,
)
def test_high_nuts_and_small_steps_end_where_no_small_move_lowers_the_sum(
    strung, seed, step_cents, lift_mm, nut, saddle
):
    case = strung(seed, strings=4, frets=20)
    number = np.arange(1, 21)
    stops_mm = case.lie.scale_mm[:, None] * (1 - 2.0 ** (-step_cents * number / 1200))
    target_cents = np.broadcast_to(step_cents * number, stops_mm.shape)
    case = replace(
        case,
        balance=replace(case.balance, stops_mm=stops_mm, target_cents=target_cents),
        lie=replace(
            case.lie,
            height_at_nut_mm=case.lie.height_at_nut_mm + lift_mm,
            relief_from_mm=stops_mm[:, 0],
            relief_to_mm=stops_mm[:, -1],
        ),
    )
    found = solve(case, nut, saddle)
    shift, setback = found.nut_shift_mm, found.setback_mm
    least = total(case, shift, setback) * (1 - 1e-12)
    for moved in neighbours(nut, shift, case.ends.nut_mm, case.ends):
        assert total(case, moved, setback) >= least
    for moved in neighbours(saddle, setback, case.ends.bridge_mm, case.ends):
        assert total(case, shift, moved) >= least
