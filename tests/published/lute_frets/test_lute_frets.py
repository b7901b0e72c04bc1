"""Dowland's ratios against the library's record; see SOURCE.md."""

from fractions import Fraction

import pytest

from layout.errors import PitchError
from layout.job.records import load_library_record

RATIOS = ["33/31", "9/8", "33/28", "264/211", "4/3", "24/17", "3/2", "99/62", "27/16", "99/56"]


@pytest.mark.parametrize(("fret", "ratio"), list(enumerate(RATIOS, start=1)))
def test_the_ratio_of_a_fret(fret, ratio):
    assert load_library_record("dowland-1610").interval(fret).fraction == Fraction(ratio)


def test_there_is_no_eleventh_fret():
    record = load_library_record("dowland-1610")
    assert record.last_degree == len(RATIOS)
    with pytest.raises(PitchError, match="does not repeat and has degrees 0 to 10"):
        record.interval(11)
