import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings.bowl import Linearised
from layout.strings.least_move import is_settled, is_slow, solve_least_move


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


@pytest.mark.parametrize("start", [(1.0, 0.2), (0.0, 1.0), (0.6, -0.8), (30.0, -40.0)])
def test_least_move_on_a_circle(start):
    """Nearest to (0.75, 1) among all points of the unit circle, also from a point on it."""

    def linearise(x):
        residual = np.array([x @ x - 1.0])
        away = x - np.array([0.75, 1.0])
        return Linearised(float(residual @ residual), residual, 2 * x[None], away, np.eye(2))

    found = solve_least_move(linearise, np.array(start))
    np.testing.assert_allclose(found, [0.6, 0.8], rtol=0, atol=2e-8)


def curved(residuals_and_slopes):
    """Count the places asked for, and give squares there."""
    asked = []

    def linearise(x):
        asked.append(x)
        residuals, slopes = residuals_and_slopes(x)
        return Linearised(float(residuals @ residuals), residuals, slopes, x, np.eye(len(x)))

    return linearise, asked


def test_large_residuals_on_curved_slopes_do_not_swing():
    """The residuals (x + 1, -3 x^2 + x - 1): steps without the bend grow threefold and swing.

    A textbook example, from memory. By hand half the sum's slope is ``x (18 x^2 - 9 x + 8)``,
    which vanishes at 0 only; there the slopes' squares are 2 and the bend is 6 more.
    """

    def residuals_and_slopes(x):
        return np.array([x[0] + 1, -3 * x[0] ** 2 + x[0] - 1]), np.array([[1.0], [1 - 6 * x[0]]])

    linearise, asked = curved(residuals_and_slopes)
    for start in (0.01, 0.3, -2.0, 5.0):
        asked.clear()
        assert solve_least_move(linearise, np.array([start]))[0] == pytest.approx(0.0, abs=1e-8)
        assert len(asked) < 40


def test_residuals_that_slopes_cannot_reach_leave_a_bend():
    """The residuals (x^2 + 2, y - 1): at the least sum x has no slope, and still is felt."""

    def residuals_and_slopes(x):
        return np.array([x[0] ** 2 + 2, x[1] - 1]), np.array([[2 * x[0], 0.0], [0.0, 1.0]])

    linearise, _ = curved(residuals_and_slopes)
    found = solve_least_move(linearise, np.array([1.5, 0.0]))
    np.testing.assert_allclose(found, [0.0, 1.0], rtol=0, atol=2e-8)


def test_slopes_that_jump_end_beside_the_jump():
    """|x| + 1 and x + y: the slope of the first jumps at 0, and is smeared as differences are."""

    def residuals_and_slopes(x):
        smeared = np.clip(x[0] / 5e-3, -1.0, 1.0)
        return np.array([abs(x[0]) + 1, x[0] + x[1] - 3]), np.array([[smeared, 0.0], [1.0, 1.0]])

    linearise, _ = curved(residuals_and_slopes)
    found = solve_least_move(linearise, np.array([0.7, -1.0]))
    np.testing.assert_allclose(found, [0.0, 3.0], rtol=0, atol=5e-3)


def test_easy_problems_take_few_looks():
    """Small residuals: the bend is never measured."""

    def residuals_and_slopes(x):
        rows = np.column_stack([np.arange(1.0, 6.0), np.arange(3.0, 8.0)])
        stretched = rows @ x / 20
        wanted = np.array([0.5, 0.7, 0.8, 1.0, 1.2])
        return 20 * np.expm1(stretched) - wanted, np.exp(stretched)[:, None] * rows

    linearise, asked = curved(residuals_and_slopes)
    solve_least_move(linearise, np.zeros(2))
    assert len(asked) <= 7


def test_steps_are_damped_where_the_sum_would_rise():
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

    with pytest.raises(NoSolutionError, match="trial: no solution after 2 steps"):
        solve_least_move(linearise, np.zeros(1), question="trial")


def test_a_sum_that_falls_for_ever_is_an_error():
    linearise, _ = curved(lambda x: (np.exp(-x), -np.diag(np.exp(-x))))
    with pytest.raises(NoSolutionError, match="after 100 steps"):
        solve_least_move(linearise, np.zeros(1))


def test_no_unknowns():
    assert solve_least_move(linear(np.zeros((3, 0)), np.ones(3)), np.zeros(0)).shape == (0,)


def test_an_impossible_start_is_an_error():
    def linearise(x):
        return Linearised(np.inf, np.zeros(0), np.zeros((0, 1)), x, np.eye(1))

    with pytest.raises(NoSolutionError, match="trial: no solution after 0 steps"):
        solve_least_move(linearise, np.zeros(1), question="trial")


def test_steps_that_no_longer_shrink_are_rounding():
    near, far = np.array([3.0]), np.array([-300.0])
    assert is_settled(9e-9, before=1.0, moves=near)
    assert is_settled(5e-7, before=6e-7, moves=near)
    assert not is_settled(5e-7, before=1e-3, moves=near)
    assert not is_settled(2e-6, before=2e-6, moves=near)
    assert is_settled(2e-6, before=2e-6, moves=far)
    assert is_settled(5e-7, before=6e-7, moves=np.zeros(0))


def test_slow_steps_ask_for_the_bend():
    assert is_slow(4e-3, before=1e-2)
    assert not is_slow(2e-3, before=1e-2)
    assert not is_slow(9e-7, before=9e-7)
    assert not is_slow(1.0, before=np.inf)
