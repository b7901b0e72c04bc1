"""Which units does a maker write, and what are they exactly?

One strict grammar reads every number, ratio and quantity of a job file, so that ``3:2`` is never
sexagesimal and ``012`` never octal. Factors are exact by definition (international inch and
pound, standard gravity).
"""

from __future__ import annotations

import re
from fractions import Fraction

from layout.errors import TextError

MM_PER_INCH = 25.4
"""Exact, by definition of the international inch (1959)."""

NEWTON_PER_POUND_FORCE = 4.4482216152605
"""Exact: 0.45359237 kg times the standard gravity 9.80665 m/s2."""

NEWTON_PER_KILOGRAM_FORCE = 9.80665
"""Exact: standard gravity, 3rd General Conference on Weights and Measures (1901)."""

LENGTH_UNITS_MM = {
    "mm": Fraction(1),
    "cm": Fraction(10),
    "m": Fraction(1000),
    "in": Fraction(254, 10),
    '"': Fraction(254, 10),
    "ft": Fraction(3048, 10),
}
TENSION_UNITS_N = {
    "N": Fraction(1),
    "lb": Fraction("4.4482216152605"),
    "lbf": Fraction("4.4482216152605"),
    "kgf": Fraction("9.80665"),
}
STIFFNESS_UNITS_N = {"N": Fraction(1), "kN": Fraction(1000)}
BENDING_UNITS_N_M2 = {"N m2": Fraction(1), "N mm2": Fraction(1, 10**6)}
UNIT_MASS_UNITS_KG_PER_M = {
    "g/m": Fraction(1, 1000),
    "kg/m": Fraction(1),
    "mg/m": Fraction(1, 10**6),
    "lb/in": Fraction("0.45359237") / Fraction("0.0254"),
}

SPELT_OTHERWISE = {
    "inch": "in",
    "inches": "in",
    "''": "in",
    "Newton": "N",
    "lbs": "lb",
    "kg": "kgf",
}
"""Spellings that people use, and ours."""

_SIGNED = r"[+-]?"
_PLAIN = r"(?:0|[1-9][0-9]{0,14})"
_DECIMAL = re.compile(rf"({_SIGNED}{_PLAIN}(?:\.[0-9]{{1,30}})?)(?:[eE]([+-]?[0-9]{{1,2}}))?")
_FRACTION = re.compile(rf"({_SIGNED})(?:({_PLAIN}) )?({_PLAIN})/([1-9][0-9]{{0,14}})")
_RATIO = re.compile(r"([1-9][0-9]{0,199})(?:[/:]([1-9][0-9]{0,199}))?")


def read_number(text: str) -> Fraction:
    """Read a plain number exactly: decimal, fraction, or whole number and fraction.

    Parameters
    ----------
    text
        ``12``, ``-0.53``, ``3/8``, ``25 1/2`` or ``8.5e-5``.

    Returns
    -------
    Fraction
        The exact value.

    Raises
    ------
    TextError
        For anything else: a decimal comma, a leading zero, words, infinities.

    Examples
    --------
    >>> read_number("25 1/2"), read_number("-0.53")
    (Fraction(51, 2), Fraction(-53, 100))
    >>> read_number("0,53")
    Traceback (most recent call last):
    ...
    layout.errors.TextError: a number has a decimal point; write 0.53

    """
    shown = text.strip()
    if match := _DECIMAL.fullmatch(shown):
        return Fraction(match[1]) * Fraction(10) ** int(match[2] or 0)
    if match := _FRACTION.fullmatch(shown):
        size = int(match[2] or 0) + Fraction(int(match[3]), int(match[4]))
        return -size if match[1] == "-" else size
    if re.fullmatch(rf"{_SIGNED}[0-9]+,[0-9]+", shown):
        raise TextError("a number has a decimal point", f"write {shown.replace(',', '.')}")
    if re.fullmatch(rf"{_SIGNED}0[0-9]+(?:\.[0-9]+)?", shown):
        raise TextError("a number has no leading zero", f"write {_without_leading_zeros(shown)}")
    if re.fullmatch(rf"{_SIGNED}\.[0-9]+", shown):
        raise TextError("a number has a digit before its point", f"write {_with_zero(shown)}")
    raise TextError("a number is written like 12, 0.53, 3/8 or 25 1/2")


