"""What holds for every temperament, whatever its period and form."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from layout.job.records import load_library_record
from layout.pitch.interval import UNISON, Interval
from layout.pitch.notes import NoteName, name_on_line_of_fifths, read_note, read_note_name
from layout.pitch.targets import stop_fraction, target_cents
from layout.pitch.temperament import Temperament, equal

ratios = st.builds(Fraction, st.integers(1, 4000), st.integers(1, 4000))
powers = st.builds(Fraction, st.integers(-30, 30), st.integers(1, 12))
intervals = st.builds(lambda r, p: Interval.of(r) ** p, ratios, powers)
degrees = st.integers(-60, 60)
TWELVE_NAMED = ["meantone-quarter-comma", "werckmeister-3", "vallotti", "just-12"]


@st.composite
def periodic(draw):
    period = draw(st.sampled_from([Fraction(2), Fraction(3), Fraction(3, 2), Fraction(2003, 1000)]))
    inner = draw(
        st.lists(
            st.fractions(min_value=Fraction(65, 64), max_value=3, max_denominator=64),
            max_size=8,
            unique=True,
        )
    )
    rising = [Fraction(1), *sorted(r for r in inner if r < period)]
    steps = tuple(Interval.of(r) for r in rising)
    return Temperament("drawn", "Drawn", "the test", steps, Interval.of(period))


@given(intervals, intervals, intervals)
def test_intervals_multiply_like_numbers(a, b, c):
    assert a * b == b * a
    assert hash(a * b) == hash(b * a)
    assert (a * b) * c == a * (b * c)
    assert a / a == UNISON
    assert a.inverse.inverse == a
    assert (a * b).cents == pytest.approx(a.cents + b.cents, abs=1e-8)


@given(intervals, powers, powers)
def test_powers_add(a, p, q):
    assert a**p * a**q == a ** (p + q)
    assert (a**p) ** q == a ** (p * q)


@given(ratios)
def test_a_rational_interval_gives_its_fraction_back(ratio):
    assert Interval.of(ratio).fraction == ratio
    assert (Interval.of(ratio) ** Fraction(1, 5) ** 1).cents * 5 == pytest.approx(
        Interval.of(ratio).cents, rel=1e-14, abs=1e-300
    )


@given(intervals, intervals)
def test_intervals_are_ordered_by_cents(a, b):
    assert (a < b) + (a == b) + (a > b) == 1
    if abs(a.cents - b.cents) > 1e-6:
        assert (a < b) == (a.cents < b.cents)


@given(periodic(), degrees)
def test_degrees_repeat_exactly_and_rise(record, degree):
    count = len(record.degrees)
    assert record.interval(degree + count) == record.interval(degree) * record.period
    assert record.interval(degree + 1) > record.interval(degree)


@given(st.integers(1, 60), st.sampled_from([2, 3, Fraction(3, 2)]), degrees, degrees)
def test_equal_steps_add(count, period, a, b):
    record = equal(count, period=period)
    assert record.interval(a) * record.interval(b) == record.interval(a + b)


@given(st.fractions(Fraction(1, 50), Fraction(1, 3), max_denominator=300), degrees, degrees)
def test_a_rule_takes_the_same_part_everywhere(part, a, b):
    step = Interval.of_string_fraction(part)
    record = Temperament("rule", "Rule", "the test", (UNISON,), None, step=step)
    assert record.interval(a) * record.interval(b) == record.interval(a + b)
    # What is left is a difference from 1, so it is compared on the scale of the string.
    left = [1 - record.interval(k).string_fraction for k in (abs(a), abs(a) + 1)]
    assert left[1] == pytest.approx(float(1 - part) * left[0], abs=1e-15)


@given(st.sampled_from(TWELVE_NAMED), st.integers(-8, 9))
def test_a_key_moves_the_names_and_keeps_the_intervals(name, place):
    record = load_library_record(name)
    key = name_on_line_of_fifths(place)
    moved = record.keyed_from(key)
    assert moved.notes[0] == key
    assert moved.degrees == record.degrees
    assert [f.cents for f in moved.fifths] == [f.cents for f in record.fifths]
    assert moved.keyed_from(record.notes[0]) == record


@given(st.sampled_from(TWELVE_NAMED), st.integers(-8, 9), st.integers(0, 8), st.integers(0, 11))
def test_a_degree_lies_near_where_its_note_is_written(name, place, octave, which):
    record = load_library_record(name).keyed_from(name_on_line_of_fifths(place))
    note, first = (
        read_note(f"{n}{o}") for n, o in ((record.notes[which], octave), (record.notes[0], 4))
    )
    cents = record.cents(record.degree_of(note))
    assert cents == pytest.approx(100 * (note.semitone - first.semitone), abs=45)


@given(st.integers(-20, 20), st.integers(-20, 20))
def test_transposing_adds(a, b):
    assert NoteName("C").transposed(a).transposed(b) == NoteName("C").transposed(a + b)
    assert read_note_name("C").transposed(a).fifths == a


@given(
    st.sampled_from(TWELVE_NAMED),
    st.lists(st.integers(-24, 24), min_size=1, max_size=4),
    st.integers(1, 12),
)
def test_targets_from_the_key_are_additive(name, opens, start):
    # What a string sounds at a fret is what a string that begins there sounds open.
    record = load_library_record(name)
    steps = range(1, 25)
    whole = target_cents(record, opens, steps, counted_from="key")
    begun = [degree + start for degree in opens]
    short = target_cents(record, begun, steps, counted_from="key", starts=[start] * len(opens))
    np.testing.assert_allclose(short, whole - whole[:, start - 1 : start], rtol=0, atol=1e-9)


@given(st.lists(st.floats(-2400, 6000), min_size=1, max_size=8))
def test_stop_fractions_undo_into_cents(cents):
    back = -1200 * np.log2(1 - stop_fraction(cents))
    np.testing.assert_allclose(back, cents, rtol=0, atol=1e-9)
