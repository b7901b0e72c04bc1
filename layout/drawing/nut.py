"""What does the finished nut look like from above, and what is filed at each string?

The front edge is one chain of steps: each string leaves the nut at its own step, half-way to its
neighbours on either side. Places are the board's own: x from zero, y from the centre line.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.drawing.shapes import (
    CUT_OUTLINE,
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
from layout.geometry.board import Edge
from layout.geometry.cross import CrossLine, line_through
from layout.instrument import StringSpec
from layout.plan.make import BEHIND_ZERO_FRET_MM
from layout.plan.model import Plan

Array = NDArray[np.float64]

STUB_MM = 22.0
"""How much of each string is drawn beyond the nut: past the origin's lettering."""
LABEL_MM, LEAST_LABEL_MM = 2.4, 0.9
"""Height of a string's name, and the least that can be read."""
LABEL_SHARE = 0.7
"""Of the space between two strings, for a name."""
LEAST_STEP_MM = 0.005
"""Least difference between steps: equal shifts along strings that splay differ by microns."""
SAME_MM = 1e-9
"""Figures that differ by less are the same: the tolerance of algebra."""


@dataclass(frozen=True, slots=True)
class NutLines:
    """The lines of the nut.

    Attributes
    ----------
    front, back
        Faces of the blank as it stands against the board, square to the nut line ``thickness``
        apart.
    strings
        Indices of the strings that leave from it, treble side first.
    steps
        For each of them the line its own edge lies on; steps that differ by less than can be filed
        are one.
    between_mm
        y of the risers between neighbouring steps.

    """

    front: CrossLine
    back: CrossLine
    strings: tuple[int, ...]
    steps: tuple[CrossLine, ...]
    between_mm: tuple[float, ...]


def name_string(number: int, string: StringSpec) -> str:
    """Name a string by number and note, or its frequency where it has no note."""
    note = f"{string.hz:.2f} Hz" if string.note is None else str(string.note)
    return f"{number} {note}"


def label_height_mm(y_mm: Array) -> float:
    """Give how high names may stand where strings lie this close, in mm."""
    ordered = np.sort(y_mm)
    room = float(np.diff(ordered).min()) if len(ordered) > 1 else LABEL_MM / LABEL_SHARE
    return max(LEAST_LABEL_MM, min(LABEL_MM, LABEL_SHARE * room))


def lay_nut(plan: Plan) -> NutLines:
    """Lay faces and steps of the nut.

    With a zero fret the nut only guides the strings: it stands behind the fret, without steps.
    """
    nut, ends = plan.instrument.nut, plan.ends
    at_zero_fret = nut.zero == "fret"
    front = plan.board.face.moved(-BEHIND_ZERO_FRET_MM) if at_zero_fret else plan.board.face
    reaching = np.flatnonzero(plan.strings.full & plan.fretted)
    steps: list[CrossLine] = []
    for index in reaching:
        x, y = ends.nut_mm[index]
        own = CrossLine(float(x - front.slope * y), front.slope)
        near = [front, *steps[-1:]]
        same = [line for line in near if abs(line.at_centre_mm - own.at_centre_mm) < LEAST_STEP_MM]
        steps.append(front if at_zero_fret else (*same, own)[0])
    y = ends.nut_mm[reaching, 1]
    between = tuple(float(middle) for middle in (y[1:] + y[:-1]) / 2)
    indices = tuple(int(index) for index in reaching)
    return NutLines(front, front.moved_square(-nut.thickness_mm), indices, tuple(steps), between)


def draw_nut(plan: Plan) -> Iterator[Shape]:
    """Draw the nut from above: outline with its steps, string slots, strings and their names."""
    lines = lay_nut(plan)
    yield Outline(CUT_OUTLINE, tuple(_around(plan, lines)))
    yield _across(plan, lines.front)
    yield from _seat(plan, lines)
    y = plan.ends.nut_mm[list(lines.strings), 1]
    height = label_height_mm(y)
    for index, step in zip(lines.strings, lines.steps, strict=True):
        yield from _slot(plan, index, step, lines.back)
        way = plan.strings.direction[index]
        start = _on(plan, index, step)
        end = start + STUB_MM * way
        yield Line(REF_STRING, _point(start), _point(end))
        name = name_string(index + 1, plan.instrument.strings[index])
        place = (float(end[0]) + 1.5, float(end[1]))
        yield Lettering(ENGRAVE_LABEL, name, place, height, align="left")


def _around(plan: Plan, lines: NutLines) -> Iterator[Point]:
    """Corners of the finished nut: back, treble side, steps from treble to bass, bass side."""
    treble, bass = plan.board.treble, plan.board.bass
    yield _corner(treble, lines.back)
    yield _corner(treble, lines.steps[0])
    for y, here, there in zip(lines.between_mm, lines.steps[:-1], lines.steps[1:], strict=True):
        if abs(here.at_centre_mm - there.at_centre_mm) > SAME_MM:
            yield float(here.x_at(y)), y
            yield float(there.x_at(y)), y
    yield _corner(bass, lines.steps[-1])
    yield _corner(bass, lines.back)


def _across(plan: Plan, line: CrossLine) -> Line:
    """Draw the end of the board, from edge to edge."""
    return Line(REF_LINE, _corner(plan.board.treble, line), _corner(plan.board.bass, line))