def _with_zero(text: str) -> str:
    sign = text[0] if text[0] in "+-" else ""
    return f"{sign}0{text.lstrip('+-')}"


def _without_leading_zeros(text: str) -> str:
    sign = text[0] if text[0] in "+-" else ""
    return sign + (text.lstrip("+-").lstrip("0") or "0")


def read_quantity(
    text: str, units: dict[str, Fraction], *, bare: str | None, what: str
) -> Fraction:
    """Read a number with a unit exactly.

    Parameters
    ----------
    text
        Such as ``25.5 in``, ``1 3/8"`` or ``15.7 lb``.
    units
        Unit name to factor.
    bare
        The unit of a number that stands alone; None refuses it.
    what
        What is being read, for the message: ``"a length"``.

    Returns
    -------
    Fraction
        The value in the unit whose factor is 1.

    Raises
    ------
    TextError
        When the number or the unit is not understood, or a unit is missing.

    Examples
    --------
    >>> read_quantity("25,5 in", LENGTH_UNITS_MM, bare="mm", what="a length")
    Traceback (most recent call last):
    ...
    layout.errors.TextError: a number has a decimal point; write 25.5 in

    """
    shown = text.strip()
    names = ", ".join(units)
    match = re.fullmatch(
        r"(.*?[0-9])\s*((?![eE][+-]?[0-9])[A-Za-z\"][A-Za-z0-9/\" ]*)?", shown, re.DOTALL
    )
    if match is None:
        raise TextError(f"{what} is a number with one of the units {names}")
    unit = match[2] and " ".join(match[2].split())
    if unit is None:
        if bare is None:
            raise TextError(f"{what} needs its unit", f"write one of {names} after the number")
        unit = bare
    if unit not in units:
        known = SPELT_OTHERWISE.get(unit)
        raise TextError(
            f"{what} has one of the units {names}", f"write {known}" if known in units else ""
        )
    try:
        return read_number(match[1]) * units[unit]
    except TextError as error:
        written = f" {match[2]}" if match[2] and error.remedy else ""
        raise TextError(error.rule, error.remedy + written) from error


def read_length_mm(text: str, *, bare: str = "mm") -> float:
    """Read a length in millimetres.

    Examples
    --------
    >>> read_length_mm("25 1/2 in"), read_length_mm('1 3/8"'), read_length_mm("628.65")
    (647.7, 34.925, 628.65)

    """
    return float(read_quantity(text, LENGTH_UNITS_MM, bare=bare, what="a length"))


def read_ratio(text: str) -> Fraction:
    """Read an exact ratio such as ``3/2``, ``3:2`` or ``2``.

    Examples
    --------
    >>> read_ratio("3:2")
    Fraction(3, 2)

    """
    match = _RATIO.fullmatch(text.strip())
    if match is None:
        raise TextError("a ratio is two whole numbers such as 3/2 or 3:2, or one such as 2")
    return Fraction(int(match[1]), int(match[2] or 1))


def write_sixty_fourths(length_mm: float) -> tuple[str, float]:
    """Write a length as the nearest 1/64 inch, with what remains of it in mm.

    Examples
    --------
    >>> text, remainder_mm = write_sixty_fourths(35.28)
    >>> text, round(remainder_mm, 4)
    ('1 25/64 in', -0.0419)

    """
    count = round(length_mm / MM_PER_INCH * 64)
    remainder_mm = length_mm - count * MM_PER_INCH / 64
    sign = "-" if count < 0 else ""
    whole, part = divmod(abs(count), 64)
    fraction = Fraction(part, 64)
    words = [str(whole)] if whole or not part else []
    if part:
        words.append(f"{fraction.numerator}/{fraction.denominator}")
    return f"{sign}{' '.join(words)} in", remainder_mm
