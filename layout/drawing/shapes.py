"""What can stand on a sheet, and on which layer?

Neutral shapes in mm, each on one layer, that every file format is written from. Arcs stay arcs: a
curved edge of an outline carries its bulge, the tangent of a quarter of the angle it turns
through, positive when it turns to the left (counter-clockwise), 1 for a half circle.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise
from typing import Final, Literal, NamedTuple

Point = tuple[float, float]
SpacePoint = tuple[float, float, float]

CUT_OUTLINE: Final = "CUT_OUTLINE"
"""The part is cut free along these."""
CUT_SLOT: Final = "CUT_SLOT"
"""Centre lines of slots."""
CUT_POCKET: Final = "CUT_POCKET"
"""Closed outlines of slots wider than the cutter."""
CUT_FLOOR: Final = "CUT_FLOOR"
"""Slot floors in space, on a sheet of their own."""
DRILL_MARK: Final = "DRILL_MARK"
DRILL_PIN: Final = "DRILL_PIN"
SCRIBE_STOP: Final = "SCRIBE_STOP"
"""Stop lines of unfretted boards, and template lines."""
ENGRAVE_LABEL: Final = "ENGRAVE_LABEL"
REF_CENTRE: Final = "REF_CENTRE"
REF_STRING: Final = "REF_STRING"
REF_LINE: Final = "REF_LINE"
"""Nut, bridge and saddle strip."""
REF_BAR: Final = "REF_BAR"
"""The 100 mm check bar and the origin mark."""

Layer = Literal[
    "CUT_OUTLINE",
    "CUT_SLOT",
    "CUT_POCKET",
    "CUT_FLOOR",
    "DRILL_MARK",
    "DRILL_PIN",
    "SCRIBE_STOP",
    "ENGRAVE_LABEL",
    "REF_CENTRE",
    "REF_STRING",
    "REF_LINE",
    "REF_BAR",
]
LAYERS: Final[tuple[Layer, ...]] = (
    CUT_OUTLINE,
    CUT_SLOT,
    CUT_POCKET,
    CUT_FLOOR,
    DRILL_MARK,
    DRILL_PIN,
    SCRIBE_STOP,
    ENGRAVE_LABEL,
    REF_CENTRE,
    REF_STRING,
    REF_LINE,
    REF_BAR,
)
"""Every layer, in the order files list them."""


@dataclass(frozen=True, slots=True)
class Line:
    """A straight piece from ``start`` to ``end``."""

    layer: Layer
    start: Point
    end: Point


@dataclass(frozen=True, slots=True)
class Arc:
    """Part of a circle, counter-clockwise from ``start_angle`` to ``end_angle`` (radians)."""

    layer: Layer
    centre: Point
    radius_mm: float
    start_angle: float
    end_angle: float

    @property
    def sweep(self) -> float:
        """The angle turned through, above 0 and up to a full turn; 0 where both angles agree."""
        turn = self.end_angle - self.start_angle
        return turn if 0.0 <= turn <= math.tau else turn % math.tau


@dataclass(frozen=True, slots=True)
class Circle:
    """A whole circle: a hole, a dot, a pin."""

    layer: Layer
    centre: Point
    radius_mm: float


@dataclass(frozen=True, slots=True)
class Outline:
    """A chain of straight and round edges, closed unless said otherwise.

    ``bulges[i]`` belongs to the edge that leaves ``vertices[i]``; empty means straight all round.
    A closed outline does not repeat its first vertex.
    """

    layer: Layer
    vertices: tuple[Point, ...]
    bulges: tuple[float, ...] = ()
    closed: bool = True


@dataclass(frozen=True, slots=True)
class Polyline3D:
    """An open chain in space: the floor of a slot."""

    layer: Layer
    vertices: tuple[SpacePoint, ...]


Align = Literal["left", "centre", "right"]
Stand = Literal["base", "middle", "top"]


@dataclass(frozen=True, slots=True)
class Lettering:
    """Single-stroke text.

    Attributes
    ----------
    text
        What is written; characters outside ASCII are replaced when the sheet is made.
    anchor
        The point of the text that is pinned down.
    height_mm
        Height of a capital.
    angle
        Direction of writing, radians counter-clockwise from +x.
    align
        Which end of the text the anchor is at, along the writing.
    stand
        Whether the anchor is at the foot, half height or head of the capitals.
    strokes
        The text as chains of straight edges; filled in by ``make_sheet``.

    """

    layer: Layer
    text: str
    anchor: Point
    height_mm: float = 3.0
    angle: float = 0.0
    align: Align = "centre"
    stand: Stand = "middle"
    strokes: tuple[Outline, ...] = ()


Shape = Line | Arc | Circle | Outline | Polyline3D | Lettering


class Piece(NamedTuple):
    """One edge in the plane: straight, or an arc with its bulge."""

    start: Point
    end: Point
    bulge: float = 0.0


def on_grid(point: Point) -> Point:
    """Round a point to the step of all drawings, 1e-6 mm, without any minus zero.

    Examples
    --------
    >>> on_grid((12.3456784, -1e-9))
    (12.345678, 0.0)

    """
    return round(float(point[0]), 6) + 0.0, round(float(point[1]), 6) + 0.0


class Extents(NamedTuple):
    """The smallest upright rectangle around a drawing, mm."""

    left: float
    low: float
    right: float
    high: float

    @property
    def width(self) -> float:
        """From left to right."""
        return self.right - self.left

    @property
    def height(self) -> float:
        """From low to high."""
        return self.high - self.low


def pieces_of(shape: Shape) -> list[Piece]:
    """List the edges of a shape seen from above, in drawing order.

    A circle comes as two half circles, lettering as its strokes.

    Examples
    --------
    >>> pieces_of(Outline(CUT_OUTLINE, ((0, 0), (9, 0), (9, 4)), closed=False))
    [Piece(start=(0, 0), end=(9, 0), bulge=0.0), Piece(start=(9, 0), end=(9, 4), bulge=0.0)]

    """
    match shape:
        case Line():
            return [Piece(shape.start, shape.end)]
        case Arc():
            bulge = math.tan(shape.sweep / 4)
            ends = (_on_circle(shape, shape.start_angle), _on_circle(shape, shape.end_angle))
            return [Piece(*ends, bulge)]
        case Circle():
            x, y = shape.centre
            east, west = (x + shape.radius_mm, y), (x - shape.radius_mm, y)
            return [Piece(east, west, 1.0), Piece(west, east, 1.0)]
        case Outline():
            following = shape.vertices[1:] + (shape.vertices[:1] if shape.closed else ())
            bulges = shape.bulges or (0.0,) * len(shape.vertices)
            return [Piece(*edge) for edge in zip(shape.vertices, following, bulges, strict=False)]
        case Polyline3D():
            flat = [vertex[:2] for vertex in shape.vertices]
            return [Piece(*ends) for ends in pairwise(flat)]
        case Lettering():
            return [piece for stroke in shape.strokes for piece in pieces_of(stroke)]


def _on_circle(arc: Arc, angle: float) -> Point:
    x, y = arc.centre
    return x + arc.radius_mm * math.cos(angle), y + arc.radius_mm * math.sin(angle)


class Turn(NamedTuple):
    """The circle a round edge lies on: centre, radius, first angle, signed angle turned (rad)."""

    centre: Point
    radius_mm: float
    start_angle: float
    sweep: float


def turn_of(piece: Piece) -> Turn:
    """Find the circle that a round edge lies on.

    Notes
    -----
    With chord c and bulge b = tan(angle/4): radius = c (1 + b^2) / (4 |b|), and the centre lies
    c (1 - b^2) / (4 b) to the left of the middle of the chord. For a straight edge there is none.

    Examples
    --------
    >>> turn_of(Piece((1.0, 0.0), (-1.0, 0.0), 1.0))
    Turn(centre=(0.0, 0.0), radius_mm=1.0, start_angle=0.0, sweep=3.141592653589793)

    """
    (x0, y0), (x1, y1), b = piece
    aside = (1 - b * b) / (4 * b)
    centre = ((x0 + x1) / 2 - aside * (y1 - y0), (y0 + y1) / 2 + aside * (x1 - x0))
    radius_mm = math.hypot(x1 - x0, y1 - y0) * (1 + b * b) / (4 * abs(b))
    return Turn(centre, radius_mm, math.atan2(y0 - centre[1], x0 - centre[0]), 4 * math.atan(b))


def point_along(piece: Piece, share: float) -> Point:
    """Find the point that lies ``share`` (0 to 1) of the way along an edge.

    Examples
    --------
    >>> point_along(Piece((0, 0), (8, 4)), 0.25)
    (2.0, 1.0)

    """
    (x0, y0), (x1, y1), bulge = piece
    if share in {0, 1}:
        return piece.end if share else piece.start
    if bulge == 0:
        return x0 + share * (x1 - x0), y0 + share * (y1 - y0)
    (x, y), radius_mm, start_angle, sweep = turn_of(piece)
    angle = start_angle + share * sweep
    return x + radius_mm * math.cos(angle), y + radius_mm * math.sin(angle)


def extents_of(shapes: Iterable[Shape]) -> Extents:
    """Find the smallest upright rectangle around the shapes, arcs at their true reach.

    Raises
    ------
    ValueError
        When there is nothing to enclose.

    Examples
    --------
    >>> extents_of([Outline(CUT_OUTLINE, ((0.0, 0.0), (10.0, 0.0)), (1.0, 0.0))])
    Extents(left=0.0, low=-5.0, right=10.0, high=0.0)

    """
    xs: list[float] = []
    ys: list[float] = []
    for shape in shapes:
        if isinstance(shape, Lettering):
            xs += [x for stroke in shape.strokes for x, _ in stroke.vertices]
            ys += [y for stroke in shape.strokes for _, y in stroke.vertices]
            continue
        for piece in pieces_of(shape):
            for x, y in (piece.start, piece.end, *_far_points(piece)):
                xs.append(x)
                ys.append(y)
    if not xs:
        raise ValueError("an empty sheet has no extents")
    return Extents(min(xs), min(ys), max(xs), max(ys))


def _far_points(piece: Piece) -> list[Point]:
    """Points of an arc farthest right, up, left and down, where the arc reaches them."""
    if piece.bulge == 0:
        return []
    (x, y), radius, start, sweep = turn_of(piece)
    first, last = sorted((start, start + sweep))
    quarters = range(math.ceil(first / (math.pi / 2)), math.floor(last / (math.pi / 2)) + 1)
    directions = ((1, 0), (0, 1), (-1, 0), (0, -1))
    return [
        (x + radius * across, y + radius * up)
        for across, up in (directions[quarter % 4] for quarter in quarters)
    ]
