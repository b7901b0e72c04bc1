"""Which notched strip leads the saw from fret to fret?

A pin in the saw's box drops into one notch after another; the saw then cuts on the fret's centre.
The zero notch is the nut line.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from layout.drawing.freeing import cut_free
from layout.drawing.legend import MIRRORED, draw_legend, say_lines
from layout.drawing.lettering import text_width_mm
from layout.drawing.moves import mirrored_shape
from layout.drawing.reference import draw_origin_mark
from layout.drawing.shapes import (
    CUT_OUTLINE,
    ENGRAVE_LABEL,
    Lettering,
    Outline,
    Point,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.instrument import SlottingTemplate
from layout.plan.model import Plan
from layout.plan.part_checks import notch_gaps_mm, steepest_fret

DEPTH_MM = 6.0
"""Of a notch."""
WIDTH_MM = 30.0
"""Of the strip."""
BEYOND_MM = 6.0
"""Least wood beyond the zero notch and the last one."""
LABEL_MM, LEAST_LABEL_MM = 3.0, 0.9
NAME_MM = 4.0
"""Heights of fret labels and of the job's name."""
CLEAR_MM = 2.0
"""From a notch to its label."""


def draw_slotting(plan: Plan) -> Sheet | None:
    """Draw the notched strip.

    Returns
    -------
    Sheet
        ``slotting-template``: one closed outline with a notch at zero and at every fret, labels
        engraved. None where the job asks for none, where a fret is slanted (notches lead a saw
        that is square to the strip), and where notches would run into one another.

    """
    template = plan.instrument.template
    if template is None or steepest_fret(plan) or notch_gaps_mm(plan).min() <= 0:
        return None
    nominal = Outline(CUT_OUTLINE, tuple(_corners(plan, template)))
    strip: list[Shape] = [cut_free(plan, nominal), *_labels(plan, template)]
    if plan.instrument.hand == "left":
        strip = [mirrored_shape(shape) for shape in strip]
    notes = slotting_notes(plan)
    title = f"{plan.instrument.title}: slotting template"
    legend = draw_legend(title, notes, around=extents_of(strip))
    return make_sheet(
        "slotting-template", title, shapes=[*strip, *draw_origin_mark(), *legend], notes=notes
    )


def slotting_notes(plan: Plan) -> tuple[str, ...]:
    """Say unit, datum, what the notches fit, and the state of the wood the strip belongs to."""
    template = plan.instrument.template
    assert template is not None
    zero = "the middle of the saw line at the nut end"
    if plan.instrument.nut.zero != "kerf":
        zero = "the nut line"
    notes = [
        "Unit: mm, 1:1.",
        "Origin: middle of the zero notch, on the notched edge.",
        (
            "State of the wood: square blank, not yet tapered. Fix the strip along the blank's "
            f"{template.edge} edge, parallel to the centre line."
        ),
        (
            f"Notches: {template.notch_mm:.2f} mm wide for a pin of that size, {DEPTH_MM:g} mm "
            f"deep, each on the middle of its slot; 0 is {zero}."
        ),
        say_lines(plan),
    ]
    if plan.instrument.nut.zero == "edge":
        notes.append(
            "A saw led by notch 0 takes half its cut from the board; zero: kerf in the job allows "
            "for it."
        )
    if plan.instrument.hand == "left":
        notes.append(MIRRORED)
    return tuple(notes)


def notch_x_mm(plan: Plan) -> list[float]:
    """Give the middles of all notches along the strip: zero, then every fret."""
    return [0.0, *(float(x) for x in plan.frets.at_centre_mm)]


def _corners(plan: Plan, template: SlottingTemplate) -> Iterator[Point]:
    """Go round the strip, along the notched edge first (drawn as the bass edge, then turned)."""
    half = template.notch_mm / 2
    middles = notch_x_mm(plan)
    wood_x = plan.board.wood_mm[:, 0]
    left = min(float(wood_x.min()), middles[0] - half - BEYOND_MM)
    right = max(float(wood_x.max()), middles[-1] + half + BEYOND_MM)
    side = _side(template)
    yield left, 0.0
    for x in middles:
        yield x - half, 0.0
        yield x - half, side * DEPTH_MM
        yield x + half, side * DEPTH_MM
        yield x + half, 0.0
    yield right, 0.0
    yield right, side * WIDTH_MM
    yield left, side * WIDTH_MM


def _side(template: SlottingTemplate) -> float:
    """Say which way the strip lies from its notched edge, as a sign of y."""
    return 1.0 if template.edge == "bass" else -1.0


def _labels(plan: Plan, template: SlottingTemplate) -> Iterator[Shape]:
    side, middles = _side(template), notch_x_mm(plan)
    labels = ["0", *plan.instrument.frets.labels]
    room = float(np.diff(np.sort(middles)).min())
    widest = max(text_width_mm(label, height_mm=1.0) for label in labels)
    height = max(LEAST_LABEL_MM, min(LABEL_MM, (room - 0.6) / widest))
    y = side * (DEPTH_MM + CLEAR_MM + LABEL_MM / 2)
    for x, label in zip(middles, labels, strict=True):
        yield Lettering(ENGRAVE_LABEL, label, (x, y), height)
    name = f"{plan.instrument.title}, {template.edge} edge"
    place = (BEYOND_MM, side * (WIDTH_MM - CLEAR_MM - NAME_MM))
    yield Lettering(ENGRAVE_LABEL, name, place, NAME_MM, align="left")
