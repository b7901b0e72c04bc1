"""How is a sheet laid out at true size on pages of paper that are glued together?

Page coordinates are millimetres of the page as the file states it, from its lower left corner. A
printer that draws 100 mm as 99.2 gets everything drawn larger by 100/99.2, so that it comes out
right; the margin stays as it is, and the windows hold correspondingly less of the drawing.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

from layout.drawing.joints import Parting, Span, part_axis
from layout.drawing.page_marks import (
    CROSS_ARM_MM,
    PageWords,
    Room,
    draw_crosses,
    draw_page_marks,
    make_room,
)
from layout.drawing.reference import BAR_MM
from layout.drawing.shapes import (
    DRILL_MARK,
    SCRIBE_STOP,
    Extents,
    Lettering,
    Point,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.errors import Fault, JobError
from layout.instrument import Paper

PAPER_MM: dict[str, tuple[float, float]] = {
    "A4": (210.0, 297.0),
    "A3": (297.0, 420.0),
    "Letter": (215.9, 279.4),
    "Tabloid": (279.4, 431.8),
}
"""Short and long side: ISO 216, and ANSI/ASME Y14.1 sizes A and B."""

AROUND_MM = 1.0
"""Kept free around the drawing, so that no line is halved by the edge of a window."""
CROSS_OUTSIDE_MM = 5.5
"""Crosses stand this far outside the drawing where there is room."""
LEAST_WINDOW_MM = 40.0
"""A sheet that adds less than this beyond its overlap is not worth its glue."""


@dataclass(frozen=True, slots=True)
class Tile:
    """One page.

    Attributes
    ----------
    row, column
        Counted from 1 at the upper left.
    window
        The part of the sheet it shows, in sheet mm.
    corner
        The point of the sheet that lies at the lower left of the page's printable part.
    marks
        Bars, words and crosses, in sheet coordinates; bars and words lie outside the window.

    """

    row: int
    column: int
    window: Extents
    corner: Point
    marks: tuple[Shape, ...]


@dataclass(frozen=True, slots=True)
class Tiling:
    """A sheet on pages.

    Attributes
    ----------
    paper
        Name of the paper.
    page_width_mm, page_height_mm
        As the file states it; the board lies along the width.
    margin_mm
        Kept free on all four sides.
    scale_along, scale_across
        Millimetres on the page for each of the sheet: 1 unless the last print's bars were off.
    rows, columns
        How many.
    joints_x_mm, joints_y_mm
        Where pages are joined, in sheet mm; y from the top down.
    crosses
        In sheet coordinates; a page carries those that its window holds.
    crossed
        How many fret lines (and dots) the joints run through because no shift avoids it.
    tiles
        Row by row from the upper left.

    """

    paper: str
    page_width_mm: float
    page_height_mm: float
    margin_mm: float
    scale_along: float
    scale_across: float
    rows: int
    columns: int
    joints_x_mm: tuple[float, ...]
    joints_y_mm: tuple[float, ...]
    crosses: tuple[Point, ...]
    crossed: int
    tiles: tuple[Tile, ...]

    def to_page(self, tile: Tile, point: Point) -> Point:
        """Give where a point of the sheet lies on a page, mm from its lower left corner."""
        return (
            self.margin_mm + (point[0] - tile.corner[0]) * self.scale_along,
            self.margin_mm + (point[1] - tile.corner[1]) * self.scale_across,
        )


def plan_tiles(sheet: Sheet, paper: Paper, *, unit: Literal["mm", "in"] = "mm") -> Tiling:
    """Lay a sheet out on the fewest pages, joints clear of its fret lines where a shift does it.

    Parameters
    ----------
    sheet
        From ``draw_template``: lines on SCRIBE_STOP and dots on DRILL_MARK are kept whole.
    paper
        Size, margin, overlap, and what the last print's bars measured.
    unit
        The job's; the pages say it.

    Returns
    -------
    Tiling
        Landscape or portrait, whichever takes fewer pages, then the one that cuts fewer frets.

    Raises
    ------
    JobError
        When margin and overlap leave too little of the page for bars and drawing.

    Examples
    --------
    >>> from layout.drawing.shapes import Line
    >>> frets = [Line("SCRIBE_STOP", (x, -30.0), (x, 30.0)) for x in range(0, 480, 20)]
    >>> tiling = plan_tiles(make_sheet("frets", "Frets", shapes=frets), Paper())
    >>> tiling.columns, tiling.page_width_mm, tiling.joints_x_mm
    (2, 297.0, (251.5,))

    """
    scale = (BAR_MM / paper.bar_along_mm, BAR_MM / paper.bar_across_mm)
    around = _padded(sheet.extents)
    frame = _Frame(around, paper, scale, _spans(sheet, 0), _spans(sheet, 1))
    if paper.size == "roll":
        laid = frame.on_roll()
    else:
        short, long = PAPER_MM[paper.size]
        tried = [frame.on_pages(size) for size in ((long, short), (short, long))]
        possible = [laid for laid in tried if laid is not None]
        if not possible:
            raise _too_little_room(paper)
        laid = min(possible, key=lambda laid: (laid.pages, laid.crossed))
    return _finish(sheet, frame, laid, unit)


def _padded(extents: Extents) -> Extents:
    left, low, right, high = extents
    return Extents(left - AROUND_MM, low - AROUND_MM, right + AROUND_MM, high + AROUND_MM)


def _spans(sheet: Sheet, axis: int) -> tuple[Span, ...]:
    """From where to where every fret line and dot reaches along x (0) or y (1)."""
    kept = (*sheet.on_layer(SCRIBE_STOP), *sheet.on_layer(DRILL_MARK))
    reaches = [extents_of([shape]) for shape in kept]
    return tuple((reach[axis], reach[axis + 2]) for reach in reaches)


def _too_little_room(paper: Paper) -> JobError:
    rule = (
        f"{paper.size} with a margin of {paper.margin_mm:g} mm and an overlap of "
        f"{paper.overlap_mm:g} mm has no room for the check bars and the drawing"
    )
    remedy = "choose a smaller margin or overlap, or larger paper"
    return JobError([Fault("job", None, "paper", None, rule, remedy)])


# One way to lay the pages --------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Laid:
    page_mm: tuple[float, float]
    room: Room
    across: Parting
    down: Parting

    @property
    def pages(self) -> int:
        return len(self.across.windows_mm) * len(self.down.windows_mm)

    @property
    def crossed(self) -> int:
        return self.across.crossed + self.down.crossed


@dataclass(frozen=True, slots=True)
class _Frame:
    """What is laid out: reach of the drawing, paper, scale along and across, fret lines."""

    around: Extents
    paper: Paper
    scale: tuple[float, float]
    spans_x: tuple[Span, ...]
    spans_y: tuple[Span, ...]

    def on_pages(self, page_mm: tuple[float, float]) -> _Laid | None:
        """Lay pages of one size and direction; None where they are too small."""
        margin, overlap = self.paper.margin_mm, self.paper.overlap_mm
        width, height = (
            (side - 2 * margin) / scale for side, scale in zip(page_mm, self.scale, strict=True)
        )
        room = make_room(width, height)
        if room is None or min(room.width, room.height) - overlap < LEAST_WINDOW_MM:
            return None
        left, low, right, high = self.around
        across = part_axis(
            left, right, window_mm=room.width, overlap_mm=overlap, spans=self.spans_x
        )
        # Rows are counted from the top, so the axis is turned over.
        turned = tuple((-top, -bottom) for bottom, top in self.spans_y)
        down = part_axis(-high, -low, window_mm=room.height, overlap_mm=overlap, spans=turned)
        return _Laid(page_mm, room, across, down)

    def on_roll(self) -> _Laid:
        """Lay one page as large as need be."""
        room = Room.around(self.around.width, self.around.height + 2 * CROSS_OUTSIDE_MM)
        width, height = (
            side * scale + 2 * self.paper.margin_mm
            for side, scale in zip((room.whole_width, room.whole_height), self.scale, strict=True)
        )
        left, low, right, high = self.around
        across, down = (
            part_axis(*reach, window_mm=window, overlap_mm=0.0, spans=())
            for reach, window in (((left, right), room.width), ((-high, -low), room.height))
        )
        return _Laid((width, height), room, across, down)


def _finish(sheet: Sheet, frame: _Frame, laid: _Laid, unit: Literal["mm", "in"]) -> Tiling:
    """Give every page its window and its marks."""
    rows, columns = len(laid.down.windows_mm), len(laid.across.windows_mm)
    joints_x, joints_y = laid.across.joints_mm, tuple(-joint for joint in laid.down.joints_mm)
    windows = [
        Extents(left, -bottom, right, -top)
        for top, bottom in laid.down.windows_mm
        for left, right in laid.across.windows_mm
    ]
    crosses = tuple(_crosses(frame.around, windows, joints_x, joints_y))
    tiles = []
    for place, window in enumerate(windows):
        row, column = place // columns + 1, place % columns + 1
        words = PageWords(sheet.title, (row, rows), (column, columns), unit, frame.paper)
        # A window narrower or lower than its room fills it from the upper left.
        low = window.high - laid.room.height - laid.room.foot
        corner = (window.left - laid.room.left, low)
        marks = [
            *draw_page_marks(laid.room, words, corner=corner),
            *draw_crosses(crosses, within=window),
        ]
        # Letters as strokes, numbers on the grid of all drawings.
        finished = make_sheet("page", sheet.title, shapes=marks).shapes
        tiles.append(Tile(row, column, window, corner, finished))
    return Tiling(
        frame.paper.size,
        *laid.page_mm,
        frame.paper.margin_mm,
        *frame.scale,
        rows,
        columns,
        joints_x,
        joints_y,
        crosses,
        laid.crossed,
        tuple(tiles),
    )


def _crosses(
    around: Extents,
    windows: list[Extents],
    joints_x: tuple[float, ...],
    joints_y: tuple[float, ...],
) -> Iterator[Point]:
    """Two crosses at least on every joint, at its ends and where joints meet."""
    first, last = windows[0], windows[-1]
    inside = CROSS_ARM_MM + 0.5
    top = min(around.high + CROSS_OUTSIDE_MM, first.high - inside)
    bottom = max(around.low - CROSS_OUTSIDE_MM, last.low + inside)
    left = max(around.left - CROSS_OUTSIDE_MM, first.left + inside)
    right = min(around.right + CROSS_OUTSIDE_MM, last.right - inside)
    for x in joints_x:
        for y in (top, *joints_y, bottom):
            yield x, y
    for y in joints_y:
        yield left, y
        yield right, y


def words_of(tile: Tile) -> tuple[str, ...]:
    """Give what a page says beside its drawing, in the order it is drawn."""
    return tuple(shape.text for shape in tile.marks if isinstance(shape, Lettering))
