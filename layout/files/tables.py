"""How are the positions written as a table a spreadsheet opens?"""

from __future__ import annotations

import csv
import io
import math

import numpy as np

from layout.files.plan_json import along_lane_mm
from layout.plan.laying import outer_strings
from layout.plan.model import Plan
from layout.units import MM_PER_INCH, write_sixty_fourths

HEADER = (
    "fret,label,at_centre_mm,treble_string_mm,bass_string_mm,slot_from_mm,slot_to_mm,"
    "treble_end_x,treble_end_y,bass_end_x,bass_end_y,angle_deg,at_centre_in,nearest_64th,"
    "depth_mm,wire_mm"
)


def render_positions(plan: Plan) -> bytes:
    """Render positions.csv: one row a fret, millimetres to 0.001 and inches to 0.0001."""
    buffer = io.StringIO()
    writer = csv.writer(buffer, lineterminator="\n")
    writer.writerow(HEADER.split(","))
    first, last = outer_strings(plan.instrument)
    points = plan.strings.points(plan.frets.met_mm)
    for index in range(plan.instrument.frets.count):
        line = plan.frets.line(index + 1)
        pieces = plan.pieces_of(index + 1)
        half = plan.cut.finished_mm / (2 * math.cos(line.angle))
        at = line.at_centre_mm
        ends = (*pieces[0].cut_treble_mm, *pieces[-1].cut_bass_mm)
        writer.writerow(
            [
                index + 1,
                plan.instrument.frets.labels[index],
                _mm(at),
                _mm(along_lane_mm(plan, first, points[first, index])),
                _mm(along_lane_mm(plan, last, points[last, index])),
                _mm(at - half),
                _mm(at + half),
                *(_mm(float(part)) for part in ends),
                _mm(math.degrees(line.angle)),
                f"{at / MM_PER_INCH:.4f}",
                write_sixty_fourths(at)[0].removesuffix(" in"),
                "",
                _mm(sum(piece.wire_mm for piece in pieces)),
            ]
        )
    return buffer.getvalue().encode("utf-8")


def _mm(value: float) -> str:
    return "" if np.isnan(value) else f"{value + 0.0:.3f}".replace("-0.000", "0.000")
