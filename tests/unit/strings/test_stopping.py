import numpy as np
import pytest

from layout.strings import stopping
from layout.strings.stopping import StringBody, StringLie, predict_stops, split_error
from layout.strings.support import Tail

BODY = StringBody(
    np.array([0.374e-3, 3.289e-3]), np.array([3306.0, 3278.0]), np.array([1.05e-4, 1.6e-4])
)
STOPS_MM = 650.0 * (1 - 2 ** (-np.array([1, 5, 12, 19]) / 12)) * np.ones((2, 1))


def lie(**changes):
    given = {
        "open_hz": [329.63, 110.0],
        "scale_mm": [650.0, 650.0],
        "height_at_nut_mm": 1.0,
        "height_at_saddle_mm": [5.0, 5.5],
        "finger_behind_mm": 8.0,
    }
    return StringLie(**(given | changes))


def test_shapes_and_open_string():
    found = predict_stops(BODY, lie(), STOPS_MM, nut_shift_mm=0.4, setback_mm=[1.0, 2.0])
    assert found.cents.shape == found.length_mm.shape == found.stretch.shape == (2, 4)
    np.testing.assert_allclose(
        found.open_length_mm, np.hypot([650.6, 651.6], [4.0, 4.5]), rtol=1e-15
    )
    assert (found.tension_n > found.tension_open_n[:, None]).all()


def test_leading_axes_of_moves_and_stops():
    shifts, setbacks = np.array([[0.0, 0.0], [0.3, 0.4]]), np.array([1.0, 2.0])
    stops = STOPS_MM + np.array([0.0, 0.1, 0.2])[:, None, None, None]
    found = predict_stops(BODY, lie(), stops, nut_shift_mm=shifts, setback_mm=setbacks)
    assert found.cents.shape == (3, 2, 2, 4)
    assert found.tension_open_n.shape == (3, 2, 2)
    for i, j in np.ndindex(3, 2):
        alone = predict_stops(BODY, lie(), stops[i, 0], nut_shift_mm=shifts[j], setback_mm=setbacks)
        np.testing.assert_allclose(found.cents[i, j], alone.cents, rtol=0, atol=1e-11)
        parts = split_error(found, [100.0, 500.0, 1200.0, 1900.0])
        np.testing.assert_allclose(
            parts.tension[i, j],
            split_error(alone, [100.0, 500.0, 1200.0, 1900.0]).tension,
            rtol=0,
            atol=1e-11,
        )


def test_leading_axes_of_the_strings():
    bodies = StringBody(
        BODY.unit_mass_kg_per_m,
        BODY.axial_stiffness_n * np.array([[1.0], [2.0]]),
        BODY.bending_stiffness_n_m2,
    )
    found = predict_stops(bodies, lie(), STOPS_MM)
    assert found.cents.shape == (2, 2, 4)
    np.testing.assert_allclose(found.cents[0], predict_stops(BODY, lie(), STOPS_MM).cents)
    assert (found.cents[1] > found.cents[0]).all()


def test_blocks_do_not_show(monkeypatch):
    stops = np.linspace(40.0, 500.0, 60).reshape(2, 30)
    whole = predict_stops(BODY, lie(relief_mm=0.1), stops).cents
    for size in (1, 7, 30, 45):
        monkeypatch.setattr(stopping, "BLOCK_ELEMENTS", size)
        parts = predict_stops(BODY, lie(relief_mm=0.1), stops).cents
        np.testing.assert_allclose(parts, whole, rtol=0, atol=1e-11)


def test_missing_stops_stay_missing_and_quiet():
    holes = STOPS_MM.copy()
    holes[0, 1] = holes[1, :] = np.nan
    relief = {"relief_mm": 0.1, "relief_from_mm": [40.0, np.nan], "relief_to_mm": [360.0, np.nan]}
    for stop in (lie().stop, Tail(8.0)):
        with np.errstate(all="raise"):
            found = predict_stops(BODY, lie(stop=stop, **relief), holes)
            parts = split_error(found, 0.0)
        assert np.isnan(found.cents).sum() == np.isnan(parts.stiffness).sum() == 5
        assert np.isfinite(found.tension_open_n).all()


def test_no_stops_at_all():
    assert predict_stops(BODY, lie(), np.empty((2, 0))).cents.shape == (2, 0)


def test_a_string_that_only_changes_length_is_in_tune():
    flexible = StringBody(BODY.unit_mass_kg_per_m, np.zeros(2), np.zeros(2))
    level = lie(height_at_nut_mm=0.0, height_at_saddle_mm=0.0)
    found = predict_stops(flexible, level, STOPS_MM)
    np.testing.assert_allclose(found.cents, [[100.0, 500.0, 1200.0, 1900.0]] * 2, atol=1e-10)
    parts = split_error(found, [100.0, 500.0, 1200.0, 1900.0])
    for part in (parts.length, parts.mass, parts.tension, parts.stiffness):
        np.testing.assert_allclose(part, 0.0, rtol=0, atol=1e-10)


def test_what_makes_a_stop_sharper():
    def twelfth(**changes):
        return predict_stops(BODY, lie(**changes), STOPS_MM).cents[0, 2]

    calm = twelfth()
    assert twelfth(height_at_saddle_mm=6.0) > calm
    assert twelfth(finger_press_mm=0.5) > calm + 1.0
    assert twelfth(free_mm=200.0) < calm
    assert twelfth(stop=Tail(4.0)) > calm
    shorter = predict_stops(BODY, lie(), STOPS_MM, setback_mm=-1.0).cents[0, 2]
    assert shorter > calm + 2.0


def test_stops_past_the_saddle_are_refused():
    with pytest.raises(ValueError, match="a stop lies at or past the saddle"):
        predict_stops(BODY, lie(), [[100.0, 652.0], [100.0, 200.0]], setback_mm=2.0)


def test_a_stopped_string_is_never_slacker_than_open():
    found = predict_stops(
        BODY, lie(height_at_nut_mm=3.0, height_at_saddle_mm=0.0, finger_behind_mm=0.0), STOPS_MM
    )
    assert (found.stretch > 0.0).all()
    on_the_line = lie(height_at_nut_mm=0.0, height_at_saddle_mm=0.0)
    level = predict_stops(BODY, on_the_line, STOPS_MM)
    np.testing.assert_allclose(level.stretch, 0.0, rtol=0, atol=1e-15)
