"""How deep is every slot cut, how much wood is left, and how is the top curved, in figures?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from layout.geometry.floor import SlotFloor, sink_floor
from layout.instrument import ConeAtNut, LevelEdgesAtNut, OneRadius, TwoRadii
from layout.plan.model import Piece, Plan


@dataclass(frozen=True, slots=True)
class SunkSlot:
    """One slot with its floor, and the wood left under its deepest point."""

    piece: Piece
    floor: SlotFloor
    wood_left_mm: float


@dataclass(frozen=True, slots=True)
class TopPlace:
    """The top at one place: its name, x, radius, drop at the edges and thickness left there."""

    name: str
    x_mm: float
    radius_mm: float
    drop_mm: float
    thickness_left_mm: float


def cut_depth_mm(plan: Plan) -> float | None:
    """Give the depth asked for at a slot's shallowest point; None without the tang's depth."""
    tang = plan.instrument.wire.tang_depth_mm
    return None if tang is None else tang + plan.instrument.slots.clearance_mm


def sink_slots(plan: Plan) -> tuple[SunkSlot, ...]:
    """Sink every slot between its ends in the wood; nothing without the tang's depth."""
    depth = cut_depth_mm(plan)
    if depth is None:
        return ()
    blind = plan.instrument.slots.run == "blind"
    pieces = plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)
    sunk = []
    for piece in pieces:
        treble, bass = (
            (piece.cut_treble_mm, piece.cut_bass_mm) if blind else (piece.treble_mm, piece.bass_mm)
        )
        floor = sink_floor(
            plan.surface, treble, bass, depth_mm=depth, floor=plan.instrument.slots.floor
        )
        sunk.append(SunkSlot(piece, floor, plan.instrument.board.thickness_mm + floor.lowest_mm))
    return tuple(sunk)


def octave_x_mm(plan: Plan) -> float:
    """Give x of the octave fret on the centre line: the fret at half the string, or that line."""
    half = plan.strings.bridge_line.at_centre_mm / 2
    near = np.flatnonzero(np.abs(plan.frets.at_centre_mm - half) < 0.05)
    return float(plan.frets.at_centre_mm[near[0]]) if len(near) else float(half)


def describe_top(plan: Plan) -> tuple[TopPlace, ...]:
    """Give radius, edge drop and thickness left at nut, octave fret, tail and bridge.

    Beyond the tail there is no board: the bridge has a radius, and no drop.
    """
    tail = float(plan.board.tail_end.at_centre_mm)
    bridge = float(plan.strings.bridge_line.at_centre_mm)
    places = [("nut", 0.0), ("octave", octave_x_mm(plan)), ("tail", tail), ("bridge", bridge)]
    return tuple(_top_place(plan, name, x) for name, x in places)


def _top_place(plan: Plan, name: str, x: float) -> TopPlace:
    radius = float(plan.surface.radius_mm(x))
    if x > float(plan.board.tail_end.at_centre_mm):
        return TopPlace(name, x, radius, float("nan"), float("nan"))
    edges = [plan.board.treble.y_at(x), plan.board.bass.y_at(x)]
    drop = -float(np.min(plan.surface.height_mm(x, edges)))
    return TopPlace(name, x, radius, drop, plan.instrument.board.thickness_mm - drop)


def write_top_rule(plan: Plan) -> str:
    """Say in words which rule curves the top."""
    match plan.instrument.board.top:
        case OneRadius(radius_mm=radius):
            return f"one radius, {radius:g} mm, all along"
        case TwoRadii(first=(_, one), second=(_, other)):
            return (
                f"straight-line on the centre line through radii {one:g} and {other:g} mm at the "
                "two places named"
            )
        case ConeAtNut(radius_mm=radius):
            return (
                f"the cone under the strings: {radius:g} mm at the nut, in proportion to their "
                "spread elsewhere"
            )
        case LevelEdgesAtNut(radius_mm=radius):
            return (
                f"level edges: {radius:g} mm at the nut, elsewhere what keeps the edge drop of "
                "the nut"
            )
        case _:
            return "flat"
