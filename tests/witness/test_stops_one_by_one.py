"""Whole stops, from geometry to cents, one by one with scipy's bracketing root finder."""

from math import atan2, cosh, hypot, log2, pi, sinh, sqrt

import numpy as np
from scipy.optimize import brentq

from layout.strings.stopping import StringBody, StringLie, predict_stops
from layout.strings.support import CARRIED, CLAMPED, HINGED, Tail

HZ = [329.63, 246.94, 110.0, 82.41]
MASS = [0.374e-3, 0.505e-3, 3.289e-3, 5.470e-3]
AXIAL = [3306.0, 2532.0, 3278.0, 3655.0]
BENDING = [1.05e-4, 1.06e-4, 1.6e-4, 2.7e-4]
SCALE = [650.0, 652.0, 668.0, 676.0]
AT_NUT, AT_SADDLE = [0.6, 0.6, 0.7, 0.8], [4.6, 4.9, 5.6, 6.0]
RELIEF, PRESS, BEHIND, FREE = 0.15, 0.2, 8.0, 60.0
SHIFT, SETBACK = [0.3, 0.0, 0.4, 0.5], [1.5, 1.7, -0.4, 2.6]


def slow_fixity(support, tension, bending):
    if not isinstance(support, Tail):
        return support.value
    if bending == 0.0:
        return 0.5
    u = support.length_mm / 1000.0 / sqrt(bending / tension)
    k = (u * cosh(u) - sinh(u)) / (u * sinh(u) - 2 * cosh(u) + 2)
    return k / (1 + k)


def slow_hz(length_mm, *, tension, mass, bending, ends):
    length = length_mm / 1000.0
    if bending == 0.0:
        return sqrt(tension / mass) / (2.0 * length)
    big = sqrt(tension / bending)
    fixities = [slow_fixity(end, tension, bending) for end in ends]

    def closing(a):
        b = sqrt(a * a + tension / bending)
        shifts = sum(atan2(p * big * a, (1 - p) * (a * a + b * b) + p * big * b) for p in fixities)
        return a * length - shifts - pi

    a = brentq(closing, pi / length * (1 - 1e-9), 1.5 * pi / length, xtol=1e-15, rtol=1e-15)
    return sqrt(bending / mass) * a * sqrt(a * a + tension / bending) / (2.0 * pi)


def slow_board(s, x):
    first, last = SCALE[s] * (1 - 2 ** (-1 / 12)), SCALE[s] * (1 - 2 ** (-14 / 12))
    if x <= first or x >= last:
        return 0.0
    return -4 * RELIEF * (x - first) * (last - x) / (last - first) ** 2


def slow_cents(s, stop, *, bending, ends):
    nut, saddle = (SHIFT[s], AT_NUT[s]), (SCALE[s] + SETBACK[s], AT_SADDLE[s])
    open_length = hypot(saddle[0] - nut[0], saddle[1] - nut[1])
    tension = brentq(
        lambda newton: (
            slow_hz(
                open_length, tension=newton, mass=MASS[s], bending=bending, ends=(ends[0], ends[2])
            )
            - HZ[s]
        ),
        20.0,
        200.0,
        xtol=1e-13,
        rtol=1e-15,
    )
    crown = (stop, slow_board(s, stop))
    back = min(BEHIND, (stop - nut[0]) / 2)
    slope = (saddle[1] - crown[1]) / (saddle[0] - stop)
    finger = (stop - back, crown[1] - back * slope - PRESS)
    sounding = hypot(saddle[0] - crown[0], saddle[1] - crown[1])
    whole = (
        sounding
        + hypot(crown[0] - finger[0], crown[1] - finger[1])
        + hypot(finger[0] - nut[0], finger[1] - nut[1])
        + FREE
    )
    stretch = (whole - open_length - FREE) / (open_length + FREE)
    stopped_hz = slow_hz(
        sounding,
        tension=tension + AXIAL[s] * stretch,
        mass=MASS[s] / (1 + stretch),
        bending=bending,
        ends=ends[1:],
    )
    return 1200 * log2(stopped_hz / HZ[s])


def lie(ends):
    return StringLie(
        open_hz=HZ,
        scale_mm=SCALE,
        height_at_nut_mm=AT_NUT,
        height_at_saddle_mm=AT_SADDLE,
        finger_behind_mm=BEHIND,
        finger_press_mm=PRESS,
        relief_mm=RELIEF,
        relief_from_mm=np.array(SCALE) * (1 - 2 ** (-1 / 12)),
        relief_to_mm=np.array(SCALE) * (1 - 2 ** (-14 / 12)),
        free_mm=FREE,
        nut=ends[0],
        stop=ends[1],
        saddle=ends[2],
    )


ENDS = [
    (CARRIED, CARRIED, CARRIED),
    (HINGED, HINGED, CLAMPED),
    (CARRIED, Tail(8.0), CARRIED),
    (Tail(30.0), Tail(5.0), Tail(12.0)),
]


def compare(ends, bending):
    stops = np.array(SCALE)[:, None] * (1 - 2 ** (-np.array([1, 2, 5, 9, 12, 14, 19, 24]) / 12))
    body = StringBody(np.array(MASS), np.array(AXIAL), np.array(bending))
    found = predict_stops(body, lie(ends), stops, nut_shift_mm=SHIFT, setback_mm=SETBACK).cents
    slow = [
        [slow_cents(s, stop, bending=bending[s], ends=ends) for stop in stops[s]] for s in range(4)
    ]
    np.testing.assert_allclose(found, slow, rtol=0, atol=1e-9)


def test_default_ends():
    compare(ENDS[0], BENDING)


def test_ends_that_differ():
    compare(ENDS[1], BENDING)


def test_a_tail_behind_the_stop():
    compare(ENDS[2], BENDING)


def test_tails_everywhere():
    compare(ENDS[3], BENDING)


def test_ideal_strings_among_stiff_ones():
    compare(ENDS[0], [0.0, 1.06e-4, 0.0, 2.7e-4])
