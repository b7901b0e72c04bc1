"""How is an outline with round corners or a given arc made?"""

from __future__ import annotations

import math
from collections.abc import Sequence

from layout.drawing.shapes import Layer, Outline, Point


def bulge_through(start: Point, via: Point, end: Point) -> float:
    """Give the bulge of the arc from ``start`` through ``via`` to ``end``; 0 on one line.

    The angle under which an arc's chord is seen from the arc is half of what the arc leaves of
    the full turn (Euclid, Elements III.20).

    Examples
    --------
    >>> round(bulge_through((0, 0), (5, -5), (10, 0)), 12)
    1.0

    """
    ax, ay = start[0] - via[0], start[1] - via[1]
    bx, by = end[0] - via[0], end[1] - via[1]
    cross, dot = ax * by - ay * bx, ax * bx + ay * by
    if cross == 0:
        return 0.0
    seen = math.atan2(abs(cross), dot)
    # Seen from an arc that turns left, the way from start to end has the chord on its left.
    return math.copysign(math.tan((math.pi - seen) / 2), -cross)


def bulge_of_radius(start: Point, end: Point, *, radius_mm: float) -> float:
    """Give the bulge of the shorter arc of a radius, which turns left for a radius above 0.

    Raises
    ------
    ValueError
        When the ends are farther apart than the circle is wide.

    Examples
    --------
    >>> round(bulge_of_radius((0, 0), (10, 0), radius_mm=-5), 12)
    -1.0

    """
    share = math.dist(start, end) / (2 * abs(radius_mm))
    if share > 1 + 1e-12:
        raise ValueError(f"no arc of radius {radius_mm} joins {start} and {end}")
    return math.copysign(math.tan(math.asin(min(share, 1.0)) / 2), radius_mm)


def round_corners(layer: Layer, corners: Sequence[Point], *, radius_mm: float) -> Outline:
    """Draw a closed outline whose corners are rounded, inside and outside ones alike.

    Parameters
    ----------
    layer
        The layer to draw on.
    corners
        At least three, in either direction round; the first is not repeated.
    radius_mm
        Of every corner; half the width of a slot gives it full round ends.

    Raises
    ------
    ValueError
        When two rounded corners do not fit on the edge between them.

    Examples
    --------
    >>> slot = round_corners("CUT_POCKET", ((0, 0), (9, 0), (9, 2), (0, 2)), radius_mm=1)
    >>> [(round(x, 9), round(y, 9)) for x, y in slot.vertices[:3]], round(slot.bulges[0], 6)
    ([(0.0, 1.0), (1.0, 0.0), (8.0, 0.0)], 0.414214)

    """
    if radius_mm <= 0:
        return Outline(layer, tuple(corners))
    count = len(corners)
    cuts_mm: list[float] = []
    vertices: list[Point] = []
    bulges: list[float] = []
    for place, corner in enumerate(corners):
        before, after = corners[place - 1], corners[(place + 1) % count]
        to_before, to_after = _direction(corner, before), _direction(corner, after)
        turn = _turn((-to_before[0], -to_before[1]), to_after)
        cut_mm = radius_mm * math.tan(abs(turn) / 2)
        cuts_mm.append(cut_mm)
        vertices += [_step(corner, to_before, cut_mm), _step(corner, to_after, cut_mm)]
        bulges += [math.tan(turn / 4), 0.0]
    for place in range(count):
        edge_mm = math.dist(corners[place - 1], corners[place])
        if cuts_mm[place - 1] + cuts_mm[place] > edge_mm + 1e-6:
            raise ValueError(f"corners of radius {radius_mm} do not fit on an edge of {edge_mm}")
    return Outline(layer, tuple(vertices), tuple(bulges))


def _direction(start: Point, end: Point) -> Point:
    length = math.dist(start, end)
    return (end[0] - start[0]) / length, (end[1] - start[1]) / length


def _turn(before: Point, after: Point) -> float:
    cross = before[0] * after[1] - before[1] * after[0]
    return math.atan2(cross, before[0] * after[0] + before[1] * after[1])


def _step(start: Point, direction: Point, length: float) -> Point:
    return start[0] + length * direction[0], start[1] + length * direction[1]
