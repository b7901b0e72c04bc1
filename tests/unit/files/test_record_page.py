from __future__ import annotations

import re

import pytest

from layout.files.record_page import render_record, render_record_list
from layout.job.records import library_names, load_library_record


def rows(text: str) -> list[list[str]]:
    table = text.partition("\n\n")[2].splitlines()[1:]
    return [re.split(r"  +", line.strip()) for line in table]


def test_every_record_is_listed_with_its_size() -> None:
    records = [load_library_record(name) for name in library_names()]
    lines = render_record_list(records).splitlines()
    assert len(lines) == len(records) + 1
    listed = {line.split()[0]: line.split()[1] for line in lines[1:]}
    assert listed["equal-19"] == "19"
    assert listed["rule-of-18"] == "endless"


def test_degrees_have_cents_places_and_ratios() -> None:
    page = render_record(load_library_record("just-12"), 600.0)
    found = rows(page)
    assert len(found) == 13
    # by hand: a pure fifth 3/2 is 701.955 cents and leaves two thirds of the string
    assert found[7] == ["7", "G", "701.955", "200.000", "3/2"]
    assert found[12] == ["12", "C", "1200.000", "300.000", "2"]
    assert "mm on 600" in page
    assert "Keyed: counted from C" in page


def test_the_source_is_printed() -> None:
    record = load_library_record("werckmeister-3")
    assert f"Source: {record.source}\n" in render_record(record, 650.0)


def test_tempered_degrees_have_no_ratio() -> None:
    found = rows(render_record(load_library_record("equal-12"), 650.0))
    # by hand: 650 (1 - 2^(-1/12)) = 36.482
    assert found[1] == ["1", "100.000", "36.482"]


def test_an_endless_record_shows_its_first_degrees() -> None:
    page = render_record(load_library_record("rule-of-18"), 650.0)
    assert "No period" in page
    found = rows(page)
    assert 12 < len(found) <= 25
    # by hand: 650 / 18, then the rest / 18 again
    assert float(found[1][2]) == pytest.approx(650 / 18, abs=5e-4)
    assert float(found[2][2]) == pytest.approx(650 * (1 - (17 / 18) ** 2), abs=5e-4)
