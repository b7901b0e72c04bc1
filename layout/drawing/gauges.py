"""Which radius gauges check the top, and the caul or block that shapes it?

A concave gauge stands on the board; its convex mate fits the concave one, and checks a sanding
block or a caul.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from layout.drawing.freeing import cut_free
from layout.drawing.legend import LINE_MM, NOTE_MM, draw_legend, offsets_lines, say_lines
from layout.drawing.outlines import bulge_of_radius
from layout.drawing.reference import draw_origin_mark
from layout.drawing.shapes import (
    CUT_OUTLINE,
    ENGRAVE_LABEL,
    Lettering,
    Outline,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.plan.depth import octave_x_mm, write_top_rule
from layout.plan.model import Plan
from layout.units import MM_PER_INCH

HEIGHT_MM = 25.0
"""Least height of a gauge: at the middle of a concave one, at the ends of a convex one."""
PAST_EDGE_MM = 5.0
"""How far a gauge reaches past the board's edge on either side."""
APART_MM = 10.0
"""Between two gauges."""
SAME_MM = 0.005
"""Radii that print the same need one pair of gauges."""
FULLEST = 0.95
"""Half a gauge's width as a share of its radius, at most: more is hardly an arc to cut."""


@dataclass(frozen=True, slots=True)
class Place:
    """Where a gauge belongs: in words, the radius there, and half the gauge's width, mm."""

    name: str
    radius_mm: float
    half_mm: float

    @property
    def drop_mm(self) -> float:
        """How far the arc's ends lie below its top."""
        radius, half = self.radius_mm, self.half_mm
        return half * half / (radius + math.sqrt(radius * radius - half * half))


def gauge_places(plan: Plan) -> tuple[Place, ...]:
    """Give nut, octave fret and tail; one place where the radius is the same all along."""
    tail = float(plan.board.tail_end.at_centre_mm)
    named = {"nut": 0.0, "octave fret": octave_x_mm(plan), "tail": tail}
    places = []
    for name, x in named.items():
        radius = float(plan.surface.radius_mm(x))
        reach = max(plan.board.treble.y_at(x), -plan.board.bass.y_at(x)) + PAST_EDGE_MM
        places.append(Place(name, radius, min(reach, FULLEST * radius)))
    radii = [place.radius_mm for place in places]
    if max(radii) - min(radii) <= SAME_MM:
        return (Place("all along", radii[0], max(place.half_mm for place in places)),)
    return tuple(places)


def draw_gauges(plan: Plan) -> Sheet | None:
    """Draw a concave and a convex gauge, true arcs, for each place; None on a flat top.

    Returns
    -------
    Sheet
        ``gauges``: closed outlines on CUT_OUTLINE, each lettered with radius, place and kind.

    """
    if plan.surface.flat:
        return None
    shapes: list[Shape] = []
    offset = False
    at, before = 0.0, 0.0
    places = gauge_places(plan)
    for place in places:
        at += before + place.half_mm + APART_MM if before else 0.0
        before = place.half_mm
        for kind in ("concave", "convex"):
            nominal = _outline(place, kind, at)
            path = cut_free(plan, nominal)
            offset = offset or path is not nominal
            shapes += [path, *_label(plan, place, kind, at)]
    notes = gauge_notes(plan, offset=offset)
    title = f"{plan.instrument.title}: radius gauges"
    legend = draw_legend(title, notes, around=extents_of(shapes))
    return make_sheet("gauges", title, shapes=[*shapes, *draw_origin_mark(), *legend], notes=notes)


def gauge_notes(plan: Plan, *, offset: bool | None = None) -> tuple[str, ...]:
    """Say unit, datum, the rule of the top, and the state of the wood the gauges check."""
    lines = offsets_lines(plan) if offset is None else offset
    return (
        "Unit: mm, 1:1.",
        "Origin: top of the first arc, on the centre line.",
        "State of the wood: radiused. Hold gauges square to the centre line.",
        f"Top: {write_top_rule(plan)}.",
        say_lines(plan, offset=lines),
    )


def _outline(place: Place, kind: str, at: float) -> Outline:
    """Draw one gauge: the arc's top lies at y 0 (concave), or a pair's distance lower (convex)."""
    half, radius, drop = place.half_mm, place.radius_mm, place.drop_mm
    left, right = at - half, at + half
    if kind == "concave":
        bulge = bulge_of_radius((left, -drop), (right, -drop), radius_mm=-radius)
        corners = ((left, -drop), (right, -drop), (right, HEIGHT_MM), (left, HEIGHT_MM))
        return Outline(CUT_OUTLINE, corners, (bulge, 0.0, 0.0, 0.0))
    high = _convex_end(place)
    low = high - HEIGHT_MM
    bulge = bulge_of_radius((right, high), (left, high), radius_mm=radius)
    corners = ((left, low), (right, low), (right, high), (left, high))
    return Outline(CUT_OUTLINE, corners, (0.0, 0.0, bulge, 0.0))


def _convex_end(place: Place) -> float:
    """Give y of the ends of a convex gauge's arc, clear below the concave one everywhere."""
    return -2 * place.drop_mm - APART_MM


def _label(plan: Plan, place: Place, kind: str, at: float) -> Iterator[Shape]:
    radius = f"R {place.radius_mm:.2f} mm"
    if plan.instrument.unit == "in":
        radius += f" = {place.radius_mm / MM_PER_INCH:.3f} in"
    middle = HEIGHT_MM / 2 if kind == "concave" else _convex_end(place) - HEIGHT_MM / 2
    # A concave gauge's arc rises to its middle line: lettering keeps to the upper half.
    middle += LINE_MM / 2 if kind == "concave" else 0.0
    for text, up in ((radius, LINE_MM / 2), (f"{place.name}, {kind}", -LINE_MM / 2)):
        yield Lettering(ENGRAVE_LABEL, text, (at, middle + up), NOTE_MM)
