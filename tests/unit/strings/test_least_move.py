import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings.least_move import (
    Linearised,
    is_settled,
    least_move_step,
    solve_least_move,
    split_felt,
)


def linear(slopes, target):
    def linearise(x):
        residuals = slopes @ x - target
        return Linearised(float(residuals @ residuals), residuals, slopes, x, np.eye(len(x)))

    return linearise


def test_linear_problem_is_solved_like_the_pseudo_inverse():
    rng = np.random.default_rng(1)
    slopes, target = rng.normal(size=(3, 5)), rng.normal(size=3)
    found = solve_least_move(linear(slopes, target), np.zeros(5))
    np.testing.assert_allclose(found, np.linalg.pinv(slopes) @ target, rtol=0, atol=1e-12)


def test_least_move_is_found_from_anywhere():
    slopes, target = np.array([[3.0, 4.0]]), np.array([5.0])
    found = solve_least_move(linear(slopes, target), np.array([70.0, -20.0]))
    np.testing.assert_allclose(found, [0.6, 0.8], rtol=0, atol=1e-12)


def test_least_move_on_a_circle():
    """Nearest to (0.75, 1) among all points of the unit circle: curved, one equation."""

    def linearise(x):
        residual = np.array([x @ x - 1.0])
        away = x - np.array([0.75, 1.0])
        return Linearised(float(residual @ residual), residual, 2 * x[None], away, np.eye(2))

    found = solve_least_move(linearise, np.array([1.0, 0.2]))
    np.testing.assert_allclose(found, [0.6, 0.8], rtol=0, atol=2e-8)


def test_steps_are_halved_where_the_sum_would_rise():
    calls = []

    def linearise(x):
        calls.append(float(x[0]))
        residual = np.arctan(x)  # full steps from beyond 1.39 run off to infinity
        return Linearised(
            float(residual @ residual), residual, np.diag(1 / (1 + x**2)), x, np.eye(1)
        )

    assert solve_least_move(linearise, np.array([5.0])) == pytest.approx(0.0, abs=1e-8)
    assert min(calls) < -5


def test_a_place_that_is_impossible_is_backed_away_from():
    def linearise(x):
        if x[0] > 1.5:
            return Linearised(np.inf, np.zeros(0), np.zeros((0, 1)), x, np.eye(1))
        residual = np.log1p(2 * x) - 1.0
        return Linearised(
            float(residual @ residual), residual, np.diag(2 / (1 + 2 * x)), x, np.eye(1)
        )

    found = solve_least_move(linearise, np.array([-0.45]))
    assert found[0] == pytest.approx((np.e - 1) / 2, abs=1e-8)


def test_slopes_that_lie_end_in_an_error():
    def linearise(x):
        residual = x - 1.0
        return Linearised(float(residual @ residual), residual, -np.eye(1), x, np.eye(1))

    with pytest.raises(NoSolutionError, match="trial: no solution after 25 steps"):
        solve_least_move(linearise, np.zeros(1), question="trial")


def test_steps_without_end_are_an_error():
    def linearise(x):
        return Linearised(float(np.exp(-x[0])), np.array([-1.0]), np.eye(1), x, np.eye(1))

    with pytest.raises(NoSolutionError, match="after 60 steps"):
        solve_least_move(linearise, np.zeros(1))


def test_no_unknowns():
    assert solve_least_move(linear(np.zeros((3, 0)), np.ones(3)), np.zeros(0)).shape == (0,)


def test_an_unknown_that_moves_nothing_stays():
    slopes = np.array([[1.0, 1e-18]])
    here = Linearised(1.0, np.array([-1.0]), slopes, np.zeros(1), slopes)
    np.testing.assert_allclose(least_move_step(here), [1.0, 0.0], rtol=0, atol=1e-12)


def test_split_felt_counts_a_direction_of_a_ten_millionth_as_not_felt():
    assert split_felt(np.diag([1.0, 2e-7]))[1].shape == (2, 0)
    assert split_felt(np.diag([1.0, 5e-8]))[1].shape == (2, 1)
    assert split_felt(np.zeros((4, 3)))[0].shape == (3, 0)


def test_steps_that_no_longer_shrink_are_rounding():
    assert is_settled(9e-9, before=1.0)
    assert is_settled(5e-7, before=6e-7)
    assert not is_settled(5e-7, before=1e-3)
    assert not is_settled(2e-6, before=2e-6)
