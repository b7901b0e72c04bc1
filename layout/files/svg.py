"""How is a sheet written as SVG at true size?

One unit is 1 mm; y points down on the page, so it is flipped in the coordinates themselves and
no transform is needed. Programs for cutters read the plainest part of the format: paths of
absolute M, L, A and Z, and circles for holes, in one group a layer.

References
----------
W3C (2011), Scalable Vector Graphics 1.1, sections 5.2 (groups), 7.7 (viewBox), 8.3 (path data).

"""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Mapping
from io import StringIO
from typing import TYPE_CHECKING

from layout.drawing.shapes import (
    Circle,
    Lettering,
    Outline,
    Piece,
    Point,
    Shape,
    pieces_of,
    point_along,
    turn_of,
)
from layout.drawing.sheet import Sheet
from layout.files.layers import COLOURS, name_layers

if TYPE_CHECKING:
    from svgwrite.base import BaseElement

STROKE_MM = 0.1
MARGIN_MM = 2.0
"""White around the drawing: half the width of a line lies outside it, and some viewers cut off
what touches the page's edge."""
_LARGEST_STEP = math.pi / 3
"""Arcs are written in steps of up to 60 degrees. With four decimals a half circle of 0.3 mm would
miss its top by 0.005 mm (the radius decides where the centre is); in such steps no arc misses by
more than its rounded ends do."""


def render_svg(sheet: Sheet, *, layers: Mapping[str, str] | None = None) -> bytes:
    """Write a sheet as SVG in millimetres.

    Parameters
    ----------
    sheet
        From ``make_sheet``. Slot floors are drawn as seen from above.
    layers
        The maker's own layer names: layer to name.

    Returns
    -------
    bytes
        UTF-8; coordinates with at most four decimals, counted from the upper left corner.

    Raises
    ------
    FileError
        For a layer name that some reader would refuse.

    """
    # svgwrite takes 0.04 s to import: only commands that write SVG pay it.
    import svgwrite  # noqa: PLC0415

    names = name_layers(layers or {})
    page = _Page(sheet)
    width, height = map(_write_number, page.size)
    drawing = svgwrite.Drawing(
        size=(f"{width}mm", f"{height}mm"), viewBox=f"0 0 {width} {height}", debug=False
    )
    drawing.set_desc(_printable(sheet.title), _printable("\n".join((*sheet.notes, page.origin))))
    groups: dict[str, BaseElement] = {}
    for layer in sheet.layers:
        name = names[layer]
        if name not in groups:
            groups[name] = drawing.add(
                drawing.g(id=name, fill="none", stroke=COLOURS[layer].rgb, stroke_width=STROKE_MM)
            )
        for shape in sheet.on_layer(layer):
            if isinstance(shape, Circle):
                x, y = page.place(shape.centre)
                radius = _write_number(shape.radius_mm)
                groups[name].add(drawing.circle(center=(x, y), r=radius))
            else:
                groups[name].add(drawing.path(d=page.path(shape)))
    with StringIO() as stream:
        drawing.write(stream)
        return stream.getvalue().encode("utf-8")


class _Page:
    """Where the sheet's points lie on the page, as text."""

    def __init__(self, sheet: Sheet) -> None:
        # The corner lies on a whole step, so that the origin stated below is exact.
        around = sheet.extents
        self.left = _step_down(around.left) - MARGIN_MM
        self.high = -_step_down(-around.high) + MARGIN_MM
        self.size = (
            -_step_down(-around.right) + MARGIN_MM - self.left,
            self.high - _step_down(around.low) + MARGIN_MM,
        )
        x, y = self.place((0.0, 0.0))
        self.origin = (
            f"Origin of the drawing: {x} mm from the left and {y} mm from the top of this page; "
            "one unit is 1 mm."
        )

    def place(self, point: Point) -> tuple[str, str]:
        return _write_number(point[0] - self.left), _write_number(self.high - point[1])

    def path(self, shape: Shape) -> str:
        """Path data of any shape but a circle."""
        if isinstance(shape, Lettering):
            return self._strokes(shape)
        pieces = pieces_of(shape)
        closed = isinstance(shape, Outline) and shape.closed
        words = ["M", *self.place(pieces[0].start)]
        for piece in pieces[:-1]:
            words += self._edge(piece)
        if not (closed and pieces[-1].bulge == 0):
            words += self._edge(pieces[-1])
        return " ".join([*words, "Z"] if closed else words)

    def _strokes(self, lettering: Lettering) -> str:
        """Write all strokes of a text at once: most of a sheet's numbers are theirs."""
        words: list[str] = []
        numbers: list[float] = []
        left, high = self.left, self.high
        for stroke in lettering.strokes:
            words.append("M %.4f %.4f" + " L %.4f %.4f" * (len(stroke.vertices) - 1))
            if stroke.closed:
                words.append("Z")
            for x, y in stroke.vertices:
                numbers += (x - left, high - y)
        # Every point lies within the page: no number is below 0. Noughts at the end may stay.
        return " ".join(words) % tuple(numbers)

    def _edge(self, piece: Piece) -> list[str]:
        if piece.bulge == 0:
            return ["L", *self.place(piece.end)]
        turn = turn_of(piece)
        radius = _write_number(turn.radius_mm)
        # The page's y points down: turning left there is the way of falling angles, flag 0.
        sweep = "0" if piece.bulge > 0 else "1"
        steps = math.ceil(abs(turn.sweep) / _LARGEST_STEP - 1e-9)
        words: list[str] = []
        for step in range(1, steps + 1):
            ahead = self.place(point_along(piece, step / steps))
            words += ["A", radius, radius, "0", "0", sweep, *ahead]
        return words


def _step_down(value: float) -> float:
    """Round down to a whole step of 1e-4 mm; sheets count in steps of 1e-6 mm."""
    return math.floor(round(value * 1e4, 2)) / 1e4


def _write_number(value: float) -> str:
    """Write with at most four decimals, no exponent and no minus zero.

    >>> _write_number(-0.00001), _write_number(12.5), _write_number(100.0)
    ('0', '12.5', '100')
    """
    text = f"{value:.4f}".rstrip("0").rstrip(".")
    return "0" if text in {"-0", ""} else text


def _printable(text: str) -> str:
    """Leave out what XML forbids or no reader shows: control characters and lone surrogates."""
    return "".join(
        character
        for character in text
        if character == "\n" or unicodedata.category(character) not in {"Cc", "Cs", "Cn"}
    )
