"""What is drawn in a file, whatever its format?"""

from __future__ import annotations

import cmath
import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np

from layout.proof.edges import Edges, Flags, Places, make_edges
from layout.proof.report import Problem

NO_LENGTH_MM = 1e-7
"""An edge shorter than this, a tenth of the step drawings are rounded to, is left out. Where both
ends are the very same numbers it was drawn as a point, and that is named; else it is what another
program's arithmetic left over."""
SAME_MM = 1e-6
"""A chain that comes back this near to where it began repeats its first point: closing it draws
nothing."""
FARTHEST_MM = 1e7
"""No drawing is 10 km wide: a number beyond that is a misreading."""


@dataclass(frozen=True, slots=True, eq=False)
class Reading:
    """What a reader found.

    Attributes
    ----------
    edges
        In mm, y up. For DXF in the file's own frame; for SVG and PDF from the upper (SVG) or lower
        (PDF) left corner of the page.
    layers
        Names of the file's layers.
    layer
        Which layer each edge is on, ``(n,)``.
    contour
        Which chain each edge belongs to, ``(n,)``.
    closed
        Whether the file says that chain is closed, ``(n,)``.
    unit
        What the file says it counts in: ``mm``, ``in``, ``px``, ``none``.
    faults
        What is wrong with the file as a file.
    notes
        What was left out and does not matter to a cutter.
    broken
        The file cannot be trusted to be whole, so measuring it says nothing.

    """

    edges: Edges
    layers: tuple[str, ...]
    layer: Places
    contour: Places
    closed: Flags
    unit: str = "none"
    faults: tuple[Problem, ...] = ()
    notes: tuple[Problem, ...] = ()
    broken: bool = False


def broken_reading(code: str, text: str) -> Reading:
    """Give the reading of a file that cannot be read at all."""
    nothing = np.zeros(0, np.intp)
    return Reading(
        make_edges([]),
        (),
        nothing,
        nothing,
        np.zeros(0, bool),
        faults=(Problem(code, text),),
        broken=True,
    )


