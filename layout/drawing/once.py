"""Which parts of a drawing lie on top of one another, and which of them stay?

A machine that follows an edge twice burns or widens it. Every edge therefore stays once: on the
layer that does most to the wood, first come first served within a layer. Straight pieces and arcs
lose exactly the parts that an earlier shape already draws; a closed outline that is cut is never
opened, so pieces that lie along it give way to it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from layout.drawing.shapes import (
    Arc,
    Circle,
    Layer,
    Lettering,
    Line,
    Outline,
    Piece,
    Point,
    Polyline3D,
    Shape,
    SpacePoint,
    extents_of,
    on_grid,
    pieces_of,
    point_along,
    turn_of,
)

TOLERANCE_MM = 1e-6
"""Points nearer than this are the same: the step that vertices are rounded to."""
_RANK = {"CUT": 0, "DRILL": 1, "SCRIBE": 2, "ENGRAVE": 3}
_REF_RANK = {"REF_LINE": 4, "REF_STRING": 5, "REF_CENTRE": 6, "REF_BAR": 7}

Span = tuple[float, float]
"""A part of a piece, as shares of its way from 0 to 1."""


class _Edge(NamedTuple):
    """A piece, and the place (in the list of shapes, and within its shape) it belongs to."""

    piece: Piece
    owner: int
    position: int


def draw_once(shapes: Sequence[Shape]) -> list[Shape]:
    """Take away everything that an earlier shape already draws.

    Parameters
    ----------
    shapes
        Shapes with rounded vertices and no zero-length pieces; lettering with its strokes.

    Returns
    -------
    list of shapes
        In the given order. A line that was covered in part becomes one or more shorter lines; an
        open outline, a stroke, or a closed outline that is not cut becomes the runs that are left.

    Notes
    -----
    Rank: cut (closed outlines first), drill, scribe, engrave, REF_LINE, REF_STRING, REF_CENTRE,
    REF_BAR. Whole circles and slot floors only give way to their like. Two closed outlines to be
    cut stay whole even where they share part of an edge: an open contour would be worse, so a
    sheet does not place parts edge to edge.

    Examples
    --------
    >>> wood = Line("CUT_OUTLINE", (0.0, 0.0), (60.0, 0.0))
    >>> draw_once([Line("REF_LINE", (80.0, 0.0), (20.0, 0.0)), wood])[0]
    Line(layer='REF_LINE', start=(80.0, 0.0), end=(60.0, 0.0))

    """
    doubled = _find_doubled(shapes)
    left_out = doubled | _find_lone_words(shapes)
    order = sorted(
        (place for place in range(len(shapes)) if place not in left_out),
        key=lambda place: _rank_of(shapes[place]),
    )
    edges = [
        _Edge(piece, place, position)
        for place in order
        if not isinstance(shapes[place], Circle | Polyline3D)
        for position, piece in enumerate(pieces_of(shapes[place]))
    ]
    covered: dict[int, dict[int, list[Span]]] = {}
    for earlier, later in _find_near_pairs([edge.piece for edge in edges]):
        edge = edges[later]
        if not _stays_whole(shapes[edge.owner]) and (
            spans := _find_shared(edge.piece, edges[earlier].piece)
        ):
            covered.setdefault(edge.owner, {}).setdefault(edge.position, []).extend(spans)
    left: list[Shape] = []
    for place, shape in enumerate(shapes):
        if place in covered:
            left.extend(_without(shape, covered[place]))
        elif place not in doubled:
            left.append(shape)
    return left


def _rank_of(shape: Shape) -> tuple[int, bool]:
    operation = shape.layer.partition("_")[0]
    rank = _REF_RANK[shape.layer] if operation == "REF" else _RANK[operation]
    return rank, not _stays_whole(shape)


def _stays_whole(shape: Shape) -> bool:
    return isinstance(shape, Outline) and shape.closed and shape.layer.startswith("CUT")


def _find_doubled(shapes: Sequence[Shape]) -> set[int]:
    """Places of shapes that have a twin, the other way round or started elsewhere, before them."""
    doubled: set[int] = set()
    seen: dict[object, list[tuple[SpacePoint, Shape]]] = {}
    for place in sorted(range(len(shapes)), key=lambda place: _rank_of(shapes[place])):
        shape = shapes[place]
        if not isinstance(shape, Circle | Polyline3D | Outline):
            continue
        middle = _middle_of(shape)
        alike = seen.setdefault(_kind_of(shape), [])
        if any(_same(middle, other[0]) and _are_twins(shape, other[1]) for other in alike):
            doubled.add(place)
        else:
            alike.append((middle, shape))
    return doubled


def _find_lone_words(shapes: Sequence[Shape]) -> set[int]:
    """Places of lettering that stands clear of all other shapes: most of a sheet's edges.

    No two edges of a text lie on one another (see ``letter``), so it need not be looked at again.
    """
    words = [place for place, shape in enumerate(shapes) if isinstance(shape, Lettering)]
    if not words:
        return set()
    pieces = [
        piece
        for shape in shapes
        if not isinstance(shape, Lettering | Circle | Polyline3D)
        for piece in pieces_of(shape)
    ]
    own = np.array([extents_of([shapes[place]]) for place in words]).reshape(-1, 4)
    others = np.array([_box_of(piece) for piece in pieces]).reshape(-1, 4)
    boxes = np.concatenate((own, others))
    boxes += np.array([-1.0, -1.0, 1.0, 1.0]) * TOLERANCE_MM
    reach, low, high = boxes[: len(words), None], boxes[None, :, :2], boxes[None, :, 2:]
    meets = np.all((reach[..., :2] <= high) & (low <= reach[..., 2:]), axis=-1)
    meets[:, len(words) :] &= _may_reach(pieces, boxes[: len(words)])
    # Every text meets itself.
    return {place for place, count in zip(words, meets.sum(axis=1), strict=True) if count == 1}


def _may_reach(pieces: Sequence[Piece], boxes: NDArray[np.float64]) -> NDArray[np.bool_]:
    """Whether the endless line of each piece, (n, m), passes a box; arcs may always."""
    start = np.array([piece.start for piece in pieces]).reshape(-1, 2)
    way = np.array([piece.end for piece in pieces]).reshape(-1, 2) - start
    sides = [
        way[:, 0] * (y[:, None] - start[:, 1]) - way[:, 1] * (x[:, None] - start[:, 0])
        for x in (boxes[:, 0], boxes[:, 2])
        for y in (boxes[:, 1], boxes[:, 3])
    ]
    apart = (np.min(sides, axis=0) > 0) | (np.max(sides, axis=0) < 0)
    return np.asarray(~apart | np.array([piece.bulge != 0 for piece in pieces], dtype=bool))


def _kind_of(shape: Circle | Polyline3D | Outline) -> tuple[str, int, bool]:
    if isinstance(shape, Circle):
        return "Circle", 1, True
    return type(shape).__name__, len(shape.vertices), isinstance(shape, Outline) and shape.closed


def _middle_of(shape: Circle | Polyline3D | Outline) -> SpacePoint:
    """The mean of the vertices, which twins have in common: the cheap question first."""
    if isinstance(shape, Circle):
        return (*shape.centre, shape.radius_mm)
    count = len(shape.vertices)
    sums = [sum(axis) / count for axis in zip(*shape.vertices, strict=True)]
    return sums[0], sums[1], sums[2] if len(sums) > 2 else 0.0


def _are_twins(one: Shape, other: Shape) -> bool:
    match one, other:
        case Circle(), Circle():
            return True  # centre and radius were compared already
        case Polyline3D(), Polyline3D():
            back = one.vertices[::-1]
            return any(
                all(map(_same, vertices, other.vertices)) for vertices in (one.vertices, back)
            )
        case Outline(), Outline():
            mine, theirs = pieces_of(one), pieces_of(other)
            turned = [Piece(end, start, -bulge) for start, end, bulge in reversed(mine)]
            return any(
                _same_pieces(way[first:] + way[:first], theirs)
                for way in (mine, turned)
                for first in (range(len(way)) if one.closed else (0,))
                if _same(way[first].start, theirs[0].start)
            )
    return False


def _same(one: Sequence[float], other: Sequence[float]) -> bool:
    return all(abs(a - b) <= 1.5 * TOLERANCE_MM for a, b in zip(one, other, strict=True))


def _same_pieces(one: Sequence[Piece], other: Sequence[Piece]) -> bool:
    return all(
        _same(a.start, b.start) and _same(point_along(a, 0.5), point_along(b, 0.5))
        for a, b in zip(one, other, strict=True)
    )


def _find_near_pairs(pieces: Sequence[Piece]) -> list[tuple[int, int]]:
    """Pairs (earlier, later) that may share a stretch: boxes meet, and straight ones align."""
    if len(pieces) < 2:
        return []
    boxes = np.array([_box_of(piece) for piece in pieces])
    boxes += np.array([-1.0, -1.0, 1.0, 1.0]) * TOLERANCE_MM
    order = np.argsort(boxes[:, 0], kind="stable")
    lefts = boxes[order, 0]
    # A piece can only meet those that begin, in x, before it ends.
    reach = np.searchsorted(lefts, boxes[order, 2], side="right")
    counts = reach - np.arange(len(order)) - 1
    first = np.repeat(np.arange(len(order)), counts)
    second = np.arange(counts.sum()) - np.repeat(np.cumsum(counts) - counts, counts) + first + 1
    one, other = order[first], order[second]
    near = (boxes[one, 1] <= boxes[other, 3]) & (boxes[other, 1] <= boxes[one, 3])
    one, other = one[near], other[near]
    near = _may_align(pieces, one, other)
    pairs = np.sort(np.column_stack((one[near], other[near])), axis=1)
    return sorted((int(earlier), int(later)) for earlier, later in pairs)


def _box_of(piece: Piece) -> tuple[float, float, float, float]:
    if piece.bulge:
        return extents_of([Outline("REF_BAR", piece[:2], (piece.bulge, 0.0), closed=False)])
    (x0, y0), (x1, y1), _ = piece
    return min(x0, x1), min(y0, y1), max(x0, x1), max(y0, y1)


def _may_align(
    pieces: Sequence[Piece], one: NDArray[np.intp], other: NDArray[np.intp]
) -> NDArray[np.bool_]:
    """Keep arcs with arcs, and straight pieces that point the same way within the tolerance."""
    start = np.array([piece.start for piece in pieces])
    way = np.array([piece.end for piece in pieces]) - start
    length = np.hypot(way[:, 0], way[:, 1])
    arc = np.array([piece.bulge != 0 for piece in pieces])
    cross = np.abs(way[one, 0] * way[other, 1] - way[one, 1] * way[other, 0])
    # Half the tolerance at each end of the shorter piece turns it by at most this much.
    straight = cross <= 4 * TOLERANCE_MM * np.maximum(length[one], length[other])
    return np.asarray(np.where(arc[one] | arc[other], arc[one] & arc[other], straight))


def _find_shared(piece: Piece, other: Piece) -> list[Span]:
    """Find which parts of ``piece`` the other one draws too; none where they only touch."""
    shorter, longer = sorted((piece, other), key=_length)
    if not all(_lies_on(longer, point_along(shorter, share)) for share in (0.0, 0.5, 1.0)):
        return []
    both = _shared_round(piece, other) if piece.bulge else _shared_straight(piece, other)
    least = 2 * TOLERANCE_MM / _length(piece)
    # A remainder shorter than that is none: the piece is covered to its end.
    clipped = [
        (low if low > least else 0.0, high if high < 1 - least else 1.0) for low, high in both
    ]
    return [(low, high) for low, high in clipped if high - low > least]


def _shared_straight(piece: Piece, other: Piece) -> list[Span]:
    (x0, y0), (x1, y1), _ = piece
    shares = [
        ((x - x0) * (x1 - x0) + (y - y0) * (y1 - y0)) / _length(piece) ** 2
        for x, y in (other.start, other.end)
    ]
    return [(min(shares), max(shares))]


def _shared_round(piece: Piece, other: Piece) -> list[Span]:
    """Shares of an arc between the other one's ends, which may be met on either way round."""
    begin, size = _counter_clockwise(piece)
    other_begin, other_size = _counter_clockwise(other)
    ahead = (other_begin - begin) % math.tau
    spans = [
        (from_angle / size, (from_angle + other_size) / size)
        for from_angle in (ahead, ahead - math.tau)
    ]
    return spans if piece.bulge > 0 else [(1 - high, 1 - low) for low, high in spans]


