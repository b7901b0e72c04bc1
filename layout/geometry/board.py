"""What shape is the fingerboard: its edges, its ends, its corners?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray

from layout.errors import Fault, JobError
from layout.geometry.cross import CrossLine
from layout.geometry.frets import FretLines
from layout.geometry.strings import StringLines
from layout.instrument import Board, Margins, Place, ShortStart, Widths

Array = NDArray[np.float64]

SAME_MM = 1e-10
"""Below the tolerance of algebra, 1e-9 mm."""

_MOST_STEPS = 20


@dataclass(frozen=True, slots=True)
class Edge:
    """One long edge as a chain of straight pieces from the nut end to the tail.

    Attributes
    ----------
    points_mm
        Shape (n, 2): the first lies on the nut end, the last on the tail.
    origin_mm
        Shape (2,): where the edge (extended if need be) crosses the theoretical nut line;
        distances along the edge are counted from here.

    """

    points_mm: Array
    origin_mm: Array

    def crossing(self, line: CrossLine) -> Array | None:
        """Give the point where a line across the board leaves over this edge, shape (2,).

        The innermost crossing counts where the edge steps; None where the line misses the edge.
        """
        start, run = self.points_mm[:-1], np.diff(self.points_mm, axis=0)
        gap = line.at_centre_mm + line.slope * start[:, 1] - start[:, 0]
        across = run[:, 0] - line.slope * run[:, 1]
        with np.errstate(divide="ignore", invalid="ignore"):
            share = gap / across
        hits = np.flatnonzero((share >= -1e-12) & (share <= 1 + 1e-12))
        if not len(hits):
            return None
        points = start[hits] + share[hits, None] * run[hits]
        return np.asarray(points[np.argmin(np.abs(points[:, 1]))])

    def y_at(self, x_mm: float) -> float:
        """Give the edge's distance from the centre line at x, ends extended."""
        x, y = self.points_mm[:, 0], self.points_mm[:, 1]
        piece = int(np.clip(np.searchsorted(x, x_mm) - 1, 0, len(x) - 2))
        run = x[piece + 1] - x[piece]
        share = 0.0 if run == 0 else (x_mm - x[piece]) / run
        return float(y[piece] + share * (y[piece + 1] - y[piece]))

    def along_mm(self, point_mm: Array) -> float:
        """Measure from the theoretical nut line to a point, straight along the edge."""
        gap = point_mm - self.origin_mm
        return float(np.copysign(np.hypot(*gap), gap[0]))


@dataclass(frozen=True, slots=True)
class BoardShape:
    """The fingerboard in plan: finished edges and the wood that is cut.

    Attributes
    ----------
    treble, bass
        The finished edges.
    nut_end, tail_end
        The lines the board ends at.
    face
        The line the nut's face stands on (before each string's own shift).
    wood_mm
        Shape (n, 2): corners of the wood, treble nut corner first, along the treble edge.

    """

    treble: Edge
    bass: Edge
    nut_end: CrossLine
    tail_end: CrossLine
    face: CrossLine
    wood_mm: Array

    def width_at(self, x_mm: float) -> float:
        """Measure the finished width square to the centre line at x, in mm."""
        return self.treble.y_at(x_mm) - self.bass.y_at(x_mm)


def place_x_mm(place: Place, frets: FretLines, *, tail_mm: float, bridge_mm: float) -> float:
    """Give the x of a named place on the centre line, in mm."""
    named = {"nut": 0.0, "tail": tail_mm, "bridge": bridge_mm, 0: 0.0}
    return named[place] if place in named else float(frets.at_centre_mm[int(place) - 1])


def shape_board(
    board: Board,
    strings: StringLines,
    frets: FretLines,
    *,
    face: CrossLine,
    before_face_mm: float = 0.0,
    fretted: NDArray[np.bool_],
    short_starts: tuple[ShortStart | None, ...],
) -> BoardShape:
    """Shape the board around its strings and frets.

    Parameters
    ----------
    board
        What the job says of edges, ends and binding.
    strings, frets
        Where they run.
    face
        The line of the nut's face.
    before_face_mm
        How far the board runs on behind that line, along the centre line (zero frets).
    fretted
        Shape (S,): which strings run over the board.
    short_starts
        For each string, where it starts if it is a short one.

    Raises
    ------
    JobError
        When the edges cross, or the board has no length.

    """
    outer = _Outer(board, strings, frets, fretted, short_starts)
    behind, theory = face.moved(-before_face_mm), strings.nut_line
    nut_end, tail, edges = _ends_and_edges(outer, behind)
    if tail.at_centre_mm <= face.at_centre_mm:
        raise _impossible("board.length", "the board must reach beyond the nut")
    treble, bass = (_trimmed(points, nut_end, tail, theory) for points in edges)
    wood_treble, wood_bass = treble, bass
    if board.binding_mm:
        wood_treble, wood_bass = (
            _trimmed(_moved_square(edge.points_mm, inward), nut_end, tail, theory)
            for edge, inward in ((treble, -board.binding_mm), (bass, board.binding_mm))
        )
    wood = np.concatenate((wood_treble.points_mm, wood_bass.points_mm[::-1]))
    if not shapely.Polygon(wood).is_valid or shapely.LinearRing(wood).is_ccw:
        raise _impossible(
            "board", "the edges of the board cross; check margin or width, spread and length"
        )
    return BoardShape(treble, bass, nut_end, tail, face, wood)


