"""What share of its breaking load does a steel string or core carry?

References
----------
Minimum tensile strength of music wire to ASTM A228, as tabulated by a wire merchant; a share of
it is a comparison between strings, never a promise that a string is safe.

"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.units import MM_PER_INCH

PA_PER_KSI = 6.8948e6
"""1000 pound-force per square inch, in pascal, to five digits."""

# Diameter in inch, and least strength in ksi (thousand pound-force per square inch).
_MINIMUM_STRENGTH = (
    (0.008, 399.0),
    (0.009, 393.0),
    (0.010, 387.0),
    (0.011, 382.0),
    (0.012, 377.0),
    (0.013, 373.0),
    (0.014, 369.0),
    (0.016, 362.0),
    (0.018, 356.0),
    (0.020, 350.0),
    (0.024, 341.0),
    (0.030, 330.0),
    (0.040, 315.0),
    (0.051, 303.0),
)
_DIAMETER_IN, _MINIMUM_KSI = np.array(_MINIMUM_STRENGTH).T
_SQUARE_MM_PER_SQUARE_M = 1e6


def minimum_strength_pa(diameter_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the least tensile strength of music wire in pascal.

    Parameters
    ----------
    diameter_mm
        Diameter, above 0, any shape; linear in its logarithm between the tabulated ones, the end
        values outside (0.203 to 1.295 mm).

    Examples
    --------
    >>> (minimum_strength_pa([0.1, 0.254, 2.0]) / 1e6).round(1).tolist()
    [2751.0, 2668.3, 2089.1]

    """
    ln_diameter = np.log(np.asarray(diameter_mm, dtype=float) / MM_PER_INCH)
    ksi = np.interp(ln_diameter, np.log(_DIAMETER_IN), _MINIMUM_KSI)
    return np.asarray(ksi * PA_PER_KSI)


def share_of_break(tension_n: ArrayLike, core_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the tension as a share of the least breaking load of a steel wire or core.

    Parameters
    ----------
    tension_n, core_mm
        Tension, and the diameter that carries it; broadcast together; nan gives nan.

    Examples
    --------
    >>> float(share_of_break(72.12, 0.254).round(3))
    0.533

    """
    core = np.asarray(core_mm, dtype=float)
    area_mm2 = np.pi / 4.0 * core * core
    breaking_n = minimum_strength_pa(core) * area_mm2 / _SQUARE_MM_PER_SQUARE_M
    return np.asarray(np.asarray(tension_n, dtype=float) / breaking_n)
