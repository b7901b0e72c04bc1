"""How far does each fret miss a string's own stop, and how high do crowns stand on the board?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.geometry.frets import CENTS_PER_NEPER
from layout.plan.model import Plan

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Left:
    """How far each fret meets each string beyond its own divided stop, (S, F), nan where none.

    ``cents`` is the pitch of that step on the bare divided string, sharp positive.
    """

    mm: Array
    cents: Array


def measure_left(plan: Plan) -> Left:
    """Measure every planned stop against the string's own divided place."""
    scale = plan.strings.scale_mm[:, None]
    met = plan.frets.met_mm
    own = np.where(np.isfinite(met), plan.own_mm, np.nan)
    return Left(met - own, CENTS_PER_NEPER * np.log((scale - own) / (scale - met)))


def crown_height_mm(plan: Plan) -> float:
    """Give the height of the crowns over the board: 0 on unfretted boards, nan if not given."""
    if plan.instrument.frets.kind == "lines":
        return 0.0
    height = plan.instrument.wire.crown_height_mm
    return float("nan") if height is None else height
