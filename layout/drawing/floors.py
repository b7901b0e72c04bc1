"""How deep does the cutter run along every slot, as chains in space?

The tip of the cutter follows these. z counts up from the top of the finished board on the centre
line; radiusing takes nothing off there, so the same floors hold before and after it.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from layout.drawing.legend import MIRRORED, draw_legend
from layout.drawing.moves import mirrored_shape
from layout.drawing.reference import draw_origin_mark
from layout.drawing.shapes import CUT_FLOOR, REF_LINE, Outline, Polyline3D, Shape, extents_of
from layout.drawing.sheet import Sheet, make_sheet
from layout.geometry.floor import sink_floor
from layout.plan.depth import SunkSlot, cut_depth_mm, sink_slots
from layout.plan.model import Plan

Array = NDArray[np.float64]

STEEPEST = 0.99
"""Share of the radius up to which the top's curve is followed past the edge: beyond it, level."""


def draw_floors(plan: Plan) -> Sheet | None:
    """Draw the floor of every slot; None where the tang's depth is not known or nothing is slotted.

    Returns
    -------
    Sheet
        ``floors``: one chain a slot on CUT_FLOOR, bass end first, between the slot's ends as cut.

    Notes
    -----
    Depth counts between the slot's ends in the wood. Past the edges a flat floor runs on level, one
    that follows the top runs on beside its curve.

    """
    depth = cut_depth_mm(plan)
    if depth is None or plan.instrument.frets.kind != "slotted":
        return None
    corners = tuple((float(x), float(y)) for x, y in plan.board.wood_mm)
    shapes: list[Shape] = [*_floors(plan, depth), Outline(REF_LINE, corners)]
    if plan.instrument.hand == "left":
        shapes = [mirrored_shape(shape) for shape in shapes]
    notes = floor_notes(plan)
    title = f"{plan.instrument.title}: slot floors"
    legend = draw_legend(title, notes, around=extents_of(shapes), left=0.0)
    return make_sheet("floors", title, shapes=[*shapes, *draw_origin_mark(), *legend], notes=notes)


def floor_notes(plan: Plan) -> tuple[str, ...]:
    """Say unit, datum, depth, and the state of the wood the floors belong to."""
    depth, flat = cut_depth_mm(plan), plan.instrument.slots.floor == "flat"
    said = (
        f"Floors: level, {depth:.2f} mm below the finished top at each slot's shallowest point."
        if flat
        else f"Floors: {depth:.2f} mm below the finished top all along, within 0.005 mm."
    )
    wood = "State of the wood: square blank or tapered, top flat."
    if not plan.surface.flat:
        wood = (
            "State of the wood: square blank or tapered, top still flat or radiused: z is the same."
        )
    notes = [
        "Unit: mm, 1:1. CUT_FLOOR: paths in space of the cutter's tip.",
        "Origin: the nut line on the centre line; z 0 is the top there.",
        wood,
        said,
        "Lines: nominal, the middle of each slot.",
    ]
    if plan.instrument.hand == "left":
        notes.append(MIRRORED)
    return tuple(notes)


def _floors(plan: Plan, depth_mm: float) -> Iterator[Polyline3D]:
    for sunk in sink_slots(plan):
        points = _run_out(plan, sunk, depth_mm)
        yield Polyline3D(CUT_FLOOR, tuple((float(x), float(y), float(z)) for x, y, z in points))


def _run_out(plan: Plan, sunk: SunkSlot, depth_mm: float) -> Array:
    """Lengthen the floor from the slot's ends in the wood to its ends as cut."""
    piece, points = sunk.piece, sunk.floor.points_mm
    ends = np.stack((piece.cut_bass_mm, piece.cut_treble_mm))
    if plan.instrument.slots.floor == "follow":
        radius = plan.surface.radius_mm(ends[:, 0])
        if bool(np.all(np.abs(ends[:, 1]) < STEEPEST * radius)):
            return sink_floor(
                plan.surface,
                piece.cut_treble_mm,
                piece.cut_bass_mm,
                depth_mm=depth_mm,
                floor="follow",
            ).points_mm
    levels = points[[0, -1], 2:]
    level_ends = np.concatenate((ends, levels), axis=1)
    inner = points[1:-1] if plan.instrument.slots.floor == "flat" else points
    return np.concatenate((level_ends[:1], inner, level_ends[1:]))
