"""How are arcs given to a reader that has no bulges, or no arcs at all?

Bulges are exact at both ends by nature: a bulge says nothing but how far an edge bows. An ARC says
where its centre lies and between which angles it runs, so its ends are what a reader computes; they
must come out where the neighbouring edges end. Chords need no such care.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Literal, assert_never

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
    pieces_of,
    point_along,
    turn_of,
)

Arcs = Literal["bulge", "pieces", "chords"]
"""Edges with bulges; separate lines and arcs; chords."""

CHORD_MM = 0.002
"""Chords stay this near the arc."""
STEP_MM = 1e-6
"""The step that vertices are rounded to."""
LARGEST_RADIUS_MM = 1e5
"""Of an ARC that closes. A reader computes ends as centre + radius x cosine; doubles of 1e5 are
1.5e-11 apart and angles near 360 degrees 5.7e-14 degree, which puts them 3e-10 mm off at worst. At
ten times the radius loose ends 1e-9 apart would be read as gaps."""
_LARGEST_TURN = math.pi / 3
"""Of one chord: a circle of two microns still looks like one."""


def spell_arcs(shape: Shape, arcs: Arcs) -> list[Shape]:
    """Write a shape's round edges the way a reader takes them.

    Parameters
    ----------
    shape
        From a sheet. Whole circles are holes and stay what they are, as do slot floors and
        everything straight.
    arcs
        ``bulge`` leaves a shape alone. ``pieces`` takes outlines with round edges apart into lines
        and arcs. ``chords`` puts straight edges within 0.002 mm of every arc, both ends exact.

    Returns
    -------
    list of shapes
        In drawing order, on the same layer; lettering as its strokes.

    Notes
    -----
    Ends of neighbouring pieces agree to 1e-9 mm by the reader's own sine and cosine. An arc with
    a radius above 100 m cannot keep that in the 16 digits of a double; it becomes chords within
    1e-6 mm, the step of the whole drawing, so that nobody sees the difference.

    Examples
    --------
    >>> half = Outline("CUT_OUTLINE", ((2.0, 0.0), (0.0, 0.0)), (1.0, 0.0))
    >>> for piece in spell_arcs(half, "pieces"):
    ...     print(piece)
    Arc(layer='CUT_OUTLINE', centre=(1.0, 0.0), radius_mm=1.0, start_angle=0.0,
        end_angle=3.141592653589793)
    Line(layer='CUT_OUTLINE', start=(0.0, 0.0), end=(2.0, 0.0))
    >>> len(spell_arcs(half, "chords")[0].vertices)
    26

    """
    if isinstance(shape, Lettering):
        return [spelt for stroke in shape.strokes for spelt in spell_arcs(stroke, arcs)]
    match arcs:
        case "bulge":
            return [shape]
        case "pieces":
            return _as_pieces(shape) if _is_bent(shape) else [shape]
        case "chords":
            return [_as_chords(shape)]
        case _:
            assert_never(arcs)


def _is_bent(shape: Shape) -> bool:
    return isinstance(shape, Outline) and any(shape.bulges)


def _as_pieces(shape: Shape) -> list[Shape]:
    return [
        spelt
        for piece in pieces_of(shape)
        for spelt in (_spell_round(shape.layer, piece) if piece.bulge else [_line(shape, piece)])
    ]


def _line(shape: Shape, piece: Piece) -> Line:
    return Line(shape.layer, piece.start, piece.end)


def _spell_round(layer: Layer, piece: Piece) -> list[Shape]:
    """Give a round edge as an arc, or as chords where it is too flat for its ends to close."""
    centre, radius_mm, _, sweep = turn_of(piece)
    if radius_mm > LARGEST_RADIUS_MM:
        stops = [*_chord_points(piece, within_mm=STEP_MM, digits=9), piece.end]
        starts = [piece.start, *stops[:-1]]
        return [Line(layer, *ends) for ends in zip(starts, stops, strict=True)]
    # Arcs run counter-clockwise; both angles come from the ends themselves, not from the sweep.
    first, last = (piece.start, piece.end) if sweep > 0 else (piece.end, piece.start)
    start_angle, end_angle = (
        math.atan2(y - centre[1], x - centre[0]) % math.tau for x, y in (first, last)
    )
    if end_angle < start_angle:
        end_angle += math.tau
    return [Arc(layer, centre, radius_mm, start_angle, end_angle)]


def _as_chords(shape: Shape) -> Shape:
    match shape:
        case Arc():
            (piece,) = pieces_of(shape)
            between = _chord_points(piece, within_mm=CHORD_MM)
            return Outline(shape.layer, (piece.start, *between, piece.end), closed=False)
        case Outline() if any(shape.bulges):
            vertices = [
                point
                for piece in pieces_of(shape)
                for point in (piece.start, *_chord_points(piece, within_mm=CHORD_MM))
            ]
            if not shape.closed:
                vertices.append(shape.vertices[-1])
            return Outline(shape.layer, tuple(vertices), closed=shape.closed)
        case Line() | Circle() | Outline() | Polyline3D() | Arc() | Lettering():
            return shape


def _chord_points(piece: Piece, *, within_mm: float, digits: int = 6) -> list[Point]:
    """Points on a round edge, between its ends, whose chords lie within a distance of it.

    With radius r, a chord that turns through t bows by r (1 - cos(t/2)) = 2 r sin^2(t/4). An edge
    that bows at all gets a point between, so that it never lies on a straight edge back.
    """
    if piece.bulge == 0:
        return []
    _, radius_mm, _, sweep = turn_of(piece)
    turn = 4 * math.asin(math.sqrt(min((within_mm - STEP_MM / 2) / (2 * radius_mm), 1.0)))
    bow_mm = 2 * radius_mm * math.sin(sweep / 4) ** 2
    count = max(math.ceil(abs(sweep) / min(turn, _LARGEST_TURN)), 2 if bow_mm > STEP_MM else 1)
    points = [
        (round(x, digits) + 0.0, round(y, digits) + 0.0)
        for x, y in (point_along(piece, place / count) for place in range(1, count))
    ]
    return list(_apart(piece, points))


def _apart(piece: Piece, points: list[Point]) -> Iterator[Point]:
    """Drop points that rounding puts on their neighbour."""
    last = piece.start
    for point in points:
        if point not in {last, piece.end}:
            yield point
            last = point
