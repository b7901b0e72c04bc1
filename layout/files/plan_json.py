"""How is a plan written as JSON? The names are the plan format's own and stay fixed."""

from __future__ import annotations

import json
import math
from typing import Any

import numpy as np
from numpy.typing import NDArray

from layout import __version__
from layout.geometry.board import Edge
from layout.geometry.cross import CrossLine
from layout.plan.depth import describe_top, sink_slots, write_top_rule
from layout.plan.laying import outer_strings
from layout.plan.leaving import Left, crown_height_mm, measure_left
from layout.plan.model import Pitch, Plan, Worst

Array = NDArray[np.float64]

FORMAT = "stopwright-plan/1"


def render_plan_json(plan: Plan) -> bytes:
    """Render the whole plan as JSON, numbers rounded to 1e-9, missing figures as null."""
    text = json.dumps(describe_plan(plan), indent=1, ensure_ascii=True, allow_nan=False)
    return (text + "\n").encode("ascii")


def describe_plan(plan: Plan) -> dict[str, Any]:
    """Describe the plan with plain numbers, texts, lists and mappings."""
    instrument = plan.instrument
    left = measure_left(plan)
    depths = {slot.piece.fret: slot.floor.at_centre_mm for slot in sink_slots(plan)}
    return {
        "format": FORMAT,
        "title": instrument.title,
        "hand": instrument.hand,
        "version": __version__,
        "job_sha256": instrument.job_sha256,
        "strings": [_string(plan, index) for index in range(len(instrument.strings))],
        "frets": [
            _fret(plan, fret, depth=depths.get(fret), left=left)
            for fret in range(1, instrument.frets.count + 1)
        ],
        "board": _board(plan),
        "saddle_strip": _saddle_strip(plan),
        "tension_total_n": _number(plan.loads.total_n),
        "pitch": None if plan.pitch is None else _pitch(plan.pitch),
        "clash": [
            {
                "fret": clash.fret,
                "spread_cents": _number(clash.spread_cents),
                "spread_mm": _number(clash.spread_mm),
            }
            for clash in plan.clash
        ],
        "assumed": [{"key": item.key, "value": item.value} for item in plan.assumed],
        "findings": [
            {
                "code": finding.code,
                "severity": finding.severity,
                "string": finding.string,
                "fret": finding.fret,
                "amount": _number(finding.amount),
                "unit": finding.unit,
                "text": finding.text,
            }
            for finding in plan.findings
        ],
    }


def _number(value: float | None) -> float | None:
    """Round to 1e-9; nan and None are null; no minus zero."""
    if value is None or math.isnan(value):
        return None
    return round(float(value), 9) + 0.0


def _point(point: Array) -> list[float] | None:
    return None if np.isnan(point).any() else [round(float(part), 9) + 0.0 for part in point]


def _table(values: Array) -> list[list[float | None]]:
    return [[_number(value) for value in row] for row in values]


def _string(plan: Plan, index: int) -> dict[str, Any]:
    string, loads, ends = plan.instrument.strings[index], plan.loads, plan.ends
    crown = crown_height_mm(plan)
    return {
        "number": index + 1,
        "note": None if string.note is None else str(string.note),
        "hz": _number(loads.hz[index]),
        "gauge": _number(string.gauge_mm),
        "unit_mass_g_per_m": _number(1000 * loads.unit_mass_kg_per_m[index]),
        "axial_stiffness_n": _number(loads.axial_stiffness_n[index]),
        "bending_stiffness_n_m2": _number(loads.bending_stiffness_n_m2[index]),
        "bending_stiffness_n_mm2": _number(1e6 * loads.bending_stiffness_n_m2[index]),
        "tension_n": _number(loads.tension_n[index]),
        "tension_share_of_break": _number(loads.share_of_break[index]),
        "scale": _number(plan.strings.scale_mm[index]),
        "nut": _point(ends.nut_mm[index]),
        "saddle": _point(ends.saddle_mm[index]),
        "nut_line": _point(plan.strings.nut_mm[index]),
        "bridge_line": _point(plan.strings.bridge_mm[index]),
        "nut_shift": _number(ends.nut_shift_mm[index]),
        "setback": _number(ends.setback_mm[index]),
        "file_back": _number(ends.file_back_mm[index]),
        "overhang": _number(ends.overhang_mm[index]),
        "speaking_length": _number(plan.speaking_mm[index]),
        "height_at_nut": _number(plan.height_at_nut_mm[index]),
        "height_at_saddle": _number(plan.height_at_saddle_mm[index]),
        "height_over_board_at_nut": _number(plan.height_at_nut_mm[index] + crown),
        "height_over_board_at_saddle": _number(plan.height_at_saddle_mm[index] + crown),
    }


