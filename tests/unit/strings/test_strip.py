import numpy as np
import pytest

from layout.strings.strip import Strip, hull_slants, narrowest_strip


def test_a_single_point_lies_along_the_line_it_belongs_to():
    strip = narrowest_strip(np.array([[640.0, 10.0]]), along=0.1)
    assert strip.slant == 0.1
    assert strip.width_mm == 0.0
    assert strip.at_centre_mm == pytest.approx(640 - 10 * np.tan(0.1), abs=1e-9)


def test_two_points_are_joined():
    strip = narrowest_strip(np.array([[641.0, 10.0], [643.0, -10.0]]))
    assert strip.slant == pytest.approx(np.arctan(-0.1), abs=1e-12)
    assert strip.at_centre_mm == pytest.approx(642.0, abs=1e-9)
    assert strip.width_mm == pytest.approx(0.0, abs=1e-9)


def test_slant_is_positive_when_the_treble_end_is_nearer_the_bridge():
    assert narrowest_strip(np.array([[643.0, 10.0], [641.0, -10.0]])).slant > 0


def test_collinear_points():
    y = np.linspace(27, -27, 6)
    strip = narrowest_strip(np.column_stack([640 + 0.07 * y, y]))
    assert strip.width_mm == pytest.approx(0.0, abs=1e-9)
    assert np.tan(strip.slant) == pytest.approx(0.07, abs=1e-12)
    assert strip.at_centre_mm == pytest.approx(640.0, abs=1e-9)


def test_width_is_measured_square_to_the_strip():
    # A 3-4-5 parallelogram: long sides along (3, 4), 1 apart along x, 0.8 apart square to them.
    points = np.array([[0.0, 0.0], [30.0, 40.0], [1.0, 0.0], [31.0, 40.0]])
    strip = narrowest_strip(points)
    assert strip.width_mm == pytest.approx(0.8, abs=1e-9)
    assert np.tan(strip.slant) == pytest.approx(0.75, abs=1e-12)
    assert strip.at_centre_mm == pytest.approx(0.5, abs=1e-9)


def test_of_equally_narrow_strips_the_one_nearest_the_line_is_taken():
    rhomb = np.array([[640.0, 10.0], [643.0, 0.0], [640.0, -10.0], [637.0, 0.0]])
    assert np.tan(narrowest_strip(rhomb, along=0.1).slant) == pytest.approx(0.3, abs=1e-12)
    assert np.tan(narrowest_strip(rhomb, along=-0.1).slant) == pytest.approx(-0.3, abs=1e-12)


def test_strips_along_the_strings_are_not_meant():
    strip = narrowest_strip(np.array([[640.0, 0.0], [644.0, 0.0]]))
    assert strip == Strip(642.0, 0.0, 4.0)


def test_coincident_points():
    assert narrowest_strip(np.array([[640.0, 1.0]] * 3)).width_mm == 0.0


def test_no_point():
    with pytest.raises(ValueError, match="at least one point"):
        narrowest_strip(np.zeros((0, 2)))


def test_hull_slants_leave_out_inner_lines():
    square = np.array([[0.0, 10.0], [2.0, 10.0], [0.0, -10.0], [2.0, -10.0], [1.0, 0.0]])
    np.testing.assert_allclose(hull_slants(square), 0.0, rtol=0, atol=1e-12)
    assert hull_slants(square[:1]).shape == (0,)