def _seat(plan: Plan, lines: NutLines) -> Iterator[Shape]:
    """Draw the wood behind a nut that is let into a channel."""
    nut = plan.instrument.nut
    if nut.seat != "channel" or not nut.behind_mm:
        return
    end = lines.back.moved_square(-nut.behind_mm)
    treble, bass = plan.board.treble, plan.board.bass
    corners = (
        _corner(treble, lines.back),
        _corner(treble, end),
        _corner(bass, end),
        _corner(bass, lines.back),
    )
    yield Outline(REF_LINE, corners, closed=False)


def _slot(plan: Plan, index: int, step: CrossLine, back: CrossLine) -> Iterator[Shape]:
    """Draw a string's slot: both sides where its gauge is known, else the middle."""
    way = plan.strings.direction[index]
    aside = np.array([-way[1], way[0]])
    gauge = plan.instrument.strings[index].gauge_mm
    for side in (0.0,) if gauge is None else (0.5, -0.5):
        start = plan.ends.nut_mm[index] + side * (gauge or 0.0) * aside
        ends = [start + _reach(line, start, way) * way for line in (back, step)]
        yield Line(SCRIBE_STOP, _point(ends[0]), _point(ends[1]))


def _on(plan: Plan, index: int, line: CrossLine) -> Array:
    """Give where a string's lane meets a line across."""
    start, way = plan.ends.nut_mm[index], plan.strings.direction[index]
    return np.asarray(start + _reach(line, start, way) * way)


def _reach(line: CrossLine, start: Array, way: Array) -> float:
    return float(line.distance_along(start[None], way[None])[0])


def _corner(edge: Edge, line: CrossLine) -> Point:
    """Give where the first piece of an edge, lengthened, meets a line across."""
    start, run = edge.points_mm[0], edge.points_mm[1] - edge.points_mm[0]
    return _point(start + _reach(line, start, run) * run)


def _point(point: Array) -> Point:
    return float(point[0]), float(point[1])


# In words and figures ------------------------------------------------------------------------


def nut_rows(plan: Plan) -> list[list[str]]:
    """Give header and one row a string: gauge, nut shift and what is filed, in mm."""
    trim = plan.instrument.nut.fit == "trim"
    rows = [["string", "gauge", "nut shift", "file back" if trim else "reaches over"]]
    amounts = plan.ends.file_back_mm if trim else plan.ends.overhang_mm
    at_nut = plan.strings.full & plan.fretted
    for index, string in enumerate(plan.instrument.strings):
        gauge = "-" if string.gauge_mm is None else f"{string.gauge_mm:.3f}"
        row = [name_string(index + 1, string), gauge]
        if not string.fretted:
            row += ["-", "-"]
        else:
            filed = f"{amounts[index]:.3f}" if at_nut[index] else "-"
            row += [say_signed(float(plan.ends.nut_shift_mm[index])), filed]
        rows.append(row)
    return rows


def say_signed(figure: float, digits: int = 3) -> str:
    """Print a figure with its sign, and nought without one.

    Examples
    --------
    >>> say_signed(0.2), say_signed(-0.0001)
    ('+0.200', '0.000')

    """
    text = f"{figure:+.{digits}f}"
    return text if text.strip("+-0.") else text.lstrip("+-")


def nut_notes(plan: Plan) -> list[str]:
    """Say how large the blank is, how the shifts are brought about, and how the nut is seated."""
    nut, ends = plan.instrument.nut, plan.ends
    lines = lay_nut(plan)
    corners = [
        np.array(_corner(edge, lines.front)) for edge in (plan.board.treble, plan.board.bass)
    ]
    width = float(np.hypot(*(corners[0] - corners[1])))
    over = float(np.max(ends.overhang_mm, initial=0.0))
    blank = f"Nut blank: {width:.2f} mm along its front, {nut.thickness_mm:.2f} mm thick"
    blank += f" below, {nut.thickness_mm + over:.2f} mm at its top." if over > SAME_MM else "."
    notes = [blank, _say_fit(plan)]
    slant = line_through(*corners).angle
    if abs(slant) > SAME_MM:
        notes.append(f"The nut's front lies {np.degrees(slant):+.2f} degrees off square.")
    if nut.seat == "channel":
        notes.append(
            f"Seat: a channel {nut.thickness_mm:.2f} mm wide; the wood runs on "
            f"{nut.behind_mm or 0.0:.2f} mm behind it."
        )
    notes += [
        (
            f"String {index + 1} has a nut of its own "
            f"{'at' if not string.starts_at.behind_mm else 'behind'} fret "
            f"{plan.instrument.frets.labels[string.starts_at.fret - 1]}, "
            f"{float(ends.nut_mm[index, 0]):.3f} mm from zero."
        )
        for index, string in enumerate(plan.instrument.strings)
        if string.starts_at is not None
    ]
    return notes


def _say_fit(plan: Plan) -> str:
    nut, ends = plan.instrument.nut, plan.ends
    if nut.zero == "fret":
        return (
            "Zero fret: the nut only guides the strings, behind the fret; file its slots below "
            "the fret's crown."
        )
    if not (np.any(ends.file_back_mm) or np.any(ends.overhang_mm)):
        return (
            f"The nut is straight: its front stands at the board's end, at {ends.face_mm:.3f} mm."
        )
    if nut.fit == "trim":
        return (
            f"By trim: the board ends at {ends.face_mm:.3f} mm; file other edges back from "
            "there, at the top."
        )
    return (
        f"By overhang: the board ends at {ends.face_mm:.3f} mm; each string's edge reaches over "
        "it, at the top."
    )
