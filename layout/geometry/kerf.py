"""Where must a beam run so that what it leaves has the wanted outline?

A beam cuts half its kerf to either side of its path, and a machine may cut wider along one axis
than along the other. Its spot then acts as an ellipse with the two kerfs as its axes: beside an
edge whose square direction is (nx, ny) it reaches sqrt((kx nx)^2 + (ky ny)^2) / 2, half the
ellipse's width in that direction.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.geometry.slots import Pocket

Array = NDArray[np.float64]

_LARGEST_TURN = math.radians(10)
"""Of one arc that stands for the true path beside a round edge, where the kerfs differ. That path
is no circle; arcs of 10 degrees through three of its points stay within 1/5000 of the difference of
two kerfs of which one is up to twice the other."""
_LARGEST_RATIO = 5.0
"""Of the two kerfs beside round edges: there those arcs stay within 1/1000 of the difference."""
_SAME_MM = 1e-9


def offset_inward(
    points_mm: Array, bulges: Sequence[float] = (), *, kerf_x_mm: float, kerf_y_mm: float
) -> Pocket:
    """Draw the path inside a closed outline along which a beam cuts a hole of that outline.

    Parameters
    ----------
    points_mm
        Corners of the outline, shape (n, 2), in either direction round; the first not repeated.
    bulges
        One for each corner, of the edge that leaves it: the tangent of a quarter of the angle it
        turns through, positive to the left. Empty when all edges are straight.
    kerf_x_mm, kerf_y_mm
        Width of the cut measured along x (of a cut that runs along y) and along y; 0 or more.

    Returns
    -------
    Pocket
        Starts at the same corner and runs the same way round; edges meet in sharp corners. Where
        the kerfs differ, a round edge comes as several arcs.

    Raises
    ------
    ValueError
        For an outline that encloses nothing, bulges that do not match the corners, a kerf below 0,
        round edges with one kerf over five times the other, or an outline that leaves no room for
        the beam: narrower than the kerf, or with an edge that shrinks away.

    Notes
    -----
    Every edge moves by half the kerf across its own direction, a round one point by point by the
    spot's farthest point that way; edges then are lengthened or shortened until they meet (a
    mitre). A beam leaves the inner corners of a hole round by half its width; that is not
    corrected. Only neighbours are watched: a waist narrower than the kerf is not found.

    Examples
    --------
    A slot of 0.6 by 50 mm on a machine that cuts 0.2 mm wide across it and 0.1 mm along it:

    >>> slot = np.array([[0.0, 0.0], [0.6, 0.0], [0.6, 50.0], [0.0, 50.0]])
    >>> offset_inward(slot, kerf_x_mm=0.2, kerf_y_mm=0.1).points_mm.round(9).tolist()
    [[0.1, 0.05], [0.5, 0.05], [0.5, 49.95], [0.1, 49.95]]

    """
    return _offset(points_mm, bulges, kerf=(kerf_x_mm, kerf_y_mm), inward=True)


def offset_outward(
    points_mm: Array, bulges: Sequence[float] = (), *, kerf_x_mm: float, kerf_y_mm: float
) -> Pocket:
    """Draw the path around a closed outline along which a beam cuts a part of that outline free.

    Parameters, result and errors are those of ``offset_inward``; here it is an inner corner's edge
    that may shrink away.

    Examples
    --------
    >>> part = np.array([[0.0, 0.0], [60.0, 0.0], [60.0, 20.0], [0.0, 20.0]])
    >>> offset_outward(part, kerf_x_mm=0.2, kerf_y_mm=0.1).points_mm.round(9).tolist()
    [[-0.1, -0.05], [60.1, -0.05], [60.1, 20.05], [-0.1, 20.05]]

    """
    return _offset(points_mm, bulges, kerf=(kerf_x_mm, kerf_y_mm), inward=False)


@dataclass(frozen=True, slots=True)
class _Edge:
    """One edge: its ends, its bulge, and the directions it leaves and arrives in (unit vectors)."""

    start: Array
    end: Array
    bulge: float

    @property
    def chord(self) -> Array:
        return self.end - self.start

    @property
    def centre(self) -> Array:
        """Of the circle; the chord's middle, moved to its left by (1 - b^2) / (4 b) chords."""
        left = np.array([-self.chord[1], self.chord[0]])
        return np.asarray(
            (self.start + self.end) / 2 + left * (1 - self.bulge**2) / (4 * self.bulge)
        )

    def way(self, share: float) -> Array:
        """Direction of travel at a share of the edge: the chord's, turned."""
        unit = self.chord / np.hypot(*self.chord)
        return _turned(unit, 4 * math.atan(self.bulge) * (share - 0.5))

    def point(self, share: float) -> Array:
        if self.bulge == 0:
            return np.asarray(self.start + share * self.chord)
        turned = _turned(self.start - self.centre, 4 * math.atan(self.bulge) * share)
        return np.asarray(self.centre + turned)


