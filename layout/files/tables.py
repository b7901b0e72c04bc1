"""How are the positions written as a table a spreadsheet opens?"""

from __future__ import annotations

import csv
import io
import math

import numpy as np

from layout.files.plan_json import along_lane_mm
from layout.plan.depth import sink_slots
from layout.plan.laying import outer_strings
from layout.plan.model import Piece, Plan
from layout.units import MM_PER_INCH, write_sixty_fourths

HEADER = (
    "fret,label,at_centre_mm,treble_string_mm,bass_string_mm,slot_from_mm,slot_to_mm,"
    "treble_end_x,treble_end_y,bass_end_x,bass_end_y,angle_deg,at_centre_in,nearest_64th,"
    "depth_mm,wire_mm"
)


def render_positions(plan: Plan) -> bytes:
    """Render positions.csv: one row a fret, millimetres to 0.001 and inches to 0.0001.

    A zero fret is row 0. The depth is that on the centre line, where finished and flat top agree.
    """
    buffer = io.StringIO()
    writer = csv.writer(buffer, lineterminator="\n")
    writer.writerow(HEADER.split(","))
    first, last = outer_strings(plan.instrument)
    points = plan.strings.points(plan.frets.met_mm)
    depths = {slot.piece.fret: slot.floor.at_centre_mm for slot in sink_slots(plan)}
    if plan.zero_fret is not None:
        writer.writerow(
            [0, "0", *_row(plan, (plan.zero_fret,), (0.0, 0.0), depths.get(0, math.nan))]
        )
    for index, label in enumerate(plan.instrument.frets.labels):
        along = (
            along_lane_mm(plan, first, points[first, index]),
            along_lane_mm(plan, last, points[last, index]),
        )
        fret = index + 1
        row = _row(plan, plan.pieces_of(fret), along, depths.get(fret, math.nan))
        writer.writerow([fret, label, *row])
    return buffer.getvalue().encode("utf-8")


def _row(
    plan: Plan, pieces: tuple[Piece, ...], along_mm: tuple[float, float], depth_mm: float
) -> list[str]:
    """Write the figures of one fret, from its place on the centre line to its wire."""
    fret = pieces[0].fret
    line = plan.strings.nut_line if fret == 0 else plan.frets.line(fret)
    half = plan.cut.finished_mm / (2 * math.cos(line.angle))
    at = line.at_centre_mm
    ends = (*pieces[0].cut_treble_mm, *pieces[-1].cut_bass_mm)
    return [
        *(_mm(value) for value in (at, *along_mm, at - half, at + half)),
        *(_mm(float(part)) for part in ends),
        _mm(math.degrees(line.angle)),
        f"{at / MM_PER_INCH:.4f}",
        write_sixty_fourths(at)[0].removesuffix(" in"),
        _mm(depth_mm),
        _mm(sum(piece.wire_mm for piece in pieces)),
    ]


def _mm(value: float) -> str:
    return "" if np.isnan(value) else f"{value + 0.0:.3f}".replace("-0.000", "0.000")
