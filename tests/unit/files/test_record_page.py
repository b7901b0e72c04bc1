from __future__ import annotations

import re

import pytest

from layout.files.record_page import record_group, render_record, render_record_list
from layout.job.records import library_names, load_library_record, read_record
from layout.pitch.notes import read_note_name


def rows(text: str) -> list[list[str]]:
    table = text.partition("\n\n")[2].splitlines()[1:]
    return [re.split(r"  +", line.strip()) for line in table]


HEADINGS = {
    "equal": "Equal steps of the octave",
    "fifths": "Chains of fifths",
    "ratios": "Ratios",
    "string fractions": "Fractions of the string",
    "no octave": "No octave",
}


def test_every_record_is_listed_once_with_its_size() -> None:
    records = [load_library_record(name) for name in library_names()]
    lines = render_record_list(records).splitlines()
    cells = [line.split() for line in lines[1:] if line.startswith("  ")]
    assert sorted(cell[0] for cell in cells) == sorted(library_names())
    listed = {cell[0]: cell[1] for cell in cells}
    assert listed["equal-19"] == "19"
    assert listed["rule-of-18"] == "endless"
    assert listed["alpha"] == "endless"
    assert listed["dowland-1610"] == "11"  # ten frets and the open string
    assert listed["bohlen-pierce-just"] == "13"


def test_the_list_stands_under_how_its_records_are_built() -> None:
    records = [load_library_record(name) for name in library_names()]
    blocks = render_record_list(records).split("\n\n")
    assert blocks[0].split() == ["name", "notes", "title"]
    assert [block.splitlines()[0] for block in blocks[1:]] == list(HEADINGS.values())
    under = {
        block.splitlines()[0]: [line.split()[0] for line in block.splitlines()[1:]]
        for block in blocks[1:]
    }
    assert set(under[HEADINGS["equal"]]) == {n for n in library_names() if n[:6] == "equal-"}
    assert under[HEADINGS["string fractions"]] == ["dowland-1610", "rule-of-18", "strahle"]
    assert {"pythagorean", "vallotti", "lehman"} <= set(under[HEADINGS["fifths"]])
    assert {"just-12", "safi-al-din-17", "sruti-22"} <= set(under[HEADINGS["ratios"]])
    assert under[HEADINGS["no octave"]] == [
        *("alpha", "beta", "bohlen-pierce-equal", "bohlen-pierce-just", "gamma"),
        "mersenne-semitone",
    ]


def test_a_heading_without_records_is_left_out() -> None:
    page = render_record_list([load_library_record("equal-12")])
    assert page.splitlines()[1:3] == ["", "Equal steps of the octave"]
    assert len(page.splitlines()) == 4


@pytest.mark.parametrize(
    ("body", "group"),
    [
        ("period: 2\nequal: 5", "equal"),
        ("period: 3/2\nequal: 5", "no octave"),
        ("period: 4\nequal: 24", "no octave"),
        ("period: 2\ncents: [0, 700]", "ratios"),
        ("period: 2\nratios: [1, 3/2]", "ratios"),
        ("period: none\nratios: [1, 3/2]", "no octave"),
        ("period: 2\nnotes: [C, G]\nfifths: {chain: [C, G], narrow: 0}", "fifths"),
        ("period: 3\nnotes: [C, G]\nfifths: {chain: [C, G], narrow: 0}", "no octave"),
        ("period: none\nstring: [0, 1/3]", "string fractions"),
        ("rule: {part: 1/17}", "string fractions"),
        ("step_cents: 88", "no octave"),
    ],
)
def test_a_record_is_grouped_by_its_form_and_its_octave(body: str, group: str) -> None:
    record = read_record(f"name: own\ntitle: Own\nsource: the test\n{body}\n".encode(), "own")
    assert record_group(record) == group


def test_a_moved_record_stays_in_its_group() -> None:
    moved = load_library_record("vallotti").keyed_from(read_note_name("D"))
    assert record_group(moved) == "fifths"


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
