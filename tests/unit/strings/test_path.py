import numpy as np
import pytest

from layout.strings.path import stopped_path_mm

NUT, SADDLE = (np.array(0.0), np.array(1.0)), (np.array(650.0), np.array(5.0))


def path(x, z, **finger):
    found = stopped_path_mm((np.array(x), z), nut=NUT, saddle=SADDLE, **finger)
    return [float(value) for value in found]


def test_without_a_finger_behind():
    sounding, whole = path(250.0, 0.0, behind=0.0, press=0.0)
    assert sounding == pytest.approx(np.hypot(400.0, 5.0), rel=1e-15)
    assert whole == pytest.approx(np.hypot(400.0, 5.0) + np.hypot(250.0, 1.0), rel=1e-15)


@pytest.mark.parametrize("press", [0.0, 0.3])
def test_the_finger_lies_on_the_line_from_the_saddle(press):
    _, whole = path(250.0, -0.1, behind=10.0, press=press)
    finger = np.array([240.0, -0.1 - 10.0 * 5.1 / 400.0 - press])
    points = np.array([[650.0, 5.0], [250.0, -0.1], finger, [0.0, 1.0]])
    by_hand = np.hypot(*np.diff(points, axis=0).T).sum()
    assert whole == pytest.approx(by_hand, rel=1e-15)


def test_near_the_nut_the_finger_is_half_way():
    _, near = path(12.0, 0.0, behind=10.0, press=0.0)
    _, half = path(12.0, 0.0, behind=6.0, press=0.0)
    assert near == half


def test_no_press_and_hardly_any_press_agree():
    for behind in (0.0, 8.0):
        assert path(300.0, 0.0, behind=behind, press=0.0) == pytest.approx(
            path(300.0, 0.0, behind=behind, press=1e-12), rel=1e-14
        )
