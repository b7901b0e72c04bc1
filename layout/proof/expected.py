"""Which edges should a file hold?"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from layout.drawing.shapes import ENGRAVE_LABEL, Lettering, Outline, Polyline3D, Shape, pieces_of
from layout.drawing.sheet import Sheet
from layout.proof.edges import Edges, Flags, Places, Reals, make_edges

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
    rows: list[tuple[complex, complex, float, float, float]] = []
    first = [0]
    lettering: list[bool] = []
    needless: list[bool] = []
    for shape in sheet.shapes:
        rows.extend(_rows_of(shape))
        text = is_text(shape)
        count = len(rows) - first[-1]
        lettering += [text] * count
        needless += [text or shape.layer.startswith("REF")] * count
        first.append(len(rows))
    edges = make_edges(rows)
    starts = np.array(first, np.intp)
    return Expected(
        sheet,
        edges,
        np.repeat(np.arange(len(sheet.shapes)), np.diff(starts)),
        starts,
        np.array(lettering, bool),
        np.array(needless, bool),
        _box_texts(sheet, edges, starts),
        spare,
    )


def is_text(shape: Shape) -> bool:
    """Whether a shape is there to be read, not measured."""
    return isinstance(shape, Lettering) or shape.layer == ENGRAVE_LABEL


def _rows_of(shape: Shape) -> Iterator[tuple[complex, complex, float, float, float]]:
    match shape:
        case Polyline3D():
            for (x0, y0, low), (x1, y1, high) in pairwise(shape.vertices):
                yield complex(x0, y0), complex(x1, y1), 0.0, low, high
        case Lettering():
            for stroke in shape.strokes:
                yield from _rows_of(stroke)
        case Outline(bulges=()):
            points = [complex(x, y) for x, y in shape.vertices]
            ends = points[1:] + points[:1] if shape.closed else points[1:]
            for point, ahead in zip(points, ends, strict=False):
                yield point, ahead, 0.0, 0.0, 0.0
        case _:
            for start, end, bulge in pieces_of(shape):
                yield complex(*start), complex(*end), bulge, 0.0, 0.0


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
