"""Where does every string cross the saddle, and how much of the strip or travel does that use?

Places are the board's own: x from zero, y from the centre line.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from layout.drawing.nut import LABEL_SHARE, label_height_mm, name_string, say_signed
from layout.drawing.shapes import (
    ENGRAVE_LABEL,
    REF_LINE,
    REF_STRING,
    SCRIBE_STOP,
    Lettering,
    Line,
    Outline,
    Point,
    Shape,
)
from layout.geometry.cross import CrossLine
from layout.plan.depth import octave_x_mm
from layout.plan.laying import outer_strings
from layout.plan.model import Plan

Array = NDArray[np.float64]

BEFORE_MM, PAST_MM = 20.0, 8.0
"""How much of each string is drawn before the bridge line and past its crown."""
CROWN_MM, CROSS_MM = 5.0, 0.8
"""Length of a crown's line, square to its string, and of the arms of the cross that marks it."""
PAST_OUTER_MM = 6.0
"""How far strip and bridge line reach past the outer strings."""
TICK_MM = 3.0
"""Length of the marks at the ends of a piece's travel."""
LEAST_STRIP_MM = 0.05
"""A narrower strip is drawn as the line it is."""


def octave_fret(plan: Plan) -> int | None:
    """Give the number of the fret at half the string; None where the record has none there."""
    found = np.flatnonzero(plan.frets.at_centre_mm == octave_x_mm(plan))
    return int(found[0]) + 1 if len(found) else None


def from_octave_mm(plan: Plan) -> Array:
    """Measure from the octave fret to each crown along its string, shape (S,), in mm.

    Where that fret does not serve a string, and where there is none, from half its own length.
    """
    scale = plan.strings.scale_mm
    half = scale / 2
    fret = octave_fret(plan)
    met = half if fret is None else plan.frets.met_mm[:, fret - 1]
    return np.asarray(scale + plan.ends.setback_mm - np.where(np.isfinite(met), met, half))


def travel_middle_mm(plan: Plan) -> float:
    """Give the setback at the middle of the travel: the middle of what the strings ask for."""
    asked = plan.ends.setback_mm[plan.fretted]
    return float(asked.min() + asked.max()) / 2


def draw_saddle(plan: Plan) -> Iterator[Shape]:
    """Draw bridge line, strip or travels, crowns, strings and their names."""
    strings, ends = plan.strings, plan.ends
    yield _across(plan, strings.bridge_line)
    if plan.instrument.bridge.kind == "separate":
        yield from _travels(plan)
    else:
        yield from _strip(plan)
    height = label_height_mm(ends.saddle_mm[:, 1])
    for index, string in enumerate(plan.instrument.strings):
        crown, way = ends.saddle_mm[index], strings.direction[index]
        start = strings.bridge_mm[index] - BEFORE_MM * way
        yield Line(REF_STRING, _point(start), _point(crown + PAST_MM * way))
        yield from _crown(plan, index, min(CROWN_MM, height / LABEL_SHARE))
        place = (float(start[0]) - 1.5, float(start[1]))
        name = name_string(index + 1, string)
        yield Lettering(ENGRAVE_LABEL, name, place, height, align="right")


def _point(point: Array) -> Point:
    return float(point[0]), float(point[1])


def _square_to(plan: Plan, index: int, at: Array, length: float) -> Line:
    way = plan.strings.direction[index]
    aside = np.array([-way[1], way[0]]) * length / 2
    return Line(SCRIBE_STOP, _point(at - aside), _point(at + aside))


def _crown(plan: Plan, index: int, length: float) -> Iterator[Line]:
    """Mark a crown: its line across the string, and a slanting cross that no strip hides."""
    at = plan.ends.saddle_mm[index]
    yield _square_to(plan, index, at, length)
    for rise in (1.0, -1.0):
        arm = np.array([CROSS_MM, rise * CROSS_MM])
        yield Line(SCRIBE_STOP, _point(at - arm), _point(at + arm))


def _outer_y(plan: Plan) -> tuple[float, float]:
    """Lowest and highest y of strip and bridge line."""
    y = plan.ends.saddle_mm[plan.fretted, 1]
    return float(y.min()) - PAST_OUTER_MM, float(y.max()) + PAST_OUTER_MM


def _across(plan: Plan, line: CrossLine) -> Line:
    low, high = _outer_y(plan)
    return Line(REF_LINE, (float(line.x_at(low)), low), (float(line.x_at(high)), high))


def strip_width_mm(plan: Plan) -> float:
    """Give the width of the strip that is drawn: the saddle's, or as narrow as crowns allow."""
    strip = plan.ends.strip
    narrowest = 0.0 if strip is None else strip.width_mm
    return max(narrowest, plan.instrument.compensation.saddle_thickness_mm or 0.0)


