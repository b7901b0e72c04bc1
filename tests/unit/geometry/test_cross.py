import math

import numpy as np
import pytest

from layout.geometry.cross import CrossLine, line_through


def test_x_rises_toward_the_treble_side():
    line = CrossLine(100.0, 0.1)
    assert line.x_at([-20.0, 0.0, 20.0]).tolist() == [98.0, 100.0, 102.0]
    assert math.tan(line.angle) == pytest.approx(0.1, rel=1e-15)


def test_moving_along_and_square():
    line = CrossLine(100.0, 0.75)
    assert line.moved(5.0) == CrossLine(105.0, 0.75)
    assert line.moved_square(4.0) == CrossLine(105.0, 0.75)  # 4 / cos(angle), angle of a 3-4-5


def test_through_two_points_in_any_order():
    line = line_through((10.0, 30.0), (4.0, -30.0))
    assert line == line_through((4.0, -30.0), (10.0, 30.0))
    assert line.x_at([30.0, 0.0, -30.0]) == pytest.approx([10.0, 7.0, 4.0], abs=1e-12)


@pytest.mark.parametrize("slope", [-0.4, 0.0, 0.25])
def test_distance_along_ends_on_the_line(slope):
    line = CrossLine(320.0, slope)
    start = np.array([[0.0, 18.0], [3.0, -18.0], [400.0, 5.0]])
    turn = np.array([0.012, -0.02, 0.3])
    way = np.stack((np.cos(turn), np.sin(turn)), axis=1)
    distance = line.distance_along(start, way)
    met = start + distance[:, None] * way
    assert met[:, 0] == pytest.approx(line.x_at(met[:, 1]), abs=1e-12)
    assert (distance > 0).tolist() == [True, True, False]
