"""What does every page of the template carry beside the drawing?

Bars that tell whether it was printed at true size, who and where it is, what to do with it, and
crosses that bring it into line with its neighbours. Bars and words have bands of their own at the
head, the foot and the left, so that they never lie on the drawing.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

from layout.drawing.lettering import text_width_mm
from layout.drawing.reference import BAR_MM
from layout.drawing.shapes import REF_BAR, Extents, Lettering, Line, Point, Shape
from layout.instrument import Paper
from layout.units import MM_PER_INCH

CROSS_ARM_MM = 4.0
INCH_BAR_MM = 4 * MM_PER_INCH
"""The bar for a rule in inches, beside the 100 mm of the others."""

LEFT_MM, HEAD_MM, FOOT_MM = 9.0, 6.0, 15.0
"""The bands. The across bar stands in the left one, the bars along lie in the foot."""
TICK_MM = 3.0
TITLE_MM, WORD_MM = 3.0, 2.2
LINE_MM = 3.4
MOST_LINES = 4
BESIDE_MM = 8.0
"""From the bars to the words beside them."""
LEAST_WORDS_MM = 62.0
"""Words beside the bars need so much room; on narrower pages they stand over the bars."""
_BAR_TO_LEFT_MM = 2.0
_ACROSS_X_MM, _ACROSS_LOW_MM = 6.0, 2.0
_BARS_RIGHT_MM = LEFT_MM + _BAR_TO_LEFT_MM + INCH_BAR_MM


@dataclass(frozen=True, slots=True)
class Room:
    """How the printable part of a page is shared out, in mm as they come out of the printer.

    Attributes
    ----------
    width, height
        Of the window that shows the drawing.
    left, foot, head
        The bands around it.

    """

    width: float
    height: float
    left: float
    foot: float
    head: float = HEAD_MM

    @property
    def whole_width(self) -> float:
        """Width of the printable part."""
        return self.left + self.width

    @property
    def whole_height(self) -> float:
        """Height of the printable part."""
        return self.foot + self.height + self.head

    @property
    def words_beside(self) -> bool:
        """Whether there is room for words at the right of the bars along."""
        return self.whole_width - _BARS_RIGHT_MM - BESIDE_MM >= LEAST_WORDS_MM

    @staticmethod
    def around(width: float, height: float) -> Room:
        """Give the room of a page as large as the drawing asks for, and the bars."""
        width = max(width, _BARS_RIGHT_MM + BESIDE_MM + LEAST_WORDS_MM - LEFT_MM)
        height = max(height, BAR_MM + _ACROSS_LOW_MM + TICK_MM - FOOT_MM)
        return Room(width, height, LEFT_MM, FOOT_MM)


def make_room(width_mm: float, height_mm: float) -> Room | None:
    """Share out a printable part of a given size; None where the bars do not fit on it."""
    room = Room(width_mm - LEFT_MM, height_mm - FOOT_MM - HEAD_MM, LEFT_MM, FOOT_MM)
    if not room.words_beside:
        more = MOST_LINES * LINE_MM
        room = Room(room.width, room.height - more, LEFT_MM, FOOT_MM + more)
    tall = BAR_MM + _ACROSS_LOW_MM + TICK_MM + HEAD_MM
    if width_mm < _BARS_RIGHT_MM + TICK_MM or height_mm < tall or room.height <= 0:
        return None
    return room


@dataclass(frozen=True, slots=True)
class PageWords:
    """What a page says: title, row and column (each with how many), unit, correction."""

    title: str
    row: tuple[int, int]
    column: tuple[int, int]
    unit: Literal["mm", "in"]
    paper: Paper

    @property
    def lines(self) -> tuple[str, ...]:
        """One sentence or two a line, up to ``MOST_LINES``."""
        (row, rows), (column, columns) = self.row, self.column
        unit = "mm and inches" if self.unit == "in" else "mm"
        along, across = self.paper.bar_along_mm, self.paper.bar_across_mm
        said = [
            f"Sheet: row {row} of {rows}, column {column} of {columns}. Unit: {unit}, 1:1.",
            "Print at 100 %, measure the bars; write what they give under paper: bars.",
        ]
        if (along, across) != (BAR_MM, BAR_MM):
            said.append(
                f"Corrected: drawn x 100/{along:g} along, x 100/{across:g} across, "
                "for the last print's bars."
            )
        if rows * columns > 1:
            said.append("Cut one sheet through its crosses; lay it on the crosses of the next.")
        return tuple(said)


def draw_page_marks(room: Room, words: PageWords, *, corner: Point) -> Iterator[Shape]:
    """Draw bars and words; ``corner`` is the lower left of the printable part."""
    x, y = corner
    start = x + LEFT_MM + _BAR_TO_LEFT_MM
    yield from _bar((start, y + 9.0), BAR_MM, "100 mm along")
    yield from _bar((start, y + 2.0), INCH_BAR_MM, "4 in along")
    across = (x + _ACROSS_X_MM, y + _ACROSS_LOW_MM)
    yield from _bar(across, BAR_MM, "100 mm across", angle=math.pi / 2)
    top = y + room.whole_height
    title = (x + LEFT_MM, top - 1.3 * TITLE_MM)
    yield _fitted(words.title, title, room.width, TITLE_MM)
    if room.words_beside:
        left, first = x + _BARS_RIGHT_MM + BESIDE_MM, y + FOOT_MM - LINE_MM
    else:
        left, first = x + LEFT_MM, y + room.foot - LINE_MM
    for number, line in enumerate(words.lines):
        width = x + room.whole_width - left
        yield _fitted(line, (left, first - number * LINE_MM), width, WORD_MM)


def _bar(start: Point, length: float, text: str, *, angle: float = 0.0) -> Iterator[Shape]:
    """Draw a bar with a tick at either end; its length is between the middles of the ticks."""
    along = (round(math.cos(angle), 12), round(math.sin(angle), 12))
    up = (-along[1], along[0])

    def place(ahead: float, aside: float) -> Point:
        return (
            start[0] + ahead * along[0] + aside * up[0],
            start[1] + ahead * along[1] + aside * up[1],
        )

    half = TICK_MM / 2
    yield Line(REF_BAR, place(0, 0), place(length, 0))
    for ahead in (0.0, length):
        yield Line(REF_BAR, place(ahead, -half), place(ahead, half))
    yield Lettering(REF_BAR, text, place(length / 2, half - 0.5), WORD_MM, angle, stand="base")


def _fitted(text: str, place: Point, width: float, height: float) -> Lettering:
    """Letter a line from its left end, smaller where it would run off the page."""
    needed = text_width_mm(text, height_mm=height)
    fitting = min(height, height * width / needed) if needed else height
    return Lettering(REF_BAR, text, place, fitting, align="left", stand="base")


def draw_crosses(crosses: Sequence[Point], *, within: Extents) -> Iterator[Shape]:
    """Draw the crosses a window holds, each with the letter it has on every page."""
    for number, (x, y) in enumerate(crosses):
        inside_x = within.left - 1e-6 <= x <= within.right + 1e-6
        if not (inside_x and within.low - 1e-6 <= y <= within.high + 1e-6):
            continue
        yield Line(REF_BAR, (x - CROSS_ARM_MM, y), (x + CROSS_ARM_MM, y))
        yield Line(REF_BAR, (x, y - CROSS_ARM_MM), (x, y + CROSS_ARM_MM))
        yield Lettering(
            REF_BAR, _letter(number), (x + 1.0, y + 1.0), WORD_MM, align="left", stand="base"
        )


def _letter(number: int) -> str:
    """A to Z, then A1, B1 and so on."""
    round_, place = divmod(number, 26)
    return chr(ord("A") + place) + (str(round_) if round_ else "")
