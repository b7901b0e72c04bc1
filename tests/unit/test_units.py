from fractions import Fraction

import pytest

from layout.errors import TextError
from layout.units import (
    BENDING_UNITS_N_M2,
    LENGTH_UNITS_MM,
    TENSION_UNITS_N,
    UNIT_MASS_UNITS_KG_PER_M,
    read_length_mm,
    read_number,
    read_quantity,
    read_ratio,
    write_sixty_fourths,
)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("12", 12),
        ("-0.53", Fraction(-53, 100)),
        ("3/8", Fraction(3, 8)),
        ("25 1/2", Fraction(51, 2)),
        ("-1 1/4", Fraction(-5, 4)),
        ("8.5e-5", Fraction(85, 10**6)),
        ("0", 0),
    ],
)
def test_numbers_are_read_exactly(text, value) -> None:
    assert read_number(text) == value


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("0,53", "a number has a decimal point; write 0.53"),
        ("012", "a number has no leading zero; write 12"),
        (".5", "a number has a digit before its point; write 0.5"),
        ("-.016", "a number has a digit before its point; write -0.016"),
        ("3:2", "a number is written like 12, 0.53, 3/8 or 25 1/2"),
        ("1/0", "a number is written like 12, 0.53, 3/8 or 25 1/2"),
        ("nan", "a number is written like 12, 0.53, 3/8 or 25 1/2"),
        ("٤", "a number is written like 12, 0.53, 3/8 or 25 1/2"),
    ],
)
def test_what_is_not_a_number_is_told_how_to_be_one(text, message) -> None:
    with pytest.raises(TextError) as caught:
        read_number(text)
    assert str(caught.value) == message


def test_factors_are_those_of_the_definitions() -> None:
    """International yard and pound (1959); standard gravity (1901)."""
    assert LENGTH_UNITS_MM["in"] == Fraction("25.4")
    assert TENSION_UNITS_N["lb"] == Fraction("0.45359237") * Fraction("9.80665")
    assert UNIT_MASS_UNITS_KG_PER_M["lb/in"] * Fraction("0.0254") == Fraction("0.45359237")
    assert BENDING_UNITS_N_M2["N mm2"] == Fraction(1, 10**6)


@pytest.mark.parametrize(
    ("text", "mm"),
    [('1 3/8"', 34.925), ("25.5 in", 647.7), ("65.2 cm", 652.0), ("0.65 m", 650.0), ("3", 3.0)],
)
def test_lengths(text, mm) -> None:
    assert read_length_mm(text) == mm


def test_a_bare_length_is_in_the_unit_of_the_job() -> None:
    assert read_length_mm("25.5", bare="in") == 647.7


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("70", "a tension needs its unit; write one of N, lb, lbf, kgf after the number"),
        ("15 lbs", "a tension has one of the units N, lb, lbf, kgf; write lb"),
        ("15 stone", "a tension has one of the units N, lb, lbf, kgf"),
        ("heavy", "a tension is a number with one of the units N, lb, lbf, kgf"),
    ],
)
def test_a_tension_carries_its_unit(text, message) -> None:
    with pytest.raises(TextError) as caught:
        read_quantity(text, TENSION_UNITS_N, bare=None, what="a tension")
    assert str(caught.value) == message


def test_an_exponent_is_not_a_unit() -> None:
    assert read_quantity("8.5e1 N", TENSION_UNITS_N, bare=None, what="a tension") == 85


def test_ratios() -> None:
    assert (read_ratio("3:2"), read_ratio("16/15"), read_ratio("2")) == (
        Fraction(3, 2),
        Fraction(16, 15),
        2,
    )
    for text in ("0/1", "3:", "-3/2", "1.5"):
        with pytest.raises(TextError):
            read_ratio(text)


@pytest.mark.parametrize(
    ("mm", "text"),
    [(314.325, "12 3/8 in"), (25.4, "1 in"), (0.1, "0 in"), (-12.7, "-1/2 in"), (25.3, "1 in")],
)
def test_the_nearest_sixty_fourth(mm, text) -> None:
    nearest, rest = write_sixty_fourths(mm)
    assert nearest == text
    assert abs(rest) <= 25.4 / 128
