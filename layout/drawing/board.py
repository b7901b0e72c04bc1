"""What stands on the board sheet: outline, slots, strings, lines and labels.

Figures stand in the waste beside the bass edge, never on the face of the board.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from layout.drawing.board_marks import (
    KNIFE_MARK_MM,
    draw_blank,
    draw_fret_labels,
    draw_holes,
    draw_line_names,
    draw_string_names,
    hole_kerf_mm,
)
from layout.drawing.freeing import cut_free
from layout.drawing.legend import MIRRORED, draw_legend, offsets_lines, say_lines, with_lettering
from layout.drawing.moves import mirrored_shape
from layout.drawing.reference import draw_origin_mark
from layout.drawing.shapes import (
    CUT_OUTLINE,
    CUT_POCKET,
    CUT_SLOT,
    REF_CENTRE,
    REF_LINE,
    REF_STRING,
    SCRIBE_STOP,
    Line,
    Outline,
    Point,
    Shape,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.geometry.cross import CrossLine
from layout.geometry.slots import outline_slot
from layout.plan.marking import place_face_dots, place_pins
from layout.plan.model import Piece, Plan

CLEAR_MM = 3.0
"""Space between slot ends and figures."""

BEYOND_MM = 12.0
"""How far the centre line runs past the nut end and the bridge."""

TICK_MM = 6.0
"""How far the nut line and the bridge line reach beyond the outer strings or edges."""


def draw_board(plan: Plan) -> Sheet:
    """Draw the fingerboard, seen from above, nut at the left, treble side up.

    A left-handed job is the same board turned over, bass side up, with lettering upright.
    """
    board = [
        *_wood(plan),
        *_slots(plan),
        *draw_holes(plan),
        *_lines(plan),
        *draw_blank(plan),
        *_strings(plan),
        *_figures(plan),
    ]
    if plan.instrument.hand == "left":
        board = [mirrored_shape(shape) for shape in board]
    notes = board_notes(plan)
    title = plan.instrument.title
    legend = draw_legend(title, notes, around=with_lettering(board), left=0.0)
    shapes = [*board, *draw_origin_mark(), *legend]
    return make_sheet("board", f"{title}: fingerboard", shapes=shapes, notes=notes)


def board_notes(plan: Plan) -> tuple[str, ...]:
    """Say unit, datum, the state of the wood, and whether lines are nominal."""
    notes = [
        "Unit: mm, 1:1. Seen from above, nut at the left.",
        "Origin: the nut line on the centre line.",
        _say_state(plan),
        say_lines(plan),
        *_say_slots(plan),
    ]
    marked = place_face_dots(plan) or place_pins(plan)
    if marked and offsets_lines(plan) and hole_kerf_mm(plan) is None:
        notes.append("Holes: nominal; a beam on the line leaves them wider by its kerf.")
    if plan.instrument.hand == "left":
        notes.append(MIRRORED)
    return tuple(notes)


def _say_slots(plan: Plan) -> list[str]:
    """Say how wide slots come out, and what a round cutter does at blind ends."""
    if plan.instrument.frets.kind != "slotted":
        return ["Stops are scribed from edge to edge; no slot is cut."]
    cut, blind = plan.cut, plan.instrument.slots.run == "blind"
    notes = [f"Slots: {cut.finished_mm:.3f} mm wide when cut."]
    if cut.drawn_mm is not None and cut.centre_line:
        notes.append("CUT_POCKET clears a slot, CUT_SLOT is its centre line: cut one of the two.")
    if blind and cut.centre_line and cut.corner_mm:
        notes.append(
            f"Along a blind centre line the cutter reaches {cut.corner_mm:.2f} mm past each end."
        )
    if blind and cut.drawn_mm is not None and cut.corner_mm:
        short = 2 * cut.corner_mm
        notes.append(f"Blind pockets are full width over {short:.2f} mm less than their length.")
    return notes


def _say_state(plan: Plan) -> str:
    """Say which wood the sheet is laid on; seen from above, nothing moves as it is shaped on."""
    if plan.surface.flat:
        return "State of the wood: square blank, before it is tapered."
    return "State of the wood: square blank, before it is tapered and radiused."


def _point(point: NDArray[np.float64]) -> Point:
    return float(point[0]), float(point[1])


def _wood(plan: Plan) -> Iterator[Shape]:
    yield cut_free(plan, Outline(CUT_OUTLINE, tuple(_point(p) for p in plan.board.wood_mm)))
    if plan.instrument.board.binding_mm:
        for edge in (plan.board.treble, plan.board.bass):
            yield Outline(REF_LINE, tuple(_point(p) for p in edge.points_mm), closed=False)


def _cut_pieces(plan: Plan) -> tuple[Piece, ...]:
    return plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)


def _slots(plan: Plan) -> Iterator[Shape]:
    if plan.instrument.frets.kind != "slotted":  # stops are scribed: there is no wire to seat
        for piece in plan.pieces:
            yield Line(SCRIBE_STOP, _point(piece.bass_mm), _point(piece.treble_mm))
        return
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
    """Fret labels beside the bass ends, string notes behind the nut, names of lines."""
    blank = plan.instrument.board.blank_width_mm
    foot = 0.0 if blank is None else -blank / 2 - KNIFE_MARK_MM
    places = []
    for fret in range(1, plan.instrument.frets.count + 1):
        x, y = _point(plan.pieces_of(fret)[-1].cut_bass_mm)
        places.append((x, min(y, plan.board.bass.y_at(x), foot) - CLEAR_MM))
    yield from draw_fret_labels(plan.instrument.frets.labels, places)
    pins = [pin.x_mm - pin.size_mm / 2 for pin in place_pins(plan)]
    behind = min(float(plan.board.wood_mm[:, 0].min()), float(plan.ends.nut_mm[:, 0].min()), *pins)
    yield from draw_string_names(plan, x_mm=behind - 2 * CLEAR_MM)
    yield from draw_line_names(plan, beyond_mm=TICK_MM)
