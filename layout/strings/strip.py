"""Which is the narrowest strip that holds a set of points in plan?

The narrowest strip round points always runs along the line through two of them (along an edge of
their convex hull), so trying every pair finds it.

References
----------
M. E. Houle, G. T. Toussaint, "Computing the width of a set", IEEE Trans. Pattern Anal. Mach.
Intell. 10 (1988) 761, theorem 2.1 (reference from memory).

"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

STEEPEST = 1.5
"""A strip further than this from square to the centre line would not lie across the strings."""
SAME_WIDTH_MM = 1e-9
SAME_SLANT = 1e-9
"""Below the tolerance of algebra, 1e-9 mm: such strips count as equally narrow, equally slanted."""


@dataclass(frozen=True, slots=True)
class Strip:
    """A strip across the strings in plan.

    Attributes
    ----------
    at_centre_mm
        x where the strip's centre line crosses y = 0.
    slant
        Radians from square to the centre line; + when the treble end is nearer the bridge.
    width_mm
        Measured square to the strip.

    """

    at_centre_mm: float
    slant: float
    width_mm: float


def narrowest_strip(points_mm: Array, *, along: float = 0.0) -> Strip:
    """Find the narrowest strip that holds all points.

    Parameters
    ----------
    points_mm
        Shape (n, 2), at least one: x toward the bridge, y toward the treble side.
    along
        Slant in radians of the line the points belong to, such as the bridge line: a single point
        gets a strip along it, and of equally narrow strips the one nearest to it is taken.

    Returns
    -------
    Strip
        Of width 0 for one or two points, and within rounding of 0 for collinear ones.

    Raises
    ------
    ValueError
        When there is no point.

    Examples
    --------
    >>> narrowest_strip(np.array([[650.0, 20.0], [652.0, 0.0], [650.0, -20.0]]))
    Strip(at_centre_mm=651.0, slant=0.0, width_mm=2.0)

    """
    points = np.asarray(points_mm, np.float64)
    if not len(points):
        raise ValueError("a strip needs at least one point")
    pairs = _pairs(points)
    slants = np.append(pairs.slants, along)
    apart_mm = np.append(pairs.apart_mm, 0.0)
    offsets_mm = _offsets_mm(points, slants)
    near_mm, far_mm = offsets_mm.min(axis=1), offsets_mm.max(axis=1)
    widths_mm = far_mm - near_mm
    narrow = widths_mm <= widths_mm.min() + SAME_WIDTH_MM
    turned = np.where(narrow, np.abs(slants - along), np.inf)
    # Of pairs on one line the points furthest apart give its direction best.
    best = int(np.argmax(np.where(turned <= turned.min() + SAME_SLANT, apart_mm, -1.0)))
    slant = float(slants[best])
    middle_mm = (near_mm[best] + far_mm[best]) / 2
    return Strip(float(middle_mm / np.cos(slant)), slant, float(widths_mm[best]))


def hull_slants(points_mm: Array) -> Array:
    """Give the slants of all lines through two of the points with the others on one side.

    Returns
    -------
    Array
        Shape (k,), in radians; the edges of the convex hull, but for those along the strings.

    Examples
    --------
    >>> hull_slants(np.array([[650.0, 20.0], [652.0, 0.0], [650.0, -20.0]])).round(3)
    array([-0.1,  0. ,  0.1])

    """
    points = np.asarray(points_mm, np.float64)
    pairs = _pairs(points)
    offsets_mm = _offsets_mm(points, pairs.slants)
    edge_mm = offsets_mm[np.arange(len(pairs.first)), pairs.first]
    below = (offsets_mm - edge_mm[:, None] <= SAME_WIDTH_MM).all(axis=1)
    above = (offsets_mm - edge_mm[:, None] >= -SAME_WIDTH_MM).all(axis=1)
    return np.asarray(pairs.slants[below | above])


@dataclass(frozen=True, slots=True)
class _Pairs:
    """Lines through two points: slant (radians), distance of the two, index of the first."""

    slants: Array
    apart_mm: Array
    first: NDArray[np.int_]


def _pairs(points_mm: Array) -> _Pairs:
    first, second = np.triu_indices(len(points_mm), 1)
    step = points_mm[second] - points_mm[first]
    step = np.where(step[:, 1:] < 0, -step, step)
    apart_mm = np.hypot(step[:, 0], step[:, 1])
    slants = np.arctan2(step[:, 0] + 0.0, step[:, 1])  # never minus nought
    across = (apart_mm > 0) & (np.abs(slants) <= STEEPEST)
    return _Pairs(slants[across], apart_mm[across], first[across])


def _offsets_mm(points_mm: Array, slants: Array) -> Array:
    """Distance of every point from lines through the origin, shape (slants, points)."""
    x_mm, y_mm = points_mm.T
    return np.asarray(np.outer(np.cos(slants), x_mm) - np.outer(np.sin(slants), y_mm))
