"""Records that repeat at the twelfth, up to a planned board; see SOURCE.md."""

import csv
import math
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from layout.api import make_plan, read_job
from layout.errors import PitchError
from layout.job.records import load_library_record
from layout.pitch.notes import read_note_name
from layout.pitch.targets import string_fractions

SCALE_MM = 864
JUST, EQUAL = "bohlen-pierce-just", "bohlen-pierce-equal"
with Path(__file__).with_name("places.csv").open(encoding="utf-8") as printed:
    ROWS = list(csv.DictReader(printed))


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["ratio"])
def test_a_stop_of_the_just_form(row):
    record, degree = load_library_record(JUST), int(row["degree"])
    assert record.interval(degree).fraction == Fraction(row["ratio"])
    (place,) = string_fractions(record, [degree])
    assert SCALE_MM * place == pytest.approx(float(row["from_nut_mm"]), abs=5e-4)


def test_the_just_form_reads_alike_from_both_ends():
    # r(k) r(13 - k) = 3: known of this scale, from memory
    record = load_library_record(JUST)
    for degree in range(14):
        assert record.interval(degree) * record.interval(13 - degree) == record.interval(13)


def test_the_equal_step():
    record = load_library_record(EQUAL)
    assert record.cents(1) == pytest.approx(1200 * math.log2(3) / 13, abs=1e-9)
    assert record.cents(1) == pytest.approx(146.304, abs=5e-4)


@pytest.mark.parametrize("name", [JUST, EQUAL])
def test_the_twelfth_repeats_and_the_octave_never_comes(name):
    record = load_library_record(name)
    assert [record.interval(13 * turn).fraction for turn in range(4)] == [1, 3, 9, 27]
    assert record.interval(-13).fraction == Fraction(1, 3)
    away = [abs(record.cents(k) / 1200 - round(record.cents(k) / 1200)) for k in range(1, 40)]
    # computed: the nearest, degree 33, misses the fourth octave by 21.5 and by 28.0 cents
    assert min(away) * 1200 > 20


def test_a_key_is_refused():
    with pytest.raises(PitchError, match="13 notes"):
        load_library_record(EQUAL).keyed_from(read_note_name("D"))


@pytest.mark.parametrize("name", [JUST, EQUAL])
def test_a_board_of_two_twelfths(tmp_path, name):
    job = tmp_path / "job.yaml"
    job.write_text(
        f"title: Two strings\nscale: {SCALE_MM}\nstrings: [C3, G3]\n"
        "spread: {nut: 30, saddle: 30}\n"
        f"frets: {{count: 26, temperament: {name}}}\n",
        encoding="utf-8",
    )
    places_mm = make_plan(read_job(job)).own_mm
    assert places_mm.shape == (2, 26)
    # by hand: the thirteenth leaves a third of the string, the twenty-sixth a ninth
    np.testing.assert_allclose(places_mm[:, 12], 576, atol=1e-9)
    np.testing.assert_allclose(places_mm[:, 25], 768, atol=1e-9)
    assert not np.any(np.abs(places_mm - SCALE_MM / 2) < 2)
