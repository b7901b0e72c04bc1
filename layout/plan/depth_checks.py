"""Is there enough wood under the slots and at the edges, and are the slots deep enough?"""

from __future__ import annotations

from collections.abc import Iterator

from layout.findings import Finding
from layout.plan.depth import describe_top, sink_slots
from layout.plan.marking import blank_too_narrow_by_mm
from layout.plan.model import Plan
from layout.plan.wire import list_wire

LEAST_WOOD_MM = 1.5
"""Least wood under a slot (geometry page, Slots)."""

LEAST_EDGE_MM = 2.5
"""Least thickness at an edge; common practice, no source."""

LEAST_CLEARANCE_MM = 0.1
"""Least room under the tang for dust and glue; common practice, no source."""


def wood_under_slots(plan: Plan) -> Iterator[Finding]:
    """Find the slot that leaves the least wood."""
    sunk = sink_slots(plan)
    if not sunk:
        return
    thinnest = min(sunk, key=lambda slot: slot.wood_left_mm)
    if thinnest.wood_left_mm < LEAST_WOOD_MM - 1e-9:
        yield Finding(
            "little-wood-under-slot",
            "error" if thinnest.wood_left_mm <= 0 else "warning",
            f"Only {max(thinnest.wood_left_mm, 0.0):.2f} mm of wood is left under the slot of fret "
            f"{thinnest.piece.fret}; at least {LEAST_WOOD_MM} mm must remain. Take a thicker "
            "board, a shallower tang or a floor that follows the top.",
            fret=thinnest.piece.fret,
            amount=thinnest.wood_left_mm,
            unit="mm",
        )


def floor_against_tang(plan: Plan) -> Iterator[Finding]:
    """Find a clearance that lets the tang touch the floor."""
    clearance = plan.instrument.slots.clearance_mm
    if plan.instrument.wire.tang_depth_mm is not None and clearance < LEAST_CLEARANCE_MM:
        yield Finding(
            "floor-too-shallow",
            "warning",
            f"The slots are only {clearance:.2f} mm deeper than the tang; dust or glue will hold "
            f"the frets up. Leave {LEAST_CLEARANCE_MM} mm or more.",
            amount=clearance,
            unit="mm",
        )


def thin_edges(plan: Plan) -> Iterator[Finding]:
    """Find edges that the curve of the top leaves thin."""
    for place in describe_top(plan):
        if place.thickness_left_mm < LEAST_EDGE_MM:
            yield Finding(
                "thin-edge",
                "error" if place.thickness_left_mm <= 0 else "warning",
                f"The edge is {place.thickness_left_mm:.2f} mm thick at the {place.name}. Take a "
                "thicker board or a larger radius.",
                amount=place.thickness_left_mm,
                unit="mm",
            )


def blank_width(plan: Plan) -> Iterator[Finding]:
    """Find a blank that is narrower than the board."""
    short = blank_too_narrow_by_mm(plan)
    if short > 0:
        yield Finding(
            "blank-too-narrow",
            "error",
            f"The blank is {short:.2f} mm narrower than the board at its widest. Take a wider "
            "blank.",
            amount=short,
            unit="mm",
        )


def wire_sticks(plan: Plan) -> Iterator[Finding]:
    """Find frets longer than a stick of wire."""
    for fret in list_wire(plan).too_long:
        yield Finding(
            "stick-too-short",
            "warning",
            f"Fret {fret} is longer than a stick of wire. Buy longer sticks or a coil.",
            fret=fret,
        )


DEPTH_CHECKS = (wood_under_slots, floor_against_tang, thin_edges, blank_width, wire_sticks)
"""These checks, in the order their findings are printed."""
