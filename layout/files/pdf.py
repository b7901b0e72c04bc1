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
from collections.abc import Sequence
from io import BytesIO

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
    reaches = [extents_of([shape]) for shape in sheet.shapes]
    pages = []
    for tile in tiling.tiles:
        shown = [
            shape
            for shape, reach in zip(sheet.shapes, reaches, strict=True)
            if _shows(shape, reach, tile, tiling)
        ]
        pages.append(_Page(tiling, tile).draw(shown))
    size = (tiling.page_width_mm * POINTS_PER_MM, tiling.page_height_mm * POINTS_PER_MM)
    return _write_document(pages, size, title=sheet.title)


def _write_document(pages: Sequence[str], size: tuple[float, float], *, title: str) -> bytes:
    """Put the lines of every page into a document."""
    # reportlab takes 0.1 s to import: only commands that write a PDF pay it.
    from reportlab import rl_config  # noqa: PLC0415
    from reportlab.pdfgen.canvas import Canvas  # noqa: PLC0415

    as_text, rl_config.useA85 = rl_config.useA85, 0  # streams stay bytes, a fifth smaller
    try:
        with BytesIO() as stream:
            # PrintScaling came with PDF 1.6. `invariant` leaves the date of making out.
            canvas = Canvas(
                stream, pagesize=size, invariant=1, pageCompression=1, pdfVersion=(1, 6)
            )
            canvas.setViewerPreference("PrintScaling", "None")
            canvas.setTitle(title)
            canvas.setSubject("Drawn at true size; print at 100 %")
            canvas.setAuthor("")
            canvas.setCreator("stopwright")
            canvas.setProducer("stopwright")
            for lines in pages:
                canvas.addLiteral(lines)
                canvas.showPage()
            canvas.save()
            return stream.getvalue()
    finally:
        rl_config.useA85 = as_text


def _shows(shape: Shape, reach: Extents, tile: Tile, tiling: Tiling) -> bool:
    """Whether any of a shape is in the window; letters cut off here and whole elsewhere go."""
    if not isinstance(shape, Lettering) or _holds(tile.window, reach):
        return _overlap(reach, tile.window)
    whole = any(_holds(other.window, reach) for other in tiling.tiles)
    return not whole and _overlap(reach, tile.window)


class _Page:
    """One page: the sheet's shapes within the window, and the page's own marks."""

    def __init__(self, tiling: Tiling, tile: Tile) -> None:
        self.lines = ["1 J 1 j"]
        # From mm of the sheet to points of the page.
        (x0, y0), (x1, y1) = (tiling.to_page(tile, corner) for corner in ((0.0, 0.0), (1.0, 1.0)))
        self.origin = (x0 * POINTS_PER_MM, y0 * POINTS_PER_MM)
        self.scale = ((x1 - x0) * POINTS_PER_MM, (y1 - y0) * POINTS_PER_MM)
        self.tile = tile
        self.style = ""

    def draw(self, shown: Sequence[Shape]) -> str:
        left, low, right, high = self.tile.window
        clip = " ".join(
            (
                self._to((left, low), "m"),
                self._to((right, low), "l"),
                self._to((right, high), "l"),
                self._to((left, high), "l"),
            )
        )
        self.lines.append(f"q {clip} h W n")
        for shape in shown:
            self._stroke(shape)
        self.lines.append("Q")
        self.style = ""
        for shape in self.tile.marks:
            self._stroke(shape)
        return "\n".join(self.lines)

    def _to(self, point: Point, operator: str) -> str:
        x = self.origin[0] + point[0] * self.scale[0]
        y = self.origin[1] + point[1] * self.scale[1]
        return f"{x:.4f} {y:.4f} {operator}"

    def _stroke(self, shape: Shape) -> None:
        self._set_style(shape)
        for chain in shape.strokes if isinstance(shape, Lettering) else (shape,):
            self.lines += (self._follow(chain), "S")

    def _set_style(self, shape: Shape) -> None:
        width = LETTER_WIDTH_MM if isinstance(shape, Lettering) else LINE_WIDTH_MM
        dashes = " ".join(f"{part * POINTS_PER_MM:.4f}" for part in DASHES_MM.get(shape.layer, ()))
        style = f"{width * POINTS_PER_MM:.4f} w [{dashes}] 0 d"
        if style != self.style:
            self.lines.append(style)
            self.style = style

    def _follow(self, shape: Shape) -> str:
        if isinstance(shape, Outline) and not shape.bulges:
            first, *others = shape.vertices
            words = [self._to(first, "m"), *(self._to(point, "l") for point in others)]
            return " ".join(words) + (" h" if shape.closed else "")
        pieces = pieces_of(shape)
        closed = isinstance(shape, Circle) or (isinstance(shape, Outline) and shape.closed)
        words = [self._to(pieces[0].start, "m"), *map(self._edge, pieces[:-1])]
        if not (closed and pieces[-1].bulge == 0):
            words.append(self._edge(pieces[-1]))
        return " ".join(words) + (" h" if closed else "")

    def _edge(self, piece: Piece) -> str:
        if piece.bulge == 0:
            return self._to(piece.end, "l")
        sweep = turn_of(piece).sweep
        steps = math.ceil(abs(sweep) / _LARGEST_STEP - 1e-9)
        words = []
        for step in range(steps):
            one, two, end = _curve(piece, step / steps, (step + 1) / steps)
            words += [self._to(one, ""), self._to(two, ""), self._to(end, "c")]
        return " ".join(words)


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
