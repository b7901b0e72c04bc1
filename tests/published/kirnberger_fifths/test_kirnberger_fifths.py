"""Kirnberger's printed fifths against the library's record; see SOURCE.md."""

import math
from fractions import Fraction

import pytest

from layout.job.records import load_library_record

PRINTED = {
    "C-G": Fraction(323) / 216,
    "G-D": Fraction(322) / (215 + Fraction(1, 3)),
    "D-A": Fraction(321) / (214 + Fraction(2, 3)),
    "A-E": Fraction(320) / 214,
}


def cents(ratio):
    return 1200 * math.log2(ratio)


def test_the_printed_fifths_make_a_pure_third():
    assert math.prod(PRINTED.values()) == 5


def test_the_record_s_third_is_exactly_pure():
    assert load_library_record("kirnberger-3").interval(4).fraction == Fraction(5, 4)


@pytest.mark.parametrize("name", PRINTED)
def test_each_printed_fifth_is_the_record_s_to_a_hair(name):
    fifths = {str(fifth): fifth.cents for fifth in load_library_record("kirnberger-3").fifths}
    assert fifths[name] == pytest.approx(cents(PRINTED[name]), abs=0.03)


def test_the_other_eight_are_pure_but_for_the_schisma():
    # algebra: 32805/32768 is 1.954 cents
    narrow = {str(f): -f.wide_cents for f in load_library_record("kirnberger-3").fifths}
    for name in set(narrow) - set(PRINTED) - {"F#-C#"}:
        assert abs(narrow[name]) < 1e-9
    assert narrow["F#-C#"] == pytest.approx(cents(Fraction(32805, 32768)), abs=1e-9)
