"""How sharp does a stretched, stiff string sound when it is stopped at a place along it?

x runs along the string from the nut line, z over the plane of the crowns (over the board where
there are no frets). The string runs open from N over the nut to S over the saddle; stopped, from
S to the stop C and on to the finger D behind it, then to N. What the path grows in length stretches
the whole string: tension rises, mass per length falls, and the pitch rises by what length,
mass, tension and stiffness do together.

References
----------
Anderson and Beausoleil, "Classical guitar intonation and compensation", J. Acoust.
Soc. Am. 156 (2024) 683: the four parts of the error of a stopped string.

"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.strings.lie import StringLie, heights_from_gaps, hollow_mm, relief_height_mm
from layout.strings.path import stopped_path_mm
from layout.strings.phase import BLOCK_ELEMENTS, solve_wave_number_block
from layout.strings.support import fixity
from layout.strings.tuning import solve_open_tension_n

Array = NDArray[np.float64]

__all__ = [
    "ErrorParts",
    "Stopped",
    "StringBody",
    "StringLie",
    "heights_from_gaps",
    "predict_stops",
    "relief_height_mm",
    "split_error",
]

MM_PER_M = 1000.0


@dataclass(frozen=True, slots=True)
class StringBody:
    """What the strings are made of, as tuned; every array of shape (..., S)."""

    unit_mass_kg_per_m: Array
    axial_stiffness_n: Array
    bending_stiffness_n_m2: Array


@dataclass(frozen=True, slots=True)
class Stopped:
    """The stopped strings: what ``predict_stops`` found.

    Attributes
    ----------
    tension_open_n, open_length_mm
        Tension and speaking length of the open string; shape (..., S).
    cents
        Above the open string; shape (..., S, F), like all that follow.
    length_mm, tension_n
        Speaking length and tension of the stopped string.
    stretch
        Growth of the whole path as a share of it.

    """

    tension_open_n: Array
    open_length_mm: Array
    cents: Array
    length_mm: Array
    tension_n: Array
    stretch: Array


@dataclass(frozen=True, slots=True)
class ErrorParts:
    """What makes up the error at each stop, in cents, shape (..., S, F); the sum is the error."""

    length: Array
    mass: Array
    tension: Array
    stiffness: Array


def predict_stops(
    body: StringBody,
    lie: StringLie,
    stops_mm: ArrayLike,
    *,
    nut_shift_mm: ArrayLike = 0.0,
    setback_mm: ArrayLike = 0.0,
) -> Stopped:
    """Predict the pitch of every stop in cents above the open string.

    Parameters
    ----------
    body, lie
        The strings and how they run.
    stops_mm
        Where each string is stopped, from its nut line, shape (..., S, F); nan: no such stop.
    nut_shift_mm, setback_mm
        Nut moved toward the saddle, saddle moved away from the nut; shape (..., S) or one figure.

    Returns
    -------
    Stopped
        Leading axes broadcast; nan stops give nan.

    Raises
    ------
    NoSolutionError
        When a string cannot be tuned to its open note.
    ValueError
        When a stop lies at or past the saddle.

    Notes
    -----
    The finger lies on the straight line from saddle to stop, continued, ``min(behind, half way to
    the nut)`` behind the stop, pressed lower by ``press``. Left out: resonance of body and neck at
    the supports (several cents on some notes), roundness of the crown (under 0.5 cent), amplitude
    (2 to 6 cents, decays), temperature (-1 to -3 cents per K, retuning removes it).

    References
    ----------
    Anderson and Beausoleil (2024), the four contributions; here without series.

    Examples
    --------
    >>> body = StringBody(np.array([0.374e-3]), np.array([3306.0]), np.array([1.0e-4]))
    >>> lie = StringLie(open_hz=[329.63], scale_mm=[650.0], height_at_nut_mm=[1.0],
    ...                 height_at_saddle_mm=[5.0], finger_behind_mm=0.0)
    >>> predict_stops(body, lie, [[325.0, np.nan]]).cents.round(2).tolist()
    [[1204.95, nan]]

    """
    stops = np.asarray(stops_mm, dtype=np.float64)
    shift, setback = np.asarray(nut_shift_mm, dtype=float), np.asarray(setback_mm, dtype=float)
    saddle_at = np.asarray(lie.scale_mm, dtype=float) + setback
    rise = np.asarray(lie.height_at_saddle_mm, float) - np.asarray(lie.height_at_nut_mm, float)
    open_length = np.hypot(saddle_at - shift, rise)
    tension = solve_open_tension_n(body, lie.open_hz, open_length, nut=lie.nut, saddle=lie.saddle)
    string_shape = np.broadcast_shapes(
        stops.shape[:-1],
        *(np.shape(row) for row in (body.axial_stiffness_n, tension, shift, setback)),
    )
    rows = _strings_in_rows(
        body,
        lie,
        nut_at=shift,
        saddle_at=saddle_at,
        open_length=open_length,
        tension=tension,
        shape=string_shape,
    )
    shape = (*string_shape, stops.shape[-1])
    places = np.broadcast_to(stops, shape).reshape(len(rows.tension), stops.shape[-1])
    found = _stop_in_blocks(rows, places, lie)
    return Stopped(
        np.array(np.broadcast_to(tension, string_shape)),
        np.array(np.broadcast_to(open_length, string_shape)),
        *(values.reshape(shape) for values in found),
    )


def split_error(stopped: Stopped, target_cents: ArrayLike) -> ErrorParts:
    """Split the error at each stop, in cents, into length, mass, tension and stiffness.

    Parameters
    ----------
    stopped
        What `predict_stops` found.
    target_cents
        What each stop should sound above the open string, broadcast against (..., S, F).

    Examples
    --------
    >>> body = StringBody(np.array([0.374e-3]), np.array([3306.0]), np.array([1.0e-4]))
    >>> lie = StringLie(open_hz=[329.63], scale_mm=[650.0], height_at_nut_mm=[1.0],
    ...                 height_at_saddle_mm=[5.0], finger_behind_mm=0.0)
    >>> parts = split_error(predict_stops(body, lie, [[325.0]]), 1200.0)
    >>> [float(part[0, 0].round(2)) for part in (parts.length, parts.mass, parts.tension)]
    [-0.17, 0.04, 1.78]

    """
    target = np.asarray(target_cents, dtype=float)
    error = stopped.cents - target
    length = 1200.0 * np.log2(stopped.open_length_mm[..., None] / stopped.length_mm) - target
    mass = 600.0 * np.log2(1.0 + stopped.stretch)
    tension = 600.0 * np.log2(stopped.tension_n / stopped.tension_open_n[..., None])
    return ErrorParts(length, mass, tension, error - (length + mass + tension))


class _Strings(NamedTuple):
    """Per-string figures of the inner loop, mm and SI, all of one shape (rows, 1)."""

    nut_at: Array
    saddle_at: Array
    height_at_nut: Array
    height_at_saddle: Array
    open_path: Array
    tension: Array
    axial: Array
    bending: Array
    tuned: Array
    """``(1000/(2 pi f_0))^2/mu_0``: f_k^2/f_0^2 is this times a^2 T_k (1 + Q) (1 + t^2)."""
    relief_from: Array
    relief_to: Array


def _strings_in_rows(
    body: StringBody,
    lie: StringLie,
    *,
    nut_at: Array,
    saddle_at: Array,
    open_length: Array,
    tension: Array,
    shape: tuple[int, ...],
) -> _Strings:
    pitch = MM_PER_M / (2.0 * np.pi * np.asarray(lie.open_hz, dtype=float))
    figures = (
        nut_at,
        saddle_at,
        lie.height_at_nut_mm,
        lie.height_at_saddle_mm,
        open_length + lie.free_mm,
        tension,
        body.axial_stiffness_n,
        body.bending_stiffness_n_m2,
        pitch * pitch / body.unit_mass_kg_per_m,
        lie.relief_from_mm,
        lie.relief_to_mm,
    )
    return _Strings(
        *(np.broadcast_to(np.asarray(row, dtype=float), shape).reshape(-1, 1) for row in figures)
    )


def _stop_in_blocks(
    strings: _Strings, stops: Array, lie: StringLie
) -> tuple[Array, Array, Array, Array]:
    """Run `_stop_block` over cache-sized parts of rows (strings) by columns (stops)."""
    rows, columns = stops.shape
    found = (np.empty_like(stops), np.empty_like(stops), np.empty_like(stops), np.empty_like(stops))
    width = min(max(columns, 1), BLOCK_ELEMENTS)
    height = max(1, BLOCK_ELEMENTS // width)
    for top in range(0, rows, height):
        part = _Strings(*(figure[top : top + height] for figure in strings))
        for left in range(0, columns, width):
            place = (slice(top, top + height), slice(left, left + width))
            for whole, block in zip(found, _stop_block(part, stops[place], lie), strict=True):
                whole[place] = block
    return found


def _stop_block(
    strings: _Strings, stops: Array, lie: StringLie
) -> tuple[Array, Array, Array, Array]:
    """Return cents, speaking length (mm), tension (N) and stretch of one block of stops.

    Legend: a wave number (rad/mm), h bending length (mm), t = a h.
    """
    if (stops >= strings.saddle_at).any():
        raise ValueError("a stop lies at or past the saddle")
    on_board: Array | float = 0.0
    if lie.relief_mm != 0.0:
        on_board = hollow_mm(
            stops, lie.relief_mm, from_mm=strings.relief_from, to_mm=strings.relief_to
        )
    length, path = stopped_path_mm(
        (stops, on_board),
        nut=(strings.nut_at, strings.height_at_nut),
        saddle=(strings.saddle_at, strings.height_at_saddle),
        behind=lie.finger_behind_mm,
        press=lie.finger_press_mm,
    )
    stretch = (path + (lie.free_mm - strings.open_path)) / strings.open_path
    # A stopped path is never shorter than the straight open string, so no string goes slack.
    tension = strings.axial * stretch + strings.tension
    h = MM_PER_M * np.sqrt(strings.bending / tension)
    held = {"tension_n": tension, "bending_stiffness_n_m2": strings.bending}
    at_stop = fixity(lie.stop, **held)
    at_saddle = at_stop if lie.stop == lie.saddle else fixity(lie.saddle, **held)
    a = solve_wave_number_block(length, h, at_stop, at_saddle)
    h *= a
    h *= h
    ratio = a * a * strings.tuned * tension * (1.0 + stretch) * (1.0 + h)
    return 600.0 * np.log2(ratio), length, tension, stretch
