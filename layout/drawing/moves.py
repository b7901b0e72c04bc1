"""How is a finished drawing moved, or turned over for the other hand?"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

from layout.drawing.reference import ORIGIN_TEXT
from layout.drawing.shapes import (
    ENGRAVE_LABEL,
    Align,
    Arc,
    Circle,
    Lettering,
    Line,
    Outline,
    Point,
    Polyline3D,
    Shape,
    Stand,
)
from layout.drawing.sheet import Sheet, make_sheet

NOTE_MM = 2.4
NOTE_BELOW_MM = 2.0
"""Height of the line that says how far a sheet was moved, and its distance from the rest."""

ORIGIN_NOTE = "Origin: "
"""Notes and lines of lettering that begin so tell where the drawing's numbers count from."""


def mirrored(sheet: Sheet) -> Sheet:
    """Turn a drawing over for the other hand: y to -y, lettering upright in its mirrored place.

    Examples
    --------
    >>> nut = make_sheet("nut", "Nut", shapes=[Line("REF_LINE", (0, -20), (1, 22))])
    >>> mirrored(nut).shapes
    (Line(layer='REF_LINE', start=(0.0, 20.0), end=(1.0, -22.0)),)

    """
    shapes = [mirrored_shape(shape) for shape in sheet.shapes]
    return make_sheet(sheet.name, sheet.title, shapes=shapes, notes=sheet.notes)


def mirrored_shape(shape: Shape) -> Shape:
    """Turn one shape over: y to -y, lettering upright."""
    match shape:
        case Line():
            return Line(shape.layer, _over(shape.start), _over(shape.end))
        case Circle():
            return replace(shape, centre=_over(shape.centre))
        case Arc():
            return replace(
                shape,
                centre=_over(shape.centre),
                start_angle=-shape.end_angle,
                end_angle=-shape.end_angle + shape.sweep,
            )
        case Outline():
            bulges = tuple(-bulge for bulge in shape.bulges)
            return replace(shape, vertices=tuple(map(_over, shape.vertices)), bulges=bulges)
        case Polyline3D():
            return replace(shape, vertices=tuple((x, -y, z) for x, y, z in shape.vertices))
        case Lettering():
            return _mirror_lettering(shape)


def _over(point: Point) -> Point:
    return point[0], -point[1]


def _mirror_lettering(lettering: Lettering) -> Lettering:
    """Stand the same text in the mirror image of its box, never upside down."""
    stand: dict[Stand, Stand] = {"base": "top", "middle": "middle", "top": "base"}
    turned = replace(
        lettering,
        anchor=_over(lettering.anchor),
        angle=-lettering.angle,
        stand=stand[lettering.stand],
        strokes=(),
    )
    upright = math.remainder(turned.angle, math.tau)
    if -math.pi / 2 + 1e-9 < upright <= math.pi / 2 + 1e-9:
        return turned
    align: dict[str, Align] = {"left": "right", "centre": "centre", "right": "left"}
    return replace(
        turned,
        angle=math.remainder(upright + math.pi, math.tau),
        align=align[turned.align],
        stand=stand[turned.stand],
    )


def shifted(sheet: Sheet, by: Point) -> Sheet:
    """Move a whole drawing.

    Examples
    --------
    >>> nut = make_sheet("nut", "Nut", shapes=[Line("REF_LINE", (0, -20), (1, 22))])
    >>> shifted(nut, (0.5, 20)).extents
    Extents(left=0.5, low=0.0, right=1.5, high=42.0)

    """
    shapes = [shifted_shape(shape, by) for shape in sheet.shapes]
    return make_sheet(sheet.name, sheet.title, shapes=shapes, notes=sheet.notes)


