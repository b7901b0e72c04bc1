"""How far do the partials of a stiff string stray from whole multiples of its fundamental?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.strings.phase import frequency_hz
from layout.strings.support import CARRIED, Support, fixity
from layout.strings.tuning import Body

Array = NDArray[np.float64]


def partials_hz(
    body: Body,
    length_mm: ArrayLike,
    *,
    tension_n: ArrayLike,
    modes: Sequence[int],
    ends: tuple[Support, Support] = (CARRIED, CARRIED),
) -> Array:
    """Return the frequencies of the given modes in hertz, shape (..., S, M).

    Parameters
    ----------
    body, length_mm, tension_n
        The strings, shape (..., S), their speaking lengths and tensions.
    modes
        Mode numbers from 1, M of them.
    ends
        What the two ends do to the string.

    Raises
    ------
    NoSolutionError
        When a frequency is not found.

    Examples
    --------
    >>> from layout.strings.stopping import StringBody
    >>> body = StringBody(np.array([4e-4]), np.array([1e4]), np.array([4e-5]))
    >>> partials_hz(body, 650.0, tension_n=72.0, modes=[1, 2, 3]).round(2).tolist()
    [[326.73, 653.48, 980.25]]

    """
    ends_fixity = [
        fixity(end, tension_n=tension_n, bending_stiffness_n_m2=body.bending_stiffness_n_m2)
        for end in ends
    ]
    partials = [
        frequency_hz(
            length_mm,
            tension_n=tension_n,
            unit_mass_kg_per_m=body.unit_mass_kg_per_m,
            bending_stiffness_n_m2=body.bending_stiffness_n_m2,
            fixity_1=ends_fixity[0],
            fixity_2=ends_fixity[1],
            mode=mode,
        )
        for mode in modes
    ]
    return np.stack(partials, axis=-1)


def inharmonicity_cents(
    body: Body,
    length_mm: ArrayLike,
    *,
    tension_n: ArrayLike,
    modes: Sequence[int],
    ends: tuple[Support, Support] = (CARRIED, CARRIED),
) -> Array:
    """Return how sharp each mode m is of m times the fundamental, in cents, shape (..., S, M).

    Parameters and causes of failure are those of `partials_hz`.

    Examples
    --------
    >>> from layout.strings.stopping import StringBody
    >>> body = StringBody(np.array([4e-4]), np.array([1e4]), np.array([4e-5]))
    >>> inharmonicity_cents(body, 650.0, tension_n=72.0, modes=[1, 2, 10]).round(3).tolist()
    [[0.0, 0.034, 1.111]]

    """
    numbers = np.asarray(modes, dtype=float)
    partials = partials_hz(body, length_mm, tension_n=tension_n, modes=[1, *modes], ends=ends)
    return np.asarray(1200.0 * np.log2(partials[..., 1:] / (numbers * partials[..., :1])))
