import numpy as np
import pytest

from layout.strings.moves import Linear, StraightEdge, free_unknowns

ALGEBRA_MM = 1e-9


def lines(strings=4):
    y_nut, y_bridge = np.linspace(15, -15, strings), np.linspace(24, -24, strings)
    nut = np.column_stack([0.1 * y_nut, y_nut])
    bridge = np.column_stack([640 - 0.2 * y_bridge, y_bridge])
    run = bridge - nut
    return nut, bridge, run / np.hypot(*run.T)[:, None]


def free(move, *, fretted=(True,) * 4, own_edge=(False,) * 4, course=(0, 0, 1, 2)):
    _, bridge, direction = lines()
    return free_unknowns(
        move,
        bridge,
        direction,
        course=np.array(course),
        fretted=np.array(fretted),
        own_edge=np.array(own_edge),
    )


@pytest.mark.parametrize(
    ("move", "count"), [("none", 0), ("one", 1), ("straight", 2), ("course", 3), ("each", 4)]
)
def test_number_of_unknowns_and_no_move_at_nought(move, count):
    rule = free(move)
    assert rule.count == count
    np.testing.assert_allclose(rule.figures_mm(np.zeros(count)), 0.0, rtol=0, atol=ALGEBRA_MM)


def test_shared_figures():
    assert free("one").figures_mm(np.array([2.0])).tolist() == [2.0] * 4
    assert free("course").figures_mm(np.array([1.0, 2.0, 3.0])).tolist() == [1.0, 1.0, 2.0, 3.0]
    assert free("each").figures_mm(np.arange(4.0)).tolist() == [0.0, 1.0, 2.0, 3.0]


def test_fixed_figures_leave_nothing_free():
    rule = free(np.array([1.0, 2.0, 3.0, 4.0]))
    assert rule.count == 0
    assert rule.figures_mm(np.zeros(0)).tolist() == [1.0, 2.0, 3.0, 4.0]


@pytest.mark.parametrize("figures", [np.zeros(3), np.array([0.0, np.nan, 0.0, 0.0])])
def test_fixed_figures_are_one_a_string(figures):
    with pytest.raises(ValueError, match="one a string, 4 in all"):
        free(figures)


def test_unknown_rule():
    with pytest.raises(ValueError, match="'both' is not a rule"):
        free("both")


@pytest.mark.parametrize("move", ["one", "course", "each", "straight"])
def test_strings_without_a_stop_stay(move):
    rule = free(move, fretted=(True, True, True, False))
    assert rule.figures_mm(np.ones(rule.count))[3] == 0.0
    assert not rule.slopes(np.ones(rule.count))[3].any()


def test_straight_edge_is_straight_in_plan():
    rule = free("straight")
    _, bridge, direction = lines()
    unknowns = np.array([2.0, -1.5])
    points = bridge + rule.figures_mm(unknowns)[:, None] * direction
    x, y = points.T
    # x = 640 - 0.2 y, moved by 2 at the middle and by a further -1.5 at y = 24.
    np.testing.assert_allclose(x, 642 - (0.2 + 1.5 / 24) * y, rtol=0, atol=ALGEBRA_MM)


def test_straight_edge_slopes():
    rule = free("straight", own_edge=(False, False, False, True))
    at = np.array([1.0, -2.0, 0.5])
    by_difference = np.column_stack(
        [(rule.figures_mm(at + h) - rule.figures_mm(at - h)) / 2e-4 for h in np.eye(3) * 1e-4]
    )
    np.testing.assert_allclose(rule.slopes(at), by_difference, rtol=0, atol=1e-8)


def test_a_short_string_has_an_edge_of_its_own():
    rule = free("straight", own_edge=(False, False, False, True))
    assert isinstance(rule, StraightEdge)
    assert rule.figures_mm(np.array([0.0, 0.0, 7.0]))[3] == 7.0
    assert not rule.figures_mm(np.array([0.0, 0.0, 7.0]))[:3].round(12).any()


def test_only_short_strings():
    rule = free("straight", own_edge=(True,) * 4)
    assert isinstance(rule, Linear)
    assert rule.count == 4


def test_one_string_has_a_straight_edge_too():
    rule = free_unknowns(
        "straight",
        np.array([[640.0, 3.0]]),
        np.array([[1.0, 0.0]]),
        course=np.zeros(1, int),
        fretted=np.ones(1, bool),
        own_edge=np.zeros(1, bool),
    )
    assert rule.figures_mm(np.array([1.5, 9.0])).tolist() == [1.5]
