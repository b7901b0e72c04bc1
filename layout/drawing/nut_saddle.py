"""What is shaped last: the nut with its steps, and the saddle with every crown?

One sheet, two parts at true size. The nut stands where it stands on the board; the saddle is
brought nearer by a whole number of millimetres, which the sheet says.
"""

from __future__ import annotations

import math

from layout.drawing.legend import (
    MIRRORED,
    ROOM_MM,
    draw_legend,
    rows_width_mm,
    say_lines,
    set_rows,
    with_lettering,
)
from layout.drawing.moves import mirrored_shape, shifted_shape
from layout.drawing.nut import draw_nut, nut_notes, nut_rows
from layout.drawing.reference import draw_origin_mark
from layout.drawing.saddle import draw_saddle, saddle_notes, saddle_rows
from layout.drawing.sheet import Sheet, make_sheet
from layout.plan.model import Plan

APART_MM = 25.0
"""Least clear space between the two parts and their figures."""
WHOLE_MM = 10.0
"""The saddle is moved by a multiple of this."""


def draw_nut_saddle(plan: Plan) -> Sheet | None:
    """Draw nut and saddle from above, with the figures of every string.

    Returns
    -------
    Sheet
        ``nut-saddle``; None for work without a spread of strings, which has neither.

    """
    if plan.instrument.spread is None:
        return None
    nut, saddle = list(draw_nut(plan)), list(draw_saddle(plan))
    if plan.instrument.hand == "left":
        nut, saddle = ([mirrored_shape(shape) for shape in part] for part in (nut, saddle))
    at_nut, at_saddle = with_lettering(nut), with_lettering(saddle)
    nut_table, saddle_table = nut_rows(plan), saddle_rows(plan)
    clear = max(at_nut.right, at_nut.left + rows_width_mm(nut_table)) + APART_MM
    moved = WHOLE_MM * math.floor((at_saddle.left - clear) / WHOLE_MM)
    saddle = [shifted_shape(shape, (-moved, 0.0)) for shape in saddle]
    low = min(at_nut.low, at_saddle.low) - ROOM_MM
    parts = [
        *nut,
        *saddle,
        *set_rows(nut_table, corner=(at_nut.left, low)),
        *set_rows(saddle_table, corner=(at_saddle.left - moved, low)),
    ]
    notes = nut_saddle_notes(plan, moved_mm=moved)
    title = f"{plan.instrument.title}: nut and saddle"
    legend = draw_legend(title, notes, around=with_lettering(parts))
    return make_sheet(
        "nut-saddle", title, shapes=[*parts, *draw_origin_mark(), *legend], notes=notes
    )


def nut_saddle_notes(plan: Plan, *, moved_mm: float) -> tuple[str, ...]:
    """Say unit, datum, the state of the board, and all that figures alone do not tell."""
    sign, amount = ("plus", moved_mm) if moved_mm >= 0 else ("minus", -moved_mm)
    notes = [
        "Unit: mm, 1:1. Seen from above, nut at the left.",
        "Origin: the nut line on the centre line.",
        f"Saddle: its true x is the drawn x {sign} {amount:.0f} mm.",
        f"State of the wood: {_say_state(plan)}. Done last, after the action.",
        say_lines(plan, offset=False),
        *nut_notes(plan),
        "Nut shift: along the string, + toward the saddle.",
        *saddle_notes(plan),
    ]
    if plan.instrument.hand == "left":
        notes.append(f"{MIRRORED} Figures are as planned.")
    return tuple(notes)


def _say_state(plan: Plan) -> str:
    done = ["tapered"]
    if not plan.surface.flat:
        done.append("radiused")
    if plan.instrument.frets.kind != "lines":
        done.append("fretted")
    return f"the board is {', '.join(done[:-1])}{' and ' if len(done) > 1 else ''}{done[-1]}"
