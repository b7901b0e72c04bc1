"""Which edges should a file hold?"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from layout.drawing.shapes import ENGRAVE_LABEL, Lettering, Outline, Polyline3D, Shape, pieces_of
from layout.drawing.sheet import Sheet
from layout.proof.edges import Edges, Flags, Places, Reals

_MARGIN_MM = 1.0
"""Lettering that was set anew is looked for this far around the planned one."""


@dataclass(frozen=True, slots=True, eq=False)
class Expected:
    """A sheet as edges.

    Attributes
    ----------
    sheet
        What it was made of.
    edges
        All edges, in the sheet's frame, mm.
    shape
        Which of the sheet's shapes each edge belongs to, ``(n,)``.
    first
        Where each shape's edges begin among all, and one more: the number of edges.
    lettering
        Whether each edge is part of a text, ``(n,)``.
    needless
        Whether each edge is lettering or reference, which a cutter does without, ``(n,)``.
    label_boxes
        Around every text, with a margin: left, low, right, high, ``(k, 4)``.
    spare
        Places of shapes that may be there or not.

    """

    sheet: Sheet
    edges: Edges
    shape: Places
    first: Places
    lettering: Flags
    needless: Flags
    label_boxes: Reals
    spare: frozenset[int] = frozenset()


def expect_sheet(sheet: Sheet, *, spare: frozenset[int] = frozenset()) -> Expected:
    """List every edge of a sheet; ``spare`` are places of shapes that need not be there.

    Examples
    --------
    >>> from layout.drawing.sheet import make_sheet
    >>> from layout.drawing.shapes import Circle, Line
    >>> saw, hole = Line("CUT_SLOT", (0, 0), (0, 40)), Circle("DRILL_PIN", (9, 0), 2)
    >>> expected = expect_sheet(make_sheet("trial", "Trial", shapes=[saw, hole]))
    >>> np.round(expected.edges.length_mm, 3), expected.shape
    (array([40.   ,  6.283,  6.283]), array([0, 1, 1]))

    """
    listed = _Listed([], [], [], [], [])
    first = [0]
    for shape in sheet.shapes:
        _list_edges(shape, listed)
        first.append(len(listed.starts))
    edges = Edges(
        np.array(listed.starts, complex),
        np.array(listed.ends, complex),
        np.array(listed.bulges, float),
        np.array(listed.lows, float),
        np.array(listed.highs, float),
    )
    starts = np.array(first, np.intp)
    shape_of = np.repeat(np.arange(len(sheet.shapes)), np.diff(starts))
    text = np.array([is_text(shape) for shape in sheet.shapes], bool)
    reference = np.array([shape.layer.startswith("REF") for shape in sheet.shapes], bool)
    return Expected(
        sheet,
        edges,
        shape_of,
        starts,
        text[shape_of],
        (text | reference)[shape_of],
        _box_texts(sheet, edges, starts),
        spare,
    )


def is_text(shape: Shape) -> bool:
    """Whether a shape is there to be read, not measured."""
    return isinstance(shape, Lettering) or shape.layer == ENGRAVE_LABEL


class _Listed(NamedTuple):
    """Columns of edges, filled shape by shape: see ``Edges``."""

    starts: list[complex]
    ends: list[complex]
    bulges: list[float]
    lows: list[float]
    highs: list[float]


def _list_edges(shape: Shape, listed: _Listed) -> None:
    match shape:
        case Polyline3D():
            points = [complex(x, y) for x, y, _ in shape.vertices]
            heights = [height for *_, height in shape.vertices]
            before = len(listed.lows)
            _list_flat(points, listed)
            listed.lows[before:] = heights[:-1]
            listed.highs[before:] = heights[1:]
        case Lettering():
            for stroke in shape.strokes:
                _list_edges(stroke, listed)
        case Outline(bulges=()):
            points = [complex(x, y) for x, y in shape.vertices]
            _list_flat(points + points[:1] if shape.closed else points, listed)
        case _:
            for start, end, bulge in pieces_of(shape):
                _list_flat([complex(*start), complex(*end)], listed)
                listed.bulges[-1] = bulge


def _list_flat(points: list[complex], listed: _Listed) -> None:
    """Add a chain of straight edges in the plane of the drawing."""
    listed.starts.extend(points[:-1])
    listed.ends.extend(points[1:])
    level = [0.0] * (len(points) - 1)
    for column in (listed.bulges, listed.lows, listed.highs):
        column.extend(level)


def _box_texts(sheet: Sheet, edges: Edges, first: Places) -> Reals:
    boxes = []
    for place, shape in enumerate(sheet.shapes):
        if is_text(shape):
            part = slice(first[place], first[place + 1])
            points = np.concatenate((edges.start[part], edges.end[part]))
            low, high = points.real.min(), points.real.max()
            boxes.append((low, points.imag.min(), high, points.imag.max()))
    grow = np.array([-1.0, -1.0, 1.0, 1.0]) * _MARGIN_MM
    return np.array(boxes, float).reshape(-1, 4) + grow
