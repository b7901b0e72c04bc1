"""How high do the strings run over the crowns, and where does the finger press them?

x runs along the string from the nut line, z over the plane of the crowns (over the board where
there are no frets).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.strings.support import CARRIED, Support

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class StringLie:
    """How the strings run over the stops, and how they are stopped.

    Attributes
    ----------
    open_hz, scale_mm
        Frequency of the open note, and the scale, of each string; shape (S,) or one for all.
    height_at_nut_mm, height_at_saddle_mm
        Over the plane of the crowns at x = 0 and x = scale; they stay when nut or saddle move.
    relief_mm
        Depth of the board's hollow midway between its ends; 0 for none.
    relief_from_mm, relief_to_mm
        Divided places of fret 1 and of the joint fret on each string; nan, or the first not below
        the second: no relief on that string.
    finger_behind_mm, finger_press_mm
        Where the finger presses: so far behind the stop, and so much below the string's own line.
        A published trial found the string locked on the stop once it touches, so the usual press
        is 0; with free slip 0.5 mm would add 1 to 11 cents.
    free_mm
        Further length, past nut and saddle, that shares the stretch; 0: locked at both.
    nut, stop, saddle
        What each end does to a stiff string.

    """

    open_hz: ArrayLike
    scale_mm: ArrayLike
    height_at_nut_mm: ArrayLike
    height_at_saddle_mm: ArrayLike
    finger_behind_mm: float
    finger_press_mm: float = 0.0
    relief_mm: float = 0.0
    relief_from_mm: ArrayLike = np.nan
    relief_to_mm: ArrayLike = np.nan
    free_mm: float = 0.0
    nut: Support = CARRIED
    stop: Support = CARRIED
    saddle: Support = CARRIED


def relief_height_mm(lie: StringLie, x_mm: ArrayLike) -> Array:
    """Return the height in mm of the hollowed board at x, 0 or below; x of shape (..., S, F).

    Examples
    --------
    >>> lie = StringLie(open_hz=[110.0], scale_mm=[650.0], height_at_nut_mm=[0.5],
    ...                 height_at_saddle_mm=[3.0], finger_behind_mm=8.0, relief_mm=0.2,
    ...                 relief_from_mm=[40.0], relief_to_mm=[360.0])
    >>> relief_height_mm(lie, [[40.0, 200.0, 360.0, 500.0]]).round(9).tolist()
    [[-0.0, -0.2, -0.0, -0.0]]

    """
    return hollow_mm(
        np.asarray(x_mm, dtype=float),
        lie.relief_mm,
        from_mm=np.asarray(lie.relief_from_mm, dtype=float)[..., None],
        to_mm=np.asarray(lie.relief_to_mm, dtype=float)[..., None],
    )


def heights_from_gaps(
    scale_mm: ArrayLike,
    *,
    places_mm: tuple[ArrayLike, ArrayLike],
    gaps_mm: tuple[ArrayLike, ArrayLike],
    relief_mm: float = 0.0,
    relief_from_mm: ArrayLike = np.nan,
    relief_to_mm: ArrayLike = np.nan,
) -> tuple[Array, Array]:
    """Return the strings' heights in mm at nut and saddle from the gaps at two crowns.

    Parameters
    ----------
    scale_mm
        Scale of each string, shape (S,).
    places_mm, gaps_mm
        Divided places of the two stops on each string, and the gap between string and crown there;
        each a pair of arrays of shape (S,) or single figures.
    relief_mm, relief_from_mm, relief_to_mm
        As in `StringLie`.

    Returns
    -------
    tuple[Array, Array]
        Heights at x = 0 and at x = scale over the plane of the crowns, shape (S,).

    Raises
    ------
    ValueError
        When the two places coincide on a string.

    Examples
    --------
    >>> nut, saddle = heights_from_gaps([640.0], places_mm=([40.0], [320.0]),
    ...                                 gaps_mm=(0.4, 1.8))
    >>> nut.round(9).tolist(), saddle.round(9).tolist()
    ([0.2], [3.4])

    """
    first_at, second_at = (np.asarray(place, dtype=float) for place in places_mm)
    if (first_at == second_at).any():
        raise ValueError("the two action gaps are given at the same place")
    ends_mm = (np.asarray(relief_from_mm, dtype=float), np.asarray(relief_to_mm, dtype=float))
    first, second = (
        hollow_mm(place, relief_mm, from_mm=ends_mm[0], to_mm=ends_mm[1]) + np.asarray(gap)
        for place, gap in ((first_at, gaps_mm[0]), (second_at, gaps_mm[1]))
    )
    slope = (second - first) / (second_at - first_at)
    at_nut = first - slope * first_at
    return at_nut, at_nut + slope * np.asarray(scale_mm, dtype=float)


def hollow_mm(x_mm: Array, relief_mm: float, *, from_mm: Array, to_mm: Array) -> Array:
    """Return the height in mm of a hollowed board at x: a parabola, 0 at both ends and outside.

    Parameters
    ----------
    x_mm
        Places along the string.
    relief_mm
        Depth midway, 0 for a straight board.
    from_mm, to_mm
        Ends of the hollow, broadcast against x; nan or the first not below the second: none.

    Examples
    --------
    >>> x = np.array([40.0, 200.0, 500.0])
    >>> hollow_mm(x, 0.2, from_mm=np.array(40.0), to_mm=np.array(360.0)).tolist()
    [-0.0, -0.2, -0.0]

    """
    hollowed = from_mm < to_mm
    start_mm = np.where(hollowed, from_mm, 0.0)
    span_mm = np.where(hollowed, to_mm - from_mm, np.inf)
    along = (x_mm - start_mm) / span_mm
    return np.asarray(-4.0 * relief_mm * np.maximum(along * (1.0 - along), 0.0))