def _counter_clockwise(piece: Piece) -> tuple[float, float]:
    """First angle and angle turned of an arc, seen counter-clockwise."""
    turn = turn_of(piece)
    return (turn.start_angle if turn.sweep > 0 else turn.start_angle + turn.sweep), abs(turn.sweep)


def _length(piece: Piece) -> float:
    if piece.bulge == 0:
        return math.dist(piece.start, piece.end)
    turn = turn_of(piece)
    return turn.radius_mm * abs(turn.sweep)


def _lies_on(piece: Piece, point: Point) -> bool:
    """Whether a point lies on the endless line or the whole circle of a piece."""
    if piece.bulge == 0:
        (x0, y0), (x1, y1), _ = piece
        cross = (x1 - x0) * (point[1] - y0) - (y1 - y0) * (point[0] - x0)
        return abs(cross) <= 1.5 * TOLERANCE_MM * _length(piece)
    turn = turn_of(piece)
    return abs(math.dist(turn.centre, point) - turn.radius_mm) <= 2 * TOLERANCE_MM


def _without(shape: Shape, covered: Mapping[int, Sequence[Span]]) -> list[Shape]:
    """Give what is left of a shape without the covered parts of its edges."""
    if isinstance(shape, Lettering):
        rest = _lettering_without(shape, covered)
        return [rest] if rest.strokes else []
    runs = _runs_left(shape, covered)
    match shape:
        case Line():
            return [Line(shape.layer, run[0].start, run[-1].end) for run in runs]
        case Arc():
            return [
                replace(
                    shape,
                    start_angle=shape.start_angle + low * shape.sweep,
                    end_angle=shape.start_angle + high * shape.sweep,
                )
                for low, high in _spans_left(covered[0])
            ]
        case _:
            return [_as_outline(shape.layer, run) for run in runs]


