"""How deep is each slot, below the finished top and below the flat top it may be cut in?

The floor lies the tang's depth and the clearance below the top at the slot's shallowest point.
A flat floor is level; one that follows keeps its depth below the curve all along.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from layout.geometry.surface import Surface

Array = NDArray[np.float64]

FLOOR_SAGITTA_MM = 0.005
"""How far a drawn floor may lie from its curve (geometry page, Slots)."""


@dataclass(frozen=True, slots=True)
class SlotFloor:
    """The floor of one slot.

    Attributes
    ----------
    at_centre_mm
        Depth on the centre line; there the finished and the flat top agree.
    at_ends_mm
        Depth below the finished top at the slot's treble and bass end.
    below_flat_mm
        Greatest depth below the flat top, for those who slot before they radius.
    lowest_mm
        z of the deepest point of the floor, below 0.
    points_mm
        Shape (n, 3): the floor as a chain, bass end first.

    """

    at_centre_mm: float
    at_ends_mm: tuple[float, float]
    below_flat_mm: float
    lowest_mm: float
    points_mm: Array


def sink_floor(
    surface: Surface,
    treble_mm: Array,
    bass_mm: Array,
    *,
    depth_mm: float,
    floor: Literal["flat", "follow"],
) -> SlotFloor:
    """Sink one slot so that its shallowest point is ``depth_mm`` below the finished top.

    Parameters
    ----------
    surface
        The finished top.
    treble_mm, bass_mm
        Shape (2,): ends of the slot in the wood.
    depth_mm
        Tang depth and clearance together.
    floor
        ``flat`` is level; ``follow`` runs parallel to the top, drawn within 0.005 mm of it.

    """
    ends = np.stack((bass_mm, treble_mm))
    tops = surface.height_mm(ends[:, 0], ends[:, 1])
    if floor == "flat":
        level = float(tops.min()) - depth_mm
        points = np.column_stack((ends, (level, level)))
        at_bass, at_treble = (float(top) - level for top in tops)
        centre = -level
    else:
        points = _along_curve(surface, bass_mm, treble_mm, depth_mm=depth_mm)
        at_bass = at_treble = centre = depth_mm
    lowest = float(points[:, 2].min())
    return SlotFloor(centre, (at_treble, at_bass), -lowest, lowest, points)


def _along_curve(surface: Surface, start: Array, end: Array, *, depth_mm: float) -> Array:
    """Halve the steps until every chord's middle lies within the sagitta of the curve."""
    count = 1 if surface.flat else 2
    while True:
        share = np.linspace(0.0, 1.0, count + 1)[:, None]
        plan = start + share * (end - start)
        tops = surface.height_mm(plan[:, 0], plan[:, 1])
        middle = (plan[1:] + plan[:-1]) / 2
        sag = surface.height_mm(middle[:, 0], middle[:, 1]) - (tops[1:] + tops[:-1]) / 2
        if np.max(np.abs(sag)) <= FLOOR_SAGITTA_MM / 2:
            return np.column_stack((plan, tops - depth_mm))
        count *= 2
