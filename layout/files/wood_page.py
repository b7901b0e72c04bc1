"""How are top, slot depths, marks, wire and blank written for the bench?"""

from __future__ import annotations

import math
from itertools import groupby

from layout.files.columns import align
from layout.plan.depth import describe_top, sink_slots, write_top_rule
from layout.plan.marking import mark_blank, place_face_dots
from layout.plan.model import Plan
from layout.plan.wire import WireList, list_wire


def write_wood(plan: Plan) -> list[str]:
    """Write the sections that concern the wood and the wire; empty ones are left out."""
    sections = [_top(plan), _depths(plan), _marks(plan), _wire(plan), _blank(plan)]
    return [section for section in sections if section]


def _name(plan: Plan, fret: int) -> str:
    return "0" if fret == 0 else plan.instrument.frets.labels[fret - 1]


def _top(plan: Plan) -> str:
    if plan.surface.flat:
        return ""
    rows = [
        [
            place.name,
            f"{place.x_mm:.2f}",
            f"{place.radius_mm:.1f}",
            "-" if math.isnan(place.drop_mm) else f"{place.drop_mm:.2f}",
            "-" if math.isnan(place.drop_mm) else f"{place.thickness_left_mm:.2f}",
        ]
        for place in describe_top(plan)
    ]
    return f"TOP, mm: {write_top_rule(plan)}\n" + align(
        ["place", "from zero", "radius", "edge drop", "edge thickness"], rows, left=1
    )


def _depths(plan: Plan) -> str:
    sunk = sink_slots(plan)
    if not sunk:
        return ""
    rows = [
        [
            _name(plan, slot.piece.fret),
            f"{slot.floor.at_centre_mm:.2f}",
            f"{slot.floor.at_ends_mm[0]:.2f}",
            f"{slot.floor.at_ends_mm[1]:.2f}",
            f"{slot.floor.below_flat_mm:.2f}",
            f"{slot.wood_left_mm:.2f}",
        ]
        for slot in sunk
    ]
    how = (
        "level floors: deeper in the middle, so that the ends of the frets seat"
        if plan.instrument.slots.floor == "flat"
        else "floors that follow the top"
    )
    header = ["fret", "middle", "treble end", "bass end", "below flat top", "wood left"]
    return (
        f"SLOT DEPTHS, mm below the finished top; {how}\n"
        "  (below flat top: the depth for those who slot before they radius)\n"
        + align(header, rows)
    )


def _marks(plan: Plan) -> str:
    dots = place_face_dots(plan)
    if not dots:
        return ""
    rows = []
    for fret, group in groupby(dots, key=lambda dot: dot.fret):
        chosen = list(group)
        off_centre = ", ".join(f"{dot.y_mm:+.2f}" if dot.y_mm else "0" for dot in chosen)
        rows.append([_name(plan, fret), f"{chosen[0].x_mm:.2f}", off_centre])
    return (
        f"FACE DOTS, {plan.instrument.marks.face_size_mm:g} mm wide, mm from zero and from the "
        "centre line (+ treble)\n" + align(["fret", "from zero", "off centre"], rows)
    )


def _wire(plan: Plan) -> str:
    wire = list_wire(plan)
    bound = plan.instrument.board.binding_mm > 0
    header = ["fret", "crown", *(["tang"] if bound else []), "cut"]
    rows = [
        [
            _name(plan, piece.fret),
            f"{piece.crown_mm:.1f}",
            *([f"{piece.tang_mm:.1f}"] if bound else []),
            f"{piece.cut_mm:.1f}",
        ]
        for piece in wire.pieces
    ]
    text = "FRETWIRE, mm over the curve of the top, edge to edge"
    if plan.instrument.wire.over_mm:
        text += f"; cut {plan.instrument.wire.over_mm:g} mm longer at each end"
    text += "\n" + align(header, rows) + f"\n  In all {wire.total_mm:.0f} mm"
    return text + _sticks(plan, wire)


def _sticks(plan: Plan, wire: WireList) -> str:
    text = ""
    for number, stick in enumerate(wire.sticks, start=1):
        names = " ".join(_name(plan, piece.fret) for piece in stick.pieces)
        text += f"\n  Stick {number}: frets {names}; {stick.left_mm:.0f} mm left over"
    return text


def _blank(plan: Plan) -> str:
    marks = mark_blank(plan)
    if not marks:
        return ""
    rows = [
        [_name(plan, mark.fret), f"{mark.treble_x_mm:.3f}", f"{mark.bass_x_mm:.3f}"]
        for mark in marks
    ]
    width = plan.instrument.board.blank_width_mm
    return (
        f"KNIFE MARKS on the edges of the square blank, {width:g} mm wide, before tapering, mm "
        "from zero\n" + align(["fret", "treble edge", "bass edge"], rows)
    )
