from fractions import Fraction

import pytest

from layout.errors import PitchError
from layout.pitch.forms import (
    cents_degrees,
    cents_step,
    equal_degrees,
    ratio_degrees,
    rule_step,
    string_degrees,
)
from layout.pitch.interval import Interval


def test_each_form_is_exact():
    assert equal_degrees(13, Interval.of(3))[5] ** 13 == Interval.of(3**5)
    assert [d.fraction for d in ratio_degrees([Fraction(1), Fraction(16, 15)])] == [
        1,
        Fraction(16, 15),
    ]
    assert cents_degrees([Fraction(0), Fraction("701.955")])[1].cents == 701.955
    assert [d.fraction for d in string_degrees([Fraction(0), Fraction(2, 33), Fraction(1, 9)])] == [
        1,
        Fraction(33, 31),
        Fraction(9, 8),
    ]
    assert rule_step(Fraction(1, 18)).fraction == Fraction(18, 17)
    assert cents_step(Fraction("77.9649896")).cents == 77.9649896


@pytest.mark.parametrize(
    ("make", "said"),
    [
        (lambda: equal_degrees(0, Interval.of(2)), "1 to 1200 equal steps"),
        (lambda: equal_degrees(1201, Interval.of(2)), "1 to 1200 equal steps"),
        (lambda: string_degrees([Fraction(0), Fraction(1)]), "less than 1 of the string"),
        (lambda: string_degrees([Fraction(-1, 9)]), "less than 1 of the string"),
        (lambda: rule_step(Fraction(0)), "between 0 and 1"),
        (lambda: rule_step(Fraction(1)), "between 0 and 1"),
        (lambda: cents_step(Fraction(0)), "above 0"),
    ],
)
def test_what_makes_no_row_is_refused(make, said):
    with pytest.raises(PitchError, match=said):
        make()