@dataclass(frozen=True, slots=True)
class _Outer:
    """What the outline follows."""

    board: Board
    strings: StringLines
    frets: FretLines
    fretted: NDArray[np.bool_]
    short_starts: tuple[ShortStart | None, ...]

    def edges(self, tail: CrossLine) -> tuple[Array, Array]:
        """Treble and bass edge of a board that ends at a tail line."""
        rule = self.board.edges
        if isinstance(rule, Widths):
            return _edges_by_width(rule, self.strings, self.frets, tail=tail)
        return _edges_by_margin(
            rule, self.strings, tail=tail, fretted=self.fretted, short_starts=self.short_starts
        )


def _ends_and_edges(
    outer: _Outer, behind: CrossLine
) -> tuple[CrossLine, CrossLine, tuple[Array, Array]]:
    """Nut end, tail and edges; a length is counted in all, from the board's own nut end."""
    board = outer.board
    last = outer.frets.line(len(outer.frets.at_centre_mm))
    slope = last.slope if board.tail_end == "along" else 0.0
    length = board.length_mm
    tail = last.moved(board.past_last_fret_mm) if length is None else behind.moved(length)
    for _ in range(_MOST_STEPS):
        tail = CrossLine(tail.at_centre_mm, slope)
        edges = outer.edges(tail)
        nut_end = behind
        if board.nut_end == "square":
            corners = [_meet(points[0], points[1], behind)[0] for points in edges]
            nut_end = CrossLine(float(min(corners)))
        if length is None or abs(nut_end.at_centre_mm + length - tail.at_centre_mm) < SAME_MM:
            break
        tail = nut_end.moved(length)
    return nut_end, tail, edges


def _edges_by_width(
    widths: Widths, strings: StringLines, frets: FretLines, *, tail: CrossLine
) -> tuple[Array, Array]:
    """Half the width about the centre line at two places, straight through."""
    bridge = strings.bridge_line.at_centre_mm
    (x1, w1), (x2, w2) = (
        (place_x_mm(place, frets, tail_mm=tail.at_centre_mm, bridge_mm=bridge), width)
        for place, width in (widths.first, widths.second)
    )
    if x1 == x2:
        raise _impossible("board.width", "the two places must differ")
    grow = (w2 - w1) / (x2 - x1) / 2
    x = np.array([min(0.0, x1), max(tail.at_centre_mm, x2)])
    half = w1 / 2 + grow * (x - x1)
    return np.stack((x, half), axis=1), np.stack((x, -half), axis=1)


def _edges_by_margin(
    margins: Margins,
    strings: StringLines,
    *,
    tail: CrossLine,
    fretted: NDArray[np.bool_],
    short_starts: tuple[ShortStart | None, ...],
) -> tuple[Array, Array]:
    """Move the outer fretted lanes outward; the edge steps out where a short string begins."""
    chosen = np.flatnonzero(fretted)
    full = chosen[strings.full[chosen]]
    sides = ((1.0, chosen[0], full[0]), (-1.0, chosen[-1], full[-1]))
    treble, bass = (
        _stepped(
            side,
            outer=int(outer),
            inner=int(inner),
            margins=margins,
            strings=strings,
            tail=tail,
            start=short_starts[outer],
        )
        for side, outer, inner in sides
    )
    return treble, bass


def _stepped(
    side: float,
    *,
    outer: int,
    inner: int,
    margins: Margins,
    strings: StringLines,
    tail: CrossLine,
    start: ShortStart | None,
) -> Array:
    own = _lane_edge(inner, side, margins=margins, strings=strings, tail=tail)
    if outer == inner or start is None:
        return own
    beyond = _lane_edge(outer, side, margins=margins, strings=strings, tail=tail)
    own_nut = strings.nut_mm[outer] - start.behind_mm * strings.direction[outer]
    step_x = float(own_nut[0]) - start.step_mm
    at_step = [
        np.array([step_x, np.interp(step_x, piece[:, 0], piece[:, 1])]) for piece in (own, beyond)
    ]
    return np.array([own[0], at_step[0], at_step[1], beyond[-1]])


def _lane_edge(
    string: int, side: float, *, margins: Margins, strings: StringLines, tail: CrossLine
) -> Array:
    """Corner on the nut line and corner on the tail line of one lane moved outward, (2, 2)."""
    start, way = strings.nut_mm[string], strings.direction[string]
    ends = []
    for margin, line in ((margins.nut_mm, strings.nut_line), (margins.tail_mm, tail)):
        moved = start + np.array([0.0, side * margin])
        ends.append(_meet(moved, moved + way, line))
    return np.array(ends)


def _meet(first: Array, second: Array, line: CrossLine) -> Array:
    """Where the straight line through two points crosses a line across the board, (2,)."""
    run = second - first
    share = (line.at_centre_mm + line.slope * first[1] - first[0]) / (run[0] - line.slope * run[1])
    return np.asarray(first + share * run)


def _trimmed(points: Array, nut_end: CrossLine, tail: CrossLine, theory: CrossLine) -> Edge:
    """Bring an edge's first and last piece to the board's ends."""
    head = _meet(points[0], points[1], nut_end)
    foot = _meet(points[-2], points[-1], tail)
    origin = _meet(points[0], points[1], theory)
    return Edge(np.concatenate((head[None], points[1:-1], foot[None])), origin)


def _moved_square(points: Array, distance: float) -> Array:
    """Move a chain of edge pieces square to each piece, + toward the treble side."""
    line = shapely.LineString(points).offset_curve(distance, join_style="mitre")
    return np.asarray(shapely.get_coordinates(line), float)


def _impossible(path: str, rule: str) -> JobError:
    return JobError([Fault("job", None, path, None, rule)])
