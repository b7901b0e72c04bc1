"""How does each way of writing a temperament down become exact intervals?

Forms with a list give the degrees of one period; forms without an end give the one step every
degree is a power of. The chain of fifths has a file of its own, ``fifths``.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from layout.errors import PitchError
from layout.pitch.interval import Interval

MOST_EQUAL_STEPS = 1200
"""More equal steps to a period than this are a slip of the pen."""


def equal_degrees(count: int, period: Interval) -> tuple[Interval, ...]:
    """Return ``count`` equal steps of a period: degree k is the period to the power k/count.

    >>> [degree.fraction for degree in equal_degrees(2, Interval.of(9))]
    [Fraction(1, 1), Fraction(3, 1)]
    """
    if not 1 <= count <= MOST_EQUAL_STEPS:
        raise PitchError(f"a period has 1 to {MOST_EQUAL_STEPS} equal steps")
    return tuple(period ** Fraction(k, count) for k in range(count))


def ratio_degrees(ratios: Sequence[Fraction]) -> tuple[Interval, ...]:
    """Return the intervals of exact frequency ratios."""
    return tuple(Interval.of(ratio) for ratio in ratios)


def cents_degrees(cents: Sequence[Fraction]) -> tuple[Interval, ...]:
    """Return the intervals of exact decimal cents."""
    return tuple(Interval.of_cents(size) for size in cents)


def string_degrees(fractions: Sequence[Fraction]) -> tuple[Interval, ...]:
    """Return the intervals of stops at these fractions of the string from the nut.

    >>> [degree.fraction for degree in string_degrees([Fraction(0), Fraction(1, 9)])]
    [Fraction(1, 1), Fraction(9, 8)]
    """
    if any(not 0 <= fraction < 1 for fraction in fractions):
        raise PitchError("a stop lies at 0 or more and at less than 1 of the string")
    return tuple(Interval.of_string_fraction(fraction) for fraction in fractions)


def rule_step(part: Fraction) -> Interval:
    """Return the step of a rule by which each fret takes this part of what is left.

    >>> rule_step(Fraction(1, 18)).fraction
    Fraction(18, 17)
    """
    if not 0 < part < 1:
        raise PitchError("a rule's part lies between 0 and 1: 1/18 of what is left")
    return Interval.of_string_fraction(part)


def cents_step(cents: Fraction) -> Interval:
    """Return a step of so many cents."""
    if cents <= 0:
        raise PitchError("a step of cents rises: it is above 0")
    return Interval.of_cents(cents)
