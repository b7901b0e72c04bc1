"""What goes on paper at true size: the board to glue on the blank, and a strip for its edge?

Every fret carries its distance from zero, never the step from its neighbour: errors of a rule or
of paper that has stretched then do not add up along the board. The strip is as high as the board
is thick; it carries the frets' places along the bass edge, which the player sees, and the side
dots.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.drawing.lettering import letter, text_width_mm
from layout.drawing.moves import mirrored_shape
from layout.drawing.shapes import (
    CUT_OUTLINE,
    DRILL_MARK,
    ENGRAVE_LABEL,
    REF_CENTRE,
    REF_LINE,
    REF_STRING,
    SCRIBE_STOP,
    Circle,
    Lettering,
    Line,
    Outline,
    Point,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.geometry.board import Edge
from layout.geometry.cross import CrossLine
from layout.instrument import Instrument
from layout.plan.model import Piece, Plan
from layout.units import MM_PER_INCH

BEYOND_EDGE_MM = 5.0
"""How far fret lines run past the finished edge, to be found again when the paper is trimmed."""
BEYOND_END_MM = 10.0
"""How far the centre line runs past both ends of the board."""
CLEAR_MM = 1.5
"""Space between the end of a line and its figures."""
LABEL_MM, FIGURE_MM, NOTE_MM = 2.8, 2.2, 2.2
"""Heights of fret labels, of distances and of notes, where there is room."""
LEAST_MM = 0.9
"""Lettering any smaller cannot be read; closer frets get figures that touch."""
LINE_MM = 3.9
"""From one line of notes to the next."""
STRIP_APART_MM = 10.0
"""Between the figures of the board and the edge strip: room for scissors."""
NUT_TICK_MM = 2.0
"""How far the nut line reaches past the edge strip."""


def draw_template(plan: Plan) -> Sheet:
    """Draw what is printed 1:1: board, distances from zero, and the strip for its bass edge.

    Seen from above, nut at the left, treble side up; a left-handed job is turned over, bass side
    and strip up, with lettering upright.

    Returns
    -------
    Sheet
        ``template``. Fret lines, on the board and on the strip, are on SCRIBE_STOP, dots on
        DRILL_MARK: ``plan_tiles`` keeps joints away from both.

    """
    columns = tuple(_columns(plan))
    shapes: list[Shape] = [
        *_wood(plan),
        *_fret_lines(plan),
        *_lines(plan),
        *_strings(plan),
        *_figures(plan.instrument, columns),
    ]
    top = _lowest(shapes) - STRIP_APART_MM
    shapes += _strip(plan, top)
    if plan.instrument.hand == "left":
        shapes = [mirrored_shape(shape) for shape in shapes]
    notes = template_notes(plan)
    low = _lowest(shapes) - LINE_MM
    shapes += [
        Lettering(
            ENGRAVE_LABEL, note, (0.0, low - row * LINE_MM), NOTE_MM, align="left", stand="top"
        )
        for row, note in enumerate(notes)
    ]
    title = f"{plan.instrument.title}: paper template"
    return make_sheet("template", title, shapes=shapes, notes=notes)


def template_notes(plan: Plan) -> tuple[str, ...]:
    """Say unit, datum, what the figures are, and which state of the wood the paper fits."""
    inches = plan.instrument.unit == "in"
    bridge, *bridge_in = _distances(plan.strings.bridge_line.at_centre_mm, inches=inches)
    bridge = " = ".join((f"{bridge} mm", *bridge_in))
    notes = [
        f"Unit: mm{' and inches' if inches else ''}, drawn 1:1. Seen from above, nut at the left.",
        "Figures: distance from zero (nut line) along the centre line.",
        f"Bridge line: {bridge} on the centre line, off this sheet.",
        "For the flat face, before the top is radiused. Glue it on along the centre line.",
        "Strip: the bass edge, measured along it; its side toward the board is the face.",
    ]
    if plan.instrument.nut.zero == "kerf":
        notes[1] = "Figures: distance from zero (nut-end saw line) along the centre line."
    if plan.instrument.hand == "left":
        notes.append("Left-handed: mirrored across the centre line.")
    return tuple(notes)


def _lowest(shapes: Sequence[Shape]) -> float:
    """Find the lowest y of shapes whose lettering has no strokes yet, in mm."""
    lows = [
        extents_of([shape]).low
        if not isinstance(shape, Lettering)
        else min(y for stroke in _strokes(shape) for _, y in stroke)
        for shape in shapes
    ]
    return min(lows)


def _strokes(words: Lettering) -> tuple[tuple[Point, ...], ...]:
    return letter(
        words.text,
        anchor=words.anchor,
        height_mm=words.height_mm,
        angle=words.angle,
        align=words.align,
        stand=words.stand,
    )


def _point(point: NDArray[np.float64]) -> Point:
    return float(point[0]), float(point[1])


def _wood(plan: Plan) -> Iterator[Shape]:
    yield Outline(CUT_OUTLINE, tuple(_point(corner) for corner in plan.board.wood_mm))
    if plan.instrument.board.binding_mm:
        for edge in (plan.board.treble, plan.board.bass):
            yield Outline(REF_LINE, tuple(_point(p) for p in edge.points_mm), closed=False)
    blank = plan.instrument.board.blank_width_mm
    if blank is not None:
        xs = plan.board.wood_mm[:, 0]
        for y in (blank / 2, -blank / 2):
            yield Line(REF_LINE, (float(xs.min()), y), (float(xs.max()), y))


# Fret lines ----------------------------------------------------------------------------------


def _pieces(plan: Plan) -> tuple[Piece, ...]:
    return plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)


def _fret_lines(plan: Plan) -> Iterator[Shape]:
    """Centre lines; where a piece ends on an edge its line runs on past it."""
    for piece in _pieces(plan):
        bass, treble = (_lengthened(plan, piece, side) for side in (-1, 1))
        yield Line(SCRIBE_STOP, bass, treble)


def _lengthened(plan: Plan, piece: Piece, side: int) -> Point:
    """Give the drawn end of a piece: at its own end inside the board, else past the edge."""
    own, other = piece.treble_mm, piece.bass_mm
    if side < 0:
        own, other = other, own
    edge = plan.board.treble if side > 0 else plan.board.bass
    x, y = _point(own)
    if abs(y - edge.y_at(x)) > 1e-6:
        return x, y
    reach = _reach_y(plan, y, side)
    share = (reach - y) / (y - float(other[1]))
    return x + share * (x - float(other[0])), reach


def _reach_y(plan: Plan, edge_y: float, side: int) -> float:
    """How far lines across run: past the edge, and past the square blank where there is one."""
    blank = plan.instrument.board.blank_width_mm or 0.0
    return side * (max(side * edge_y, blank / 2) + BEYOND_EDGE_MM)


# Reference lines -----------------------------------------------------------------------------


def _lines(plan: Plan) -> Iterator[Shape]:
    """Nut line and centre line."""
    nut, xs = plan.strings.nut_line, plan.board.wood_mm[:, 0]
    low, high = _nut_reach(plan)
    yield Line(REF_LINE, (float(nut.x_at(low)), low), (float(nut.x_at(high)), high))
    yield Line(
        REF_CENTRE, (float(xs.min()) - BEYOND_END_MM, 0.0), (float(xs.max()) + BEYOND_END_MM, 0.0)
    )


def _nut_reach(plan: Plan) -> tuple[float, float]:
    """Lowest and highest y of the nut line."""
    return (
        _reach_y(plan, float(plan.board.bass.origin_mm[1]), -1),
        _reach_y(plan, float(plan.board.treble.origin_mm[1]), 1),
    )


def _strings(plan: Plan) -> Iterator[Shape]:
    """Strings from their nuts to the board's tail, and their notes behind the nut."""
    behind = float(min(plan.board.wood_mm[:, 0].min(), plan.ends.nut_mm[:, 0].min())) - CLEAR_MM
    ways = plan.ends.saddle_mm - plan.ends.nut_mm
    ways = ways / np.hypot(ways[:, :1], ways[:, 1:])
    to_tail = plan.board.tail_end.distance_along(plan.ends.nut_mm, ways)
    for string, start, way, run in zip(
        plan.instrument.strings, plan.ends.nut_mm, ways, to_tail, strict=True
    ):
        if not string.fretted or run <= 0:
            continue
        yield Line(REF_STRING, _point(start), _point(start + run * way))
        name = str(string.note) if string.note is not None else f"{string.hz:.2f} Hz"
        # Over the string's line, clear of it and of the centre line; a short string's own nut.
        x = behind if string.full else float(start[0]) - CLEAR_MM
        place = (x, float(start[1]) + 0.8)
        yield Lettering(ENGRAVE_LABEL, name, place, FIGURE_MM, align="right", stand="base")


