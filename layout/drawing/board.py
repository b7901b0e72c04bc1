"""What stands on the board sheet: outline, slots, strings, lines and labels.

Figures stand in the waste beside the bass edge, never on the face of the board.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from layout.drawing.moves import mirrored_shape
from layout.drawing.reference import draw_check_bar, draw_origin_mark
from layout.drawing.shapes import (
    CUT_OUTLINE,
    CUT_POCKET,
    CUT_SLOT,
    ENGRAVE_LABEL,
    REF_CENTRE,
    REF_LINE,
    REF_STRING,
    Extents,
    Lettering,
    Line,
    Outline,
    Point,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.geometry.cross import CrossLine
from layout.geometry.slots import outline_slot
from layout.plan.model import Piece, Plan

FIGURE_MM = 2.8
TITLE_MM = 4.0
NOTE_MM = 2.4
CLEAR_MM = 3.0
"""Space between slot ends and figures, and between lines of lettering."""

LINE_MM = 4.4
"""From one line of notes to the next."""

BAR_FROM_MM = 200.0
"""Where the check bar starts, clear of the notes."""

BEYOND_MM = 12.0
"""How far the centre line runs past the nut end and the bridge."""

TICK_MM = 6.0
"""How far the nut line and the bridge line reach beyond the outer strings or edges."""


def draw_board(plan: Plan) -> Sheet:
    """Draw the fingerboard, seen from above, nut at the left, treble side up.

    A left-handed job is the same board turned over, bass side up, with lettering upright.
    """
    board = [*_wood(plan), *_slots(plan), *_lines(plan), *_strings(plan), *_figures(plan)]
    if plan.instrument.hand == "left":
        board = [mirrored_shape(shape) for shape in board]
    notes = board_notes(plan)
    title = plan.instrument.title
    shapes = [*board, *draw_origin_mark(), *_legend(title, notes, around=extents_of(board))]
    return make_sheet("board", f"{title}: fingerboard", shapes=shapes, notes=notes)


def board_notes(plan: Plan) -> tuple[str, ...]:
    """Say unit, datum, and whether lines are nominal."""
    tooling = plan.instrument.tooling
    offset = tooling is not None and tooling.lines == "offset"
    notes = [
        "Unit: mm, drawn 1:1. Seen from above, nut at the left.",
        "Origin: where the nut line crosses the centre line.",
        "Lines: offset for the kerf." if offset else "Lines: nominal, no cutter offset.",
        f"Slots: {plan.cut.finished_mm:.3f} mm wide when cut.",
    ]
    if plan.instrument.hand == "left":
        notes.append("Left-handed: mirrored across the centre line.")
    return tuple(notes)


def _point(point: NDArray[np.float64]) -> Point:
    return float(point[0]), float(point[1])


def _wood(plan: Plan) -> Iterator[Shape]:
    yield Outline(CUT_OUTLINE, tuple(_point(corner) for corner in plan.board.wood_mm))
    if plan.instrument.board.binding_mm:
        for edge in (plan.board.treble, plan.board.bass):
            yield Outline(REF_LINE, tuple(_point(p) for p in edge.points_mm), closed=False)


def _cut_pieces(plan: Plan) -> tuple[Piece, ...]:
    return plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)


def _slots(plan: Plan) -> Iterator[Shape]:
    for piece in _cut_pieces(plan):
        if plan.cut.centre_line:
            yield Line(CUT_SLOT, _point(piece.cut_bass_mm), _point(piece.cut_treble_mm))
        if plan.cut.drawn_mm is not None:
            pocket = outline_slot(
                plan.cut, piece.cut_treble_mm, piece.cut_bass_mm, run=plan.instrument.slots.run
            )
            corners = tuple(_point(corner) for corner in pocket.points_mm)
            yield Outline(CUT_POCKET, corners, pocket.bulges)


def _lines(plan: Plan) -> Iterator[Shape]:
    """Nut line, bridge line, saddle strip and centre line."""
    board, strings = plan.board, plan.strings
    yield _across(strings.nut_line, board.treble.points_mm[0, 1], board.bass.points_mm[0, 1])
    outer = strings.bridge_mm[plan.fretted][[0, -1], 1]
    yield _across(strings.bridge_line, float(outer[0]), float(outer[1]))
    yield from _saddle_strip(plan)
    yield Line(
        REF_CENTRE,
        (float(plan.board.nut_end.at_centre_mm) - BEYOND_MM, 0.0),
        (float(strings.bridge_line.at_centre_mm) + BEYOND_MM, 0.0),
    )


def _across(line: CrossLine, treble_y: float, bass_y: float) -> Line:
    high, low = treble_y + TICK_MM, bass_y - TICK_MM
    return Line(REF_LINE, (float(line.x_at(low)), low), (float(line.x_at(high)), high))


def _saddle_strip(plan: Plan) -> Iterator[Shape]:
    """The strip all crown points lie in: as wide as the saddle, or as narrow as they allow."""
    strip = plan.ends.strip
    if strip is None or not np.any(plan.ends.setback_mm):
        return
    limit = plan.instrument.compensation.saddle_thickness_mm
    width = max(strip.width_mm, limit or 0.0)
    middle = CrossLine(strip.at_centre_mm, float(np.tan(strip.slant)))
    crowns = plan.ends.saddle_mm[plan.fretted][[0, -1], 1]
    high, low = float(crowns[0]) + TICK_MM, float(crowns[1]) - TICK_MM
    if width < 0.05:
        yield _across(middle, float(crowns[0]), float(crowns[1]))
        return
    sides = [middle.moved_square(half) for half in (-width / 2, width / 2)]
    yield Outline(
        REF_LINE,
        (
            (float(sides[0].x_at(low)), low),
            (float(sides[1].x_at(low)), low),
            (float(sides[1].x_at(high)), high),
            (float(sides[0].x_at(high)), high),
        ),
    )


def _strings(plan: Plan) -> Iterator[Shape]:
    for nut, saddle in zip(plan.ends.nut_mm, plan.ends.saddle_mm, strict=True):
        yield Line(REF_STRING, _point(nut), _point(saddle))


def _figures(plan: Plan) -> Iterator[Shape]:
    """Fret labels beside the bass ends, string notes behind the nut."""
    labels = plan.instrument.frets.labels
    for fret in range(1, plan.instrument.frets.count + 1):
        end = plan.pieces_of(fret)[-1].cut_bass_mm
        low = min(float(end[1]), plan.board.bass.y_at(float(end[0])))
        yield Lettering(
            ENGRAVE_LABEL,
            labels[fret - 1],
            (float(end[0]), low - CLEAR_MM),
            FIGURE_MM,
            stand="top",
        )
    behind = float(min(plan.board.wood_mm[:, 0].min(), plan.ends.nut_mm[:, 0].min())) - CLEAR_MM
    for string, start in zip(plan.instrument.strings, plan.ends.nut_mm, strict=True):
        name = str(string.note) if string.note is not None else f"{string.hz:.2f} Hz"
        yield Lettering(ENGRAVE_LABEL, name, (behind, float(start[1])), FIGURE_MM, align="right")


def _legend(title: str, notes: tuple[str, ...], *, around: Extents) -> Iterator[Shape]:
    """Title above the board; notes and check bar below it, all in the waste."""
    room = 2 * CLEAR_MM + FIGURE_MM
    high, low = around.high + room, around.low - room
    yield Lettering(ENGRAVE_LABEL, title, (0.0, high), TITLE_MM, align="left", stand="base")
    for row, note in enumerate(notes):
        place = (0.0, low - row * LINE_MM)
        yield Lettering(ENGRAVE_LABEL, note, place, NOTE_MM, align="left", stand="top")
    yield from draw_check_bar((BAR_FROM_MM, low - NOTE_MM))
