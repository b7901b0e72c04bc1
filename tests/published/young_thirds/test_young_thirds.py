"""Printed thirds of Young's first temperament against the library's record; see SOURCE.md."""

import csv
from pathlib import Path

import pytest

from layout.job.records import load_library_record

with Path(__file__).with_name("major_thirds.csv").open(encoding="utf-8") as printed:
    THIRDS = [(row["key"], float(row["cents"])) for row in csv.DictReader(printed)]
SEMITONES = {"C": 0, "G": 7, "D": 2, "A": 9, "E": 4, "B": 11, "F#": 6}


def third_cents(name, key):
    record = load_library_record(name)
    return record.cents(SEMITONES[key] + 4) - record.cents(SEMITONES[key])


def test_every_printed_third_is_here():
    assert [key for key, _ in THIRDS] == list(SEMITONES)


@pytest.mark.parametrize(("key", "cents"), THIRDS)
def test_the_printed_third(key, cents):
    assert third_cents("young-1", key) == pytest.approx(cents, abs=0.005)


def test_the_second_temperament_is_another():
    # A check of the check: the two differ by more than the printed digit on most keys.
    other = [abs(third_cents("young-2", key) - cents) > 0.1 for key, cents in THIRDS]
    assert sum(other) >= 4
