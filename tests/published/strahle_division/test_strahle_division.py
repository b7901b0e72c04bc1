"""Straehle's fractions against the library's record; see SOURCE.md."""

from fractions import Fraction

import pytest

from layout.job.records import load_library_record

PRINTED = {1: "211/199", 2: "109/97", 3: "25/21", 12: "2"}


@pytest.mark.parametrize("stop", PRINTED)
def test_the_printed_ratio(stop):
    assert load_library_record("strahle").interval(stop).fraction == Fraction(PRINTED[stop])


@pytest.mark.parametrize("stop", range(13))
def test_both_ways_to_write_the_rule(stop):
    m = Fraction(stop, 12)
    ratio = load_library_record("strahle").interval(stop).fraction
    assert ratio == (17 + 7 * m) / (17 - 5 * m)
    rest = 1 - m  # the other formula counts from the octave's end
    assert ratio * (24 + 10 * rest) / (24 - 7 * rest) == 2


def test_the_pitches_lie_close_to_equal_steps():
    record = load_library_record("strahle")
    wrong = [float(record.interval(k).ratio / 2 ** (k / 12) - 1) for k in range(13)]
    assert 0.001 < max(abs(error) for error in wrong) < 0.0016
