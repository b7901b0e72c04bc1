"""Where do position marks, locating pins and knife marks on the blank go?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from layout.geometry.cross import CrossLine
from layout.plan.model import Plan

PIN_BEYOND_NUT_MM = 6.0
PIN_BEYOND_TAIL_MM = 9.0
"""Clear waste between each pin and the board: unequal, so that a board cannot lie turned round."""


@dataclass(frozen=True, slots=True)
class Dot:
    """A round mark or hole: the fret it belongs to (0: none), its middle and its diameter."""

    fret: int
    x_mm: float
    y_mm: float
    size_mm: float


@dataclass(frozen=True, slots=True)
class KnifeMark:
    """Where a fret line crosses both edges of the square blank, as x along each edge."""

    fret: int
    treble_x_mm: float
    bass_x_mm: float


def mark_x_mm(plan: Plan, fret: int) -> float:
    """Give where a mark sits on the centre line: midway between frets, on the stop if unfretted."""
    at = float(plan.frets.at_centre_mm[fret - 1])
    if plan.instrument.frets.kind == "lines":
        return at
    before = float(plan.frets.at_centre_mm[fret - 2]) if fret > 1 else 0.0
    return (before + at) / 2


def place_face_dots(plan: Plan) -> tuple[Dot, ...]:
    """Place the dots of the face: one on the centre line, or two a quarter of the width off it."""
    marks = plan.instrument.marks
    dots = []
    for fret in sorted({*marks.face, *marks.double}):
        x = mark_x_mm(plan, fret)
        treble, bass = plan.board.treble.y_at(x), plan.board.bass.y_at(x)
        middle, quarter = (treble + bass) / 2, (treble - bass) / 4
        ys = (middle + quarter, middle - quarter) if fret in marks.double else (0.0,)
        dots += [Dot(fret, x, y, marks.face_size_mm) for y in ys]
    return tuple(dots)


def place_pins(plan: Plan) -> tuple[Dot, ...]:
    """Place two locating pins on the centre line: in the waste, or in the face when asked."""
    pins = plan.instrument.pins
    if pins is None:
        return ()
    half = pins.size_mm / 2
    nut_x = float(plan.board.wood_mm[:, 0].min())
    tail_x = float(plan.board.wood_mm[:, 0].max())
    places = (nut_x - PIN_BEYOND_NUT_MM - half, tail_x + PIN_BEYOND_TAIL_MM + half)
    if pins.where == "face":
        last = plan.instrument.frets.count
        places = (mark_x_mm(plan, 1), mark_x_mm(plan, last))
    return tuple(Dot(0, x, 0.0, pins.size_mm) for x in places)


def mark_blank(plan: Plan) -> tuple[KnifeMark, ...]:
    """Find where each fret line crosses both edges of the square blank, before tapering."""
    width = plan.instrument.board.blank_width_mm
    if width is None:
        return ()
    half = width / 2
    lines: list[tuple[int, CrossLine]] = [(0, plan.strings.nut_line)]
    lines += [(fret, plan.frets.line(fret)) for fret in range(1, plan.instrument.frets.count + 1)]
    return tuple(
        KnifeMark(fret, float(line.x_at(half)), float(line.x_at(-half))) for fret, line in lines
    )


def blank_too_narrow_by_mm(plan: Plan) -> float:
    """Say how much wider the board is than its blank; 0 or below where it fits."""
    width = plan.instrument.board.blank_width_mm
    if width is None:
        return -np.inf
    return 2 * float(np.abs(plan.board.wood_mm[:, 1]).max()) - width