def shifted_shape(shape: Shape, by: Point) -> Shape:
    """Move one shape, lettering with its strokes."""

    def move(point: Point) -> Point:
        return point[0] + by[0], point[1] + by[1]

    match shape:
        case Line():
            return Line(shape.layer, move(shape.start), move(shape.end))
        case Circle() | Arc():
            return replace(shape, centre=move(shape.centre))
        case Outline():
            return replace(shape, vertices=tuple(map(move, shape.vertices)))
        case Polyline3D():
            return replace(shape, vertices=tuple((*move((x, y)), z) for x, y, z in shape.vertices))
        case Lettering():
            strokes = tuple(
                replace(stroke, vertices=tuple(map(move, stroke.vertices)))
                for stroke in shape.strokes
            )
            return replace(shape, anchor=move(shape.anchor), strokes=strokes)


def made_positive(sheet: Sheet) -> tuple[Sheet, Point]:
    """Move a drawing to x and y of 0 and more, for machines that count from their corner.

    Examples
    --------
    >>> nut = make_sheet("nut", "Nut", shapes=[Line("REF_LINE", (0.0, -20.25), (-1, 22))])
    >>> sheet, by = made_positive(nut)
    >>> by, sheet.shapes
    ((1.0, 21.0), (Line(layer='REF_LINE', start=(1.0, 0.75), end=(0.0, 43.0)),))
    >>> sheet.notes
    ('Moved by x 1 mm, y 21 mm, so that no x or y is below 0.',)

    """
    (moved,), by = made_positive_together([sheet])
    return moved, by


def made_positive_together(sheets: Sequence[Sheet]) -> tuple[tuple[Sheet, ...], Point]:
    """Move all drawings of a job by the same amount, to x and y of 0 and more.

    Parameters
    ----------
    sheets
        Drawings that share one datum, and share it still when moved.

    Returns
    -------
    sheets
        Each with a note of the amount, lettered below the rest where it bears lettering at all.
        What told of the origin now tells where that point lies. Unchanged when nothing moves.
    by
        How far everything was moved, whole mm in x and y, 0 where nothing lies below 0.

    Notes
    -----
    Whole millimetres are read off and typed without a slip, and leave every digit behind the
    point as it was.

    """
    moved, by = tuple(sheets), (0.0, 0.0)
    while any(missing := _below_zero(moved)):
        # The line that is added may itself reach lower than the rest: then once more.
        by = (by[0] + missing[0], by[1] + missing[1])
        moved = tuple(_moved_saying_so(sheet, by) for sheet in sheets)
    return moved, by


def _below_zero(sheets: Sequence[Sheet]) -> Point:
    """How far drawings reach below 0 in x and y, in whole mm rounded up."""
    left, low = (min((sheet.extents[side] for sheet in sheets), default=0.0) for side in (0, 1))
    return max(math.ceil(-left), 0.0), max(math.ceil(-low), 0.0)


def _moved_saying_so(sheet: Sheet, by: Point) -> Sheet:
    x, y = f"{by[0]:.0f}", f"{by[1]:.0f}"

    def retold(text: str) -> str:
        if text == ORIGIN_TEXT:
            return f"origin {x},{y}"
        start, origin, rest = text.partition(ORIGIN_NOTE)
        return f"x {x}, y {y}: {rest}" if origin and not start else text

    note = f"Moved by x {x} mm, y {y} mm, so that no x or y is below 0."
    shapes: list[Shape] = []
    for shape in sheet.shapes:
        told = shape
        if isinstance(shape, Lettering) and retold(shape.text) != shape.text:
            told = replace(shape, text=retold(shape.text), strokes=())
        shapes.append(shifted_shape(told, by))
    if any(isinstance(shape, Lettering) for shape in shapes):
        below = (sheet.extents.left + by[0], sheet.extents.low + by[1] - NOTE_BELOW_MM)
        shapes.append(Lettering(ENGRAVE_LABEL, note, below, NOTE_MM, align="left", stand="top"))
    notes = (*map(retold, sheet.notes), note)
    return make_sheet(sheet.name, sheet.title, shapes=shapes, notes=notes)
