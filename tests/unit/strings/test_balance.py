from dataclasses import replace

import numpy as np
import pytest

from layout.strings.balance import Balance, Misfit, Response, measure_misfit
from layout.strings.moves import free_unknowns


def respond(case, nut="each", saddle="each"):
    shared = {
        "course": case.ends.course,
        "fretted": case.balance.fretted,
        "own_edge": case.ends.own_nut,
    }
    return Response(
        case.body,
        case.lie,
        case.balance,
        case.ends,
        free_unknowns(nut, case.ends.nut_mm, case.ends.direction, **shared),
        free_unknowns(saddle, case.ends.bridge_mm, case.ends.direction, **shared),
    )


def test_rms_is_weighted_and_worst_keeps_its_sign():
    misfit = measure_misfit(
        np.array([[3.0, -4.0, np.nan], [9.0, 0.0, 1.0]]),
        np.array([[1.0, 3.0, 5.0], [0.0, 0.0, 0.0]]),
    )
    assert misfit.rms_cents == pytest.approx(np.sqrt((9 + 3 * 16) / 4), abs=1e-12)
    assert (misfit.worst_cents, misfit.string_index, misfit.fret_index) == (-4.0, 0, 1)


def test_nothing_balanced():
    assert measure_misfit(np.ones((2, 2)), np.zeros((2, 2))) == Misfit(0.0, 0.0, None, None)


def test_shapes_and_weights_are_checked():
    stops = np.ones((2, 3))
    with pytest.raises(ValueError, match="one shape"):
        Balance(stops, np.ones((2, 2)), stops)
    with pytest.raises(ValueError, match="one shape"):
        Balance(stops[0], stops[0], stops[0])
    for weight in (-1.0, np.nan, np.inf):
        with pytest.raises(ValueError, match="weight"):
            Balance(stops, stops, np.full((2, 3), weight))


def test_stops_without_place_or_target_do_not_count():
    balance = Balance(
        np.array([[1.0, np.nan, 3.0], [np.nan] * 3]),
        np.array([[np.nan, 2.0, 3.0], [1.0, 2.0, 3.0]]),
        np.ones((2, 3)),
    )
    assert balance.counted.tolist() == [[0.0, 0.0, 1.0], [0.0, 0.0, 0.0]]
    assert balance.fretted.tolist() == [True, False]


@pytest.mark.parametrize(("nut", "saddle"), [("each", "each"), ("straight", "course")])
def test_turned_squares_change_as_the_sum_does(strung, nut, saddle):
    response = respond(strung(11), nut, saddle)
    rng = np.random.default_rng(0)
    at, way = rng.uniform(-0.5, 0.5, response.count), rng.normal(size=response.count)
    here = response.linearise(at)
    step = 1e-3 * way
    plus, minus = response.linearise(at + step), response.linearise(at - step)
    slope = 2 * here.residuals @ (here.slopes @ step)
    assert (plus.sum_of_squares - minus.sum_of_squares) / 2 == pytest.approx(slope, rel=1e-5)
    np.testing.assert_allclose(
        here.move_slopes @ step, (plus.moves - minus.moves) / 2, rtol=0, atol=1e-9
    )


def test_continued_linearly_agrees_close_by(strung):
    response = respond(strung(12))
    at = np.zeros(response.count)
    near = np.full(response.count, 1e-3)
    found = response.linearise(at)
    sketch, true = response.continue_linearly(found, at, near), response.linearise(near)
    assert sketch.sum_of_squares == pytest.approx(true.sum_of_squares, rel=1e-5)


def test_an_impossible_place_has_an_infinite_sum(strung):
    response = respond(strung(13), saddle="one")
    unknowns = np.zeros(response.count)
    unknowns[-1] = -500.0  # the saddle before the frets
    assert response.linearise(unknowns).sum_of_squares == np.inf


def test_saddle_points_lie_along_the_strings(strung):
    case = strung(14)
    stops = case.balance.stops_mm.copy()
    stops[2] = np.nan
    case = replace(case, balance=replace(case.balance, stops_mm=stops))
    response = respond(case, "none", "one")
    placed = response.place(np.array([2.0]))
    kept = [0, 1, 3, 4, 5]
    np.testing.assert_allclose(
        placed.points_mm,
        case.ends.bridge_mm[kept] + 2.0 * case.ends.direction[kept],
        rtol=0,
        atol=1e-9,
    )
    np.testing.assert_allclose(
        placed.slopes[:, :, 0], case.ends.direction[kept], rtol=0, atol=1e-12
    )
