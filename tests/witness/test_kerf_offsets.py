"""Paths of a beam against the buffers of shapely, by a map that makes the beam's spot a circle."""

from __future__ import annotations

import math

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from shapely.affinity import scale

from layout.geometry.kerf import offset_inward, offset_outward


@st.composite
def polygons(draw):
    """Star-shaped outlines of 3 to 9 corners, none of them very sharp, some of them inner ones."""
    count = draw(st.integers(3, 9))
    steps = [draw(st.floats(0.6, 1.4)) for _ in range(count)]
    angles = np.cumsum(steps) / sum(steps) * math.tau
    radii = np.array([draw(st.floats(15, 25)) for _ in range(count)])
    points = np.column_stack([radii * np.cos(angles), radii * np.sin(angles)])
    return points if draw(st.booleans()) else points[::-1]


kerfs = st.floats(0.05, 0.5)


@given(polygons(), kerfs, kerfs, st.sampled_from([offset_inward, offset_outward]))
def test_straight_outlines(points, kerf_x, kerf_y, offset) -> None:
    found = offset(points, kerf_x_mm=kerf_x, kerf_y_mm=kerf_y)
    # Measured in half kerfs the spot is a circle of radius 1.
    units = {"xfact": 2 / kerf_x, "yfact": 2 / kerf_y, "origin": (0, 0)}
    way = -1.0 if offset is offset_inward else 1.0
    buffer = scale(shapely.Polygon(points), **units).buffer(way, join_style="mitre", mitre_limit=99)
    back = {"xfact": kerf_x / 2, "yfact": kerf_y / 2, "origin": (0, 0)}
    wanted = scale(buffer, **back)
    mine = shapely.Polygon(found.points_mm)
    assert mine.is_valid
    # The general library straightens what bends by less than a hundredth of the offset.
    assert mine.hausdorff_distance(wanted) < 1e-6
    if kerf_x == kerf_y:
        plain = shapely.Polygon(points).buffer(way * kerf_x / 2, join_style="mitre", mitre_limit=99)
        assert mine.hausdorff_distance(plain) < 1e-6


def arc_points(start, end, bulge: float, count: int) -> np.ndarray:
    """Points along one edge, the last left out, from the sagitta of ever shorter arcs."""
    if bulge == 0 or count == 1:
        return np.linspace(start, end, count + 1)[:-1]
    way = end - start
    middle = (start + end) / 2 + np.array([way[1], -way[0]]) / 2 * bulge
    half = math.tan(math.atan(bulge) / 2)
    halves = (
        arc_points(start, middle, half, count // 2),
        arc_points(middle, end, half, count // 2),
    )
    return np.concatenate(halves)


def dense(points: np.ndarray, bulges, count: int = 512) -> np.ndarray:
    ends = np.roll(points, -1, axis=0)
    return np.concatenate(
        [arc_points(*edge, count) for edge in zip(points, ends, bulges, strict=True)]
    )


# A part with corners of 4 mm radius (tangent joints), and one that bows out, in, and has corners.
QUARTER = math.tan(math.pi / 8)
ROUND = np.array([[4.0, 0], [26, 0], [30, 4], [30, 16], [26, 20], [4, 20], [0, 16], [0, 4]])
ROUND_BULGES = (0, QUARTER) * 4
TURN = np.array([[math.cos(0.3), math.sin(0.3)], [-math.sin(0.3), math.cos(0.3)]])


@pytest.mark.parametrize("offset", [offset_inward, offset_outward])
@pytest.mark.parametrize(
    ("kerf", "share"),
    [((0.2, 0.2), 0), ((0.2, 0.15), 1 / 5000), ((0.1, 0.2), 1 / 5000), ((0.5, 0.1), 1 / 1000)],
)
def test_round_corners(offset, kerf, share) -> None:
    points = ROUND @ TURN
    found = offset(points, ROUND_BULGES, kerf_x_mm=kerf[0], kerf_y_mm=kerf[1])
    outline = dense(points, ROUND_BULGES, 2048)
    way = np.roll(outline, -1, axis=0) - outline
    # The spot's point (a cos t, b sin t) lies farthest along (nx, ny) where tan t = b ny / (a nx).
    half = np.array(kerf) / 2 * (-1 if offset is offset_inward else 1)
    angle = np.arctan2(kerf[1] * -way[:, 0], kerf[0] * way[:, 1])
    reach = np.column_stack([half[0] * np.cos(angle), half[1] * np.sin(angle)])
    wanted = shapely.LinearRing(outline + (np.roll(reach, 1, axis=0) + reach) / 2)
    path = shapely.points(dense(found.points_mm, found.bulges, 16))
    off_mm = shapely.distance(path, wanted).max()
    assert off_mm < share * abs(kerf[0] - kerf[1]) + 1e-6


def test_a_gauge_with_a_round_edge_and_corners() -> None:
    points = np.array([[0.0, 0], [60, 0], [60, 20], [0, 20]])
    bulges = (0, 0, -0.1, 0)
    found = offset_outward(points, bulges, kerf_x_mm=0.2, kerf_y_mm=0.2)
    # A round edge bowing in, radius from its sagitta of 0.1 x 30 mm: 10.1 x 30 / 2 = 151.5 mm.
    assert_allclose(found.points_mm[:2], [[-0.1, -0.1], [60.1, -0.1]], atol=1e-12)
    centre = np.array([30, 20 + 151.5 - 3.0])
    assert_allclose(np.hypot(*(found.points_mm[2:] - centre).T), 151.4, atol=1e-9)
    assert_allclose(found.points_mm[2:, 0], [60.1, -0.1], atol=1e-12)
