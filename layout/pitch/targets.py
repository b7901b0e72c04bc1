"""Which pitch is every stop of every string meant to sound?

Two ways of counting: from the key, where the strings of a keyed temperament meet its degrees at
different places; or from the open string, where every string carries the same row of intervals.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import cache
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from layout.errors import PitchError
from layout.pitch.interval import CENTS_PER_OCTAVE
from layout.pitch.notes import Note
from layout.pitch.temperament import Temperament

CountedFrom = Literal["key", "open"]

_OCTAVE_NEPERS = math.log(2.0)


def open_hz(
    temperament: Temperament,
    notes: Sequence[Note],
    *,
    reference_note: Note,
    reference_hz: float,
    counted_from: CountedFrom,
) -> NDArray[np.float64]:
    """Return the frequency in Hz every open string is tuned to.

    Counted from the key, open strings are tuned in the temperament itself; counted from the open
    string, in twelve equal steps to the octave. Either way from the reference, and with the
    detuning a note carries.

    Parameters
    ----------
    temperament
        Keyed where ``counted_from`` is ``key``.
    notes
        One a string, S of them.
    reference_note, reference_hz
        The note everything is tuned from, and its frequency in Hz.
    counted_from
        ``key`` or ``open``.

    Returns
    -------
    ndarray, shape (S,)
        Frequencies in Hz.

    Raises
    ------
    PitchError
        When a keyed temperament has no note of a spelling.

    Examples
    --------
    >>> from layout.pitch.notes import read_note
    >>> from layout.pitch.temperament import equal
    >>> a4, e4 = read_note("A4"), read_note("E4")
    >>> open_hz(equal(12), [e4], reference_note=a4, reference_hz=440.0, counted_from="open")
    array([329.62755691])

    """

    def cents_of(note: Note) -> float:
        if counted_from == "open":
            return float(note.equal_cents)
        return temperament.cents(temperament.degree_of(note)) + float(note.cents)

    cents = np.array([cents_of(note) for note in notes], dtype=np.float64)
    above = cents - cents_of(reference_note)
    return np.asarray(reference_hz * np.exp2(above / CENTS_PER_OCTAVE), dtype=np.float64)


def nearest_degree(
    temperament: Temperament, hz: float, *, reference_note: Note, reference_hz: float
) -> int:
    """Return the degree of a keyed temperament nearest to a frequency in Hz.

    A string ordered by its frequency alone is counted from there.

    Raises
    ------
    PitchError
        When the temperament is not keyed or has no note of the reference's spelling.

    Examples
    --------
    >>> from layout.pitch.notes import NoteName, read_note
    >>> from layout.pitch.temperament import equal
    >>> keyed = equal(12).keyed_from(NoteName("C"))
    >>> nearest_degree(keyed, 331.0, reference_note=read_note("A4"), reference_hz=440.0)
    4

    """
    start = temperament.degree_of(reference_note)
    # What degree_of has accepted is keyed, so it has a period.
    period_cents = temperament.cents(len(temperament.degrees))
    reference_cents = temperament.cents(start) + float(reference_note.cents)
    wanted = reference_cents + CENTS_PER_OCTAVE * math.log2(hz / reference_hz)
    below = math.floor(wanted / period_cents) * len(temperament.degrees)
    near = range(below - 1, below + len(temperament.degrees) + 2)
    return min(near, key=lambda degree: abs(temperament.cents(degree) - wanted))


def target_cents(
    temperament: Temperament,
    notes: Sequence[Note | int | None],
    steps: Sequence[int],
    *,
    counted_from: CountedFrom,
    starts: Sequence[int | None] | None = None,
) -> NDArray[np.float64]:
    """Return the cents every fret is meant to sound above the string's own open note.

    Parameters
    ----------
    temperament
        Keyed where ``counted_from`` is ``key``.
    notes
        The open notes, S of them; a whole number is the degree an open string sounds
        (`nearest_degree`). Counted from the open string they are not looked at.
    steps
        The degrees of frets 1 to F above the nut.
    counted_from
        ``key``: fret j of a string on degree s sounds ``t[s + step_j] - t[s]``.
        ``open``: it sounds ``t[step_j]``.
    starts
        The board fret a short string starts at, one a string; None or 0 is the nut. Its targets
        are the record between its start and the fret, negative where the fret lies behind it.

    Returns
    -------
    ndarray, shape (S, F)
        Cents above the string's own open note.

    Raises
    ------
    PitchError
        When the temperament has no such degree or note.

    """
    started = [start or 0 for start in starts] if starts else [0] * len(notes)
    degrees_at_frets = (0, *steps)
    cents_of = cache(temperament.cents)
    targets = np.empty((len(notes), len(steps)), dtype=np.float64)
    for row, (note, start) in enumerate(zip(notes, started, strict=True)):
        begin = degrees_at_frets[start]
        # The degree the nut would sound on this string's row of the record.
        base = _open_degree(temperament, note) - begin if counted_from == "key" else 0
        for column, step in enumerate(steps):
            targets[row, column] = cents_of(base + step) - cents_of(base + begin)
    return targets


def _open_degree(temperament: Temperament, note: Note | int | None) -> int:
    if note is None:
        raise PitchError("a string counted from the key needs its open note or degree")
    return note if isinstance(note, int) else temperament.degree_of(note)


def stop_fraction(cents: ArrayLike) -> NDArray[np.float64]:
    """Return where ideal stops lie, as fractions of the string from its nut.

    Parameters
    ----------
    cents
        Cents above the open string, any shape.

    Returns
    -------
    ndarray
        ``1 - 2^(-cents/1200)``, same shape.

    References
    ----------
    Mersenne, Harmonie universelle (1636): frequency goes inversely as the length.

    Examples
    --------
    >>> stop_fraction([0.0, 1200.0])
    array([0. , 0.5])

    """
    octaves = np.asarray(cents, dtype=np.float64) / CENTS_PER_OCTAVE
    # expm1 keeps every digit of a small stop; the sum takes the sign off a zero.
    return np.asarray(-np.expm1(-octaves * _OCTAVE_NEPERS) + 0.0, dtype=np.float64)


def string_fractions(temperament: Temperament, steps: Sequence[int]) -> NDArray[np.float64]:
    """Return where ideal stops counted from the open string lie, rounded once from exact.

    Parameters
    ----------
    temperament
        Any; its names are not looked at.
    steps
        The degrees of F frets above the nut.

    Returns
    -------
    ndarray, shape (F,)
        Fractions of the string from the nut.

    Raises
    ------
    PitchError
        When the temperament has no such degree.

    Examples
    --------
    >>> from layout.pitch.temperament import equal
    >>> string_fractions(equal(12), [12, 24])
    array([0.5 , 0.75])

    """
    exact = [temperament.interval(step).string_fraction for step in steps]
    return np.array(exact, dtype=np.float64)
