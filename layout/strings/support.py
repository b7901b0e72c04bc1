"""What does a support do to a stiff string: how firmly does it hold the string's slope?

A support is a rotational spring. Its *fixity* p runs from 0 (hinged) over 1/2 (carried: the string
runs on over the support, as over every nut, fret and saddle) to 1 (clamped); the spring is
``K = p/(1 - p) sqrt(EI T)``.

References
----------
S. P. Timoshenko and J. M. Gere, Theory of Elastic Stability (1961): the beam under tension, whose
slope at a loaded end gives the rotational stiffness of a clamped tail.

"""

from __future__ import annotations

from dataclasses import dataclass
from math import factorial

import numpy as np
from numpy.typing import ArrayLike, NDArray

MM_PER_M = 1000.0


@dataclass(frozen=True, slots=True)
class Fixity:
    """An end's rotational fixity: 0 hinged, 1/2 carried, 1 clamped."""

    value: float


@dataclass(frozen=True, slots=True)
class Tail:
    """An end where the string runs on for so long and is then clamped."""

    length_mm: float


Support = Fixity | Tail
HINGED = Fixity(0.0)
CARRIED = Fixity(0.5)
CLAMPED = Fixity(1.0)

_SERIES_BELOW = 2.0
"""Tails shorter than this many bending lengths are summed as a series of positive terms."""
_LONGEST_TAIL = 1e18
"""In bending lengths; beyond it p is 1/2 to the last digit."""
# N/u^3 and D/u^4 of the tail formula in powers of u^2; all terms are positive, so nothing cancels,
# and below the switch the first term left out is under 1e-17 of the sum.
_NUMERATOR = tuple(2 * j / factorial(2 * j + 1) for j in range(1, 15))
_DENOMINATOR = tuple((2 * j - 2) / factorial(2 * j) for j in range(2, 16))


def fixity(
    support: Support, *, tension_n: ArrayLike, bending_stiffness_n_m2: ArrayLike
) -> NDArray[np.float64]:
    """Return the fixity p of a support, a pure number from 0 to 1.

    Parameters
    ----------
    support
        A stated fixity, or a tail.
    tension_n
        Tension at hand in newton, above 0, any shape.
    bending_stiffness_n_m2
        EI in N m2, 0 or more, broadcast against the tension.

    Returns
    -------
    NDArray[np.float64]
        Zero-dimensional for a stated fixity; for a tail the broadcast shape.

    Notes
    -----
    With the bending length ``h = sqrt(EI/T)`` and a tail of u bending lengths,
    ``k = (u cosh u - sinh u)/(u sinh u - 2 cosh u + 2)`` and ``p = k/(1 + k)``. Numerator and
    denominator are taken times ``2 exp(-u)`` with ``expm1``, so nothing overflows. A string
    without bending stiffness gives 1/2.

    Examples
    --------
    >>> float(fixity(CARRIED, tension_n=70.0, bending_stiffness_n_m2=4e-5))
    0.5
    >>> p = fixity(Tail(4.0), tension_n=[72.7, 73.6], bending_stiffness_n_m2=[4.2e-5, 3.5e-4])
    >>> p.round(4).tolist()
    [0.5649, 0.7072]

    """
    if isinstance(support, Fixity):
        return np.asarray(support.value, dtype=np.float64)
    tension, bending = np.broadcast_arrays(
        np.asarray(tension_n, dtype=np.float64), np.asarray(bending_stiffness_n_m2, dtype=float)
    )
    bending_length_mm = MM_PER_M * np.sqrt(bending / tension)
    if support.length_mm == 0.0:
        return np.ones_like(bending_length_mm)
    shortest_mm = support.length_mm / _LONGEST_TAIL
    return tail_fixity(support.length_mm / np.maximum(bending_length_mm, shortest_mm))


def tail_fixity(tail_in_bending_lengths: ArrayLike) -> NDArray[np.float64]:
    """Return the fixity of a tail of u bending lengths, 1 at u = 0, falling to 1/2.

    Examples
    --------
    >>> tail_fixity([0.0, 1.0, 10.0, 1e8]).round(6).tolist()
    [1.0, 0.80513, 0.529406, 0.5]

    """
    u = np.asarray(tail_in_bending_lengths, dtype=np.float64)
    short = np.minimum(u, _SERIES_BELOW)
    squared = short * short
    short_numerator = _power_sum(_NUMERATOR, squared)
    short_denominator = short * _power_sum(_DENOMINATOR, squared)
    long = np.maximum(u, _SERIES_BELOW)
    gone = -np.expm1(-long)  # 1 - exp(-u)
    gone_twice = -np.expm1(-2.0 * long)  # 1 - exp(-2 u)
    long_numerator = long * (2.0 - gone_twice) - gone_twice
    long_denominator = long * gone_twice - 2.0 * gone * gone
    numerator = np.where(u < _SERIES_BELOW, short_numerator, long_numerator)
    denominator = np.where(u < _SERIES_BELOW, short_denominator, long_denominator)
    return np.asarray(numerator / (numerator + denominator), dtype=np.float64)


def _power_sum(coefficients: tuple[float, ...], x: NDArray[np.float64]) -> NDArray[np.float64]:
    total = np.zeros_like(x)
    for coefficient in reversed(coefficients):
        total = total * x + coefficient
    return total
