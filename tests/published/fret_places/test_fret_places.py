"""Printed fret distances against the library's records; see SOURCE.md."""

import csv
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from layout.job.records import load_library_record
from layout.pitch.interval import Interval
from layout.pitch.targets import string_fractions

with Path(__file__).with_name("psalmodikon.csv").open(encoding="utf-8") as printed:
    PSALMODIKON = [(int(r["fret"]), float(r["from_nut_in"])) for r in csv.DictReader(printed)]


@pytest.mark.parametrize(("fret", "from_nut_in"), PSALMODIKON)
def test_the_psalmodikon_of_34_inches(fret, from_nut_in):
    (fraction,) = string_fractions(load_library_record("equal-12"), [fret])
    assert 34 * fraction == pytest.approx(from_nut_in, abs=0.0002)


def test_the_first_fret_of_the_rule_of_eighteen_is_an_eighteenth():
    assert load_library_record("rule-of-18").interval(1).fraction == 1 / (1 - Fraction(1, 18))


def test_the_octave_of_the_rule_of_eighteen_is_short():
    record = load_library_record("rule-of-18")
    assert 1200 - record.cents(12) == pytest.approx(12.545, abs=0.0005)
    assert 650 * string_fractions(record, [12])[0] == pytest.approx(322.636, abs=0.0005)


def test_each_fret_of_the_rule_takes_the_same_part_of_what_is_left():
    places = string_fractions(load_library_record("rule-of-18"), range(25))
    np.testing.assert_allclose(np.diff(places), (1 - places[:-1]) / 18, rtol=1e-13)


def test_twelve_limmas_and_five_commas_are_an_octave():
    limma = Interval.of(Fraction(256, 243))
    comma = Interval.of(Fraction(531441, 524288))
    assert (limma**12 * comma**5).fraction == 2
