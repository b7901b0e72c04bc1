"""How far is a point from a line or an arc, for thousands of them at a time?

Points are complex numbers x + iy in mm. An edge runs from its start to its end; its bulge is the
tangent of a quarter of the angle it turns through, positive to the left, 0 for a straight one.
No edge turns through more than half a circle.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray

Reals = NDArray[np.float64]
Points = NDArray[np.complex128]
Places = NDArray[np.intp]
Flags = NDArray[np.bool_]

_FEW_PAIRS = 1_000_000
"""So many boxes are compared one by one sooner than they are sorted."""
_STRAIGHT = 1e-9
"""A bulge below this bends 1 m of edge by less than 1e-6 mm."""


@dataclass(frozen=True, slots=True, eq=False)
class Edges:
    """Edges in the order they were drawn.

    Attributes
    ----------
    start, end
        Complex, mm.
    bulge
        See this module.
    low, high
        Height of the start and of the end over the plane of the drawing, mm.

    """

    start: Points
    end: Points
    bulge: Reals
    low: Reals
    high: Reals

    def __len__(self) -> int:
        return len(self.start)

    def take(self, places: Places | Flags) -> Edges:
        """Give some of the edges."""
        return Edges(
            self.start[places],
            self.end[places],
            self.bulge[places],
            self.low[places],
            self.high[places],
        )

    @property
    def chord_mm(self) -> Reals:
        """Straight distance from start to end."""
        return np.abs(self.end - self.start)

    @property
    def sweep(self) -> Reals:
        """Angle turned through, radians, positive to the left."""
        return 4 * np.arctan(self.bulge)

    @property
    def length_mm(self) -> Reals:
        """Length along each edge, in plan."""
        half = np.abs(self.sweep) / 2
        ratio = np.where(half > _STRAIGHT, half / np.sin(np.maximum(half, _STRAIGHT)), 1.0)
        return np.asarray(self.chord_mm * ratio)


def make_edges(rows: Iterable[tuple[complex, complex, float, float, float]]) -> Edges:
    """Make edges of rows: start, end, bulge, height of start, height of end.

    Examples
    --------
    >>> make_edges([(0j, 3 + 4j, 0.0, 0.0, 0.0)]).length_mm
    array([5.])

    """
    columns = list(zip(*rows, strict=True)) or [(), (), (), (), ()]
    return Edges(
        np.array(columns[0], complex),
        np.array(columns[1], complex),
        np.array(columns[2], float),
        np.array(columns[3], float),
        np.array(columns[4], float),
    )


def points_along(edges: Edges, places: Places, shares: Reals) -> Points:
    """Find points that lie given shares of the way along edges.

    Parameters
    ----------
    edges, places
        Which edge each row of the answer is on, ``(n,)``.
    shares
        0 at the start, 1 at the end; ``(n, k)``, or ``(k,)`` for the same shares on every edge.

    Returns
    -------
    array (n, k)

    Notes
    -----
    From the start, the chord to a point at share t of an arc that turns through a is
    sin(t a/2) / sin(a/2) times the whole chord, turned by (t - 1) a/2 (inscribed angles: Euclid,
    Elements III.20-21 and III.32).

    Examples
    --------
    >>> half = make_edges([(1 + 0j, -1 + 0j, 1.0, 0.0, 0.0)])
    >>> np.round(points_along(half, np.array([0]), np.array([0.0, 0.5, 1.0])), 12)
    array([[ 1.+0.j,  0.+1.j, -1.+0.j]])

    """
    start = edges.start[places][:, None]
    chord = (edges.end - edges.start)[places][:, None]
    half = edges.sweep[places][:, None] / 2
    shares = np.broadcast_to(shares, (len(places), shares.shape[-1]))
    if not half.any():
        return np.asarray(start + chord * shares)
    bent = np.abs(half) > _STRAIGHT
    safe = np.where(bent, half, 1.0)
    ratio = np.where(bent, np.sin(shares * safe) / np.sin(safe), shares)
    turned = np.where(bent, np.exp(1j * (shares - 1) * half), 1.0)
    return np.asarray(start + chord * ratio * turned)


@dataclass(frozen=True, slots=True, eq=False)
class Feet:
    """For every point: how far its edge is, mm, and at which share of the edge it comes nearest."""

    distance_mm: Reals
    share: Reals


def find_feet(points: Points, edges: Edges, places: Places) -> Feet:
    """Measure points ``(n, k)`` against one edge a row, in plan.

    Examples
    --------
    >>> line = make_edges([(0j, 10 + 0j, 0.0, 0.0, 0.0)])
    >>> find_feet(np.array([[4 + 3j, 12 + 0j]]), line, np.array([0])).distance_mm
    array([[3., 2.]])

    """
    start, end = edges.start[places][:, None], edges.end[places][:, None]
    chord = end - start
    straight = np.clip(((points - start) * np.conj(chord)).real / np.abs(chord) ** 2, 0.0, 1.0)
    distance = np.abs(points - (start + straight * chord))
    bulge = edges.bulge[places]
    bent = np.flatnonzero(np.abs(bulge) > _STRAIGHT)
    if not len(bent):
        return Feet(np.asarray(distance), np.asarray(straight))
    round_distance, round_share = _feet_on_arcs(
        points[bent], start[bent], end[bent], bulge[bent][:, None]
    )
    distance[bent] = round_distance
    straight[bent] = round_share
    return Feet(np.asarray(distance), np.asarray(straight))


def _feet_on_arcs(points: Points, start: Points, end: Points, bulge: Reals) -> tuple[Reals, Reals]:
    chord = end - start
    centre = (start + end) / 2 + 1j * chord * (1 - bulge**2) / (4 * bulge)
    radius_mm = np.abs(start - centre)
    sweep = 4 * np.arctan(bulge)
    # Angle from the middle of the arc, so that both ways round are treated alike.
    middle = (start - centre) * np.exp(0.5j * sweep)
    ahead = np.angle((points - centre) * np.conj(middle)) * np.sign(bulge)
    reach = np.abs(sweep) / 2
    beside = np.abs(ahead) <= reach
    to_start, to_end = np.abs(points - start), np.abs(points - end)
    outside = np.minimum(to_start, to_end)
    distance = np.where(beside, np.abs(np.abs(points - centre) - radius_mm), outside)
    share = np.where(beside, (ahead + reach) / (2 * reach), np.where(to_end < to_start, 1.0, 0.0))
    return distance, share


def boxes_around(edges: Edges, *, margin_mm: float) -> Reals:
    """Give boxes (left, low, right, high) that hold the edges with a margin, ``(n, 4)``."""
    shares = np.array([0.0, 0.25, 0.5, 0.75, 1.0])
    points = points_along(edges, np.arange(len(edges)), shares)
    # Between those points an arc bows out by less than its quarter's height.
    margin = margin_mm + edges.chord_mm * np.abs(edges.bulge) / 4
    return np.column_stack(
        (
            points.real.min(axis=1) - margin,
            points.imag.min(axis=1) - margin,
            points.real.max(axis=1) + margin,
            points.imag.max(axis=1) + margin,
        )
    )


class Boxes:
    """Boxes (left, low, right, high), sorted once many others are held against them."""

    def __init__(self, boxes: Reals) -> None:
        self._boxes = boxes
        self._tree: shapely.STRtree | None = None

    def find_meeting(self, others: Reals) -> tuple[Places, Places]:
        """Give all pairs (place among others, place here) that meet."""
        if self._tree is None and len(others) * len(self._boxes) < _FEW_PAIRS:
            left, low, right, high = (side[:, None] for side in others.T)
            meet = (self._boxes[:, 0] <= right) & (self._boxes[:, 2] >= left)
            meet &= (self._boxes[:, 1] <= high) & (self._boxes[:, 3] >= low)
            one, other = np.nonzero(meet)
            return one, other
        if self._tree is None:
            self._tree = shapely.STRtree(_diagonals(self._boxes))
        one, other = self._tree.query(_diagonals(others))
        return np.asarray(one, np.intp), np.asarray(other, np.intp)


def _diagonals(boxes: Reals) -> NDArray[np.object_]:
    """Lines from corner to corner: a tree looks at their boxes alone, and they are made sooner."""
    return np.asarray(shapely.linestrings(boxes.reshape(-1, 2, 2)))


def find_near_points(points: Points, others: Points, *, within_mm: float) -> tuple[Places, Places]:
    """Give all pairs (place among points, place among others) not farther apart than a distance.

    Examples
    --------
    >>> find_near_points(np.array([1j, 5 + 0j]), np.array([5.2 + 0j]), within_mm=0.3)
    (array([1]), array([0]))

    """
    if not len(points) or not len(others):
        return np.zeros(0, np.intp), np.zeros(0, np.intp)
    size = max(within_mm, math.ulp(1.0))
    column = np.floor(others.real / size).astype(np.int64)
    row = np.floor(others.imag / size).astype(np.int64)
    order = np.argsort(cell := _cell(column, row), kind="stable")
    cells = cell[order]
    column = np.floor(points.real / size).astype(np.int64)
    row = np.floor(points.imag / size).astype(np.int64)
    ones, twos = [], []
    for right in (-1, 0, 1):
        for up in (-1, 0, 1):
            wanted = _cell(column + right, row + up)
            first = np.searchsorted(cells, wanted, side="left")
            count = np.searchsorted(cells, wanted, side="right") - first
            if not count.any():
                continue
            ones.append(np.repeat(np.arange(len(points)), count))
            steps = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
            twos.append(order[np.repeat(first, count) + steps])
    if not ones:
        return np.zeros(0, np.intp), np.zeros(0, np.intp)
    one, two = np.concatenate(ones), np.concatenate(twos)
    near = np.abs(points[one] - others[two]) <= within_mm
    return one[near], two[near]


def _cell(column: NDArray[np.int64], row: NDArray[np.int64]) -> NDArray[np.int64]:
    """One number a cell; two cells that share one by chance are told apart by distance later."""
    return column * 1_000_003 + row
