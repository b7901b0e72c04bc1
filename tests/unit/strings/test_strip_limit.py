import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings.bowl import Linearised
from layout.strings.strip_limit import Placed, solve_in_strip

Y_MM = np.array([20.0, 0.0, -20.0])


def wish(target, slopes=None):
    """Three points on x-parallel strings, each wanting an x of its own."""
    slopes = np.eye(3) if slopes is None else slopes

    def linearise(x):
        residuals = slopes @ (x - target)
        return Linearised(float(residuals @ residuals), residuals, slopes, x, np.eye(3))

    return linearise


def place(x):
    slopes = np.zeros((3, 2, 3))
    slopes[:, 0] = np.eye(3)
    return Placed(np.column_stack([x, Y_MM]), slopes)


def test_three_points_share_the_giving_way():
    """(0, 3, 0) in a strip 1 wide: by symmetry upright, the outer ones and the middle one touch.

    The outer two rise by u, the middle falls by w, w + u = 2; 2 u^2 + w^2 least at u = 2/3.
    """
    held = solve_in_strip(
        wish(np.array([0.0, 3.0, 0.0])), place, np.array([0.0, 3.0, 0.0]), width_mm=1.0, slant=0.0
    )
    np.testing.assert_allclose(held.unknowns, [2 / 3, 5 / 3, 2 / 3], rtol=0, atol=1e-7)
    assert held.slant == pytest.approx(0.0, abs=1e-8)
    assert held.sum_of_squares == pytest.approx(8 / 3, abs=1e-7)


def test_a_slanted_start_comes_upright():
    held = solve_in_strip(
        wish(np.array([0.0, 3.0, 0.0])), place, np.array([0.0, 3.0, 0.0]), width_mm=1.0, slant=0.1
    )
    np.testing.assert_allclose(held.unknowns, [2 / 3, 5 / 3, 2 / 3], rtol=0, atol=1e-6)


def test_an_unfelt_unknown_moves_least():
    """The middle point has no wish: it stays as near 0 as the strip round the others lets it."""
    slopes = np.diag([1.0, 0.0, 1.0])
    held = solve_in_strip(
        wish(np.array([5.0, 0.0, 5.0]), slopes), place, np.zeros(3), width_mm=1.0, slant=0.0
    )
    np.testing.assert_allclose(held.unknowns, [5.0, 4.0, 5.0], rtol=0, atol=1e-6)


def test_points_that_cannot_follow_are_an_error():
    def stuck(x):
        return Placed(np.column_stack([[0.0, 3.0, 0.0], Y_MM]), np.zeros((3, 2, 3)))

    with pytest.raises(NoSolutionError):
        solve_in_strip(wish(np.zeros(3)), stuck, np.zeros(3), width_mm=0.5, slant=0.0)
