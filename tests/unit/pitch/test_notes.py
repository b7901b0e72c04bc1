from fractions import Fraction

import pytest

from layout.errors import TextError
from layout.pitch.notes import (
    Note,
    NoteName,
    name_on_line_of_fifths,
    read_note,
    read_note_name,
)


@pytest.mark.parametrize(
    ("text", "note"),
    [
        ("E4", Note("E", 0, 4)),
        ("Bb3", Note("B", -1, 3)),
        ("F#2", Note("F", 1, 2)),
        ("Ebb3", Note("E", -2, 3)),
        ("F##2", Note("F", 2, 2)),
        ("E4 -50c", Note("E", 0, 4, Fraction(-50))),
        ("A4 +13.686c", Note("A", 0, 4, Fraction("13.686"))),
        ("C0", Note("C", 0, 0)),
    ],
)
def test_a_note_is_read_and_shown_alike(text, note):
    assert read_note(text) == note
    assert str(note) == text


@pytest.mark.parametrize(
    ("text", "remedy"),
    [
        ("e4", "write E4"),
        ("E", "add the octave: E4"),
        ("B♭3", "write Bb3"),
        ("E4-50c", "write E4 -50c"),
        ("E4 - 50 cents", "write E4 -50c"),
        ("E4 -50", "write E4 -50c"),
        ("H3", ""),
        ("E44", ""),
        ("E#b4", ""),
        ("E4 50c", ""),
        ("E4 -050c", ""),
        ("E4\n-50c", "write E4 -50c"),
        ("", ""),
        ("E４", ""),
    ],
)
def test_what_is_no_note_is_refused_with_a_remedy(text, remedy):
    with pytest.raises(TextError) as caught:
        read_note(text)
    assert caught.value.rule == "a note is written like E4, Bb3, F#2 or E4 -50c"
    assert caught.value.remedy == remedy


def test_a_detuning_of_an_octave_is_refused():
    with pytest.raises(TextError, match="less than 1200 cents"):
        read_note("E4 +1200c")
    assert read_note("E4 +1199c").cents == 1199


@pytest.mark.parametrize(
    ("text", "remedy"),
    [("c#", "write C#"), ("C4", "leave the octave out: C"), ("H", ""), ("", ""), ("C#b", "")],
)
def test_what_is_no_name_is_refused(text, remedy):
    with pytest.raises(TextError) as caught:
        read_note_name(text)
    assert caught.value.remedy == remedy


def test_the_line_of_fifths_runs_through_flats_naturals_and_sharps():
    line = [
        "Fb",
        "Cb",
        "Gb",
        "Db",
        "Ab",
        "Eb",
        "Bb",
        "F",
        "C",
        "G",
        "D",
        "A",
        "E",
        "B",
        "F#",
        "C#",
        "G#",
        "D#",
        "A#",
        "E#",
        "B#",
        "F##",
    ]
    assert [str(name_on_line_of_fifths(place)) for place in range(-8, 14)] == line
    assert [read_note_name(name).fifths for name in line] == list(range(-8, 14))


def test_transposing_goes_along_the_line_of_fifths():
    assert NoteName("C").transposed(-3) == NoteName("E", -1)
    assert NoteName("B", -1).transposed(4) == NoteName("D")


def test_semitones_follow_the_spelling_across_the_octave_number():
    assert read_note("C4").semitone == 48
    assert read_note("Cb4").semitone == read_note("B3").semitone == 47
    assert read_note("B#3").semitone == 48
    assert read_note("A4").semitone - read_note("E2").semitone == 29
    assert read_note("E4 -50c").equal_cents == 5150
