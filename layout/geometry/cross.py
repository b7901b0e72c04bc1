"""What is a line across the board, and where do strings and edges meet it?"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class CrossLine:
    """A line across the board: nut line, bridge line, a fret, the tail.

    Attributes
    ----------
    at_centre_mm
        x where the line crosses the centre line.
    slope
        Millimetres toward the bridge for each millimetre toward the treble side.

    """

    at_centre_mm: float
    slope: float = 0.0

    @property
    def angle(self) -> float:
        """Angle off square in radians, + when the treble end is nearer the bridge."""
        return math.atan(self.slope)

    def x_at(self, y_mm: ArrayLike) -> Array:
        """Give x at a distance from the centre line, same shape as ``y_mm``."""
        return self.at_centre_mm + self.slope * np.asarray(y_mm, float)

    def moved(self, along_mm: float) -> CrossLine:
        """Give the parallel line ``along_mm`` further along the centre line."""
        return CrossLine(self.at_centre_mm + along_mm, self.slope)

    def moved_square(self, distance_mm: float) -> CrossLine:
        """Give the parallel line ``distance_mm`` further, measured square to the line."""
        return self.moved(distance_mm * math.hypot(1.0, self.slope))

    def distance_along(self, start_mm: Array, direction: Array) -> Array:
        """Measure from points along unit directions to this line, in mm.

        Parameters
        ----------
        start_mm, direction
            Shape (n, 2): where each ray starts and its unit direction.

        Returns
        -------
        Array
            Shape (n,), + in the ray's direction.

        """
        gap = self.at_centre_mm + self.slope * start_mm[:, 1] - start_mm[:, 0]
        return np.asarray(gap / (direction[:, 0] - self.slope * direction[:, 1]))


def line_through(first_mm: ArrayLike, second_mm: ArrayLike) -> CrossLine:
    """Give the line across the board through two points of different y.

    >>> line_through((6.0, 18.0), (-6.0, -18.0))
    CrossLine(at_centre_mm=0.0, slope=0.3333333333333333)
    """
    (x1, y1), (x2, y2) = np.asarray(first_mm, float), np.asarray(second_mm, float)
    slope = (x1 - x2) / (y1 - y2)
    return CrossLine(float(x1 - slope * y1), float(slope))
