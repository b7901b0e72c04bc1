"""Which pitches does a temperament hold, and which of them is a note?

A temperament is a row of exact intervals above its first note (degree 0), repeating or not. A
keyed one names its degrees: its first note sounds a certain pitch class, and strings tuned to
different notes meet different steps. Nothing here takes the repeat for an octave.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from itertools import pairwise

from layout.errors import PitchError
from layout.pitch.forms import equal_degrees
from layout.pitch.interval import PURE_FIFTH, UNISON, Interval
from layout.pitch.notes import Note, NoteName

FIRST_OCTAVE = 4
"""Degree 0 of a keyed temperament is its first note in the octave of middle C."""

WOLF_CENTS = 10.0
"""The closing fifth is called a wolf beyond this distance from pure (our own judgement)."""


@dataclass(frozen=True, slots=True)
class Fifth:
    """A named fifth and its size."""

    lower: NoteName
    upper: NoteName
    cents: float

    @property
    def wide_cents(self) -> float:
        """How much wider than a pure fifth it is; negative where it is narrower."""
        return self.cents - PURE_FIFTH.cents

    def __str__(self) -> str:
        return f"{self.lower}-{self.upper}"


@dataclass(frozen=True, slots=True)
class Temperament:
    """A row of exact intervals above the first note, with its names where it is keyed.

    Attributes
    ----------
    name, title, source
        What the record calls itself, and who published it, where and when.
    degrees
        The intervals above degree 0, rising: those of one period, or all there are.
    period
        The interval after which the degrees repeat; None where they do not.
    step
        Where every degree is a whole power of one step and there is no end (then ``degrees``
        is unison alone and ``period`` None); else None.
    notes
        The names of the degrees where the temperament is keyed; else None.
    any_spelling
        Whether a keyed temperament takes every spelling of a semitone (F# and Gb alike).
    form
        The key of the record under which the degrees were written, such as ``fifths``; None
        where they were not read from a record. Two that sound alike are equal in any form.

    Raises
    ------
    PitchError
        When the degrees do not rise from unison, reach the period, or do not fit their names.

    """

    name: str
    title: str
    source: str
    degrees: tuple[Interval, ...]
    period: Interval | None
    step: Interval | None = None
    notes: tuple[NoteName, ...] | None = None
    any_spelling: bool = False
    form: str | None = field(default=None, compare=False)

    def __post_init__(self) -> None:
        _check_degrees(self.degrees, self.period)
        if self.step is not None and (self.step <= UNISON or self.period or self.notes):
            raise PitchError("a row of equal steps rises, has no period and no note names")
        if self.notes is None:
            return
        if self.period is None:
            raise PitchError("a keyed record needs a period: note names come back with it")
        if len(self.notes) != len(self.degrees):
            raise PitchError(f"{len(self.notes)} note names do not fit {len(self.degrees)} degrees")
        if len(set(self.notes)) < len(self.notes):
            twice = next(name for name in self.notes if self.notes.count(name) > 1)
            raise PitchError(f"the note name {twice} stands twice")

    @property
    def keyed(self) -> bool:
        """Whether the degrees have names, so that strings of different notes differ."""
        return self.notes is not None

    @property
    def last_degree(self) -> int | None:
        """The highest degree there is; None where the row never ends."""
        if self.period is not None or self.step is not None:
            return None
        return len(self.degrees) - 1

    def interval(self, degree: int) -> Interval:
        """Return the exact interval of a degree above degree 0.

        Parameters
        ----------
        degree
            Any whole number; negative below degree 0.

        Raises
        ------
        PitchError
            When a row without a repeat has no such degree.

        """
        if self.step is not None:
            return self.step**degree
        turns, place = divmod(degree, len(self.degrees))
        if self.period is None:
            if turns:
                raise PitchError(
                    f"{self.name} does not repeat and has degrees 0 to {self.last_degree}; "
                    f"there is no degree {degree}"
                )
            return self.degrees[place]
        return self.degrees[place] * self.period**turns

    def cents(self, degree: int) -> float:
        """Return the cents of a degree above degree 0.

        Raises
        ------
        PitchError
            When a row without a repeat has no such degree.

        Examples
        --------
        >>> round(equal(12).cents(-5), 9)
        -500.0

        """
        return self.interval(degree).cents

    def degree_of(self, note: Note) -> int:
        """Return the degree a note sounds in a keyed temperament; its detuning is left out.

        The octave number of a note counts periods; degree 0 is the first note in octave 4.

        Raises
        ------
        PitchError
            When the temperament is not keyed or has no note of this spelling.

        """
        if self.notes is None:
            raise PitchError(f"{self.name} is counted from the open string and knows no notes")
        name, first, count = note.note_name, self.notes[0], len(self.notes)
        if self.any_spelling:
            return count * (note.octave - FIRST_OCTAVE) + name.semitones - first.semitones
        if name not in self.notes:
            raise PitchError(_unknown_note(self, self.notes, name))
        place = self.notes.index(name)
        # How many octave numbers above the first note's this degree is written: the spelling
        # lies so many twelfths of a period up, and Cb or B# falls outside its own octave number.
        lies = self.degrees[place].nepers / self._known_period.nepers
        octaves_up = round(lies - Fraction(name.semitones - first.semitones, 12))
        return count * (note.octave - FIRST_OCTAVE - octaves_up) + place

    @property
    def _known_period(self) -> Interval:
        assert self.period is not None  # a keyed temperament has one
        return self.period

    def keyed_from(self, key: NoteName) -> Temperament:
        """Return the temperament moved so that its first degree sounds ``key``.

        A keyed one moves its whole chain along the line of fifths; one without names becomes
        keyed and takes every spelling of a semitone.

        Raises
        ------
        PitchError
            When the temperament does not have twelve notes to a period.

        """
        if self.period is None or len(self.degrees) != 12:
            raise PitchError(
                f"a key moves a record of 12 notes to the period; {self.name} has "
                + (f"{len(self.degrees)} notes" if self.period else "no period")
            )
        if self.notes is None:
            # Spelled from three fifths below the key to eight above, as Eb to G# about C.
            spelled = tuple(key.transposed((7 * k + 3) % 12 - 3) for k in range(12))
            return replace(self, notes=spelled, any_spelling=True)
        moved_by = key.fifths - self.notes[0].fifths
        return replace(self, notes=tuple(name.transposed(moved_by) for name in self.notes))

    @property
    def fifths(self) -> tuple[Fifth, ...]:
        """The fifths of a keyed chain in its order, the one that closes it last; else none.

        Names that skip places on the line of fifths make no chain.
        """
        if self.notes is None:
            return ()
        chain = sorted(self.notes, key=lambda name: name.fifths)
        if any(b.fifths - a.fifths != 1 for a, b in pairwise(chain)):
            return ()
        pairs = [*pairwise(chain), (chain[-1], chain[0])]
        return tuple(Fifth(a, b, self._rise(a, b).cents) for a, b in pairs)

    def _rise(self, lower: NoteName, upper: NoteName) -> Interval:
        """Return the interval up from one name to the next note of the other."""
        assert self.notes is not None  # only asked of keyed ones
        rise = self.degrees[self.notes.index(upper)] / self.degrees[self.notes.index(lower)]
        return rise if rise > UNISON else rise * self._known_period

    @property
    def wolf(self) -> Fifth | None:
        """The fifth that is left over in an open chain; None where the circle closes well."""
        if self.any_spelling or not self.fifths:
            return None
        closing = self.fifths[-1]
        return closing if abs(closing.wide_cents) > WOLF_CENTS else None


def _check_degrees(degrees: tuple[Interval, ...], period: Interval | None) -> None:
    if period is not None and period <= UNISON:
        raise PitchError("a period rises: its ratio is above 1")
    if not degrees or degrees[0] != UNISON:
        raise PitchError("degree 0 is the open string or first note itself: ratio 1, 0 cents")
    for place, (below, above) in enumerate(pairwise(degrees), start=1):
        if above <= below:
            raise PitchError(
                f"degrees rise; degree {place} ({above.cents:.3f} cents) does not lie above "
                f"degree {place - 1} ({below.cents:.3f} cents)"
            )
    if period is not None and degrees[-1] >= period:
        raise PitchError(
            f"degrees lie below the period; degree {len(degrees) - 1} "
            f"({degrees[-1].cents:.3f} cents) does not, and the period itself is left out"
        )


def _unknown_note(temperament: Temperament, notes: tuple[NoteName, ...], name: NoteName) -> str:
    chain = sorted(notes, key=lambda known: known.fifths)
    said = f"{temperament.name} has no {name}; its notes are {' '.join(str(n) for n in chain)}"
    alike = [n for n in chain if (n.semitones - name.semitones) % 12 == 0]
    if alike:
        said += f"; {alike[0]} and {name} are different notes in an open chain"
    return said


def equal(count: int, *, period: Fraction | int = 2, name: str | None = None) -> Temperament:
    """Return ``count`` equal steps of a period, counted from the open string.

    >>> equal(12).interval(12).fraction
    Fraction(2, 1)
    """
    title = f"{count} equal steps"
    whole = Interval.of(period)
    degrees = equal_degrees(count, whole)
    name = name or f"equal-{count}"
    return Temperament(name, title, "common practice", degrees, whole, form="equal")
