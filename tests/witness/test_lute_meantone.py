"""Straight frets of a lute in quarter-comma meantone: where its strings ask for two places.

The expected places are worked out here from 5^(1/4) fifths alone, without the package; the printed
figures are those of the design's own check list (computed, no published source).
"""

import numpy as np
import pytest

from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.pitch.targets import stop_fraction, target_cents

COURSES = ["G2", "C3", "F3", "A3", "D4", "G4"]
SCALE_MM = 600


def places_mm():
    notes = [read_note(name) for name in COURSES]
    record = load_library_record("meantone-quarter-comma")
    cents = target_cents(record, notes, range(1, 9), counted_from="key")
    return cents, SCALE_MM * stop_fraction(cents)


@pytest.mark.parametrize(
    ("fret", "sharp_mm", "flat_mm"),
    [(1, 25.79, 39.24), (3, 86.41, 98.44), (6, 170.67, 180.74), (8, 216.00, 225.00)],
)
def test_frets_that_clash_by_a_diesis(fret, sharp_mm, flat_mm):
    cents, mm = places_mm()
    assert np.ptp(cents[:, fret - 1]) == pytest.approx(41.06, abs=0.005)
    assert mm[:, fret - 1].min() == pytest.approx(sharp_mm, abs=0.005)
    assert mm[:, fret - 1].max() == pytest.approx(flat_mm, abs=0.005)


@pytest.mark.parametrize("fret", [2, 4, 5, 7])
def test_frets_all_strings_agree_on(fret):
    cents, _ = places_mm()
    assert np.ptp(cents[:, fret - 1]) < 1e-9


def test_against_quarter_comma_fifths_by_hand():
    # Places on the line of fifths of the twelve notes above C, in the chain Eb to G#.
    fifths = [0, 7, 2, -3, 4, -1, 6, 1, 8, 3, -2, 5]
    fifth = 300 * np.log2(5)
    row = np.mod(np.array(fifths) * fifth, 1200)
    degrees = [-17, -12, -7, -3, 2, 7]

    def above_c4(degree):
        return 1200 * (degree // 12) + row[degree % 12]

    expected = [[above_c4(s + j) - above_c4(s) for j in range(1, 9)] for s in degrees]
    np.testing.assert_allclose(places_mm()[0], expected, rtol=0, atol=1e-9)
