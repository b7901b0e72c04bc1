"""How far do the strings disagree about each fret, before any wood is cut?"""

from __future__ import annotations

import numpy as np

from layout.geometry.frets import CENTS_PER_NEPER, divide_mm
from layout.plan.laying import Laid
from layout.plan.model import Clash


def measure_clash(laid: Laid) -> tuple[Clash, ...]:
    """Measure each fret's spread over the strings it serves, in cents and millimetres.

    The spread in cents is between the flattest and the sharpest target, counted from the nut
    line for a short string too; in millimetres between the outermost divided places on the scale
    of the centre line.
    """
    strings = laid.strings
    centre_mm = np.array([strings.bridge_line.at_centre_mm])
    lane_mm = -strings.nut_line.distance_along(strings.bridge_mm, strings.direction)
    skipped = CENTS_PER_NEPER * np.log(lane_mm / strings.scale_mm)
    clashes = []
    for fret in range(laid.target_cents.shape[1]):
        served = laid.served[:, fret]
        cents = (laid.target_cents[:, fret] + skipped)[served]
        places = divide_mm(centre_mm, cents[None, :])
        clashes.append(Clash(fret + 1, float(np.ptp(cents)), float(np.ptp(places))))
    return tuple(clashes)
