from fractions import Fraction

import pytest

from layout.errors import PitchError
from layout.pitch.fifths import COMMAS, chain_degrees
from layout.pitch.forms import ratio_degrees, rule_step
from layout.pitch.interval import UNISON, Interval
from layout.pitch.notes import NoteName, read_note, read_note_name
from layout.pitch.temperament import Temperament, equal

OCTAVE = Interval.of(2)


def names(text):
    return tuple(read_note_name(n) for n in text.split())


def made(degrees, *, period=OCTAVE, **more):
    return Temperament("made", "Made", "the test", tuple(degrees), period, **more)


def meantone():
    notes = names("C C# D Eb E F F# G G# A Bb B")
    degrees = chain_degrees(
        notes,
        names("Eb Bb F C G D A E B F# C# G#"),
        narrow=COMMAS["syntonic"] ** Fraction(1, 4),
        period=OCTAVE,
    )
    return made(degrees, notes=notes)


def test_degrees_repeat_at_the_period_both_ways():
    just = made(ratio_degrees([Fraction(1), Fraction(9, 8), Fraction(3, 2)]))
    assert [just.interval(k).fraction for k in (-2, -1, 0, 1, 2, 3, 4, 8)] == [
        Fraction(9, 16),
        Fraction(3, 4),
        1,
        Fraction(9, 8),
        Fraction(3, 2),
        2,
        Fraction(9, 4),
        6,
    ]
    assert just.last_degree is None


def test_a_period_of_three_is_no_octave():
    tritave = equal(13, period=3)
    assert tritave.interval(13).fraction == 3
    assert tritave.interval(-13).fraction == Fraction(1, 3)
    # 1200 log2(3) / 13
    assert tritave.cents(1) == pytest.approx(146.3042308358, abs=1e-10)


def test_a_row_without_a_repeat_ends():
    short = made(ratio_degrees([Fraction(1), Fraction(9, 8), Fraction(4, 3)]), period=None)
    assert short.last_degree == 2
    assert short.interval(2).fraction == Fraction(4, 3)
    for outside in (3, -1):
        with pytest.raises(PitchError, match=f"has degrees 0 to 2; there is no degree {outside}"):
            short.interval(outside)


def test_a_rule_never_ends_and_goes_both_ways():
    rule = made((UNISON,), period=None, step=rule_step(Fraction(1, 18)))
    assert rule.last_degree is None
    assert rule.interval(200).fraction == Fraction(18, 17) ** 200
    assert rule.interval(-1).fraction == Fraction(17, 18)


@pytest.mark.parametrize(
    ("ratios", "period", "said"),
    [
        (["9/8", "3/2"], 2, "degree 0 is the open string"),
        ([], 2, "degree 0 is the open string"),
        (["1", "3/2", "4/3"], 2, r"degree 2 \(498.045 cents\) does not lie above degree 1"),
        (["1", "3/2", "3/2"], 2, "does not lie above"),
        (["1", "3/2", "2"], 2, "the period itself is left out"),
        (["1"], 1, "its ratio is above 1"),
    ],
)
def test_degrees_rise_from_unison_to_below_the_period(ratios, period, said):
    with pytest.raises(PitchError, match=said):
        made(ratio_degrees([Fraction(r) for r in ratios]), period=Interval.of(period))


def test_names_fit_the_degrees():
    degrees = ratio_degrees([Fraction(1), Fraction(3, 2)])
    with pytest.raises(PitchError, match="3 note names do not fit 2 degrees"):
        made(degrees, notes=names("C E G"))
    with pytest.raises(PitchError, match="the note name C stands twice"):
        made(degrees, notes=names("C C"))
    with pytest.raises(PitchError, match="needs a period"):
        made(degrees, period=None, notes=names("C G"))
    with pytest.raises(PitchError, match="equal steps"):
        made((UNISON,), step=OCTAVE)


@pytest.mark.parametrize(
    ("note", "degree"),
    [("C4", 0), ("B3", -1), ("C#4", 1), ("A4", 9), ("G2", -17), ("Eb5", 15), ("E4 -50c", 4)],
)
def test_notes_of_a_keyed_record_have_degrees(note, degree):
    assert meantone().degree_of(read_note(note)) == degree


