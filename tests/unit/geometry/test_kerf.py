"""Paths of a beam beside an outline."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose

from layout.geometry.kerf import offset_inward, offset_outward

SLOT = np.array([[0.0, 0.0], [0.6, 0.0], [0.6, 50.0], [0.0, 50.0]])


@pytest.mark.parametrize("points", [SLOT, SLOT[::-1], np.roll(SLOT, 1, axis=0)])
def test_either_way_round_and_any_first_corner(points) -> None:
    found = offset_inward(points, kerf_x_mm=0.2, kerf_y_mm=0.1)
    assert found.bulges == (0.0,) * 4
    middle = np.array([0.3, 25.0])
    assert_allclose(found.points_mm, points - np.sign(points - middle) * [0.1, 0.05], atol=1e-12)
    found = offset_outward(points, kerf_x_mm=0.2, kerf_y_mm=0.1)
    assert_allclose(found.points_mm, points + np.sign(points - middle) * [0.1, 0.05], atol=1e-12)


@pytest.mark.parametrize("degrees", [0, 7, 45, 90, 133, 180, 271])
def test_a_slanted_edge_moves_by_half_the_kerf_across_it(degrees: float) -> None:
    angle = math.radians(degrees)
    turn = np.array([[math.cos(angle), math.sin(angle)], [-math.sin(angle), math.cos(angle)]])
    found = offset_inward(SLOT @ turn, kerf_x_mm=0.2, kerf_y_mm=0.12).points_mm @ turn.T
    # Square to the long edges lies (cos, sin) of the angle: 0.2 and 0.12 mm wide along x and y.
    across = math.hypot(0.2 * math.cos(angle), 0.12 * math.sin(angle))
    along = math.hypot(0.2 * math.sin(angle), 0.12 * math.cos(angle))
    width, length = found.max(axis=0) - found.min(axis=0)
    assert width == pytest.approx(0.6 - across, abs=1e-12)
    assert length == pytest.approx(50 - along, abs=1e-12)


def test_what_is_cut_and_what_is_left_are_two_sides_of_one_path() -> None:
    part = np.array([[0.0, 0.0], [60.0, 2.0], [55.0, 21.0], [30.0, 12.0], [-4.0, 20.0]])
    out = offset_outward(part, kerf_x_mm=0.22, kerf_y_mm=0.15).points_mm
    back = offset_inward(out, kerf_x_mm=0.22, kerf_y_mm=0.15).points_mm
    assert_allclose(back, part, atol=1e-12)


def test_a_round_edge_keeps_its_centre_where_both_kerfs_agree() -> None:
    # A half disc of radius 5 standing on its flat edge.
    points, bulges = np.array([[-5.0, 0.0], [5.0, 0.0]]), (0.0, 1.0)
    out = offset_outward(points, bulges, kerf_x_mm=0.2, kerf_y_mm=0.2)
    # The circle of 5.1 meets the line y = -0.1.
    half = math.sqrt(5.1**2 - 0.1**2)
    assert_allclose(out.points_mm, [[-half, -0.1], [half, -0.1]], atol=1e-12)
    assert out.bulges[0] == 0
    assert 4 * math.atan(out.bulges[1]) == pytest.approx(
        math.pi + 2 * math.asin(0.1 / 5.1), abs=1e-12
    )
    inside = offset_inward(points, bulges, kerf_x_mm=0.2, kerf_y_mm=0.2)
    half = math.sqrt(4.9**2 - 0.1**2)
    assert_allclose(inside.points_mm, [[-half, 0.1], [half, 0.1]], atol=1e-12)


def test_round_ends_stay_tangent() -> None:
    slot = np.array([[0.6, 0.0], [0.6, 50.0], [0.0, 50.0], [0.0, 0.0]])
    found = offset_inward(slot, (0.0, 1.0, 0.0, 1.0), kerf_x_mm=0.2, kerf_y_mm=0.2)
    assert_allclose(found.points_mm, [[0.5, 0], [0.5, 50], [0.1, 50], [0.1, 0]], atol=1e-12)
    assert_allclose(found.bulges, [0, 1, 0, 1], atol=1e-9)


def test_two_round_edges_meet() -> None:
    lens = np.array([[-3.0, 0.0], [3.0, 0.0]])
    bulge = 0.4
    found = offset_outward(lens, (bulge, bulge), kerf_x_mm=0.2, kerf_y_mm=0.2)
    half = 3.0
    radius = half * (1 + bulge**2) / (2 * bulge)
    aside = radius - half * bulge
    reach = math.sqrt((radius + 0.1) ** 2 - aside**2)
    assert_allclose(found.points_mm, [[-reach, 0], [reach, 0]], atol=1e-12)


def test_no_kerf_moves_nothing() -> None:
    found = offset_inward(SLOT, (0.0, 0.3, 0.0, -0.3), kerf_x_mm=0, kerf_y_mm=0)
    assert_allclose(found.points_mm, SLOT, atol=1e-12)
    assert_allclose(found.bulges, [0, 0.3, 0, -0.3], atol=1e-12)


@pytest.mark.parametrize("kerf", [0.6, 0.61, 2.0])
def test_a_slot_as_narrow_as_the_kerf_leaves_no_path(kerf: float) -> None:
    with pytest.raises(ValueError, match="than the kerf"):
        offset_inward(SLOT, kerf_x_mm=kerf, kerf_y_mm=0.1)


def test_an_edge_that_shrinks_away_is_refused() -> None:
    notched = np.array([[0, 0], [9, 0], [9, 9], [5, 9], [5, 8.9], [4.9, 8.9], [4.9, 9], [0, 9.0]])
    with pytest.raises(ValueError, match="shorter than the kerf"):
        offset_outward(notched, kerf_x_mm=0.2, kerf_y_mm=0.2)
    with pytest.raises(ValueError, match="bends more sharply"):
        offset_inward(np.array([[0, 0], [0.1, 0.0]]), (1.0, 1.0), kerf_x_mm=0.2, kerf_y_mm=0.2)


@pytest.mark.parametrize(
    ("points", "bulges", "kerf", "said"),
    [
        (SLOT, (0.0,), (0.1, 0.1), "one bulge a corner, not 1 for 4"),
        (SLOT, (), (-0.1, 0.1), "a kerf is 0 or more"),
        (SLOT, (), (math.nan, 0.1), "a kerf is 0 or more"),
        (SLOT, (0, 0.1, 0, 0), (0.6, 0.1), "at most 5 times"),
        (SLOT[:2], (), (0.1, 0.1), "encloses something"),
        (SLOT[:1], (), (0.1, 0.1), "encloses something"),
    ],
)
def test_what_is_refused(points, bulges, kerf, said) -> None:
    with pytest.raises(ValueError, match=said):
        offset_inward(points, bulges, kerf_x_mm=kerf[0], kerf_y_mm=kerf[1])