def _turned(vector: Array, angle: float) -> Array:
    cosine, sine = math.cos(angle), math.sin(angle)
    return np.array([vector[0] * cosine - vector[1] * sine, vector[0] * sine + vector[1] * cosine])


def _offset(
    points_mm: Array, bulges: Sequence[float], *, kerf: tuple[float, float], inward: bool
) -> Pocket:
    edges = _edges(points_mm, bulges, kerf)
    # To the left is inward for an outline that runs counter-clockwise.
    side = math.copysign(1.0, _area(edges)) * (1.0 if inward else -1.0)
    beside = [_beside(edge, side, kerf) for edge in edges]
    corners = [
        _meet(beside[place - 1][-1], beside[place][0], edges[place].start)
        for place in range(len(edges))
    ]
    vertices: list[Array] = []
    bends: list[float] = []
    for place, run in enumerate(beside):
        stops = [corners[place], *(arc.start for arc in run[1:]), corners[(place + 1) % len(edges)]]
        for arc, start, end in zip(run, stops, stops[1:], strict=False):
            vertices.append(start)
            bends.append(_bulge_between(arc, start, end))
    return Pocket(np.array(vertices), tuple(bends))


def _edges(points_mm: Array, bulges: Sequence[float], kerf: tuple[float, float]) -> list[_Edge]:
    points = np.asarray(points_mm, dtype=float)
    count = len(points)
    bent = tuple(bulges) or (0.0,) * count
    if len(bent) != count:
        raise ValueError(f"an outline has one bulge a corner, not {len(bent)} for {count}")
    if not all(math.isfinite(width) and width >= 0 for width in kerf):
        raise ValueError(f"a kerf is 0 or more, not {kerf}")
    if any(bent) and max(kerf) > _LARGEST_RATIO * min(kerf):
        raise ValueError(f"beside round edges one kerf is at most 5 times the other, not {kerf}")
    following = np.roll(points, -1, axis=0)
    edges = [_Edge(*edge) for edge in zip(points, following, map(float, bent), strict=True)]
    edges = [edge for edge in edges if np.hypot(*edge.chord) > 0]
    if len(edges) < 2 or _area(edges) == 0:
        raise ValueError("an outline encloses something")
    return edges


def _area(edges: Sequence[_Edge]) -> float:
    """Area inside, positive when counter-clockwise: the polygon's, and each round edge's segment.

    A segment turning through t on a circle of radius r holds r^2 (t - sin t) / 2.
    """
    area = sum(edge.start[0] * edge.end[1] - edge.start[1] * edge.end[0] for edge in edges) / 2
    for edge in edges:
        if edge.bulge:
            turn = 4 * math.atan(edge.bulge)
            radius = np.hypot(*(edge.start - edge.centre))
            area += radius**2 * (turn - math.sin(turn)) / 2
    return float(area)


def _beside(edge: _Edge, side: float, kerf: tuple[float, float]) -> list[_Edge]:
    """Give the path beside one edge, before it is made to meet its neighbours."""
    turn = 4 * math.atan(abs(edge.bulge))
    steps = max(math.ceil(turn / _LARGEST_TURN - 1e-9), 1) if kerf[0] != kerf[1] else 1
    shares = np.linspace(0.0, 1.0, 2 * steps + 1)
    path = [edge.point(share) + _reach(edge.way(share), side, kerf) for share in shares]
    run = []
    for place in range(0, 2 * steps, 2):
        start, via, end = path[place : place + 3]
        ahead = edge.way(float(shares[place + 1]))
        if float(ahead @ (end - start)) <= 0:
            raise ValueError("the outline is narrower than the kerf, or bends more sharply")
        run.append(_Edge(start, end, _bulge_through(start, via, end) if edge.bulge else 0.0))
    return run


