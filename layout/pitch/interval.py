"""What is the exact ratio of two pitches, and how many cents is it?

Every interval of a temperament is a product of rational powers of rational numbers: a just third
5/4, an equal semitone 2^(1/12), a quarter-comma fifth (3/2) (81/80)^(-1/4), 90.22 cents
2^(9022/120000). Such products are kept exactly and turned into floats at the very end.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal, localcontext
from fractions import Fraction
from functools import lru_cache, reduce
from operator import mul

CENTS_PER_OCTAVE = 1200
"""By definition: Ellis, appendix to Helmholtz, On the Sensations of Tone (1885)."""

_SMALL_PRIMES = tuple(n for n in range(2, 256) if all(n % d for d in range(2, math.isqrt(n) + 1)))
"""Divided out of every number; what is left over is told apart by common divisors alone."""

_FIRST_DIGITS = 40
"""Decimal digits of the first logarithm; doubled for as long as the sum cancels."""


@dataclass(frozen=True, slots=True, eq=False)
class Interval:
    """A frequency ratio: the exact product of pairwise coprime whole numbers to rational powers.

    Attributes
    ----------
    factors
        ``(base, exponent)`` pairs in rising order of base. No base is a power of a smaller whole
        number and no exponent is 0, so unison has no factors and the interval is a fraction
        exactly when every exponent is whole.

    Notes
    -----
    Make one with `Interval.of`, `Interval.of_cents` or `Interval.of_string_fraction`.

    Examples
    --------
    >>> limma, comma = Interval.of(Fraction(256, 243)), Interval.of(Fraction(531441, 524288))
    >>> (limma**12 * comma**5).fraction
    Fraction(2, 1)

    """

    factors: tuple[tuple[int, Fraction], ...] = ()

    @classmethod
    def of(cls, ratio: Fraction | int) -> Interval:
        """Make the interval of an exact, positive frequency ratio."""
        return _interval_of(Fraction(ratio))

    @classmethod
    def of_cents(cls, cents: Fraction | int) -> Interval:
        """Make the interval of exactly so many cents.

        >>> Interval.of_cents(1200) == Interval.of(2)
        True
        """
        return cls.of(2) ** Fraction(cents, CENTS_PER_OCTAVE)

    @classmethod
    def of_string_fraction(cls, fraction: Fraction) -> Interval:
        """Make the interval of a stop that lies this fraction of the string from the nut.

        >>> Interval.of_string_fraction(Fraction(1, 3)).fraction
        Fraction(3, 2)
        """
        if not 0 <= fraction < 1:
            raise ValueError("a stop lies at 0 or more and at less than 1 of the string")
        return cls.of(1 / (1 - fraction))

    def __mul__(self, other: Interval) -> Interval:
        return Interval(_multiplied((*self.factors, *other.factors)))

    def __truediv__(self, other: Interval) -> Interval:
        return self * other.inverse

    def __pow__(self, power: Fraction | int) -> Interval:
        if not power:
            return UNISON
        return Interval(tuple((base, exponent * power) for base, exponent in self.factors))

    @property
    def inverse(self) -> Interval:
        """The same interval downward."""
        return Interval(tuple((base, -exponent) for base, exponent in self.factors))

    @property
    def fraction(self) -> Fraction | None:
        """The exact frequency ratio, or None where it is irrational."""
        if any(exponent.denominator != 1 for _, exponent in self.factors):
            return None
        powers = (Fraction(base) ** exponent.numerator for base, exponent in self.factors)
        return reduce(mul, powers, Fraction(1))

    @property
    def nepers(self) -> float:
        """Natural logarithm of the frequency ratio, to the last float digit."""
        return float(_natural_logarithm(self.factors))

    @property
    def cents(self) -> float:
        """Size in cents, to the last float digit.

        >>> Interval.of(Fraction(3, 2)).cents
        701.9550008653874
        """
        log = _natural_logarithm(self.factors)
        with localcontext(prec=_FIRST_DIGITS):
            return float(log * CENTS_PER_OCTAVE / Decimal(2).ln())

    @property
    def ratio(self) -> float:
        """The frequency ratio as a float."""
        return math.exp(self.nepers)

    @property
    def string_fraction(self) -> float:
        """Where the stop lies, as a fraction of the string from the nut: 1 - 1/ratio.

        >>> Interval.of(Fraction(18, 17)).string_fraction * 18
        1.0
        """
        return -math.expm1(-self.nepers)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Interval):
            return NotImplemented
        return not (self / other).factors

    def __hash__(self) -> int:
        # Left-over bases may be split differently in equal intervals; small primes never are.
        return hash(tuple(pair for pair in self.factors if pair[0] <= _SMALL_PRIMES[-1]))

    def __lt__(self, other: Interval) -> bool:
        return (self / other).nepers < 0

    def __le__(self, other: Interval) -> bool:
        return (self / other).nepers <= 0

    def __gt__(self, other: Interval) -> bool:
        return (self / other).nepers > 0

    def __ge__(self, other: Interval) -> bool:
        return (self / other).nepers >= 0


@lru_cache(maxsize=4096)
def _interval_of(ratio: Fraction) -> Interval:
    if ratio <= 0:
        raise ValueError("a frequency ratio is above 0")
    above, below = _factored(ratio.numerator), _factored(ratio.denominator)
    pairs = [*above.items(), *((base, -exponent) for base, exponent in below.items())]
    return Interval(_multiplied(pairs))


def _factored(number: int) -> dict[int, Fraction]:
    """Split a whole number into its small primes and one left-over number."""
    factors: dict[int, Fraction] = {}
    for prime in _SMALL_PRIMES:
        count = 0
        while number % prime == 0:
            number //= prime
            count += 1
        if count:
            factors[prime] = Fraction(count)
        if number == 1:
            return factors
    factors[number] = Fraction(1)
    return factors


def _multiplied(pairs: Iterable[tuple[int, Fraction]]) -> tuple[tuple[int, Fraction], ...]:
    """Gather factors so that bases are coprime and not powers, and exponents are not 0."""
    small: dict[int, Fraction] = {}
    large: dict[int, Fraction] = {}
    for base, exponent in pairs:
        kept = small if base <= _SMALL_PRIMES[-1] else large
        kept[base] = kept.get(base, Fraction(0)) + exponent
    if large:
        small.update(_without_powers(_made_coprime(large)))
    return tuple(sorted((base, exponent) for base, exponent in small.items() if exponent))


def _made_coprime(factors: Mapping[int, Fraction]) -> dict[int, Fraction]:
    """Split bases at their common divisors until no two share any."""
    coprime: dict[int, Fraction] = {}
    waiting = [(base, exponent) for base, exponent in factors.items() if exponent]
    while waiting:
        base, exponent = waiting.pop()
        if base == 1:
            continue
        for other in coprime:
            if (shared := math.gcd(base, other)) > 1:
                other_exponent = coprime.pop(other)
                waiting += [
                    (shared, exponent + other_exponent),
                    (base // shared, exponent),
                    (other // shared, other_exponent),
                ]
                break
        else:
            coprime[base] = exponent
    return coprime


def _without_powers(factors: Mapping[int, Fraction]) -> dict[int, Fraction]:
    """Write every base that is a power as its root."""
    rooted: dict[int, Fraction] = {}
    for base, exponent in factors.items():
        root, power = _root(base)
        rooted[root] = exponent * power
    return rooted


@lru_cache(maxsize=4096)
def _root(number: int) -> tuple[int, int]:
    """Return the root and power of a number without small primes: 1018081 is 1009 to the 2nd."""
    # The smallest possible root is 257, so the power is below bits / 8.
    for power in range(2, number.bit_length() // 8 + 1):
        if all(power % prime for prime in _SMALL_PRIMES if prime * prime <= power):
            root = _nearest_root(number, power)
            if root**power == number:
                innermost, rest = _root(root)
                return innermost, rest * power
    return number, 1


def _nearest_root(number: int, power: int) -> int:
    """Return the whole-number root, rounded down, by Newton's iteration from above."""
    root = 1 << -(-number.bit_length() // power)
    while True:
        closer = ((power - 1) * root + number // root ** (power - 1)) // power
        if closer >= root:
            return root
        root = closer


def _natural_logarithm(factors: tuple[tuple[int, Fraction], ...]) -> Decimal:
    """Add the logarithms of the factors, with as many digits as their cancelling asks for."""
    digits = _FIRST_DIGITS
    while True:
        with localcontext(prec=digits):
            terms = [
                _logarithm_of(base, digits) * exponent.numerator / exponent.denominator
                for base, exponent in factors
            ]
            total = sum(terms, Decimal(0))
            largest = max((abs(term) for term in terms), default=Decimal(0))
            # 20 digits stay good; unison has no terms, and nothing else adds up to 0.
            if abs(total) >= largest.scaleb(20 - digits):
                return total
        digits *= 2


@lru_cache(maxsize=4096)
def _logarithm_of(base: int, digits: int) -> Decimal:
    with localcontext(prec=digits):
        return Decimal(base).ln()


UNISON = Interval()
"""The same pitch: ratio 1."""

PURE_FIFTH = Interval.of(Fraction(3, 2))
"""The fifth that does not beat: ratio 3/2."""