def _strip(plan: Plan) -> Iterator[Shape]:
    strip, width = plan.ends.strip, strip_width_mm(plan)
    if strip is None:
        return
    middle = CrossLine(strip.at_centre_mm, math.tan(strip.slant))
    if width < LEAST_STRIP_MM:
        if np.any(plan.ends.setback_mm):  # else it is the bridge line
            yield _across(plan, middle)
        return
    first, second = (_across(plan, middle.moved_square(half)) for half in (-width / 2, width / 2))
    yield Outline(REF_LINE, (first.start, second.start, second.end, first.end))


def _travels(plan: Plan) -> Iterator[Shape]:
    """Draw each piece's travel along its string, with a mark at either end."""
    travel = plan.instrument.bridge.travel_mm or 0.0
    middle = travel_middle_mm(plan)
    for index in np.flatnonzero(plan.fretted):
        start, way = plan.strings.bridge_mm[index], plan.strings.direction[index]
        ends = [start + (middle + half) * way for half in (-travel / 2, travel / 2)]
        yield Line(REF_LINE, _point(ends[0]), _point(ends[1]))
        for end in ends:
            mark = _square_to(plan, int(index), end, TICK_MM)
            yield Line(REF_LINE, mark.start, mark.end)


# In words and figures ------------------------------------------------------------------------


def saddle_rows(plan: Plan) -> list[list[str]]:
    """Give header and one row a string: setback, distance from the octave, place, travel."""
    separate = plan.instrument.bridge.kind == "separate"
    rows = [["string", "setback", "from octave", "x", "y"]]
    if separate:
        rows[0].append("in travel")
    octave = from_octave_mm(plan)
    start = travel_middle_mm(plan) - (plan.instrument.bridge.travel_mm or 0.0) / 2
    for index, string in enumerate(plan.instrument.strings):
        setback = float(plan.ends.setback_mm[index])
        x, y = (float(value) for value in plan.ends.saddle_mm[index])
        row = [
            name_string(index + 1, string),
            say_signed(setback),
            f"{octave[index]:.3f}" if string.fretted else "-",
            f"{x:.3f}",
            say_signed(y),
        ]
        if separate:
            row.append(f"{setback - start:.3f}" if string.fretted else "-")
        rows.append(row)
    return rows


def saddle_notes(plan: Plan) -> list[str]:
    """Say what the figures are, how the strip lies, what is used of it, and where bridges stand."""
    fret = octave_fret(plan)
    octave = "the half-length line"
    if fret is not None:
        octave = f"fret {plan.instrument.frets.labels[fret - 1]}"
    notes = [
        "Setback: from the bridge line along the string, + away from the nut.",
        f"From octave: from {octave} along the string to the crown.",
        "Crowns: x from zero, y from the centre line, + toward treble.",
    ]
    if not np.any(plan.ends.setback_mm):
        notes.append("No setback is planned: every crown lies on the bridge line.")
    kind = plan.instrument.bridge.kind
    if kind == "separate":
        notes += _say_travel(plan)
    elif plan.ends.strip is not None and strip_width_mm(plan) >= LEAST_STRIP_MM:
        notes += _say_strip(plan)
    if kind == "loose":
        first, last = outer_strings(plan.instrument)
        x = plan.ends.saddle_mm[:, 0]
        notes.append(
            f"The bridge is loose: it stands {x[first]:.2f} mm from zero at the treble string, "
            f"{x[last]:.2f} mm at the bass string."
        )
    return notes


def _say_strip(plan: Plan) -> list[str]:
    strip = plan.ends.strip
    assert strip is not None
    limit = plan.instrument.compensation.saddle_thickness_mm
    if limit is None:
        said = f"Narrowest saddle strip that holds every crown: {strip.width_mm:.2f} mm wide."
    elif strip.width_mm > limit + 1e-6:
        said = (
            f"Saddle strip: the crowns need {strip.width_mm:.2f} mm, more than the saddle's "
            f"{limit:.2f} mm."
        )
    else:
        said = (
            f"Saddle strip: {limit:.2f} mm wide, of which the crowns use {strip.width_mm:.2f} mm "
            f"({strip.width_mm / limit:.0%})."
        )
    return [
        said,
        (
            f"Its middle: {strip.at_centre_mm:.3f} mm on the centre line, "
            f"{say_signed(math.degrees(strip.slant), 2)} degrees off square "
            "(+: treble end further)."
        ),
    ]


def _say_travel(plan: Plan) -> list[str]:
    travel = plan.instrument.bridge.travel_mm or 0.0
    asked = plan.ends.setback_mm[plan.fretted]
    used = float(asked.max() - asked.min())
    return [
        (
            f"Bridge pieces: of {travel:.2f} mm of travel the strings use {used:.2f} mm. "
            "In travel: from its nut end."
        ),
        (
            f"The middle of the travel lies {say_signed(travel_middle_mm(plan))} mm from the "
            "bridge line, along each string."
        ),
    ]
