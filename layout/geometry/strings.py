"""Where does each string run, from its nut point to the bridge line?

Parallel boards: nut line x = 0, bridge line x = scale. Multi-scale boards: both outer strings
cross the square fret at the same x, and straight lines through their ends are the nut line and
the bridge line.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from layout.errors import Fault, JobError
from layout.geometry.cross import CrossLine, line_through
from layout.instrument import MultiScale, ParallelScale

Array = NDArray[np.float64]

_MOST_STEPS = 12
"""Each step leaves the share ``behind`` over length of the error, a hundredth at most."""


@dataclass(frozen=True, slots=True)
class StringLines:
    """Every string in plan, on the theoretical lines (no nut shift, no setback).

    Attributes
    ----------
    nut_mm, bridge_mm
        Shape (S, 2): where each string's own length starts and ends. A short string's starts on
        its fret, also where its nut stands behind that.
    scale_mm
        Shape (S,): the plan length that is divided.
    direction
        Shape (S, 2): unit vectors from nut to bridge.
    nut_line, bridge_line
        The board's theoretical lines.
    full
        Shape (S,): whether the string reaches the nut line.

    """

    nut_mm: Array
    bridge_mm: Array
    scale_mm: Array
    direction: Array
    nut_line: CrossLine
    bridge_line: CrossLine
    full: NDArray[np.bool_]

    def points(self, along_mm: Array) -> Array:
        """Give the points at distances along every string: (S, F) to (S, F, 2), in mm."""
        return np.asarray(
            self.nut_mm[:, None, :] + along_mm[..., None] * self.direction[:, None, :]
        )

    def y_at(self, string: int, x_mm: float) -> float:
        """Give a string's y where its lane passes x, extended beyond its ends if need be."""
        start, way = self.nut_mm[string], self.direction[string]
        return float(start[1] + (x_mm - start[0]) * way[1] / way[0])


def lay_strings(
    scale: ParallelScale | MultiScale,
    nut_y_mm: Array,
    bridge_y_mm: Array,
    *,
    full: NDArray[np.bool_],
    square_fraction: tuple[float, float] = (0.0, 0.0),
) -> StringLines:
    """Lay every string from the nut line to the bridge line.

    Parameters
    ----------
    scale
        One scale length, or the plan lengths of the first and last string that reach the nut.
    nut_y_mm, bridge_y_mm
        Shape (S,), from ``spread_strings``.
    full
        Shape (S,): which strings reach the nut.
    square_fraction
        Fraction of the way along the first and the last full string at which the square fret
        crosses them (multi-scale only).

    Raises
    ------
    JobError
        When a plan length is shorter than the string's own splay, or there is no fan to lay.

    """
    if isinstance(scale, ParallelScale):
        nut_line, bridge_line = CrossLine(0.0), CrossLine(scale.length_mm)
    else:
        nut_line, bridge_line = _fan_lines(
            scale, nut_y_mm, bridge_y_mm, full=full, square_fraction=square_fraction
        )
    nut = np.stack((nut_line.x_at(nut_y_mm), nut_y_mm), axis=1)
    bridge = np.stack((bridge_line.x_at(bridge_y_mm), bridge_y_mm), axis=1)
    return _measured(nut, bridge, nut_line=nut_line, bridge_line=bridge_line, full=full)


def start_at(
    lines: StringLines, string: int, line: CrossLine, *, behind_mm: float, y_mm: float | None
) -> StringLines:
    """Give the same strings with one that starts at a fret line instead of the nut.

    Parameters
    ----------
    lines
        The strings as laid from the nut line.
    string
        Index from 0.
    line
        The fret line it starts at.
    behind_mm
        How far its nut stands behind that line, along the string. Its length and its stops are
        counted from the line all the same.
    y_mm
        Its y at its own nut where the job lists it; None follows the lane already laid.

    """
    start, way, bridge = lines.nut_mm[string], lines.direction[string], lines.bridge_mm[string]
    if y_mm is None:
        start = start + float(line.distance_along(start[None], way[None])[0]) * way
    else:
        start = np.array([float(line.x_at(y_mm)), y_mm])
        for _ in range(_MOST_STEPS):  # the way turns by a hair as its start moves
            way = (bridge - start) / math.hypot(*(bridge - start))
            y = y_mm + behind_mm * way[1]
            start = np.array([float(line.x_at(y)), y])
    nut = lines.nut_mm.copy()
    nut[string] = start
    return _measured(
        nut,
        lines.bridge_mm,
        nut_line=lines.nut_line,
        bridge_line=lines.bridge_line,
        full=lines.full,
    )


def end_open(lines: StringLines, string: int, length_mm: float) -> StringLines:
    """Give the same strings with one open-only string of its own length, ending at the bridge."""
    nut, bridge = lines.nut_mm.copy(), lines.bridge_mm
    nut[string] = bridge[string] - length_mm * lines.direction[string]
    scale = lines.scale_mm.copy()
    scale[string] = length_mm
    return replace(lines, nut_mm=nut, scale_mm=scale)


def _measured(
    nut: Array,
    bridge: Array,
    *,
    nut_line: CrossLine,
    bridge_line: CrossLine,
    full: NDArray[np.bool_],
) -> StringLines:
    run = bridge - nut
    length = np.hypot(run[:, 0], run[:, 1])
    return StringLines(nut, bridge, length, run / length[:, None], nut_line, bridge_line, full)


def _fan_lines(
    scale: MultiScale,
    nut_y: Array,
    bridge_y: Array,
    *,
    full: NDArray[np.bool_],
    square_fraction: tuple[float, float],
) -> tuple[CrossLine, CrossLine]:
    """Both outer strings cross the square fret at one x: x_1 + q_1 D_1 = x_n + q_n D_n.

    Legend: L plan length, D its run along the centre line, q the fraction of the way to the
    square fret, all for the first and last string that reach the nut.
    """
    outer = np.flatnonzero(full)[[0, -1]]
    if outer[0] == outer[1]:
        raise _impossible("scale", "a multi-scale board needs two strings that reach the nut")
    y_n, y_b = nut_y[outer], bridge_y[outer]
    if y_n[0] <= y_n[1] or y_b[0] <= y_b[1]:
        raise _impossible("spread", "a multi-scale board needs outer strings that lie apart")
    L = np.array([scale.treble_mm, scale.bass_mm])  # noqa: N806  the legend's letter
    squared = L**2 - (y_b - y_n) ** 2
    if (squared <= 0).any():
        raise _impossible("scale", "an outer string is shorter than its own splay; check spread")
    D = np.sqrt(squared)  # noqa: N806  the legend's letter
    q_1, q_n = square_fraction
    step = q_n * D[1] - q_1 * D[0]  # x of the treble nut point minus x of the bass one
    slope = step / (y_n[0] - y_n[1])
    x_n = slope * y_n  # the nut line passes through the origin
    nut_line = CrossLine(0.0, float(slope))
    return nut_line, line_through((x_n[0] + D[0], y_b[0]), (x_n[1] + D[1], y_b[1]))


def _impossible(path: str, rule: str) -> JobError:
    return JobError([Fault("job", None, path, None, rule)])
