import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings.inequality import solve_bounded, solve_least_distance, solve_nonnegative


def test_nothing_positive_helps():
    np.testing.assert_array_equal(solve_nonnegative(np.eye(3), -np.ones(3)), np.zeros(3))


def test_no_columns():
    assert solve_nonnegative(np.zeros((3, 0)), np.ones(3)).shape == (0,)


def test_a_column_of_noughts_is_left_out():
    found = solve_nonnegative(np.array([[0.0, 2.0], [0.0, 0.0]]), np.array([3.0, 1.0]))
    np.testing.assert_allclose(found, [0.0, 1.5], rtol=0, atol=1e-15)


def test_a_coefficient_taken_early_is_dropped_again():
    # The first column gains most at first, but the other two meet the target exactly.
    columns = np.array([[1.0, 1.0, 0.0], [1.0, 0.0, 1.0], [0.4, 0.0, 0.0]])
    found = solve_nonnegative(columns, np.array([1.0, 1.0, 0.0]))
    np.testing.assert_allclose(found, [0.0, 1.0, 1.0], rtol=0, atol=1e-12)


def test_inequalities_already_met_ask_for_nothing():
    found = solve_least_distance(np.ones((2, 3)), np.array([-1.0, 0.0]), question="trial")
    np.testing.assert_array_equal(found, np.zeros(3))
    assert solve_least_distance(np.zeros((0, 3)), np.zeros(0), question="trial").shape == (3,)


def test_contradicting_inequalities_are_an_error():
    sides = np.array([[1.0, 0.0], [-1.0, 0.0]])
    with pytest.raises(NoSolutionError, match="trial"):
        solve_least_distance(sides, np.array([1.0, 1.0]), question="trial")


def test_a_corner_of_two_inequalities():
    """Nearest to (3, 3) with x <= 1 and y <= 2."""
    found = solve_bounded(np.eye(2), np.full(2, 3.0), -np.eye(2), np.array([-1.0, -2.0]))
    np.testing.assert_allclose(found, [1.0, 2.0], rtol=0, atol=1e-12)


def test_weights_decide_what_gives_way():
    """x + y <= 1 with x heavy: y gives way; by the multiplier, x = 1 - 1/101, y = 1 - 100/101."""
    matrix = np.diag([10.0, 1.0])
    found = solve_bounded(matrix, matrix @ np.ones(2), np.array([[-1.0, -1.0]]), np.array([-1.0]))
    np.testing.assert_allclose(found, [1 - 1 / 101, 1 - 100 / 101], rtol=0, atol=1e-12)


def test_inequalities_far_from_touching_change_nothing():
    rng = np.random.default_rng(2)
    matrix, wanted = rng.normal(size=(6, 3)), rng.normal(size=6)
    found = solve_bounded(matrix, wanted, rng.normal(size=(4, 3)), np.full(4, -100.0))
    plain = np.linalg.lstsq(matrix, wanted, rcond=None)[0]
    np.testing.assert_allclose(found, plain, rtol=0, atol=1e-12)
