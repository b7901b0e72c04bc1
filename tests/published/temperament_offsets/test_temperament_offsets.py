"""Printed tuning tables against the library's records; see SOURCE.md."""

import csv
from pathlib import Path

import pytest

from layout.job.records import library_names, load_library_record
from layout.pitch.notes import read_note

NOTES = ("C", "C#", "D", "Eb", "E", "F", "F#", "G", "G#", "A", "Bb", "B")
PRINTED = Path(__file__).with_name("offsets.csv").read_text(encoding="utf-8").splitlines()
ROWS = {
    row["name"]: row for row in csv.DictReader(line for line in PRINTED if not line.startswith("#"))
}

# Named one by one, so that a record that is lost fails instead of going untested.
COVERED = {
    *("meantone-quarter-comma", "pythagorean", "werckmeister-3", "kirnberger-3", "vallotti"),
    *("young-1", "lambert", "kellner", "lehman"),
}
IN_LIBRARY = sorted(set(ROWS) & set(library_names()))


def test_every_record_that_was_covered_still_is():
    assert set(IN_LIBRARY) >= COVERED


@pytest.mark.parametrize("name", IN_LIBRARY)
@pytest.mark.parametrize("note", NOTES)
def test_the_printed_offset(name, note):
    row = ROWS[name]
    record = load_library_record(name)
    sounding, a = read_note(f"{note}4"), read_note("A4")
    cents = record.cents(record.degree_of(sounding)) - record.cents(record.degree_of(a))
    offset = cents - 100 * (sounding.semitone - a.semitone)
    assert offset == pytest.approx(float(row[note]), abs=float(row["tolerance"]))
