"""Which pitches does a chain of tempered fifths make?

A chain such as Eb Bb F C G D A E B F# C# G# is tuned fifth by fifth; each is pure, or narrowed
by some part of a comma. Twelve fifths overshoot seven octaves by the Pythagorean comma; a chain
of twelve notes has eleven fifths and leaves the twelfth to whatever is left.

References
----------
Barbour, Tuning and Temperament (1951), chapters 2, 3 and 7: the commas and how they are shared.

"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from fractions import Fraction
from functools import reduce
from itertools import accumulate, pairwise
from operator import mul
from typing import Literal

from layout.errors import PitchError, TextError
from layout.pitch.interval import PURE_FIFTH, UNISON, Interval
from layout.pitch.notes import NoteName
from layout.units import read_number

COMMAS = {
    "syntonic": Interval.of(Fraction(81, 80)),
    "pythagorean": Interval.of(Fraction(531441, 524288)),
    "schisma": Interval.of(Fraction(32805, 32768)),
}
"""Four fifths less two octaves and a third; twelve fifths less seven octaves; their difference."""

Rest = Literal["rest"]
Pair = tuple[NoteName, NoteName]
Narrowing = Interval | Mapping[Pair, Interval | Rest]
"""One narrowing for every fifth of the chain, or one a fifth; ``rest`` shares what is left."""

_NARROWING = re.compile(r"(\S+(?: \d+/\d+)?) ([a-z]+)")


def read_narrowing(text: str) -> Interval:
    """Read by how much a fifth is narrowed; a negative part makes it wide.

    Parameters
    ----------
    text
        ``1/4 syntonic``, ``-1/12 pythagorean``, ``1 schisma`` or ``0``.

    Raises
    ------
    TextError
        For anything else.

    Examples
    --------
    >>> round(read_narrowing("1/4 syntonic").cents, 3)
    5.377

    """
    shown = text.strip()
    if shown == "0":
        return UNISON
    match = _NARROWING.fullmatch(shown)
    if match is None or match[2] not in COMMAS:
        raise TextError(
            "a fifth is narrowed by a part of a comma: 1/4 syntonic, -1/12 pythagorean, 1 schisma"
        )
    part = read_number(match[1])
    if abs(part) > 1:
        raise TextError("a fifth is narrowed or widened by one comma at most")
    return COMMAS[match[2]] ** part


def chain_degrees(
    notes: Sequence[NoteName], chain: Sequence[NoteName], *, narrow: Narrowing, period: Interval
) -> tuple[Interval, ...]:
    """Return the interval of every note above the first, within one period.

    Parameters
    ----------
    notes
        The notes in order of pitch; the first is degree 0.
    chain
        The same notes in order of fifths.
    narrow
        By how much each fifth is narrower than 3/2. Fifths a mapping leaves out are pure. The
        fifth from the last note of twelve back to the first may be named: it must agree with
        what the other eleven leave.
    period
        The interval notes are brought back by, 2 as a rule.

    Raises
    ------
    PitchError
        When the chain is no chain, its notes are not those of ``notes``, a pair is no fifth of
        it, or the closing fifth does not close the circle.

    """
    check_chain(notes, chain)
    inner = list(pairwise(chain))
    narrowings = (
        dict.fromkeys(inner, narrow)
        if isinstance(narrow, Interval)
        else _known_narrowings(chain, narrow, period)
    )
    sizes = [PURE_FIFTH / narrowings.get(pair, UNISON) for pair in inner]
    heights = dict(zip(chain, accumulate(sizes, mul, initial=UNISON), strict=True))
    first = heights[notes[0]]
    return tuple(_within_period(heights[note] / first, period) for note in notes)


def check_chain(notes: Sequence[NoteName], chain: Sequence[NoteName]) -> None:
    """Check that a chain rises by fifths and holds the names of ``notes``, no more and no less.

    Raises
    ------
    PitchError
        Naming the first place that is wrong.

    """
    for lower, upper in pairwise(chain):
        if upper.fifths - lower.fifths != 1:
            raise PitchError(
                f"a chain rises by fifths; after {lower} comes {lower.transposed(1)}, not {upper}"
            )
    if missing := [str(name) for name in notes if name not in chain]:
        raise PitchError(f"the chain has no {' '.join(missing)}, which the notes name")
    if unused := [str(name) for name in chain if name not in notes]:
        raise PitchError(f"the notes have no {' '.join(unused)}, which the chain names")


def _known_narrowings(
    chain: Sequence[NoteName], narrow: Mapping[Pair, Interval | Rest], period: Interval
) -> dict[Pair, Interval]:
    """Work out ``rest`` and check the closing fifth, so that every narrowing is known."""
    for pair in narrow:
        check_fifth(pair, chain)
    closing = (chain[-1], chain[0])
    known = {pair: size for pair, size in narrow.items() if isinstance(size, Interval)}
    shared = [pair for pair in narrow if pair not in known]
    if not shared and closing not in known:
        return known
    if len(chain) != 12:
        raise PitchError("rest closes a circle of 12 fifths; this chain has another length")
    left = _comma_of_circle(period) / reduce(mul, known.values(), UNISON)
    if shared:
        return known | dict.fromkeys(shared, left ** Fraction(1, len(shared)))
    if left != UNISON:
        raise PitchError(
            f"the twelve fifths do not close: {left.cents:+.3f} cents are left to narrow; "
            f"leave {closing[0]}-{closing[1]} out or write rest for it"
        )
    return known


def _comma_of_circle(period: Interval) -> Interval:
    """Return by how much twelve pure fifths overshoot the nearest whole number of periods."""
    periods = round(12 * PURE_FIFTH.nepers / period.nepers)
    return PURE_FIFTH**12 / period**periods


def check_fifth(pair: Pair, chain: Sequence[NoteName]) -> None:
    """Check that two names are a fifth of the chain, or close it where it has twelve notes.

    Raises
    ------
    PitchError
        When they are not, or are named from above.

    """
    circle = list(pairwise(chain))
    if len(chain) == 12:
        circle.append((chain[-1], chain[0]))
    if pair in circle:
        return
    lower, upper = pair
    if (upper, lower) in circle:
        raise PitchError(f"a fifth is named from below: {upper}-{lower}, not {lower}-{upper}")
    known = " ".join(f"{a}-{b}" for a, b in circle)
    raise PitchError(f"{lower}-{upper} is no fifth of this chain; its fifths are {known}")


def _within_period(interval: Interval, period: Interval) -> Interval:
    """Return the interval moved by whole periods to lie from unison up to below one period."""
    interval /= period ** int(interval.nepers // period.nepers)
    # The float quotient is off by one period only where the interval is within rounding of one.
    if interval < UNISON:
        return interval * period
    return interval / period if interval >= period else interval
