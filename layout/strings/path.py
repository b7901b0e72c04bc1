"""How long is the path of a string, and of its sounding part, when it is stopped?

Plane geometry of one string: x from the nut line, z over the plane of the crowns, any one unit.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def stopped_path_mm(
    stop: tuple[Array, Array | float],
    *,
    nut: tuple[Array, Array],
    saddle: tuple[Array, Array],
    behind: float,
    press: float,
) -> tuple[Array, Array]:
    """Return the sounding length and the whole length from saddle to nut in mm, stopped.

    Parameters
    ----------
    stop, nut, saddle
        x and z of each point; the stop between the two others.
    behind
        Distance of the finger behind the stop; at most half way to the nut is used.
    press
        How far the finger presses the string below its own straight line from the saddle.

    Returns
    -------
    tuple[Array, Array]
        ``|SC|`` and ``|SC| + |CD| + |DN|``.

    Examples
    --------
    >>> at = [np.array(x) for x in (0.0, 300.0, 700.0)]
    >>> sounding, whole = stopped_path_mm((at[1], 0.0), nut=(at[0], np.array(0.0)),
    ...     saddle=(at[2], np.array(300.0)), behind=0.0, press=0.0)
    >>> float(sounding), float(whole)
    (500.0, 800.0)

    """
    run = saddle[0] - stop[0]
    rise = saddle[1] - stop[1]
    sounding = np.sqrt(run * run + rise * rise)
    to_nut = stop[0] - nut[0]
    if behind == 0.0 and press == 0.0:
        fall = stop[1] - nut[1]
        return sounding, sounding + np.sqrt(to_nut * to_nut + fall * fall)
    back = np.minimum(behind, 0.5 * to_nut)
    if press == 0.0:
        dip = back * rise / run
        to_finger = sounding * (back / run)
    else:
        dip = back * rise / run + press
        to_finger = np.sqrt(back * back + dip * dip)
    to_nut -= back
    fall = stop[1] - nut[1] - dip
    return sounding, sounding + to_finger + np.sqrt(to_nut * to_nut + fall * fall)
