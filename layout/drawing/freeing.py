"""Which path cuts a part free: its own outline, or one half a kerf outside it?"""

from __future__ import annotations

import numpy as np

from layout.drawing.legend import offsets_lines
from layout.drawing.shapes import Outline
from layout.geometry.kerf import offset_outward
from layout.plan.model import Plan

LARGEST_RATIO = 5.0
"""Of the two kerfs beside round edges; more uneven beams are not offset there."""


def cut_free(plan: Plan, outline: Outline) -> Outline:
    """Give the path that leaves a part of this outline: moved out by half the kerf when asked.

    The same outline comes back, unchanged, where lines are nominal.
    """
    tooling = plan.instrument.tooling
    if tooling is None or tooling.kerf_mm is None or not offsets_lines(plan):
        return outline
    kerf_x, kerf_y = tooling.kerf_mm
    if any(outline.bulges) and max(kerf_x, kerf_y) > LARGEST_RATIO * min(kerf_x, kerf_y):
        return outline
    path = offset_outward(
        np.array(outline.vertices), outline.bulges, kerf_x_mm=kerf_x, kerf_y_mm=kerf_y
    )
    vertices = tuple((float(x), float(y)) for x, y in path.points_mm)
    return Outline(outline.layer, vertices, path.bulges if any(path.bulges) else ())
