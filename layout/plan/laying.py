"""Where do strings, stops, frets and board lie? Instrument to geometry, in order."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import Fault, JobError
from layout.geometry.frets import FretLines, divide_mm, lay_frets, vote_weights
from layout.geometry.spread import spread_strings
from layout.geometry.strings import StringLines, end_open, lay_strings, start_at
from layout.instrument import Instrument, MultiScale, SpreadList, SpreadRule, StringSpec
from layout.pitch.notes import Note
from layout.pitch.targets import nearest_degree, target_cents

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Laid:
    """Strings, their own stops and the fret lines that serve them.

    Attributes
    ----------
    target_cents
        Shape (S, F): above each string's open note, also behind a short string's start; nan
        where the record says nothing.
    own_mm
        Shape (S, F): the divided stop of every string, from its own nut.
    served
        Shape (S, F): which strings each fret runs under.

    """

    target_cents: Array
    own_mm: Array
    served: Mask
    strings: StringLines
    frets: FretLines


def lay_out(instrument: Instrument) -> Laid:
    """Lay strings and frets.

    Raises
    ------
    JobError
        When the geometry is impossible, or a fret serves no string.
    PitchError
        When the temperament does not reach the last fret.

    """
    served = _served(instrument)
    _check_served(instrument, served)
    short = [i for i, string in enumerate(instrument.strings) if string.starts_at]
    whole = targets = _targets(instrument, starts=[0] * len(instrument.strings))
    strings = _lay_full_strings(instrument, targets)
    for index, string in enumerate(instrument.strings):
        if string.open_length_mm is not None:
            strings = end_open(strings, index, string.open_length_mm)
    wanted = _wanted_cents(instrument, whole, served)
    if short:
        strings = _start_short_strings(instrument, strings, wanted, served)
        targets = _targets(
            instrument, starts=[s.starts_at.fret if s.starts_at else 0 for s in instrument.strings]
        )
    own = divide_mm(strings.scale_mm, targets)
    frets = _lay_lines(instrument, strings, wanted - (whole - targets), served)
    return Laid(targets, own, served, strings, frets)


def courses(instrument: Instrument) -> NDArray[np.int_]:
    """Number the courses, shape (S,): strings of one course share a number."""
    names: dict[str, int] = {}
    numbers = []
    for index, string in enumerate(instrument.strings):
        name = f"#{index}" if string.course is None else string.course
        numbers.append(names.setdefault(name, len(names)))
    return np.array(numbers)


def outer_strings(instrument: Instrument) -> tuple[int, int]:
    """Give the indices of the first and the last fretted string."""
    fretted = [i for i, string in enumerate(instrument.strings) if string.fretted]
    return fretted[0], fretted[-1]


def _targets(instrument: Instrument, *, starts: list[int]) -> Array:
    frets = instrument.frets
    return target_cents(
        frets.temperament,
        [_counted_note(string, instrument) for string in instrument.strings],
        frets.steps,
        counted_from=frets.counted_from,
        starts=starts,
    )


def _counted_note(string: StringSpec, instrument: Instrument) -> Note | int | None:
    """A string ordered by its frequency alone counts from the nearest degree of the key."""
    if string.note is not None or instrument.frets.counted_from == "open":
        return string.note
    assert string.hz is not None
    return nearest_degree(
        instrument.frets.temperament,
        string.hz,
        reference_note=instrument.reference.note,
        reference_hz=instrument.reference.hz,
    )


def _served(instrument: Instrument) -> Mask:
    """Which strings a fret runs under: fretted, past their start, and listed if it is partial."""
    served = np.zeros((len(instrument.strings), instrument.frets.count), bool)
    for index, string in enumerate(instrument.strings):
        if string.fretted:
            served[index, string.starts_at.fret if string.starts_at else 0 :] = True
    for fret, chosen in instrument.frets.only.items():
        listed = np.zeros(len(served), bool)
        listed[[number - 1 for number in chosen]] = True
        served[:, fret - 1] &= listed
    return served


def _check_served(instrument: Instrument, served: Mask) -> None:
    """Refuse a board without a full string, and a fret that no string (or favoured one) meets."""
    frets = instrument.frets
    faults = []
    if not any(string.full for string in instrument.strings):
        faults.append(Fault("job", None, "strings", None, "at least one string reaches the nut"))
    for fret in np.flatnonzero(~served.any(axis=0)):
        path = f"frets.only.{frets.labels[fret]}"
        faults.append(Fault("job", None, path, None, "none of these strings runs over this fret"))
    for number, pitch in frets.favour.items():
        if not isinstance(pitch, str) and not served[[i - 1 for i in pitch], number - 1].any():
            path = f"frets.favour.{frets.labels[number - 1]}"
            rule = "none of these strings runs over this fret"
            faults.append(Fault("job", None, path, None, rule))
    if faults:
        raise JobError(faults)


def _lay_full_strings(instrument: Instrument, targets: Array) -> StringLines:
    spread = instrument.spread
    if spread is None:  # unfretted work without a spread: one line down the middle
        spread = SpreadRule(0.0, 0.0)
    nut_y, bridge_y = spread_strings(spread, instrument.strings)
    full = np.array([string.full for string in instrument.strings])
    outer = np.flatnonzero(full)[[0, -1]]
    first, last = (_square_fraction(instrument, targets[index]) for index in outer)
    return lay_strings(instrument.scale, nut_y, bridge_y, full=full, square_fraction=(first, last))


def _square_fraction(instrument: Instrument, cents: Array) -> float:
    """How far along a string the square fret lies; fractions of a fret interpolate cents."""
    if not isinstance(instrument.scale, MultiScale):
        return 0.0
    place = instrument.scale.square_at
    if place == "nut":
        return 0.0
    if place == "bridge":
        return 1.0
    at = np.interp(place, np.arange(len(cents) + 1), np.concatenate(([0.0], cents)))
    return float(-np.expm1(-at * np.log(2) / 1200))


def _start_short_strings(
    instrument: Instrument, strings: StringLines, wanted: Array, served: Mask
) -> StringLines:
    """Short strings start at frets laid for the strings that reach the nut."""
    full_only = served & strings.full[:, None]
    board = _lay_lines(instrument, strings, wanted, full_only)
    listed = instrument.spread.nut_y_mm if isinstance(instrument.spread, SpreadList) else None
    for index, string in enumerate(instrument.strings):
        if string.starts_at is not None:
            strings = start_at(
                strings,
                index,
                board.line(string.starts_at.fret),
                behind_mm=string.starts_at.behind_mm,
                y_mm=None if listed is None else listed[index],
            )
    return strings


def _lay_lines(
    instrument: Instrument, strings: StringLines, wanted: Array, served: Mask
) -> FretLines:
    own = divide_mm(strings.scale_mm, wanted)
    free = np.full(instrument.frets.count, instrument.frets.slant == "free")
    votes = vote_weights(served, courses(instrument))
    return lay_frets(strings, own, votes=votes, served=served, free=free)


def _wanted_cents(instrument: Instrument, above_nut: Array, served: Mask) -> Array:
    """Give the cents every fret is laid for: the targets, or the pitch that is favoured.

    Counted from the board's nut for short strings too, so that strings can be compared.
    """
    votes = vote_weights(served, courses(instrument))
    wanted = above_nut.copy()
    for fret, pitch in instrument.frets.favour.items():
        wanted[:, fret - 1] = _favoured(pitch, above_nut[:, fret - 1], votes[:, fret - 1])
    return wanted


def _favoured(pitch: str | tuple[int, ...], targets: Array, votes: Array) -> float:
    """Pick the pitch a favoured fret is laid for, in cents above the note at the nut."""
    heard = votes > 0
    if pitch == "flat":
        return float(targets[heard].min())
    if pitch == "sharp":
        return float(targets[heard].max())
    chosen = [int(number) - 1 for number in pitch if heard[int(number) - 1]]
    return float(np.average(targets[chosen], weights=votes[chosen]))
