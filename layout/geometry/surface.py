"""How is the top of the board curved, and how long is a fret over it?

z = sqrt(R^2 - y^2) - R with the centre line level. Four rules for R give different boards; a
flat top has none.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.errors import Fault, JobError
from layout.geometry.board import BoardShape, place_x_mm
from layout.geometry.frets import FretLines
from layout.geometry.strings import StringLines
from layout.instrument import ConeAtNut, LevelEdgesAtNut, OneRadius, TopRule, TwoRadii

Array = NDArray[np.float64]

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(24)


@dataclass(frozen=True, slots=True)
class Surface:
    """The top: R(x) = c0 + c1 x + c2 x^2 on the centre line, in mm; flat when ``flat``."""

    coefficients: tuple[float, float, float]
    flat: bool = False

    def radius_mm(self, x_mm: ArrayLike) -> Array:
        """Give the radius at x on the centre line; infinite on a flat top."""
        x = np.asarray(x_mm, float)
        if self.flat:
            return np.full_like(x, np.inf)
        c0, c1, c2 = self.coefficients
        return np.asarray(c0 + c1 * x + c2 * x * x)

    def height_mm(self, x_mm: ArrayLike, y_mm: ArrayLike) -> Array:
        """Give z of the top, 0 on the centre line and negative beside it.

        >>> surface = Surface((305.0, 0.0, 0.0))
        >>> round(float(surface.height_mm(0.0, 28.0)), 2)
        -1.29
        """
        y = np.asarray(y_mm, float)
        if self.flat:
            return np.zeros(np.broadcast(np.asarray(x_mm), y).shape)
        radius = self.radius_mm(x_mm)
        return np.asarray(-y * y / (radius + np.sqrt(radius * radius - y * y)))

    def curve_length_mm(self, start_mm: Array, end_mm: Array) -> Array:
        """Measure over the curve between points in plan.

        Parameters
        ----------
        start_mm, end_mm
            Shape (..., 2).

        Returns
        -------
        Array
            Shape (...), by Gauss-Legendre quadrature with 24 nodes (exact to 1e-9 mm for any
            board whose radius exceeds its width).

        """
        run = end_mm - start_mm
        flat = np.hypot(run[..., 0], run[..., 1])
        if self.flat:
            return np.asarray(flat)
        share = (_NODES + 1) / 2
        x = start_mm[..., :1] + share * run[..., :1]
        y = start_mm[..., 1:] + share * run[..., 1:]
        radius = self.radius_mm(x)
        root = np.sqrt(radius * radius - y * y)
        _, c1, c2 = self.coefficients
        rise = -y / root * run[..., 1:] + (c1 + 2 * c2 * x) * (radius / root - 1) * run[..., :1]
        return np.asarray(np.hypot(flat[..., None], rise) @ _WEIGHTS / 2)


def shape_top(rule: TopRule, board: BoardShape, strings: StringLines, frets: FretLines) -> Surface:
    """Make the top's surface from the job's radius rule.

    Raises
    ------
    JobError
        When somewhere on the board the radius is no larger than half the width, or two radii
        stand at one place.

    """
    if rule is None:
        return Surface((0.0, 0.0, 0.0), flat=True)
    surface = Surface(_coefficients(rule, board, strings, frets))
    corners = np.concatenate((board.treble.points_mm, board.bass.points_mm))
    radius = surface.radius_mm(corners[:, 0])
    if (radius <= np.abs(corners[:, 1])).any():
        raise _too_small(float(radius.min()))
    return surface


def _too_small(radius_mm: float) -> JobError:
    rule = "the radius must exceed half the board's width everywhere"
    return JobError([Fault("job", None, "board.radius", f"{radius_mm:.6g} mm", rule)])


def _coefficients(
    rule: OneRadius | TwoRadii | ConeAtNut | LevelEdgesAtNut,
    board: BoardShape,
    strings: StringLines,
    frets: FretLines,
) -> tuple[float, float, float]:
    if isinstance(rule, OneRadius):
        return (rule.radius_mm, 0.0, 0.0)
    if isinstance(rule, TwoRadii):
        (x1, r1), (x2, r2) = (
            (
                place_x_mm(
                    place,
                    frets,
                    tail_mm=board.tail_end.at_centre_mm,
                    bridge_mm=strings.bridge_line.at_centre_mm,
                ),
                radius,
            )
            for place, radius in (rule.first, rule.second)
        )
        if x1 == x2:
            rule_said = "the two places must differ"
            raise JobError([Fault("job", None, "board.radius", None, rule_said)])
        grow = (r2 - r1) / (x2 - x1)
        return (r1 - grow * x1, grow, 0.0)
    if isinstance(rule, ConeAtNut):
        full = np.flatnonzero(strings.full)
        first, last = int(full[0]), int(full[-1])
        spread = [strings.y_at(first, x) - strings.y_at(last, x) for x in (0.0, 1.0)]
        if spread[0] <= 0:
            apart = "the cone lies under strings that lie apart at the nut"
            raise JobError([Fault("job", None, "board.radius", "cone_at_nut", apart)])
        return (rule.radius_mm, rule.radius_mm * (spread[1] / spread[0] - 1), 0.0)
    # level edges: R = (w^2/4 + d^2)/(2 d), w = w0 + w1 x the finished width, d the edge drop
    tail = board.tail_end.at_centre_mm
    w0 = board.width_at(0.0)
    w1 = (board.width_at(tail) - w0) / tail
    if rule.radius_mm <= w0 / 2:
        raise _too_small(rule.radius_mm)
    d = rule.radius_mm - float(np.sqrt(rule.radius_mm**2 - w0**2 / 4))
    return ((w0**2 / 4 + d**2) / (2 * d), w0 * w1 / (4 * d), w1**2 / (8 * d))
