"""How much faster are whole stops on arrays than one by one with a bracketing root finder?

Run it: ``python tests/bench/bench_stops.py``. Prints ratios of time, not seconds to rely on, and
the largest relative difference between the two ways.
"""

from __future__ import annotations

import json
import math
import time

import numpy as np
from scipy.optimize import brentq

from layout.strings.stopping import StringBody, StringLie, predict_stops

STOPS = 24
ROUNDS = 6945  # x 6 strings x 24 stops: a little over a million pitches
SLOW_PITCHES = 2000
SCALE_MM, BEHIND_MM, RELIEF_MM = 650.0, 8.0, 0.1
RELIEF_FROM_MM, RELIEF_TO_MM = (SCALE_MM * (1 - 2 ** (-k / 12)) for k in (1, 14))
HZ = np.array([329.63, 246.94, 196.0, 146.83, 110.0, 82.41])
MASS = np.array([0.374, 0.505, 0.836, 1.920, 3.289, 5.470]) / 1000.0
BODY = StringBody(
    MASS,
    np.array([3306.0, 2532.0, 3176.0, 3220.0, 3278.0, 3655.0]),
    np.array([1.05e-4, 1.06e-4, 2.07e-4, 1.09e-4, 1.62e-4, 2.73e-4]),
)
LIE = StringLie(
    open_hz=HZ,
    scale_mm=SCALE_MM,
    height_at_nut_mm=1.0,
    height_at_saddle_mm=5.0,
    finger_behind_mm=BEHIND_MM,
    relief_mm=RELIEF_MM,
    relief_from_mm=RELIEF_FROM_MM,
    relief_to_mm=RELIEF_TO_MM,
)


def slow_cents(stop, *, shift, setback, tension, string):
    """One whole stop with `math` and `brentq`; the open tension is given."""
    saddle_x, saddle_z, nut_z = SCALE_MM + setback, 5.0, 1.0
    board = 0.0
    if RELIEF_FROM_MM < stop < RELIEF_TO_MM:
        board = -4 * RELIEF_MM * (stop - RELIEF_FROM_MM) * (RELIEF_TO_MM - stop)
        board /= (RELIEF_TO_MM - RELIEF_FROM_MM) ** 2
    back = min(BEHIND_MM, (stop - shift) / 2)
    dip = back * (saddle_z - board) / (saddle_x - stop)
    sounding = math.hypot(saddle_x - stop, saddle_z - board)
    path = sounding + math.hypot(back, dip) + math.hypot(stop - back - shift, board - dip - nut_z)
    open_path = math.hypot(saddle_x - shift, saddle_z - nut_z)
    stretch = (path - open_path) / open_path
    tension = tension + string["axial"] * stretch
    length, bending = sounding / 1000.0, string["bending"]
    straight = tension / bending
    root = math.sqrt(straight)

    def closing(a):
        b = math.sqrt(a * a + straight)
        shift_ = math.atan2(0.5 * root * a, 0.5 * (a * a + b * b) + 0.5 * root * b)
        return a * length - 2.0 * shift_ - math.pi

    a = brentq(closing, math.pi / length, 1.5 * math.pi / length, xtol=1e-15, rtol=1e-15)
    mass = string["mass"] / (1 + stretch)
    hz = math.sqrt(bending / mass) * a * math.sqrt(a * a + straight) / (2 * math.pi)
    return 1200 * math.log2(hz / string["hz"])


def measure():
    """Time both ways on the same stops; nut, saddle and stops all vary."""
    rng = np.random.default_rng(20)
    divided = SCALE_MM * (1 - 2 ** (-np.arange(1, STOPS + 1) / 12))
    stops = divided + rng.normal(0.0, 0.1, (ROUNDS, 6, STOPS))
    shift = rng.uniform(0.0, 0.5, (ROUNDS, 6))
    setback = rng.uniform(0.0, 3.0, (ROUNDS, 6))
    fast = []
    for _ in range(5):
        begun = time.perf_counter()
        found = predict_stops(BODY, LIE, stops, nut_shift_mm=shift, setback_mm=setback)
        fast.append((time.perf_counter() - begun) / stops.size)
    strings = [
        {"axial": axial, "bending": bending, "mass": mass, "hz": hz}
        for axial, bending, mass, hz in zip(
            BODY.axial_stiffness_n.tolist(),
            BODY.bending_stiffness_n_m2.tolist(),
            MASS.tolist(),
            HZ.tolist(),
            strict=True,
        )
    ]
    places = [np.unravel_index(i, stops.shape) for i in range(SLOW_PITCHES)]
    cases = [
        (
            float(stops[place]),
            {
                "shift": float(shift[place[:2]]),
                "setback": float(setback[place[:2]]),
                "tension": float(found.tension_open_n[place[:2]]),
                "string": strings[int(place[1])],
            },
        )
        for place in places
    ]
    begun = time.perf_counter()
    one_by_one = [slow_cents(stop, **rest) for stop, rest in cases]
    slow = (time.perf_counter() - begun) / SLOW_PITCHES
    quick = found.cents.reshape(-1)[:SLOW_PITCHES]
    return {
        "pitches": int(stops.size),
        "microseconds_a_pitch": 1e6 * float(np.median(fast)),
        "one_by_one_microseconds": 1e6 * slow,
        "ratio": slow / float(np.median(fast)),
        "largest_relative_difference": float(np.max(np.abs(quick / np.array(one_by_one) - 1))),
    }


if __name__ == "__main__":
    print(json.dumps(measure(), indent=1))
