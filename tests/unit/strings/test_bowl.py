import numpy as np
import pytest

from layout.strings.bowl import Linearised, make_bowl, measure_bend, split_felt, with_bend


def look(x):
    """Two curved residuals of three unknowns; the third changes nothing."""
    residuals = np.array([x[0] ** 2 + 3 * x[1] - 7, np.sin(x[0]) * x[1] + 2])
    slopes = np.array([[2 * x[0], 3.0, 0.0], [np.cos(x[0]) * x[1], np.sin(x[0]), 0.0]])
    return Linearised(float(residuals @ residuals), residuals, slopes, x, np.eye(3))


AT = np.array([0.4, 1.1, 5.0])


def bend_by_hand(x):
    """Residuals times their second derivatives."""
    first, second = look(x).residuals
    bend = np.zeros((3, 3))
    bend[0, 0] = 2 * first - np.sin(x[0]) * x[1] * second
    bend[0, 1] = bend[1, 0] = np.cos(x[0]) * second
    return bend


def test_measured_bend():
    found = measure_bend(look, AT, here=look(AT))
    np.testing.assert_allclose(found, bend_by_hand(AT), rtol=0, atol=0.05)
    np.testing.assert_array_equal(found, found.T)


def test_bend_is_measured_on_the_side_that_is_possible():
    def half(x):
        known = look(x)
        if x[0] > AT[0]:
            return Linearised(np.inf, known.residuals, known.slopes, x, np.eye(3))
        return known

    found = measure_bend(half, AT, here=look(AT))
    np.testing.assert_allclose(found, bend_by_hand(AT), rtol=0, atol=0.05)


def test_bend_of_an_unknown_without_room_is_none():
    here = look(AT)

    def nowhere(x):
        return Linearised(np.inf, here.residuals, here.slopes, x, np.eye(3))

    assert not measure_bend(nowhere, AT, here=here).any()


def test_bowl_of_newton_follows_the_sum():
    here, bend = look(AT), bend_by_hand(AT)
    bowl = make_bowl(here, bend)
    assert bowl.felt.shape == (3, 2)
    for way in np.eye(2):
        step = 1e-3 * (bowl.felt @ way)
        along = 1e-3 * way
        foretold = 2 * bowl.pulls @ along + bowl.bends @ along**2
        assert look(AT + step).sum_of_squares - here.sum_of_squares == pytest.approx(
            foretold, abs=1e-7
        )


@pytest.mark.parametrize("bend", [None, bend_by_hand(AT)])
def test_damping_shortens_a_step_that_goes_down(bend):
    bowl = make_bowl(look(AT), bend)
    falls = [bowl.fall(damping) for damping in (0.0, 1.0, 10.0, 1e6)]
    assert np.min(falls) > 0
    assert np.diff([np.linalg.norm(bowl.along(damping)) for damping in (0.0, 1.0, 10.0)]).max() < 0
    first = bowl.more_damping(0.0)
    assert 0.2 < np.linalg.norm(bowl.along(first)) / np.linalg.norm(bowl.along()) < 0.9
    assert bowl.more_damping(first) >= 4 * first


def test_least_moves_are_taken_along_what_is_not_felt():
    bowl = make_bowl(look(AT))
    assert bowl.step()[2] == pytest.approx(-5.0)
    assert bowl.step(share=0.25)[2] == pytest.approx(-1.25)
    assert bowl.step(share=0.0)[2] == 0.0


def test_a_direction_with_a_bend_alone_is_felt_where_residuals_remain():
    bend = np.diag([3.0, 0.0])
    slopes, moves = np.array([[0.0, 1.0]]), np.array([5.0, 0.0])
    remains = Linearised(9.0, np.array([-1.0]), slopes, moves, np.eye(2))
    np.testing.assert_allclose(make_bowl(remains, bend).step(), [0.0, 1.0], atol=1e-12)
    # The same where the other residuals are met: nothing can hold the first unknown.
    met = Linearised(1.0, np.array([-1.0]), slopes, moves, np.eye(2))
    np.testing.assert_allclose(make_bowl(met, bend).step(), [-5.0, 1.0], atol=1e-12)


def test_squares_with_the_bend_take_the_same_step():
    here = look(AT)
    bend = np.diag([40.0, 40.0, 0.0]) + bend_by_hand(AT)
    bowl, bent = make_bowl(here, bend), with_bend(here, bend)
    np.testing.assert_allclose(make_bowl(bent).step(), bowl.step(), rtol=0, atol=1e-9)
    assert with_bend(here, None) is here


def test_an_unknown_that_moves_nothing_stays():
    slopes = np.array([[1.0, 1e-18]])
    here = Linearised(1.0, np.array([-1.0]), slopes, np.zeros(1), slopes)
    np.testing.assert_allclose(make_bowl(here).step(), [1.0, 0.0], rtol=0, atol=1e-12)


def test_split_felt_counts_a_direction_of_a_ten_millionth_as_not_felt():
    assert split_felt(np.diag([1.0, 2e-7]))[1].shape == (2, 0)
    assert split_felt(np.diag([1.0, 5e-8]))[1].shape == (2, 1)
    assert split_felt(np.zeros((4, 3)))[0].shape == (3, 0)


def test_a_place_is_possible_where_sum_and_slopes_are_known():
    here = look(AT)
    assert here.is_possible
    assert not Linearised(np.nan, here.residuals, here.slopes, AT, np.eye(3)).is_possible
    assert not Linearised(1.0, here.residuals, np.nan * here.slopes, AT, np.eye(3)).is_possible
    assert here.largest_move(np.array([0.0, -2.0, 1.0])) == 2.0
