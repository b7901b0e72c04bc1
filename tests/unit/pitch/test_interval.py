import math
from decimal import Decimal, localcontext
from fractions import Fraction

import pytest

from layout.pitch.interval import UNISON, Interval

SYNTONIC = Interval.of(Fraction(81, 80))


def test_twelve_equal_semitones_are_an_octave_exactly():
    semitone = Interval.of(2) ** Fraction(1, 12)
    assert semitone.fraction is None
    assert (semitone**12).fraction == 2
    assert semitone**12 == Interval.of(2)


def test_four_quarter_comma_fifths_are_two_octaves_and_a_pure_third():
    fifth = Interval.of(Fraction(3, 2)) / SYNTONIC ** Fraction(1, 4)
    assert (fifth**4).fraction == 5


def test_decimal_cents_are_exact():
    assert Interval.of_cents(Fraction("90.22")).cents == 90.22
    assert Interval.of_cents(Fraction("-2400")).fraction == Fraction(1, 4)
    assert Interval.of_cents(Fraction("77.9649896")) ** 1200 == Interval.of(2) ** Fraction(
        "77.9649896"
    )


def test_a_string_fraction_is_what_the_stop_leaves():
    assert Interval.of_string_fraction(Fraction(2, 33)).fraction == Fraction(33, 31)
    assert Interval.of(Fraction(33, 31)).string_fraction == pytest.approx(2 / 33, rel=3e-16)
    assert UNISON.string_fraction == 0
    with pytest.raises(ValueError, match="less than 1"):
        Interval.of_string_fraction(Fraction(1))


def test_a_ratio_is_positive():
    with pytest.raises(ValueError, match="above 0"):
        Interval.of(0)
    with pytest.raises(ValueError, match="above 0"):
        Interval.of(Fraction(-3, 2))


def test_powers_of_primes_above_the_small_ones_are_told_from_rationals():
    squared = Interval.of(1009**2)
    assert squared == Interval.of(1009) ** 2
    assert (squared ** Fraction(1, 2)).fraction == 1009
    assert (Interval.of(1009**12) ** Fraction(1, 12)).fraction == 1009
    assert (Interval.of(1009) ** Fraction(1, 2)).fraction is None
    product = Interval.of(1009 * 10007) ** Fraction(1, 3)
    assert (product / Interval.of(10007) ** Fraction(1, 3)) ** 3 == Interval.of(1009)
    assert product == Interval.of(1009) ** Fraction(1, 3) * Interval.of(10007) ** Fraction(1, 3)
    assert hash(product) == hash(
        Interval.of(1009) ** Fraction(1, 3) * Interval.of(10007) ** Fraction(1, 3)
    )


def test_intervals_compare_by_size_even_when_floats_cannot_tell():
    a = Interval.of(Fraction(10**60 + 1, 10**60))
    assert a > UNISON
    assert not a < UNISON
    assert a >= UNISON
    same = Interval.of(Fraction(10**60 + 1, 10**60))
    assert a <= same
    assert not a < same
    assert a != UNISON
    assert a.cents == pytest.approx(1200 / math.log(2) * 1e-60, rel=1e-14)
    assert UNISON != 1


def test_cents_of_a_small_difference_keep_every_digit():
    # 53 pure fifths less 31 octaves: Mercator's comma.
    comma = Interval.of(Fraction(3, 2)) ** 53 / Interval.of(2) ** 31
    with localcontext(prec=60):
        exact = (Decimal(3**53) / Decimal(2**84)).ln() / Decimal(2).ln() * 1200
    assert comma.cents == float(exact)


def test_cents_of_fractions_of_many_hundred_digits():
    ratio = Fraction(7**1000 + 2, 7**1000 - 2)
    with localcontext(prec=60):
        exact = 4 / (Decimal(7) ** 1000) / Decimal(2).ln() * 1200
    # Too small for a float, but not for what it is a power of.
    assert float(exact) == 0
    many = Interval.of(ratio) ** (7**1000 // 4)
    assert many.nepers == pytest.approx(1.0, rel=1e-13)


def test_a_stop_a_hair_from_the_nut_keeps_its_digits():
    hair = Interval.of_string_fraction(Fraction(1, 10**15))
    assert hair.string_fraction == pytest.approx(1e-15, rel=1e-14)


def test_the_ratio_as_a_float():
    assert Interval.of(Fraction(5, 4)).ratio == pytest.approx(1.25, rel=1e-15)
    assert Interval.of(Fraction(5, 4)).inverse.ratio == pytest.approx(0.8, rel=1e-15)
    assert Interval.of(2) ** 0 == UNISON
