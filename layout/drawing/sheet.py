"""How do shapes become a sheet that every file format gives the same numbers of?

``make_sheet`` is the one place where vertices are rounded, to 1e-6 mm, and where nothing is drawn
twice. The frame is the board's: the origin is the nut line on the centre line, y up.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from layout.drawing.lettering import place_strokes, to_ascii
from layout.drawing.once import draw_once
from layout.drawing.shapes import (
    LAYERS,
    Arc,
    Circle,
    Extents,
    Layer,
    Lettering,
    Line,
    Outline,
    Point,
    Polyline3D,
    Shape,
    extents_of,
    on_grid,
)

LEAST_PLAIN_MM = 0.01
"""Height from which on no two points of a letter can be rounded to the same."""


@dataclass(frozen=True, slots=True)
class Sheet:
    """A finished drawing.

    Attributes
    ----------
    name
        Base of the file names: ``board``.
    title
        One line for the eye: the job, and what the sheet shows.
    notes
        Further lines: unit, state of the wood, nominal or offset.
    shapes
        Rounded, without zero-length pieces, each edge once.
    extents
        Around all shapes, mm.

    """

    name: str
    title: str
    notes: tuple[str, ...]
    shapes: tuple[Shape, ...]
    extents: Extents

    @property
    def layers(self) -> tuple[Layer, ...]:
        """The layers that something is drawn on, in the order files list them."""
        used = {shape.layer for shape in self.shapes}
        return tuple(layer for layer in LAYERS if layer in used)

    def on_layer(self, layer: Layer) -> tuple[Shape, ...]:
        """Give the shapes of one layer."""
        return tuple(shape for shape in self.shapes if shape.layer == layer)


def make_sheet(
    name: str, title: str, *, shapes: Iterable[Shape], notes: Sequence[str] = ()
) -> Sheet:
    """Finish a drawing: round, letter, drop what has no length, draw each edge once.

    Parameters
    ----------
    name, title, notes
        See ``Sheet``.
    shapes
        In any order; lettering without strokes gets them here. Numbers in mm.

    Returns
    -------
    Sheet
        Making a sheet of its shapes again changes nothing.

    Raises
    ------
    ValueError
        For a coordinate or size that is not a finite number, a negative radius, bulges that do
        not match the vertices, or when nothing is left to draw.

    Examples
    --------
    >>> sheet = make_sheet("trial", "A scrap", shapes=[
    ...     Outline("CUT_OUTLINE", ((0, 0), (120, 0), (120, 30), (0, 30), (0, 0))),
    ...     Line("REF_LINE", (0, 30), (120.0000001, 30)),
    ...     Circle("DRILL_PIN", (5, 5), 1.5),
    ... ])
    >>> sheet.layers, sheet.extents
    (('CUT_OUTLINE', 'DRILL_PIN'), Extents(left=0.0, low=0.0, right=120.0, high=30.0))

    """
    whole = [clean for shape in shapes for clean in _clean(shape)]
    finished = set(map(id, whole))
    single = tuple(
        clean
        for shape in draw_once(whole)
        for clean in ([shape] if id(shape) in finished else _clean(shape))
    )
    if not single:
        raise ValueError(f"sheet {name}: there is nothing to draw")
    extents = extents_of(single)
    around = Extents(*on_grid(extents[:2]), *on_grid(extents[2:]))
    return Sheet(name, title, tuple(notes), single, around)


def _clean(shape: Shape) -> list[Shape]:
    """Round a shape; give nothing where it has no length, a simpler shape where it is one."""
    match shape:
        case Line():
            start, end = _rounded(shape.start), _rounded(shape.end)
            return [Line(shape.layer, start, end)] if start != end else []
        case Circle():
            (radius_mm,) = _sizes(shape.radius_mm)
            circle = Circle(shape.layer, _rounded(shape.centre), radius_mm)
            return [circle] if radius_mm > 0 else []
        case Arc():
            return _clean_arc(shape)
        case Outline():
            return _clean_outline(shape)
        case Polyline3D():
            vertices = [(*_rounded(v[:2]), _rounded((v[2], 0.0))[0]) for v in shape.vertices]
            kept = [v for i, v in enumerate(vertices) if i == 0 or v != vertices[i - 1]]
            return [Polyline3D(shape.layer, tuple(kept))] if len(kept) > 1 else []
        case Lettering():
            return _clean_lettering(shape)


def _rounded(point: Point) -> Point:
    if not all(map(math.isfinite, point)):
        raise ValueError(f"a drawing has finite coordinates, not {point}")
    return on_grid(point)


def _sizes(*values: float) -> tuple[float, ...]:
    if not all(math.isfinite(value) and value >= 0 for value in values):
        raise ValueError(f"a drawing has finite sizes of 0 or more, not {values}")
    return tuple(round(float(value), 6) for value in values)


def _clean_arc(arc: Arc) -> list[Shape]:
    (radius_mm,) = _sizes(arc.radius_mm)
    centre = _rounded(arc.centre)
    if not (math.isfinite(arc.start_angle) and math.isfinite(arc.end_angle)):
        raise ValueError(f"an arc has finite angles, not {arc.start_angle} to {arc.end_angle}")
    sweep = arc.sweep
    if math.isclose(sweep, math.tau, rel_tol=0.0, abs_tol=1e-12):
        return _clean(Circle(arc.layer, centre, radius_mm))
    if radius_mm * sweep < 1e-6:
        return []
    start_angle = round(math.remainder(arc.start_angle, math.tau), 14) + 0.0
    return [Arc(arc.layer, centre, radius_mm, start_angle, start_angle + sweep)]


def _clean_outline(outline: Outline) -> list[Shape]:
    if outline.bulges and len(outline.bulges) != len(outline.vertices):
        raise ValueError("an outline has one bulge a vertex")
    bulges = outline.bulges or (0.0,) * len(outline.vertices)
    if not all(map(math.isfinite, bulges)):
        raise ValueError(f"an outline has finite bulges, not {bulges}")
    chain: list[tuple[Point, float]] = []
    for vertex, bulge in zip(map(_rounded, outline.vertices), bulges, strict=True):
        if chain and chain[-1][0] == vertex:
            chain.pop()  # no length between them: the later one's edge goes on from here
        # A bulge below 1e-12 bends a metre by less than a nanometre's thousandth.
        chain.append((vertex, round(float(bulge), 12) + 0.0))
    while outline.closed and len(chain) > 1 and chain[-1][0] == chain[0][0]:
        chain.pop()
    if len(chain) < 2:
        return []
    bent = any(bulge for _, bulge in (chain if outline.closed else chain[:-1]))
    if len(chain) == 2 and not bent:
        return [Line(outline.layer, chain[0][0], chain[1][0])]
    vertices = tuple(vertex for vertex, _ in chain)
    kept = tuple(bulge for _, bulge in chain) if bent else ()
    return [Outline(outline.layer, vertices, kept, closed=outline.closed)]


def _clean_lettering(lettering: Lettering) -> list[Shape]:
    anchor = _rounded(lettering.anchor)
    (height_mm,) = _sizes(lettering.height_mm)
    text = to_ascii(lettering.text)
    whole = replace(lettering, text=text, anchor=anchor, height_mm=height_mm, strokes=())
    kept = tuple(_round_strokes(lettering) if lettering.strokes else _draw_strokes(whole))
    if kept == lettering.strokes and replace(whole, strokes=kept) == lettering:
        return [lettering] if kept else []
    return [replace(whole, strokes=kept)] if kept else []


def _draw_strokes(lettering: Lettering) -> list[Outline]:
    """Draw a text; all its points are rounded at once, for a sheet has thousands."""
    points, counts = place_strokes(
        lettering.text,
        anchor=lettering.anchor,
        height_mm=lettering.height_mm,
        angle=lettering.angle,
        align=lettering.align,
        stand=lettering.stand,
    )
    rounded = [(x, y) for x, y in (np.round(points, 6) + 0.0).tolist()]
    strokes = []
    end = 0
    for count in counts:
        start, end = end, end + count
        closed = count > 2 and rounded[start] == rounded[end - 1]
        vertices = tuple(rounded[start : end - 1] if closed else rounded[start:end])
        strokes.append(Outline(lettering.layer, vertices, closed=closed))
    if lettering.height_mm < LEAST_PLAIN_MM:  # points may have met
        return [_as_stroke(clean) for stroke in strokes for clean in _clean_outline(stroke)]
    return strokes


def _round_strokes(lettering: Lettering) -> list[Outline]:
    if any(any(stroke.bulges) for stroke in lettering.strokes):
        raise ValueError("the strokes of lettering are straight: they have no bulges")
    return [_as_stroke(clean) for stroke in lettering.strokes for clean in _clean_outline(stroke)]


def _as_stroke(shape: Shape) -> Outline:
    if isinstance(shape, Line):
        return Outline(shape.layer, (shape.start, shape.end), closed=False)
    assert isinstance(shape, Outline)
    return shape
