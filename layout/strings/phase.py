"""At which frequency does a stiff string between two supports sound?

The exact standing-wave condition of a beam under tension between two supports, each of which
shifts the phase of the travelling wave. Exact but for ``exp(-L/h)``, which is under 1e-40 on any
string an instrument carries: no truncated series.

References
----------
N. H. Fletcher and T. D. Rossing, The Physics of Musical Instruments, 2nd ed. (1998), chapter 2: the
stiff string; the phase shifts follow from the same equation with the boundary conditions of
``layout.strings.support``.

"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.errors import NoSolutionError

Array = NDArray[np.float64]

MM_PER_M = 1000.0
BLOCK_ELEMENTS = 8192
"""Elements computed at a time, so that every intermediate array stays in the cache."""
_MOST_STEPS = 30
_SETTLED = 2e-17
"""What may be left of the wave number, as a share of it: under half a unit of the last place."""


def frequency_hz(
    length_mm: ArrayLike,
    *,
    tension_n: ArrayLike,
    unit_mass_kg_per_m: ArrayLike,
    bending_stiffness_n_m2: ArrayLike,
    fixity_1: ArrayLike,
    fixity_2: ArrayLike,
    mode: int = 1,
) -> Array:
    """Return the frequency in hertz of one mode of a stiff string.

    Parameters
    ----------
    length_mm
        Speaking length between the supports, mm.
    tension_n, unit_mass_kg_per_m, bending_stiffness_n_m2
        T above 0, mu above 0, EI 0 or more; an element with EI = 0 is the ideal string.
    fixity_1, fixity_2
        Fixity of each end, 0 to 1.
    mode
        1 is the fundamental.

    Returns
    -------
    Array
        The broadcast shape of everything; nan where the length is nan.

    Raises
    ------
    NoSolutionError
        When the iteration does not settle.

    Examples
    --------
    >>> ends = {"fixity_1": 0.0, "fixity_2": 1.0}
    >>> string = {"tension_n": 72.0, "unit_mass_kg_per_m": 4e-4}
    >>> float(frequency_hz(650.0, bending_stiffness_n_m2=0.0, **string, **ends).round(4))
    326.357
    >>> float(frequency_hz(650.0, bending_stiffness_n_m2=4e-5, **string, **ends).round(4))
    326.7338

    """
    tension, unit_mass = np.asarray(tension_n, dtype=float), np.asarray(unit_mass_kg_per_m)
    bending_length_mm = MM_PER_M * np.sqrt(np.asarray(bending_stiffness_n_m2) / tension)
    wave_number = solve_wave_number(
        length_mm,
        bending_length_mm=bending_length_mm,
        fixity_1=fixity_1,
        fixity_2=fixity_2,
        mode=mode,
    )
    speed_m_per_s = np.sqrt(tension / unit_mass)
    spread = np.sqrt(1.0 + (wave_number * bending_length_mm) ** 2)
    return np.asarray(MM_PER_M / (2.0 * np.pi) * wave_number * speed_m_per_s * spread)


def solve_wave_number(
    length_mm: ArrayLike,
    *,
    bending_length_mm: ArrayLike,
    fixity_1: ArrayLike,
    fixity_2: ArrayLike,
    mode: int = 1,
) -> Array:
    """Solve the phase equation for the travelling wave number, in radians per mm.

    Parameters
    ----------
    length_mm
        Speaking length L, mm; nan gives nan.
    bending_length_mm
        ``h = sqrt(EI/T)``, mm, 0 or more.
    fixity_1, fixity_2
        Fixity of each end, 0 to 1. The same object twice costs half.
    mode
        m = 1 is the fundamental.

    Returns
    -------
    Array
        Wave number a, to machine precision, in the broadcast shape.

    Raises
    ------
    NoSolutionError
        When Newton's method has not settled after 30 steps.

    Notes
    -----
    ``a L - delta_1(a h) - delta_2(a h) = m pi``. Each shift lies from 0 to pi/4, so the root lies
    between ``m pi/L`` and ``(m + 1/2) pi/L``, and the slope there from 0.7 L to L: Newton's method
    cannot leave it. The neglected ``exp(-L/h)`` matters only below about 30 bending lengths.

    Examples
    --------
    >>> a = solve_wave_number(650.0, bending_length_mm=2.0, fixity_1=0.5, fixity_2=0.5)
    >>> float((np.pi / a).round(4))  # one bending length shorter than the string
    648.0003

    """
    length = np.asarray(length_mm, dtype=np.float64)
    bending_length = np.asarray(bending_length_mm, dtype=np.float64)
    first = np.asarray(fixity_1, dtype=np.float64)
    second = first if fixity_2 is fixity_1 else np.asarray(fixity_2, dtype=np.float64)
    shape = np.broadcast_shapes(length.shape, bending_length.shape, first.shape, second.shape)
    if np.prod(shape, dtype=int) <= BLOCK_ELEMENTS:
        found = solve_wave_number_block(length, bending_length, first, second, mode=mode)
        return np.asarray(np.broadcast_to(found, shape))
    pick_length, pick_bending = _flat_part(length, shape), _flat_part(bending_length, shape)
    pick_first = _flat_part(first, shape)
    pick_second = pick_first if second is first else _flat_part(second, shape)
    wave_number = np.empty(shape)
    flat = wave_number.reshape(-1)
    for start in range(0, flat.size, BLOCK_ELEMENTS):
        part = slice(start, start + BLOCK_ELEMENTS)
        part_first = pick_first(part)
        part_second = part_first if second is first else pick_second(part)
        flat[part] = solve_wave_number_block(
            pick_length(part), pick_bending(part), part_first, part_second, mode=mode
        )
    return wave_number


def _flat_part(values: Array, shape: tuple[int, ...]) -> Callable[[slice], Array]:
    if values.ndim == 0:  # one figure for all stays one figure: arithmetic with it is free
        return lambda _: values
    flat = np.broadcast_to(values, shape).reshape(-1)
    return lambda part: flat[part]


def solve_wave_number_block(
    length: Array, bending_length: Array, fixity_1: Array, fixity_2: Array, *, mode: int = 1
) -> Array:
    """Solve one cache-sized block of ``solve_wave_number``; lengths share any one unit."""
    turns = mode * np.pi
    # Legend: a wave number, h bending length, t = a h, L length. The start takes both shifts to
    # third order in t, is kept inside the bracket, and is exact for h = 0.
    reach = np.maximum(
        length - (fixity_1 + fixity_2) * bending_length, length * (mode / (mode + 0.5))
    )
    t = turns * bending_length / reach
    reach += (_third_order(fixity_1) + _third_order(fixity_2)) * bending_length * (t * t)
    a = turns / np.minimum(reach, length)
    for _ in range(_MOST_STEPS):
        t = a * bending_length
        shift, slope = end_phases(t, fixity_1, fixity_2)
        step = (a * length - shift - turns) / (length - bending_length * slope)
        a -= step
        step /= a
        relative = float(np.fmax.reduce(np.abs(step), axis=None, initial=0.0))
        stiffest = float(np.fmax.reduce(t, axis=None, initial=0.0))
        # Newton squares the error; the curvature of the two shifts is under 10 t, which leaves
        # 2 t^3 relative^2. The largest, nan apart, speaks for the block.
        if relative * relative * min(1.0, 2.0 * stiffest**3) <= _SETTLED:
            return a
    raise NoSolutionError(
        "wave number of a stiff string", iterations=_MOST_STEPS, last=float(np.ravel(a)[0])
    )


def _third_order(fixity: Array) -> Array:
    return np.asarray(fixity * (2.0 - 1.5 * fixity + fixity * fixity / 3.0))


def end_phases(t: Array, fixity_1: Array, fixity_2: Array) -> tuple[Array, Array]:
    """Return the two ends' phase shifts together, in radians, and their slope against t.

    Notes
    -----
    Legend: a and b travelling and decaying wave numbers, ``B = sqrt(T/EI) = 1/h``, p fixity,
    ``t = a/B``, ``beta = b/B = sqrt(1 + t^2)``. Each end:
    ``delta = atan(p t/D)``, ``D = (1 - p)(1 + 2 t^2) + p beta``, and
    ``d delta/dt = p ((1 - p)(1 - 2 t^2) + p/beta)/(D^2 + p^2 t^2)``.

    """
    squared = t * t
    beta = np.sqrt(1.0 + squared)
    shift, slope = _end_phase(t, squared, beta, fixity_1)
    if fixity_1 is fixity_2 or (fixity_1.ndim == fixity_2.ndim == 0 and fixity_1 == fixity_2):
        return 2.0 * shift, 2.0 * slope
    other_shift, other_slope = _end_phase(t, squared, beta, fixity_2)
    return shift + other_shift, slope + other_slope


def _end_phase(t: Array, squared: Array, beta: Array, fixity: Array) -> tuple[Array, Array]:
    free = 1.0 - fixity
    across = fixity * t
    along = 2.0 * free * squared + free + fixity * beta
    slope = free - 2.0 * free * squared
    slope += fixity / beta
    slope *= fixity
    slope /= along * along + across * across
    return np.arctan(across / along), slope
