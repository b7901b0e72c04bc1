"""What does every sheet say of itself: its title, unit, datum, and the wood it belongs to?"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from layout.drawing.lettering import text_width_mm
from layout.drawing.reference import draw_check_bar
from layout.drawing.shapes import ENGRAVE_LABEL, Extents, Lettering, Point, Shape, extents_of
from layout.plan.model import Plan

TITLE_MM = 4.0
NOTE_MM = 2.4
"""Heights of titles, of notes and of rows of figures."""
LINE_MM = 4.4
"""From one line of lettering to the next."""
ROOM_MM = 8.8
"""Clear space between a drawing and its title or notes."""
BAR_BELOW_MM = 9.0
"""From the last line of notes to the check bar, whose lettering stands over it."""
COLUMN_APART_MM = 3.5
"""Clear space between columns of figures."""

MIRRORED = "Left-handed: mirrored across the centre line."


def offsets_lines(plan: Plan) -> bool:
    """Whether lines to be cut allow for the kerf."""
    tooling = plan.instrument.tooling
    return tooling is not None and tooling.lines == "offset"


def say_lines(plan: Plan, *, offset: bool | None = None) -> str:
    """Say whether lines are nominal or offset, and for which kerf; ``offset`` overrules the job."""
    tooling = plan.instrument.tooling
    if offset is False or not offsets_lines(plan) or tooling is None or tooling.kerf_mm is None:
        return "Lines: nominal, no cutter offset."
    kerf_x, kerf_y = tooling.kerf_mm
    kerf = f"{kerf_x:g} mm" if kerf_x == kerf_y else f"{kerf_x:g} mm in x, {kerf_y:g} mm in y"
    return f"Lines: offset by half the kerf, {kerf}."


def with_lettering(shapes: Sequence[Shape]) -> Extents:
    """Measure around shapes and the level lettering among them that has no strokes yet."""
    around = extents_of(shapes)
    left, low, right, high = around
    for shape in shapes:
        if isinstance(shape, Lettering) and not shape.strokes:
            width = text_width_mm(shape.text, height_mm=shape.height_mm)
            x = shape.anchor[0] - {"left": 0.0, "centre": 0.5, "right": 1.0}[shape.align] * width
            share = {"base": 0.0, "middle": 0.5, "top": 1.0}[shape.stand]
            y = shape.anchor[1] - share * shape.height_mm
            left, right = min(left, x), max(right, x + width)
            low, high = min(low, y), max(high, y + shape.height_mm)
    return Extents(left, low, right, high)


def draw_legend(
    title: str,
    notes: Sequence[str],
    *,
    around: Extents,
    left: float | None = None,
    bar: bool = True,
) -> Iterator[Shape]:
    """Set the title above a drawing, its notes and the check bar below it.

    Parameters
    ----------
    title, notes
        One line each.
    around
        Extents of the finished drawing, mm.
    left
        Where the lines begin; the drawing's own left edge where not said.
    bar
        Whether the check bar is drawn here; a sheet may carry its own.

    """
    x = around.left if left is None else left
    yield Lettering(
        ENGRAVE_LABEL, title, (x, around.high + ROOM_MM), TITLE_MM, align="left", stand="base"
    )
    low = around.low - ROOM_MM
    for row, note in enumerate(notes):
        place = (x, low - row * LINE_MM)
        yield Lettering(ENGRAVE_LABEL, note, place, NOTE_MM, align="left", stand="top")
    if bar:
        foot = low - (len(notes) - 1) * LINE_MM - NOTE_MM
        yield from draw_check_bar((x, foot - BAR_BELOW_MM))


def set_rows(rows: Sequence[Sequence[str]], *, corner: Point) -> tuple[Shape, ...]:
    """Set rows of figures in columns, every column flush right, the header first.

    Parameters
    ----------
    rows
        As many words in each.
    corner
        Upper left corner of the whole, mm.

    """
    right = corner[0]
    shapes: list[Shape] = []
    for column, width in enumerate(_widths(rows)):
        right += width + (COLUMN_APART_MM if column else 0.0)
        shapes += [
            Lettering(
                ENGRAVE_LABEL,
                words[column],
                (right, corner[1] - row * LINE_MM),
                NOTE_MM,
                align="right",
                stand="top",
            )
            for row, words in enumerate(rows)
        ]
    return tuple(shapes)


def rows_width_mm(rows: Sequence[Sequence[str]]) -> float:
    """Give how wide rows of figures stand, in mm."""
    widths = _widths(rows)
    return sum(widths) + COLUMN_APART_MM * (len(widths) - 1)


def _widths(rows: Sequence[Sequence[str]]) -> list[float]:
    return [
        max(text_width_mm(words[column], height_mm=NOTE_MM) for words in rows)
        for column in range(len(rows[0]))
    ]
