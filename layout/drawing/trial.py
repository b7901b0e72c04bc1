"""How does this machine cut these slots? A scrap with slots a little narrower and wider tells.

Press a piece of the wire into each: the one it holds in as it should is the width to write. Every
slot runs off one edge of the scrap and ends blind in it, so both kinds of end are tried.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from layout.drawing.freeing import cut_free
from layout.drawing.legend import draw_legend, say_lines
from layout.drawing.reference import BAR_MM, draw_check_bar, draw_origin_mark
from layout.drawing.shapes import (
    CUT_OUTLINE,
    CUT_POCKET,
    CUT_SLOT,
    ENGRAVE_LABEL,
    Lettering,
    Line,
    Outline,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.geometry.slots import SlotCut, choose_cut, outline_slot
from layout.plan.depth import cut_depth_mm
from layout.plan.model import Plan

STEPS_MM = (-0.04, -0.02, 0.0, 0.02, 0.04)
"""Widths tried, from the width that is wanted (geometry page, Other parts)."""
LENGTH_MM, HEIGHT_MM = 120.0, 62.0
"""Of the scrap."""
FIRST_X_MM, APART_MM = 20.0, 21.0
"""Where the first slot stands, and from one to the next."""
SLOT_MM = 36.0
"""From the scrap's edge to the blind end."""
LEAST_PAST_MM = 1.0
"""Least run past the scrap's edge, so that the cutter's round end stays outside."""
LABEL_Y_MM, LABEL_MM = 43.0, 2.2
BAR_Y_MM = 54.0


@dataclass(frozen=True, slots=True)
class TrialSlot:
    """One slot of the scrap: the width it is drawn for, where it stands, how it is cut."""

    width_mm: float
    x_mm: float
    cut: SlotCut


def lay_trial(plan: Plan) -> tuple[tuple[TrialSlot, ...], tuple[float, ...]]:
    """Lay the slots this machine can cut, and list the widths it cannot."""
    job = plan.instrument
    slots, left_out = [], []
    for place, step in enumerate(STEPS_MM):
        width = round(job.slots.width_mm + step, 6)
        if width <= 0:
            left_out.append(width)
            continue
        cut = choose_cut(replace(job.slots, width_mm=width), job.tooling)
        if cut.too_narrow_by_mm > 0:
            left_out.append(width)
        else:
            slots.append(TrialSlot(width, FIRST_X_MM + APART_MM * place, cut))
    return tuple(slots), tuple(left_out)


def draw_trial(plan: Plan) -> Sheet | None:
    """Draw the scrap; None where no router or laser cuts slots.

    Returns
    -------
    Sheet
        ``trial``: its own outline, slots along y as on a board, each lettered with the width drawn
        and the width it should come out.

    """
    job = plan.instrument
    if job.tooling is None or job.tooling.machine == "saw" or job.frets.kind != "slotted":
        return None
    slots, left_out = lay_trial(plan)
    corners = ((0.0, 0.0), (LENGTH_MM, 0.0), (LENGTH_MM, HEIGHT_MM), (0.0, HEIGHT_MM))
    shapes: list[Shape] = [cut_free(plan, Outline(CUT_OUTLINE, corners))]
    for slot in slots:
        shapes += [*_cuts(plan, slot), *_labels(slot)]
    shapes += draw_check_bar(((LENGTH_MM - BAR_MM) / 2, BAR_Y_MM))
    notes = trial_notes(plan, left_out)
    title = f"{job.title}: slot trial"
    legend = draw_legend(title, notes, around=extents_of(shapes), left=0.0, bar=False)
    return make_sheet("trial", title, shapes=[*shapes, *draw_origin_mark(), *legend], notes=notes)


def trial_notes(plan: Plan, left_out: tuple[float, ...] = ()) -> tuple[str, ...]:
    """Say unit, datum, what the labels mean, the depth, and the state of the wood."""
    depth = cut_depth_mm(plan)
    notes = [
        "Unit: mm, 1:1.",
        "Origin: lower left corner of the scrap.",
        "State of the wood: a flat scrap of the board's wood, as thick.",
        say_lines(plan),
        "Over each slot: width drawn for, and width when cut.",
        "Measure the bar; press the wire into each slot.",
    ]
    if depth is not None:
        notes.append(f"Depth: {depth:.2f} mm.")
    if left_out:
        widths = ", ".join(f"{width:.2f}" for width in left_out)
        notes.append(f"Left out, narrower than this machine cuts: {widths} mm.")
    return tuple(notes)


def _cuts(plan: Plan, slot: TrialSlot) -> Iterator[Shape]:
    """Draw one slot as the machine cuts it; its open end lies outside the scrap."""
    past = max(plan.instrument.slots.past_edge_mm, LEAST_PAST_MM) + slot.cut.corner_mm
    low, high = np.array([slot.x_mm, -past]), np.array([slot.x_mm, SLOT_MM])
    if slot.cut.centre_line:
        yield Line(CUT_SLOT, (slot.x_mm, -past), (slot.x_mm, SLOT_MM))
    if slot.cut.drawn_mm is not None:
        pocket = outline_slot(slot.cut, high, low, run="blind")
        corners = tuple((float(x), float(y)) for x, y in pocket.points_mm)
        yield Outline(CUT_POCKET, corners, pocket.bulges)


def _labels(slot: TrialSlot) -> Iterator[Shape]:
    texts = (f"{slot.width_mm:.3f}", f"cuts {slot.cut.finished_mm:.3f}")
    for text, up in zip(texts, (2.0, -2.0), strict=True):
        yield Lettering(ENGRAVE_LABEL, text, (slot.x_mm, LABEL_Y_MM + up), LABEL_MM)
