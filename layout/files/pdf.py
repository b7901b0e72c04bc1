"""How is a tiled sheet written as PDF pages that print at true size?

Vector lines only, lettering included, so that no font and no viewer's fitting comes between the
drawing and the paper. ``/PrintScaling /None`` asks the print dialogue for 100 %.

References
----------
ISO 32000-1 (2008), Document management - Portable document format, sections 8.3.2.3 (a unit of
user space is 1/72 in), 8.5.2 (curves), 12.2 (viewer preferences, PrintScaling).

"""

from __future__ import annotations

import math
from io import BytesIO
from typing import TYPE_CHECKING

from layout.drawing.shapes import (
    Circle,
    Extents,
    Layer,
    Lettering,
    Outline,
    Piece,
    Point,
    Shape,
    extents_of,
    pieces_of,
    point_along,
    turn_of,
)
from layout.drawing.sheet import Sheet
from layout.drawing.tiles import Tile, Tiling
from layout.units import MM_PER_INCH

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas
    from reportlab.pdfgen.pathobject import PDFPathObject

POINTS_PER_MM = 72 / MM_PER_INCH
LINE_WIDTH_MM = 0.15
"""A fret is laid to 0.1 mm by eye at a line no wider than this; most printers still print it."""
LETTER_WIDTH_MM = 0.2
DASHES_MM: dict[Layer, tuple[float, ...]] = {
    "REF_CENTRE": (8.0, 1.5, 1.0, 1.5),
    "REF_STRING": (3.0, 1.5),
}
"""Lines that are not cut are told apart by dashes: a page may be printed in black alone."""
_LARGEST_STEP = math.pi / 6
"""A cubic curve follows 30 degrees of a circle within 4e-7 of its radius."""


def render_pdf(sheet: Sheet, tiling: Tiling) -> bytes:
    """Write every tile of a sheet as a page, 1:1 or corrected for the printer.

    Parameters
    ----------
    sheet
        From ``draw_template``, the sheet ``tiling`` was planned for.
    tiling
        From ``plan_tiles``.

    Returns
    -------
    bytes
        The same for the same sheet and tiling. Coordinates are written to 0.001 pt or finer,
        4e-4 mm.

    """
    # reportlab takes 0.2 s to import: only commands that write a PDF pay it.
    from reportlab.pdfgen.canvas import Canvas  # noqa: PLC0415

    size = (tiling.page_width_mm * POINTS_PER_MM, tiling.page_height_mm * POINTS_PER_MM)
    with BytesIO() as stream:
        # PrintScaling came with PDF 1.6. `invariant` leaves the date of making out.
        canvas = Canvas(stream, pagesize=size, invariant=1, pageCompression=1, pdfVersion=(1, 6))
        canvas.setViewerPreference("PrintScaling", "None")
        canvas.setTitle(sheet.title)
        canvas.setSubject("Drawn at true size; print at 100 %")
        canvas.setAuthor("")
        canvas.setCreator("stopwright")
        canvas.setProducer("stopwright")
        for tile in tiling.tiles:
            _Page(canvas, tiling, tile).draw(sheet)
            canvas.showPage()
        canvas.save()
        return stream.getvalue()


class _Page:
    """One page: the sheet's shapes within the window, and the page's own marks."""

    def __init__(self, canvas: Canvas, tiling: Tiling, tile: Tile) -> None:
        self.canvas, self.tiling, self.tile = canvas, tiling, tile

    def draw(self, sheet: Sheet) -> None:
        self.canvas.setLineCap(1)
        self.canvas.setLineJoin(1)
        self.canvas.saveState()
        self._clip()
        for shape in sheet.shapes:
            if self._shows(shape):
                self._stroke(shape)
        self.canvas.restoreState()
        for shape in self.tile.marks:
            self._stroke(shape)

    def _shows(self, shape: Shape) -> bool:
        """Whether any of a shape is in the window; letters cut off here and whole elsewhere go."""
        reach = extents_of([shape])
        if not isinstance(shape, Lettering) or _holds(self.tile.window, reach):
            return _overlap(reach, self.tile.window)
        whole = any(_holds(tile.window, reach) for tile in self.tiling.tiles)
        return not whole and _overlap(reach, self.tile.window)

    def _clip(self) -> None:
        left, low, right, high = self.tile.window
        path = self.canvas.beginPath()
        (x0, y0), (x1, y1) = self._place((left, low)), self._place((right, high))
        path.rect(x0, y0, x1 - x0, y1 - y0)
        self.canvas.clipPath(path, stroke=0, fill=0)

    def _place(self, point: Point) -> Point:
        x, y = self.tiling.to_page(self.tile, point)
        return x * POINTS_PER_MM, y * POINTS_PER_MM

    def _stroke(self, shape: Shape) -> None:
        lettering = isinstance(shape, Lettering)
        width = LETTER_WIDTH_MM if lettering else LINE_WIDTH_MM
        self.canvas.setLineWidth(width * POINTS_PER_MM)
        self.canvas.setDash([part * POINTS_PER_MM for part in DASHES_MM.get(shape.layer, ())])
        for chain in shape.strokes if isinstance(shape, Lettering) else (shape,):
            path = self.canvas.beginPath()
            self._follow(path, chain)
            self.canvas.drawPath(path, stroke=1, fill=0)

    def _follow(self, path: PDFPathObject, shape: Shape) -> None:
        pieces = pieces_of(shape)
        closed = isinstance(shape, Circle) or (isinstance(shape, Outline) and shape.closed)
        path.moveTo(*self._place(pieces[0].start))
        for piece in pieces[:-1]:
            self._edge(path, piece)
        if not (closed and pieces[-1].bulge == 0):
            self._edge(path, pieces[-1])
        if closed:
            path.close()

    def _edge(self, path: PDFPathObject, piece: Piece) -> None:
        if piece.bulge == 0:
            path.lineTo(*self._place(piece.end))
            return
        sweep = turn_of(piece).sweep
        steps = math.ceil(abs(sweep) / _LARGEST_STEP - 1e-9)
        for step in range(steps):
            curve = _curve(piece, step / steps, (step + 1) / steps)
            numbers = [number for point in curve for number in self._place(point)]
            path.curveTo(*numbers)


def _curve(piece: Piece, start: float, end: float) -> tuple[Point, Point, Point]:
    """Two control points and the end of the cubic curve along part of an arc.

    With angle a the controls lie 4/3 tan(a/4) radii along the tangents at the ends, which makes
    the curve's middle lie on the circle.
    """
    turn = turn_of(piece)
    (x0, y0), (x1, y1) = point_along(piece, start), point_along(piece, end)
    reach = 4 / 3 * math.tan(turn.sweep * (end - start) / 4)
    x, y = turn.centre
    return (
        (x0 - reach * (y0 - y), y0 + reach * (x0 - x)),
        (x1 + reach * (y1 - y), y1 - reach * (x1 - x)),
        (x1, y1),
    )


def _holds(window: Extents, reach: Extents) -> bool:
    return (
        window.left <= reach.left
        and window.low <= reach.low
        and reach.right <= window.right
        and reach.high <= window.high
    )


def _overlap(one: Extents, other: Extents) -> bool:
    return (
        one.left <= other.right
        and other.left <= one.right
        and one.low <= other.high
        and other.low <= one.high
    )
