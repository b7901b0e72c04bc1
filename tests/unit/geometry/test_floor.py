from itertools import pairwise

import numpy as np
import pytest

from layout.geometry.floor import FLOOR_SAGITTA_MM, sink_floor
from layout.geometry.surface import Surface

FLAT = Surface((0.0, 0.0, 0.0), flat=True)
ROUND = Surface((305.0, 0.0, 0.0))
CONE = Surface((254.0, 0.4, 0.0))
TREBLE, BASS = np.array([106.0, 28.0]), np.array([94.0, -28.0])


@pytest.mark.parametrize("floor", ["flat", "follow"])
def test_below_a_flat_top_every_floor_is_two_points(floor):
    sunk = sink_floor(FLAT, TREBLE, BASS, depth_mm=2.3, floor=floor)
    assert sunk.points_mm.tolist() == [[94.0, -28.0, -2.3], [106.0, 28.0, -2.3]]
    assert (sunk.at_centre_mm, sunk.at_ends_mm) == (2.3, (2.3, 2.3))
    assert (sunk.below_flat_mm, sunk.lowest_mm) == (2.3, -2.3)


def test_a_flat_floor_is_deeper_in_the_middle_by_the_drop_at_its_ends():
    sunk = sink_floor(ROUND, TREBLE, BASS, depth_mm=2.3, floor="flat")
    # Common-practice figure: radius 305 at half width 28 drops 1.29 mm.
    assert sunk.at_centre_mm == pytest.approx(2.3 + 1.29, abs=0.005)
    drop = 305 - np.sqrt(305**2 - 28**2)
    assert sunk.at_centre_mm == pytest.approx(2.3 + drop, abs=1e-12)
    assert sunk.at_ends_mm == pytest.approx((2.3, 2.3), abs=1e-12)
    assert sunk.below_flat_mm == pytest.approx(2.3 + drop, abs=1e-12)
    assert sunk.lowest_mm == -sunk.below_flat_mm
    np.testing.assert_allclose(sunk.points_mm[:, :2], [BASS, TREBLE], rtol=0, atol=0)
    assert np.ptp(sunk.points_mm[:, 2]) == 0


def test_the_shallowest_end_of_a_flat_floor_is_as_deep_as_asked():
    # Slots off the middle, and a cone: one end of the top lies lower than the other.
    treble, bass = np.array([300.0, 30.0]), np.array([300.0, -10.0])
    sunk = sink_floor(CONE, treble, bass, depth_mm=2.0, floor="flat")
    radius = 254 + 0.4 * 300
    tops = [np.sqrt(radius**2 - y**2) - radius for y in (30.0, 10.0)]
    assert sunk.at_ends_mm == pytest.approx((2.0, 2.0 + tops[1] - tops[0]), abs=1e-12)
    assert sunk.lowest_mm == pytest.approx(tops[0] - 2.0, abs=1e-12)


@pytest.mark.parametrize("surface", [ROUND, CONE, Surface((30.0, 0.01, 0.0))])
@pytest.mark.parametrize(
    ("treble", "bass"),
    [(TREBLE, BASS), (np.array([300.0, 29.0]), np.array([300.0, 2.0]))],
)
def test_a_floor_that_follows_stays_within_the_sagitta(surface, treble, bass):
    sunk = sink_floor(surface, treble, bass, depth_mm=2.3, floor="follow")
    points = sunk.points_mm
    share = np.linspace(0, 1, 401)[:, None]
    worst = 0.0
    for start, end in pairwise(points):
        x, y, z = (start + share * (end - start)).T
        worst = max(worst, float(np.abs(surface.height_mm(x, y) - 2.3 - z).max()))
    assert 0 < worst <= FLOOR_SAGITTA_MM
    # Ends exact, the way straight in plan, the depth the same everywhere it is stated.
    np.testing.assert_allclose(points[[0, -1], :2], [bass, treble], rtol=0, atol=1e-12)
    way = treble - bass
    off = (points[:, 0] - bass[0]) * way[1] - (points[:, 1] - bass[1]) * way[0]
    np.testing.assert_allclose(off, 0, rtol=0, atol=1e-9)
    assert (sunk.at_centre_mm, sunk.at_ends_mm) == (2.3, (2.3, 2.3))
    assert sunk.lowest_mm == pytest.approx(points[:, 2].min(), abs=1e-12)
    assert sunk.below_flat_mm == -sunk.lowest_mm


def test_a_floor_that_follows_is_not_drawn_finer_than_it_need_be():
    sunk = sink_floor(ROUND, TREBLE, BASS, depth_mm=2.3, floor="follow")
    # By hand: a chord c on radius 305 has sagitta c^2 / (8 R); 0.005 mm allows c = 3.49 mm, so
    # 57.3 mm takes 17 at least; halving steps gives 32 at most, half the sagitta 64.
    assert 17 <= len(sunk.points_mm) - 1 <= 64


def test_four_chords_alone_would_miss_the_curve():
    sunk = sink_floor(ROUND, TREBLE, BASS, depth_mm=2.3, floor="follow")
    coarse = sunk.points_mm[:: (len(sunk.points_mm) - 1) // 4]
    middle = (coarse[0] + coarse[1]) / 2
    miss = float(ROUND.height_mm(middle[0], middle[1])) - 2.3 - middle[2]
    assert abs(miss) > FLOOR_SAGITTA_MM
