"""What is a note called, and where does its name lie on the line of fifths?

Scientific pitch notation (Young, "Terminology for logarithmic frequency units", J. Acoust. Soc.
Am. 11, 1939, pp. 134-139): C4 is middle C, and the octave number changes between B and C. The
line of fifths ... Bb F C G D A E B F# ... carries every spelling once; C is its place 0.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

from layout.errors import TextError

LETTERS_BY_FIFTHS = "FCGDAEB"
"""The seven letters in order of fifths; F is place -1."""

SEMITONES_BY_LETTER = {"C": 0, "D": 2, "E": 4, "F": 5, "G": 7, "A": 9, "B": 11}
"""Semitones of the naturals above C."""

LARGEST_DETUNING_CENTS = 1200
"""A note is detuned by less than an octave; more is a slip of the pen."""

_ACCIDENTALS = {"": 0, "#": 1, "##": 2, "b": -1, "bb": -2}
_NAME = re.compile(r"([A-G])(bb|b|##|#|)")
_NOTE = re.compile(
    r"([A-G])(bb|b|##|#|)([0-9])(?: ([+-](?:0|[1-9][0-9]{0,3})(?:\.[0-9]{1,12})?)c)?"
)
_NOTE_RULE = "a note is written like E4, Bb3, F#2 or E4 -50c"
_NAME_RULE = "a note name is written like C, Bb or F#"


@dataclass(frozen=True, slots=True)
class NoteName:
    """A letter and its accidental: sharps positive, flats negative.

    >>> str(NoteName("B", -1)), NoteName("B", -1).fifths
    ('Bb', -2)
    """

    letter: str
    accidental: int = 0

    @property
    def fifths(self) -> int:
        """Place on the line of fifths, in fifths above C."""
        return LETTERS_BY_FIFTHS.index(self.letter) - 1 + 7 * self.accidental

    @property
    def semitones(self) -> int:
        """Semitones above the C of the same octave number: Cb is -1, B# is 12."""
        return SEMITONES_BY_LETTER[self.letter] + self.accidental

    def transposed(self, fifths: int) -> NoteName:
        """Return the name so many places further up the line of fifths.

        >>> str(NoteName("E").transposed(2)), str(NoteName("F").transposed(-1))
        ('F#', 'Bb')
        """
        return name_on_line_of_fifths(self.fifths + fifths)

    def __str__(self) -> str:
        return self.letter + ("#" if self.accidental > 0 else "b") * abs(self.accidental)


@dataclass(frozen=True, slots=True)
class Note:
    """A note in scientific pitch notation, with a detuning in cents.

    >>> str(Note("B", -1, 3)), str(Note("E", 0, 4, Fraction(-50)))
    ('Bb3', 'E4 -50c')
    """

    letter: str
    accidental: int
    octave: int
    cents: Fraction = Fraction(0)

    @property
    def name(self) -> str:
        """Letter and accidental without the octave: ``Bb``."""
        return str(self.note_name)

    @property
    def note_name(self) -> NoteName:
        """Letter and accidental as a name on the line of fifths."""
        return NoteName(self.letter, self.accidental)

    @property
    def semitone(self) -> int:
        """Semitones above C0 by spelling, the detuning left out: C4 is 48, Cb4 is 47."""
        return 12 * self.octave + self.note_name.semitones

    @property
    def equal_cents(self) -> Fraction:
        """Cents above C0 in twelve equal steps to the octave, the detuning included."""
        return 100 * self.semitone + self.cents

    def __str__(self) -> str:
        shown = f"{self.name}{self.octave}"
        return f"{shown} {_write_cents(self.cents)}c" if self.cents else shown


def _write_cents(cents: Fraction) -> str:
    if cents.denominator == 1:
        return f"{cents.numerator:+d}"
    return f"{float(cents):+.12f}".rstrip("0")


def name_on_line_of_fifths(fifths: int) -> NoteName:
    """Return the name at a place of the line of fifths, in fifths above C.

    >>> [str(name_on_line_of_fifths(place)) for place in (-3, 0, 8)]
    ['Eb', 'C', 'G#']
    """
    accidental, place = divmod(fifths + 1, 7)
    return NoteName(LETTERS_BY_FIFTHS[place], accidental)


def read_note(text: str) -> Note:
    """Read a note with its octave, and its detuning in cents where there is one.

    Parameters
    ----------
    text
        ``E4``, ``Bb3``, ``F#2``, ``Cbb4`` or ``E4 -50c``.

    Returns
    -------
    Note
        The note as spelled; the detuning is exact.

    Raises
    ------
    TextError
        For anything else, with what to write instead where that is plain.

    Examples
    --------
    >>> read_note("E4 -50c")
    Note(letter='E', accidental=0, octave=4, cents=Fraction(-50, 1))
    >>> read_note("Bb")
    Traceback (most recent call last):
    ...
    layout.errors.TextError: a note is written like E4, Bb3, F#2 or E4 -50c; add the octave: Bb4

    """
    shown = text.strip()
    match = _NOTE.fullmatch(shown)
    if match is None:
        raise TextError(_NOTE_RULE, _remedy_for_note(shown))
    cents = Fraction(match[4] or 0)
    if abs(cents) >= LARGEST_DETUNING_CENTS:
        raise TextError(f"a note is detuned by less than {LARGEST_DETUNING_CENTS} cents")
    return Note(match[1], _ACCIDENTALS[match[2]], int(match[3]), cents)


def _remedy_for_note(shown: str) -> str:
    plain = _in_plain_signs(shown)
    if _NOTE.fullmatch(plain):
        return f"write {plain}"
    if _NAME.fullmatch(plain):
        return f"add the octave: {plain}4"
    loose = re.fullmatch(r"(\S+?)\s*([+-])\s*([\d.]+)\s*(?:c|ct|cent|cents)?", plain)
    if loose and _NOTE.fullmatch(tidy := f"{loose[1]} {loose[2]}{loose[3]}c"):
        return f"write {tidy}"
    return ""


def read_note_name(text: str) -> NoteName:
    """Read a note name without an octave.

    Raises
    ------
    TextError
        For anything but a letter A to G with up to two sharps or flats.

    Examples
    --------
    >>> read_note_name("F#")
    NoteName(letter='F', accidental=1)

    """
    shown = text.strip()
    match = _NAME.fullmatch(shown)
    if match is None:
        plain = _in_plain_signs(shown)
        remedy = f"write {plain}" if _NAME.fullmatch(plain) else ""
        if note := _NOTE.fullmatch(plain):
            remedy = f"leave the octave out: {note[1]}{note[2]}"
        raise TextError(_NAME_RULE, remedy)
    return NoteName(match[1], _ACCIDENTALS[match[2]])


def _in_plain_signs(shown: str) -> str:
    """Return the text with a capital letter and with # and b for printed accidentals."""
    plain = shown.replace("♯", "#").replace("♭", "b").replace("−", "-")
    return plain[:1].upper() + plain[1:]
