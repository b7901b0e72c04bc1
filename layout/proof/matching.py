"""Which edge in the file serves which edge of the sheet, and how well?

By geometry alone. An edge found where one is planned serves it at once. What is left is cut into
parts at the planned ends beside it, so that chains, chords, joined and divided lines serve too:
every part goes to the planned edge it lies nearest to, and covers a stretch of it.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from layout.proof.edges import (
    Boxes,
    Edges,
    Flags,
    Places,
    Points,
    Reals,
    boxes_around,
    find_feet,
    find_near_points,
    points_along,
)

SEARCH_MM = 1.0
"""What lies nearer than this to a planned edge was meant to be it."""
_AS_WRITTEN_MM = 1e-3
"""Formats round to 1e-4 mm or finer, and two planned edges are never this near to each other."""
_SLANT = 1 - 0.618j
"""Turns the order of edges off the axes, along which many lie side by side."""
_STEP_MM = 1e-6
_BATCH = 1000
"""Edges cut at a time, so that a file of thousands of long lines does not fill the memory."""
_SAMPLES = np.array([0.0, 0.25, 0.5, 0.75, 1.0])


@dataclass(frozen=True, slots=True, eq=False)
class Match:
    """How two sets of edges agree.

    Attributes
    ----------
    deviation_mm
        For every planned edge: the largest distance between it and what serves it, both ways.
    uncovered_mm
        For every planned edge: the length that nothing in the file lies along.
    served
        For every planned edge: whether anything serves it.
    serves
        For every edge of the file: the planned edge that it (or its first part) serves, or -1.
    stray_mm
        For every edge of the file: the length that serves nothing.
    doubled_mm
        For every edge of the file: the length that another one draws as well.
    servants
        For planned edges that were not matched one to one: the edges of the file that serve them.

    """

    deviation_mm: Reals
    uncovered_mm: Reals
    served: Flags
    serves: Places
    stray_mm: Reals
    doubled_mm: Reals
    servants: dict[int, set[int]] = field(default_factory=dict)


def match_edges(
    planned: Edges, found: Edges, *, tolerance_mm: float, in_space: bool = True
) -> Match:
    """Match the edges of a file to those of a sheet.

    Parameters
    ----------
    planned, found
        In the same frame, mm.
    tolerance_mm
        How far apart edges may be that are told apart no further.
    in_space
        Whether heights count.

    Examples
    --------
    >>> from layout.proof.edges import make_edges
    >>> line = make_edges([(0j, 50j, 0.0, 0.0, 0.0)])
    >>> halves = make_edges([(0.004 + 20j, 50j, 0.0, 0.0, 0.0), (20j, 0j, 0.0, 0.0, 0.0)])
    >>> match = match_edges(line, halves, tolerance_mm=0.01)
    >>> match.deviation_mm, match.serves
    (array([0.004]), array([0, 0]))

    """
    match = Match(
        np.zeros(len(planned)),
        planned.length_mm,
        np.zeros(len(planned), bool),
        np.full(len(found), -1, np.intp),
        found.length_mm,
        np.zeros(len(found)),
    )
    within_mm = min(tolerance_mm, SEARCH_MM / 4)
    _settle(match, *pair_in_turn(planned, found, within_mm=within_mm, in_space=in_space))
    mine, theirs = np.flatnonzero(~match.served), np.flatnonzero(match.serves < 0)
    if len(mine) and len(theirs):
        one, other, distance = _marry(
            *_pair_alike(
                planned.take(mine), found.take(theirs), within_mm=within_mm, in_space=in_space
            )
        )
        _settle(match, mine[one], theirs[other], distance)
    rest = np.flatnonzero(match.serves < 0)
    if len(rest):
        _match_parts(planned, found, rest, match, tolerance_mm=tolerance_mm, in_space=in_space)
    return match


def _settle(match: Match, mine: Places, theirs: Places, distance: Reals) -> None:
    match.served[mine] = True
    match.serves[theirs] = mine
    match.deviation_mm[mine] = distance
    match.uncovered_mm[mine] = match.stray_mm[theirs] = 0.0


def pair_in_turn(
    planned: Edges, found: Edges, *, within_mm: float, in_space: bool = False
) -> tuple[Places, Places, Reals]:
    """Pair edges that lie as near as in a file as it was written; leave the others.

    A quick look: both sides in order along a slanted line, first with first and so on.

    Returns
    -------
    arrays
        Places of planned edges, of found ones, and their distance in mm.

    """
    if len(planned) != len(found):
        return np.zeros(0, np.intp), np.zeros(0, np.intp), np.zeros(0)
    mine, theirs = (np.argsort((_middles(edges) * _SLANT).real) for edges in (planned, found))
    distance = _compare(planned, found, mine, theirs, in_space=in_space)
    near = distance <= min(within_mm, _AS_WRITTEN_MM)
    return mine[near], theirs[near], distance[near]


def _pair_alike(
    planned: Edges, found: Edges, *, within_mm: float, in_space: bool
) -> tuple[Places, Places, Reals]:
    """Pairs whose ends and middles agree, either way round, the best ones first."""
    mine, theirs = find_near_points(_middles(planned), _middles(found), within_mm=within_mm)
    distance = _compare(planned, found, mine, theirs, in_space=in_space)
    near = np.flatnonzero(distance <= within_mm)
    order = near[np.argsort(distance[near], kind="stable")]
    return mine[order], theirs[order], distance[order]


def _middles(edges: Edges) -> Points:
    return points_along(edges, np.arange(len(edges)), np.array([0.5]))[:, 0]


def _compare(
    planned: Edges, found: Edges, mine: Places, theirs: Places, *, in_space: bool
) -> Reals:
    """Give the larger distance of ends and middles, the better way round, for pairs of edges."""
    ends = []
    for start, end, low, high in (
        (found.start, found.end, found.low, found.high),
        (found.end, found.start, found.high, found.low),
    ):
        to_start = np.abs(planned.start[mine] - start[theirs])
        to_end = np.abs(planned.end[mine] - end[theirs])
        if in_space:
            to_start = np.hypot(to_start, planned.low[mine] - low[theirs])
            to_end = np.hypot(to_end, planned.high[mine] - high[theirs])
        ends.append(np.maximum(to_start, to_end))
    aside = np.abs(_middles(planned)[mine] - _middles(found)[theirs])
    return np.asarray(np.maximum(np.minimum(*ends), aside))


def _marry(mine: Places, theirs: Places, distance: Reals) -> tuple[Places, Places, Reals]:
    """Take pairs in the given order, none of an edge that is taken already."""
    chosen: list[NDArray[np.intp]] = []
    left = np.arange(len(mine))
    while len(left):
        # Whoever comes first on both sides is taken; the next round is among the others.
        _, first = np.unique(mine[left], return_index=True)
        _, other = np.unique(theirs[left], return_index=True)
        taken = left[np.intersect1d(first, other)]
        chosen.append(taken)
        left = left[~(np.isin(mine[left], mine[taken]) | np.isin(theirs[left], theirs[taken]))]
    order = np.concatenate(chosen) if chosen else left
    return mine[order], theirs[order], distance[order]


class _Parts(NamedTuple):
    """Stretches of found edges between two shares of them."""

    owner: Places
    begin: Reals
    end: Reals


class _Stretch(NamedTuple):
    """What a part covers of a planned edge (mm along it), how far off, and whose part it is."""

    low: float
    high: float
    distance_mm: float
    owner: int


def _match_parts(
    planned: Edges,
    found: Edges,
    rest: Places,
    match: Match,
    *,
    tolerance_mm: float,
    in_space: bool,
) -> None:
    boxes = Boxes(boxes_around(planned, margin_mm=SEARCH_MM))
    batches = []
    for begin in range(0, len(rest), _BATCH):
        cut = _cut_at_planned_ends(planned, boxes, found, rest[begin : begin + _BATCH])
        batches.append((*cut, *_choose_planned(planned, boxes, found, cut, in_space=in_space)))
    owner, start, end, chosen, distance, covers = map(np.concatenate, zip(*batches, strict=True))
    parts = _Parts(owner, start, end)
    length = planned.length_mm
    waiting: dict[int, list[_Stretch]] = {}
    for place in np.flatnonzero(chosen >= 0):
        edge = int(chosen[place])
        low, high = covers[place] * length[edge]
        stretch = _Stretch(float(low), float(high), float(distance[place]), int(parts.owner[place]))
        waiting.setdefault(edge, []).append(stretch)
    part_mm = (parts.end - parts.begin) * found.length_mm[parts.owner]
    lost = chosen < 0
    match.stray_mm[rest] = 0.0
    np.add.at(match.stray_mm, parts.owner[lost], part_mm[lost])
    at_once = {int(edge): owner for owner, edge in enumerate(match.serves.tolist()) if edge >= 0}
    loose: list[tuple[int, _Stretch]] = []
    for edge, stretches in waiting.items():
        whole_mm = float(length[edge])
        if edge in at_once:
            known = _Stretch(0.0, whole_mm, float(match.deviation_mm[edge]), at_once[edge])
            stretches.append(known)
        loose += _cover(edge, whole_mm, stretches, match, tolerance_mm=tolerance_mm)
    for edge, stretch in loose:
        # Part of an edge that serves elsewhere strays from its way; one that does not is extra.
        if match.serves[stretch.owner] >= 0:
            worse = max(float(match.deviation_mm[edge]), stretch.distance_mm)
            match.deviation_mm[edge] = worse
        else:
            match.stray_mm[stretch.owner] += max(stretch.high - stretch.low, tolerance_mm * 2)


def _cut_at_planned_ends(planned: Edges, boxes: Boxes, found: Edges, rest: Places) -> _Parts:
    one, edge = boxes.find_meeting(boxes_around(found.take(rest), margin_mm=0.0))
    owner = rest[one]
    ends = np.column_stack((planned.start[edge], planned.end[edge]))
    feet = find_feet(ends, found, owner)
    length = found.length_mm
    along = feet.share * length[owner][:, None]
    inside = (feet.distance_mm <= SEARCH_MM) & (along > _STEP_MM)
    inside &= length[owner][:, None] - along > _STEP_MM
    owners = np.concatenate((rest, rest, np.column_stack((owner, owner))[inside]))
    shares = np.concatenate((np.zeros(len(rest)), np.ones(len(rest)), feet.share[inside]))
    order = np.lexsort((shares, owners))
    owners, shares = owners[order], shares[order]
    follows = (owners[1:] == owners[:-1]) & (np.diff(shares) * length[owners[1:]] > _STEP_MM)
    # A cut too near the last one is passed over; the part then runs on to the next.
    return _Parts(owners[1:][follows], shares[:-1][follows], shares[1:][follows])


def _choose_planned(
    planned: Edges, boxes: Boxes, found: Edges, parts: _Parts, *, in_space: bool
) -> tuple[Places, Reals, Reals]:
    """For every part: the nearest planned edge or -1, how far, and which shares of it it covers."""
    count = len(parts.owner)
    shares = parts.begin[:, None] + (parts.end - parts.begin)[:, None] * _SAMPLES
    points = points_along(found, parts.owner, shares)
    around = np.column_stack(
        (
            points.real.min(axis=1),
            points.imag.min(axis=1),
            points.real.max(axis=1),
            points.imag.max(axis=1),
        )
    )
    part, edge = boxes.find_meeting(around)
    feet = find_feet(points[part], planned, edge)
    distance = feet.distance_mm
    if in_space:
        climb = (planned.high - planned.low)[edge][:, None]
        level = planned.low[edge][:, None] + feet.share * climb
        owner = parts.owner[part]
        rise = (found.high - found.low)[owner][:, None]
        here = found.low[owner][:, None] + shares[part] * rise
        distance = np.hypot(distance, level - here)
    farthest = distance.max(axis=1)
    chosen = np.full(count, -1, np.intp)
    away = np.full(count, np.inf)
    covers = np.zeros((count, 2))
    order = np.lexsort((edge, np.round(farthest, 7), part))
    order = order[farthest[order] <= SEARCH_MM]
    seen, firsts = np.unique(part[order], return_index=True)
    best = order[firsts]
    chosen[seen], away[seen] = edge[best], farthest[best]
    ends = feet.share[best][:, [0, -1]]
    covers[seen] = np.sort(ends, axis=1)
    return chosen, away, covers


def _cover(
    edge: int, length_mm: float, given: list[_Stretch], match: Match, *, tolerance_mm: float
) -> list[tuple[int, _Stretch]]:
    """Lay stretches along a planned edge; give those that were not needed."""
    exact = [stretch for stretch in given if stretch.distance_mm <= tolerance_mm]
    used, loose = exact, [stretch for stretch in given if stretch.distance_mm > tolerance_mm]
    gaps = list(_find_gaps(exact, length_mm))
    if not exact or max((reach for _, reach in gaps), default=0.0) > tolerance_mm:
        used, loose = given, []
        gaps = list(_find_gaps(given, length_mm))
    small = [reach for _, reach in gaps if reach <= SEARCH_MM]
    deviation = max([stretch.distance_mm for stretch in used] + small)
    match.deviation_mm[edge] = deviation
    match.uncovered_mm[edge] = sum(size for size, reach in gaps if reach > SEARCH_MM)
    match.served[edge] = True
    match.servants[edge] = {stretch.owner for stretch in used}
    for stretch in used:
        if match.serves[stretch.owner] < 0:
            match.serves[stretch.owner] = edge
    _find_doubled(exact, match)
    return [(edge, stretch) for stretch in loose]


def _find_gaps(stretches: Sequence[_Stretch], length_mm: float) -> Iterator[tuple[float, float]]:
    """Size of every gap, and how far its middle (at an end: the end) is from what covers."""
    reached = 0.0
    for low, high, _, _ in sorted(stretches):
        if low > reached:
            yield low - reached, (low - reached) / (1.0 if reached == 0 else 2.0)
        reached = max(reached, high)
    if reached < length_mm:
        yield length_mm - reached, length_mm - reached


def _find_doubled(stretches: Sequence[_Stretch], match: Match) -> None:
    reached = -np.inf
    for low, high, _, owner in sorted(stretches):
        over = min(reached, high) - low
        if over > 0:
            match.doubled_mm[owner] += over
        reached = max(reached, high)
