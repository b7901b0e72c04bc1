"""Least squares under inequalities, and the narrowest strip, by other people's programs."""

from itertools import pairwise

import numpy as np
import pytest
import shapely
from scipy.optimize import minimize, nnls

from layout.strings.inequality import solve_bounded, solve_nonnegative
from layout.strings.strip import hull_slants, narrowest_strip


@pytest.mark.parametrize("seed", range(25))
def test_nonnegative(seed):
    rng = np.random.default_rng(seed)
    columns = rng.normal(size=(6 + seed % 5, 3 + seed % 9)) * 10.0 ** rng.uniform(-3, 3)
    if seed % 4 == 0:
        columns[:, -1] = columns[:, 0]  # a column twice: the fit is unique, the mix is not
    target = rng.normal(size=len(columns))
    mine, (theirs, _) = solve_nonnegative(columns, target), nnls(columns, target)
    assert (mine >= 0).all()
    np.testing.assert_allclose(columns @ mine, columns @ theirs, rtol=0, atol=1e-10)


@pytest.mark.parametrize("seed", range(12))
def test_bounded(seed):
    rng = np.random.default_rng(seed)
    matrix, wanted = rng.normal(size=(9, 4)), rng.normal(size=9)
    sides = rng.normal(size=(7, 4))
    at_least = sides @ rng.normal(size=4) - rng.uniform(0, 0.3, 7)
    mine = solve_bounded(matrix, wanted, sides, at_least)
    theirs = minimize(
        lambda x: ((matrix @ x - wanted) ** 2).sum(),
        np.zeros(4),
        jac=lambda x: 2 * matrix.T @ (matrix @ x - wanted),
        method="SLSQP",
        constraints={"type": "ineq", "fun": lambda x: sides @ x - at_least, "jac": lambda _: sides},
        options={"ftol": 1e-15, "maxiter": 500},
    )
    assert (sides @ mine - at_least).min() > -1e-12
    np.testing.assert_allclose(mine, theirs.x, rtol=0, atol=1e-5)


def draw_points(seed):
    rng = np.random.default_rng(seed)
    y = np.linspace(27, -27, 3 + seed % 8) + rng.uniform(-1, 1, 3 + seed % 8)
    return np.column_stack([650 + rng.uniform(-0.3, 0.3) * y + rng.uniform(-2, 2, len(y)), y])


@pytest.mark.parametrize("seed", range(20))
def test_strip_by_its_hull(seed):
    points = draw_points(seed)
    corners = np.array(shapely.MultiPoint(points).convex_hull.exterior.coords)
    widths = []
    for first, second in pairwise(corners):
        far = shapely.LineString([first + 99 * (first - second), second + 99 * (second - first)])
        widths.append(max(far.distance(shapely.Point(corner)) for corner in corners))
    strip = narrowest_strip(points)
    np.testing.assert_allclose(strip.width_mm, min(widths), rtol=0, atol=1e-9)
    assert len(hull_slants(points)) == len(corners) - 1


@pytest.mark.parametrize("seed", range(20))
def test_strip_by_turning(seed):
    points = draw_points(seed)
    strip = narrowest_strip(points)
    slants = np.append(np.linspace(-1.0, 1.0, 20001), strip.slant)
    off = np.outer(np.cos(slants), points[:, 0]) - np.outer(np.sin(slants), points[:, 1])
    widths = np.ptp(off, axis=1)
    assert widths.min() >= strip.width_mm - 1e-9
    assert widths[:-1].min() <= strip.width_mm + 27 * 1e-4
    middle = (points[:, 0] - strip.at_centre_mm) * np.cos(strip.slant) - points[:, 1] * np.sin(
        strip.slant
    )
    np.testing.assert_allclose(np.abs(middle).max(), strip.width_mm / 2, rtol=0, atol=1e-9)