def _lettering_without(lettering: Lettering, covered: Mapping[int, Sequence[Span]]) -> Lettering:
    strokes: list[Outline] = []
    position = 0
    for stroke in lettering.strokes:
        count = len(pieces_of(stroke))
        mine = {
            edge: covered[position + edge] for edge in range(count) if position + edge in covered
        }
        runs = _runs_left(stroke, mine)
        strokes.extend([_as_outline(stroke.layer, run) for run in runs] if mine else [stroke])
        position += count
    return replace(lettering, strokes=tuple(strokes))


def _as_outline(layer: Layer, run: Sequence[Piece]) -> Outline:
    vertices = (*(piece.start for piece in run), run[-1].end)
    bulges = (*(piece.bulge for piece in run), 0.0)
    return Outline(layer, vertices, bulges if any(bulges) else (), closed=False)


def _runs_left(shape: Shape, covered: Mapping[int, Sequence[Span]]) -> list[list[Piece]]:
    """Chains of what is left of a shape's edges, joined where nothing is missing between."""
    pieces = pieces_of(shape)
    runs: list[list[Piece]] = []
    joins = False  # whether the last run reaches the vertex that the next edge leaves
    for position, piece in enumerate(pieces):
        spans = _spans_left(covered.get(position, ()))
        for low, high in spans:
            if joins and low == 0:
                runs[-1].append(_part_of(piece, low, high))
            else:
                runs.append([_part_of(piece, low, high)])
            joins = high == 1
        joins = joins and bool(spans)
    round_again = joins and isinstance(shape, Outline) and shape.closed and len(runs) > 1
    if round_again and runs[0][0].start == pieces[0].start:
        runs[0] = runs.pop() + runs[0]
    return runs


def _spans_left(covered: Sequence[Span]) -> list[Span]:
    left: list[Span] = []
    reached = 0.0
    for low, high in sorted(covered):
        if low > reached:
            left.append((reached, low))
        reached = max(reached, high)
    return [*left, (reached, 1.0)] if reached < 1 else left


def _part_of(piece: Piece, low: float, high: float) -> Piece:
    start, end = (on_grid(point_along(piece, share)) for share in (low, high))
    return Piece(start, end, math.tan(math.atan(piece.bulge) * (high - low)))
