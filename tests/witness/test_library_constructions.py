"""What each record of the library is known for, worked out here from fractions and mpmath alone."""

from fractions import Fraction
from itertools import pairwise

import mpmath
import pytest

from layout.job.records import library_names, load_library_record

LIMMA, COMMA = Fraction(256, 243), Fraction(531441, 524288)
SYNTONIC, CHROMA = Fraction(81, 80), Fraction(25, 24)
CIRCULATING = {
    # by how many cents each fifth is narrow: parts of the Pythagorean comma, as written here
    "werckmeister-3": {"C-G": 4, "G-D": 4, "D-A": 4, "B-F#": 4},
    "vallotti": {"F-C": 6, "C-G": 6, "G-D": 6, "D-A": 6, "A-E": 6, "E-B": 6},
    "young-2": {"C-G": 6, "G-D": 6, "D-A": 6, "A-E": 6, "E-B": 6, "B-F#": 6},
    "lambert": {"F-C": 7, "C-G": 7, "G-D": 7, "D-A": 7, "A-E": 7, "E-B": 7, "B-F#": 7},
    "kellner": {"C-G": 5, "G-D": 5, "D-A": 5, "A-E": 5, "B-F#": 5},
    "lehman": {
        "F-C": 6,
        "C-G": 6,
        "G-D": 6,
        "D-A": 6,
        "A-E": 6,
        "C#-G#": 12,
        "G#-Eb": 12,
        "Eb-Bb": 12,
        "Bb-F": -12,
    },
}

KNOWN = """
    equal-12 equal-17 equal-19 equal-22 equal-24 equal-31 equal-34 equal-41 equal-53 equal-72
    pythagorean meantone-third-comma meantone-two-sevenths-comma meantone-quarter-comma
    meantone-fifth-comma meantone-sixth-comma meantone-sixth-pythagorean
    werckmeister-3 kirnberger-3 vallotti young-1 young-2 lambert kellner lehman just-12
    rule-of-18 mersenne-semitone strahle dowland-1610
    safi-al-din-17 arel-ezgi-uzdilek baglama-17 sruti-22 dulcimer-just
    bohlen-pierce-equal bohlen-pierce-just alpha beta gamma
"""


def test_no_record_is_lost():
    assert set(KNOWN.split()) <= set(library_names())


def cents(ratio):
    return float(1200 * mpmath.log(mpmath.mpf(ratio.numerator) / ratio.denominator, 2))


def fifths_up(place):
    """So many pure fifths up or down, brought back into one octave."""
    ratio = Fraction(3, 2) ** place
    while not 1 <= ratio < 2:
        ratio *= 2 if ratio < 1 else Fraction(1, 2)
    return ratio


def steps(name):
    record = load_library_record(name)
    return [
        above.fraction / below.fraction
        for below, above in pairwise([*record.degrees, record.period])
    ]


@pytest.mark.parametrize("name", CIRCULATING)
def test_each_fifth_of_a_circle(name):
    found = {str(fifth): -fifth.wide_cents for fifth in load_library_record(name).fifths}
    assert len(found) == 12
    parts = CIRCULATING[name]
    assert set(parts) <= set(found)
    for fifth, narrow in found.items():
        expected = cents(COMMA) / parts[fifth] if fifth in parts else 0
        assert narrow == pytest.approx(expected, abs=1e-9), fifth


@pytest.mark.parametrize("name", [*CIRCULATING, "young-1", "kirnberger-3"])
def test_a_circle_closes_after_seven_octaves(name):
    record = load_library_record(name)
    assert sum(fifth.cents for fifth in record.fifths) == pytest.approx(8400, abs=1e-8)
    assert record.wolf is None


@pytest.mark.parametrize(
    ("name", "degree", "ratio"),
    [
        ("pythagorean", 1, "2187/2048"),
        ("pythagorean", 3, "32/27"),
        ("meantone-third-comma", 9, "5/3"),
        ("meantone-two-sevenths-comma", 1, "25/24"),
        ("meantone-quarter-comma", 4, "5/4"),
        ("meantone-fifth-comma", 11, "15/8"),
        ("meantone-sixth-comma", 6, "45/32"),
        ("meantone-sixth-pythagorean", 6, "1024/729"),
    ],
)
def test_the_interval_a_meantone_keeps_exact(name, degree, ratio):
    assert load_library_record(name).interval(degree).fraction == Fraction(ratio)


def test_the_two_sixth_commas_differ_by_a_part_of_the_schisma():
    one, other = (
        load_library_record(name).interval(7)
        for name in ("meantone-sixth-comma", "meantone-sixth-pythagorean")
    )
    assert ((one / other) ** 6).fraction == COMMA / SYNTONIC


def test_young_s_second_is_vallotti_s_from_a_fifth_higher():
    young, vallotti = load_library_record("young-2"), load_library_record("vallotti")
    for degree in range(12):
        assert young.interval(degree) == vallotti.interval(degree + 5) / vallotti.interval(5)
    assert any(young.interval(k) != vallotti.interval(k) for k in range(12))


def test_safi_al_din_steps_by_limma_and_comma():
    found = steps("safi-al-din-17")
    assert set(found) == {LIMMA, COMMA}
    assert (found.count(LIMMA), found.count(COMMA)) == (12, 5)
    whole_tone = [LIMMA, LIMMA, COMMA]
    assert found[:7] == [*whole_tone, *whole_tone, LIMMA]
    assert found[7:14] == found[:7]
    assert found[14:] == whole_tone


def test_twenty_four_notes_of_turkish_theory_are_one_chain():
    record = load_library_record("arel-ezgi-uzdilek")
    chain = {fifths_up(place) for place in range(-12, 12)}
    assert {degree.fraction for degree in record.degrees} == chain
    assert set(steps(record.name)) == {LIMMA, COMMA, LIMMA / COMMA}


def test_srutis_have_three_sizes():
    found = steps("sruti-22")
    sizes = {size: found.count(size) for size in (LIMMA, SYNTONIC, CHROMA)}
    # ten, seven and five: 10 x 81/80, 7 x 256/243 and 5 x 25/24 make an octave
    assert sizes == {SYNTONIC: 10, LIMMA: 7, CHROMA: 5}
    assert len(found) == 22


def test_srutis_are_twelve_fifths_and_ten_neighbours_a_comma_off():
    expected = set()
    for place in range(-5, 7):
        ratio = fifths_up(place)
        expected.add(ratio)
        if place < 0:
            expected.add(ratio * SYNTONIC)
        elif place > 1:
            expected.add(ratio / SYNTONIC)
    assert {degree.fraction for degree in load_library_record("sruti-22").degrees} == expected


def test_the_baglama_has_seventeen_rising_frets():
    ratios = [degree.fraction for degree in load_library_record("baglama-17").degrees]
    assert len(ratios) == 17
    # by hand: the second fourth repeats the first a fifth higher, 3/2 of 18/17 is 27/17
    assert [ratio * Fraction(3, 2) for ratio in ratios[1:4:2]] == [ratios[11], ratios[13]]
    assert ratios[12] == Fraction(3, 2) * ratios[2]


def test_mersenne_s_semitone():
    with mpmath.workdps(50):
        third = 2 / (3 - mpmath.sqrt(2))
        record = load_library_record("mersenne-semitone")
        assert record.cents(1) == pytest.approx(float(300 * mpmath.log(third, 2)), abs=1e-12)
        assert record.interval(4).ratio == pytest.approx(float(third), rel=1e-14)
    # computed: twelve of them overshoot the octave by 5.285 cents
    assert record.cents(12) - 1200 == pytest.approx(5.285, abs=5e-4)