def _reach(way: Array, side: float, kerf: tuple[float, float]) -> Array:
    """From an edge to the farthest point of the spot on one side of it.

    With half axes a and b of the ellipse and n square to the edge: (a^2 nx, b^2 ny) / h, where
    h = sqrt(a^2 nx^2 + b^2 ny^2) is how far it reaches along n.
    """
    square = np.array([-way[1], way[0]]) * side
    halves = np.array(kerf) / 2
    reach = math.hypot(*(halves * square))
    return np.asarray(halves**2 * square / reach) if reach else np.zeros(2)


def _bulge_through(start: Array, via: Array, end: Array) -> float:
    """Bulge of the arc through three points: half the angle its chord is seen under is missing."""
    to_start, to_end = start - via, end - via
    cross = to_start[0] * to_end[1] - to_start[1] * to_end[0]
    seen = math.atan2(abs(cross), float(to_start @ to_end))
    return math.copysign(math.tan((math.pi - seen) / 2), -cross)


def _meet(before: _Edge, after: _Edge, corner: Array) -> Array:
    """Where two neighbours meet, each lengthened along its own line or circle: nearest the corner.

    Smooth joints meet already.
    """
    if np.hypot(*(before.end - after.start)) <= _SAME_MM:
        return np.asarray((before.end + after.start) / 2)
    if before.bulge == 0 and after.bulge == 0:
        found = _line_meets_line(before, after)
    elif before.bulge == 0:
        found = _line_meets_circle(before, after)
    elif after.bulge == 0:
        found = _line_meets_circle(after, before)
    else:
        found = _circle_meets_circle(before, after)
    if not found:
        raise ValueError("two edges no longer meet beside their corner")
    return min(found, key=lambda point: float(np.hypot(*(point - corner))))


def _line_meets_line(one: _Edge, other: _Edge) -> list[Array]:
    cross = one.chord[0] * other.chord[1] - one.chord[1] * other.chord[0]
    if abs(cross) <= 1e-12 * np.hypot(*one.chord) * np.hypot(*other.chord):
        return []
    gap = other.start - one.start
    share = (gap[0] * other.chord[1] - gap[1] * other.chord[0]) / cross
    return [np.asarray(one.start + share * one.chord)]


def _line_meets_circle(line: _Edge, arc: _Edge) -> list[Array]:
    way = line.way(0.0)
    foot = line.start + way * float(way @ (arc.centre - line.start))
    radius = np.hypot(*(arc.start - arc.centre))
    return _both_sides(foot, way, radius**2 - float(np.sum((foot - arc.centre) ** 2)), radius)


def _circle_meets_circle(one: _Edge, other: _Edge) -> list[Array]:
    """Both points lie on the circles' common chord, square to the line between the centres."""
    gap = other.centre - one.centre
    apart = float(np.hypot(*gap))
    if apart <= _SAME_MM:
        return []
    first, second = (float(np.hypot(*(arc.start - arc.centre))) for arc in (one, other))
    along = (apart**2 + first**2 - second**2) / (2 * apart)
    foot = one.centre + gap / apart * along
    return _both_sides(foot, np.array([-gap[1], gap[0]]) / apart, first**2 - along**2, first)


def _both_sides(foot: Array, way: Array, half_square: float, radius: float) -> list[Array]:
    """Points at the same distance either way from a foot; none when they would be unreal."""
    if half_square < -_SAME_MM * radius:
        return []
    half = math.sqrt(max(half_square, 0.0))
    return [np.asarray(foot + half * way), np.asarray(foot - half * way)]


def _bulge_between(edge: _Edge, start: Array, end: Array) -> float:
    """Bulge of the same line or circle between new ends.

    Raises
    ------
    ValueError
        When the ends have passed one another.

    """
    passed = ValueError("an edge of the outline is shorter than the kerf leaves room for")
    if edge.bulge == 0:
        if float(edge.way(0.0) @ (end - start)) <= _SAME_MM:
            raise passed
        return 0.0
    first, last = start - edge.centre, end - edge.centre
    turned = math.atan2(last[1], last[0]) - math.atan2(first[1], first[0])
    turn = math.copysign(1.0, edge.bulge) * turned % math.tau
    # Ends that have passed one another leave nearly a whole turn, against the edge's own.
    if turn > math.pi + 2 * math.atan(abs(edge.bulge)):
        raise passed
    return math.copysign(math.tan(turn / 4), edge.bulge)
