"""Printed beats against the library's equal temperament; see SOURCE.md."""

import csv
from pathlib import Path

import pytest

from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.pitch.targets import open_hz

with Path(__file__).with_name("beats.csv").open(encoding="utf-8") as printed:
    BEATS = [(r["interval"], r["lowest"], float(r["beats"])) for r in csv.DictReader(printed)]
# Degree of the upper note, and which harmonics of the lower and the upper note beat.
MEETING = {"third": (4, 5, 4), "fifth": (7, 3, 2)}


@pytest.mark.parametrize(("interval", "lowest", "beats"), BEATS)
def test_the_printed_beats(interval, lowest, beats):
    record = load_library_record("equal-12")
    (low_hz,) = open_hz(
        record, [read_note(lowest)],
        reference_note=read_note("A4"), reference_hz=440.0, counted_from="open",
    )  # fmt: skip
    degree, of_lower, of_upper = MEETING[interval]
    found = abs(of_upper * low_hz * record.interval(degree).ratio - of_lower * low_hz)
    assert found == pytest.approx(beats, abs=0.05)