@dataclass(slots=True)
class Pen:
    """Gathers what a reader sees, chain by chain.

    >>> pen = Pen()
    >>> pen.draw_chain("saw", [0j, 9 + 0j, 9 + 4j], closed=True)
    >>> pen.finish(unit="mm").edges.length_mm
    array([9.        , 4.        , 9.8488578])
    """

    starts: list[complex] = field(default_factory=list)
    ends: list[complex] = field(default_factory=list)
    bulges: list[float] = field(default_factory=list)
    lows: list[float] = field(default_factory=list)
    highs: list[float] = field(default_factory=list)
    contour_first: list[int] = field(default_factory=list)
    contour_layer: list[int] = field(default_factory=list)
    contour_closed: list[bool] = field(default_factory=list)
    names: dict[str, int] = field(default_factory=dict)
    faults: list[Problem] = field(default_factory=list)
    notes: list[Problem] = field(default_factory=list)
    broken: bool = False

    def draw_chain(
        self,
        layer: str,
        points: Sequence[complex],
        *,
        closed: bool,
        bulges: Sequence[float] = (),
        heights: Sequence[float] = (),
    ) -> None:
        """Add a chain; a closed one that repeats its first point is closed by that alone."""
        count = len(points)
        if count < 2:
            self.faults.append(
                Problem("zero-length", f"on layer {layer} a chain has a single point", 1.0)
            )
            return
        if not bulges and not heights:
            self.draw_straight(layer, points, closed=closed)
            return
        self.begin(layer, closed=closed)
        for place in range(count if closed else count - 1):
            ahead = (place + 1) % count
            if closed and ahead == 0 and abs(points[0] - points[place]) <= SAME_MM:
                break
            self.draw(
                points[place],
                points[ahead],
                bulges[place] if bulges else 0.0,
                low=heights[place] if heights else 0.0,
                high=heights[ahead] if heights else 0.0,
            )

    def draw_straight(self, layer: str, points: Sequence[complex], *, closed: bool) -> None:
        """Add a chain of straight edges in the plane, of two points or more, all at once."""
        self.begin(layer, closed=closed)
        self.starts += points[:-1]
        self.ends += points[1:]
        if closed and not abs(points[0] - points[-1]) <= SAME_MM:
            self.starts.append(points[-1])
            self.ends.append(points[0])
        level = [0.0] * (len(self.starts) - len(self.bulges))
        self.bulges += level
        self.lows += level
        self.highs += level

    def draw_circle(self, layer: str, centre: complex, radius: float, *, height: float = 0) -> None:
        """Add a whole circle."""
        self.draw_chain(
            layer,
            [centre + radius, centre - radius],
            closed=True,
            bulges=(1.0, 1.0),
            heights=(height, height),
        )

    def draw_arc(
        self,
        layer: str,
        centre: complex,
        radius: float,
        *,
        first: float,
        turn: float,
        height: float = 0.0,
    ) -> None:
        """Add part of a circle from the angle ``first`` through ``turn`` (radians, signed)."""
        self.begin(layer, closed=abs(turn) >= math.tau)
        steps = math.ceil(abs(turn) / math.pi - 1e-12)
        bulge = math.tan(turn / steps / 4) if steps else 0.0
        corners = [
            centre + cmath.rect(radius, first + turn * step / max(steps, 1))
            for step in range(max(steps, 1) + 1)
        ]
        for start, end in pairwise(corners):
            self.draw(start, end, bulge, low=height, high=height)

    def begin(self, layer: str, *, closed: bool) -> None:
        """Start a chain."""
        self.contour_closed.append(closed)
        self.contour_layer.append(self.names.setdefault(layer, len(self.names)))
        self.contour_first.append(len(self.starts))

    def close(self) -> None:
        """Say that the chain that was begun last is closed."""
        self.contour_closed[-1] = True

    def draw(
        self, start: complex, end: complex, bulge: float = 0.0, *, low: float = 0, high: float = 0
    ) -> None:
        """Add an edge to the chain; one that turns through more than half a circle as two."""
        if abs(bulge) > 1 + 1e-9:
            half = math.tan(math.atan(bulge) / 2)
            # The middle of an arc lies its height, half the chord times the bulge, to the right.
            middle = (start + end) / 2 - 0.5j * (end - start) * bulge
            level = (low + high) / 2
            self.draw(start, middle, half, low=low, high=level)
            self.draw(middle, end, half, low=level, high=high)
            return
        self.starts.append(start)
        self.ends.append(end)
        self.bulges.append(bulge)
        self.lows.append(low)
        self.highs.append(high)

    def finish(self, *, unit: str, factor: float = 1.0) -> Reading:
        """Give the reading, in mm: all numbers times ``factor``."""
        edges = Edges(
            np.array(self.starts, np.complex128) * complex(factor),
            np.array(self.ends, np.complex128) * complex(factor),
            np.array(self.bulges, float),
            np.array(self.lows, float) * factor,
            np.array(self.highs, float) * factor,
        )
        counts = np.diff([*self.contour_first, len(self.starts)])
        contour = np.repeat(np.arange(len(self.contour_first)), counts)
        layer = np.array(self.contour_layer, np.intp)[contour]
        closed = np.array(self.contour_closed, bool)[contour]
        names = tuple(self.names)
        sizes = np.maximum(np.abs(edges.start), np.abs(edges.end)) + np.abs(edges.bulge)
        sizes = sizes + np.maximum(np.abs(edges.low), np.abs(edges.high))
        if not np.all(sizes < FARTHEST_MM):
            said = "a coordinate is not a number, or beyond 10 km"
            self.faults.append(Problem("bad-number", said))
            self.broken = True
        points = edges.start == edges.end
        if points.any() and not self.broken:
            self.faults += _name_points(edges.take(points), layer[points], names)
        kept = edges.chord_mm >= NO_LENGTH_MM
        return Reading(
            edges.take(kept),
            names,
            layer[kept],
            contour[kept],
            closed[kept],
            unit,
            tuple(self.faults),
            tuple(self.notes),
            self.broken,
        )


def _name_points(edges: Edges, layer: Places, names: Sequence[str]) -> Iterable[Problem]:
    for place in np.unique(layer):
        mine = np.flatnonzero(layer == place)
        first = edges.start[mine[0]]
        yield Problem(
            "zero-length",
            f"on layer {names[place]} {len(mine)} edges have no length, the first at "
            f"({first.real:.3f}, {first.imag:.3f}) of the file",
            float(len(mine)),
        )
