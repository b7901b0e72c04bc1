"""What is marked on the board sheet beside its outline and slots: dots, pins, blank, words?"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from layout.drawing.lettering import text_width_mm
from layout.drawing.shapes import (
    DRILL_MARK,
    DRILL_PIN,
    ENGRAVE_LABEL,
    REF_LINE,
    Circle,
    Lettering,
    Line,
    Shape,
)
from layout.plan.marking import mark_blank, place_face_dots, place_pins
from layout.plan.model import Plan

FIGURE_MM = 2.8
"""Height of figures beside frets and strings."""

NAME_MM = 2.0
"""Height of the names of reference lines."""

APART_MM = 0.8
"""Least clear space between two labels."""

KNIFE_MARK_MM = 4.0
"""Length of a knife mark beyond each edge of the blank."""


def draw_holes(plan: Plan) -> Iterator[Shape]:
    """Draw face dots and locating pins, inward by half a kerf that is the same all round.

    A beam whose kerf differs by axis cuts no circle along one: there holes stay nominal.
    """
    inward = (hole_kerf_mm(plan) or 0.0) / 2
    for dot in place_face_dots(plan):
        yield Circle(DRILL_MARK, (dot.x_mm, dot.y_mm), max(dot.size_mm / 2 - inward, 0.0))
    for pin in place_pins(plan):
        yield Circle(DRILL_PIN, (pin.x_mm, pin.y_mm), max(pin.size_mm / 2 - inward, 0.0))


def hole_kerf_mm(plan: Plan) -> float | None:
    """Give the kerf that holes are drawn inward for; None where they stay nominal."""
    tooling = plan.instrument.tooling
    if tooling is None or tooling.lines != "offset" or tooling.kerf_mm is None:
        return None
    kerf_x, kerf_y = tooling.kerf_mm
    return kerf_x if kerf_x == kerf_y else None


def draw_blank(plan: Plan) -> Iterator[Shape]:
    """Draw both edges of the square blank, and a knife mark where each fret line crosses them."""
    width = plan.instrument.board.blank_width_mm
    if width is None:
        return
    half = width / 2
    left, right = float(plan.board.wood_mm[:, 0].min()), float(plan.board.wood_mm[:, 0].max())
    for y in (half, -half):
        yield Line(REF_LINE, (left, y), (right, y))
    for mark in mark_blank(plan):
        for x, y, out in ((mark.treble_x_mm, half, 1), (mark.bass_x_mm, -half, -1)):
            slope = (mark.treble_x_mm - mark.bass_x_mm) / width
            end = (x + out * slope * KNIFE_MARK_MM, y + out * KNIFE_MARK_MM)
            yield Line(REF_LINE, (x, y), end)


def draw_string_names(plan: Plan, *, x_mm: float) -> Iterator[Shape]:
    """Write each string's note behind the nut; close neighbours step further back."""
    before: tuple[float, float] | None = None  # y of the last label, and where its text begins
    for string, start in zip(plan.instrument.strings, plan.ends.nut_mm, strict=True):
        name = str(string.note) if string.note is not None else f"{string.hz:.2f} Hz"
        y, x = float(start[1]), x_mm
        if before is not None and abs(before[0] - y) < FIGURE_MM + APART_MM:
            x = before[1] - 2 * APART_MM
        yield Lettering(ENGRAVE_LABEL, name, (x, y), FIGURE_MM, align="right")
        near = x == x_mm  # only every second of a run of close strings steps back
        start_of_text = x - text_width_mm(name, height_mm=FIGURE_MM)
        before = (y, start_of_text) if near else None


def draw_fret_labels(
    labels: Sequence[str], places: Sequence[tuple[float, float]]
) -> Iterator[Shape]:
    """Write fret labels under their places, on as many rows as keep them apart.

    Parameters
    ----------
    labels
        One a fret.
    places
        The head of each label, x and y, from the nut on.

    """
    filled: list[float] = []  # where the last label of every row ends
    for label, (x, y) in zip(labels, places, strict=True):
        half = text_width_mm(label, height_mm=FIGURE_MM) / 2
        row = next((i for i, end in enumerate(filled) if x - half > end + APART_MM), len(filled))
        if row == len(filled):
            filled.append(x + half)
        filled[row] = x + half
        low = y - row * (FIGURE_MM + APART_MM)
        yield Lettering(ENGRAVE_LABEL, label, (x, low), FIGURE_MM, stand="top")


def draw_line_names(plan: Plan, *, beyond_mm: float) -> Iterator[Shape]:
    """Name the nut line and the bridge line at their treble ends."""
    ends = (
        ("nut line", plan.strings.nut_line, float(plan.board.treble.points_mm[0, 1])),
        ("bridge line", plan.strings.bridge_line, float(plan.strings.bridge_mm[0, 1])),
    )
    for name, line, edge in ends:
        y = edge + beyond_mm + APART_MM
        x = float(line.x_at(y))
        yield Lettering(REF_LINE, name, (x, y), NAME_MM, align="right", stand="base")
