"""What tells whoever opens a sheet how long 100 mm is, and where its numbers count from?"""

from __future__ import annotations

import math

from layout.drawing.shapes import REF_BAR, Lettering, Line, Point, Shape

BAR_MM = 100.0
"""Length of the check bar: a steel rule reads it to 0.1 mm, one part in a thousand."""

ORIGIN_TEXT = "origin 0,0"
"""What stands beside the origin mark; a sheet that is moved says there where the mark is now."""


def draw_check_bar(
    start: Point, *, angle: float = 0.0, tick_mm: float = 4.0, height_mm: float = 3.0
) -> tuple[Shape, ...]:
    """Draw a bar of 100 mm from ``start``, with a tick at either end and its length over it.

    Parameters
    ----------
    start
        The middle of the first tick, mm.
    angle
        Direction of the bar, radians counter-clockwise from +x.
    tick_mm
        Whole length of a tick.
    height_mm
        Height of the lettering, which stands clear of the ticks on the left of the bar.

    Examples
    --------
    >>> draw_check_bar((10.0, -40.0))[0]
    Line(layer='REF_BAR', start=(10.0, -40.0), end=(110.0, -40.0))

    """
    cosine, sine = math.cos(angle), math.sin(angle)

    def place(along: float, up: float) -> Point:
        return (
            start[0] + along * cosine - up * sine,
            start[1] + along * sine + up * cosine,
        )

    half = tick_mm / 2
    return (
        Line(REF_BAR, place(0, 0), place(BAR_MM, 0)),
        *(Line(REF_BAR, place(along, -half), place(along, half)) for along in (0.0, BAR_MM)),
        Lettering(REF_BAR, "100 mm", place(BAR_MM / 2, half), height_mm, angle=angle, stand="base"),
    )


def draw_origin_mark(
    at: Point = (0.0, 0.0), *, text: str = ORIGIN_TEXT, arm_mm: float = 3.0, height_mm: float = 2.0
) -> tuple[Shape, ...]:
    """Draw a small slanting cross at the origin, and say what it is beside it.

    The cross slants so that it does not vanish under the nut line and the centre line.

    Examples
    --------
    >>> draw_origin_mark()[0]
    Line(layer='REF_BAR', start=(-3.0, -3.0), end=(3.0, 3.0))

    """
    x, y = at
    return (
        Line(REF_BAR, (x - arm_mm, y - arm_mm), (x + arm_mm, y + arm_mm)),
        Line(REF_BAR, (x - arm_mm, y + arm_mm), (x + arm_mm, y - arm_mm)),
        Lettering(REF_BAR, text, (x + 1.5 * arm_mm, y + arm_mm / 2), height_mm, align="left"),
    )
