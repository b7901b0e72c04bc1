from fractions import Fraction

import pytest

from layout.errors import PitchError, TextError
from layout.pitch.fifths import COMMAS, _within_period, chain_degrees, read_narrowing
from layout.pitch.interval import UNISON, Interval
from layout.pitch.notes import read_note_name

OCTAVE = Interval.of(2)
NOTES = [
    read_note_name(n) for n in ["C", "C#", "D", "Eb", "E", "F", "F#", "G", "G#", "A", "Bb", "B"]
]
CHAIN = [
    read_note_name(n) for n in ["Eb", "Bb", "F", "C", "G", "D", "A", "E", "B", "F#", "C#", "G#"]
]


def pair(text):
    lower, upper = text.split("-")
    return read_note_name(lower), read_note_name(upper)


def made(narrow, notes=NOTES, chain=CHAIN, period=OCTAVE):
    degrees = chain_degrees(notes, chain, narrow=narrow, period=period)
    return dict(zip([str(n) for n in notes], degrees, strict=True))


def fifth(degrees, lower, upper):
    rise = degrees[upper] / degrees[lower]
    return rise if rise > UNISON else rise * OCTAVE


def test_a_pure_chain_is_pythagorean():
    degrees = made(UNISON)
    assert degrees["E"].fraction == Fraction(81, 64)
    assert degrees["Eb"].fraction == Fraction(32, 27)
    assert degrees["G#"].fraction == Fraction(6561, 4096)


def test_quarter_comma_thirds_are_pure_and_its_wolf_is_a_diesis_wide():
    degrees = made(COMMAS["syntonic"] ** Fraction(1, 4))
    assert degrees["E"].fraction == Fraction(5, 4)
    assert degrees["Eb"] * Interval.of(Fraction(5, 4)) == degrees["G"]
    wolf = fifth(degrees, "G#", "Eb")
    assert (wolf / fifth(degrees, "C", "G")).fraction == Fraction(128, 125)


def test_a_fifth_that_is_not_named_is_pure_and_negative_is_wide():
    part = COMMAS["pythagorean"] ** Fraction(1, 12)
    degrees = made({pair("C-G"): part, pair("Bb-F"): part.inverse})
    assert fifth(degrees, "C", "G") == Interval.of(Fraction(3, 2)) / part
    assert fifth(degrees, "Bb", "F") == Interval.of(Fraction(3, 2)) * part
    assert fifth(degrees, "G", "D").fraction == Fraction(3, 2)


def test_rest_shares_what_closes_the_circle():
    narrow = {pair(p): COMMAS["syntonic"] ** Fraction(3, 16) for p in ["C-G", "G-D", "D-A", "A-E"]}
    narrow |= dict.fromkeys([pair(p) for p in ["E-B", "B-F#", "Bb-F", "F-C"]], "rest")
    degrees = made(narrow)
    shared = (COMMAS["pythagorean"] / COMMAS["syntonic"] ** Fraction(3, 4)) ** Fraction(1, 4)
    assert fifth(degrees, "E", "B") == Interval.of(Fraction(3, 2)) / shared
    assert fifth(degrees, "G#", "Eb").fraction == Fraction(3, 2)


def test_rest_may_be_the_closing_fifth_itself():
    narrow = {pair("C-G"): COMMAS["syntonic"], pair("G#-Eb"): "rest"}
    assert fifth(made(narrow), "G#", "Eb") == (
        Interval.of(Fraction(3, 2)) * COMMAS["syntonic"] / COMMAS["pythagorean"]
    )


def test_the_closing_fifth_may_be_named_when_it_agrees():
    agreeing = {pair("C-G"): COMMAS["syntonic"], pair("G#-Eb"): COMMAS["schisma"]}
    assert fifth(made(agreeing), "G#", "Eb") == Interval.of(Fraction(3, 2)) / COMMAS["schisma"]
    with pytest.raises(PitchError, match=r"do not close: \+1\.954 cents are left to narrow; leave"):
        made({pair("C-G"): COMMAS["syntonic"], pair("G#-Eb"): UNISON})
    with pytest.raises(PitchError, match=r"do not close: -1\.954 cents are left to narrow; leave"):
        made({pair("C-G"): COMMAS["pythagorean"], pair("G#-Eb"): COMMAS["schisma"]})


@pytest.mark.parametrize(
    ("narrow", "said"),
    [
        ({pair("G-C"): UNISON}, "a fifth is named from below: C-G, not G-C"),
        ({pair("C-E"): UNISON}, "C-E is no fifth of this chain; its fifths are Eb-Bb"),
    ],
)
def test_a_pair_outside_the_chain_is_refused(narrow, said):
    with pytest.raises(PitchError, match=said):
        made(narrow)


def test_a_chain_of_another_length_leaves_no_circle_to_close():
    notes, chain = [NOTES[0], NOTES[7]], CHAIN[3:5]
    assert made(UNISON, notes, chain)["G"].fraction == Fraction(3, 2)
    with pytest.raises(PitchError, match="a circle of 12 fifths"):
        made({pair("C-G"): "rest"}, notes, chain)


def test_chain_and_notes_hold_the_same_names_in_order_of_fifths():
    with pytest.raises(PitchError, match="after Eb comes Bb, not F"):
        made(UNISON, NOTES, [CHAIN[0], *CHAIN[2:]])
    with pytest.raises(PitchError, match="the chain has no G#"):
        made(UNISON, NOTES, CHAIN[:-1])
    with pytest.raises(PitchError, match="the notes have no B, which"):
        made(UNISON, NOTES[:-1], CHAIN)


def test_notes_are_brought_back_by_the_period_whatever_it_is():
    degrees = made(UNISON, period=Interval.of(3))
    assert degrees["D"].fraction == Fraction(9, 4)
    assert degrees["A"].fraction == Fraction(27, 24)


@pytest.mark.parametrize("ratio", [2, 3, Fraction(3, 2), Fraction(2003, 1000), Fraction(7, 5)])
def test_a_whole_number_of_periods_is_brought_back_to_unison(ratio):
    period = Interval.of(ratio)
    for turns in range(-60, 61):
        assert _within_period(period**turns, period) == UNISON
        hair_below = Interval.of(1 - Fraction(1, 10**30))
        assert _within_period(period**turns * hair_below, period) == period * hair_below


@pytest.mark.parametrize(
    ("text", "cents"),
    [
        ("1/4 syntonic", 21.506289596714835 / 4),
        ("-1/12 pythagorean", -23.460010384649014 / 12),
        ("1 schisma", 1.953720787934182),
        ("0.25 syntonic", 21.506289596714835 / 4),
        ("0", 0.0),
    ],
)
def test_a_narrowing_is_a_part_of_a_named_comma(text, cents):
    assert read_narrowing(text).cents == pytest.approx(cents, abs=1e-12)


@pytest.mark.parametrize("text", ["1/4", "1/4 comma", "syntonic", "1/4 Syntonic", "2 syntonic", ""])
def test_a_narrowing_without_its_comma_is_refused(text):
    with pytest.raises(TextError, match="comma"):
        read_narrowing(text)