def _fret(plan: Plan, fret: int, *, depth: float | None, left: Left) -> dict[str, Any]:
    index = fret - 1
    line = plan.frets.line(fret)
    pieces = plan.pieces_of(fret)
    points = plan.strings.points(plan.frets.met_mm)[:, index]
    half = plan.cut.finished_mm / (2 * math.cos(line.angle))
    first, last = outer_strings(plan.instrument)
    return {
        "number": fret,
        "label": plan.instrument.frets.labels[index],
        "step": plan.instrument.frets.steps[index],
        "points": [_point(point) for point in points],
        "ends": {"treble": _point(pieces[0].cut_treble_mm), "bass": _point(pieces[-1].cut_bass_mm)},
        "at_centre": _number(line.at_centre_mm),
        "along": {
            "treble_string": _number(along_lane_mm(plan, first, points[first])),
            "bass_string": _number(along_lane_mm(plan, last, points[last])),
            "treble_edge": _along_edge(plan.board.treble, pieces[0].treble_mm, line),
            "bass_edge": _along_edge(plan.board.bass, pieces[-1].bass_mm, line),
        },
        "angle": _number(math.degrees(line.angle)),
        "slot_edges": [_number(line.at_centre_mm - half), _number(line.at_centre_mm + half)],
        "depth": _number(depth),
        "wire_length": _number(sum(piece.wire_mm for piece in pieces)),
        "left_mm": [_number(value) for value in left.mm[:, index]],
        "left_cents": [_number(value) for value in left.cents[:, index]],
        "strings": [int(i) + 1 for i in np.flatnonzero(plan.frets.served[:, index])],
        "pieces": [[_point(piece.treble_mm), _point(piece.bass_mm)] for piece in pieces],
    }


def along_lane_mm(plan: Plan, string: int, point: Array) -> float:
    """Measure from the nut line to a point on a string, along it, in mm; nan for no point."""
    return float(
        -plan.strings.nut_line.distance_along(point[None], plan.strings.direction[[string]])[0]
    )


def _along_edge(edge: Edge, end: Array, line: CrossLine) -> float | None:
    """From the nut line along a finished edge; null where a partial fret ends before it."""
    crossing = edge.crossing(line)
    if crossing is None or np.hypot(*(crossing - end)) > 1e-6:
        return None
    return _number(edge.along_mm(crossing))


def _board(plan: Plan) -> dict[str, Any]:
    board = plan.board
    return {
        "outline": [_point(corner) for corner in board.wood_mm],
        "treble_edge": [_point(corner) for corner in board.treble.points_mm],
        "bass_edge": [_point(corner) for corner in board.bass.points_mm],
        "nut_angle": _number(math.degrees(plan.strings.nut_line.angle)),
        "bridge_at_centre": _number(plan.strings.bridge_line.at_centre_mm),
        "bridge_angle": _number(math.degrees(plan.strings.bridge_line.angle)),
        "face": _number(plan.ends.face_mm),
        "top": write_top_rule(plan),
        "top_places": [
            {
                "place": place.name,
                "x": _number(place.x_mm),
                "radius": None if plan.surface.flat else _number(place.radius_mm),
                "edge_drop": _number(place.drop_mm),
                "edge_thickness": _number(place.thickness_left_mm),
            }
            for place in describe_top(plan)
        ],
        "slot_width_finished": _number(plan.cut.finished_mm),
    }


def _saddle_strip(plan: Plan) -> dict[str, Any] | None:
    strip = plan.ends.strip
    if strip is None:
        return None
    return {
        "at_centre": _number(strip.at_centre_mm),
        "angle": _number(math.degrees(strip.slant)),
        "width": _number(strip.width_mm),
        "limit": _number(plan.instrument.compensation.saddle_thickness_mm),
        "limit_cost_cents": _number(plan.ends.limit_cost_cents),
    }


def _pitch(pitch: Pitch) -> dict[str, Any]:
    return {
        "target_cents": _table(pitch.target_cents),
        "predicted_cents": _table(pitch.predicted_cents),
        "error_cents": _table(pitch.error_cents),
        "rms_cents": _number(pitch.rms_cents),
        "rms_all_cents": _number(pitch.rms_all_cents),
        "worst": _worst(pitch.worst),
        "worst_all": _worst(pitch.worst_all),
        "ladder": [
            {
                "nut": rung.nut,
                "saddle": rung.saddle,
                "rms_cents": _number(rung.rms_cents),
                "worst_cents": _number(rung.worst_cents),
            }
            for rung in pitch.ladder
        ],
        "parts": {name: _table(values) for name, values in pitch.parts_cents.items()},
    }


def _worst(worst: Worst) -> dict[str, Any]:
    return {"string": worst.string, "fret": worst.fret, "cents": _number(worst.cents)}