# Figures -------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Column:
    """A label and a distance that stand under the end of a line, mm."""

    label: str
    distance_mm: float
    end: Point


def _columns(plan: Plan) -> Iterator[_Column]:
    """Zero and every fret, under the bass end of its line."""
    low, _ = _nut_reach(plan)
    yield _Column("0", 0.0, (float(plan.strings.nut_line.x_at(low)), low))
    for fret, label in enumerate(plan.instrument.frets.labels, start=1):
        pieces = plan.pieces_of(fret)
        x, y = _lengthened(plan, pieces[-1], -1)
        low = min(y, _reach_y(plan, plan.board.bass.y_at(x), -1))
        yield _Column(label, float(plan.frets.at_centre_mm[fret - 1]), (x, low))


def _figures(instrument: Instrument, columns: Sequence[_Column]) -> Iterator[Shape]:
    """Labels level, distances upright under them, no larger than the closest frets allow."""
    xs = np.sort([column.end[0] for column in columns])
    room = float(np.diff(xs).min()) if len(xs) > 1 else 10 * LABEL_MM
    widest = max(text_width_mm(column.label, height_mm=1.0) for column in columns)
    label_mm = max(LEAST_MM, min(LABEL_MM, (room - 0.6) / widest))
    inches = instrument.unit == "in"
    figure_mm = max(LEAST_MM, min(FIGURE_MM, room / 3.4 if inches else room / 1.4))
    # Inches stand beside the millimetres: under them the sheet would outgrow a page.
    asides = (-0.75, 0.75) if inches else (0.0,)
    for column in columns:
        x, y = column.end
        yield Lettering(ENGRAVE_LABEL, column.label, (x, y - CLEAR_MM), label_mm, stand="top")
        under = y - CLEAR_MM - label_mm - 1.3 * CLEAR_MM
        for aside, text in zip(asides, _distances(column.distance_mm, inches=inches), strict=True):
            place = (x + aside * figure_mm, under)
            yield Lettering(ENGRAVE_LABEL, text, place, figure_mm, angle=np.pi / 2, align="right")


