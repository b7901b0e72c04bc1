"""How is a finished drawing moved, or turned over for the other hand?"""

from __future__ import annotations

import math
from dataclasses import replace

from layout.drawing.shapes import (
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
    shapes = [_shift(shape, by) for shape in sheet.shapes]
    return make_sheet(sheet.name, sheet.title, shapes=shapes, notes=sheet.notes)


def _shift(shape: Shape, by: Point) -> Shape:
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
