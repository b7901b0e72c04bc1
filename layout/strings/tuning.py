"""Which tension tunes an open string to its note, its stiffness and its ends included?"""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.errors import NoSolutionError
from layout.strings.phase import end_phases
from layout.strings.support import Support, fixity

Array = NDArray[np.float64]

MM_PER_M = 1000.0
_MOST_STEPS = 60
_SETTLED = 1e-13
"""In ln T; the step after it would be below the last place, tails included."""
_LONGEST_STEP = 2.0
"""In ln T; keeps a string that is too stiff for its note from running off at once."""


class Body(Protocol):
    """What tuning asks of a string: mass per length and bending stiffness, shape (..., S)."""

    @property
    def unit_mass_kg_per_m(self) -> Array:
        """Mass per length of the string as tuned."""

    @property
    def bending_stiffness_n_m2(self) -> Array:
        """Bending stiffness EI."""


def solve_open_tension_n(
    body: Body, hz: ArrayLike, length_mm: ArrayLike, *, nut: Support, saddle: Support
) -> Array:
    """Solve for the tension in newton at which the open string sounds its note.

    Parameters
    ----------
    body
        Unit mass and bending stiffness, shape (..., S).
    hz
        The note's frequency, broadcast against the body.
    length_mm
        Sounding length of the open string, mm, broadcast likewise.
    nut, saddle
        The two ends.

    Returns
    -------
    Array
        Tension, to machine precision, in the broadcast shape.

    Raises
    ------
    NoSolutionError
        When no tension does it: a string sounds higher than its note by stiffness alone. The
        message counts the strings along the last axis from 1.

    Notes
    -----
    With the frequency known the wave number follows from the tension in closed form, so the phase
    equation is one equation in ln T: ``t^2 (1 + t^2) = EI mu omega^2/T^2`` and
    ``d a/d ln T = -a/(2 (1 + 2 t^2))``.

    Examples
    --------
    >>> from layout.strings.stopping import StringBody
    >>> from layout.strings.support import CARRIED
    >>> body = StringBody(np.array([0.39555e-3]), np.array([1e4]), np.array([0.0]))
    >>> solve_open_tension_n(body, 329.6276, 647.7, nut=CARRIED, saddle=CARRIED).round(2)
    array([72.12])

    """
    unit_mass = np.asarray(body.unit_mass_kg_per_m, dtype=float)
    bending = np.asarray(body.bending_stiffness_n_m2, dtype=float)
    angular = 2.0 * np.pi * np.asarray(hz, dtype=float)
    length = np.asarray(length_mm, dtype=float) / MM_PER_M
    momentum = unit_mass * angular * angular  # mu omega^2
    tension = momentum * (length / np.pi) ** 2
    ideal = tension
    step = np.full(np.shape(tension), np.inf)
    for _ in range(_MOST_STEPS):
        step = _tension_step(
            tension, momentum=momentum, bending=bending, length=length, ends=(nut, saddle)
        )
        tension = tension * np.exp(step)
        if not (np.abs(step) > _SETTLED).any():
            return np.asarray(tension)
    raise _too_stiff(step, tension, ideal)


def _too_stiff(step: Array, tension: Array, ideal: Array) -> NoSolutionError:
    """Name the strings that did not settle by their places along the last axis, from 1.

    A string asked about alone is not counted: its caller knows which it is.
    """
    size = np.abs(np.atleast_1d(step))
    unsettled = np.argwhere(size > _SETTLED)  # an unknown string, nan, is not one of them
    places = np.unique(unsettled[:, -1]) + 1
    which = f"open {'string' if len(places) == 1 else 'strings'} {' and '.join(map(str, places))}"
    worst = np.unravel_index(int(np.nanargmax(size)), size.shape)
    last, highest = (float(np.broadcast_to(held, size.shape)[worst]) for held in (tension, ideal))
    return NoSolutionError(
        f"tension in newton that tunes {which if size.shape[-1] > 1 else 'the open string'} "
        "(stiffness alone sounds higher; take a thinner or slacker string, or check its gauge, "
        "note and scale)",
        iterations=_MOST_STEPS,
        last=last,
        bracket=(0.0, highest),
    )


def _tension_step(
    tension: Array, *, momentum: Array, bending: Array, length: Array, ends: tuple[Support, Support]
) -> Array:
    """Return Newton's step in ln T for the phase equation at a known frequency.

    Legend: a wave number (rad/m), h bending length (m), t = a h, L length (m). The change of a
    tail's fixity with tension is left out of the slope; the steps still shrink a thousandfold.
    """
    first = fixity(ends[0], tension_n=tension, bending_stiffness_n_m2=bending)
    second = (
        first
        if ends[0] == ends[1]
        else fixity(ends[1], tension_n=tension, bending_stiffness_n_m2=bending)
    )
    ideal_squared = momentum / tension
    h_squared = bending / tension
    a_squared = 2.0 * ideal_squared / (1.0 + np.sqrt(1.0 + 4.0 * h_squared * ideal_squared))
    a = np.sqrt(a_squared)
    t = a * np.sqrt(h_squared)
    t_squared = t * t
    shift, slope = end_phases(t, first, second)
    missing = a * length - shift - np.pi
    spread = 1.0 + 2.0 * t_squared
    falling = a * length / (2.0 * spread) - slope * t * (1.0 + t_squared) / spread
    return np.asarray(np.clip(missing / falling, -_LONGEST_STEP, _LONGEST_STEP))