def _distances(distance_mm: float, *, inches: bool) -> tuple[str, ...]:
    """Write with the digits of the table of positions, so that the two can be compared."""
    millimetres = f"{distance_mm + 0.0:.3f}"
    return (millimetres, f"{distance_mm / MM_PER_INCH:.4f} in") if inches else (millimetres,)


# Edge strip ----------------------------------------------------------------------------------


def _strip(plan: Plan, top: float) -> Iterator[Shape]:
    """The bass edge laid flat: outline, nut line, frets, side dots, distances along it.

    Every place stands under the same place of the board, within the edge's own slant.
    """
    edge, low = plan.board.bass, top - plan.instrument.board.thickness_mm
    head, foot = (along_edge_x(edge, float(x)) for x in edge.points_mm[[0, -1], 0])
    yield Outline(CUT_OUTLINE, ((head, low), (foot, low), (foot, top), (head, top)))
    zero = float(edge.origin_mm[0])
    yield Line(REF_LINE, (zero, low - NUT_TICK_MM), (zero, top + NUT_TICK_MM))
    yield from _side_dots(plan, (low + top) / 2)
    columns = [_Column("0", 0.0, (zero, low - NUT_TICK_MM))]
    for piece in plan.pieces:
        x, y = _point(piece.bass_mm)
        if abs(y - edge.y_at(x)) > 1e-6:
            continue  # a partial fret that ends inside the board does not show on the edge
        at = along_edge_x(edge, x)
        yield Line(SCRIBE_STOP, (at, low), (at, top))
        label = plan.instrument.frets.labels[piece.fret - 1]
        columns.append(_Column(label, at - zero, (at, low - NUT_TICK_MM)))
    yield from _figures(plan.instrument, columns)


def _side_dots(plan: Plan, middle: float) -> Iterator[Shape]:
    """Midway along the edge between two frets; on an unfretted board, on the stop itself."""
    marks, edge = plan.instrument.marks, plan.board.bass

    def place(fret: int) -> float:
        line = plan.strings.nut_line if fret == 0 else plan.frets.line(fret)
        return along_edge_x(edge, _edge_x(edge, line))

    for fret in marks.side:
        ahead = place(fret)
        behind = ahead if plan.instrument.frets.kind == "lines" else place(fret - 1)
        yield Circle(DRILL_MARK, ((ahead + behind) / 2, middle), marks.side_size_mm / 2)


def _edge_x(edge: Edge, line: CrossLine) -> float:
    """Give x where a line across meets an edge; the nut line may lie before the edge begins."""
    met = edge.crossing(line)
    if met is not None:
        return float(met[0])
    nearest = edge.points_mm[0 if line.at_centre_mm <= edge.points_mm[0, 0] else -1]
    return float(line.x_at(nearest[1]))


def along_edge_x(edge: Edge, x_mm: float) -> float:
    """Unroll an edge: the x of its zero, and from there the distance along the wood, in mm.

    Parameters
    ----------
    edge
        A long edge of the board; where it steps out square, the step adds no length.
    x_mm
        Where on it, counted along the centre line.

    Examples
    --------
    >>> edge = Edge(np.array([[0.0, -20.0], [300.0, -60.0], [330.0, -60.0]]), np.array([0, -20]))
    >>> round(along_edge_x(edge, 330.0), 6)  # the root of 300^2 + 40^2, and 30
    332.654919

    """
    zero = float(edge.origin_mm[0])
    x, y = edge.points_mm[:, 0], edge.points_mm[:, 1]
    run = np.diff(x)
    with np.errstate(divide="ignore", invalid="ignore"):
        stretch = np.where(run > 1e-9, np.hypot(1.0, np.diff(y) / run), 0.0)
    # The outer pieces reach as far as asked for: zero may lie just off the trimmed board.
    bounds = np.concatenate(([min(zero, x[0], x_mm)], x[1:-1], [max(zero, x[-1], x_mm)]))
    near, far = min(zero, x_mm), max(zero, x_mm)
    inside = np.clip(np.minimum(bounds[1:], far) - np.maximum(bounds[:-1], near), 0.0, None)
    length = float((inside * stretch).sum())
    return zero + (length if x_mm >= zero else -length)
