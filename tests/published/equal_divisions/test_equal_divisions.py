"""Printed figures of equal divisions against the library's records; see SOURCE.md."""

import csv
import math
from pathlib import Path

import pytest

from layout.job.records import library_names, load_library_record

with Path(__file__).with_name("fifty_three.csv").open(encoding="utf-8") as printed:
    FIFTY_THREE = [(int(row["degree"]), float(row["cents"])) for row in csv.DictReader(printed)]
FIFTH_CENTS = 1200 * math.log2(1.5)


@pytest.mark.parametrize(("degree", "cents"), FIFTY_THREE)
def test_degrees_of_fifty_three(degree, cents):
    assert load_library_record("equal-53").cents(degree) == pytest.approx(cents, abs=0.005)


@pytest.mark.parametrize(("count", "semitones"), [(53, -0.00068), (41, 0.00484), (17, 0.03927)])
def test_the_fifth_that_bosanquet_weighs(count, semitones):
    record = load_library_record(f"equal-{count}")
    errors = [(record.cents(degree) - FIFTH_CENTS) / 100 for degree in range(count)]
    assert min(errors, key=abs) == pytest.approx(semitones, abs=5e-6)


@pytest.mark.parametrize("count", [12, 17, 19, 22, 24, 31, 34, 41, 53, 72])
def test_every_equal_division_has_its_count_and_its_octave(count):
    assert f"equal-{count}" in library_names()
    record = load_library_record(f"equal-{count}")
    assert len(record.degrees) == count
    assert record.interval(count).fraction == 2
    assert record.interval(1) ** count == record.interval(count)