def test_spelled_notes_fall_in_the_octave_they_are_written_in():
    flats = made(meantone().degrees, notes=names("C Db D Eb Fb F Gb G Ab A Bb Cb"))
    assert flats.degree_of(read_note("Cb4")) == -1
    assert flats.degree_of(read_note("Cb5")) == 11
    sharps = made(meantone().degrees, notes=names("B# C# D D# E E# F# G G# A A# B"))
    assert sharps.degree_of(read_note("B#4")) == 0
    assert sharps.degree_of(read_note("B#3")) == -12
    assert sharps.degree_of(read_note("C#5")) == 1
    assert sharps.degree_of(read_note("B4")) == -1


def test_a_record_on_another_note_than_c_counts_octave_numbers_from_c():
    on_d = meantone().keyed_from(NoteName("D"))
    assert [str(n) for n in on_d.notes] == [
        "D",
        "D#",
        "E",
        "F",
        "F#",
        "G",
        "G#",
        "A",
        "A#",
        "B",
        "C",
        "C#",
    ]
    assert on_d.degree_of(read_note("D4")) == 0
    assert on_d.degree_of(read_note("C4")) == -2
    assert on_d.degree_of(read_note("C5")) == 10
    assert on_d.degree_of(read_note("B4")) == 9


def test_a_spelling_outside_the_chain_names_the_spellings_there_are():
    with pytest.raises(PitchError) as caught:
        meantone().degree_of(read_note("Gb3"))
    assert str(caught.value) == (
        "made has no Gb; its notes are Eb Bb F C G D A E B F# C# G#; "
        "F# and Gb are different notes in an open chain"
    )


def test_an_unkeyed_record_knows_no_notes():
    with pytest.raises(PitchError, match="knows no notes"):
        equal(12).degree_of(read_note("C4"))


def test_an_unkeyed_record_takes_a_key_and_then_every_spelling():
    on_d = equal(12).keyed_from(NoteName("D"))
    assert on_d.keyed
    assert str(on_d.notes[0]) == "D"
    assert on_d.degree_of(read_note("F#4")) == on_d.degree_of(read_note("Gb4")) == 4
    assert on_d.degree_of(read_note("Cb4")) == on_d.degree_of(read_note("B3")) == -3
    assert on_d.wolf is None
    assert [str(n) for n in equal(12).keyed_from(NoteName("C")).notes] == (
        ["C", "C#", "D", "Eb", "E", "F", "F#", "G", "G#", "A", "Bb", "B"]
    )


def test_a_moved_unkeyed_record_stays_open_to_every_spelling():
    moved = equal(12).keyed_from(NoteName("D")).keyed_from(NoteName("C"))
    assert moved.degree_of(read_note("Gb4")) == 6


@pytest.mark.parametrize("temperament", [equal(19), equal(13, period=3)])
def test_only_twelve_notes_take_a_key(temperament):
    with pytest.raises(PitchError, match=r"a key moves a record of 12 notes .* has 1[39] notes"):
        temperament.keyed_from(NoteName("D"))
    rule = made((UNISON,), period=None, step=rule_step(Fraction(1, 18)))
    with pytest.raises(PitchError, match="made has no period"):
        rule.keyed_from(NoteName("D"))


def test_the_wolf_is_the_fifth_that_is_left():
    wolf = meantone().wolf
    assert str(wolf) == "G#-Eb"
    # 128/125 wider than the others: a diesis of 41.059 cents above 696.578.
    assert wolf.cents == pytest.approx(737.637, abs=5e-4)
    assert wolf.wide_cents == pytest.approx(35.682, abs=5e-4)
    assert str(meantone().keyed_from(NoteName("D")).wolf) == "A#-F"
    assert len(meantone().fifths) == 12
    assert all(f.cents == pytest.approx(696.578, abs=5e-4) for f in meantone().fifths[:-1])


def test_names_that_are_no_chain_have_no_fifths():
    gapped = made(ratio_degrees([Fraction(1), Fraction(5, 4)]), notes=names("C E"))
    assert gapped.fifths == ()
    assert gapped.wolf is None
    assert equal(12).fifths == ()


def test_a_stretched_octave_may_be_keyed():
    stretched = Interval.of_cents(1203)
    keyed = made([stretched ** Fraction(k, 12) for k in range(12)], period=stretched).keyed_from(
        NoteName("A")
    )
    assert keyed.cents(keyed.degree_of(read_note("A5"))) == pytest.approx(1203, abs=1e-9)
