"""Printed frets of a dulcimer against the library's record; see SOURCE.md."""

import csv
from pathlib import Path

import pytest

from layout.job.records import load_library_record
from layout.pitch.targets import string_fractions

with Path(__file__).with_name("places.csv").open(encoding="utf-8") as printed:
    PLACES = [(int(row["fret"]), float(row["from_nut_mm"])) for row in csv.DictReader(printed)]


def test_all_seven_are_here():
    assert [fret for fret, _ in PLACES] == [1, 2, 3, 4, 5, 6, 7]


@pytest.mark.parametrize(("fret", "from_nut_mm"), PLACES)
def test_the_printed_place(fret, from_nut_mm):
    (place,) = string_fractions(load_library_record("dulcimer-just"), [fret])
    assert 711.2 * place == pytest.approx(from_nut_mm, abs=0.005)
